"""Wet states: between bubble and dew point at one pressure, by enthalpy fraction.

A pure fluid follows the lever rule exactly. A blend glides: its temperature is not a straight line in enthalpy, which the
tables of `lines.TwoPhase` carry. Entropy follows from dh = T ds along the isobar.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

import numpy as np

from commission.properties.lines import Array, TwoPhase
from commission.properties.states import SaturationState, State


@cache
def _gauss() -> tuple[Array, Array]:
    """Nodes and weights of an eight-point Gauss-Legendre rule on 0..1."""
    x, w = np.polynomial.legendre.leggauss(8)
    return (x + 1) / 2, w / 2


def _value(series: Array, x: float) -> float:
    """A Chebyshev series in 2x - 1."""
    return float(np.polynomial.chebyshev.chebval(2 * x - 1, series))


@dataclass(frozen=True)
class WetIsobar:
    """The wet states at one pressure. `h_bubble`..`h_dew` J/kg is the range of enthalpies."""

    bubble: SaturationState
    dew: SaturationState
    table: TwoPhase | None

    @property
    def _series(self) -> tuple[Array, Array, Array] | None:
        return None if self.table is None else self.table.series(self.dew.p)

    def fraction(self, h: float) -> float:
        """Enthalpy fraction: 0 at the bubble point, 1 at the dew point."""
        return (h - self.bubble.h) / (self.dew.h - self.bubble.h)

    def state(self, x: float, warnings: tuple[str, ...] = ()) -> State:
        """The state at enthalpy fraction `x` in 0..1."""
        a, b = self.bubble, self.dew
        series = self._series
        d_T = d_q = d_v = 0.0
        if series is not None:
            d_T, d_q, d_v = (_value(s, x) for s in series)
        v_a, v_b = 1 / a.rho, 1 / b.rho
        volume = v_a + (v_b - v_a) * min(1.0, max(0.0, x + d_v))
        return State(
            T=a.T + x * (b.T - a.T) + d_T,
            p=b.p,
            h=a.h + x * (b.h - a.h),
            s=a.s + (b.s - a.s) * self._entropy_fraction(x, series),
            rho=1 / volume,
            quality=min(1.0, max(0.0, x + d_q)),
            warnings=warnings,
        )

    def fraction_at_entropy(self, s: float) -> float:
        """Enthalpy fraction of the wet state with entropy `s` (J/(kg K)): lever rule, then Newton with ds = dh/T."""
        wanted = (s - self.bubble.s) / (self.dew.s - self.bubble.s)
        series = self._series
        if series is None:
            return wanted
        x = wanted
        for _ in range(8):
            slope = self._entropy_fraction(1.0, series, total=True) * self._temperature(x, series)
            step = (wanted - self._entropy_fraction(x, series)) * slope
            x += step
            if abs(step) < 1e-12:
                break
        return x

    def mean_temperature(self, x_in: float) -> float:
        """Temperature (K) averaged over the heat taken up from enthalpy fraction `x_in` to the dew point."""
        series = self._series
        if series is None:
            return self.dew.T
        nodes, weights = _gauss()
        x = x_in + (1 - x_in) * nodes
        return float(weights @ self._temperatures(x, series))

    def _temperature(self, x: float, series: tuple[Array, Array, Array]) -> float:
        return float(self.bubble.T + x * (self.dew.T - self.bubble.T) + _value(series[0], x))

    def _temperatures(self, x: Array, series: tuple[Array, Array, Array]) -> Array:
        deviation = np.polynomial.chebyshev.chebval(2 * x - 1, series[0])
        return np.asarray(self.bubble.T + x * (self.dew.T - self.bubble.T) + deviation)

    def _entropy_fraction(self, x: float, series: tuple[Array, Array, Array] | None, total: bool = False) -> float:
        """Share of the entropy between bubble and dew: the integral of dx/T to `x` over that to 1 (or that integral)."""
        if series is None:
            return x
        nodes, weights = _gauss()
        whole = float(weights @ (1 / self._temperatures(nodes, series)))
        if total:
            return whole
        return x * float(weights @ (1 / self._temperatures(x * nodes, series))) / whole
