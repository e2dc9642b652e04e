"""Allowable pressures as stamped, the hottest ambient as stated, and where each is written."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.quantities import Input, Kind

if TYPE_CHECKING:
    from commission.description import LoadedPlant
    from commission.description.model import System
    from commission.quantities import Pressure


@dataclass(frozen=True, slots=True)
class Stamped:
    """An allowable pressure as stamped: Pa absolute, gauge at the site, and its place in the description."""

    absolute: float
    gauge: float
    side: str
    origin: str

    def as_input(self) -> Input:
        """The stamped pressure as an input of a calculation."""
        return Input(f"allowable pressure of the {self.side} side", self.absolute, Kind.PRESSURE, self.origin)


def place(loaded: LoadedPlant, path: str) -> str:
    """Where a key is written, as file, line and column."""
    return str(loaded.where(path))


def hottest_ambient(loaded: LoadedPlant, system_id: str) -> tuple[float, str] | None:
    """The hottest air to design for in K, with where it is written.

    One figure for the site (`plant.climate.summer_dry_bulb`), unless the place of the unit states its own
    (`spaces.<place>.hottest_air`). A site that states neither is taken at the warmest air that the system is designed
    or rated for.
    """
    system = loaded.system(system_id)
    air = system.heat_sink.medium == "air"
    held = system.spaces.condensing_unit or (system.heat_sink.space if air else None) or system.spaces.evaporator
    space = loaded.plant.spaces.get(held or "")
    if space is not None and space.hottest_air is not None:
        return space.hottest_air, place(loaded, f"spaces.{held}.hottest_air")
    summer = loaded.plant.plant.climate.summer_dry_bulb
    if summer is not None:
        return summer, place(loaded, "plant.climate.summer_dry_bulb")
    if not air or system.duty in ("space_heating", "water_heating"):
        return None
    if system.design is not None and system.design.heat_sink_inlet_temperature is not None:
        origin = place(loaded, f"systems.{system_id}.design.heat_sink_inlet_temperature")
        return system.design.heat_sink_inlet_temperature, origin
    inlets = [p.heat_sink_inlet_temperature for p in system.rated_points]
    if system.condensing_unit is not None:
        inlets += [p.heat_sink_inlet_temperature for p in system.condensing_unit.rated_points]
    found = [(t, f"rated point, {place(loaded, f'systems.{system_id}')}") for t in inlets if t is not None]
    return max(found, default=None)


def relief_valves(system: System) -> dict[str, Pressure]:
    """Every relief valve that is described: its set pressure by where it sits."""
    found = {}
    if system.receiver is not None and system.receiver.relief_valve is not None:
        found["receiver"] = system.receiver.relief_valve
    return {**found, **system.relief_valves}


def stamped_pressures(loaded: LoadedPlant, system_id: str) -> tuple[Stamped, ...]:
    """The allowable pressures that the nameplate states, low side first."""
    plate = loaded.system(system_id).nameplate
    found = []
    for side, value in (("low", plate.allowable_pressure_low), ("high", plate.allowable_pressure_high)):
        if value is not None:
            absolute = loaded.absolute(value)
            origin = place(loaded, f"systems.{system_id}.nameplate.allowable_pressure_{side}")
            found.append(Stamped(absolute, absolute - loaded.barometric_pressure, side, origin))
    return tuple(found)
