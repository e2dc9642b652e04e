"""What the columns of a logger's file mean, written once for each logger: dates and decimals are never guessed."""

from __future__ import annotations

from pathlib import Path
from typing import Literal

from pydantic import Field

from commission.description import LoadedPlant, Positions, read_yaml, validate
from commission.description.checking import bounded
from commission.description.model import Part
from commission.description.positions import DescriptionError
from commission.errors import InputError, Problem
from commission.errors import nearest as nearest_word
from commission.quantities import NOMENCLATURE, find_unit
from commission.quantities.units import kinds_of, known_spellings
from commission.records.logger.clock import FormError, compile_form


class MappingError(InputError):
    """The mapping of a logger's columns cannot be used; all that is wrong with it is listed."""


class TimeColumn(Part):
    """Where the time of a row stands and how it is written."""

    column: str | None = Field(None, description="column that holds date and time")
    date_column: str | None = Field(None, description="column of the date, where the time has its own")
    time_column: str | None = Field(None, description="column of the time of day")
    form: str = Field(description="how it is written, in YYYY MM DD hh mm ss, and zz for an offset such as +01:00")
    zone: str | None = Field(None, description="zone of the logger's clock, such as Europe/London, UTC or +01:00")


class LoggedColumn(Part):
    """One column that is read."""

    quantity: str = Field(description="key of the nomenclature")
    unit: str = Field(description="unit of its numbers; pressures say gauge or absolute")
    instrument: str | None = Field(None, description="instrument of plant.yaml")
    where: str | None = Field(None, description="where on the plant it is measured")


class CycleColumn(Part):
    """The column that shows the cycles of a plant that starts and stops, or defrosts."""

    column: str = Field(description="name in the file's header; it may be one of the columns that are read")
    level: float = Field(description="in the column's own numbers: above it the compressor runs, or it defrosts")
    by: Literal["start", "defrost"] = Field(description="start: it shows the compressor running; defrost: a defrost")


class LoggerMapping(Part):
    """The whole mapping."""

    logger: str = Field(description="which logger, in words")
    delimiter: Literal["comma", "semicolon", "tab", "bar"] = Field(description="what stands between two columns")
    decimal: Literal["point", "comma"] = Field(description="decimal mark of its numbers")
    encoding: Literal["utf-8", "utf-16", "latin-1", "windows-1252"] = Field("utf-8")
    rows_above_header: int = Field(0, ge=0, le=1000, description="rows before the one with the names of the columns")
    unit_rows: int = Field(0, ge=0, le=10, description="rows below the header that hold units or other words")
    time: TimeColumn
    columns: dict[str, LoggedColumn] = Field(min_length=1, description="name in the file's header to its meaning")
    cycle: CycleColumn | None = Field(
        None, description="what shows the cycles; left out: the two levels of the power input"
    )
    missing: tuple[str, ...] = Field((), description="texts that mean: no value; an empty cell always does")

    @property
    def separator(self) -> str:
        """The character between two columns."""
        return {"comma": ",", "semicolon": ";", "tab": "\t", "bar": "|"}[self.delimiter]

    @property
    def time_names(self) -> tuple[str, ...]:
        """The column or the two columns of the time."""
        one = self.time.column
        return (one,) if one is not None else (str(self.time.date_column), str(self.time.time_column))


def read_mapping(path: Path, loaded: LoadedPlant | None = None) -> LoggerMapping:
    """Read a mapping; with the plant, its instruments are checked too.

    Raises:
        MappingError: with every problem, its line and column.
    """
    try:
        read = read_yaml(path, path.name)
    except DescriptionError as error:
        raise MappingError(*error.problems) from None
    mapping = validate(LoggerMapping, read.data, read.positions, also=read.problems, error=MappingError)
    problems = [*_of_time(mapping, read.positions), *_of_columns(mapping, read.positions, loaded)]
    if problems:
        raise MappingError(*bounded(problems))
    return mapping


def _of_time(mapping: LoggerMapping, positions: Positions) -> list[Problem]:
    time, problems = mapping.time, []
    if (time.column is None) == (time.date_column is None) or (time.date_column is None) != (time.time_column is None):
        message = "name either the one column of date and time, or both a date_column and a time_column"
        problems.append(positions.problem(("time",), message, at_key=True))
    if mapping.decimal == "comma" and mapping.delimiter == "comma":
        problems.append(positions.problem(("decimal",), "a comma cannot be decimal mark and stand between columns too"))
    try:
        compile_form(time.form, time.zone)
    except FormError as error:
        first = error.problems[0]
        at = ("time", "zone") if first.path == "zone" and time.zone is not None else ("time", "form")
        problems.append(positions.problem(at, first.message, allowed=first.allowed))
    return problems


def _of_columns(mapping: LoggerMapping, positions: Positions, loaded: LoadedPlant | None) -> list[Problem]:
    problems: list[Problem] = []
    seen: dict[str, str] = {}
    for name, column in mapping.columns.items():
        at = ("columns", name)
        quantity = NOMENCLATURE.get(column.quantity)
        if quantity is None:
            near = nearest_word(column.quantity, NOMENCLATURE)
            message = f"{column.quantity!r} is not a quantity of the nomenclature"
            problems.append(positions.problem((*at, "quantity"), message, nearest=near))
            continue
        if column.quantity in seen:
            message = f"{seen[column.quantity]!r} is this quantity already"
            problems.append(positions.problem((*at, "quantity"), message))
        seen[column.quantity] = name
        if find_unit(column.unit, quantity.kind) is None:
            other = kinds_of(column.unit)
            message = f"this is no unit of a {quantity.kind.value}" + (f" but of a {other[0].value}" if other else "")
            near = nearest_word(column.unit, known_spellings(quantity.kind))
            problems.append(positions.problem((*at, "unit"), message, nearest=near))
        if loaded is not None and column.instrument is not None and column.instrument not in loaded.plant.instruments:
            near = nearest_word(column.instrument, loaded.plant.instruments)
            problems.append(positions.problem((*at, "instrument"), "no instrument has this name", nearest=near))
    return problems
