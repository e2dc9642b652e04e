"""Read a logger's file: SI values in time order, and a report of everything about the rows that was not in order."""

from __future__ import annotations

import csv
import datetime as dt
import math
from array import array
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

from commission.errors import InputError, Problem, shorten
from commission.errors import nearest as nearest_word
from commission.quantities import NOMENCLATURE, Reference, find_unit
from commission.records.logger.clock import compile_form
from commission.records.logger.mapping import LoggerMapping

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray

MOST_LISTED = 20
"""Rows that are named one by one; more are counted."""
_GAP = 3.0
"""A step of more than so many usual intervals is a gap: one missing row is a hiccup, two are a hole."""
_CYCLE = "the column that shows the cycles"
"""Name of its numbers beside those of the quantities."""


class LogError(InputError):
    """A logger's file cannot be used with this mapping."""


@dataclass(frozen=True, slots=True)
class Gap:
    """A stretch without rows, in seconds since 1970-01-01 UTC."""

    start: float
    end: float


@dataclass(frozen=True, slots=True)
class LogReport:
    """What was found about the rows: nothing is mended without being said.

    `unordered` rows were sorted; of `repeated` rows (same moment) the first counts; `unreadable` counts cells that hold
    neither a number nor a word for a missing one, `missing` those that do; `bad_times` rows have no usable time.
    """

    rows: int
    unordered: int
    repeated: int
    missing: int
    unreadable: int
    bad_times: int
    repeated_hour: int
    interval: float
    gaps: tuple[Gap, ...]
    problems: tuple[Problem, ...]


@dataclass(frozen=True)
class Log:
    """A logger's file in SI (pressures Pa absolute). `times` in seconds since 1970-01-01 UTC, rising; NaN: no value.

    `cycle` holds the numbers of the column that shows the cycles, as the logger writes them, where the mapping names
    one.
    """

    name: str
    mapping: LoggerMapping
    barometric_pressure: float
    times: NDArray[np.float64]
    values: Mapping[str, NDArray[np.float64]]
    report: LogReport
    cycle: NDArray[np.float64] | None = None

    def moment(self, seconds: float) -> dt.datetime:
        """A time of the log as a moment in UTC."""
        return dt.datetime.fromtimestamp(seconds, dt.UTC)


def read_log(path: Path, mapping: LoggerMapping, barometric_pressure: float) -> Log:
    """Read a logger's file; gauge pressures become absolute at `barometric_pressure` (Pa).

    Raises:
        LogError: the file cannot be read, a column is not in it, or no row of it can be used.
    """
    collected = _Collected(path.name, mapping)
    encoding = "utf-8-sig" if mapping.encoding == "utf-8" else mapping.encoding
    try:
        with path.open(encoding=encoding, newline="") as file:
            reader = csv.reader(file, delimiter=mapping.separator)
            collected.take(reader, _header(reader, mapping, path.name))
    except OSError as error:
        raise LogError(Problem(f"this file cannot be read: {error.strerror}", file=path.name)) from None
    except UnicodeError:
        message = f"this file is not text in {mapping.encoding}"
        raise LogError(Problem(message, file=path.name, allowed="another encoding in the mapping")) from None
    except csv.Error as error:
        raise LogError(Problem(f"this file cannot be read in columns: {error}", file=path.name)) from None
    if not collected.times:
        problems = collected.problems or [Problem("the file holds no rows", file=path.name)]
        raise LogError(*problems)
    return _in_order(path.name, mapping, barometric_pressure, collected)


def _header(reader: Iterator[list[str]], mapping: LoggerMapping, name: str) -> dict[str, int]:
    """Column numbers by name; the rows above the header and the unit rows below are passed over."""
    rows = [next(reader, []) for _ in range(mapping.rows_above_header + 1)]
    header = {cell.strip().strip("\ufeff"): n for n, cell in reversed(list(enumerate(rows[-1])))}
    wanted = [*mapping.time_names, *_columns_of(mapping)]
    missing = [w for w in wanted if w not in header]
    if missing:
        line = mapping.rows_above_header + 1
        there = shorten(", ".join(sorted(header, key=header.__getitem__)) or "nothing", 300)
        raise LogError(
            *(
                Problem(
                    "the file has no such column", name, line, 1, "columns", word, there, nearest_word(word, header)
                )
                for word in missing
            )
        )
    for _ in range(mapping.unit_rows):
        next(reader, [])
    return header


def _columns_of(mapping: LoggerMapping) -> dict[str, list[str]]:
    """The columns that are read, each with the names under which its numbers are kept."""
    found = {name: [column.quantity] for name, column in mapping.columns.items()}
    if mapping.cycle is not None:
        found.setdefault(mapping.cycle.column, []).append(_CYCLE)
    return found


