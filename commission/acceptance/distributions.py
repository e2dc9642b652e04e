"""Normal and Student distributions: the only statistics that the acceptance logic needs."""

from __future__ import annotations

import math
from functools import lru_cache
from statistics import NormalDist

_NORMAL = NormalDist()


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


@lru_cache(maxsize=4096)
def student_quantile(probability: float, dof: float) -> float:
    """The t value below which `probability` lies (JCGM 100 annex G, table G.2); `dof` may be broken or infinite.

    Raises:
        ValueError: the probability is not between 0 and 1, or there is less than one degree of freedom.
    """
    normal = normal_quantile(probability)
    if math.isinf(dof):
        return normal
    if dof < 1.0:
        raise ValueError(f"less than one degree of freedom ({dof:g}) gives no coverage factor")
    from scipy.special import stdtrit  # late: only readings with few samples need it

    return float(stdtrit(dof, probability))
