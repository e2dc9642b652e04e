"""The filed records of a plant and its open items, read once for all pages that tell of them."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from commission.manual.book import OwnerFile, slugs
from commission.manual.documents import ACTIVE
from commission.manual.gather import PlantData, SystemData
from commission.manual.showing import label_of
from commission.manual.states import Visit

if TYPE_CHECKING:
    from commission.records import FiledRecord, OpenItem, RecordsFolder, Series, Unanswered

_LONGEST_HEAD = 90


@dataclass(frozen=True, slots=True)
class Archive:
    """The filed records of a plant with the page of each; `corrected` maps a record to the one that took its place.

    `unanswered` holds, for each system with an accepted test, the items of its checklist that no record answers.
    """

    folder: RecordsFolder
    items: tuple[OpenItem, ...]
    pages: Mapping[str, str]
    corrected: Mapping[str, str]
    files: tuple[OwnerFile, ...]
    unanswered: Mapping[str, Unanswered]

    def of(self, system: str) -> tuple[FiledRecord, ...]:
        """The records of one system in the order of the visits."""
        return tuple(r for r in self.folder.records if r.system == system)

    def accepted(self, record: FiledRecord) -> bool:
        """Whether a record is an accepted test that no other one corrects."""
        return record.file.mode == "test" and record.verdict == "conforming" and record.id not in self.corrected

    def open_answers(self, system: str) -> int:
        """How many items of the checklist no record answers although a test was accepted."""
        return sum(len(items) for _, items in self.unanswered.get(system, ()))


def read_archive(plant: PlantData) -> Archive:
    """Reads `records/`; a damaged record is named and keeps no other from being shown."""
    from commission.records import open_items, read_folder, records_folder

    folder = records_folder(plant.loaded)
    found = read_folder(folder)
    slugs_of = {d.id: d for d in plant.systems}
    names = slugs(tuple(r.id for r in found.records))
    pages = {
        r.id: slugs_of[r.system].page(f"record-{names[r.id]}") if r.system in slugs_of else f"records/{names[r.id]}"
        for r in found.records
    }
    corrected = {r.file.corrects: r.id for r in found.records if r.file.corrects}
    files = []
    for record in found.records:
        for attached in record.filed.attachments:
            path = folder / attached.path
            if path.suffix.lower() in ACTIVE:
                continue  # evidence too can run a program: its page names it with its digest, and the folder holds it
            if path.is_file() and folder.resolve() in path.resolve().parents:
                files.append(OwnerFile(f"records/{attached.path}", path))
    archive = Archive(found, open_items(plant.loaded), pages, corrected, tuple(files), {})
    return replace(archive, unanswered=_unanswered(plant, archive))


def _unanswered(plant: PlantData, archive: Archive) -> dict[str, Unanswered]:
    """By system: what the checklist up to the stage of the last accepted test asked and nobody answered."""
    from commission.records import unanswered

    found = {}
    for data in plant.systems:
        tests = [r for r in archive.of(data.id) if archive.accepted(r)]
        if tests:
            found[data.id] = unanswered(plant.loaded, data.id, archive.folder.records, tests[-1].file.stage)
    return found


def title_of(record: FiledRecord) -> str:
    """A visit in a few words."""
    title = record.file.title or record.file.stage.replace("-", " ").replace("_", " ")
    return title[:1].upper() + title[1:]


def visits(archive: Archive, system: str) -> tuple[Visit, ...]:
    """What the front page needs; a corrected record counts for nothing."""
    return tuple(
        Visit(title_of(r), r.started.date().isoformat(), r.file.mode, r.verdict, archive.pages[r.id])
        for r in archive.of(system)
        if r.id not in archive.corrected
    )


def when(record: FiledRecord) -> str:
    """Date and time as they were on site."""
    return f"{record.started:%Y-%m-%d %H:%M}"


def series_of(data: SystemData, archive: Archive) -> tuple[Series, ...]:
    """The deviations of each quantity over the visits, as they were frozen."""
    from commission.records import series

    return series(archive.folder.records, data.id)


@dataclass(frozen=True, slots=True)
class OpenLine:
    """One open item in a line of the front page; `due` is a date as text, or None."""

    number: int
    what: str
    system: str
    who: str | None
    due: str | None


def head_of(item: OpenItem, plant: PlantData) -> str:
    """An item in a few words: a long one by its verdict, such as `Cooling capacity: undecided`, or by its line."""
    if len(item.what) <= _LONGEST_HEAD:
        return item.what
    verdict = re.split("[,;]", item.what)[0]
    if item.raised_by == "guarantee" and len(verdict) <= _LONGEST_HEAD:
        return verdict
    shown = next((d.display for d in plant.systems if d.id == item.system), plant.display)
    return label_of(item.line or "as found", shown)


def open_lines(plant: PlantData, archive: Archive) -> tuple[OpenLine, ...]:
    """The open items for the front page: those with the nearest date first, then those without."""
    names = {d.id: d.name for d in plant.systems}
    waiting = sorted((i for i in archive.items if i.state == "open"), key=lambda i: (i.due is None, i.due, i.number))
    return tuple(
        OpenLine(
            i.number,
            head_of(i, plant),
            names.get(i.system, i.system),
            i.who,
            i.due.isoformat() if i.due else None,
        )
        for i in waiting
    )
