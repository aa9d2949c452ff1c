#!/usr/bin/env python3
"""Writes the worked audits of this folder: coefficients, audit files, coefficient files.

Needs mpmath (1.3 or later) and nothing else:

    python3 make_coefficients.py            writes the files beside this script
    python3 make_coefficients.py --check    writes nothing; fails if a file differs

Fits are computed with 50 digits and rounded once to the stored format. The design figure of a
claim is the largest error of the *stored* coefficients found by dense sampling and local
refinement, plus at least one per cent, rounded up to two digits. Sampling proves nothing: that
is what the audit is for.
"""

import json
import sys
from pathlib import Path

from mpmath import mp, mpf

from fitting import (
    chebyshev_series,
    clenshaw,
    decimal,
    design_figure,
    hermite,
    hexadecimal,
    horner,
    largest_error,
    minimax,
    rational_minimax,
    relative,
    rounded,
)

HERE = Path(__file__).resolve().parent
mp.dps = 50

# Third line of every audit file.
INVENTED = "# The instrument and its maker are invented.\n"


def strings(texts, per_line, indent):
    lines = []
    for k in range(0, len(texts), per_line):
        lines.append(indent + ", ".join(f'"{text}"' for text in texts[k : k + per_line]) + ",")
    return "\n".join(lines)


def fraction(x):
    """A dyadic number as a short decimal."""
    return f"{float(x):g}"


def decay_meter():
    """Two-point Hermite pieces over shared knots; the data are Taylor coefficients."""
    knots = [mpf(k) / 4 for k in range(9)]
    orders = [3] * 8 + [2]

    def function(x):
        return mp.exp(-x) / (1 + x * x)

    def taylor(x, order):
        # exp(-(x+t)) and 1 + (x+t)^2 as series in t, divided term by term.
        top = [mp.exp(-x) * (-1) ** j / mp.factorial(j) for j in range(order + 1)]
        bottom = [1 + x * x, 2 * x, mpf(1)]
        quotient = []
        for j in range(order + 1):
            rest = mp.fsum(bottom[i] * quotient[j - i] for i in range(1, min(j, 2) + 1))
            quotient.append((top[j] - rest) / bottom[0])
        return quotient

    data = [[rounded(c, 53) for c in taylor(x, order)] for x, order in zip(knots, orders)]

    worst = mpf(0)
    for k in range(8):
        left, right = knots[k], knots[k + 1]
        error = lambda x: hermite(left, right, data[k], data[k + 1], x) - function(x)
        worst = max(worst, largest_error(error, left, right, 120))
    lines = []
    for x, row in zip(knots, data):
        taylor_text = ", ".join(f'"{hexadecimal(c)}"' for c in row)
        lines.append(f'  {{ at = "{fraction(x)}", taylor = [{taylor_text}] }},')
    body = "\n".join(lines)
    figure = design_figure(worst)
    text = f"""\
# The decay meter listens to a struck bell and follows how its hum dies away: this envelope,
# x in seconds since the strike, is what it divides the microphone's signal by.
{INVENTED}
title = "Decay meter: envelope of a struck bell"

[reference]
formula = "exp(-x)/(1 + x*x)"

[approximant]
basis = "hermite"
stored_as = "binary64"
knots = [
{body}
]

[[claims]]
id = "envelope"
of = "exact"
error = "absolute"
at_most = "{figure}"
"""
    return {"decay-meter/decay-meter.audit.toml": text}, {"decay-meter": (worst, figure)}


