#!/usr/bin/env python3
"""Checks the audit files against published.json with mpmath, independently of make_audits.py.

    python3 tests/outside/check_translation.py [ID...]

For every audit file, with its own reader of formulas and steps:
- at some points, the error of the file's approximant is the error of the published formula;
- the largest error found on a dense set of points, refined at the peaks, is just below the
  supremum that published.json gives (from below by at most 1e-6 of it, and never above), and so
  are the signed extremes of absolute errors;
- the bound of the claims is the printed one, and the expected verdict follows from it.
Sampling proves nothing: this is a check of the translation, not of the suprema.
"""

import json
import re
import sys
from pathlib import Path

from mpmath import mp, mpf

FOLDER = Path(__file__).resolve().parent
DIGITS = 130

TOKEN = re.compile(
    r"\s*(?:(0[xX][0-9a-fA-F]+(?:\.[0-9a-fA-F]*)?[pP][+-]?\d+|(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)"
    r"|([A-Za-z_]\w*)|(.))"
)


def number(text):
    """A literal, read exactly or at the working precision where it is no binary fraction."""
    text = text.strip()
    if "/" in text:
        over, under = text.split("/")
        return number(over) / number(under)
    if "^" in text:
        base, exponent = text.split("^")
        factor = mpf(1)
        if "*" in base:
            factor, base = base.split("*")
        return mpf(factor) * mpf(base) ** mpf(exponent)
    if "x" in text.lower():
        sign, whole, part, exponent = re.fullmatch(
            r"([+-]?)0[xX]([0-9a-fA-F]+)\.?([0-9a-fA-F]*)[pP]([+-]?\d+)", text
        ).groups()
        value = mp.ldexp(mpf(int(whole + part, 16)), int(exponent) - 4 * len(part))
        return -value if sign == "-" else value
    return mpf(text)


def horner(coefficients, t):
    value = mpf(0)
    for coefficient in reversed(coefficients):
        value = value * t + coefficient
    return value


def chebyshev_sum(coefficients, t):
    """c[0] + c[1] T_1(t) + ..., from the recurrence of the T_k themselves."""
    value, before, now = mpf(0), t, mpf(1)
    for coefficient in coefficients:
        value += coefficient * now
        before, now = now, 2 * t * now - before
    return value


FUNCTIONS = {
    "sqrt": mp.sqrt,
    "cbrt": lambda v: mp.sign(v) * mp.cbrt(abs(v)),
    "exp": mp.exp,
    "exp2": lambda v: mpf(2) ** v,
    "exp10": lambda v: mpf(10) ** v,
    "expm1": mp.expm1,
    "log": mp.log,
    "log2": lambda v: mp.log(v) / mp.log(2),
    "log10": mp.log10,
    "log1p": mp.log1p,
    "sin": mp.sin,
    "cos": mp.cos,
    "tan": mp.tan,
    "asin": mp.asin,
    "acos": mp.acos,
    "atan": mp.atan,
    "sinh": mp.sinh,
    "cosh": mp.cosh,
    "tanh": mp.tanh,
    "asinh": mp.asinh,
    "acosh": mp.acosh,
    "atanh": mp.atanh,
    "erf": mp.erf,
    "erfc": mp.erfc,
    "fabs": abs,
    "abs": abs,
    "pow": lambda base, exponent: base**exponent,
    "horner": horner,
    "clenshaw": chebyshev_sum,
    "poly": horner,
    "cheb": lambda c, t: chebyshev_sum(c, t) - c[0] / 2,
}


class Reader:
    """A formula as nested closures over an environment; `**` is accepted for published.json."""

    def __init__(self, text):
        matches = TOKEN.finditer(text.replace("**", "^"))
        self.tokens = [match.groups() for match in matches if match.group().strip()]
        self.position = 0
        self.function = self.sum()
        if self.position != len(self.tokens):
            raise ValueError(f"unread rest of {text!r}")

    def peek(self):
        return self.tokens[self.position][2] if self.position < len(self.tokens) else None

    def take(self, sign):
        if self.peek() != sign:
            raise ValueError(f"expected {sign!r} at token {self.position}")
        self.position += 1

    def chain(self, operand, signs):
        function = operand()
        while self.peek() in signs:
            sign = self.peek()
            self.position += 1
            function = self.combine(sign, function, operand())
        return function

    @staticmethod
    def combine(sign, left, right):
        if sign == "+":
            return lambda at: left(at) + right(at)
        if sign == "-":
            return lambda at: left(at) - right(at)
        if sign == "*":
            return lambda at: left(at) * right(at)
        return lambda at: left(at) / right(at)

    def sum(self):
        return self.chain(self.product, ("+", "-"))

    def product(self):
        return self.chain(self.sign, ("*", "/"))

    def sign(self):
        if self.peek() == "-":
            self.position += 1
            inner = self.sign()
            return lambda at: -inner(at)
        return self.power()

    def power(self):
        base = self.atom()
        if self.peek() == "^":
            self.position += 1
            exponent = self.sign()
            return lambda at: base(at) ** exponent(at)
        return base

    def atom(self):
        if self.position >= len(self.tokens):
            raise ValueError("formula ends early")
        literal, name, sign = self.tokens[self.position]
        self.position += 1
        if literal is not None:
            value = number(literal)
            return lambda at: value
        if name is not None:
            return self.named(name)
        if sign != "(":
            raise ValueError(f"unexpected {sign!r}")
        inner = self.sum()
        self.take(")")
        return inner

    def named(self, name):
        if self.peek() == "[":
            self.take("[")
            index = int(self.tokens[self.position][0])
            self.position += 1
            self.take("]")
            return lambda at: at[name][index]
        if self.peek() != "(":
            return lambda at: at[name]
        arguments = []
        while self.peek() in ("(", ","):
            self.position += 1
            arguments.append(self.sum())
        self.take(")")
        function = FUNCTIONS[name]
        return lambda at: function(*(argument(at) for argument in arguments))


