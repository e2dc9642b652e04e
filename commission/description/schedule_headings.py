"""Headings of an equipment schedule: what each column holds, and in which unit."""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cache
from importlib.resources import files

from commission.description.reading import read_yaml
from commission.description.schedule_cells import unit_as_known
from commission.description.tables import Cell, Table
from commission.errors import Problem, nearest
from commission.quantities import Kind
from commission.quantities.units import kinds_of

_BRACKETS = re.compile(r"(.*?)[\[(]([^\[\]]*)[\])]\s*", re.DOTALL)
_BULBS = re.compile(r"[\s/]*\b(?:DB|WB)\b(?:\s*/\s*WB\b)?", re.IGNORECASE)
_TEMPERATURE = re.compile(r"\btemp(?:erature|\.)?\b", re.IGNORECASE)
_SHORT_WORDS = {
    "db": "dry bulb",
    "wb": "wet bulb",
    "dry-bulb": "dry bulb",
    "wet-bulb": "wet bulb",
    "temp": "",
    "clg": "cooling",
    "htg": "heating",
}
_AS_TEMPERATURE = {
    "space_evaporator": "point.room_air",
    "heat_sink.flow": "point.heat_sink_outlet_temperature",
    "heat_source.flow": "point.heat_source_outlet_temperature",
    "water_flow": "point.water_out",
}
"""What a heading means instead where it says that a temperature is meant: the room's air, the flow of a heating."""


@dataclass(frozen=True, slots=True)
class Column:
    """One column: what it holds, its heading as written, and the unit of its bare numbers."""

    key: str
    heading: Cell
    unit: str


def is_heading(texts: Sequence[str]) -> bool:
    """A row of headings names the systems and at least one more thing that is known."""
    keys = {_meaning(text)[0] for text in texts} - {None}
    return "id" in keys and len(keys) > 1


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


def read_columns(table: Table) -> tuple[list[Column], int, list[Problem]]:
    """The meaning of each column, how many rows below the headings are a row of units, and what is wrong with them.

    A heading that is nearly a known one is a problem; any other unknown column is kept as notes. Two columns may mean
    the same (air and water side of different machines), but not in one row.
    """
    known = columns_by_heading()
    units = _unit_row(table)
    found: list[Column] = []
    problems: list[Problem] = []
    for number, cell in enumerate(table.heading):
        below = units[number].text.strip("[]() ") if units and number < len(units) else ""
        key, unit = _meaning(cell.text, below)
        if key is None:
            word = _plain(_split(cell.text)[0])
            near = nearest(word, known, cutoff=0.8)
            if near:
                allowed = ", ".join(headings[0] for headings in schedule_columns().values())
                problems.append(at_cell(cell, "this heading is not known", allowed=allowed, near=near))
            key = "note"
        found.append(Column(key, cell, unit))
    return _with_power(found, problems), 1 if units else 0, problems


def _with_power(columns: list[Column], problems: list[Problem]) -> list[Column]:
    """Columns where one that is headed kW and nothing else is the power input, if the capacity has a column."""
    has_capacity = any(c.key.endswith("capacity") for c in columns)
    result = []
    for column in columns:
        if column.key == "kw":
            if not has_capacity:
                message = "kW can be the capacity or the power input"
                allowed = "power input [kW], cooling capacity [kW] or heating capacity [kW]"
                problems.append(at_cell(column.heading, message, allowed=allowed))
            column = replace(column, key="point.power_input" if has_capacity else "note")
        result.append(column)
    return result


def _meaning(heading: str, below: str = "") -> tuple[str | None, str]:
    """What a heading means and its unit, which stands in brackets, in the row below, or at its end (supply cfm)."""
    known = columns_by_heading()
    word, unit = _split(heading)
    unit = unit_as_known(_BULBS.sub("", below or unit).strip())
    key = known.get(_plain(word))
    start, _, last = word.strip().rpartition(" ")
    if not unit and kinds_of(unit_as_known(last)):
        if key is None and _plain(start) in known:
            key, unit = known[_plain(start)], unit_as_known(last)
        elif not start or (key is not None and len(last) > 1 and last.casefold() != "in"):
            unit = unit_as_known(last)
    if not unit and _plain(word) in ("mbh", "cfm", "gpm", "tons", "kw"):
        unit = unit_as_known(word.strip())
    if key is not None and (_TEMPERATURE.search(word) or Kind.TEMPERATURE in kinds_of(unit)):
        key = _AS_TEMPERATURE.get(key, key)
    return key, unit


def _split(heading: str) -> tuple[str, str]:
    """A heading and the unit in its brackets."""
    match = _BRACKETS.fullmatch(heading)
    return (match[1], match[2].strip()) if match else (heading, "")


def _plain(heading: str) -> str:
    words = re.sub(r"[\s_.,;:/\-]+", " ", heading.casefold()).split()
    words = [_SHORT_WORDS.get(word, word) for word in words]
    return " ".join(w for w in words if w and w != "temperature") or " ".join(words)


def at_cell(cell: Cell, message: str, *, allowed: str | None = None, near: str | None = None) -> Problem:
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
