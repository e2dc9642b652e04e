"""Read the record of one visit: shape, then meaning, all problems of a stage in one run, each with its place."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from pathlib import Path, PurePosixPath
from typing import TYPE_CHECKING, Any

from commission.description import LoadedPlant, Positions, read_yaml, validate
from commission.description.checking import bounded
from commission.description.positions import DescriptionError
from commission.errors import InputError, Problem
from commission.errors import nearest as nearest_word
from commission.quantities import NOMENCLATURE
from commission.records.answers import check_answers
from commission.records.disk import digest_of
from commission.records.held import contradicted
from commission.records.model import RecordFile
from commission.records.readings import BAROMETER, CONDITION_KEYS, ReadingsReader
from commission.records.record import Record
from commission.records.text import FILED_KEY

if TYPE_CHECKING:
    from commission.checklists import Item

RECORDS = "records"
_NO_STAGE = "the checklist of this system has no such stage"
EITHER: tuple[str, ...] = ("heat_source_outlet_temperature", "heat_sink_outlet_temperature")
"""A condition where a controller holds it, an answer of the plant where it does not."""
READING_KEYS: tuple[str, ...] = tuple(k for k in NOMENCLATURE if k not in CONDITION_KEYS or k in EITHER)


class RecordError(InputError):
    """A record cannot be used; `problems` holds all that the stage of reading could see."""


def records_folder(loaded: LoadedPlant) -> Path:
    """The folder of a plant where its records are filed."""
    return loaded.folder / RECORDS


def read_record(path: Path, loaded: LoadedPlant) -> Record:
    """Read a record that is not filed yet and check it against the description.

    Raises:
        RecordError: the file is no record, or something in it is wrong; with file, line and column for each problem.
    """
    path = Path(path)
    try:
        read = read_yaml(path, _shown(path, loaded))
    except DescriptionError as error:
        raise RecordError(*error.problems) from None
    if isinstance(read.data, dict) and FILED_KEY in read.data:
        message = "this record is filed already and is never changed; write a correction as a new record"
        raise RecordError(
            read.positions.problem((FILED_KEY,), message, allowed="a record that names this one under corrects:")
        )
    file = validate(RecordFile, read.data, read.positions, also=read.problems, error=RecordError)
    return check_record(path, loaded, file, read.content, read.data, read.positions)


def check_record(
    path: Path,
    loaded: LoadedPlant,
    file: RecordFile,
    content: bytes,
    data: Mapping[str, Any],
    positions: Positions,
    *,
    by_checklist: bool = True,
) -> Record:
    """The second stage: what the description and the checklist say about a record whose shape is right.

    `by_checklist=False` leaves stage and answers alone: a record of old is not asked about the checklist of today.

    Raises:
        RecordError: with all problems of meaning.
    """
    system = loaded.plant.systems.get(file.system)
    reader = ReadingsReader(loaded, system, positions)
    if system is None:
        known = loaded.plant.systems
        reader.problem(
            ("system",), "no system has this id", allowed=", ".join(known), nearest=nearest_word(file.system, known)
        )
    measured = reader.barometer(file.conditions)
    barometer = reader.barometric_pressure
    rest = {k: m for k, m in file.conditions.items() if k != BAROMETER or measured}
    conditions = reader.section("conditions", rest, CONDITION_KEYS)
    readings = reader.section("readings", file.readings, READING_KEYS)
    items = _items(loaded, file, reader) if system is not None and by_checklist else {}
    read = {**conditions, **readings}
    answers, unanswered = (
        check_answers(reader, file.answers, file.stage, items, _files(file), read) if items else ({}, ())
    )
    _sense(file, reader)
    against = contradicted(loaded, file.system, answers, read) if items else []
    if reader.problems:
        raise RecordError(*bounded(reader.problems))
    text = content.decode("utf-8-sig")
    return Record(
        path, file, text, digest_of(content), data, positions, barometer, measured,
        conditions, readings, answers, unanswered, (*_warnings(file, readings, unanswered, items), *against),
    )  # fmt: skip


def _shown(path: Path, loaded: LoadedPlant) -> str:
    """The name of the file in messages: inside the plant's folder from there, else as given."""
    try:
        return path.resolve().relative_to(loaded.folder.resolve()).as_posix()
    except ValueError:
        return str(path)


