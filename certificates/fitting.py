"""Fits and roundings for make_coefficients.py, with mpmath at the caller's precision."""

from mpmath import mp, mpf


def rounded(x, bits):
    """x rounded to the nearest number of `bits` bits, ties to even."""
    with mp.workprec(bits):
        return +mpf(x)


def hexadecimal(x):
    """A number of at most 53 bits as an integer or a C99 hex-float without trailing zeros."""
    if x == int(x):
        return str(int(x))
    text = float(x).hex()
    if "." not in text:
        return text
    significand, exponent = text.split("p")
    significand = significand.rstrip("0").rstrip(".")
    return f"{significand}p{exponent}"


def decimal(x, digits):
    """The nearest decimal number of so many significant digits."""
    return f"{float(x):.{digits - 1}e}"


def design_figure(error):
    """`error` plus at least one per cent, rounded up to two significant digits."""
    target = error * mpf("1.01")
    exponent = int(mp.floor(mp.log10(target))) - 1
    digits = int(mp.ceil(target / mpf(10) ** exponent))
    return f"{digits / 10:g}e{exponent + 1}"


def chebyshev_points(left, right, count):
    """Extrema of the Chebyshev polynomial of degree count-1, ascending."""
    middle, half = (left + right) / 2, (right - left) / 2
    return [middle - half * mp.cos(mp.pi * k / (count - 1)) for k in range(count)]


def alternation(error, left, right, count, samples=400):
    """`count` points of largest error with alternating signs (one-point-per-lobe exchange)."""
    xs = chebyshev_points(left, right, samples)
    values = [error(x) for x in xs]
    lobes = []
    for x, value in zip(xs, values):
        if lobes and (value > 0) == (lobes[-1][1] > 0):
            if abs(value) > abs(lobes[-1][1]):
                lobes[-1] = (x, value)
        else:
            lobes.append((x, value))
    step = {x: (xs[max(i - 1, 0)], xs[min(i + 1, samples - 1)]) for i, x in enumerate(xs)}
    lobes = [refined(error, *step[x], value > 0) for x, value in lobes]
    while len(lobes) > count:
        drop = 0 if abs(lobes[0][1]) < abs(lobes[-1][1]) else -1
        lobes.pop(drop)
    if len(lobes) < count:
        raise ArithmeticError(f"only {len(lobes)} lobes of {count}")
    return [x for x, _ in lobes], max(abs(v) for _, v in lobes), min(abs(v) for _, v in lobes)


def refined(error, left, right, positive, steps=60):
    """Golden-section search for the largest signed error on [left, right]."""
    sign = 1 if positive else -1
    ratio = (mp.sqrt(5) - 1) / 2
    a, b = left, right
    c, d = b - ratio * (b - a), a + ratio * (b - a)
    at_c, at_d = sign * error(c), sign * error(d)
    for _ in range(steps):
        if at_c > at_d:
            b, d, at_d = d, c, at_c
            c = b - ratio * (b - a)
            at_c = sign * error(c)
        else:
            a, c, at_c = c, d, at_d
            d = a + ratio * (b - a)
            at_d = sign * error(d)
    best = max([left, right, (a + b) / 2], key=lambda x: sign * error(x))
    return best, error(best)


def minimax(function, basis, weight, left, right, inner=None):
    """Coefficients of the weighted minimax fit by functions of `basis` (Remez exchange).

    Minimises the largest |weight(x) (function(x) - sum c_k basis_k(x))|. `inner` leaves out ends
    where weight or basis vanish.
    """
    low, high = inner or (left, right)
    count = len(basis) + 1
    xs = chebyshev_points(low, high, count)
    for _ in range(40):
        matrix = mp.matrix(count, count)
        for i, x in enumerate(xs):
            for k, term in enumerate(basis):
                matrix[i, k] = term(x)
            matrix[i, count - 1] = (-1) ** i / weight(x)
        solution = mp.lu_solve(matrix, mp.matrix([function(x) for x in xs]))
        coefficients = [solution[k] for k in range(count - 1)]

        def error(x):
            fit = mp.fsum(c * term(x) for c, term in zip(coefficients, basis))
            return weight(x) * (function(x) - fit)

        xs, largest, smallest = alternation(error, low, high, count)
        if largest - smallest <= largest * mpf("1e-8"):
            return coefficients
    raise ArithmeticError("the exchange did not settle")


