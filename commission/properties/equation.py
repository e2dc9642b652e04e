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
LARGE_STEP = 0.2  # relative, in density and temperature: the longest that Newton may take
MAX_STEPS = 50
Values = tuple[float, float, float, float, float, float]  # p, h, s, dp/drho, dp/dT, cv


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
        p, h, s, p_rho, p_t, cv = self._values(rho, T)
        return State(T, p, h, s, rho, None, (), p_rho, p_t, cv)

    def _values(self, rho: float, T: float) -> Values:
        tools = self._local.tools
        tools.calls += 1
        try:
            tools.update(tools.inputs, rho, T)
        except ValueError:
            raise self._no_number(rho, T) from None
        return self._read(tools, tools.p(), tools.slope(*tools.by_rho))

    def _read(self, tools: _Tools, p: float, p_rho: float) -> Values:
        """All values where the equation has just been evaluated, and the pressure and its slope been read."""
        h, s = tools.h() + self.data.h_offset, tools.s() + self.data.s_offset
        return p, h, s, p_rho, tools.slope(*tools.by_T), tools.cv()

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
                return _closed(rho, T, self._read(tools, here, p_rho), step, 0.0)
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
        entropy = name == "s"
        T, here, h, s, rho, _, _, p_rho, p_t, cv = start
        evaluated = False
        for _ in range(MAX_STEPS):
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
            size = max(abs(d_rho) / rho, abs(d_T) / T)
            if evaluated and size < SMALL_STEP:
                return _closed(rho, T, (here, h, s, p_rho, p_t, cv), d_rho, d_T)
            if size > LARGE_STEP:
                d_rho, d_T = d_rho * LARGE_STEP / size, d_T * LARGE_STEP / size
            rho, T = rho + d_rho, T + d_T
            here, h, s, p_rho, p_t, cv = self._values(rho, T)
            evaluated = True
        raise self._lost(T, p)

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
            values = self._values(rho, T)
            here, p_rho = values[0], values[3]
            if here > p:
                high = min(high, rho)
            else:
                low = max(low, rho)
            step = (p - here) / p_rho if p_rho > 0 else math.inf
            if abs(step) < SMALL_STEP * rho:
                return _closed(rho, T, values, step, 0.0)
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


def _closed(rho: float, T: float, values: Values, d_rho: float, d_T: float) -> State:
    """The state after a last small step from where the equation gave `values`, these to first order."""
    p, h, s, p_rho, p_t, cv = values
    by_volume = p_t / rho
    p += p_rho * d_rho + p_t * d_T
    h += (p_rho - T * by_volume) / rho * d_rho + (cv + by_volume) * d_T
    s += cv / T * d_T - by_volume / rho * d_rho
    return State(T + d_T, p, h, s, rho + d_rho, None, (), p_rho, p_t, cv)
