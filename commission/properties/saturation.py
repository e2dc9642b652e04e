"""The saturation lines of a refrigerant with their limits, and the errors that name those limits."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from commission.properties.errors import PropertyRangeError, bar, celsius
from commission.properties.states import SaturationSlopes, SaturationState

if TYPE_CHECKING:
    from commission.properties.lines import Array, FluidData, Line

NEAR_CRITICAL = 0.97  # of the critical temperature: above, small errors of a model become large ones of its pressures
GAS_CONSTANT = 8.314462618  # J/(mol K), CODATA 2018
EDGE = 1e-8  # relative; a state this close to a line counts as on it, since lines are exact to about this
EDGE_PRESSURE = 20 * EDGE  # the same in pressure, which moves at most twenty times as much in relative terms


class Saturation:
    """Dew and bubble line of one refrigerant. Temperatures in K, pressures in Pa absolute."""

    def __init__(self, data: FluidData) -> None:
        self._data = data
        self.name = data.refrigerant
        self.molar_mass = data.molar_mass
        self.T_critical = data.T_critical
        self.p_critical = data.p_critical
        self.T_triple = data.T_triple
        self.T_max = data.T_max
        self.p_max = data.p_max
        self.T_low = data.T_low
        self.T_high = data.T_high
        self._T_least, self._T_most = data.T_low * (1 - EDGE), data.T_high * (1 + EDGE)
        self._T_sure = NEAR_CRITICAL * data.T_critical
        self.is_blend = len(data.fluids) > 1
        self._dew: Line = data.dew
        self._bubble: Line = data.bubble
        self.p_dew_low, self.p_dew_high = (math.exp(v) for v in data.dew.ln_p_range)
        self.p_bubble_low, self.p_bubble_high = (math.exp(v) for v in data.bubble.ln_p_range)

    def __repr__(self) -> str:
        return f"Refrigerant({self.name!r})"

    def dew(self, T: float) -> SaturationState:
        """The dew point (saturated vapour) at `T` (K).

        Raises:
            PropertyRangeError: `T` outside `T_low`..`T_high`.
        """
        return self._saturation(self._dew, T)

    def bubble(self, T: float) -> SaturationState:
        """The bubble point (saturated liquid) at `T` (K).

        Raises:
            PropertyRangeError: `T` outside `T_low`..`T_high`.
        """
        return self._saturation(self._bubble, T)

    def dew_pressure(self, T: float) -> float:
        """Pressure (Pa absolute) of the dew line at `T` (K): that of `dew`, without the other values.

        Raises:
            PropertyRangeError: `T` outside `T_low`..`T_high`.
        """
        if not self._T_least <= T <= self._T_most:
            raise self._no_saturation(T)
        return math.exp(self._dew.ln_p(T))

    def dew_temperature(self, p: float) -> float:
        """Temperature (K) of the dew line at `p` (Pa absolute).

        Raises:
            PropertyRangeError: `p` outside the line.
        """
        self._need_pressure(p, self.p_dew_low, self.p_dew_high)
        return self._dew.temperature(p)

    def bubble_temperature(self, p: float) -> float:
        """Temperature (K) of the bubble line at `p` (Pa absolute).

        Raises:
            PropertyRangeError: `p` outside the line.
        """
        self._need_pressure(p, self.p_bubble_low, self.p_bubble_high)
        return (self._bubble if self.is_blend else self._dew).temperature(p)

    def dew_slopes(self, T: float) -> SaturationSlopes:
        """Derivatives along the dew line at `T` (K). Raises PropertyRangeError outside the line."""
        self._need_temperature(T)
        return SaturationSlopes(*self._dew.slopes(T))

    def bubble_slopes(self, T: float) -> SaturationSlopes:
        """Derivatives along the bubble line at `T` (K). Raises PropertyRangeError outside the line."""
        self._need_temperature(T)
        return SaturationSlopes(*self._bubble.slopes(T))

    def dew_rows(self, T: Array) -> Array:
        """p (Pa), h (J/kg), s (J/(kg K)) and rho (kg/m3) of the dew line for an array of `T` (K): shape (4, *T.shape).

        Raises:
            PropertyRangeError: any temperature outside the line.
        """
        return self._rows(self._dew, T)

    def bubble_rows(self, T: Array) -> Array:
        """The same of the bubble line. Raises PropertyRangeError for any temperature outside the line."""
        return self._rows(self._bubble, T)

    def _rows(self, line: Line, T: Array) -> Array:
        for end in (T.min(), T.max()):  # NaN is either
            self._need_temperature(float(end))
        rows = line.rows(T)
        rows[(0, 3), :] = math.e ** rows[(0, 3), :]
        return rows

    def continued_bubble_pressure(self, T: float) -> float:
        """Bubble pressure (Pa) at `T` (K), and above `T_high` its continuation straight in ln p against 1/T.

        Not a property of the fluid above its critical temperature: a smooth bridge for a solver that passes it.

        Raises:
            PropertyRangeError: colder than `T_low`.
        """
        if not self.T_high < T:
            return self.bubble(T).p
        end, slope = self._bubble.ln_p(self.T_high), self._bubble.slopes(self.T_high)[0]
        return math.exp(end + slope * self.T_high * (1 - self.T_high / T))

    def _saturation(self, line: Line, T: float) -> SaturationState:
        if not self._T_least <= T <= self._T_most:
            raise self._no_saturation(T)
        ln_p, h, s, ln_rho = line.row(T)
        if self._T_sure < T:
            return SaturationState(T, math.exp(ln_p), h, s, math.exp(ln_rho), (self._near_critical(T),))
        return SaturationState(T, math.exp(ln_p), h, s, math.exp(ln_rho))

    def _near_critical(self, T: float) -> str:
        return (
            f"{self.name} at {celsius(T)} is within 3 % of its critical temperature ({celsius(self.T_critical)}): "
            "pressures and enthalpies of the property source are less sure there"
        )

    def _need_temperature(self, T: float) -> None:
        if not self._T_least <= T <= self._T_most:
            raise self._no_saturation(T)

    def _no_saturation(self, T: float) -> PropertyRangeError:
        return PropertyRangeError(
            self.name,
            f"no saturation at {celsius(T)}; it is known from {celsius(self.T_low)} to {celsius(self.T_high)} "
            f"(critical temperature {celsius(self.T_critical)})",
        )

    def _need_pressure(self, p: float, low: float, high: float) -> None:
        if not low * (1 - EDGE) <= p <= high * (1 + EDGE):
            raise PropertyRangeError(
                self.name,
                f"no saturation at {bar(p)}; it is known from {bar(low)} to {bar(high)} "
                f"(critical pressure {bar(self.p_critical)})",
            )
