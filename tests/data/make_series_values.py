"""Writes series_values.json: Taylor coefficients of every elementary function and of compound
formulas, to check the power series of the crate against an independent implementation.

    python3 tests/data/make_series_values.py > tests/data/series_values.json

The coefficients f^(k)(c) scale^k / k! come from Cauchy's integral over a circle of values of
mpmath, which passes around a removable singularity at the centre; and a second time from
python-flint's ball series for the functions that it has, where the two must agree. Needs mpmath and
python-flint.
"""

import json
import random

import flint
import mpmath
from mpmath import mp, mpf

DIGITS = 60
TERMS = 20
mp.dps = 60

# Names as in the formulas; values are mpmath functions.
NAMES = {
    "sqrt": mpmath.sqrt,
    "cbrt": lambda x: mpmath.sign(x.real) * mpmath.power(mpmath.sign(x.real) * x, mpf(1) / 3),
    "exp": mpmath.exp,
    "exp2": lambda x: mpmath.power(2, x),
    "expm1": mpmath.expm1,
    "log": mpmath.log,
    "log2": lambda x: mpmath.log(x) / mpmath.log(2),
    "log10": lambda x: mpmath.log(x) / mpmath.log(10),
    "log1p": lambda x: mpmath.log(1 + x),
    "sin": mpmath.sin,
    "cos": mpmath.cos,
    "tan": mpmath.tan,
    "asin": mpmath.asin,
    "acos": mpmath.acos,
    "atan": mpmath.atan,
    "sinh": mpmath.sinh,
    "cosh": mpmath.cosh,
    "tanh": mpmath.tanh,
    "asinh": mpmath.asinh,
    "acosh": mpmath.acosh,
    "atanh": mpmath.atanh,
    "erf": mpmath.erf,
    "erfc": mpmath.erfc,
    "fabs": lambda x: x * mpmath.sign(x.real),
    "pow": mpmath.power,
}

# Where each function is sampled, inside its domain.
RANGES = {
    "sqrt": ("0.3", "5"),
    "cbrt": ("-4", "-0.3"),
    "exp": ("-3", "3"),
    "exp2": ("-3", "3"),
    "expm1": ("-1", "1"),
    "log": ("0.2", "5"),
    "log2": ("0.2", "5"),
    "log10": ("0.2", "5"),
    "log1p": ("-0.7", "3"),
    "sin": ("-4", "4"),
    "cos": ("-4", "4"),
    "tan": ("-1.4", "1.4"),
    "asin": ("-0.9", "0.9"),
    "acos": ("-0.9", "0.9"),
    "atan": ("-3", "3"),
    "sinh": ("-3", "3"),
    "cosh": ("-3", "3"),
    "tanh": ("-3", "3"),
    "asinh": ("-3", "3"),
    "acosh": ("1.2", "5"),
    "atanh": ("-0.9", "0.9"),
    "erf": ("-2", "2"),
    "erfc": ("-1", "4"),
    "fabs": ("-3", "-1"),
}

# (formula, centre, scale); a centre may be written as a multiple of pi.
COMPOUND = [
    ("sin(x)/x", "0", "1/2"),
    ("(exp(x)-1)/x", "0", "1/4"),
    ("(x-log1p(x))/(x*x)", "0", "1/8"),
    ("log(x*erfc(x))", "3/2", "1/8"),
    ("(log1p(x)-x+x*x/2)/(x*x*x)", "0", "1/8"),
    ("(1-cos(x))/(x*x)", "0", "1/4"),
    ("sin(x)/(x-pi)", "pi", "1/4"),
    ("tan(x)/x", "0", "1/8"),
    ("log(x)/(x-1)", "1", "1/8"),
    ("log(sin(x)/x)", "0", "1/4"),
    ("(sin(x)/x-1)/(x*x)", "0", "1/4"),
    ("x/expm1(x)", "0", "1/4"),
    ("atan(x)/sin(x)", "0", "1/8"),
    ("sqrt(1+x*x)", "3/4", "1/8"),
    ("pow(x, 2.5)", "3/2", "1/8"),
    ("pow(x, -3)", "-3/2", "1/8"),
    ("pow(x, 7)", "1/3", "1/8"),
    ("pow(x, x)", "5/4", "1/8"),
    ("pow(2, sin(x))", "1", "1/8"),
    ("pow(1+x*x, pi)", "1/2", "1/16"),
    ("exp(-x*x)*cos(3*x)", "2/5", "1/8"),
    ("asin(sqrt(x))", "1/3", "1/16"),
    ("acos(1-x)", "1/2", "1/16"),
    ("sinh(x)*cosh(x)-tanh(x)/(1+x)", "2/3", "1/16"),
    ("log1p(exp(-x))", "5", "1/2"),
    ("erfc(sqrt(x))*exp(x)", "2", "1/8"),
    ("(x*x*x-3*x+1)/(x*x+2)", "1/7", "1/8"),
    ("cbrt(x)-atanh(x/3)", "-1", "1/8"),
    ("sqrt(x)*acosh(1+x)", "1", "1/16"),
    ("log2(x)+log10(x)-exp2(-x)", "3", "1/4"),
    ("tanh(x)", "20", "1/4"),
    ("fabs(sin(x))", "4", "1/4"),
]