def environment(arrays):
    numbers = {
        name: [number(v) for v in values] if isinstance(values, list) else number(values)
        for name, values in arrays.items()
    }
    return {"pi": mp.pi, "e": mp.e, **numbers}


def evaluate(text, x=None):
    return Reader(text).function({**environment({}), "x": x})


def rounded(values, bits):
    """The values rounded to a binary significand."""
    with mp.workprec(bits):
        return [+value for value in values]


def approximant(form):
    """(left end, right end, function) of an approximant of an audit file."""
    if form["basis"] == "steps":
        constants = environment(form.get("constants", {}))
        lines = [line.split("=", 1) for line in form["steps"]]
        readers = [(name.strip(), Reader(text).function) for name, text in lines]

        def run(x):
            at = {**constants, "x": x}
            for name, function in readers:
                at[name] = function(at)
            return at[readers[-1][0]]

        return [evaluate(end) for end in form["on"]] + [run]
    (piece,) = form["pieces"]
    left, right = (evaluate(end) for end in piece["on"])
    coefficients = [number(text) for text in piece["coefficients"]]
    if form["stored_as"] != "exact":
        bits = {"binary32": 24, "binary64": 53, "binary128": 113}[form["stored_as"]]
        if any(stored != value for stored, value in zip(rounded(coefficients, bits), coefficients)):
            raise ValueError("a coefficient is not exact in its storage format")
    if form["order"] != "ascending":
        raise ValueError("order")
    variable = form["variable"]
    if variable == "x":
        origin, scale = mpf(0), mpf(1)
    elif variable == "centred":
        origin, scale = (left + right) / 2, (right - left) / 2
    else:
        origin, scale = number(variable["origin"]), number(variable["scale"])
    if form["basis"] == "chebyshev":
        if form["first"] == "halved":
            coefficients[0] /= 2
        return [left, right, lambda x: chebyshev_sum(coefficients, (x - origin) / scale)]
    parity = form.get("parity")

    def polynomial(x):
        t = (x - origin) / scale
        if parity is None:
            return horner(coefficients, t)
        return horner(coefficients, t * t) * (t if parity == "odd" else 1)

    return [left, right, polynomial]


def error_function(kind, approximate, reference):
    def error(x):
        p, f = approximate(x), reference(x)
        return (p - f) if kind == "absolute" else (p - f) / abs(f)

    return error


def defined(function, x):
    """The value of a function, or None at a removable singularity."""
    try:
        return function(x)
    except ZeroDivisionError:
        return None


def sample(left, right):
    """Points dense everywhere, graded towards both ends and towards 0."""
    width = right - left
    points = [left + width * (1 - mp.cospi(mpf(k) / 500)) / 2 for k in range(501)]
    points += [left + width * mpf(k) / 500 for k in range(501)]
    for k in range(2, 100):
        points += [left + width * mpf(2) ** -k, right - width * mpf(2) ** -k]
        points += [mpf(2) ** -k, -(mpf(2) ** -k)]
    return sorted({point for point in points if left <= point <= right})


def signed_extremes(error, left, right):
    """(minimum, maximum) of the error as found, refined around each high or low sample."""
    values = []
    for x in sample(left, right):
        value = defined(error, x)
        if value is not None:
            if mp.im(value) != 0:
                raise ValueError(f"complex value at {mp.nstr(x, 10)}")
            values.append((x, mp.re(value)))
    negated = [(x, -value) for x, value in values]
    return (
        -refined_maximum(lambda x: -error(x), negated),
        refined_maximum(error, values),
    )


