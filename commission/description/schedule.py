"""An equipment schedule, one row per system, becomes a first description.

Headings are looked up in `schedule_columns.yaml`; cells are checked by the same models as a description, so that every
message names row, column and heading of the schedule.
"""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from functools import cache
from importlib.resources import files
from pathlib import Path
from typing import Any

from commission.description.assembling import PLANT_FILE
from commission.description.checking import bounded, check
from commission.description.looked import Looked
from commission.description.meaning import problems_of_meaning
from commission.description.model import Plant
from commission.description.plant import site_pressure
from commission.description.positions import DescriptionError, KeyPath, Mark, Positions, dotted
from commission.description.reading import read_yaml
from commission.description.reference import SCHEMA_FILE
from commission.description.schedule_text import description_text
from commission.description.starting import schema_text, write_new
from commission.description.tables import Cell, Table, read_table
from commission.errors import Problem, nearest, shorten
from commission.quantities import QuantityError, parse_number

_BRACKETS = re.compile(r"(.*?)[\[(]([^\[\]]*)[\])]\s*", re.DOTALL)
_US_UNITS = re.compile(r"°?F\b|cfm|gpm|Btu|MBH|psi|\btons?\b|\bft|\blb", re.IGNORECASE)
_METRIC_UNITS = re.compile(r"°?C\b|m[3³]|\b[lL]/|\bkg|\bbar\b|Pa\b|\bm[2²]?\b")
_SHORT_WORDS = {"db": "dry bulb", "wb": "wet bulb", "dry-bulb": "dry bulb", "wet-bulb": "wet bulb", "temp": ""}

_DUTY_WORDS = {
    "cold_storage": ("cold storage", "cold room", "freezer", "freezer room", "walk in cooler", "walk in freezer",
                     "refrigeration", "cooler"),
    "comfort_cooling": ("comfort cooling", "air conditioning", "air conditioner", "ac", "dx cooling", "split",
                        "split system", "rooftop unit", "cooling"),
    "liquid_cooling": ("liquid cooling", "chiller", "water chiller", "chilled water"),
    "space_heating": ("space heating", "heat pump", "heating"),
    "water_heating": ("water heating", "hot water", "heat pump water heater", "domestic hot water", "dhw"),
}  # fmt: skip
_MEDIA_OF_DUTY = {
    "cold_storage": ("air", "air"),
    "comfort_cooling": ("air", "air"),
    "liquid_cooling": ("water", "air"),
    "space_heating": ("air", "water"),
    "water_heating": ("air", "water"),
}
"""Usual media, taken where the schedule has no column for them and written into the description to be looked at."""


_OUTDOORS = {
    "outdoors",
    "outdoor",
    "outside",
    "roof",
    "rooftop",
    "yard",
    "garden",
    "court",
    "courtyard",
    "balcony",
    "terrace",
}
"""Words in the name of a place that say it is in the open air; the description then shows `outdoors: yes`."""

_WORDS = (
    "id", "name", "duty", "serves", "refrigerant", "installed_on", "nameplate.maker_type", "nameplate.serial",
    "nameplate.year", "nameplate.phases", "point.source", "note",
)  # fmt: skip
"""Columns of words, whose cells are taken as they stand."""


@dataclass(frozen=True, slots=True)
class Column:
    """One column: what it holds, its heading as written, and the unit of its bare numbers."""

    key: str
    heading: Cell
    unit: str


@dataclass(slots=True)
class _Sheet:
    """A schedule on its way into plain data."""

    positions: Positions = field(default_factory=Positions)
    problems: list[Problem] = field(default_factory=list)
    headings: dict[tuple[int, int], str] = field(default_factory=dict)
    spaces: dict[str, dict[str, str]] = field(default_factory=dict)
    systems: dict[str, Any] = field(default_factory=dict)
    lines: dict[str, int] = field(default_factory=dict)
    notes: dict[str, list[str]] = field(default_factory=dict)
    us: int = 0

    def weigh(self, text: str) -> None:
        """Count a unit towards US or metric, to print the manual as the schedule is written."""
        self.us += bool(_US_UNITS.search(text)) - bool(_METRIC_UNITS.search(text))


def from_schedule(schedule: Path | str, folder: Path | str) -> tuple[Path, ...]:
    """Write a first description of every system in an equipment schedule (CSV) into `folder`.

    Raises:
        DescriptionError: all that is wrong with the schedule, each with file, line, column and heading.
        InputError: a file that is there already, or a folder that cannot be written to.
    """
    schedule, folder = Path(schedule), Path(folder)
    table = read_table(schedule, schedule.name, _is_heading)
    sheet = _read(table, schedule.name)
    if not sheet.systems:
        raise DescriptionError(*bounded(sheet.problems))
    data = _data(sheet, folder)
    plant, problems = check(Plant, data, sheet.positions)
    problems = [*sheet.problems, *problems]
    if plant is not None and not problems:
        problems = problems_of_meaning(Looked(plant, sheet.positions, site_pressure(plant)))
    if problems:
        raise DescriptionError(*bounded([_with_heading(p, sheet) for p in problems]))
    titles = [" ".join(cell.text for cell in row if cell.text) for row in table.titles]
    text = description_text(data, schedule.name, sheet.lines, sheet.notes, titles)
    return write_new(folder, {PLANT_FILE: text, SCHEMA_FILE: schema_text()})


