"""The high side of a transcritical carbon-dioxide circuit: its pressure, and the gas cooler. SI units."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

from commission.machine.streams import Stream
from commission.properties import Refrigerant, State

NODES = 15
"""Segments of the gas cooler: the specific heat of the gas changes several times over along the way."""
SHORT_OF_CRITICAL = 4.0
"""Kelvin below the critical point from which the saturation line is continued with its ln p - 1/T slope."""
WIDTH = 2e5
"""Width in Pa of the change from subcritical to best pressure: a hard switch jumps 2 bar and 0.05 in COP."""
CROSSING = 0.2
"""Kelvin over which a temperature crossing in the gas cooler becomes impossible."""

PressureBy = Literal["fixed set point", "follows the gas-cooler outlet"]


@dataclass(frozen=True, slots=True)
class GasCoolerPressure:
    """How the high pressure is set: to a fixed `set_point` (Pa), or by the gas-cooler outlet temperature.

    The control that follows the outlet keeps to the pressure of best COP, times `factor`, between `lowest` and
    `highest` (Pa); below the critical point the circuit condenses with `subcooling` (K). `hot_water` (Pa) is the least
    pressure of a water heater whose pump keeps its flow.
    """

    by: PressureBy
    set_point: float | None = None
    factor: float = 1.0
    lowest: float = 0.0
    highest: float = 1.4e7
    hot_water: float = 0.0
    subcooling: float = 2.0


def liao_best_pressure(outlet: float, evaporating: float) -> float:
    """Pressure of best COP in Pa after Liao, Zhao & Jakobsen, Applied Thermal Engineering 20 (2000) 831-841.

    `outlet` of the gas cooler and `evaporating` in K; made for 30 to 60 °C and -10 to 20 °C (coefficients from memory).
    """
    t, te = outlet - 273.15, evaporating - 273.15
    return 1e5 * ((2.778 - 0.0157 * te) * t + 0.381 * te - 9.34)


def subcritical_pressure(refrigerant: Refrigerant, temperature: float) -> float:
    """Saturation pressure in Pa, continued above the critical point along its own slope of ln p over 1/T."""
    top = refrigerant.T_critical - SHORT_OF_CRITICAL
    if temperature <= top:
        return refrigerant.dew(temperature).p
    p, p_below = refrigerant.dew(top).p, refrigerant.dew(top - 0.5).p
    slope = math.log(p / p_below) / (1 / (top - 0.5) - 1 / top)
    return p * math.exp(slope * (1 / top - 1 / temperature))


def lifting_best_pressure(evaporating: float, inlet: float, outlet: float) -> float:
    """Pressure of best COP in Pa where water is heated in one pass from `inlet` to `outlet`, at `evaporating` (K).

    Here the water's lift sets it, not the gas-cooler outlet alone: below it the temperatures meet inside the exchanger.
    Plane through 135 best pressures calculated with this model (water from 8 to 35 °C to 50 to 70 °C, air -12 to 26 °C,
    gas coolers of 2 to 7 K approach); it misses them by 1.6 bar (standard deviation) for one gas cooler, and lies 4 bar
    low for the smallest and high for the largest.
    """
    te, cold, hot = evaporating - 273.15, inlet - 273.15, outlet - 273.15
    return 1e5 * (32.0 + 0.46 * te + 0.44 * cold + 0.94 * hot)


def high_pressure(
    control: GasCoolerPressure, refrigerant: Refrigerant, outlet: float, evaporating: float, sink: Stream | None = None
) -> float:
    """Pressure in Pa at the gas-cooler outlet temperature (K): the smooth greater of condensing and controlled one.

    `sink` counts where it is water that is heated in one pass.
    """
    condensing = subcritical_pressure(refrigerant, outlet + control.subcooling)
    if control.by == "fixed set point" and control.set_point is not None:
        wanted = control.set_point
    elif sink is not None and sink.outlet_wanted is not None:
        wanted = control.factor * lifting_best_pressure(evaporating, sink.temperature, sink.outlet_wanted)
    else:
        wanted = max(control.factor * liao_best_pressure(outlet, evaporating), control.hot_water)
    wanted = min(max(wanted, control.lowest), control.highest)
    return 0.5 * (condensing + wanted + math.hypot(condensing - wanted, WIDTH))


def outlet_state(refrigerant: Refrigerant, temperature: float, pressure: float) -> State:
    """State at the gas-cooler outlet."""
    if pressure > refrigerant.p_critical:
        return refrigerant.supercritical(temperature, pressure)
    return refrigerant.liquid(temperature, pressure)


def needed_conductance(refrigerant: Refrigerant, flow: float, inlet: float, outlet: State, sink: Stream) -> float:
    """Conductance in W/K that brings gas of enthalpy `inlet` (J/kg) to `outlet` against the medium, in counterflow.

    Segments of equal heat along the isobar. A crossing of temperatures is bounded, not refused: the conductance grows
    without limit, so that a solver turns back.
    """
    heat = flow * (inlet - outlet.h)
    water = sink.inlet(heat)
    last = outlet.T - water
    total = _barrier(last)
    part = (inlet - outlet.h) / NODES
    gas = refrigerant.isobar_temperatures(outlet, [outlet.h + n * part for n in range(1, NODES + 1)])
    for n in range(1, NODES + 1):
        difference = gas[n - 1] - water - n / NODES * heat / sink.capacity_rate
        total += 1 / _log_mean(_open(last), _open(difference)) + _barrier(difference)
        last = difference
    return total * heat / NODES


def _open(difference: float) -> float:
    """A temperature difference kept above zero, smoothly."""
    return 0.5 * (difference + math.hypot(difference, CROSSING))


def _barrier(difference: float) -> float:
    """What a difference below `CROSSING` adds to the inverse of the mean difference, in 1/K: without bound beyond zero,
    where the logarithmic mean alone would let a small crossing pass."""
    return max(CROSSING - difference, 0.0) ** 2 / CROSSING**3


def _log_mean(a: float, b: float) -> float:
    if abs(a - b) < 1e-6 * a:
        return 0.5 * (a + b)
    return (a - b) / math.log(a / b)


def best_pressure(cop: Callable[[float], float], low: float, high: float) -> float:
    """Pressure in Pa of the highest `cop(pressure)` between two ends, by golden section to 0.01 bar."""
    golden = (math.sqrt(5) - 1) / 2
    a, b = low, high
    c, d = b - golden * (b - a), a + golden * (b - a)
    f_c, f_d = cop(c), cop(d)
    while b - a > 1e3:
        if f_c > f_d:
            b, d, f_d = d, c, f_c
            c = b - golden * (b - a)
            f_c = cop(c)
        else:
            a, c, f_c = c, d, f_d
            d = a + golden * (b - a)
            f_d = cop(d)
    return 0.5 * (a + b)
