"""Time and energy of heating up a store: by the machine alone and with its element, rated and on the coldest day."""

from __future__ import annotations

import re
from dataclasses import dataclass, replace

from commission.description import outdoor_sides
from commission.errors import NotCalculatedError
from commission.manual.facts import stated_number
from commission.manual.gather import PlantData, SystemData
from commission.manual.showing import Row, show
from commission.quantities import Display, Explained, Kind

_AIR = "heat_source_inlet_temperature"


@dataclass(frozen=True, slots=True)
class HeatingUp:
    """One heat-up: at which source temperature, its rows, why there are none with or without the element."""

    title: str
    rows: tuple[Row, ...]
    because: str | None
    element: str | None
    warnings: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class HeatingUps:
    """All of a store: from where to where it is heated, or why that is not calculated."""

    words: str
    ways: tuple[HeatingUp, ...]
    because: str | None = None


def heating_ups(plant: PlantData, data: SystemData) -> HeatingUps | None:
    """Heat-up from the stated cold water to the set point; None where the system has no store."""
    store = data.system.store
    if store is None or data.model is None:
        return None
    if store.cold_water is None or store.set_point is None:
        missing = "store.cold_water" if store.cold_water is None else "store.set_point"
        return HeatingUps("", (), f"the description does not state {missing}")
    display = data.display
    low, high = (display.text(t, Kind.TEMPERATURE) for t in (store.cold_water, store.set_point))
    words = (
        f"The whole store of {stated_number(display, store.volume, Kind.VOLUME)} from {low} to {high}, with "
        "nothing drawn. Defrosts and the first minutes of running are not counted: a real heat-up takes longer."
    )
    ways = tuple(_at(data, store.cold_water, t, title) for t, title in _airs(plant, data))
    return HeatingUps(words, ways)


def _airs(plant: PlantData, data: SystemData) -> tuple[tuple[float | None, str], ...]:
    """The rated source temperature, and the coldest one that the site is designed for."""
    rated = data.model.rated_condition.get(_AIR) if data.model else None
    if rated is None:
        return ((None, "At the rated condition"),)
    airs: list[tuple[float | None, str]] = [(rated, f"At {data.display.text(rated, Kind.TEMPERATURE)}, as rated")]
    coldest = plant.loaded.plant.plant.climate.winter_dry_bulb
    outdoors = "heat_source" in outdoor_sides(plant.loaded.plant, data.system)
    if coldest is not None and coldest < rated and outdoors:
        airs.append((coldest, f"At {data.display.text(coldest, Kind.TEMPERATURE)}, the coldest design day"))
    return tuple(airs)


def _at(data: SystemData, start: float, air: float | None, title: str) -> HeatingUp:
    from commission.prediction import heat_up

    assert data.model is not None
    try:
        found = heat_up(data.model, start, None, None if air is None else {_AIR: air})
    except NotCalculatedError as error:
        return HeatingUp(title, (), error.problems[0].message, None, ())
    values = [(found.time, "the machine alone"), (found.energy, "the machine alone")]
    if found.time_with_element is not None and found.energy_with_element is not None:
        values += [(found.time_with_element, "with the element"), (found.energy_with_element, "with the element")]
    place = "" if air is None else f"-{display_key(air)}"
    rows = tuple(_row(e, way, place, data, data.display) for e, way in values)
    element = re.sub(r"(?<!\w)-(?=\d)", "−", found.element_reason) if found.element_reason else None
    return HeatingUp(title, rows, None, element, found.warnings)


def display_key(air: float) -> str:
    """A source temperature as part of an anchor: tenths of a kelvin."""
    return f"{10.0 * air:.0f}"


def _row(explained: Explained, way: str, place: str, data: SystemData, display: Display) -> Row:
    row = show(explained.quantity, explained, display, data.assumptions)
    return replace(row, key=f"{row.key}-{way.replace(' ', '-')}{place}", label=f"{row.label}, {way}")
