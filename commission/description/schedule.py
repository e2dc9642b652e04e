"""An equipment schedule, one row per system, becomes a first description.

Headings are looked up in `schedule_columns.yaml`; cells are checked by the same models as a description, so that every
message names row, column and heading of the schedule.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import Any

from commission.description.assembling import PLANT_FILE
from commission.description.checking import bounded, check
from commission.description.looked import Looked
from commission.description.meaning import problems_of_meaning
from commission.description.model import Plant
from commission.description.plant import site_pressure
from commission.description.positions import DescriptionError, KeyPath, Mark, Positions, dotted
from commission.description.reference import SCHEMA_FILE
from commission.description.schedule_cells import Numbers, dry_and_wet, numbers_of, quantity_text
from commission.description.schedule_duties import duty_described, duty_named, meant_key, plain, usual_media
from commission.description.schedule_headings import Column, at_cell, is_heading, main_headings, read_columns
from commission.description.schedule_text import description_text
from commission.description.starting import schema_text, write_new
from commission.description.tables import WESTERN, Cell, Table, read_table
from commission.errors import Problem, shorten
from commission.quantities import Kind, QuantityError, parse

_US_UNITS = re.compile(r"°?F\b|cfm|gpm|Btu|MBH|psi|\btons?\b|\bft|\blb", re.IGNORECASE)
_METRIC_UNITS = re.compile(r"°?C\b|m[3³]|\b[lL]/|\bkg|\bbar\b|Pa\b|\bm[2²]?\b")
_ELECTRICAL = re.compile(r"([0-9]{3}) *V? *[-/,] *([13]) *(?:ph)? *[-/,] *(?:50|60) *(?:Hz)?", re.IGNORECASE)
_SENTENCE = re.compile(r"[:;,]|\.\s|\s\S+\s|^.{21}|^(?:notes?|remarks?|legend|end)$", re.IGNORECASE)
_TELLING = ("name", "nameplate.maker_type", "serves")
"""Columns whose words may say what a system is for, the one that is looked at first in front."""
_SUMS = {"total", "totals", "sum", "subtotal", "sub total", "grand total"}

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
    "nameplate.year", "nameplate.phases", "electrical", "point.source", "note",
)  # fmt: skip
"""Columns of words, whose cells are taken as they stand."""


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
    numbers: Numbers = field(default_factory=Numbers)
    remarks: list[str] = field(default_factory=list)
    unknown: list[str] = field(default_factory=list)

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
    table = read_table(schedule, schedule.name, is_heading)
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
    doubt = [f"Read as {WESTERN}: look at umlauts and accents."] if table.encoding == WESTERN else []
    text = description_text(data, schedule.name, sheet.lines, sheet.notes, [*titles, *sheet.remarks, *doubt])
    return write_new(folder, {PLANT_FILE: text, SCHEMA_FILE: schema_text()})


def _with_heading(problem: Problem, sheet: _Sheet) -> Problem:
    """In a schedule a person looks for the heading of the column, not for a key path."""
    if problem.path not in {"", *map(dotted, sheet.positions)}:  # a key that is missing has no cell
        word = main_headings().get(problem.path.rpartition(".")[2])
        wanted = f"a column headed {word}" if word else None
        return replace(problem, allowed="; ".join(filter(None, (wanted, problem.allowed))) or None)
    if problem.path.endswith(".rated_points.0") and problem.allowed:
        headings = [main_headings().get(key, key) for key in re.split(r", | or ", problem.allowed)]
        side = "heat_sink" if "heat_sink" in problem.allowed else "heat_source"
        system = sheet.systems[problem.path.split(".", 1)[1].removesuffix(".rated_points.0")]
        if "temperature" in problem.allowed and system[side]["medium"] == "water":
            headings += ["water in", "water out"]
        allowed = f"a column headed {' or '.join(headings)}"
        if sheet.unknown:
            allowed += f"; columns that were not understood: {', '.join(map(shorten, sheet.unknown))}"
        return replace(problem, path=problem.path.removesuffix(".rated_points.0"), allowed=allowed)
    heading = sheet.headings.get((problem.line or 0, problem.column or 0))
    return replace(problem, path=f"column {shorten(heading, 60)}") if heading else problem


def _read(table: Table, file: str) -> _Sheet:
    """The rows of a schedule as plain data of systems, with the place of every cell."""
    texts = (cell.text for row in table.rows for cell in row)
    sheet = _Sheet(numbers=numbers_of(texts, semicolons=table.delimiter == ";"))
    top = table.heading[0].place
    for path in ((), ("plant",), ("systems",)):
        sheet.positions.marks[path] = Mark(top, top, None)
    columns, skip, problems = read_columns(table)
    sheet.problems += problems
    for column in columns:
        sheet.weigh(column.unit)
    if not any(c.key == "id" for c in columns):
        allowed = "a column headed tag, system, mark or unit"
        sheet.problems.append(Problem("there is no column that names the systems", file, top.line, 1, allowed=allowed))
        return sheet
    if not table.rows[skip:]:
        sheet.problems.append(Problem("there is no system below the headings", file, top.line, 1))
    sheet.unknown = [c.heading.text for c in columns if c.key == "note"]
    for row in table.rows[skip:]:
        cells = [(c, cell) for c, cell in zip(columns, row, strict=False) if cell.text]
        if _is_remark(cells, begun=bool(sheet.remarks)):
            sheet.remarks.append(" ".join(cell.text for _, cell in cells))
        else:
            _row(cells, row, sheet)
    return sheet


def _is_remark(cells: Sequence[tuple[Column, Cell]], *, begun: bool) -> bool:
    """Whether a row is no system: a sum, a heading between rows, or a note below the table, which stands alone."""
    first = cells[0][1].text
    if plain(first) in _SUMS:
        return True
    return len(cells) == 1 and (begun or cells[0][0].key != "id" or _SENTENCE.search(first) is not None)


def _row(cells: list[tuple[Column, Cell]], row: tuple[Cell, ...], sheet: _Sheet) -> None:
    """One system; every cell goes to its key path, or to the notes."""
    start = row[0].place
    cell = next((cell for column, cell in cells if column.key == "id"), None)
    if cell is None:
        sheet.problems.append(Problem("this row names no system", start.file, start.line, start.column))
        return
    identity = cell.text
    if identity in sheet.systems:
        sheet.problems.append(at_cell(cell, f"this system stands in line {sheet.lines[identity]} already"))
        return
    path: KeyPath = ("systems", identity)
    sheet.lines[identity] = start.line
    sheet.positions.marks[path] = Mark(cell.place, cell.place, None)
    system: dict[str, Any] = {}
    sheet.systems[identity] = system
    duty = _duty(cells, system, path, sheet)
    media = _media(cells, duty)
    taken: dict[str, tuple[str, str]] = {}
    for column, one in cells:
        sheet.headings[one.place.line, one.place.column] = column.heading.text
        _cell(column, one, meant_key(_by_cell(column, one), duty, media), taken, sheet, identity)
    for side, medium in zip(("heat_source", "heat_sink"), media, strict=True):
        system[side] = {"medium": medium, **system.get(side, {})}


def _duty(cells: Sequence[tuple[Column, Cell]], system: dict[str, Any], path: KeyPath, sheet: _Sheet) -> str:
    """The duty of a row: of its own column, else as the description of the system says it in words."""
    duty = next((duty_named(cell.text) for column, cell in cells if column.key == "duty"), "")
    if duty:
        return duty
    telling = [cell for key in _TELLING for column, cell in cells if column.key == key]
    for cell in telling:
        told = duty_described(cell.text)
        if told:
            system["duty"] = told
            sheet.positions.marks[*path, "duty"] = Mark(cell.place, cell.place, cell.text)
            sheet.notes.setdefault(str(path[1]), []).append(
                f"duty: read from {cell.text!r}; correct it if it is another"
            )
            return told
    return ""


def _media(cells: Sequence[tuple[Column, Cell]], duty: str) -> tuple[str, str]:
    """Source and sink medium: of their own columns, else the usual ones of the duty."""
    written = {column.key: cell.text.lower() for column, cell in cells}
    source, sink = usual_media(duty)
    return written.get("heat_source.medium", source), written.get("heat_sink.medium", sink)


def _by_cell(column: Column, cell: Cell) -> str:
    """The key of a column, or of this cell: a temperature below the heading `room` is that of its air."""
    if column.key.startswith("space_"):
        try:
            parse(cell.text, Kind.TEMPERATURE)
        except QuantityError:
            return column.key
        return "point.room_air"
    return column.key


def _cell(
    column: Column, cell: Cell, key: str | None, taken: dict[str, tuple[str, str]], sheet: _Sheet, identity: str
) -> None:
    """Put one cell where it belongs: its key path, several of them, or the notes."""
    path: KeyPath = ("systems", identity)
    try:
        text = _text(column.unit, key or "note", cell.text, sheet.numbers)
    except QuantityError as error:
        sheet.problems.append(at_cell(cell, error.problems[0].message))
        return
    parts = {key or "note": text}
    pair = dry_and_wet(cell.text, column.unit) if key and key.endswith("let_temperature") else None
    if pair and key:
        parts = {key: pair[0], re.sub("_(in|out)let_temperature$", "_wet_bulb", key): pair[1]}
    power = _ELECTRICAL.fullmatch(cell.text) if key == "electrical" else None
    if power:
        parts = {"nameplate.voltage": f"{power[1]} V", "nameplate.phases": power[2]}
    for one, value in parts.items():
        other, before = taken.setdefault(one, (column.heading.text, value))
        if other != column.heading.text and one != "note" and not _same_power(before, value):
            message = f"this says the same as the column {shorten(other, 60)!r}; fill in one of them"
            sheet.problems.append(at_cell(cell, message))
        elif one in ("note", "electrical") or other != column.heading.text:
            sheet.notes.setdefault(identity, []).append(f"{column.heading.text}: {cell.text}")
        else:
            if not column.unit and value[:1].isdigit():
                sheet.weigh(value)
            _put(sheet, sheet.systems[identity], path, one, value, cell)


def _same_power(one: str, other: str) -> bool:
    """Whether two cells say one capacity in two units, such as 24 MBH and 2 tons."""
    try:
        first, second = parse(one, Kind.HEAT_FLOW), parse(other, Kind.HEAT_FLOW)
    except QuantityError:
        return False
    return abs(first - second) <= 0.02 * max(abs(first), abs(second))


def _text(unit: str, key: str, text: str, numbers: Numbers) -> str:
    """The cell as a description would have it: a bare number takes the unit of its column; words of the trade.

    Raises:
        QuantityError: the number is grouped so that it can mean two things.
    """
    if key == "duty":
        return duty_named(text)
    if key.endswith(".medium"):
        return text.lower()
    if key in _WORDS or key.startswith("space_"):
        return text
    return quantity_text(text, unit, numbers, capacity=key.endswith("_capacity"))


def _put(sheet: _Sheet, system: dict[str, Any], path: KeyPath, key: str, text: str, cell: Cell) -> None:
    """Put one cell into the data of its system, and note where it stands."""
    inside: KeyPath
    if key == "id":
        return
    if key.startswith("space_"):
        part = key.removeprefix("space_")
        space = re.sub(r"[^\w -]+", " ", text).strip() or text
        outdoors = {"outdoors": "yes"} if _OUTDOORS & set(plain(text).split()) else {}
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
