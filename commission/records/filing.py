"""Filing: a record is read, judged, frozen and written once. Whoever kills the process, nothing is lost or halved.

Under the folder's lock, in this order: attached files, the record, the list of digests. A run that dies in between
leaves files that are whole; the record, once it has its name, is filed: the next run that holds the lock lists it.
"""

from __future__ import annotations

import datetime as dt
import re
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

from commission.description import LoadedPlant
from commission.errors import NotCalculatedError, Problem
from commission.errors import nearest as nearest_word
from commission.records.disk import ExistsError, FolderError, copy_new, digest_of_file, lock, sweep, write_new
from commission.records.filed import FORM, FiledRecord, FiledRecordError, read_filed, read_folder
from commission.records.freeze import freeze, items_of_judgement, versions
from commission.records.items import items_of
from commission.records.judge import SHEETS, NamedSheet, judge_or_reason, sheet_of
from commission.records.read import RecordError, read_record, records_folder
from commission.records.record import Record
from commission.records.sums import FileFinding, add_sums, compare_sums, files_in, read_sums
from commission.records.text import seal_holds, with_filed_block

if TYPE_CHECKING:
    from commission.acceptance.sheet import TestSheet
    from commission.prediction import SystemModel

ATTACHMENTS = "attachments"
_NUMBER = re.compile(rb"^  - \{?number: (\d{1,9})\b", re.MULTILINE)


@dataclass(frozen=True, slots=True)
class Attached:
    """A file to be filed with a record: its name there, where it is now, digest and size in bytes."""

    name: str
    source: Path
    sha256: str
    size: int


def file_record(
    loaded: LoadedPlant,
    path: Path,
    attach_dir: Path | None = None,
    *,
    filed_at: dt.datetime | None = None,
    model: SystemModel | None = None,
    patience: float = 60.0,
) -> Path:
    """Judge a record and file it; returns the path of the filed record.

    `attach_dir`: every file in it is filed with the record, and files that the record names are looked for there;
    without it they are looked for beside the record. `filed_at` is written down where it is given: no clock is read
    here. Filing the same file again returns the record that is there.

    Raises:
        RecordError: something in the record is wrong, with its place.
        ExistsError: the same record was filed before with other attached files.
        FolderError: the records folder cannot be written, or somebody else kept its lock longer than `patience` s.
    """
    record = read_record(path, loaded)
    sheet = sheet_of(loaded, record)
    attached = find_attachments(record, attach_dir)
    frozen, raised = _judged(loaded, record, sheet, model)
    folder = records_folder(loaded)
    folder.mkdir(parents=True, exist_ok=True)
    with lock(folder, patience):
        sweep(folder)
        _list_what_a_killed_run_left(folder)
        already = _filed_before(folder, record)
        if already is not None:
            return _same_again(already, attached)
        _check_corrected(folder, record)
        items = _numbered(folder, record, raised)
        identity = _free_identity(folder, record, attached)
        files = [
            {"file": a.name, "path": f"{ATTACHMENTS}/{identity}/{a.name}", "sha256": a.sha256, "size": a.size}
            for a in attached
        ]
        block = {
            "form": str(FORM),
            "id": identity,
            "filed_at": filed_at,
            **frozen,
            "open_items": items,
            "standing": _standing(folder, record, identity, items),
            "attachments": files,
            "digests": {"handed_in": record.digest, "description": loaded.digest},
            "tool": versions(),
        }
        for one, filed in zip(attached, files, strict=True):
            _attach(one, folder / str(filed["path"]))
        target = folder / f"{identity}.yaml"
        write_new(target, with_filed_block(record.text, record.data, block).encode())
        add_sums(folder, _listing(folder, target, files, sheet))
    return target


def file_sheet(loaded: LoadedPlant, sheet: TestSheet, name: str, patience: float = 60.0) -> Path:
    """Freeze a test sheet under `records/sheets/`, once, and put it on the list of digests; returns its path.

    Raises:
        ExistsError: another sheet of that name is frozen already.
        FolderError: the records folder cannot be written.
    """
    folder = records_folder(loaded)
    folder.mkdir(parents=True, exist_ok=True)
    path = folder / SHEETS / f"{slug(name)}.yaml"
    content = sheet.to_text().encode()
    with lock(folder, patience):
        sweep(folder)
        if not (path.is_file() and path.read_bytes() == content):
            write_new(path, content)
        add_sums(folder, {path.relative_to(folder).as_posix(): digest_of_file(path)})
    return path


