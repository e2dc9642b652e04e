"""States of a pure fluid at pressures beyond the end of its saturation lines: past the critical point.

The lines end at 0.9995 of the critical temperature. From there to the critical pressure (a third of a bar for carbon
dioxide) two phases still exist, so alike that the equation of state taken as one phase gives their mean to 0.02 K; a
state found so says it in a warning. Above the critical pressure there is one phase.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from commission.properties.equation import Equation
from commission.properties.errors import PropertyRangeError, bar, celsius
from commission.properties.states import SaturationState, State

if TYPE_CHECKING:
    from commission.properties.saturation import Saturation

PRESSURE_STEP = 0.4  # in ln p along an isentrope: the slope at one end still starts Newton well at the other


class Beyond:
    """States at pressures above the end of the dew line of `line`, by the equation of state `equation`."""

    def __init__(self, line: Saturation, equation: Equation) -> None:
        self._line = line
        self._equation = equation
        ends = line.dew(line.T_high).rho, line.bubble(line.T_high).rho
        self._dew_density = ends[0]
        self._middle = 0.5 * sum(ends)
        self._largest = 1.3 * line.bubble(line.T_low).rho  # denser than any liquid up to a thousand bar

    def need(self, p: float) -> None:
        """Refuse a blend, and a pressure (Pa) above the end of the equation.

        Raises:
            PropertyRangeError: see above.
        """
        line = self._line
        if line.is_blend:
            raise PropertyRangeError(
                line.name, f"{bar(p)} is above {bar(line.p_dew_high)}, where the known dew line ends"
            )
        if not p <= line.p_max:
            raise PropertyRangeError(line.name, f"{bar(p)} is above {bar(line.p_max)}, where the equation ends")

    def at(self, T: float, p: float) -> State:
        """The state at `T` (K) and `p` (Pa): dense, or gas where it is hotter than the end of two phases."""
        self.need(p)
        line = self._line
        if line.T_critical > T and p < line.continued_bubble_pressure(T):
            return self._equation.density(T, p, 0.9 * self._dew_density)
        return self._equation.dense(T, p, self._largest)

    def need_vapour(self, T: float, p: float) -> None:
        """Refuse the liquid side between the end of the line and the critical pressure.

        Raises:
            PropertyRangeError: `T` (K) below the dew point at `p` (Pa).
        """
        line = self._line
        if p < line.p_critical and line.T_critical > T and p > line.continued_bubble_pressure(T):
            raise PropertyRangeError(line.name, f"{celsius(T)} is below the dew point at {bar(p)}: not vapour alone")

    def need_liquid(self, T: float, p: float) -> None:
        """Refuse the vapour side between the end of the line and the critical pressure.

        Raises:
            PropertyRangeError: `p` (Pa) below the bubble point at `T` (K).
        """
        line = self._line
        if p < line.p_critical and p < line.continued_bubble_pressure(T):
            raise PropertyRangeError(line.name, f"{bar(p)} is below the bubble point at {celsius(T)}: vapour forms")

    def from_enthalpy(self, p: float, h: float) -> State:
        """The state at `p` (Pa) with enthalpy `h` (J/kg); temperature and enthalpy rise together, so there is one.

        Newton in density and temperature, in which the equation is smooth through the critical region, so that one
        start in its middle does for all.
        """
        self.need(p)
        T = 1.02 * self._line.T_critical
        point = self._equation.solve(p, "h", h, self._equation.at(self._middle, T), alike=True)
        if point.p_rho > 0:
            return point
        note = f"at {celsius(point.T)} and {bar(p)}, next to the critical point, two alike phases are taken as one"
        return point._replace(warnings=(note,))

    def isentropic_end(self, state: State | SaturationState, p: float) -> State:
        """The state at `p` (Pa) with the entropy of `state`, in steps of pressure, each started by the last slope."""
        self.need(p)
        point = self._equation.at(state.rho, state.T)
        steps = max(1, math.ceil(abs(math.log(p / state.p)) / PRESSURE_STEP))
        for k in range(1, steps + 1):
            goal = state.p * (p / state.p) ** (k / steps)
            determinant = point.p_rho * point.s_t - point.p_t * point.s_rho
            # a straight step in ln p, which an isentrope follows more closely than one in p
            step = point.p * math.log(goal / point.p) / determinant
            rho = point.rho * math.exp(point.s_t * step / point.rho)
            T = point.T * math.exp(-point.s_rho * step / point.T)
            point = self._equation.solve(goal, "s", state.s, self._equation.at(rho, T))
        return point