def partial_tuner():
    """A table of cubics for log2(1+x), and the same table with one digit damaged."""
    pieces = 32

    def function(x):
        return mp.log1p(x) / mp.log(2)

    table = []
    for k in range(pieces):
        left, width = mpf(k) / pieces, mpf(1) / pieces
        of_unit = lambda u: function(left + width * u)
        if k == 0:
            # The zero at x = 0 is kept exactly: only then is the relative error bounded.
            basis = [lambda u: u, lambda u: u**2, lambda u: u**3]
            fit = [mpf(0)] + minimax(
                of_unit, basis, lambda u: 1 / of_unit(u), mpf(0), mpf(1), (mpf("1e-12"), mpf(1))
            )
        else:
            basis = [lambda u, j=j: u**j for j in range(4)]
            fit = minimax(of_unit, basis, lambda u: 1 / of_unit(u), mpf(0), mpf(1))
        table.append(["0" if c == 0 else decimal(rounded(c, 24), 9) for c in fit])

    def value_of(texts, k):
        coefficients = [rounded(mpf(text), 24) for text in texts]
        return lambda x: horner(coefficients, x * pieces - k)

    def errors(rows):
        largest = {"relative": mpf(0), "mixed": mpf(0)}
        worst_piece = 0
        for k, texts in enumerate(rows):
            ends = mpf(k) / pieces, mpf(k + 1) / pieces
            approximant = value_of(texts, k)
            found = largest_error(relative(approximant, function), *ends, 60)
            if found > largest["relative"]:
                largest["relative"], worst_piece = found, k
            mixed = lambda x: (approximant(x) - function(x)) / (
                mpf("1.2e-8") + mpf("2.5e-8") * abs(function(x))
            )
            largest["mixed"] = max(largest["mixed"], largest_error(mixed, *ends, 60))
        return largest, worst_piece

    def damaged(rows):
        """One digit of one quadratic coefficient: a 7 that was read as a 1."""
        copy = [list(row) for row in rows]
        text = copy[19][2]
        place = 4
        assert text[place] == "7"
        copy[19][2] = text[:place] + "1" + text[place + 1 :]
        return copy, text, copy[19][2]

    def audit(rows, comment, title, figure):
        body = []
        for k, texts in enumerate(rows):
            coefficients = ", ".join(f'"{text}"' for text in texts)
            body.append(f'  {{ on = ["{k}/32", "{k + 1}/32"], coefficients = [{coefficients}] }},')
        table_text = "\n".join(body)
        return f"""\
{comment}{INVENTED}
title = "{title}"

[reference]
formula = "log2(1 + x)"

[approximant]
basis = "power"
variable = "unit"
order = "ascending"
stored_as = "binary32"
pieces = [
{table_text}
]

[[claims]]
id = "pitch"
of = "exact"
error = "relative"
at_most = "{figure}"

[[claims]]
id = "pitch-with-floor"
of = "exact"
error = "mixed"
absolute_part = "1.2e-8"
relative_part = "2.5e-8"
"""

    errors_of_table, _ = errors(table)
    assert errors_of_table["mixed"] < mpf("0.99")
    figure = design_figure(errors_of_table["relative"])
    edited, before, after = damaged(table)
    errors_of_edited, worst_piece = errors(edited)
    assert worst_piece == 19 and errors_of_edited["relative"] > 2 * mpf(figure)
    good = """\
# The partial tuner hears a partial at 1+x times the pitch of the hum note and shows log2(1+x),
# its height in octaves; its firmware looks it up in 32 cubics with binary32 coefficients.
"""
    bad = f"""\
# The partial tuner's table after an edit: one digit of the quadratic coefficient of piece 19
# (counted from 0) was damaged, {before} became {after}. Meant to FAIL.
# A test at the 33 table points still passes on the left of every piece: the spike is between.
"""
    files = {
        "partial-tuner/partial-tuner.audit.toml": audit(
            table, good, "Partial tuner: height of a partial in octaves", figure
        ),
        "partial-tuner-edited/partial-tuner-edited.audit.toml": audit(
            edited, bad, "Partial tuner after an edit: a damaged digit (negative control)", figure
        ),
    }
    return files, {
        "partial-tuner": (errors_of_table["relative"], figure),
        "partial-tuner, mixed": (errors_of_table["mixed"], "1"),
        "partial-tuner-edited": (errors_of_edited["relative"], figure),
    }


