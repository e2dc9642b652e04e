"""Put a description together from its parts: files named by `include`, supplier's tables, and `like`."""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from pydantic import TypeAdapter, ValidationError

from commission.description.fields import FileName
from commission.description.positions import DescriptionError, KeyPath, Mark, Positions
from commission.description.reading import MAX_PARTS, read_yaml
from commission.description.tables import Table, read_table
from commission.description.taking_over import at, take_over
from commission.errors import Problem
from commission.quantities import QuantityError, parse_number

PLANT_FILE = "plant.yaml"
MAX_FILES = 200

_MERGED = ("spaces", "instruments", "systems", "refrigerants")
_TABLES: tuple[KeyPath, ...] = (
    ("rated_points",),
    ("condensing_unit", "rated_points"),
    ("compressor", "table", "points"),
)
"""Lists of points, inside a system, that may be given as `{file: tables/unit.csv}`."""

_HEADING = re.compile(r"\s*([a-z_]+)\s*(?:[\[(](.*)[\])])?\s*", re.DOTALL)


@dataclass(slots=True)
class Assembled:
    """The plain data of a whole plant, where each part stands, the problems so far, and the bytes of each file."""

    folder: Path
    data: Any = None
    positions: Positions = field(default_factory=Positions)
    problems: list[Problem] = field(default_factory=list)
    contents: dict[str, bytes] = field(default_factory=dict)


def assemble(folder: Path) -> Assembled:
    """Read `plant.yaml`, the files that it includes and the tables they name, and resolve `like`.

    Raises:
        DescriptionError: a file cannot be read or is not YAML; one problem for each such file.
    """
    main = read_yaml(folder / PLANT_FILE, PLANT_FILE)
    whole = Assembled(folder, main.data, main.positions, list(main.problems), {PLANT_FILE: main.content})
    if isinstance(whole.data, dict):
        unread = _include(whole)
        systems = whole.data.get("systems")
        if isinstance(systems, dict):
            unread += _read_tables(whole, systems)
            if not unread:
                whole.problems += take_over(systems, whole.positions)
        if unread:
            raise DescriptionError(*whole.problems, *unread)
    return whole


def file_name(text: Any) -> str | None:
    """`text` where it names a file inside the plant's folder, else None."""
    try:
        return str(TypeAdapter(FileName).validate_python(text))
    except ValidationError:
        return None


def within(folder: Path, name: str) -> Path:
    """The path of a named file, which no symbolic link may lead out of the folder.

    Raises:
        DescriptionError: it leads out.
    """
    path = folder / name
    if path.exists() and not path.resolve().is_relative_to(folder.resolve()):
        raise DescriptionError(Problem("this file leads outside the folder of the plant", file=name))
    return path


def _include(whole: Assembled) -> list[Problem]:
    """Merge the included files; a name that is no file name is left to the check of shape."""
    unread: list[Problem] = []
    names = whole.data.get("include", [])
    for number, written in enumerate(names[:MAX_FILES] if isinstance(names, list) else []):
        name = file_name(written)
        if name is None:
            continue
        if name in whole.contents:
            whole.problems.append(
                whole.positions.problem(("include", number), "this file is part of the plant already")
            )
            continue
        try:
            read = read_yaml(within(whole.folder, name), name)
        except DescriptionError as error:
            unread += [_named(p, whole, ("include", number)) for p in error.problems]
            continue
        whole.contents[name] = read.content
        whole.problems += read.problems
        if isinstance(read.data, dict):
            _merge(whole, read.data, read.positions)
            _bound(whole, ("include", number))
        else:
            whole.problems.append(read.positions.problem((), "keys with values are wanted here"))
    if isinstance(names, list) and len(names) > MAX_FILES:
        whole.problems.append(whole.positions.problem(("include", MAX_FILES), f"more than {MAX_FILES} files"))
    return unread


def _bound(whole: Assembled, path: KeyPath) -> None:
    """All files together may hold no more than one file may."""
    if len(whole.positions.marks) > MAX_PARTS:
        message = f"the plant holds more than {MAX_PARTS} keys and values with this file"
        raise DescriptionError(*whole.problems, whole.positions.problem(path, message))


