"""Wet states: between bubble and dew point at one pressure, by enthalpy fraction.

A pure fluid follows the lever rule exactly. A blend glides: its temperature is not a straight line in enthalpy, nor are
its quality, volume and entropy, which the tables of `lines.TwoPhase` carry.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import NamedTuple

import numpy as np

from commission.properties.lines import Array, TwoPhase
from commission.properties.states import SaturationState, State


def _mean_of_series(series: Sequence[float], start: float) -> float:
    """Mean of a Chebyshev series from `start` to 1: the integral of T_n is T_(n+1)/(2n+2) - T_(n-1)/(2n-2)."""
    mean = series[0] + 0.5 * series[1] * (1 + start)
    before, here = start, 2 * start * start - 1
    for n in range(2, len(series)):
        after = 2 * start * here - before
        gained = -1 / (n * n - 1) - after / (2 * n + 2) + before / (2 * n - 2)
        mean += series[n] * gained / (1 - start)
        before, here = here, after
    return mean


class WetIsobar(NamedTuple):
    """The wet states at one pressure, between its bubble and dew point."""

    bubble: SaturationState
    dew: SaturationState
    table: TwoPhase | None

    def fraction(self, h: float) -> float:
        """Enthalpy fraction of `h` (J/kg): 0 at the bubble point, 1 at the dew point."""
        return (h - self.bubble.h) / (self.dew.h - self.bubble.h)

    def state(self, x: float, warnings: tuple[str, ...] = ()) -> State:
        """The state at enthalpy fraction `x` in 0..1."""
        a, b = self.bubble, self.dew
        d_T, d_q, d_v, d_s = self._deviations(x, None if self.table is None else self.table.series(b.p))
        v_a, v_b = 1 / a.rho, 1 / b.rho
        volume = v_a + (v_b - v_a) * min(1.0, max(0.0, x + d_v))
        return State(
            T=a.T + x * (b.T - a.T) + d_T,
            p=b.p,
            h=a.h + x * (b.h - a.h),
            s=a.s + (b.s - a.s) * (x + d_s),
            rho=1 / volume,
            quality=min(1.0, max(0.0, x + d_q)),
            warnings=warnings,
        )

    def fraction_at_entropy(self, s: float) -> float:
        """Enthalpy fraction of the wet state with entropy `s` (J/(kg K)): lever rule, then Newton with dh = T ds."""
        a, b = self.bubble, self.dew
        x = (s - a.s) / (b.s - a.s)
        if self.table is None:
            return x
        series = self.table.series(b.p)
        for _ in range(8):
            d_T, _, _, d_s = self._deviations(x, series)
            T = a.T + x * (b.T - a.T) + d_T
            step = (s - a.s - (b.s - a.s) * (x + d_s)) * T / (b.h - a.h)
            x = min(1.0, max(0.0, x + step))
            if abs(step) < 1e-10:
                break
        return x

    def mean_temperature(self, x_in: float) -> float:
        """Temperature (K) averaged over the heat taken up from enthalpy fraction `x_in` to the dew point."""
        a, b = self.bubble, self.dew
        if self.table is None:
            return b.T
        deviation = _mean_of_series(self.table.temperature_series(b.p), 2 * x_in - 1)
        return a.T + 0.5 * (1 + x_in) * (b.T - a.T) + deviation

    @staticmethod
    def _deviations(x: float, series: Array | None) -> tuple[float, float, float, float]:
        """The four deviations of the table at enthalpy fraction `x`, zero for a pure fluid."""
        if series is None:
            return 0.0, 0.0, 0.0, 0.0
        terms = np.cos(np.arange(series.shape[1]) * math.acos(min(1.0, max(-1.0, 2 * x - 1))))
        d_T, d_q, d_v, d_s = series.dot(terms).tolist()
        return d_T, d_q, d_v, d_s