class _Collected:
    """Rows as they come: times, numbers in the logger's units, counts, and the first of what cannot be read."""

    def __init__(self, name: str, mapping: LoggerMapping) -> None:
        self.name, self.mapping = name, mapping
        self.clock = compile_form(mapping.time.form, mapping.time.zone)
        self.times = array("d")
        self.columns = {key: array("d") for keys in _columns_of(mapping).values() for key in keys}
        self.rows = self.missing = self.unreadable = self.bad_times = 0
        self.problems: list[Problem] = []

    def take(self, reader: Iterator[list[str]], header: Mapping[str, int]) -> None:
        """All rows that are left in the reader."""
        time_at = [header[n] for n in self.mapping.time_names]
        places = [(header[n], n, self.columns[k]) for n, keys in _columns_of(self.mapping).items() for k in keys]
        nothing = {"", *self.mapping.missing}
        comma = self.mapping.decimal == "comma"
        one_time = len(time_at) == 1
        line = self.mapping.rows_above_header + 1 + self.mapping.unit_rows
        value = math.nan
        for row in reader:
            line += 1
            if not row or (len(row) == 1 and not row[0].strip()):
                continue
            self.rows += 1
            text = row[time_at[0]] if one_time and len(row) > time_at[0] else _joined(row, time_at)
            time = self.clock.read(text)
            if time is None:
                self.bad_times += 1
                self.note(line, "this is no time in the form of the mapping", text)
                continue
            self.times.append(time)
            for at, name, values in places:
                try:
                    cell = row[at]
                    value = float(cell.replace(",", ".") if comma else cell)
                    # The difference is zero but for infinity and NaN, which no instrument shows.
                    plain = value - value == 0.0 and not (comma and "." in cell)
                except (ValueError, IndexError):
                    plain = False
                values.append(value if plain else self.number(row, at, comma, nothing, line, name))

    def number(self, row: list[str], at: int, comma: bool, nothing: set[str], line: int, name: str) -> float:
        """What a cell holds that is no plain number: NaN, counted as missing or as unreadable."""
        cell = row[at].strip() if at < len(row) else ""
        if cell in nothing:
            self.missing += 1
        else:
            self.unreadable += 1
            self.note(line, f"{name}: this is no number with a decimal {'comma' if comma else 'point'}", cell)
        return math.nan

    def note(self, line: int, message: str, text: str) -> None:
        """Keep one problem, the first twenty of them."""
        if len(self.problems) < MOST_LISTED:
            self.problems.append(Problem(message, self.name, line, 1, value=shorten(text)))


def _joined(row: list[str], columns: list[int]) -> str:
    """Date and time of day from their own columns, as one text."""
    return " ".join([row[n].strip() for n in columns if n < len(row)])


def _in_order(name: str, mapping: LoggerMapping, barometric_pressure: float, found: _Collected) -> Log:
    import numpy as np

    times = np.frombuffer(found.times, dtype=np.float64)
    unordered = int(np.count_nonzero(np.diff(times) < 0.0))
    order = np.argsort(times, kind="stable")
    times = times[order]
    first = np.concatenate(([True], np.diff(times) > 0.0))
    times = times[first]
    steps = np.diff(times)
    interval = float(np.median(steps)) if len(steps) else 0.0
    holes = [int(n) for n in np.flatnonzero(steps > _GAP * interval)]
    values = {}
    for column in mapping.columns.values():
        raw = np.frombuffer(found.columns[column.quantity], dtype=np.float64)[order][first]
        values[column.quantity] = _si(raw, column.quantity, column.unit, barometric_pressure)
    report = LogReport(
        found.rows, unordered, int(len(first) - np.count_nonzero(first)), found.missing, found.unreadable,
        found.bad_times, found.clock.repeated_hour, interval,
        tuple(Gap(float(times[n]), float(times[n + 1])) for n in holes), tuple(found.problems),
    )  # fmt: skip
    cycle = np.frombuffer(found.columns[_CYCLE], dtype=np.float64)[order][first] if mapping.cycle else None
    return Log(name, mapping, barometric_pressure, times, values, report, cycle)


def _si(raw: NDArray[np.float64], key: str, spelling: str, barometric_pressure: float) -> NDArray[np.float64]:
    unit = find_unit(spelling, NOMENCLATURE[key].kind)
    assert unit is not None
    zero = unit.offset + (barometric_pressure if unit.reference is Reference.GAUGE else 0.0)
    scaled: NDArray[np.float64] = raw * unit.factor + zero
    return scaled
