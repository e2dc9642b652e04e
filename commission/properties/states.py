"""What the property room hands out: states as frozen data, SI throughout, enthalpy and entropy on the IIR reference.

States are made by the hundred in every balance; a named tuple is as frozen as a frozen dataclass and made in a third
of the time.
"""

from __future__ import annotations

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
    for the person who reads the result.
    """

    T: float
    p: float
    h: float
    s: float
    rho: float
    quality: float | None = None
    warnings: tuple[str, ...] = ()


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