def swing_gauge():
    """A Chebyshev fit of a compound formula; the coefficients lie in a file of their own."""
    left, right, degree = mpf(0), mpf(3) / 2, 12

    def function(x):
        return mp.atan(x / mp.sqrt(1 + x * x / 8)) * (1 + mp.exp(-x * x) / 64)

    fit = [rounded(c, 53) for c in chebyshev_series(function, left, right, degree)]

    def error(x):
        return clenshaw(fit, (2 * x - left - right) / (right - left)) - function(x)

    worst = largest_error(error, left, right, 1500)
    figure = design_figure(worst)
    text = f"""\
# The swing gauge on a bell's headstock turns the ratio x of two magnetic pick-ups into the angle
# of swing in radians, the fringe of the magnet's field included; it rings the bell-stay alarm.
{INVENTED}
title = "Swing gauge: angle of a swinging bell from the ratio of two pick-ups"

[reference]
formula = "atan(x/sqrt(1 + x*x/8))*(1 + exp(-x*x)/64)"

[approximant]
basis = "chebyshev"
first = "full"
order = "ascending"
stored_as = "binary64"
pieces = [
  {{ on = ["0", "3/2"], coefficients = {{ file = "swing-gauge.json", key = "angle" }} }},
]

[[claims]]
id = "angle"
of = "exact"
error = "absolute"
at_most = "{figure}"
"""
    data = json.dumps({"angle": [hexadecimal(c) for c in fit]}, indent=2) + "\n"
    files = {
        "swing-gauge/swing-gauge.audit.toml": text,
        "swing-gauge/swing-gauge.json": data,
    }
    return files, {"swing-gauge": (worst, figure)}


def peal_simulator():
    """An odd polynomial of the sine with the least relative error."""
    end = mp.pi / 4
    # sin(x) = x s(x^2); the fit is of s on [0, end^2] with weight 1/s.
    s = lambda z: mp.sin(mp.sqrt(z)) / mp.sqrt(z) if z else mpf(1)
    basis = [lambda z, k=k: z**k for k in range(6)]
    fit = minimax(s, basis, lambda z: 1 / s(z), mpf(0), end**2)
    stored = [rounded(c, 53) for c in fit]
    error = relative(lambda x: x * horner(stored, x * x), mp.sin)
    worst = largest_error(error, mpf(0), end, 1500)
    figure = design_figure(worst)
    body = strings([hexadecimal(c) for c in stored], 3, "    ")
    text = f"""\
# The peal simulator lets ringers practise without waking the village: its oscillator makes the
# sound of every bell from this sine, after reducing the phase to an eighth of a turn.
{INVENTED}
title = "Peal simulator: sine of the oscillator"

[reference]
formula = "sin(x)"

[approximant]
basis = "power"
variable = "x"
order = "ascending"
parity = "odd"
stored_as = "binary64"
pieces = [
  {{ on = ["-pi/4", "pi/4"], coefficients = [
{body}
  ] }},
]

[[claims]]
id = "sine"
of = "exact"
error = "relative"
at_most = "{figure}"
"""
    return {"peal-simulator/peal-simulator.audit.toml": text}, {"peal-simulator": (worst, figure)}


def louvre_fader():
    """One Bernstein piece; both ends are met exactly."""
    degree = 9

    def function(x):
        return 1 - mp.exp(-3 * x) * mp.cos(mp.pi * x / 2)

    # p(x) = x + x(1-x) q(x) has p(0) = 0 and p(1) = 1.
    basis = [lambda x, k=k: x ** (k + 1) * (1 - x) for k in range(degree - 1)]
    fit = minimax(
        lambda x: function(x) - x,
        basis,
        lambda x: mpf(1),
        mpf(0),
        mpf(1),
        (mpf("1e-9"), 1 - mpf("1e-9")),
    )
    power = [mpf(0)] * (degree + 1)
    power[1] += 1
    for k, c in enumerate(fit):
        power[k + 1] += c
        power[k + 2] -= c
    bernstein = []
    for i in range(degree + 1):
        total = mp.fsum(mp.binomial(i, j) / mp.binomial(degree, j) * power[j] for j in range(i + 1))
        bernstein.append(rounded(total, 53))
    assert bernstein[0] == 0 and bernstein[degree] == 1

    def approximant(x):
        return mp.fsum(
            b * mp.binomial(degree, i) * x**i * (1 - x) ** (degree - i)
            for i, b in enumerate(bernstein)
        )

    worst = largest_error(lambda x: approximant(x) - function(x), mpf(0), mpf(1), 1000)
    worst_relative = largest_error(relative(approximant, function), mpf(0), mpf(1), 1000)
    figure = design_figure(worst)
    body = strings([hexadecimal(b) for b in bernstein], 3, "    ")
    text = f"""\
# The louvre fader opens the shutters of the bell chamber: x is the opening, the value the share
# of the sound that comes out. Silence at 0 and all of it at 1 are met exactly.
{INVENTED}
title = "Louvre fader: sound let out by the shutters"

[reference]
formula = "1 - exp(-3*x)*cos(pi*x/2)"

[approximant]
basis = "bernstein"
order = "ascending"
stored_as = "binary64"
pieces = [
  {{ on = ["0", "1"], coefficients = [
{body}
  ] }},
]

[[claims]]
id = "share"
of = "exact"
error = "absolute"
at_most = "{figure}"

[[claims]]
id = "share-relative"                 # no bound: measured, counts as neither pass nor failure
of = "exact"
error = "relative"
"""
    files = {"louvre-fader/louvre-fader.audit.toml": text}
    return files, {
        "louvre-fader": (worst, figure),
        "louvre-fader, relative": (worst_relative, "-"),
    }


