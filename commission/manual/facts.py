"""What is installed, as lists of facts: everything the description states, in words and units, with its place."""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterator, Mapping
from dataclasses import dataclass

from pydantic import BaseModel
from pydantic.fields import FieldInfo

from commission.description import LoadedPlant
from commission.description.shapes import inner, meaning_of
from commission.manual.page_display import three_figures
from commission.quantities import FLOWS, Display, Kind, Pressure, pretty


@dataclass(frozen=True, slots=True)
class Fact:
    """One line: what, its value in words, and where it is written."""

    label: str
    text: str
    place: str


@dataclass(frozen=True, slots=True)
class FactGroup:
    """A heading with its facts."""

    title: str
    facts: tuple[Fact, ...]


DUTY_WORDS = {
    "cold_storage": "cold storage",
    "comfort_cooling": "comfort cooling",
    "liquid_cooling": "cooling of a liquid",
    "space_heating": "space heating",
    "water_heating": "water heating",
}

_LABELS = {
    "maker_type": "Type",
    "serial": "Serial number",
    "allowable_pressure_low": "Allowable pressure PS, low side",
    "allowable_pressure_high": "Allowable pressure PS, high side",
    "rated_current": "Largest current",
    "sealed": "Factory sealed",
    "spaces": "Stands in",
    "by": "By",
    "from": "From",
    "pump_down": "Stops by pump-down",
    "starts_per_hour": "Starts in an hour, at most",
    "high_pressure_limit": "High-pressure limit opens at",
    "low_pressure_cut_out": "Low-pressure cut-out",
    "low_pressure_cut_in": "Low-pressure cut-in",
    "room_temperature": "Room thermostat",
    "relief_valve": "Relief valve set at",
    "rating": "Catalogue rating",
    "back_up": "Back-up",
    "fan_power": "Fan power",
    "source": "Read from",
}
"""Labels that are not simply the key in words."""

_ELSEWHERE = {"like", "without", "name", "rated_points", "guarantee", "documents", "assumptions", "measured_with",
              "design"}  # fmt: skip
"""Keys of a system that other parts of the manual show."""
_SPACES = {"evaporator", "condensing_unit", "pipework", "space"}


def words_of(key: str, display: Display) -> str:
    """A key as a label: its own label, that of the nomenclature, or the key in words."""
    if key in _LABELS:
        return _LABELS[key]
    if key in display.quantities:
        return display.label(key)
    text = key.replace("_", " ")
    return text[:1].upper() + text[1:]


def kind_of_field(info: FieldInfo) -> Kind | None:
    """The kind of quantity that a field holds, alone or by chosen names, or None."""
    own = next((m.kind for m in info.metadata if hasattr(m, "kind") and hasattr(m, "words")), None)
    held = inner(info.annotation)
    meaning = meaning_of(held[1] if held else info.annotation)
    return own or (meaning.kind if meaning else None)


def stated_number(display: Display, value: float, kind: Kind, column: bool = False) -> str:
    """A stated value with as many decimals as it takes not to change it by more than half a per cent.

    In a `column` it keeps the unit in which the rest of the column is written.
    A flow that comes back from the calculation a hair off (2601 for a stated 2600) gets its three figures.
    """
    if not column:
        display = display.fitting(kind, value)
    shown = display.convert(value, kind)
    unit, digits = display.unit_and_digits(kind)
    if kind is Kind.TEMPERATURE:
        return display.text(value, kind)
    if kind in FLOWS and abs(three_figures(shown) - shown) <= 0.001 * abs(shown):
        value *= three_figures(shown) / shown if shown else 1.0
        shown = display.convert(value, kind)
    if abs(shown) >= 100.0 and round(shown, 6).is_integer():
        digits = 0
    while digits < 4 and abs(round(shown, digits) - shown) > 0.005 * abs(shown):
        digits += 1
    return f"{display.number(value, kind, digits)} {pretty(unit)}".strip()


