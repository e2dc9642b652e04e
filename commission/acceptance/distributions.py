"""Normal and Student distributions: the only statistics that the acceptance logic needs, without a heavy import."""

from __future__ import annotations

import math
from functools import lru_cache
from statistics import NormalDist

_NORMAL = NormalDist()
_ITERATIONS = 300


def normal_cdf(z: float) -> float:
    """Probability that a standard normal value lies below `z` (infinite `z` allowed)."""
    return 0.5 * math.erfc(-z / math.sqrt(2.0))


def normal_quantile(probability: float) -> float:
    """The standard normal value below which `probability` lies; 0 < probability < 1.

    Raises:
        ValueError: the probability is not between 0 and 1.
    """
    if not 0.0 < probability < 1.0:
        raise ValueError(f"a probability between 0 and 1 is wanted, not {probability}")
    return _NORMAL.inv_cdf(probability)


def _beta_fraction(a: float, b: float, x: float) -> float:
    """Continued fraction of the incomplete beta function (DLMF 8.17.22), by the modified Lentz method."""
    tiny = 1e-300
    c, d = 1.0, 1.0 / max(1.0 - (a + b) * x / (a + 1.0), tiny)
    result = d
    for m in range(1, _ITERATIONS):
        even = m * (b - m) * x / ((a + 2 * m - 1.0) * (a + 2 * m))
        odd = -(a + m) * (a + b + m) * x / ((a + 2 * m) * (a + 2 * m + 1.0))
        for term in (even, odd):
            d = 1.0 / ((1.0 + term * d) or tiny)
            c = (1.0 + term / c) or tiny
            result *= c * d
        if abs(c * d - 1.0) < 1e-15:
            break
    return result


def _incomplete_beta(a: float, b: float, x: float) -> float:
    """Regularised incomplete beta function I_x(a, b) (DLMF 8.17)."""
    if x <= 0.0 or x >= 1.0:
        return 0.0 if x <= 0.0 else 1.0
    front = math.exp(math.lgamma(a + b) - math.lgamma(a) - math.lgamma(b) + a * math.log(x) + b * math.log1p(-x))
    if x < (a + 1.0) / (a + b + 2.0):
        return front * _beta_fraction(a, b, x) / a
    return 1.0 - front * _beta_fraction(b, a, 1.0 - x) / b


def student_cdf(t: float, dof: float) -> float:
    """Probability that a Student t value with `dof` degrees of freedom lies below `t`; `dof` may be infinite."""
    if math.isinf(dof):
        return normal_cdf(t)
    tail = 0.5 * _incomplete_beta(dof / 2.0, 0.5, dof / (dof + t * t))
    return 1.0 - tail if t >= 0 else tail


@lru_cache(maxsize=4096)
def student_quantile(probability: float, dof: float) -> float:
    """The t value below which `probability` lies (JCGM 100 annex G, table G.2), by bisection.

    Raises:
        ValueError: the probability is not between 0 and 1, or there is less than one degree of freedom.
    """
    normal = normal_quantile(probability)
    if math.isinf(dof):
        return normal
    if dof < 1.0:
        raise ValueError(f"less than one degree of freedom ({dof:g}) gives no coverage factor")
    if probability < 0.5:
        return -student_quantile(1.0 - probability, dof)
    low, high = 0.0, 10.0
    while student_cdf(high, dof) < probability:
        high *= 4.0
    for _ in range(200):
        middle = 0.5 * (low + high)
        if middle in (low, high):
            break
        low, high = (middle, high) if student_cdf(middle, dof) < probability else (low, middle)
    return 0.5 * (low + high)
