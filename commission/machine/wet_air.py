"""What air does at a cold coil: sensible where its surface is above the dew point, wet where it is below. SI units."""

from __future__ import annotations

from dataclasses import dataclass

from commission.machine.streams import Stream
from commission.properties import MoistAir, moist_air


@dataclass(frozen=True, slots=True)
class LeavingAir:
    """Air after the coil: temperature in K, humidity ratio, sensible share of the heat, condensate in kg/s."""

    temperature: float
    humidity_ratio: float
    sensible_share: float
    condensate: float


LATENT = 2.501e6
"""Latent heat of water at 0 °C in J/kg (ASHRAE Handbook Fundamentals, ch. 1, eq. 30)."""


def leaving_air(stream: Stream, heat: float, refrigerant_temperature: float) -> LeavingAir:
    """Air that gave `heat` (W) to a coil evaporating at `refrigerant_temperature` (K).

    Where the coil is dry all heat is sensible. Where its surface lies below the dew point of the air, the air moves on
    a straight line towards saturated air at one effective surface temperature (apparatus dew point; ASHRAE Handbook
    HVAC Systems and Equipment, chapter on air-cooling coils), taken between refrigerant and leaving air in the ratio
    of 1 to 1: the surface resistance is of the order of the inner one for a coil with condensate.
    """
    assert stream.air is not None
    air = stream.air
    per_air = heat / stream.mass_flow
    dry = stream.temperature - heat / stream.capacity_rate
    surface = 0.5 * (refrigerant_temperature + dry)
    if surface >= air.dew_point:
        return LeavingAir(dry, air.W, 1.0, 0.0)
    temperature = dry
    for _ in range(40):
        surface = 0.5 * (refrigerant_temperature + temperature)
        saturated = moist_air(min(surface, air.T), air.p, relative_humidity=1.0)
        way = min(per_air / (air.h - saturated.h), 1.0)
        new = _on_line(air, saturated, way)
        if abs(new - temperature) < 1e-9:
            break
        temperature = new
    W = air.W + way * (saturated.W - air.W)
    condensate = stream.mass_flow * max(air.W - W, 0.0)
    return LeavingAir(temperature, W, 1.0 - condensate * LATENT / heat, condensate)


def _on_line(air: MoistAir, saturated: MoistAir, way: float) -> float:
    """Temperature of air mixed of `air` and `saturated`, by its enthalpy and humidity ratio (cp of ASHRAE, eq. 30)."""
    h = air.h + way * (saturated.h - air.h)
    W = air.W + way * (saturated.W - air.W)
    zero = air.h - (1006.0 * (air.T - 273.15) + air.W * (LATENT + 1860.0 * (air.T - 273.15)))
    return (h - zero - W * LATENT) / (1006.0 + 1860.0 * W) + 273.15