def rational_minimax(function, weight, left, right, numerator, denominator):
    """Numerator and denominator (constant term 1) of the weighted rational minimax fit."""
    count = numerator + denominator + 2

    def solve(rows, side):
        solution = mp.lu_solve(mp.matrix(rows), mp.matrix(side))
        top = [solution[k] for k in range(numerator + 1)]
        return top, [mpf(1)] + [solution[numerator + k] for k in range(1, denominator + 1)]

    def row(x, scale, slope, rest):
        top = [scale * x**k for k in range(numerator + 1)]
        return top + [-slope * x**k for k in range(1, denominator + 1)] + rest

    def interpolant(xs):
        """P - f Q = 0 at every x."""
        return solve([row(x, 1, function(x), []) for x in xs], [function(x) for x in xs])

    def newton(xs, top, bottom):
        """One Newton step toward P/Q +- level/weight = f with alternating signs."""
        rows, side = [], []
        for i, x in enumerate(xs):
            q = horner(bottom, x)
            slope = horner(top, x) / q**2
            rows.append(row(x, 1 / q, slope, [(-1) ** i / weight(x)]))
            side.append(function(x) - slope * (q - 1))
        return solve(rows, side)

    def error_of(top, bottom):
        return lambda x: weight(x) * (function(x) - horner(top, x) / horner(bottom, x))

    # An interpolant is a good start; its points are crowded toward the left end, where a quotient
    # of an odd function by x bends most.
    shares = [mp.sin(mp.pi * (2 * i + 1) / (4 * count - 4)) ** 4 for i in range(count - 1)]
    top, bottom = interpolant([left + (right - left) * share for share in shares])
    for _ in range(40):
        xs, largest, smallest = alternation(error_of(top, bottom), left, right, count)
        if largest - smallest <= largest * mpf("1e-8"):
            return top, bottom
        for _ in range(6):
            top, bottom = newton(xs, top, bottom)
    raise ArithmeticError("the exchange did not settle")


def chebyshev_series(function, left, right, degree, points=128):
    """The first Chebyshev coefficients of the interpolant at many Chebyshev nodes."""
    middle, half = (left + right) / 2, (right - left) / 2
    angles = [mp.pi * (2 * i + 1) / (2 * points) for i in range(points)]
    values = [function(middle + half * mp.cos(a)) for a in angles]
    series = [
        2 * mp.fsum(v * mp.cos(k * a) for v, a in zip(values, angles)) / points
        for k in range(degree + 1)
    ]
    series[0] /= 2
    return series


def horner(coefficients, t):
    total = mpf(0)
    for c in reversed(coefficients):
        total = total * t + c
    return total


def clenshaw(coefficients, t):
    """c_0 + c_1 T_1(t) + ..."""
    b1 = b2 = mpf(0)
    for c in reversed(coefficients[1:]):
        b1, b2 = c + 2 * t * b1 - b2, b1
    return coefficients[0] + t * b1 - b2


def largest_error(error, left, right, samples):
    """Largest |error| seen: samples, then a local search around the best few."""
    xs = chebyshev_points(left, right, samples)
    values = [abs(error(x)) for x in xs]
    best = sorted(range(samples), key=lambda i: -values[i])[:4]
    modulus = lambda x: abs(error(x))
    found = [
        refined(modulus, xs[max(i - 1, 0)], xs[min(i + 1, samples - 1)], True, 40)[1] for i in best
    ]
    return max(found)


def relative(approximant, function):
    """Signed relative error; a shared zero at 0 is taken by a limit from nearby."""

    def error(x):
        at = x if x else mpf("1e-20")
        return approximant(at) / function(at) - 1

    return error


def hermite(left, right, p, q, x):
    """Newton's form over the knots with multiplicity, from exact divided differences."""
    points = [left] * len(p) + [right] * len(q)
    n = len(points)
    table = [p[0]] * len(p) + [q[0]] * len(q)
    newton = [table[0]]
    for j in range(1, n):
        following = []
        for i in range(n - j):
            if points[i] == points[i + j]:
                following.append((p if points[i] == left else q)[j])
            else:
                following.append((table[i + 1] - table[i]) / (points[i + j] - points[i]))
        table = following
        newton.append(table[0])
    total = mpf(0)
    for k in reversed(range(n)):
        total = total * (x - points[k]) + newton[k]
    return total
