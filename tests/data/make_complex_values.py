"""Writes complex_values.json: values of the elementary functions at complex points, and maxima of
formulas on circles, to check complex enclosures against independent implementations.

    python3 tests/data/make_complex_values.py > tests/data/complex_values.json

Values, and the modulus of the derivative by a central difference, come from python-flint's complex
balls; the maxima from mpmath at many points of the circle (so that they are bounds from below). The
points are short numbers of many sizes, off the branch cuts; those at which a part of the value
underflows against the other are left out. Needs python-flint and mpmath.
"""

import json
import random

import flint
import mpmath
from flint import acb, arb
from mpmath import mp, mpf

flint.ctx.prec = 400
mp.dps = 40
POINTS = 130
CIRCLE_POINTS = 4096


def cbrt(z):
    """The continuation of the real cube root to each half plane."""
    third = acb(1) / 3
    return z.pow(third) if z.real > 0 else -((-z).pow(third))


def anywhere(x, y):
    return True


def off_negative(x, y):
    return y != 0 or x > 0


def off_outer(x, y):
    return y != 0 or abs(x) < 1


# Functions with their domains, and the largest exponents of |x| and |y| (powers of two).
FUNCTIONS = {
    "exp": (lambda z: z.exp(), anywhere, 7, 5),
    "exp2": (lambda z: acb(2).pow(z), anywhere, 7, 5),
    "expm1": (lambda z: z.expm1(), anywhere, 7, 5),
    "log": (lambda z: z.log(), off_negative, 20, 20),
    "log2": (lambda z: z.log() / acb(2).log(), off_negative, 20, 20),
    "log10": (lambda z: z.log() / acb(10).log(), off_negative, 20, 20),
    "log1p": (lambda z: z.log1p(), lambda x, y: off_negative(x + 1, y), 20, 20),
    "sqrt": (lambda z: z.sqrt(), off_negative, 20, 20),
    "cbrt": (cbrt, lambda x, y: abs(x) >= 0.25, 20, 20),
    "sin": (lambda z: z.sin(), anywhere, 5, 5),
    "cos": (lambda z: z.cos(), anywhere, 5, 5),
    "tan": (lambda z: z.tan(), anywhere, 4, 4),
    "sinh": (lambda z: z.sinh(), anywhere, 5, 5),
    "cosh": (lambda z: z.cosh(), anywhere, 5, 5),
    "tanh": (lambda z: z.tanh(), anywhere, 4, 4),
    "asin": (lambda z: z.asin(), off_outer, 10, 10),
    "acos": (lambda z: z.acos(), off_outer, 10, 10),
    "atan": (lambda z: z.atan(), lambda x, y: off_outer(y, x), 10, 10),
    "asinh": (lambda z: z.asinh(), lambda x, y: off_outer(y, x), 10, 10),
    "acosh": (lambda z: z.acosh(), lambda x, y: y != 0 or x > 1, 10, 10),
    "atanh": (lambda z: z.atanh(), off_outer, 10, 10),
    "erf": (lambda z: z.erf(), anywhere, 3, 3),
    "erfc": (lambda z: z.erfc(), anywhere, 7, 3),
}

# Exponents whose powers are checked: square, reciprocal and others.
POWERS = [-3, -1, 2, 5]
RATIONAL_POWERS = {"-1/3": (-1, 3), "5/2": (5, 2)}


def text(x):
    """30 significant digits of a real ball, or None if it has no 30 digits."""
    return x.str(30, radius=False) if x.rel_accuracy_bits() > 120 or x == 0 else None


def coordinate(largest):
    """A short number: a few bits at a random size, often 0, mostly of moderate size."""
    if random.random() < 0.1:
        return 0.0
    exponent = random.choice([random.randint(-2, 2), random.randint(-2, 2), random.randint(-25, largest)])
    exponent = min(exponent, largest)
    return random.choice([-1, 1]) * random.randint(32, 64) / 64 * 2.0**exponent


def point(function, domain, largest_x, largest_y):
    while True:
        x, y = coordinate(largest_x), coordinate(largest_y)
        if not domain(x, y):
            continue
        z = acb(x, y)
        value = function(z)
        if not value.is_finite():
            continue
        step = arb(2) ** -80
        slope = abs((function(z + step) - function(z - step)) / (2 * step))
        real, imaginary = text(value.real), text(value.imag)
        if slope.is_finite() and real and imaginary:
            return [repr(x), repr(y), real, imaginary, slope.str(6, radius=False)]


NAMES = {
    "exp2": lambda z: mpmath.power(2, z),
    "log2": lambda z: mpmath.log(z) / mpmath.log(2),
    "log10": lambda z: mpmath.log(z) / mpmath.log(10),
    "cbrt": lambda z: mpmath.cbrt(z) if z.real > 0 else -mpmath.cbrt(-z),
    "pow": mpmath.power,
    "pi": mp.pi,
    "fabs": lambda z: z if z.real > 0 else -z,
}
for name in "exp expm1 log log1p sqrt sin cos tan asin acos atan sinh cosh tanh asinh acosh atanh erf erfc".split():
    NAMES[name] = getattr(mpmath, name)

