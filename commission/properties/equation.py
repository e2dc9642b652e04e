"""The equation of state behind one refrigerant: calls at (density, temperature) and Newton iterations on them.

Density and temperature are the natural variables of a Helmholtz equation, so such a call needs no iteration, cannot
fail, and gives all first derivatives for a few microseconds more (Span, Multiparameter Equations of State, 2000,
chapter 3).
"""

from __future__ import annotations

import math
import threading
from dataclasses import dataclass
from typing import Any

from commission.properties.coolprop import load
from commission.properties.errors import PropertyRangeError, bar, celsius
from commission.properties.lines import FluidData
from commission.properties.saturation import GAS_CONSTANT

SMALL_STEP = 1e-5  # a Newton step this small is closed by the first-order correction: what is left is 1e-10
MAX_STEPS = 50


@dataclass(slots=True)
class Point:
    """Values and first derivatives at rho (kg/m3) and T (K), `_t` by temperature; Pa, J/kg, J/(kg K)."""

    rho: float
    T: float
    p: float
    h: float
    s: float
    p_rho: float
    p_t: float
    cv: float

    @property
    def h_rho(self) -> float:
        """dh/drho at constant temperature."""
        return (self.p_rho - self.T * self.p_t / self.rho) / self.rho

    @property
    def h_t(self) -> float:
        """dh/dT at constant density."""
        return self.cv + self.p_t / self.rho

    @property
    def s_rho(self) -> float:
        """ds/drho at constant temperature (a Maxwell relation)."""
        return -self.p_t / self.rho**2

    @property
    def s_t(self) -> float:
        """ds/dT at constant density."""
        return self.cv / self.T

    @property
    def cp(self) -> float:
        """Specific heat at constant pressure."""
        return self.cv + self.T * self.p_t**2 / (self.rho**2 * self.p_rho)


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

    def at(self, rho: float, T: float) -> Point:
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

    def _read(self, tools: _Tools, rho: float, T: float, p: float, p_rho: float) -> Point:
        """What the equation gives where it has just been evaluated, with the pressure and slope read there."""
        h, s = tools.h() + self.data.h_offset, tools.s() + self.data.s_offset
        return Point(rho, T, p, h, s, p_rho, tools.slope(*tools.by_T), tools.cv())

    def density(self, T: float, p: float, start: float) -> Point:
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

    def solve(self, p: float, name: str, value: float, rho: float, T: float, *, alike: bool = False) -> Point:
        """The single-phase point with pressure `p` and `name` ('h' or 's') equal to `value`, from (rho, T).

        `alike` allows states that are not stable by themselves, as next to the critical point the mean of two alike
        phases is; it is for pressures beyond the end of the dew line only.

        Raises:
            PropertyRangeError: no convergence to a mechanically stable state.
        """
        entropy = name == "s"
        for _ in range(MAX_STEPS):
            point = self.at(rho, T)
            p_rho, p_t = point.p_rho, point.p_t
            if not (p_rho > 0 or alike) or not point.cv > 0:
                break
            if entropy:
                miss, by_rho, by_T = value - point.s, point.s_rho, point.s_t
            else:
                miss, by_rho, by_T = value - point.h, point.h_rho, point.h_t
            lack, determinant = p - point.p, p_rho * by_T - p_t * by_rho
            d_rho = (lack * by_T - p_t * miss) / determinant
            d_T = (p_rho * miss - lack * by_rho) / determinant
            if abs(d_rho) < SMALL_STEP * rho and abs(d_T) < SMALL_STEP * T:
                return _corrected(point, d_rho, d_T)
            share = min(1.0, 0.4 * rho / max(abs(d_rho), 1e-300), 0.15 * T / max(abs(d_T), 1e-300))
            rho += share * d_rho
            T += share * d_T
        raise self._lost(T, p)

    def dense(self, T: float, p: float, largest: float) -> Point:
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


def _corrected(point: Point, d_rho: float, d_T: float) -> Point:
    """The point after a last small step, values to first order."""
    rho, T, p_rho, p_t, cv = point.rho, point.T, point.p_rho, point.p_t, point.cv
    by_volume = p_t / rho
    point.p += p_rho * d_rho + p_t * d_T
    point.h += (p_rho - T * by_volume) / rho * d_rho + (cv + by_volume) * d_T
    point.s += cv / T * d_T - by_volume / rho * d_rho
    point.rho = rho + d_rho
    point.T = T + d_T
    return point
