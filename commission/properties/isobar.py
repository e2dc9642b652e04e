"""Temperatures along one isobar, each state started from the one before: the way through a gas cooler.

Where every state is sought by itself, Newton starts from far away and needs three times the calls of the equation.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from commission.properties.equation import Equation
from commission.properties.errors import PropertyRangeError

if TYPE_CHECKING:
    from commission.properties.refrigerant import Refrigerant
    from commission.properties.states import State


def isobar_temperatures(
    refrigerant: Refrigerant, equation: Equation, start: State, enthalpies: Sequence[float]
) -> list[float]:
    """Temperatures (K) at the pressure of `start` and rising `enthalpies` (J/kg), from `start` (single phase) upwards.

    A predictor along the isobar, dh = cp dT and drho = -(dp/dT / dp/drho) dT, then Newton. Below the critical pressure
    the way leads through the wet region at one temperature.

    Raises:
        PropertyRangeError: a state outside the range of the equation, or a blend above the end of its dew line.
    """
    p = start.p
    wet = None if p > refrigerant.p_dew_high else (refrigerant.bubble_temperature(p), refrigerant.dew_temperature(p))
    if wet is not None:
        bubble, dew = refrigerant.bubble(wet[0]), refrigerant.dew(wet[1])
    point, found = equation.at(start.rho, start.T), []
    for h in enthalpies:
        if wet is not None and h >= bubble.h:
            if h <= dew.h:
                found.append(refrigerant.throttled(p, h).T)
                continue
            if point.h < dew.h:
                point = equation.at(dew.rho, dew.T)
        point = _next(refrigerant, equation, point, p, h, beyond=wet is None)
        found.append(point.T)
    if found and not found[-1] <= refrigerant.T_max:
        raise PropertyRangeError(
            refrigerant.name, f"{found[-1] - 273.15:.0f} °C is hotter than the equation of state reaches"
        )
    return found


def _next(refrigerant: Refrigerant, equation: Equation, point: State, p: float, h: float, beyond: bool) -> State:
    """The state at `p` with enthalpy `h`, from a neighbour; by itself where Newton loses its way near the critical."""
    step = (h - point.h) / point.cp
    rho = point.rho - step * point.p_t / point.p_rho
    if point.p_rho > 0 and rho > 0.3 * point.rho:
        try:
            return equation.solve(p, "h", h, equation.at(rho, point.T + step), alike=beyond)
        except PropertyRangeError:
            pass
    alone = refrigerant.throttled(p, h)
    return equation.at(alone.rho, alone.T)


def liquid_at_enthalpy(refrigerant: Refrigerant, p: float, h: float, T_bubble: float) -> State:
    """Liquid at `p` (Pa) with enthalpy `h` (J/kg) below its bubble point `T_bubble` (K), held in a bracket.

    For the neighbourhood of the critical point, where a Newton step in density and temperature leaves the liquid.

    Raises:
        PropertyRangeError: colder than the range of the equation.
    """
    low, high = refrigerant.T_low, T_bubble
    state = refrigerant.liquid(low, p)
    if h < state.h:
        raise PropertyRangeError(refrigerant.name, f"liquid colder than {low - 273.15:.0f} °C, where the equation ends")
    T = T_bubble - 1.0
    for _ in range(80):
        state = refrigerant.liquid(T, p)
        miss = h - state.h
        low, high = (T, high) if miss > 0 else (low, T)
        step = miss / refrigerant.slopes(state).cp
        if abs(step) < 1e-9 * T or high - low < 1e-10 * T:
            break
        T = T + step if low < T + step < high else 0.5 * (low + high)
    return state
