"""The equation of state behind one refrigerant: calls at (density, temperature) and Newton iterations on them.

Density and temperature are the natural variables of a Helmholtz equation, so such a call needs no iteration, cannot
fail, and gives all first derivatives for a few microseconds more (Span, Multiparameter Equations of State, 2000,
chapter 3).
"""

from __future__ import annotations

import math
import threading
from typing import Any

from commission.properties.coolprop import load
from commission.properties.errors import PropertyRangeError, bar, celsius
from commission.properties.lines import FluidData
from commission.properties.saturation import GAS_CONSTANT
from commission.properties.states import State

SMALL_STEP = 1e-5  # a Newton step this small is closed by the first-order correction: what is left is 1e-10
MAX_STEPS = 50


class _Tools:
    """An equation-of-state object with what is called on it, and how often it has been evaluated."""

    __slots__ = ("by_T", "by_rho", "calls", "cv", "h", "inputs", "p", "s", "slope", "update")

    def __init__(self, data: FluidData) -> None:
        cp: Any = load()
        state: Any = cp.AbstractState("HEOS", "&".join(data.fluids))
        if len(data.fluids) > 1:
            state.set_mole_fractions(list(data.mole_fractions))
        state.specify_phase(cp.iphase_gas)  # any single phase: p, h, s follow from density alone
        self.inputs = cp.DmassT_INPUTS
        self.by_rho = (cp.iP, cp.iDmass, cp.iT)
        self.by_T = (cp.iP, cp.iT, cp.iDmass)
        self.update, self.slope = state.update, state.first_partial_deriv
        self.p, self.h, self.s, self.cv = state.p, state.hmass, state.smass, state.cvmass
        self.calls = 0


class _PerThread(threading.local):
    """One equation-of-state object for each thread, since a shared one gives silently wrong values."""

    def __init__(self, data: FluidData) -> None:
        self.tools = _Tools(data)


class Equation:
    """The equation of state of one refrigerant, with the enthalpy and entropy reference of its data."""

    def __init__(self, data: FluidData) -> None:
        self.data = data
        self._local = _PerThread(data)

    @property
    def calls(self) -> int:
        """How often this thread has evaluated the equation of state."""
        return self._local.tools.calls

    def at(self, rho: float, T: float) -> State:
        """Everything at density `rho` (kg/m3) and temperature `T` (K); no range is checked here.

        Raises:
            PropertyRangeError: the equation gives no number there.
        """
        tools = self._local.tools
        tools.calls += 1
        try:
            tools.update(tools.inputs, rho, T)
        except ValueError:
            raise self._no_number(rho, T) from None
        return self._read(tools, rho, T, tools.p(), tools.slope(*tools.by_rho))

    def _read(self, tools: _Tools, rho: float, T: float, p: float, p_rho: float) -> State:
        """What the equation gives where it has just been evaluated, with the pressure and slope read there."""
        h, s = tools.h() + self.data.h_offset, tools.s() + self.data.s_offset
        return State(T, p, h, s, rho, None, (), p_rho, tools.slope(*tools.by_T), tools.cv())

    def density(self, T: float, p: float, start: float) -> State:
        """The single-phase point at (T, p) reached from density `start`, which must lie on the right side.

        Raises:
            PropertyRangeError: no mechanically stable density (dp/drho > 0) found.
        """
        rho, tools = start, self._local.tools
        update, inputs, pressure, slope, by_rho = tools.update, tools.inputs, tools.p, tools.slope, tools.by_rho
        for _ in range(MAX_STEPS):
            tools.calls += 1
            try:
                update(inputs, rho, T)
            except ValueError:
                raise self._no_number(rho, T) from None
            here, p_rho = pressure(), slope(*by_rho)
            if not p_rho > 0:
                break
            step = (p - here) / p_rho
            if abs(step) < SMALL_STEP * rho:
                return _corrected(self._read(tools, rho, T, here, p_rho), step, 0.0)
            rho += max(-0.5 * rho, min(0.5 * rho, step))
        raise self._lost(T, p)

    def solve(self, p: float, name: str, value: float, start: State, *, alike: bool = False) -> State:
        """The single-phase state with pressure `p` and `name` ('h' or 's') equal to `value`, from one near it.

        The derivatives at `start` give the first step.

        `alike` allows states that are not stable by themselves, as next to the critical point the mean of two alike
        phases is; it is for pressures beyond the end of the dew line only.

        Raises:
            PropertyRangeError: no convergence to a mechanically stable state.
        """
        entropy, point = name == "s", start
        for _ in range(MAX_STEPS):
            T, here, h, s, rho, _, _, p_rho, p_t, cv = point
            if not (p_rho > 0 or alike) or not cv > 0:
                break
            lack, by_volume = p - here, p_t / rho
            if entropy:
                miss, by_rho, by_T = value - s, -by_volume / rho, cv / T
            else:
                miss, by_rho, by_T = value - h, (p_rho - T * by_volume) / rho, cv + by_volume
            determinant = p_rho * by_T - p_t * by_rho
            d_rho = (lack * by_T - p_t * miss) / determinant
            d_T = (p_rho * miss - lack * by_rho) / determinant
            size = max(abs(d_rho) / (0.4 * rho), abs(d_T) / (0.15 * T))
            if size < SMALL_STEP and point is not start:
                return _corrected(point, d_rho, d_T)
            share = 1.0 if size <= 1.0 else 1.0 / size
            point = self.at(rho + share * d_rho, T + share * d_T)
        raise self._lost(point.T, p)

    def dense(self, T: float, p: float, largest: float) -> State:
        """The point at (T, p) above the critical pressure, where pressure rises with density: Newton held in a bracket.

        `largest` is a density (kg/m3) that certainly has a pressure above `p` at `T`, or the densest state known.

        Raises:
            PropertyRangeError: `p` is not reached at any density known.
        """
        low, high = 0.0, largest
        ideal = p * self.data.molar_mass / (GAS_CONSTANT * T)
        rho = largest if self.data.T_critical >= T else min(ideal, 0.5 * largest)
        for _ in range(4 * MAX_STEPS):
            point = self.at(rho, T)
            if point.p > p:
                high = min(high, rho)
            else:
                low = max(low, rho)
            step = (p - point.p) / point.p_rho if point.p_rho > 0 else math.inf
            if abs(step) < SMALL_STEP * rho:
                return _corrected(point, step, 0.0)
            rho = rho + step if low < rho + step < high else (low + high) / 2
            if high - low < 1e-12 * largest:
                break
        raise self._lost(T, p)

    def _no_number(self, rho: float, T: float) -> PropertyRangeError:
        return PropertyRangeError(
            self.data.refrigerant, f"the equation of state gives no number at {rho:.6g} kg/m3 and {T:.6g} K"
        )

    def _lost(self, T: float, p: float) -> PropertyRangeError:
        return PropertyRangeError(
            self.data.refrigerant, f"no stable single-phase state found near {celsius(T)} and {bar(p)}"
        )


def _corrected(point: State, d_rho: float, d_T: float) -> State:
    """The state after a last small step, values to first order."""
    T, p, h, s, rho, _, _, p_rho, p_t, cv = point
    by_volume = p_t / rho
    return State(
        T + d_T,
        p + p_rho * d_rho + p_t * d_T,
        h + (p_rho - T * by_volume) / rho * d_rho + (cv + by_volume) * d_T,
        s + cv / T * d_T - by_volume / rho * d_rho,
        rho + d_rho,
        None,
        (),
        p_rho,
        p_t,
        cv,
    )