def check_files(loaded: LoadedPlant) -> tuple[FileFinding, ...]:
    """Each file under `records/` that is altered, missing or not yet listed, by name.

    The records are asked too, so that a list of digests made anew hides nothing: a record whose own seal does not hold
    is altered, and so is an attached file or a test sheet that is not the one whose digest a record holds.

    Raises:
        SumsError: the list of digests cannot be read.
    """
    folder = records_folder(loaded)
    found = {f.name: f for f in compare_sums(folder)}
    for record in read_folder(folder).records:
        if not record.seal_holds:
            name = record.path.name
            found.setdefault(name, FileFinding("altered", name, None, digest_of_file(record.path)))
        for name, digest in _held_by(record).items():
            path = folder / name
            if not path.is_file():
                found.setdefault(name, FileFinding("missing", name, digest, None))
            elif (now := digest_of_file(path)) != digest:
                found[name] = FileFinding("altered", name, digest, now)
    return tuple(found[name] for name in sorted(found))


def _held_by(record: FiledRecord) -> dict[str, str]:
    """Digests that a filed record holds of other files: what was attached, and the sheet it was judged by."""
    held = {a.path: a.sha256 for a in record.filed.attachments}
    sheet = record.filed.judged_by
    if sheet.sheet is not None and sheet.sha256 is not None:
        held[sheet.sheet] = sheet.sha256
    return held


def find_attachments(record: Record, attach_dir: Path | None) -> tuple[Attached, ...]:
    """The files to be filed with a record, in the order of their names.

    Raises:
        RecordError: a file that the record names is not there; all of them are listed.
        FolderError: a file cannot be read, or there is no such folder.
    """
    if attach_dir is not None and not attach_dir.is_dir():
        raise FolderError(Problem("there is no such folder", file=str(attach_dir)))
    base = attach_dir if attach_dir is not None else record.path.parent
    names = dict.fromkeys(record.file.attachments)
    if attach_dir is not None:
        every = (p.relative_to(attach_dir) for p in attach_dir.rglob("*") if p.is_file())
        names |= dict.fromkeys(p.as_posix() for p in every if not any(part.startswith(".") for part in p.parts))
    missing = [
        record.positions.problem(("attachments", n), f"this file is not in {base}")
        for n, name in enumerate(record.file.attachments)
        if not (base / name).is_file()
    ]
    if missing:
        raise RecordError(*missing)
    sources = [(name, base / name) for name in sorted(names)]
    return tuple(Attached(name, source, digest_of_file(source), source.stat().st_size) for name, source in sources)


def slug(text: str) -> str:
    """A name that every file system takes: lower case letters, digits and hyphens."""
    return re.sub(r"[^a-z0-9]+", "-", text.lower()).strip("-") or "record"


def identity_of(record: Record) -> str:
    """Name of a record: day and hour as written on site, system, stage."""
    return f"{record.started:%Y-%m-%d-%H%M}-{slug(record.system)}-{slug(record.stage)}"


def _judged(
    loaded: LoadedPlant, record: Record, sheet: NamedSheet | None, model: SystemModel | None
) -> tuple[dict[str, Any], list[dict[str, Any]]]:
    """The frozen judgement and the open items that it raises."""
    from commission.prediction import fit

    if model is None and record.readings:
        try:
            model = fit(loaded, record.system)
        except NotCalculatedError:
            model = None  # the reason comes out of the judgement
    judgement, reason = judge_or_reason(loaded, record, sheet.sheet if sheet else None, model)
    by_model = judge_or_reason(loaded, record, None, model)[0] if sheet is not None else None
    assumptions = {k: a.value for k, a in model.assumptions.items()} if model else {}
    frozen = freeze(loaded, record, judgement, reason, sheet, by_model, assumptions)
    display = loaded.display(record.system, record.barometric_pressure)
    return frozen, items_of_judgement(record, judgement.guarantees if judgement else (), display)


def _filed_before(folder: Path, record: Record) -> Path | None:
    """The filed record that was handed in as the very same file, if there is one."""
    line = f"handed_in: {record.digest}".encode()
    return next((p for p in sorted(folder.glob("*.yaml")) if line in p.read_bytes()), None)


def _same_again(already: Path, attached: Sequence[Attached]) -> Path:
    before = {a.file: a.sha256 for a in read_filed(already).filed.attachments}
    if before != {a.name: a.sha256 for a in attached}:
        message = "this record is filed already, with other attached files"
        allowed = "file them with a new record that says what they belong to"
        raise ExistsError(Problem(message, file=already.name, allowed=allowed))
    return already


def _check_corrected(folder: Path, record: Record) -> None:
    name = record.file.corrects
    if name is None:
        return
    known = [p.stem for p in sorted(folder.glob("*.yaml"))]
    if name not in known:
        near = nearest_word(name, known)
        raise RecordError(record.positions.problem(("corrects",), "no filed record has this name", nearest=near))
    other = read_filed(folder / f"{name}.yaml")
    if other.system != record.system:
        message = f"this record is one of {other.system}, not of {record.system}"
        raise RecordError(record.positions.problem(("corrects",), message))


