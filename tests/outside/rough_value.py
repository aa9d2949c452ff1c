"""Double-precision values of formulas, only to notice where a reference is 0/0."""

import math
import re

NAMES = {
    name: getattr(math, name)
    for name in (
        "sqrt exp expm1 log log2 log10 log1p sin cos tan asin acos atan sinh cosh tanh asinh acosh "
        "atanh erf erfc fabs pow pi e"
    ).split()
}
NAMES["exp2"] = lambda value: 2.0**value
NAMES["cbrt"] = lambda value: math.copysign(abs(value) ** (1 / 3), value)

HEXADECIMAL = re.compile(r"0x[0-9a-fA-F.]+p[+-]?\d+")


def value(formula, x):
    """A formula of audit files at x, in double precision."""
    python = HEXADECIMAL.sub(lambda match: repr(float.fromhex(match.group())), formula)
    return eval(python, {"__builtins__": {}}, {**NAMES, "x": x})


def removable_at_zero(reference, on):
    """True if 0 belongs to the domain and the reference divides by zero there."""
    left, right = (value(end, 0.0) for end in on)
    if not left <= 0.0 <= right:
        return False
    try:
        value(reference, 0.0)
    except ZeroDivisionError:
        return True
    return False
