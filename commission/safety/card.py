"""The emergency card: one page for the door, its text from a data file that a plant folder can replace."""

from __future__ import annotations

import string
from collections.abc import Mapping
from dataclasses import dataclass
from importlib.resources import files
from typing import TYPE_CHECKING

from pydantic import BaseModel, ConfigDict, Field

from commission.description import read_yaml, validate
from commission.errors import InputError, Problem, nearest
from commission.safety.charge import reachable_spaces
from commission.safety.people import Hazards, hazards

if TYPE_CHECKING:
    from commission.description import LoadedPlant
    from commission.description.model import System
    from commission.description.positions import Positions
    from commission.quantities import Display
    from commission.safety.substance import Substance

FILE = "emergency_card.yaml"
TAGS = (
    "flammable",
    "not_flammable",
    "higher_flammable",
    "toxic",
    "not_toxic",
    "carbon_dioxide",
    "not_carbon_dioxide",
    "asphyxiant",
    "heavy",
    "light",
    "walk_in",
    "indoors",
    "outdoors_only",
)
WORDS = (
    "system",
    "refrigerant",
    "designation",
    "safety_class",
    "charge",
    "lfl",
    "address",
    "meeting_point",
    "where",
    "rooms",
    "owner",
    "contractor",
    "effects",
    "levels",
    "emergency_number",
)
TO_FILL = "________________"
"""What stands on the printed page where the description says nothing: room to write."""


class _Line(BaseModel):
    model_config = ConfigDict(frozen=True, extra="forbid")
    text: str
    for_: tuple[str, ...] = Field((), alias="for")


class _Section(BaseModel):
    model_config = ConfigDict(frozen=True, extra="forbid")
    title: str
    lines: tuple[_Line, ...] = Field(min_length=1)


class _Card(BaseModel):
    model_config = ConfigDict(frozen=True, extra="forbid")
    title: str
    language: str = "en"
    sections: tuple[_Section, ...] = Field(min_length=1)


@dataclass(frozen=True, slots=True)
class CardSection:
    """A heading and its lines, ready to print."""

    title: str
    lines: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class EmergencyCard:
    """The card of one system. `replaced` says that the plant folder's own text is used."""

    system_id: str
    title: str
    language: str
    sections: tuple[CardSection, ...]
    replaced: bool


def emergency_card(loaded: LoadedPlant, system_id: str, substance: Substance, display: Display) -> EmergencyCard:
    """The card of one system in the words of the plant folder's `emergency_card.yaml`, else of the shipped text.

    Raises:
        InputError: the plant's own card is not readable, or names a word or class that is not known; with positions.
    """
    own = loaded.folder / FILE
    card, replaced = (_read(own), True) if own.is_file() else (_shipped(), False)
    system = loaded.system(system_id)
    hazard = hazards(substance)
    tags = _card_tags(loaded, system, hazard)
    words = _words(loaded, system_id, substance, hazard, display)
    sections = []
    for section in card.sections:
        lines = [_fill(line.text, words) for line in section.lines if set(line.for_) <= tags]
        shown = tuple(text for text in lines if text)
        if shown:
            sections.append(CardSection(section.title, shown))
    return EmergencyCard(system_id, card.title, card.language, tuple(sections), replaced)


def _shipped() -> _Card:
    return _check((files("commission.safety") / "card.yaml").read_text(encoding="utf-8"), "card.yaml")


def _read(path: object) -> _Card:
    from pathlib import Path

    assert isinstance(path, Path)
    return _check(path, FILE)


def _check(source: object, name: str) -> _Card:
    read = read_yaml(source, name)  # type: ignore[arg-type]  # a path or text, as given by the two callers above
    data = _lines_as_mappings(read.data)
    card = validate(_Card, data, read.positions, also=read.problems)
    problems = _meaning(card, read.positions)
    if problems:
        raise InputError(*problems)
    return card


def _lines_as_mappings(data: object) -> object:
    """A line written as plain text means the same as `{text: ...}`."""
    if isinstance(data, dict):
        for section in data.get("sections") or []:
            if isinstance(section, dict) and isinstance(section.get("lines"), list):
                section["lines"] = [{"text": x} if isinstance(x, str) else x for x in section["lines"]]
    return data


def _meaning(card: _Card, positions: Positions) -> list[Problem]:
    problems = []
    for i, section in enumerate(card.sections):
        for j, line in enumerate(section.lines):
            path = ("sections", i, "lines", j)
            for tag in line.for_:
                if tag not in TAGS:
                    problems.append(
                        positions.problem(
                            path,
                            f"{tag!r} is no class of refrigerant or room known here",
                            allowed=", ".join(TAGS),
                            nearest=nearest(tag, TAGS),
                        )
                    )
            for word in _placeholders(line.text):
                if word not in WORDS:
                    problems.append(
                        positions.problem(
                            path,
                            f"{{{word}}} is no word that can be filled in",
                            allowed=", ".join(WORDS),
                            nearest=nearest(word, WORDS),
                        )
                    )
    return problems