def _is_heading(texts: Sequence[str]) -> bool:
    """A row of headings names the systems and at least one more thing that is known."""
    keys = {columns_by_heading().get(_plain(_split(text)[0])) for text in texts} - {None}
    return "id" in keys and len(keys) > 1


def _split(heading: str) -> tuple[str, str]:
    """A heading and the unit in its brackets."""
    match = _BRACKETS.fullmatch(heading)
    return (match[1], match[2].strip()) if match else (heading, "")


def _with_heading(problem: Problem, sheet: _Sheet) -> Problem:
    """In a schedule a person looks for the heading of the column, not for a key path."""
    if problem.path not in {"", *map(dotted, sheet.positions)}:  # a key that is missing has no cell
        word = main_headings().get(problem.path.rpartition(".")[2])
        wanted = f"a column headed {word}" if word else None
        return replace(problem, allowed="; ".join(filter(None, (wanted, problem.allowed))) or None)
    heading = sheet.headings.get((problem.line or 0, problem.column or 0))
    return replace(problem, path=f"column {shorten(heading, 60)}") if heading else problem


def main_headings() -> Mapping[str, str]:
    """The heading named first for each key path, such as `duty` or `sink inlet`, by the last part of the path."""
    return {key.rpartition(".")[2]: headings[0] for key, headings in schedule_columns().items()}


@cache
def schedule_columns() -> Mapping[str, list[str]]:
    """What each column may hold (a key path of a description) and the headings that mean it, for the manual too."""
    text = (files("commission.description") / "schedule_columns.yaml").read_text(encoding="utf-8")
    book: Mapping[str, list[str]] = read_yaml(text, "schedule_columns.yaml").data
    return book


@cache
def columns_by_heading() -> Mapping[str, str]:
    """Every known heading in its plain form, with what it means."""
    table: dict[str, str] = {}
    for key, headings in schedule_columns().items():
        for heading in [*headings, *([key.partition(".")[2]] if "." in key else [])]:
            table.setdefault(_plain(heading), key)
    return table


def _plain(heading: str) -> str:
    words = re.sub(r"[\s_.,;:/\-]+", " ", heading.casefold()).split()
    words = [_SHORT_WORDS.get(word, word) for word in words]
    return " ".join(w for w in words if w and w != "temperature") or " ".join(words)


def _columns(table: Table, sheet: _Sheet) -> tuple[list[Column], int]:
    """The meaning of each column, and how many rows below the headings are a row of units.

    A heading that is nearly a known one is a problem; any other unknown column is kept as notes. Two columns may mean
    the same (air and water side of different machines), but not in one row.
    """
    known = columns_by_heading()
    units = _unit_row(table)
    found: list[Column] = []
    for number, cell in enumerate(table.heading):
        word, unit = _split(cell.text)
        if units and number < len(units) and units[number].text:
            unit = units[number].text.strip("[]() ")
        key = known.get(_plain(word))
        if key is None:
            near = nearest(_plain(word), known, cutoff=0.8)
            if near:
                allowed = ", ".join(headings[0] for headings in schedule_columns().values())
                sheet.problems.append(_at(cell, "this heading is not known", allowed=allowed, near=near))
            key = "note"
        sheet.weigh(unit)
        found.append(Column(key, cell, unit))
    return found, 1 if units else 0


def _at(cell: Cell, message: str, *, allowed: str | None = None, near: str | None = None) -> Problem:
    """A problem of one cell, shown as it is written."""
    place = cell.place
    return Problem(message, place.file, place.line, place.column, "", cell.text, allowed, near)


def _unit_row(table: Table) -> tuple[Cell, ...] | None:
    """The row right below the headings, where no cell holds a digit: then it holds units."""
    first = table.rows[0] if table.rows else ()
    id_column = next((n for n, c in enumerate(table.heading) if columns_by_heading().get(_plain(c.text)) == "id"), None)
    if id_column is None or not first or (id_column < len(first) and first[id_column].text):
        return None
    return None if any(re.search(r"[4-9]|[0-9]{2}", cell.text) for cell in first) else first


