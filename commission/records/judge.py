"""A record judged: its readings handed to acceptance, with the frozen sheet where the record names one."""

from __future__ import annotations

from dataclasses import dataclass, replace
from pathlib import Path
from typing import TYPE_CHECKING

from commission.description import LoadedPlant
from commission.errors import NotCalculatedError
from commission.errors import nearest as nearest_word
from commission.records.disk import digest_of_file
from commission.records.held import held
from commission.records.read import RecordError, records_folder
from commission.records.readings import UNBALANCE_OF
from commission.records.record import Record, SiteReading

if TYPE_CHECKING:
    from commission.acceptance.instruments import Reading
    from commission.acceptance.judgement import Judgement
    from commission.acceptance.sheet import TestSheet
    from commission.acceptance.steadiness import WholeCycles
    from commission.prediction import SystemModel

SHEETS = "sheets"


@dataclass(frozen=True)
class NamedSheet:
    """The frozen sheet that a record names: its path under `records/`, the digest of its file, and what it says."""

    name: str
    path: Path
    sha256: str
    sheet: TestSheet


def judge_record(loaded: LoadedPlant, record: Record, model: SystemModel | None = None) -> Judgement:
    """The judgement of a record: deviations always, verdicts on guarantees in a test.

    `model` is the fitted model where the caller has it already.

    Raises:
        RecordError: the test sheet that it names is not there, was changed, or is one of another system.
        NotCalculatedError: the system cannot be calculated; the message says why.
    """
    sheet = sheet_of(loaded, record)
    return judged_by(loaded, record, sheet.sheet if sheet else None, model)


def judged_by(
    loaded: LoadedPlant, record: Record, sheet: TestSheet | None, model: SystemModel | None = None
) -> Judgement:
    """The judgement by this sheet, or by the description as it stands where there is none.

    An unbalance that was worked out from phases is left to acceptance, which has the phases too. A reading of which
    nothing is expected says what the checklist holds it to.

    Raises:
        NotCalculatedError: the system cannot be calculated.
    """
    from commission.acceptance.judgement import judge
    from commission.prediction import fit

    judgement = judge(
        loaded,
        fit(loaded, record.system) if model is None else model,
        [site_reading(r) for r in record.conditions.values()],
        [site_reading(r) for k, r in record.readings.items() if k not in UNBALANCE_OF.values()],
        record.mode,
        sheet,
        on=record.started.date(),
        since_start=record.file.since_start,
        since_defrost=record.file.since_defrost,
        upsets=record.file.upsets,
        cycles=cycles_of(record),
    )
    asked = {k: h.text for k, h in held(loaded, record.system, record.readings.values()).items()}
    return replace(judgement, not_judged={k: asked.get(k, why) for k, why in judgement.not_judged.items()})


def cycles_of(record: Record) -> WholeCycles | None:
    """The whole cycles over which a record was read, None where it was read at one steady moment."""
    from commission.acceptance.steadiness import WholeCycles

    cycles, ended = record.file.cycles, record.file.ended
    if cycles is None or ended is None:
        return None
    return WholeCycles(cycles.count, (ended - record.started).total_seconds(), cycles.by)


def judge_or_reason(
    loaded: LoadedPlant, record: Record, sheet: TestSheet | None, model: SystemModel | None = None
) -> tuple[Judgement | None, str | None]:
    """The judgement, or why there is none: a record of a system that cannot be calculated is filed all the same."""
    if not record.readings:
        return None, "nothing was read"
    try:
        return judged_by(loaded, record, sheet, model), None
    except NotCalculatedError as error:
        return None, str(error)


def sheet_of(loaded: LoadedPlant, record: Record) -> NamedSheet | None:
    """The frozen sheet that a record names, with its own digest verified; None where it names none.

    Raises:
        RecordError: no such sheet, changed after it was frozen, or of another system.
    """
    from commission.acceptance.sheet import SheetError
    from commission.acceptance.sheet_text import read_sheet

    name = record.file.sheet
    if name is None:
        return None
    folder = records_folder(loaded)
    path = folder / name
    known = [p.relative_to(folder).as_posix() for p in sorted((folder / SHEETS).glob("*.yaml"))]
    if name not in known:
        message = "there is no frozen test sheet of this name under records"
        allowed = ", ".join(known) or "no sheet is frozen yet"
        near = nearest_word(name, known)
        raise RecordError(record.positions.problem(("sheet",), message, allowed=allowed, nearest=near))
    try:
        sheet = read_sheet(path)
    except SheetError as error:
        raise RecordError(record.positions.problem(("sheet",), error.problems[0].message)) from None
    if sheet.system != record.system:
        message = f"this sheet is one of {sheet.system}, not of {record.system}"
        raise RecordError(record.positions.problem(("sheet",), message))
    return NamedSheet(name, path, digest_of_file(path), sheet)


def site_reading(reading: SiteReading) -> Reading:
    """A reading in the form that acceptance takes."""
    from commission.acceptance.instruments import Reading

    return Reading(reading.key, reading.value, reading.instrument, reading.where or "", reading.samples, reading.phases)