def _placeholders(text: str) -> list[str]:
    try:
        return [name for _, name, _, _ in string.Formatter().parse(text) if name is not None]
    except ValueError:
        return [text]


def _fill(text: str, words: Mapping[str, str]) -> str:
    """The text with its words; only whole names are looked up, so a text cannot reach into objects."""
    parts = []
    for literal, name, _, _ in string.Formatter().parse(text):
        parts.append(literal)
        if name is not None:
            parts.append(words[name])
    return "".join(parts).strip()


def _card_tags(loaded: LoadedPlant, system: System, hazard: Hazards) -> set[str]:
    tags = set(hazard.tags)
    for word in ("flammable", "toxic", "carbon_dioxide"):
        if word not in tags:
            tags.add(f"not_{word}")
    if system.duty == "cold_storage":
        tags.add("walk_in")
    tags.add("outdoors_only" if _all_outdoors(loaded, system) else "indoors")
    return tags


def _all_outdoors(loaded: LoadedPlant, system: System) -> bool:
    """Whether every place that the refrigerant can reach is known to be outdoors."""
    spaces = [loaded.plant.spaces.get(key) for key in reachable_spaces(system)]
    return bool(spaces) and all(space is not None and space.outdoors for space in spaces)


def _words(
    loaded: LoadedPlant, system_id: str, substance: Substance, hazard: Hazards, display: Display
) -> dict[str, str]:
    from commission.quantities import Kind

    system, site = loaded.system(system_id), loaded.plant.plant
    spaces = reachable_spaces(system)
    names = {key: loaded.plant.spaces[key].name or key for key in spaces if key in loaded.plant.spaces}
    where = "; ".join(f"{names.get(key, key)} ({', '.join(parts)})" for key, parts in spaces.items())
    levels = "; ".join(f"{level.shown}: {level.what}, {level.says}" for level in hazard.people)
    return {
        "system": system.name or system_id,
        "refrigerant": f"{substance.name} (safety class {substance.safety_class})",
        "designation": substance.name,
        "safety_class": substance.safety_class,
        "lfl": _flammable_from(substance, display) or TO_FILL,
        "address": ", ".join(part for part in (site.name, site.address or TO_FILL) if part),
        "meeting_point": site.meeting_point or TO_FILL,
        "charge": TO_FILL if system.charge is None else display.text(system.charge, Kind.MASS),
        "where": where or TO_FILL,
        "rooms": ", ".join(names.values()) or TO_FILL,
        "owner": _person(loaded, "owner"),
        "contractor": _person(loaded, "contractor"),
        "effects": " ".join(hazard.effects),
        "levels": f"Levels in the air: {levels}." if levels else "",
        "emergency_number": _emergency_number(loaded),
    }


def _flammable_from(substance: Substance, display: Display) -> str | None:
    """The lower flammability limit as mass in the air, and as a share of volume at 25 °C and one atmosphere."""
    if substance.lfl is None:
        return None
    share = substance.lfl.value * MOLAR_VOLUME / substance.molar_mass
    mass = f"{substance.lfl.value * 1000:.0f} g/m³"
    if display.system != "metric":
        mass = f"{substance.lfl.value * POUNDS_IN_1000_FT3:.1f} lb/1000 ft³"
    return f"{share * 100:.1f} % ({mass})"


MOLAR_VOLUME = 8.314462618 * 298.15 / 101325.0
"""m³/mol of an ideal gas at 25 °C and one atmosphere."""
POUNDS_IN_1000_FT3 = 28.316846592 / 0.45359237
"""lb per 1000 ft³ in one kg/m³."""

EMERGENCY_NUMBERS = {"EU 2024/573": "112", "US 40 CFR 82 and 84": "911"}
"""By the law the plant is under: 112 in Europe (Directive (EU) 2018/1972), 911 in the United States."""


def _emergency_number(loaded: LoadedPlant) -> str:
    """The number of the role `emergency`, else the common number where the law tells the continent."""
    site = loaded.plant.plant
    role = site.people.get("emergency")
    if role is not None and role.phone is not None:
        return role.phone
    return EMERGENCY_NUMBERS.get(site.rules.refrigerant_law, TO_FILL)


def _person(loaded: LoadedPlant, role: str) -> str:
    person = loaded.plant.plant.people.get(role)
    if person is None:
        return TO_FILL
    who = ", ".join(part for part in (person.name, person.firm) if part)
    return f"{who}, {person.phone or TO_FILL}"