def _read(table: Table, file: str) -> _Sheet:
    """The rows of a schedule as plain data of systems, with the place of every cell."""
    sheet = _Sheet()
    top = table.heading[0].place
    for path in ((), ("plant",), ("systems",)):
        sheet.positions.marks[path] = Mark(top, top, None)
    columns, skip = _columns(table, sheet)
    if not any(c.key == "id" for c in columns):
        allowed = "a column headed tag, system, mark or unit"
        sheet.problems.append(Problem("there is no column that names the systems", file, top.line, 1, allowed=allowed))
        return sheet
    if not table.rows[skip:]:
        sheet.problems.append(Problem("there is no system below the headings", file, top.line, 1))
    for row in table.rows[skip:]:
        _row([(c, cell) for c, cell in zip(columns, row, strict=False) if cell.text], row, sheet)
    return sheet


def _row(cells: list[tuple[Column, Cell]], row: tuple[Cell, ...], sheet: _Sheet) -> None:
    """One system; every cell goes to its key path, or to the notes."""
    start = row[0].place
    cell = next((cell for column, cell in cells if column.key == "id"), None)
    if cell is None:
        sheet.problems.append(Problem("this row names no system", start.file, start.line, start.column))
        return
    identity = cell.text
    if identity in sheet.systems:
        sheet.problems.append(_at(cell, f"this system stands in line {sheet.lines[identity]} already"))
        return
    path: KeyPath = ("systems", identity)
    sheet.lines[identity] = start.line
    sheet.positions.marks[path] = Mark(cell.place, cell.place, None)
    system: dict[str, Any] = {}
    sheet.systems[identity] = system
    taken: dict[str, str] = {}
    for column, one in cells:
        sheet.headings[one.place.line, one.place.column] = column.heading.text
        other = taken.setdefault(column.key, column.heading.text)
        if other != column.heading.text and column.key != "note":
            message = f"this says the same as the column {shorten(other, 60)!r}; fill in one of them"
            sheet.problems.append(_at(one, message))
            continue
        text = _text(column, one.text)
        if column.key == "note":
            sheet.notes.setdefault(identity, []).append(f"{column.heading.text}: {text}")
            continue
        if not column.unit and text[:1].isdigit():
            sheet.weigh(text)
        _put(sheet, system, path, column.key, text, one)
    duty = system.get("duty", "")
    media = _MEDIA_OF_DUTY.get(duty, ("air", "air"))  # an unknown duty is a problem of its own
    for side, medium in zip(("heat_source", "heat_sink"), media, strict=True):
        system[side] = {"medium": medium, **system.get(side, {})}


def _text(column: Column, text: str) -> str:
    """The cell as a description would have it: a bare number takes the unit of its column; words of the trade."""
    if column.key == "duty":
        word = _plain(text)
        return next((duty for duty, words in _DUTY_WORDS.items() if word in words or word == _plain(duty)), text)
    if column.key.endswith(".medium"):
        return text.lower()
    if column.key in _WORDS or column.key.startswith("space_"):
        return text
    try:
        rest = parse_number(text)[1]
    except QuantityError:
        return f"{text} {column.unit}".strip() if text[-1:].isdigit() else text
    number = text[: len(text) - len(rest)].strip().replace(",", ".")
    unit = rest or column.unit
    if column.key.endswith("_capacity") and unit.lower() in ("ton", "tons"):
        unit = "refrigeration tons"  # no other ton is a capacity
    return f"{number} {unit}".strip()


def _put(sheet: _Sheet, system: dict[str, Any], path: KeyPath, key: str, text: str, cell: Cell) -> None:
    """Put one cell into the data of its system, and note where it stands."""
    inside: KeyPath
    if key == "id":
        return
    if key.startswith("space_"):
        part = key.removeprefix("space_")
        space = re.sub(r"[^\w -]+", " ", text).strip() or text
        outdoors = {"outdoors": "yes"} if _OUTDOORS & set(_plain(text).split()) else {}
        sheet.spaces.setdefault(space, {"name": text, **outdoors})
        system.setdefault("spaces", {})[part] = space
        inside = ("spaces", part)
    elif key.startswith("point."):
        points = system.setdefault("rated_points", [{}])
        points[0][key.removeprefix("point.")] = text
        inside = ("rated_points", 0, key.removeprefix("point."))
        sheet.positions.marks.setdefault((*path, "rated_points", 0), sheet.positions.marks[path])
    else:
        parts = key.split(".")
        holder = system
        for part in parts[:-1]:
            holder = holder.setdefault(part, {})
        holder[parts[-1]] = text
        inside = tuple(parts)
    sheet.positions.marks[*path, *inside] = Mark(cell.place, cell.place, text)


def _data(sheet: _Sheet, folder: Path) -> dict[str, Any]:
    """The whole description as plain data, its parts in the order in which a person would write them."""
    name = folder.name or folder.resolve().name or "New plant"
    us = sheet.us > 0
    data: dict[str, Any] = {"plant": {"name": name, "units": "us_customary" if us else "metric"}}
    if sheet.spaces:
        data["spaces"] = sheet.spaces
        for space in sheet.spaces:
            sheet.positions.marks.setdefault(("spaces", space), sheet.positions.marks[()])
    data["systems"] = sheet.systems
    return data
