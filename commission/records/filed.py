"""The `filed:` block of a record: what it was judged by and what came out, frozen; nothing later changes it.

Values are in SI, pressures in Pa absolute, uncertainties standard unless their name says otherwise. Reading a filed
record needs neither the description nor the physics: a verdict of twenty years ago is still what it was.
"""

from __future__ import annotations

import datetime as dt
import math
from dataclasses import dataclass
from pathlib import Path, PurePosixPath
from typing import Annotated, Any, Literal

from pydantic import BeforeValidator, Field
from pydantic_core import PydanticCustomError

from commission.description import Positions, read_yaml, validate
from commission.description.fields import Date, YesNo
from commission.description.model import Part
from commission.description.positions import DescriptionError
from commission.errors import InputError, Problem
from commission.records.model import Moment, RecordFile
from commission.records.sums import SumsError, read_sums
from commission.records.text import FILED_KEY, seal_holds

FORM = 1
"""Form of the block. A later form is read by later versions; this one never changes its meaning."""

Verdict = Literal["conforming", "not conforming", "undecided", "none"]


class FiledRecordError(InputError):
    """A filed record cannot be read."""


def _si(value: Any) -> float:
    try:
        number = float(value)
    except (TypeError, ValueError):
        number = math.nan
    if isinstance(value, bool) or not math.isfinite(number):
        raise PydanticCustomError("meaning", "{message}", {"message": "a number is wanted here", "allowed": None})
    return number


Si = Annotated[float, BeforeValidator(_si)]


def _below(value: Any) -> Any:
    """A path that stays inside `records/`: a record from elsewhere must not make the manual copy another file."""
    parts = PurePosixPath(value).parts if isinstance(value, str) else ()
    if not parts or parts[0] == "/" or ".." in parts or set(str(value)) & set("\\:\0"):
        message = {"message": "a path below records is wanted here", "allowed": "a relative path without .. and :"}
        raise PydanticCustomError("meaning", "{message}", message)
    return value


Below = Annotated[str, BeforeValidator(_below)]


class FrozenReading(Part):
    """A reading or condition as it was taken into the judgement."""

    value: Si = Field(description="SI, pressures in Pa absolute")
    unit: str = Field(description="unit of `value`")
    written: str = Field(description="as the person wrote it")
    instrument: str | None = Field(None)
    where: str | None = Field(None)
    uncertainty: Si | None = Field(None, description="standard uncertainty of the reading")


class FrozenDeviation(Part):
    """A reading against the expectation at its own condition."""

    reading: Si
    expected: Si
    deviation: Si
    unit: str
    uncertainty: Si = Field(description="standard uncertainty of the deviation")
    expanded: Si = Field(description="expanded uncertainty of the deviation, 95 %")
    significant: YesNo
    model_parts: dict[str, Si] = Field(default_factory=dict, description="signed shares of the model, by cause")
    other_part: Si = Field(0.0, description="all that is of this visit alone: instruments, condition, spread")


class FrozenGuarantee(Part):
    """One promised value, what was found, and the verdict. Values in SI of `unit`; `below` and `above` are shares."""

    quantity: str
    unit: str
    guaranteed: Si = Field(description="at the condition of the contract")
    at: dict[str, Si] = Field(default_factory=dict, description="condition of the contract, SI")
    below: Si | None = Field(None, description="tolerance below, a share")
    above: Si | None = Field(None, description="tolerance above, a share")
    largest: Si | None = Field(None, description="agreed largest expanded uncertainty, a share")
    includes: tuple[str, ...] = Field((), description="what a guaranteed power counts")
    rule: str
    carried_by: str
    source: str | None = Field(None, description="clause of the contract")
    carried: Si | None = Field(None, description="guaranteed value at the condition of the day")
    measured: Si | None = Field(None)
    route: str | None = Field(None)
    uncertainty: Si | None = Field(None, description="standard uncertainty of measured value minus limit")
    expanded: Si | None = Field(None, description="expanded, 95 %")
    limit_low: Si | None = Field(None)
    limit_high: Si | None = Field(None)
    acceptance_low: Si | None = Field(None)
    acceptance_high: Si | None = Field(None)
    outcome: Literal["conforming", "not conforming", "undecided"]
    probability: Si | None = Field(None, description="probability of conformity")
    withheld: str | None = Field(None, description="why there is no verdict although a test was made")
    what_would_decide: str | None = Field(None)
    frozen_before: YesNo = Field(description="whether the target was frozen in a sheet before the test")


class FrozenRoute(Part):
    """A capacity as measured by one route, or why the route was refused."""

    route: str
    quantity: str
    value: Si | None = Field(None, description="W")
    uncertainty: Si | None = Field(None, description="standard uncertainty, W")
    refused: str | None = Field(None)


class FrozenClosure(Part):
    """Two routes held against each other."""

    quantity: str = Field(description="the capacity that both give, or `first law`")
    first: str
    second: str
    difference: Si = Field(description="W")
    expanded: Si = Field(description="expanded uncertainty of the difference, 95 %, W")
    significant: YesNo


class FrozenCheck(Part):
    """One check of steadiness."""

    text: str
    steady: YesNo | None = Field(None)


class FrozenSheet(Part):
    """By what it was judged."""

    by: Literal["frozen test sheet", "targets frozen at filing", "nothing: no verdict was asked for"]
    sheet: Below | None = Field(None, description="path under records/")
    sha256: str | None = Field(None, description="of the sheet's file")


class FiledItem(Part):
    """An open item with the number it was given when the record was filed."""

    number: int = Field(ge=1)
    what: str
    raised_by: Literal["hand", "reservation", "guarantee", "answer"]
    line: str | None = Field(None)
    who: str | None = Field(None)
    due: Date | None = Field(None)
    retest: str | None = Field(None)


