"""Water and aqueous glycols as heat carriers, by mass fraction.

Water after IAPWS-95 (Wagner & Pruss, J. Phys. Chem. Ref. Data 31, 2002, 387), glycols after Melinder (Properties of
Secondary Working Fluids for Indirect Systems, IIR, 2nd ed. 2010), both as coded in CoolProp. At 3 bar absolute, as in a
closed circuit: pressure moves density by 0.005 % per bar.
"""

from __future__ import annotations

import threading
from functools import lru_cache
from typing import Any

from commission.errors import InputError, Problem, nearest
from commission.properties.coolprop import load
from commission.properties.errors import PropertyRangeError, celsius

CIRCUIT_PRESSURE = 3e5
WATER_TOP = 403.15  # K: below its boiling point at the circuit pressure
GLYCOL_TOP = 373.15
LARGEST_FRACTION = 0.6
MEDIA = {"water": "Water", "propylene glycol": "MPG", "ethylene glycol": "MEG"}


class Liquid:
    """A heat carrier. Make it with `liquid(medium, mass_fraction)`.

    `freezing_temperature` (K) is where the first ice forms. May be used from several threads.
    """

    def __init__(self, medium: str, mass_fraction: float) -> None:
        self.medium = medium
        self.mass_fraction = mass_fraction
        self._local = threading.local()
        state = self._state
        is_water = medium == "water"
        self.freezing_temperature: float = 273.15 if is_water else state.keyed_output(load().iT_freeze)
        self.highest_temperature = WATER_TOP if is_water else GLYCOL_TOP

    def __repr__(self) -> str:
        return f"Liquid({self.medium!r}, {self.mass_fraction!r})"

    @property
    def _state(self) -> Any:
        """This thread's own equation object."""
        state = getattr(self._local, "state", None)
        if state is None:
            cp = load()
            state = cp.AbstractState("HEOS" if self.medium == "water" else "INCOMP", MEDIA[self.medium])
            if self.medium == "water":
                state.specify_phase(cp.iphase_liquid)
            else:
                state.set_mass_fractions([self.mass_fraction])
            self._local.state = state
        return state

    def _at(self, T: float) -> Any:
        if not self.freezing_temperature - 1e-6 <= T <= self.highest_temperature:
            raise PropertyRangeError(
                str(self),
                f"{celsius(T)} is outside {celsius(self.freezing_temperature)} (freezing) to "
                f"{celsius(self.highest_temperature)}",
            )
        state = self._state
        state.update(load().PT_INPUTS, CIRCUIT_PRESSURE, T)
        return state

    def __str__(self) -> str:
        return self.medium if self.medium == "water" else f"{self.medium} {100 * self.mass_fraction:.0f} % by mass"

    def density(self, T: float) -> float:
        """Density (kg/m3) at `T` (K).

        Raises:
            PropertyRangeError: below freezing, or too hot.
        """
        return float(self._at(T).rhomass())

    def specific_heat(self, T: float) -> float:
        """Specific heat at constant pressure (J/(kg K)) at `T` (K).

        Raises:
            PropertyRangeError: below freezing, or too hot.
        """
        return float(self._at(T).cpmass())

    def viscosity(self, T: float) -> float:
        """Dynamic viscosity (Pa s) at `T` (K), for the resistance of a circuit. Raises PropertyRangeError as above."""
        return float(self._at(T).viscosity())

    def conductivity(self, T: float) -> float:
        """Thermal conductivity (W/(m K)) at `T` (K). Raises PropertyRangeError as above."""
        return float(self._at(T).conductivity())


@lru_cache(maxsize=256)
def liquid(medium: str, mass_fraction: float = 0.0) -> Liquid:
    """The heat carrier: `water`, `propylene glycol` or `ethylene glycol` with its `mass_fraction` (0 to 0.6).

    Raises:
        InputError: unknown medium, with the nearest known one.
        PropertyRangeError: mass fraction outside the range, or other than 0 for water.
    """
    if medium not in MEDIA:
        raise InputError(
            Problem(
                "this liquid is not known",
                value=medium,
                allowed=", ".join(MEDIA),
                nearest=nearest(medium, MEDIA, cutoff=0.4),
            )
        )
    largest = 0.0 if medium == "water" else LARGEST_FRACTION
    if not 0.0 <= mass_fraction <= largest:
        raise PropertyRangeError(
            medium, f"a mass fraction of {100 * mass_fraction:.1f} % is outside 0 % to {100 * largest:.0f} %"
        )
    return Liquid(medium, mass_fraction)
