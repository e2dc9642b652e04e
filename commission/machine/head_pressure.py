"""Keeping the condensing pressure up in cold weather: four ways, each with its own share of flow, surface and power.

Each way has one manipulated share s between its least value and 1. At s = 1 the condenser works freely, so heat,
condensing temperature and fan power are continuous where the control takes over.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

from commission.machine.exchanger import Exchanger
from commission.machine.streams import Stream

By = Literal["fan speed", "fan cycling", "condenser flooding", "water valve"]


@dataclass(frozen=True, slots=True)
class HeadPressure:
    """Holds the condensing temperature (dew, K) at `hold`.

    `least_share` is the lowest fan speed, running share, free condenser surface or valve opening, as a share of full;
    `power_exponent` is the exponent of fan power over speed (3 by the fan laws).
    """

    by: By
    hold: float
    least_share: float = 0.1
    power_exponent: float = 3.0


def heat_per_kelvin(by: By | None, share: float, condenser: Exchanger, sink: Stream) -> float:
    """Heat to the sink in W for each kelvin of inlet difference at `share` of full."""
    if by is None or share == 1.0:
        return condenser.heat_per_kelvin(sink)
    if by == "fan cycling":
        return share * condenser.heat_per_kelvin(sink)
    if by == "condenser flooding":
        return condenser.heat_per_kelvin(sink, surface_share=share)
    return condenser.heat_per_kelvin(sink, flow_share=share)


def share_for(by: By, wanted: float, condenser: Exchanger, sink: Stream, least: float) -> float | None:
    """Share at which the condenser gives `wanted` W/K; below 1 and above `least`, or None where full is too little
    by more than the tolerance of the balance (1e-6).

    Returns `least` where even the least share gives more than is wanted. The heat rises with the share, so that a
    bisection in the logarithm of the share always ends.
    """
    greatest = heat_per_kelvin(by, 1.0, condenser, sink)
    if greatest <= wanted:
        return 1.0 if wanted < greatest * (1 + 1e-6) else None
    if heat_per_kelvin(by, least, condenser, sink) >= wanted:
        return least
    low, high = math.log(least), 0.0
    while high - low > 1e-13:
        middle = 0.5 * (low + high)
        if heat_per_kelvin(by, math.exp(middle), condenser, sink) < wanted:
            low = middle
        else:
            high = middle
        if middle in (low, high) and high - low < 1e-12:
            break
    return math.exp(0.5 * (low + high))


def fan_share(control: HeadPressure | None, share: float) -> float:
    """Fan power as a share of full power."""
    if control is None or control.by in ("condenser flooding", "water valve"):
        return 1.0
    return float(share**control.power_exponent) if control.by == "fan speed" else share


def flow_share(control: HeadPressure | None, share: float) -> float:
    """Mean flow of the medium as a share of full flow."""
    return share if control is not None and control.by != "condenser flooding" else 1.0