def number(text):
    """An exact rational a/b or pi, as a high-precision number."""
    if text == "pi":
        return mp.pi
    numerator, _, denominator = text.partition("/")
    return mpf(numerator) / mpf(denominator or "1")


def python_source(formula):
    """The formula with exact decimal literals for mpmath."""
    out, i = [], 0
    while i < len(formula):
        if formula[i].isdigit():
            j = i
            while j < len(formula) and (formula[j].isdigit() or formula[j] == "."):
                j += 1
            out.append(f"mpf('{formula[i:j]}')")
            i = j
        elif formula[i].isalpha():
            # A name, with the digits in it (log2).
            j = i
            while j < len(formula) and formula[j].isalnum():
                j += 1
            out.append(formula[i:j])
            i = j
        else:
            out.append(formula[i])
            i += 1
    return "".join(out)


def coefficients(formula, centre, scale):
    """Cauchy's integral by the trapezoidal rule, which converges geometrically: the radius is
    chosen well inside the disc of analyticity, the number of nodes so large that aliasing is below
    the printed digits."""
    code = compile(python_source(formula), formula, "eval")
    with mp.workdps(120):
        c, h = number(centre), number(scale)
        radius = h / 2
        nodes = 512
        values = []
        for j in range(nodes):
            point = c + radius * mpmath.expjpi(mpf(2) * j / nodes)
            scope = dict(NAMES, x=point, pi=mp.pi, mpf=mpf)
            values.append(eval(code, scope))
        result = []
        for k in range(TERMS):
            total = mpmath.fsum(
                (v * mpmath.expjpi(-mpf(2) * j * k / nodes)).real for j, v in enumerate(values)
            )
            result.append(total / nodes * 2**k)
        return result


def flint_coefficients(name, centre, scale):
    """The same from python-flint's ball series, None where it lacks the function."""
    flint.ctx.prec = 400
    flint.ctx.cap = TERMS
    def arb(text):
        numerator, _, denominator = text.partition("/")
        return flint.arb(numerator) / flint.arb(denominator or "1")
    x = flint.arb_series([arb(centre), arb(scale)])
    one = flint.arb_series([1])
    table = {
        "sqrt": lambda: x.sqrt(),
        "exp": lambda: x.exp(),
        "expm1": lambda: x.exp() - one,
        "log": lambda: x.log(),
        "log1p": lambda: (one + x).log(),
        "sin": lambda: x.sin(),
        "cos": lambda: x.cos(),
        "tan": lambda: x.tan(),
        "asin": lambda: x.asin(),
        "acos": lambda: x.acos(),
        "atan": lambda: x.atan(),
        "erf": lambda: x.erf(),
        "erfc": lambda: x.erfc(),
    }
    if name not in table:
        return None
    return [flint.arb(value) for value in table[name]().coeffs()]


def text(value):
    return mpmath.nstr(value, DIGITS, strip_zeros=False, min_fixed=0, max_fixed=0)


def main():
    random.seed(20240229)
    cases = []
    for name, (low, high) in RANGES.items():
        for _ in range(3):
            low_int, high_int = int(float(low) * 1024), int(float(high) * 1024)
            centre = f"{random.randint(low_int, high_int)}/1024"
            scale = random.choice(["1/16", "1/32", "3/64"])
            cases.append((f"{name}(x)", centre, scale, name))
    cases += [(formula, centre, scale, None) for formula, centre, scale in COMPOUND]
    written = []
    for formula, centre, scale, name in cases:
        values = coefficients(formula, centre, scale)
        other = flint_coefficients(name, centre, scale) if name else None
        for k, ball in enumerate(other or []):
            near = flint.arb(mpmath.nstr(values[k], 100))
            assert abs(near - ball) < flint.arb(10) ** -70, (formula, centre, k)
        written.append(
            {
                "formula": formula,
                "centre": centre,
                "scale": scale,
                "coefficients": [text(value) for value in values],
            }
        )
    lines = ",\n".join(json.dumps(case) for case in written)
    print(f'{{"terms": {TERMS}, "digits": {DIGITS}, "cases": [\n{lines}\n]}}')


main()