def strike_limiter():
    """Straight-line code: x P(x^2)/Q(x^2) for the hyperbolic tangent."""
    end = mpf(4)
    quotient = lambda z: mp.tanh(mp.sqrt(z)) / mp.sqrt(z) if z else mpf(1)
    top, bottom = rational_minimax(quotient, lambda z: 1 / quotient(z), mpf(0), end**2, 2, 3)
    top = [rounded(c, 24) for c in top]
    bottom = [rounded(c, 24) for c in bottom]
    approximant = lambda x: x * horner(top, x * x) / horner(bottom, x * x)
    worst = largest_error(relative(approximant, mp.tanh), mpf(0), end, 1500)
    figure = design_figure(worst)
    worst_inside = largest_error(lambda x: approximant(x) - mp.tanh(x), mpf(0), mpf(1), 500)
    figure_inside = design_figure(worst_inside)
    top_text = ", ".join(f'"{hexadecimal(c)}"' for c in top)
    bottom_text = ", ".join(f'"{hexadecimal(c)}"' for c in bottom)
    text = f"""\
# The strike limiter keeps the clapper's stroke from overloading the tower's recorder: tanh of the
# signal as three lines of firmware, with constants that are binary32 numbers.
{INVENTED}
title = "Strike limiter: hyperbolic tangent as shipped code"

[reference]
formula = "tanh(x)"

[approximant]
basis = "steps"
stored_as = "binary32"
on = ["-4", "4"]
steps = ["z = x*x", "q = horner(P, z)/horner(Q, z)", "y = x*q"]

[approximant.constants]
P = [{top_text}]
Q = [{bottom_text}]

[[claims]]
id = "limiter"
of = "exact"
error = "relative"
at_most = "{figure}"

[[claims]]
id = "quiet-signal"
of = "exact"
error = "absolute"
on = ["-1", "1"]
at_most = "{figure_inside}"
"""
    return {"strike-limiter/strike-limiter.audit.toml": text}, {
        "strike-limiter": (worst, figure),
        "strike-limiter, |x| <= 1": (worst_inside, figure_inside),
    }


def main():
    check = sys.argv[1:] == ["--check"]
    if sys.argv[1:] and not check:
        sys.exit(__doc__)
    different = []
    for make in [
        decay_meter,
        partial_tuner,
        swing_gauge,
        peal_simulator,
        louvre_fader,
        strike_limiter,
    ]:
        files, figures = make()
        for name, (worst, figure) in figures.items():
            print(f"{name:24} sampled {mp.nstr(worst, 8):>16}   claimed {figure}")
        for name, text in files.items():
            path = HERE / name
            if check:
                if not path.exists() or path.read_text() != text:
                    different.append(name)
            else:
                path.parent.mkdir(exist_ok=True)
                path.write_text(text)
    if different:
        sys.exit("differ from what this script writes: " + ", ".join(different))


if __name__ == "__main__":
    main()
