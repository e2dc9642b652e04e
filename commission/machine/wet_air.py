"""Air coils that may be wet or frosted: total heat, leaving air, condensate. SI units.

Braun, Klein & Mitchell, "Effectiveness models for cooling towers and cooling coils", ASHRAE Transactions 95 (2) 1989,
164-174: a wet coil is an exchanger driven by the enthalpy of moist air against that of saturated air at the refrigerant
temperature; the heat of a coil is the greater of the all-dry and the all-wet answer, which leaves out at most a few
per cent where a coil is partly wet. Lewis number one. The refrigerant evaporates, so that the ratio of capacity rates
is zero.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from commission.errors import NotCalculatedError
from commission.machine.streams import Stream
from commission.properties import MoistAir, saturated_air, saturated_air_at_enthalpy
from commission.properties.air_rows import Array, saturated_air_rows
from commission.properties.psychrometrics import COLDEST, HOTTEST

LATENT = 2.501e6
"""Latent heat of water at 0 °C in J/kg (ASHRAE Handbook Fundamentals 2017, ch. 1, eq. 30)."""
FUSION = 3.336e5
"""Latent heat of fusion of ice at 0 °C in J/kg (same chapter)."""
FREEZING, FROST_SPAN = 273.15, 2.0
"""Below freezing the condensate is ice; it sets in over this span of refrigerant temperature, so that nothing jumps."""


@dataclass(frozen=True, slots=True)
class LeavingAir:
    """Air after the coil: temperature in K, humidity ratio, sensible share of the heat, condensate or frost in kg/s."""

    temperature: float
    humidity_ratio: float
    sensible_share: float
    condensate: float


def coil_heat(stream: Stream, refrigerant: float, conductance: float, air_share: float) -> float:
    """Heat in W that air gives to a coil with refrigerant at `refrigerant` (K).

    `conductance` in W/K is that of the dry coil; `air_share` (0-1) is the air side's part of its resistance.
    """
    dry = stream.capacity_rate * -math.expm1(-conductance / stream.capacity_rate) * (stream.temperature - refrigerant)
    if stream.air is None or refrigerant >= stream.temperature:
        return dry
    return max(dry, _wet_heat(stream, refrigerant, conductance, air_share))


def _ice(refrigerant: float) -> float:
    """Share of the condensate that freezes on the coil, smooth from 0 to 1."""
    x = min(max((FREEZING - refrigerant) / FROST_SPAN, 0.0), 1.0)
    return x * x * (3 - 2 * x)


def _wet_heat(stream: Stream, refrigerant: float, conductance: float, air_share: float) -> float:
    """Heat of an all-wet coil (Braun et al. eq. 10, 16 and 24 with an evaporating refrigerant)."""
    air = stream.air
    assert air is not None
    fusion = FUSION * _ice(refrigerant)
    cold = saturated_air(refrigerant, air.p)
    surface = refrigerant + (1 - air_share) * (stream.temperature - refrigerant)
    warm = saturated_air(surface, air.p)
    slope = (warm.h - cold.h + fusion * (warm.W - cold.W)) / max(surface - refrigerant, 1e-9)
    outer = conductance / air_share
    inner = conductance / (1 - air_share) if air_share < 1 else math.inf
    transfer = outer / air.cp / (1 + slope * outer / (air.cp * inner))
    drive = air.h - cold.h + fusion * (air.W - cold.W)
    return stream.mass_flow * -math.expm1(-transfer / stream.mass_flow) * drive


def coil_heats(streams: Sequence[Stream], refrigerant: Array, conductance: Array, air_share: float) -> Array:
    """`coil_heat` of many air streams: the same equations for arrays.

    `refrigerant` in K has the shape (any, streams, any), and so has the dry `conductance` in W/K, or one that spreads.
    """
    airs = [s.air for s in streams]
    assert all(a is not None for a in airs)
    p, h, W, cp = (np.array([getattr(a, name) for a in airs])[:, None] for name in ("p", "h", "W", "cp"))
    warm, rate, flow = (
        np.array([getattr(s, name) for s in streams])[:, None] for name in ("temperature", "capacity_rate", "mass_flow")
    )
    dry = rate * -np.expm1(-conductance / rate) * (warm - refrigerant)
    x = np.clip((FREEZING - refrigerant) / FROST_SPAN, 0.0, 1.0)
    fusion = FUSION * x * x * (3 - 2 * x)
    cold_W, cold_h = saturated_air_rows(np.minimum(refrigerant, warm), p)
    surface = refrigerant + (1 - air_share) * (warm - refrigerant)
    warm_W, warm_h = saturated_air_rows(np.minimum(surface, warm), p)
    slope = (warm_h - cold_h + fusion * (warm_W - cold_W)) / np.maximum(surface - refrigerant, 1e-9)
    outer = conductance / air_share
    resistance = 1 / outer + slope / cp * (1 - air_share) / conductance
    transfer = 1 / (cp * resistance)
    wet = flow * -np.expm1(-transfer / flow) * (h - cold_h + fusion * (W - cold_W))
    return np.asarray(np.where(refrigerant >= warm, dry, np.maximum(dry, wet)))


def leaving_air(stream: Stream, heat: float, refrigerant: float, conductance: float, air_share: float) -> LeavingAir:
    """Air that gave `heat` (W) to the coil of `coil_heat`.

    The air moves on a straight line towards saturated air at one effective surface temperature (Braun et al., eq. 25 to
    27).

    Raises:
        NotCalculatedError: the coil would have to be colder than any moist air is known.
    """
    air = stream.air
    assert air is not None
    dry = stream.temperature - heat / stream.capacity_rate
    bypass = math.exp(-conductance / air_share / stream.capacity_rate)
    if stream.temperature - heat / stream.capacity_rate / (1 - bypass) >= air.dew_point:
        return LeavingAir(dry, air.W, 1.0, 0.0)
    fusion = FUSION * _ice(refrigerant)
    wanted = air.h + fusion * air.W - heat / stream.mass_flow / (1 - bypass)
    surface = _surface(wanted, air.p, fusion, air.dew_point)
    W = surface.W + (air.W - surface.W) * bypass
    condensate = stream.mass_flow * (air.W - W)
    sensible = 1 - condensate * (LATENT + fusion) / heat
    return LeavingAir(surface.T + (stream.temperature - surface.T) * bypass, W, sensible, condensate)


def _surface(wanted: float, p: float, fusion: float, start: float) -> MoistAir:
    """Saturated air at `p` (Pa) whose enthalpy, with the heat of `fusion` (J/kg) of its water, is `wanted` (J/kg).

    Newton's method with the slope of the saturation pressure of one hundredth of a kelvin; enthalpy rises with
    temperature and ever faster, so that it ends. Where it would leave the range of moist air a bracket is halved.

    Raises:
        NotCalculatedError: no saturated air has so little.
    """
    T = start
    for _ in range(30):
        if not COLDEST < T - 0.01 < T < HOTTEST:
            break
        air, below = saturated_air(T, p), saturated_air(T - 0.01, p)
        miss = wanted - air.h - fusion * air.W
        step = 0.01 * miss / (air.h - below.h + fusion * (air.W - below.W))
        T += step
        if abs(step) < 1e-9:
            return saturated_air(T, p)
    low, high = COLDEST, saturated_air_at_enthalpy(max(wanted, 0.0) + 1e3, p).T
    T = _root(lambda t: _potential(t, p, fusion) - wanted, low, high)
    return saturated_air(T, p)


def _potential(T: float, p: float, fusion: float) -> float:
    air = saturated_air(T, p)
    return air.h + fusion * air.W


def coil_conductance(heat: float, refrigerant: float, stream: Stream, air_share: float) -> float:
    """Dry conductance in W/K of the coil that takes `heat` (W): the inverse of `coil_heat`.

    A coil never takes less than when it is dry, so that the conductance of a dry one is the most that is needed.

    Raises:
        NotCalculatedError: more heat than the air can give at that difference, whatever the conductance.
    """
    greatest = coil_heat(stream, refrigerant, 1e4 * stream.capacity_rate, air_share)
    if not 0 < heat < greatest:
        raise NotCalculatedError(
            f"{heat / 1e3:.2f} kW cannot be transferred at {stream.temperature - refrigerant:.1f} K inlet difference: "
            f"the air flow would carry {greatest / 1e3:.2f} kW at most"
        )
    dry = heat / (stream.capacity_rate * (stream.temperature - refrigerant))
    most = -math.log1p(-dry) if dry < 1 - 1e-9 else 1e4

    def gap(x: float) -> float:
        return coil_heat(stream, refrigerant, math.exp(x), air_share) - heat

    high = math.log(most * stream.capacity_rate) + 1e-9  # rounding of a dry coil only
    low = high - 1.0
    while gap(low) > 0:
        low -= 1.0
    return math.exp(_root(gap, low, high))


def _root(f: Callable[[float], float], low: float, high: float) -> float:
    """Root of a rising function between two ends by the Illinois rule (Dowell & Jarratt 1971)."""
    f_low, f_high = f(low), f(high)
    if f_low > 0 or f_high < 0:
        raise NotCalculatedError("the coil would have to be colder than any moist air is known")
    x = low
    for _ in range(100):
        x_new = (low * f_high - high * f_low) / (f_high - f_low) if f_high != f_low else 0.5 * (low + high)
        if abs(x_new - x) < 1e-11 * max(1.0, abs(x)):
            return x_new
        x = x_new
        y = f(x)
        if y < 0:
            low, f_low, f_high = x, y, 0.5 * f_high
        elif y > 0:
            high, f_high, f_low = x, y, 0.5 * f_low
        else:
            return x
    return x