class Walker:
    """Walks the stated parts of one system and collects facts; what is not stated adds nothing."""

    def __init__(self, loaded: LoadedPlant, display: Display, identity: str) -> None:
        self.loaded, self.display = loaded, display
        self.base: tuple[str | int, ...] = ("systems", identity)

    def facts(self, part: BaseModel, path: tuple[str | int, ...], before: str = "") -> Iterator[Fact]:
        """The facts of one part, in the order in which its fields are declared."""
        for name, info in type(part).model_fields.items():
            if name not in part.model_fields_set:
                continue
            key = info.alias or name
            words = words_of(key, self.display)
            label = f"{before}: {words[:1].lower()}{words[1:]}" if before else words
            yield from self.value(getattr(part, name), info, (*path, key), label)

    def value(self, value: object, info: FieldInfo, path: tuple[str | int, ...], label: str) -> Iterator[Fact]:
        """One field: a value, a part of its own, a list, or names with values."""
        if value is None or value in ((), {}):
            return
        if isinstance(value, BaseModel):
            yield from self.facts(value, path, label)
        elif isinstance(value, tuple) and isinstance(value[0], BaseModel):
            for n, one in enumerate(value):
                inside = tuple(self.facts(one, (*path, n)))
                text = ", ".join(f"{f.label.lower()} {f.text}" for f in inside)
                yield Fact(f"{label.removesuffix('s')} {n + 1}", text, str(self.loaded.where((*self.base, *path, n))))
        elif isinstance(value, Mapping):
            for name, one in value.items():
                yield from self.value(one, info, (*path, name), f"{label} {name}")
        else:
            shown = self.text(value, info, str(path[-1]), side=str(path[0]))
            yield Fact(label, shown, str(self.loaded.where((*self.base, *path))))

    def text(self, value: object, info: FieldInfo, key: str, side: str = "") -> str:
        """A value in words; `side` is the part of the system in which it stands."""
        kind = kind_of_field(info)
        if kind is Kind.VOLUME_FLOW:  # of air, or of a liquid: the medium of its side says which
            named = next((k for k in (key, f"{side}_flow") if k in self.display.quantities), None)
            kind = self.display.kind(named) if named else kind
        if isinstance(value, Pressure):
            return self.display.text(self.loaded.absolute(value), Kind.PRESSURE)
        if isinstance(value, bool):
            return "yes" if value else "no"
        if isinstance(value, int | float):
            return stated_number(self.display, float(value), kind) if kind is not None else f"{value:g}"
        if isinstance(value, tuple):
            return ", ".join(self.text(v, info, key) for v in value)
        if isinstance(value, dt.date):
            return value.isoformat()
        if key == "duty":
            return DUTY_WORDS.get(str(value), str(value))
        return self.space(str(value)) if key in _SPACES else str(value)

    def space(self, identity: str) -> str:
        """The name on the door."""
        space = self.loaded.plant.spaces.get(identity)
        return (space.name if space else None) or identity


def system_facts(loaded: LoadedPlant, identity: str, display: Display) -> tuple[FactGroup, ...]:
    """Everything the description states of one system, in groups."""
    system = loaded.system(identity)
    walker = Walker(loaded, display, identity)
    first: list[Fact] = []
    groups: list[FactGroup] = []
    for name, info in type(system).model_fields.items():
        if name in _ELSEWHERE or name not in system.model_fields_set:
            continue
        value = getattr(system, name)
        if isinstance(value, BaseModel) and name != "spaces":
            facts = tuple(f for f in walker.facts(value, (name,)) if not f.label.startswith("Rated point"))
            if facts:
                groups.append(FactGroup(_title(name, display), facts))
        else:
            first.extend(walker.value(value, info, (name,), words_of(name, display)))
    return (FactGroup("Duty and refrigerant", tuple(first)), *groups)


def _title(part: str, display: Display) -> str:
    """The heading of a part; a side with the name of its medium."""
    words = words_of(part, display)
    if f"{part}_flow" not in display.quantities:
        return words
    medium = display.medium(part)
    return f"{words}: {medium[:1].lower()}{medium[1:]}"
