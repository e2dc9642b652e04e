"""Barometric pressure from the height of the site."""

from __future__ import annotations

from commission.properties.errors import PropertyRangeError

LOWEST, HIGHEST = -2000.0, 11000.0  # m; the layer of ISO 2533 with constant lapse rate


def barometric_pressure(altitude: float) -> float:
    """Pressure (Pa) of the standard atmosphere at `altitude` (m above sea level, taken as geopotential).

    p = 101325 (1 - 2.25577e-5 z)^5.2559: ISO 2533:1975 for the lowest layer, in the form of ASHRAE Handbook
    Fundamentals 2017, chapter 1, equation 3. Weather moves the true pressure by some 30 hPa either way: where it
    matters, read a barometer.

    Raises:
        PropertyRangeError: outside -2000 m to 11000 m.
    """
    if not LOWEST <= altitude <= HIGHEST:
        raise PropertyRangeError(
            "standard atmosphere", f"{altitude:.0f} m is outside {LOWEST:.0f} m to {HIGHEST:.0f} m of ISO 2533"
        )
    return float(101325.0 * (1.0 - 2.25577e-5 * altitude) ** 5.2559)
