"""Random plausible refrigerating cycles, and the laws that every state of one must keep."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from commission.properties import PropertyRangeError, Refrigerant, State


@dataclass(frozen=True)
class CyclePoint:
    """Dew temperatures (K), superheat and subcooling (K) of one plausible cycle."""

    evaporating: float
    condensing: float
    superheat: float
    subcooling: float


def cycles(refrigerant: Refrigerant, count: int, seed: int) -> list[CyclePoint]:
    """`count` seeded cycles: evaporating from -55 °C (or 0.6 Tc), condensing up to 0.97 Tc or 80 °C above."""
    rng = np.random.default_rng(seed)
    low = max(refrigerant.T_low + 1.0, min(218.15, 0.75 * refrigerant.T_critical), 0.58 * refrigerant.T_critical)
    low = max(low, refrigerant.dew_temperature(refrigerant.p_bubble_low) + 0.1)  # wet states need both lines
    top = 0.97 * refrigerant.T_critical
    points = []
    for _ in range(count):
        evaporating = float(rng.uniform(low, top - 10))
        condensing = float(rng.uniform(evaporating + 5, min(top, evaporating + 80)))
        glide = condensing - refrigerant.bubble_temperature(refrigerant.dew(condensing).p)
        room = condensing - glide - refrigerant.T_low - 1
        points.append(
            CyclePoint(evaporating, condensing, float(rng.uniform(0, 30)), min(float(rng.uniform(0, 15)), room))
        )
    return points


def check_cycle(r: Refrigerant, point: CyclePoint) -> None:
    """Every state of the cycle exists and keeps the laws; raises AssertionError or the room's own error."""
    low, high = r.dew(point.evaporating), r.dew(point.condensing)
    assert high.p > low.p > 0
    suction = r.vapour(low.T + point.superheat, low.p)
    assert suction.rho <= low.rho * (1 + 1e-9)
    assert suction.h >= low.h - 1e-3
    assert suction.s >= low.s - 1e-6
    bubble = r.bubble(r.bubble_temperature(high.p))
    assert bubble.T <= high.T + 1e-7
    liquid = r.liquid(bubble.T - point.subcooling, high.p)
    assert liquid.rho >= bubble.rho * (1 - 1e-9)
    assert liquid.h <= bubble.h + 1e-3
    inlet = r.throttled(low.p, liquid.h)
    _check_throttled(r, inlet, liquid, low.T)
    end = _isentropic(r, suction, high.p)
    if end is None:
        return
    work = end.h - suction.h
    assert work > 0
    # the work of a reversible compression is the integral of volume over pressure: between its bounds
    assert (high.p - low.p) / end.rho < work < (high.p - low.p) / suction.rho
    again = r.throttled(high.p, end.h)
    assert math.isclose(again.T, end.T, abs_tol=1e-5)
    assert math.isclose(again.s, end.s, abs_tol=1e-4)
    if end.quality is None:
        _check_vapour(r, end)
    cooling = suction.h - liquid.h
    assert cooling / work < suction.T / max(1e-9, liquid.T - suction.T) or liquid.T <= suction.T


def _check_throttled(r: Refrigerant, inlet: State, liquid: State, T_dew: float) -> None:
    assert math.isclose(inlet.h, liquid.h, abs_tol=1e-3)
    assert inlet.s >= liquid.s - 1e-4  # a throttle makes entropy
    assert T_dew + 1e-6 >= inlet.T
    if inlet.quality is None:
        return
    assert r.bubble_temperature(inlet.p) - 1e-6 <= inlet.T
    assert 0 <= inlet.quality <= 1
    mean = r.mean_evaporating_temperature(inlet.p, inlet.h)
    assert inlet.T - 1e-6 <= mean <= T_dew + 1e-6


def _isentropic(r: Refrigerant, suction: State, p: float) -> State | None:
    """The end of compression; None where it is rightly refused as hotter than the equation holds."""
    try:
        end = r.isentropic_end(suction, p)
    except PropertyRangeError:
        assert r.vapour(r.T_max, p).s < suction.s  # the end does lie above the limit
        return None
    assert math.isclose(end.s, suction.s, abs_tol=1e-5)
    assert math.isclose(end.p, p, rel_tol=1e-9)
    assert end.T > suction.T or end.quality is not None
    if end.quality is not None:
        assert end.warnings
    return end


def _check_vapour(r: Refrigerant, state: State) -> None:
    same = r.vapour(state.T, state.p)
    assert math.isclose(same.h, state.h, abs_tol=1e-2)
    assert math.isclose(same.rho, state.rho, rel_tol=1e-7)
    slopes = r.slopes(state)
    assert slopes.cp > 0
    assert slopes.drho_dp > 0
    other = r.vapour_from_enthalpy(state.p, state.h)
    assert math.isclose(other.T, state.T, abs_tol=1e-6)
