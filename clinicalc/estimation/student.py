"""Quantiles of Student's t, for intervals of coefficients that were pooled over imputed sets.

The distribution function is the regularised incomplete beta function (Abramowitz & Stegun 1964, 26.7.1 and 26.5.8), as
a continued fraction; with many degrees of freedom the expansion round the normal quantile (26.7.5).
"""

from math import exp, inf, lgamma, log, log1p, sqrt
from statistics import NormalDist

_MANY = 10_000.0
"""Degrees of freedom from which the expansion, whose next term is of their fourth power, is exact."""
_ROUNDS, _STEPS = 400, 200
_TINY, _EPSILON = 1e-300, 1e-16


def student_quantile(probability: float, degrees: float) -> float:
    """The t that lies above so much of the distribution, `probability` above 1/2, with `degrees` above 0.

    With infinite degrees that of the normal distribution. Raises ValueError outside these.
    """
    if not (0.5 < probability < 1.0 and degrees > 0.0):
        raise ValueError(f"no quantile of Student's t at {probability} with {degrees} degrees of freedom")
    if degrees >= _MANY:
        return _expand(NormalDist().inv_cdf(probability), degrees)
    tails = 2.0 * (1.0 - probability)
    low, high = 0.0, 1.0
    while _two_tails(high, degrees) > tails:
        low, high = high, 2.0 * high
    for _ in range(_STEPS):
        middle = 0.5 * (low + high)
        if middle in (low, high):
            break
        low, high = (middle, high) if _two_tails(middle, degrees) > tails else (low, middle)
    return 0.5 * (low + high)


def _expand(z: float, n: float) -> float:
    if n == inf:
        return z
    square = z * z
    first = (square + 1.0) / 4.0
    second = ((5.0 * square + 16.0) * square + 3.0) / 96.0
    third = (((3.0 * square + 19.0) * square + 17.0) * square - 15.0) / 384.0
    return z * (1.0 + (first + (second + third / n) / n) / n)


def _two_tails(t: float, n: float) -> float:
    """How much of the distribution lies further out than t on either side."""
    x = n / (n + t * t)
    a, b = 0.5 * n, 0.5
    # logarithms of x and 1 - x without the cancellation of small or large t
    logs = -a * log1p(t * t / n) + b * (2.0 * log(t) - log(n + t * t)) if t else -inf
    front = exp(lgamma(a + b) - lgamma(a) - lgamma(b) + logs)
    if x < (a + 1.0) / (a + b + 2.0):
        return front * _fraction(a, b, x) / a
    return 1.0 - front * _fraction(b, a, t * t / (n + t * t)) / b


def _fraction(a: float, b: float, x: float) -> float:
    """The continued fraction of the incomplete beta function, by the method of Lentz."""
    c, d = 1.0, 1.0 / (_away(1.0 - (a + b) * x / (a + 1.0)))
    found = d
    for m in range(1, _ROUNDS):
        even = m * (b - m) * x / ((a + 2.0 * m - 1.0) * (a + 2.0 * m))
        d, c = 1.0 / _away(1.0 + even * d), _away(1.0 + even / c)
        found *= d * c
        odd = -(a + m) * (a + b + m) * x / ((a + 2.0 * m) * (a + 2.0 * m + 1.0))
        d, c = 1.0 / _away(1.0 + odd * d), _away(1.0 + odd / c)
        found *= d * c
        if abs(d * c - 1.0) < _EPSILON * sqrt(m):
            break
    return found


def _away(value: float) -> float:
    return value if abs(value) > _TINY else _TINY