# Formula, centre and radius of discs on which it is analytic.
DISCS = [
    ("exp(x)", 1, 0.5), ("exp(x)", 0, 2), ("exp(-x*x)", 0.5, 1), ("exp2(x)", -3, 1.5), ("expm1(x)", 0, 1),
    ("expm1(x)/x", 0, 1.5), ("log(x)", 1, 0.75), ("log(x)", 100, 90), ("log2(1+x)", 0.5, 0.75),
    ("log10(x)", 3, 2), ("log1p(x)", 0, 0.5), ("log1p(x)", 0, 0.875), ("log1p(x)/x", 0, 0.875),
    ("(x-log1p(x))/(x*x)", 0, 0.5), ("sqrt(x)", 1, 0.875), ("sqrt(1+x*x)", 0, 0.75), ("cbrt(x)", -2, 1.5),
    ("cbrt(x)", 2, 1.5), ("pow(x,2.5)", 1, 0.75), ("pow(x,-1.5)", 2, 1.5), ("pow(x,x)", 2, 1.5),
    ("pow(x,-3)", 2, 1), ("pow(1+x,1/3)", 0, 0.5), ("sin(x)", 0, 3), ("sin(x)/x", 0, 1), ("sin(x)/x", 0, 4),
    ("x/sin(x)", 0, 2), ("cos(x)", 2, 2), ("(1-cos(x))/(x*x)", 0, 1), ("x*x/(1-cos(x))", 0, 2),
    ("tan(x)", 0, 1), ("tan(x)", 3, 1.25), ("tanh(x)", 0, 1.25), ("tanh(x)", 5, 4), ("asin(x)", 0.25, 0.5),
    ("acos(x)", -0.125, 0.75), ("atan(x)", 0, 0.875), ("atan(x)", 3, 2.5), ("sinh(x)", 1, 1), ("cosh(x)", 0, 3),
    ("asinh(x)", 0, 0.75), ("acosh(x)", 3, 1.5), ("atanh(x)", 0, 0.75), ("erf(x)", 0.5, 1), ("erf(x)", 3, 2),
    ("erfc(x)", 1, 1.5), ("erfc(x)", 4, 2), ("log(x*erfc(x))", 20, 1), ("log(x*erfc(x))", 100, 0.25),
    ("exp(x*x)*erfc(x)", 3, 2), ("1/(1+25*x*x)", 0.5, 0.375), ("1/(1+25*x*x)", 0, 0.1875), ("1/x", 2, 1.5),
    ("1/(x-3)", 0, 2), ("(x*x-1)/(x-1)", 1, 5), ("fabs(x)", -3, 2.5), ("fabs(x*x)", 0, 2), ("x*fabs(x-4)", 1, 2),
    ("log(x*exp(x))", 10, 9), ("pow(exp(4*x),0.25)", 0, 3), ("sqrt(exp(5*x))", 0, 2), ("1/exp(9*x)", 1, 2),
    ("cbrt(-exp(6*x))", 0, 1), ("log1p(exp(3*x))", 0, 0.75), ("log1p(exp(x))", 0, 3), ("pi*x", 0, 2), ("2", 5, 1),
    ("x*x*x-x+pow(x,7)", 0.25, 1.5), ("log(1+exp(-x))", 4, 3), ("sin(pi*x)/(x-1)", 1, 1.5),
    ("exp(1/x)", 1, 0.75), ("tan(x)/x", 0, 1.25), ("x/tanh(x)", 0, 1.5), ("atan(x)/x", 0, 0.75),
    ("log(cosh(x))", 0, 1.25), ("log((2+x)/(2-x))", 0, 1.5), ("sqrt(x-1)*exp(-x)", 3, 1.75),
    ("exp(x)", 0.375, 1e-9), ("log(x)", 1e-20, 7.5e-21), ("1-x", 1, 1e-30), ("x*x/(1-cos(x))", 0, 1e-12),
    ("erf(x)", 0, 3), ("erfc(x)", 0, 2), ("erf(x)/x", 0, 1.5), ("(exp(x)-1)/x", 0, 1), ("pow(x,3)/(x-sin(x))", 0, 3),
]


# Branches that are followed around 0, written out.
FOLLOWED = {
    "pow(exp(4*x),0.25)": mpmath.exp,
    "sqrt(exp(5*x))": lambda z: mpmath.exp(5 * z / 2),
    "cbrt(-exp(6*x))": lambda z: -mpmath.exp(2 * z),
    "log(x*exp(x))": lambda z: mpmath.log(z) + z,
    "log(x*erfc(x))": lambda z: mpmath.log(z) - z * z + mpmath.log(mpmath.exp(z * z) * mpmath.erfc(z)),
}


def maximum(formula, centre, radius):
    """The largest modulus at many points of the circle, rounded down."""
    code = compile(formula, formula, "eval")
    function = FOLLOWED.get(formula, lambda z: eval(code, NAMES, {"x": z}))
    mp.dps = 80 if radius < 1e-6 else 20
    result = mpf(0)
    for k in range(CIRCLE_POINTS):
        angle = 2 * mp.pi * (k + mpf("0.37")) / CIRCLE_POINTS
        result = max(result, abs(function(mpf(centre) + mpf(radius) * mpmath.expj(angle))))
    return mpmath.nstr(result * (1 - mpf(10) ** -9), 12)


def main():
    random.seed(20240611)
    values = {name: [point(*row) for _ in range(POINTS)] for name, row in FUNCTIONS.items()}
    nonzero = lambda x, y: x != 0 or y != 0
    for n in POWERS:
        values[f"pow {n}"] = [point(lambda z: z**n, nonzero, 10, 10) for _ in range(40)]
    for name, (p, q) in RATIONAL_POWERS.items():
        power = lambda z: z.pow(acb(p) / q)
        values[f"pow {name}"] = [point(power, off_negative, 10, 10) for _ in range(40)]
    discs = [[formula, repr(float(c)), repr(float(r)), maximum(formula, c, r)] for formula, c, r in DISCS]
    rows = lambda items: "[\n" + ",\n".join("  " + json.dumps(row) for row in items) + "\n ]"
    print('{"values": {')
    print(",\n".join(f' {json.dumps(name)}: {rows(points)}' for name, points in values.items()))
    print('},\n"discs": ' + rows(discs) + "}")


main()