class StandingReservation(Part):
    """A reservation under which the system stood accepted after this visit, raised in it or in an earlier one."""

    number: int = Field(ge=1, description="its number among the open items")
    what: str
    found_in: str = Field(description="record that raised it")


class FiledFile(Part):
    """An attached file as it was copied."""

    file: str = Field(description="as named in the record")
    path: Below = Field(description="where it was filed, under records/")
    sha256: str
    size: int = Field(ge=0, description="bytes")


class Digests(Part):
    """SHA-256 of what the judgement rests on."""

    handed_in: str = Field(description="of the record's file as it was handed in")
    description: str = Field(description="of the plant's description")


class FiledBlock(Part):
    """Everything that was frozen when the record was filed."""

    form: Literal["1"]
    id: str
    filed_at: Moment | None = Field(None, description="when it was filed, where the caller said so")
    verdict: Verdict
    sentence: str = Field(description="the verdict in words")
    judged_by: FrozenSheet
    steadiness: tuple[FrozenCheck, ...] = Field((), description="what was found about standing still")
    impossible: tuple[str, ...] = Field((), description="readings that cannot be")
    barometric_pressure: Si
    barometer_measured: YesNo
    conditions: dict[str, FrozenReading] = Field(default_factory=dict)
    readings: dict[str, FrozenReading] = Field(default_factory=dict)
    deviations: dict[str, FrozenDeviation] = Field(default_factory=dict)
    model_deviations: dict[str, FrozenDeviation] = Field(
        default_factory=dict, description="against the model, where the deviations are those from a frozen sheet"
    )
    routes: tuple[FrozenRoute, ...] = Field(())
    closures: tuple[FrozenClosure, ...] = Field((), description="two routes held against each other")
    not_judged: dict[str, str] = Field(default_factory=dict, description="why a reading has no deviation")
    guarantees: tuple[FrozenGuarantee, ...] = Field(())
    warnings: tuple[str, ...] = Field(())
    unanswered: tuple[str, ...] = Field(())
    instruments: dict[str, dict[str, str]] = Field(default_factory=dict, description="as described on that day")
    assumptions: dict[str, Si] = Field(default_factory=dict, description="values in use, SI")
    open_items: tuple[FiledItem, ...] = Field(())
    standing: tuple[StandingReservation, ...] = Field((), description="reservations not closed by then")
    attachments: tuple[FiledFile, ...] = Field(())
    digests: Digests
    tool: dict[str, str] = Field(description="versions of the package and of the property library")
    seal: str = Field(description="SHA-256 of everything above this line")


@dataclass(frozen=True)
class FiledRecord:
    """A record as it was filed. `seal_holds` is False where the file was changed afterwards."""

    path: Path
    file: RecordFile
    filed: FiledBlock
    positions: Positions
    seal_holds: bool

    @property
    def id(self) -> str:
        """Name of the record, also that of its file."""
        return self.filed.id

    @property
    def system(self) -> str:
        """Id of the system."""
        return self.file.system

    @property
    def started(self) -> dt.datetime:
        """When reading began, with zone."""
        return self.file.started

    @property
    def verdict(self) -> Verdict:
        """The verdict as it was frozen."""
        return self.filed.verdict


def read_filed(path: Path) -> FiledRecord:
    """Read a filed record; its verdict is the frozen one, whatever has changed since.

    Raises:
        FiledRecordError: no filed record, or damaged beyond reading, with file, line and column.
    """
    path = Path(path)
    try:
        read = read_yaml(path, path.name)
    except DescriptionError as error:
        raise FiledRecordError(*error.problems) from None
    if not isinstance(read.data, dict) or FILED_KEY not in read.data:
        message = "this record is not filed: it has no block `filed`"
        raise FiledRecordError(Problem(message, file=path.name, line=1, column=1, allowed="file it with `record`"))
    block = read.data[FILED_KEY]
    form = block.get("form") if isinstance(block, dict) else None
    if form is not None and form != str(FORM):
        message = "this record was filed by a later version; update to read it"
        raise FiledRecordError(read.positions.problem((FILED_KEY, "form"), message, allowed=str(FORM)))
    written = {k: v for k, v in read.data.items() if k != FILED_KEY}
    file = validate(RecordFile, written, read.positions, also=read.problems, error=FiledRecordError)
    filed = validate(FiledBlock, block, read.positions, at=(FILED_KEY,), error=FiledRecordError)
    return FiledRecord(path, file, filed, read.positions, seal_holds(read.content) is True)


@dataclass(frozen=True)
class RecordsFolder:
    """The filed records of a plant in the order of their visits, and why others cannot be read.

    `drafts` are names of files that were never filed: they count for nothing.
    """

    records: tuple[FiledRecord, ...]
    damaged: tuple[Problem, ...]
    drafts: tuple[str, ...]


def read_folder(folder: Path) -> RecordsFolder:
    """Read every filed record of a folder; a damaged one is named and does not keep the others from being read."""
    records: list[FiledRecord] = []
    damaged: list[Problem] = []
    drafts: list[str] = []
    try:
        listed = read_sums(folder)
    except SumsError:
        listed = {}  # check_files says what is wrong with the list
    for path in sorted(folder.glob("*.yaml")) if folder.is_dir() else ():
        try:
            if seal_holds(path.read_bytes()) is None and path.name not in listed:
                drafts.append(path.name)
            else:
                records.append(read_filed(path))
        except FiledRecordError as error:
            damaged.extend(error.problems)
        except OSError as error:
            damaged.append(Problem(f"this record cannot be read: {error.strerror}", file=path.name))
    records.sort(key=lambda r: (r.started, r.id))
    return RecordsFolder(tuple(records), tuple(damaged), tuple(drafts))
