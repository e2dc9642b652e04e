"""Records as they were filed: which there are, the list of a system with what has moved, and the open items."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any

from commission.description import LoadedPlant
from commission.manual.book import OwnerFile, Sheet, slugs
from commission.manual.documents import ACTIVE
from commission.manual.gather import PlantData, SystemData
from commission.manual.plant_pages import OpenLine
from commission.manual.plots import Figure
from commission.manual.showing import label_of
from commission.manual.states import Visit
from commission.quantities import Display, Kind

if TYPE_CHECKING:
    from commission.records import FiledRecord, OpenItem, RecordsFolder, Series, Unanswered


ITEMS = "open-items.csv"
"""All open items as a table for a spreadsheet, at the top of the site."""


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


_LONGEST_HEAD = 90
VERDICT_CLASS = {"conforming": "good", "not conforming": "danger", "undecided": "care", "none": ""}


def series_of(data: SystemData, archive: Archive) -> tuple[Series, ...]:
    """The deviations of each quantity over the visits, as they were frozen."""
    from commission.records import series

    return series(archive.folder.records, data.id)


def records_page(data: SystemData, archive: Archive, found: tuple[Series, ...], figures: tuple[Figure, ...]) -> Sheet:
    """The visits to one system, and how each reading stood against the expectation at its own condition."""
    rows = [
        {
            "page": archive.pages[r.id],
            "title": title_of(r),
            "when": when(r),
            "mode": r.file.mode,
            "verdict": r.verdict,
            "corrected_by": archive.corrected.get(r.id),
            "sound": r.seal_holds,
        }
        for r in archive.of(data.id)
    ]
    context = {
        "rows": list(reversed(rows)),
        "history": _history(data.display, found),
        "charts": figures,
        "damaged": [str(p) for p in archive.folder.damaged],
        "drafts": archive.folder.drafts,
        "unanswered": archive.unanswered.get(data.id, ()),
        "unanswered_count": archive.open_answers(data.id),
        "day_sheet": data.page("day-sheet"),
        "checklist": data.page("checklist"),
        **_drift(data, found),
    }
    return Sheet(data.page("records"), "Records", data.group, "records.html", context, data.kicker)


def _drift(data: SystemData, found: tuple[Series, ...]) -> dict[str, Any]:
    """What has drifted since the baseline, and what kind of cause fits."""
    from commission.records import families, find_drifts

    drifted = find_drifts(found, data.display)
    valve = data.system.expansion is not None and data.system.expansion.device.endswith("valve")
    kinds = families(found, valve=valve, receiver=data.system.receiver is not None) if drifted else ()
    return {
        "drifts": drifted,
        "families": [(f.name, f.look_at, [data.display.words(k) for k in f.agree]) for f in kinds],
    }


def _history(display: Display, found: tuple[Series, ...]) -> dict[str, Any] | None:
    """Deviations over the visits, one row for each quantity that was read at least twice."""
    several = [s for s in found if len(s.points) >= 2]
    if not several:
        return None
    visits_at = sorted({(p.started, p.record) for s in several for p in s.points})
    rows = []
    for s in several:
        by_record = {p.record: p for p in s.points}
        cells = [
            (_plus_minus(display, s.quantity, p.deviation, p.expanded), p.significant) if p else ("–", False)
            for _, record in visits_at
            for p in [by_record.get(record)]
        ]
        rows.append((display.label(s.quantity), cells))
    return {"heads": [moment.date().isoformat() for moment, _ in visits_at], "rows": rows}


def signed(display: Display, kind: Kind, value: float) -> str:
    text = display.spread(value, kind)
    return text if text.startswith("−") or float(text) == 0 else f"+{text}"


def _plus_minus(display: Display, key: str, deviation: float, expanded: float) -> str:
    kind = display.kind(key)
    return f"{signed(display, kind, deviation)} ± {display.spread(expanded, kind)} {display.spread_unit(kind)}".strip()


def _head(item: OpenItem, loaded: LoadedPlant) -> str:
    """An item in a few words: a long one by its verdict, such as `Cooling capacity: undecided`, or by its line."""
    if len(item.what) <= _LONGEST_HEAD:
        return item.what
    verdict = re.split("[,;]", item.what)[0]
    if item.raised_by == "guarantee" and len(verdict) <= _LONGEST_HEAD:
        return verdict
    return label_of(item.line or "as found", loaded.display(item.system))


def open_lines(plant: PlantData, archive: Archive) -> tuple[OpenLine, ...]:
    """The open items for the front page: those with the nearest date first, then those without."""
    names = {d.id: d.name for d in plant.systems}
    waiting = sorted((i for i in archive.items if i.state == "open"), key=lambda i: (i.due is None, i.due, i.number))
    return tuple(
        OpenLine(
            i.number,
            _head(i, plant.loaded),
            names.get(i.system, i.system),
            i.who,
            i.due.isoformat() if i.due else None,
        )
        for i in waiting
    )


def open_items_page(plant: PlantData, archive: Archive) -> Sheet:
    """Open items first, then what was closed."""
    names = {d.id: d.name for d in plant.systems}

    def view(i: OpenItem) -> dict[str, Any]:
        head = _head(i, plant.loaded)
        return {
            "item": i,
            "head": head,
            "text": None if head == i.what else i.what,
            "system": names.get(i.system, i.system),
            "found": archive.pages.get(i.found_in),
            "closed": archive.pages.get(i.closed_in) if i.closed_in else None,
            "due": i.due.isoformat() if i.due else None,
        }

    waiting = [view(i) for i in archive.items if i.state == "open"]
    done = [view(i) for i in archive.items if i.state == "closed"]
    context = {"open": waiting, "closed": done, "table": ITEMS}
    return Sheet("open-items", "Open items", "plant", "open_items.html", context)
