"""Moist air at the barometric pressure of the site, after ASHRAE Handbook Fundamentals 2017 (SI), chapter 1.

Equation numbers are of that chapter. Air and vapour are perfect gases and the enhancement factor of saturated air is
left out, as in the chapter's own perfect-gas relations: the humidity ratio comes out 0.4 to 0.8 % lower than that of
real moist air, less than a humidity sensor can tell. Over ice the wet bulb is that of an iced wick. Quantities are per
kg of dry air; enthalpy is zero for dry air at 0 °C with liquid water at 0 °C.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

from commission.properties.errors import PropertyRangeError, celsius

COLDEST, HOTTEST = 173.15, 473.15  # K; the range of equations 5 and 6
TRIPLE_POINT = 273.16
MASS_RATIO = 0.621945  # of water to dry air, equation 20
GAS_CONSTANT = 287.042  # J/(kg K) of dry air, equation 1
CP_AIR, CP_VAPOUR, LATENT = 1006.0, 1860.0, 2.501e6  # J/(kg K), J/(kg K), J/kg; equation 30
ROUNDING = 1e-9
ICE = (-5.6745359e3, 6.3925247, -9.6778430e-3, 6.2215701e-7, 2.0747825e-9, -9.4840240e-13, 4.1635019)
WATER = (-5.8002206e3, 1.3914993, -4.8640239e-2, 4.1764768e-5, -1.4452093e-8, 0.0, 6.5459673)


@dataclass(frozen=True, slots=True)
class MoistAir:
    """A state of moist air.

    T (K, dry bulb), p (Pa, barometric), W (kg water per kg dry air), h (J per kg dry air), density (kg dry air per m3
    of moist air), cp (J/(K kg dry air)), relative_humidity (0 to 1).
    """

    T: float
    p: float
    W: float
    h: float
    density: float
    cp: float
    relative_humidity: float

    @property
    def vapour_pressure(self) -> float:
        """Partial pressure of the water vapour (Pa), equation 20 turned round."""
        return self.p * self.W / (MASS_RATIO + self.W)

    @property
    def dew_point(self) -> float:
        """Temperature (K) at which water or frost begins to form. Air without water has none: 0 K, colder than any
        coil."""
        return dew_point(self.vapour_pressure)

    @property
    def wet_bulb(self) -> float:
        """Thermodynamic wet-bulb temperature (K), equations 33 and 35; of an iced wick below the triple point."""
        return _wet_bulb(self.T, self.W, self.p)


def moist_air(
    T: float,
    p: float,
    *,
    relative_humidity: float | None = None,
    wet_bulb: float | None = None,
    humidity_ratio: float | None = None,
) -> MoistAir:
    """Moist air at dry-bulb `T` (K) and barometric `p` (Pa), with exactly one measure of its water.

    `relative_humidity` from 0 to 1, `wet_bulb` in K, `humidity_ratio` in kg per kg of dry air.

    Raises:
        TypeError: not exactly one measure of the water is given.
        PropertyRangeError: outside -100 °C to 200 °C, humidity outside 0 to saturation, a wet bulb above the dry bulb
            or lower than that of dry air, or a pressure at which water of this temperature boils.
    """
    given = (relative_humidity, wet_bulb, humidity_ratio)
    if sum(g is not None for g in given) != 1:
        raise TypeError("give exactly one of relative_humidity, wet_bulb and humidity_ratio")
    saturated = saturation_pressure(T)
    if relative_humidity is not None:
        if not -ROUNDING <= relative_humidity <= 1 + ROUNDING:
            raise _refused(f"a relative humidity of {100 * relative_humidity:.1f} % cannot be")
        W = _humidity_ratio(min(1.0, max(0.0, relative_humidity)) * saturated, p)
    elif wet_bulb is not None:
        if not wet_bulb <= T + ROUNDING:
            raise _refused(f"a wet bulb of {celsius(wet_bulb)} above the dry bulb of {celsius(T)} cannot be")
        W = _from_wet_bulb(T, min(wet_bulb, T), p)
        if W < -ROUNDING:
            raise _refused(f"a wet bulb of {celsius(wet_bulb)} at {celsius(T)} is lower than that of dry air")
    else:
        assert humidity_ratio is not None
        W = humidity_ratio
        if not W >= 0:
            raise _refused(f"a humidity ratio of {W:.4g} cannot be")
    return _state(T, p, max(W, 0.0), saturated)


def moist_air_from_enthalpy(h: float, W: float, p: float) -> MoistAir:
    """Moist air with enthalpy `h` (J per kg dry air) and humidity ratio `W` at `p` (Pa); equation 30 turned round.

    Raises:
        PropertyRangeError: supersaturated, or outside the range.
    """
    return moist_air((h - LATENT * W) / (CP_AIR + CP_VAPOUR * W) + 273.15, p, humidity_ratio=W)


def saturated_air_at_enthalpy(h: float, p: float) -> MoistAir:
    """Saturated air of enthalpy `h` (J per kg dry air) at `p` (Pa), as wet coils need it.

    Raises:
        PropertyRangeError: no saturated air of that enthalpy between -100 °C and the boiling point at `p`.
    """
    top = min(HOTTEST, dew_point(0.98 * p))
    T = _root(lambda t: saturated_air(t, p).h - h, COLDEST, top)
    if T is None:
        raise _refused(f"no saturated air has {h / 1e3:.1f} kJ per kg of dry air at {p / 1e2:.0f} hPa")
    return saturated_air(T, p)


def saturated_air(T: float, p: float) -> MoistAir:
    """Saturated air at `T` (K) and `p` (Pa). Raises PropertyRangeError outside the range."""
    return moist_air(T, p, relative_humidity=1.0)


def saturation_pressure(T: float) -> float:
    """Pressure (Pa) of saturated water vapour over ice (below 0.01 °C) or water at `T` (K); equations 5 and 6.

    Raises:
        PropertyRangeError: outside -100 °C to 200 °C.
    """
    if not COLDEST <= T <= HOTTEST:
        raise _refused(f"{celsius(T)} is outside {celsius(COLDEST)} to {celsius(HOTTEST)}")
    return math.exp(_log_saturation(T))


def dew_point(vapour_pressure: float) -> float:
    """Temperature (K) at which `vapour_pressure` (Pa) is saturated; 0 K for a pressure of zero.

    Raises:
        PropertyRangeError: above that of 200 °C or negative. Below that of -100 °C the equation of ice is followed
        down.
    """
    if vapour_pressure == 0:
        return 0.0
    if not 0 < vapour_pressure <= math.exp(_log_saturation(HOTTEST)) * (1 + ROUNDING):
        raise _refused(f"a vapour pressure of {vapour_pressure:.4g} Pa has no dew point here")
    wanted = math.log(vapour_pressure)
    T = 5300.0 / (5300.0 / 273.15 - (wanted - math.log(611.0)))  # Clausius-Clapeyron from the ice point, to start
    if not 100.0 < T < HOTTEST:
        T = 100.0 if wanted < 0 else HOTTEST
    for _ in range(50):
        step = (wanted - _log_saturation(T)) / _log_slope(T)
        T = min(HOTTEST, max(50.0, T + step))
        if abs(step) < 1e-10:
            break
    return T


def _log_saturation(T: float) -> float:
    a, b, c, d, e, f, g = ICE if T < TRIPLE_POINT else WATER
    return a / T + b + T * (c + T * (d + T * (e + T * f))) + g * math.log(T)


def _log_slope(T: float) -> float:
    a, _, c, d, e, f, g = ICE if T < TRIPLE_POINT else WATER
    return -a / T**2 + c + T * (2 * d + T * (3 * e + 4 * T * f)) + g / T


def _humidity_ratio(vapour_pressure: float, p: float) -> float:
    """Equation 20."""
    if not vapour_pressure < p:
        raise _refused(
            f"water would boil: its vapour pressure {vapour_pressure / 1e2:.1f} hPa reaches {p / 1e2:.1f} hPa"
        )
    return MASS_RATIO * vapour_pressure / (p - vapour_pressure)


def _state(T: float, p: float, W: float, saturated: float) -> MoistAir:
    vapour = p * W / (MASS_RATIO + W)
    if not vapour <= saturated * (1 + 1e-7):
        raise _refused(f"a humidity ratio of {1e3 * W:.2f} g/kg at {celsius(T)} is above saturation")
    return MoistAir(
        T=T,
        p=p,
        W=W,
        h=CP_AIR * (T - 273.15) + W * (LATENT + CP_VAPOUR * (T - 273.15)),
        density=p / (GAS_CONSTANT * T * (1 + W / MASS_RATIO)),
        cp=CP_AIR + CP_VAPOUR * W,
        relative_humidity=min(1.0, vapour / saturated),
    )


def _from_wet_bulb(T: float, wet_bulb: float, p: float) -> float:
    """Humidity ratio from the wet bulb: equation 33 above the triple point, 35 (iced wick) below."""
    Ws = _humidity_ratio(saturation_pressure(wet_bulb), p)
    t, w = T - 273.15, wet_bulb - 273.15
    if wet_bulb >= TRIPLE_POINT:
        return ((2501.0 - 2.326 * w) * Ws - 1.006 * (t - w)) / (2501.0 + 1.86 * t - 4.186 * w)
    return ((2830.0 - 0.24 * w) * Ws - 1.006 * (t - w)) / (2830.0 + 1.86 * t - 2.1 * w)


def _wet_bulb(T: float, W: float, p: float) -> float:
    """The wet bulb that gives humidity ratio `W`.

    The equations of a wet and an iced wick overlap by some tenths of a kelvin around 0 °C; the wet wick goes first.
    """
    low = dew_point(p * W / (MASS_RATIO + W))
    if low >= T:
        return T
    # below water's boiling point at this pressure, so that saturated air exists
    high = min(T, dew_point(p * (1 - 1e-6)))
    ends = [(max(low, COLDEST), min(high, TRIPLE_POINT - 1e-9))]
    if high > TRIPLE_POINT:
        ends.insert(0, (max(low, TRIPLE_POINT), high))
    for bottom, top in ends:
        found = _root(lambda t: _from_wet_bulb(T, t, p) - W, bottom, top) if bottom < top else None
        if found is not None:
            return found
    raise _refused(f"no wet bulb above {celsius(COLDEST)} for a humidity ratio of {1e3 * W:.4g} g/kg at {celsius(T)}")


def _root(f: Callable[[float], float], low: float, high: float) -> float | None:
    """Root of a rising function by the Illinois variant of false position; None where there is none."""
    f_low, f_high = f(low), f(high)
    if f_low > 0 or f_high < 0:
        return low if 0 < f_low < ROUNDING else high if -ROUNDING < f_high < 0 else None
    if f_low == 0 or f_high == 0:
        return low if f_low == 0 else high
    side = 0
    for _ in range(200):
        x = (f_high * low - f_low * high) / (f_high - f_low)
        value = f(x)
        if value == 0 or high - low < 1e-9 or abs(value) < 1e-15 * (abs(f_low) + abs(f_high)):
            return x
        if value > 0:
            high, f_high = x, value
            f_low = f_low / 2 if side > 0 else f_low
            side = 1
        else:
            low, f_low = x, value
            f_high = f_high / 2 if side < 0 else f_high
            side = -1
    return (low + high) / 2


def _refused(message: str) -> PropertyRangeError:
    return PropertyRangeError("moist air", message)
