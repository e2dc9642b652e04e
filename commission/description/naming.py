"""What people on site call the two media of a system; every label of a quantity of that system follows from it."""

from __future__ import annotations

from typing import Literal

from commission.description.model import Medium, Plant, System
from commission.quantities import MediumName

Side = Literal["heat_source", "heat_sink"]
SIDES: tuple[Side, Side] = ("heat_source", "heat_sink")
_HEATING = ("space_heating", "water_heating")
_USES = {
    ("heat_source", "liquid_cooling"): "chilled",
    ("heat_source", "space_heating"): "source",
    ("heat_source", "water_heating"): "source",
    ("heat_sink", "space_heating"): "heating",
    ("heat_sink", "water_heating"): "",
}
"""What a liquid is used for, by side and duty; any other sink takes the heat of a condenser."""


def medium_of(system: System, side: Side) -> Medium:
    """The medium of one side."""
    return system.heat_source if side == "heat_source" else system.heat_sink


def outdoor_sides(plant: Plant, system: System) -> tuple[Side, ...]:
    """The sides that breathe outdoor air.

    A side without a stated space is outdoors where heat is made from it, or thrown away: the source of a heat pump, the
    sink of a cooling plant.
    """
    return tuple(side for side in SIDES if _outdoors(plant, system, side))


def _outdoors(plant: Plant, system: System, side: Side) -> bool:
    medium = medium_of(system, side)
    space = plant.spaces.get(medium.space or "")
    outdoors = space.outdoors if space is not None else (side == "heat_source") == (system.duty in _HEATING)
    return medium.medium == "air" and outdoors


def medium_name(plant: Plant, system: System, side: Side) -> MediumName:
    """`outdoor air`; `room air` where the room is what the system is for, else the air of the named space; of liquids
    what they do: `chilled water`, `heating water`, `condenser brine`."""
    medium = medium_of(system, side)
    if medium.medium != "air":
        fluid = "water" if medium.medium == "water" else "brine"
        use = _USES.get((side, system.duty), "condenser")
        return MediumName(f"{use} {fluid}".strip(), liquid=True)
    if _outdoors(plant, system, side):
        return MediumName("outdoor air")
    if (side == "heat_sink") == (system.duty in _HEATING):
        return MediumName("room air")
    space = plant.spaces.get(medium.space or "")
    return MediumName(f"air of {space.name or medium.space}" if space is not None else "air around the unit")