def refined_maximum(function, values):
    """The largest value found by golden sections around the samples near the largest one."""
    best = max(value for _, value in values)
    slack = abs(best) * mpf("0.03")
    ratio = (mp.sqrt(5) - 1) / 2
    for before, (_, peak), after in zip(values, values[1:], values[2:]):
        if peak < best - slack or peak < max(before[1], after[1]):
            continue
        low, high = before[0], after[0]
        for _ in range(30):
            first, second = high - ratio * (high - low), low + ratio * (high - low)
            a, b = function(first), function(second)
            best = max(best, a, b)
            low, high = (first, high) if a < b else (low, second)
    return best


def published_error(case, x):
    """The published case's own error at x (or at the parameter), straight from its formulas."""
    arrays = case["approximant"]["coefficients"]
    at = environment(arrays)
    for name, text in case["approximant"].get("definitions", {}).items():
        at[name] = Reader(text).function(at)
    parametrisation = case.get("parametrisation")
    at["x"] = x
    reference = case["reference"]["formula"]
    if parametrisation and "reference" in parametrisation:
        at["u"] = x
        for piece in parametrisation["pieces"]:
            left, right = (evaluate(end) if end != "inf" else mp.inf for end in piece["u_domain"])
            if left <= x <= right:
                at["x"] = Reader(piece["x"]).function(at)
        reference = parametrisation["reference"]
    p = Reader(case["approximant"]["formula"]).function(at)
    f = Reader(reference).function(at)
    return (p - f) if case["error"] == "absolute" else (p - f) / abs(f)


# Files whose x is a function of the published case's x, or of its parameter.
PUBLISHED_ARGUMENT = {
    "hd-atan": lambda u: (1 + u) / (1 - u),
    "as-4.4.45-u": lambda u: 1 - u * u,
    "as-4.4.46-u": lambda u: 1 - u * u,
}


def problems(entry, case):
    audit = json.loads((FOLDER / entry["file"]).read_text(encoding="utf-8"))
    read_reference = Reader(audit["reference"]["formula"]).function
    constants = environment({})
    argument = PUBLISHED_ARGUMENT.get(entry["id"], lambda x: x)

    def reference(x):
        return read_reference({**constants, "x": x})

    forms = audit.get("approximants") or [audit["approximant"]]
    minimum, maximum = mp.inf, -mp.inf
    for form, claim in zip(forms, audit["claims"]):
        if claim["error"] != case["error"] or claim["of"] != "exact":
            yield "claim of another kind"
        printed = number(case["stated_bound"]["printed"])
        if abs(number(claim["at_most"]) / printed - 1) > mpf("1e-28"):
            yield "another bound than the printed one"
        left, right, approximate = approximant(form)
        error = error_function(claim["error"], approximate, reference)
        lowest, highest = signed_extremes(error, left, right)
        minimum, maximum = min(minimum, lowest), max(maximum, highest)
        largest = max(abs(lowest), abs(highest))
        for k in range(1, 24):
            x = left + (right - left) * mpf(k) / 24 * mpf("0.9999")
            if x == 0:
                continue
            difference = abs(error(x) - published_error(case, argument(x)))
            if difference > largest * mpf("1e-20"):
                off = mp.nstr(difference, 5)
                yield f"not the published error at {mp.nstr(x, 12)}: off by {off}"
    found = max(abs(minimum), abs(maximum))
    lower, upper = (mpf(end) for end in entry["supremum"])
    if found > upper:
        yield f"largest error {mp.nstr(found, 15)} is above the supremum {entry['supremum'][1]}"
    if found < lower * (1 - mpf("1e-6")):
        yield f"largest error {mp.nstr(found, 15)} is below the supremum {entry['supremum'][0]}"
    slack = upper * mpf("1e-6")
    if case["error"] == "absolute":
        lowest, highest = mpf(entry["signed_minimum"][0]), mpf(entry["signed_maximum"][1])
        if not (lowest <= minimum <= lowest + slack and highest - slack <= maximum <= highest):
            yield f"signed extremes {mp.nstr(minimum, 12)}, {mp.nstr(maximum, 12)} differ"
    holds = upper <= number(case["stated_bound"]["printed"])
    if entry["expected_verdict"] != ("holds" if holds else "fails"):
        yield "expected verdict does not follow from the supremum"


def main(arguments):
    mp.dps = DIGITS
    published = json.loads((FOLDER / "published.json").read_text(encoding="utf-8"))
    cases = {case["id"]: case for case in published}
    entries = json.loads((FOLDER / "expected.json").read_text(encoding="utf-8"))["cases"]
    checked = failed = 0
    for entry in entries:
        if not entry["covered"] or (arguments and entry["id"] not in arguments):
            continue
        checked += 1
        found = list(problems(entry, cases[entry.get("variant_of", entry["id"])]))
        failed += bool(found)
        for problem in found:
            print(f"{entry['id']}: {problem}", flush=True)
    print(f"{checked - failed} of {checked} audit files agree with published.json")
    return 1 if failed or not checked else 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
