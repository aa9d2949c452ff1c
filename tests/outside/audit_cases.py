"""Decisions on single cases that no rule can take."""


def _cut(left, right, why):
    """A domain that runs to infinity, cut where the worst point is well inside."""
    return {
        "domain": [left, right],
        "note": f"the published domain is [{left}, inf): audited on [{left}, {right}], which "
        f"contains the worst point; beyond {right} the error stays below the supremum ({why})",
    }


_NEAR_ONE = "function and approximant are both within 1e-9 of 1 there"

_BRANCH_POINT = (
    "the parametrisation x = 1 - u*u of the published computation is not used: in the case's own "
    "variable the branch point at x = 1 is an end of the domain, where the error tends to 0"
)

_ROOT = "the approximant is the square root of a function with a double zero at 0"

OVERRIDES = {
    "as-4.4.45": {"domain": ["0", "1"], "note": _BRANCH_POINT},
    "as-4.4.46": {"domain": ["0", "1"], "note": _BRANCH_POINT},
    "as-7.1.25": _cut("0", "8", _NEAR_ONE),
    "as-7.1.26": _cut("0", "8", _NEAR_ONE),
    "as-7.1.27": _cut("0", "8", _NEAR_ONE),
    "as-7.1.28": _cut("0", "8", _NEAR_ONE),
    "as-26.2.16": _cut("0", "12", _NEAR_ONE),
    "as-26.2.18": _cut("0", "12", _NEAR_ONE),
    "as-26.2.20": _cut("0", "8", "both are positive and below 3e-5 there"),
    "as-26.2.21": _cut("0", "8", "both are positive and below 3e-5 there"),
    "as-26.2.23": {
        "domain": ["0", "200"],
        "note": "the published domain 0 < p <= 1/2 is z in [0, inf): audited for z in [0, 200], "
        "which contains the worst point z = 136.7; beyond it the error decays like log(z)/z",
    },
    "cody-erf-3": _cut("4", "100", "a third of it at 100, then falling like 1/x^2"),
    "hd-atan": {
        "reference": "pi/4+atan(x)",
        "approximant": "pi4[0]+x*poly(a,x**2)",
        "domain": ["-1", "1"],
        "note": "the file's x is u = (x - 1)/(x + 1) of the case, which maps [0, inf) to [-1, 1); "
        "atan((1 + u)/(1 - u)) = pi/4 + atan(u) there, and u = 1 is the limit at infinity",
    },
    "win-erf-a": _cut("0", "8", f"{_NEAR_ONE}; {_ROOT}"),
    "win-erf-b": _cut("0", "8", f"{_NEAR_ONE}; {_ROOT}"),
    "win-erf-a-rel": {
        "domain": ["1/100", "8"],
        "note": "audited on [1/100, 8], which contains the worst point, as in the published "
        f"computation; {_ROOT} and the relative error tends to 0 there (see the variant on [0, 8])",
    },
}


def _arcsine_in_u(case):
    return {
        "of": case,
        "reference": "pi/2-2*asin(x/sqrt(2))",
        "approximant": "pi/2-x*poly(a,1-x**2)",
        "domain": ["0", "1"],
        "note": "the file's x is u of the case, x = 1 - u*u; there "
        "asin(1 - u*u) = pi/2 - 2 asin(u/sqrt(2)), since cos(2 a) = 1 - 2 sin(a)^2",
    }


_FACTOR = "(4/pi+AW*x**2)/(1+AW*x**2)"

# Further files for a case: the same error written in another way.
VARIANTS = {
    "as-4.4.45-u": _arcsine_in_u("as-4.4.45"),
    "as-4.4.46-u": _arcsine_in_u("as-4.4.46"),
    "win-erf-a-rel-from-0": {
        "of": "win-erf-a-rel",
        "approximant": f"x*sqrt({_FACTOR}*(-expm1(-(x**2*({_FACTOR})))/(x**2*({_FACTOR}))))",
        "domain": ["0", "8"],
        "note": "with w = x*x*g, sqrt(1 - exp(-w)) is written x*sqrt(g*(-expm1(-w)/w)), the same "
        "for x >= 0; the approximant has a removable singularity at 0, where both functions have "
        "a simple zero",
    },
}

# How the Chebyshev series in an affine variable are written, so that each way occurs.
CHEBYSHEV_FORMS = {
    "fnlib-dalnr": {"first": "halved"},
    "fnlib-ln21": {"first": "halved"},
    "fnlib-dln21": {"first": "full"},
    "fnlib-dln22": {"first": "halved", "variable": "centred"},
}