def _numbered(folder: Path, record: Record, raised: Sequence[Mapping[str, Any]]) -> list[dict[str, Any]]:
    """The open items of this record with their numbers; an item that a correction says again keeps its own.

    Raises:
        RecordError: an update names an item that does not exist, or one that is closed.
    """
    _check_updates(folder, record)
    by_hand = [
        {**item.model_dump(), "raised_by": by}
        for by, written in (("hand", record.file.open_items), ("reservation", record.file.reservations))
        for item in written
    ]
    lines = {item["line"] for item in by_hand if item["line"]}
    items = [*by_hand, *(dict(item) for item in raised if item["line"] not in lines)]
    before: dict[str, int] = {}
    if record.file.corrects:
        corrected = read_filed(folder / f"{record.file.corrects}.yaml")
        before = {i.line or i.what: i.number for i in corrected.filed.open_items}
    following = _next_numbers(folder)
    return [{"number": before.get(i["line"] or i["what"]) or next(following), **i} for i in items]


def _standing(folder: Path, record: Record, identity: str, raised: Sequence[Mapping[str, Any]]) -> list[dict[str, Any]]:
    """The reservations under which the system stands after this visit: those of before that nobody closed, and its own.

    They are frozen with the record, so that its certificate does not lose them when the next one is issued.
    """
    closed = {update.item for update in record.file.item_updates if update.closed}
    before = [r for r in read_folder(folder).records if r.system == record.system and r.started <= record.started]
    found = {
        item.number: {"number": item.number, "what": item.what, "found_in": item.found_in}
        for item in items_of(before)
        if item.raised_by == "reservation" and item.state == "open" and item.number not in closed
    }
    for item in raised:
        if item["raised_by"] == "reservation":
            number = int(item["number"])
            found.setdefault(number, {"number": number, "what": item["what"], "found_in": identity})
    return [found[number] for number in sorted(found)]


def _next_numbers(folder: Path) -> Iterator[int]:
    """Numbers that no filed record of the plant uses."""
    used = (int(n) for p in folder.glob("*.yaml") for n in _NUMBER.findall(p.read_bytes()))
    number = max(used, default=0)
    while True:
        number += 1
        yield number


def _check_updates(folder: Path, record: Record) -> None:
    if not record.file.item_updates:
        return
    items = {item.number: item for item in items_of(read_folder(folder).records)}
    problems = []
    for n, update in enumerate(record.file.item_updates):
        path = ("item_updates", n, "item")
        item = items.get(update.item)
        still_open = ", ".join(str(i.number) for i in items.values() if i.state == "open") or "none is open"
        if item is None:
            problems.append(record.positions.problem(path, "no open item has this number", allowed=still_open))
        elif item.state == "closed":
            message = f"this item was closed by {item.closed_by} in {item.closed_in}; raise a new one"
            problems.append(record.positions.problem(path, message, allowed=still_open))
    if problems:
        raise RecordError(*problems)


def _free_identity(folder: Path, record: Record, attached: Sequence[Attached]) -> str:
    """A name that no other record has; attached files that a killed run left are taken over where they are ours."""
    first = identity_of(record)
    number = 1
    while True:
        identity = first if number == 1 else f"{first}-{number}"
        room = folder / ATTACHMENTS / identity
        ours = {a.name: a.sha256 for a in attached}
        left = {name: digest_of_file(room / name) for name in files_in(room)}
        if not (folder / f"{identity}.yaml").exists() and left.items() <= ours.items():
            return identity
        number += 1


def _attach(attached: Attached, target: Path) -> None:
    """Copy one file; it may lie there from a run that was killed, and must be what was looked at before."""
    if not target.exists():
        copy_new(attached.source, target)
    if digest_of_file(target) != attached.sha256:
        target.unlink()
        message = "this file was changed while it was being filed; file the record again"
        raise FolderError(Problem(message, file=str(attached.source)))


def _listing(
    folder: Path, target: Path, files: Sequence[Mapping[str, Any]], sheet: NamedSheet | None
) -> dict[str, str]:
    listing = {target.name: digest_of_file(target), **{str(f["path"]): str(f["sha256"]) for f in files}}
    if sheet is not None and sheet.name not in read_sums(folder):
        listing[sheet.name] = sheet.sha256
    return listing


def _list_what_a_killed_run_left(folder: Path) -> None:
    """Put whole records that are not listed yet on the list, with their files; their own seal vouches for them."""
    listed = read_sums(folder)
    for path in sorted(folder.glob("*.yaml")):
        if path.name in listed or seal_holds(path.read_bytes()) is not True:
            continue
        try:
            filed = read_filed(path)
        except FiledRecordError:
            continue  # check_files names it
        add_sums(folder, {path.name: digest_of_file(path), **{a.path: a.sha256 for a in filed.filed.attachments}})