def known_stages(loaded: LoadedPlant, system: str, stage: str) -> tuple[Item, ...]:
    """The items of one stage of a system's checklist.

    Raises:
        RecordError: the checklist has no such stage, with the nearest one.
    """
    from commission.checklists import stages

    found = {s.id: tuple(s.items) for s in stages(loaded, system)}
    if stage not in found:
        near, allowed = nearest_word(stage, found), ", ".join(found)
        raise RecordError(Problem(_NO_STAGE, value=stage, allowed=allowed, nearest=near))
    return found[stage]


def _items(loaded: LoadedPlant, file: RecordFile, reader: ReadingsReader) -> dict[str, Sequence[Item]]:
    from commission.checklists import stages

    found: dict[str, Sequence[Item]] = {stage.id: tuple(stage.items) for stage in stages(loaded, file.system)}
    if file.stage not in found:
        reader.problem(("stage",), _NO_STAGE, allowed=", ".join(found), nearest=nearest_word(file.stage, found))
    return found


def _sense(file: RecordFile, reader: ReadingsReader) -> None:
    """What no single field can see."""
    if file.ended is not None and file.ended < file.started:
        reader.problem(("ended",), "the visit ends before it started")
    if file.cycles is not None and file.ended is None:
        reader.problem(
            ("cycles",), "say when the last of them ended", allowed="ended: date, time and zone", at_key=True
        )
    if file.corrects and not file.why_corrected:
        reader.problem(("corrects",), "a correction says why", allowed="why_corrected: ...")
    if file.why_corrected and not file.corrects:
        reader.problem(("why_corrected",), "say which record is corrected", allowed="corrects: name of a filed record")
    if file.reservations and file.mode != "test":
        allowed = "open_items: ..., which a trim can raise too"
        reader.problem(("reservations",), "a test is accepted under reservations, a trim is not", allowed=allowed)
    for number, update in enumerate(file.item_updates):
        if update.closed and not update.closed_by:
            reader.problem(("item_updates", number), "an item is closed by somebody", allowed="closed_by: ...")
    for key in file.readings:
        if key in file.conditions and key in EITHER:
            reader.problem(("readings", key), "this stands under conditions already; write it once", at_key=True)
    seen: set[str] = set()
    for number, name in enumerate(file.attachments):
        path = ("attachments", number)
        parts = PurePosixPath(name).parts
        if not parts or PurePosixPath(name).is_absolute() or ".." in parts or set(name) & set("\\:\n\r\0"):
            allowed = "a relative path with / between folders and without .. and :"
            reader.problem(path, "name a file beside the record, or below it", allowed=allowed)
        elif name.casefold() in seen:
            reader.problem(path, "this file is attached already")
        seen.add(name.casefold())
    if file.mode == "test" and not any("witness" in role.casefold() for role in file.people):
        reader.problem(
            ("people",),
            "a test is witnessed: its one verdict is kept",
            allowed="a witness under people, or mode: trim",
            at_key=True,
        )


def _warnings(
    file: RecordFile, readings: Mapping[str, Any], unanswered: tuple[str, ...], items: Mapping[str, Sequence[Item]]
) -> list[str]:
    """What is not wrong but weakens the record, as sentences."""
    found = []
    if file.mode == "test" and unanswered:
        noun = "item of this stage has" if len(unanswered) == 1 else "items of this stage have"
        acts = " ".join(i.do for i in items.get(file.stage, ()) if i.id in unanswered)
        found.append(f"{len(unanswered)} {noun} no answer: {acts.rstrip('.')}")
    if readings and file.since_start is None and file.cycles is None:
        found.append("the running time since the last start is not written: nobody can say later that it was steady")
    return found


def _files(file: RecordFile) -> tuple[str, ...]:
    """What an item that asks for a file can be answered with."""
    return (*file.attachments, *([file.sheet] if file.sheet else []))
