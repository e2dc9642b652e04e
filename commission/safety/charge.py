"""Charge limits of every space that the refrigerant can reach: the documents side by side, the lowest advised."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

from commission.quantities import Explained, Input, Kind
from commission.safety.alternatives import alternative_limits
from commission.safety.charge_en378 import en378_limits
from commission.safety.charge_others import ashrae15_limit, commercial_limit, heat_pump_limit
from commission.safety.limits import ChargeLimit, Situation
from commission.safety.stamped import place

if TYPE_CHECKING:
    from commission.description import LoadedPlant
    from commission.description.model import Space, System
    from commission.safety.substance import Substance

ADVICE = "confirm with the edition in force and the authority"
ACCESS: dict[str, Literal["a", "b", "c"]] = {"general public": "a", "supervised": "b", "authorised persons only": "c"}


@dataclass(frozen=True, slots=True)
class SpaceCharge:
    """The limits of one space. `lowest` is the smallest that applies, `over` whether the charge exceeds it (None where
    charge or limits are not known); `concentration` is what the whole charge gives in this space, kg/m³. `alternatives`
    are limits that other provisions allow with the measures they name; they never lower or raise `lowest`."""

    space_id: str
    name: str
    holds: tuple[str, ...]
    volume: float | None
    limits: tuple[ChargeLimit, ...]
    lowest: ChargeLimit | None
    charge: float | None
    over: bool | None
    concentration: Explained | None
    advice: str
    notes: tuple[str, ...] = ()
    alternatives: tuple[ChargeLimit, ...] = ()


def charge_limits(loaded: LoadedPlant, system_id: str, substance: Substance) -> tuple[SpaceCharge, ...]:
    """Every space that holds a part of the system, with the limits of each document."""
    system = loaded.system(system_id)
    return tuple(
        _space(loaded, system_id, substance, space_id, holds) for space_id, holds in reachable_spaces(system).items()
    )


def reachable_spaces(system: System) -> dict[str, tuple[str, ...]]:
    """Space ids with the parts in them: evaporator, condensing unit, pipework, and the spaces of the air streams."""
    held: dict[str, list[str]] = {}
    for part in ("evaporator", "condensing_unit"):
        space_id = getattr(system.spaces, part)
        if space_id is not None:
            held.setdefault(space_id, []).append(part.replace("_", " "))
    for space_id in system.spaces.pipework:
        held.setdefault(space_id, []).append("pipework")
    for medium, part in ((system.heat_source, "evaporator"), (system.heat_sink, "condenser")):
        if medium.medium == "air" and medium.space is not None and medium.space not in held:
            held[medium.space] = [f"air of the {part}"]
    return {key: tuple(parts) for key, parts in held.items()}


def _space(
    loaded: LoadedPlant, system_id: str, substance: Substance, space_id: str, holds: tuple[str, ...]
) -> SpaceCharge:
    system = loaded.system(system_id)
    space = loaded.plant.spaces[space_id]
    name = space.name or space_id
    if space.outdoors:
        return SpaceCharge(
            space_id, name, holds, None, (), None, system.charge, None, None, ADVICE, _outdoors(substance)
        )
    inputs = _inputs(loaded, system_id, space_id, space)
    volume = space.floor_area * space.height if space.floor_area is not None and space.height is not None else None
    situation = _situation(loaded, system, space, substance, volume, inputs)
    limits = (
        *en378_limits(situation),
        ashrae15_limit(situation),
        commercial_limit(situation),
        heat_pump_limit(situation),
    )
    valid = [limit for limit in limits if limit.value is not None]
    lowest = min(valid, key=lambda limit: limit.value.value if limit.value else 0.0, default=None)
    over = None
    if lowest is not None and lowest.value is not None and system.charge is not None:
        over = system.charge > lowest.value.value
    concentration = None
    if volume and system.charge is not None:
        concentration = Explained("leak_concentration", system.charge / volume, None, "leak_concentration", inputs)
    notes = () if volume else ("floor area and height are needed for most limits: write them under spaces",)
    return SpaceCharge(
        space_id,
        name,
        holds,
        volume,
        limits,
        lowest,
        system.charge,
        over,
        concentration,
        ADVICE,
        notes,
        alternative_limits(situation),
    )


def _inputs(loaded: LoadedPlant, system_id: str, space_id: str, space: Space) -> tuple[Input, ...]:
    found = []
    if space.floor_area is not None:
        found.append(Input("floor area", space.floor_area, Kind.AREA, place(loaded, f"spaces.{space_id}.floor_area")))
    if space.height is not None:
        found.append(Input("height", space.height, Kind.LENGTH, place(loaded, f"spaces.{space_id}.height")))
    charge = loaded.system(system_id).charge
    if charge is not None:
        found.append(Input("charge", charge, Kind.MASS, place(loaded, f"systems.{system_id}.charge")))
    return tuple(found)


def _situation(
    loaded: LoadedPlant,
    system: System,
    space: Space,
    substance: Substance,
    volume: float | None,
    inputs: tuple[Input, ...],
) -> Situation:
    unit = loaded.plant.spaces.get(system.spaces.condensing_unit or "")
    return Situation(
        substance=substance,
        access=ACCESS.get(space.occupancy or "", "a"),
        access_stated=space.occupancy is not None,
        location=_location(loaded, system, unit),
        below_ground=space.below_ground,
        comfort=system.duty in ("comfort_cooling", "space_heating"),
        commercial=system.duty == "cold_storage",
        sealed=system.sealed,
        mounting=system.spaces.evaporator_mounting,
        area=space.floor_area,
        volume=volume,
        inputs=inputs,
    )


def _location(loaded: LoadedPlant, system: System, unit: Space | None) -> Literal["I", "II", "III"]:
    """Location class III, II or I of EN 378-1.

    III where every part is outdoors or in a room for authorised persons only that the evaporator does not cool (taken
    as a machinery room); II where the compressor alone is outdoors or in such a room; else I.
    """
    cooled = system.heat_source.space if system.heat_source.medium == "air" else None

    def apart(space_id: str) -> bool:
        space = loaded.plant.spaces[space_id]
        return space.outdoors or (space.occupancy == "authorised persons only" and space_id != cooled)

    spaces = reachable_spaces(system)
    if spaces and all(apart(space_id) for space_id in spaces if space_id in loaded.plant.spaces):
        return "III"
    held = system.spaces.condensing_unit
    return "II" if unit is not None and held is not None and apart(held) else "I"


def _outdoors(substance: Substance) -> tuple[str, ...]:
    if not substance.flammable:
        return ("outdoors: no limit by room size",)
    zone = (
        "outdoors: no limit by room size; keep the supplier's protective zone free of ignition sources, drains, light "
        "wells, windows, doors and air intakes"
    )
    return (
        (zone, "the gas is heavier than air: no opening to a cellar or pit inside the zone")
        if substance.heavy
        else (zone,)
    )


def smallest_space(spaces: tuple[SpaceCharge, ...]) -> SpaceCharge | None:
    """The indoor space with the least volume, where a leak is densest."""
    indoor = [s for s in spaces if s.volume is not None]
    return min(indoor, key=lambda s: s.volume or 0.0, default=None)


def lowest_limit(spaces: tuple[SpaceCharge, ...]) -> tuple[SpaceCharge, ChargeLimit] | None:
    """The lowest limit over all spaces and documents."""
    found = [(s, s.lowest) for s in spaces if s.lowest is not None and s.lowest.value is not None]
    return min(found, key=lambda pair: pair[1].value.value if pair[1].value else 0.0, default=None)


__all__ = [
    "ADVICE",
    "ChargeLimit",
    "SpaceCharge",
    "charge_limits",
    "lowest_limit",
    "reachable_spaces",
    "smallest_space",
]
