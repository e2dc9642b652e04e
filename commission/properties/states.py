"""What the property room hands out: states as frozen data, SI throughout, enthalpy and entropy on the IIR reference.

States are made by the hundred in every balance; a named tuple is as frozen as a frozen dataclass and made in a third
of the time.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import NamedTuple


class SaturationState(NamedTuple):
    """A point of the dew or bubble line: T (K), p (Pa absolute), h (J/kg), s (J/(kg K)), rho (kg/m3)."""

    T: float
    p: float
    h: float
    s: float
    rho: float
    warnings: tuple[str, ...] = ()


class State(NamedTuple):
    """A state of the refrigerant: T (K), p (Pa absolute), h (J/kg), s (J/(kg K)), rho (kg/m3).

    `quality` is the mass fraction of vapour of a two-phase state and None in a single phase. `warnings` are sentences
    for the person who reads the result. `p_rho` and `p_t` are dp/drho at constant temperature and dp/dT at constant
    density, `cv` the specific heat at constant volume (J/(kg K)), where the state is a single phase; a state that was
    closed by a small step has them from before it, good to 1e-5.
    """

    T: float
    p: float
    h: float
    s: float
    rho: float
    quality: float | None = None
    warnings: tuple[str, ...] = ()
    p_rho: float = math.nan
    p_t: float = math.nan
    cv: float = math.nan

    @property
    def h_rho(self) -> float:
        """dh/drho at constant temperature."""
        return (self.p_rho - self.T * self.p_t / self.rho) / self.rho

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

    def density_near(self, T: float, p: float) -> float:
        """Density (kg/m3) at a neighbouring `T` (K) and `p` (Pa) in the same phase, to first order."""
        return self.rho + (p - self.p - self.p_t * (T - self.T)) / self.p_rho


@dataclass(frozen=True, slots=True)
class Slopes:
    """Derivatives of a single-phase state by temperature at constant pressure, and by pressure at constant temperature.

    `cp` = dh/dT (J/(kg K)), `dh_dp` (J/(kg Pa)), `ds_dt` (J/(kg K2)), `ds_dp` (J/(kg K Pa)), `drho_dt` (kg/(m3 K)),
    `drho_dp` (kg/(m3 Pa)).
    """

    cp: float
    dh_dp: float
    ds_dt: float
    ds_dp: float
    drho_dt: float
    drho_dp: float


@dataclass(frozen=True, slots=True)
class SaturationSlopes:
    """Derivatives by temperature along a saturation line: of ln p (1/K), h (J/(kg K)), s (J/(kg K2)), ln rho (1/K)."""

    ln_p: float
    h: float
    s: float
    ln_rho: float