def _named(problem: Problem, whole: Assembled, path: KeyPath) -> Problem:
    """A problem of a whole file gets the place where the file is named."""
    if problem.line is not None:
        return problem
    return whole.positions.problem(path, problem.message, allowed=problem.allowed)


def _merge(whole: Assembled, data: dict[str, Any], positions: Positions) -> None:
    """Add the sections of an included file; what stands in two files is a problem that names both."""
    shift: dict[KeyPath, int] = {}
    twice: set[KeyPath] = set()
    for key, value in data.items():
        there = whole.data.get(key)
        if key == "include":
            whole.problems.append(positions.problem((key,), f"only {PLANT_FILE} includes further files", at_key=True))
            twice.add((key,))
        elif there is None:
            whole.data[key] = dict(value) if isinstance(value, dict) and key in _MERGED else value
        elif key in _MERGED and isinstance(there, dict) and isinstance(value, dict):
            for inner, part in value.items():
                if inner in there:
                    twice.add((key, inner))
                else:
                    there[inner] = part
        elif key == "documents" and isinstance(there, list) and isinstance(value, list):
            shift[(key,)] = len(there)
            there += value
        else:
            twice.add((key,))
    for path in sorted(twice - {("include",)}, key=str):
        first = whole.positions.mark(path).key
        whole.problems.append(positions.problem(path, f"this stands in {first} already", at_key=True))
    for path, mark in positions.marks.items():
        if path[:1] not in twice and path[:2] not in twice:
            moved = path
            if path[:1] in shift and len(path) > 1:
                moved = (path[0], int(path[1]) + shift[path[:1]], *path[2:])
            whole.positions.marks.setdefault(moved, mark)


def _read_tables(whole: Assembled, systems: dict[str, Any]) -> list[Problem]:
    """Put the points of a CSV in the place of `{file: ...}`."""
    unread: list[Problem] = []
    for identity, system in systems.items():
        for inside in _TABLES:
            holder = at(system, inside[:-1])
            asked = holder.get(inside[-1]) if isinstance(holder, dict) else None
            if not isinstance(asked, dict):
                continue
            path: KeyPath = ("systems", identity, *inside)
            name = file_name(asked.get("file"))
            if name is None or set(asked) != {"file"}:
                unread.append(
                    whole.positions.problem(
                        path, "a list of points is wanted here", allowed="a list, or {file: tables/unit.csv}"
                    )
                )
                continue
            try:
                table = read_table(within(whole.folder, name), name)
            except DescriptionError as error:
                unread += [_named(p, whole, (*path, "file")) for p in error.problems]
                continue
            whole.contents[name] = table.content
            holder[inside[-1]] = _points(whole, table, path)
            _bound(whole, path)
    return unread


def _points(whole: Assembled, table: Table, path: KeyPath) -> list[dict[str, str]]:
    """The rows of a supplier's table as points; a bare number takes the unit of its heading."""
    columns: list[tuple[str, str]] = []
    for cell in table.heading:
        match = _HEADING.fullmatch(cell.text)
        key, unit = (match[1], (match[2] or "").strip()) if match else (cell.text, "")
        if key in (known for known, _ in columns):
            whole.problems.append(
                Problem(
                    "this heading stands twice", cell.place.file, cell.place.line, cell.place.column, value=cell.text
                )
            )
        columns.append((key, unit))
    points = []
    for number, row in enumerate(table.rows):
        point: dict[str, str] = {}
        whole.positions.marks[*path, number] = Mark(row[0].place, row[0].place, None)
        for (key, unit), cell in zip(columns, row, strict=False):
            if cell.text:
                point[key] = _with_unit(cell.text, unit)
                whole.positions.marks[*path, number, key] = Mark(cell.place, cell.place, point[key])
        points.append(point)
    return points


def _with_unit(text: str, unit: str) -> str:
    try:
        rest = parse_number(text)[1]
    except QuantityError:
        return text
    return f"{text} {unit}" if unit and not rest else text
