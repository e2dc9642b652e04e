"""Saturated air for whole arrays of temperatures; apart from `psychrometrics`, which does without numpy."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from commission.properties.psychrometrics import (
    CP_AIR,
    CP_VAPOUR,
    ICE,
    LATENT,
    MASS_RATIO,
    TRIPLE_POINT,
    WATER,
    saturated_air,
)

Array = NDArray[np.float64]


def saturated_air_rows(T: Array, p: Array) -> tuple[Array, Array]:
    """Humidity ratio and enthalpy (J per kg dry air) of saturated air for arrays of `T` (K) and `p` (Pa).

    Raises:
        PropertyRangeError: any temperature outside -100 °C to 200 °C, or at which water boils.
    """
    for end in (float(T.min()), float(T.max())):
        saturated_air(end, float(p.min()))
    vapour = np.empty_like(T)
    for here, (a, b, c, d, e, f, g) in ((T < TRIPLE_POINT, ICE), (T >= TRIPLE_POINT, WATER)):
        t = T[here]
        vapour[here] = np.exp(a / t + b + t * (c + t * (d + t * (e + t * f))) + g * np.log(t))
    W = MASS_RATIO * vapour / (p - vapour)
    return W, CP_AIR * (T - 273.15) + W * (LATENT + CP_VAPOUR * (T - 273.15))
