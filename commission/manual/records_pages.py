"""Records as they were filed: one page for each visit, the list of a system, open items, and the certificate."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from commission.manual.book import OwnerFile, Sheet, slugs
from commission.manual.gather import PlantData, SystemData
from commission.manual.page_display import PageDisplay
from commission.manual.plant_pages import OpenLine
from commission.manual.plots import Figure
from commission.manual.showing import label_of, unit_of
from commission.manual.states import Visit
from commission.quantities import NOMENCLATURE, Display, Kind

if TYPE_CHECKING:
    from commission.records import FiledRecord, OpenItem, RecordsFolder, Series
    from commission.records.filed import FrozenDeviation, FrozenGuarantee, FrozenReading


ITEMS = "open-items.csv"
"""All open items as a table for a spreadsheet, at the top of the site."""


@dataclass(frozen=True, slots=True)
class Archive:
    """The filed records of a plant with the page of each; `corrected` maps a record to the one that took its place."""

    folder: RecordsFolder
    items: tuple[OpenItem, ...]
    pages: Mapping[str, str]
    corrected: Mapping[str, str]
    files: tuple[OwnerFile, ...]

    def of(self, system: str) -> tuple[FiledRecord, ...]:
        """The records of one system in the order of the visits."""
        return tuple(r for r in self.folder.records if r.system == system)


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
            if path.is_file() and folder.resolve() in path.resolve().parents:
                files.append(OwnerFile(f"records/{attached.path}", path))
    return Archive(found, open_items(plant.loaded), pages, corrected, tuple(files))


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


def records_page(
    plant: PlantData, data: SystemData, archive: Archive, found: tuple[Series, ...], figures: tuple[Figure, ...]
) -> Sheet:
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
        "history": _history(plant.display, found),
        "charts": figures,
        "damaged": [str(p) for p in archive.folder.damaged],
        "drafts": archive.folder.drafts,
        "day_sheet": data.page("day-sheet"),
        "checklist": data.page("checklist"),
        **_drift(plant, data, found),
    }
    return Sheet(data.page("records"), "Records", data.group, "records.html", context, data.kicker)


def _drift(plant: PlantData, data: SystemData, found: tuple[Series, ...]) -> dict[str, Any]:
    """What has drifted since the baseline, and what kind of cause fits."""
    from commission.records import families, find_drifts

    drifted = find_drifts(found, plant.display)
    valve = data.system.expansion is not None and data.system.expansion.device.endswith("valve")
    kinds = families(found, valve=valve, receiver=data.system.receiver is not None) if drifted else ()
    return {
        "drifts": drifted,
        "families": [(f.name, f.look_at, [label_of(k).lower() for k in f.agree]) for f in kinds],
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
        rows.append((label_of(s.quantity), cells))
    return {"heads": [moment.date().isoformat() for moment, _ in visits_at], "rows": rows}


def _signed(display: Display, kind: Kind, value: float) -> str:
    text = display.spread(value, kind)
    return text if text.startswith("−") or float(text) == 0 else f"+{text}"


def _plus_minus(display: Display, key: str, deviation: float, expanded: float) -> str:
    kind = NOMENCLATURE[key].kind
    return f"{_signed(display, kind, deviation)} ± {display.spread(expanded, kind)} {display.spread_unit(kind)}".strip()


def _reading(display: Display, key: str, r: FrozenReading) -> dict[str, str]:
    """A reading as it was written; where only its origin was (`mean of 5 samples`), the number stands before it."""
    number = any(c.isdigit() for c in r.written[:2])
    return {
        "label": label_of(key),
        "written": r.written if number or key not in NOMENCLATURE else f"{display.of(key, r.value)}, {r.written}",
        "where": r.where or "",
        "instrument": r.instrument or "not stated",
    }


def _deviation(display: Display, key: str, d: FrozenDeviation, written: str) -> dict[str, Any]:
    kind = NOMENCLATURE[key].kind
    return {
        "label": label_of(key),
        "unit": unit_of(display, kind),
        "read": display.number(d.reading, kind),
        "written": written,
        "expected": display.number(d.expected, kind),
        "deviation": _signed(display, kind, d.deviation),
        "expanded": display.spread(d.expanded, kind),
        "spread_unit": display.spread_unit(kind),
        "significant": d.significant,
    }


def _limits(display: Display, kind: Kind, low: float | None, high: float | None) -> str:
    parts = [f"at least {display.text(low, kind)}"] if low is not None else []
    parts += [f"at most {display.text(high, kind)}"] if high is not None else []
    return " and ".join(parts)


def _guarantee(display: Display, g: FrozenGuarantee) -> dict[str, Any]:
    kind = NOMENCLATURE[g.quantity].kind
    shares = [
        f"{display.text(v, Kind.RATIO, 1)} {word}"
        for v, word in ((g.below, "below"), (g.above, "above"))
        if v is not None
    ]
    at = ", ".join(f"{label_of(k).lower()} {display.of(k, v)}" for k, v in g.at.items())
    pairs = [
        ("Promised", f"{display.text(g.guaranteed, kind)} at {at}" if at else display.text(g.guaranteed, kind)),
        ("Tolerance", ", ".join(shares) or "none stated"),
        ("Carried to the day by", g.carried_by),
        ("Promised for the condition of the day", display.text(g.carried, kind) if g.carried is not None else ""),
        ("Limit on the day", _limits(display, kind, g.limit_low, g.limit_high)),
        ("Measured", display.text(g.measured, kind) if g.measured is not None else ""),
        ("Measured by", g.route or ""),
        ("Expanded uncertainty (95 %)", f"{display.spread(g.expanded, kind)} {display.spread_unit(kind)}"
         if g.expanded is not None else ""),
        ("Decision rule", f"{g.rule} acceptance"),
        ("Accepted where", _limits(display, kind, g.acceptance_low, g.acceptance_high)),
        ("Probability of conformity", display.text(g.probability, Kind.RATIO, 1) if g.probability is not None else ""),
        ("Target frozen before the test", "yes" if g.frozen_before else "no"),
        ("Clause", g.source or ""),
        ("No verdict because", g.withheld or ""),
        ("What would decide", g.what_would_decide or ""),
    ]  # fmt: skip
    return {
        "label": label_of(g.quantity),
        "outcome": g.outcome,
        "look": VERDICT_CLASS[g.outcome],
        "facts": [{"label": a, "text": t} for a, t in pairs if t],
    }


def _shared(plant: PlantData, record: FiledRecord, archive: Archive) -> dict[str, Any]:
    """What record page and certificate share."""
    display = PageDisplay(plant.display.system, record.filed.barometric_pressure)
    filed, file = record.filed, record.file
    return {
        "record": record,
        "when": when(record),
        "name": title_of(record),
        "look": VERDICT_CLASS[record.verdict],
        "people": [(role, p) for role, p in file.people.items()],
        "conditions": [_reading(display, k, r) for k, r in filed.conditions.items()],
        "air": f"{filed.barometric_pressure / 100:.0f} hPa"
        + ("" if filed.barometer_measured else ", not measured: from the altitude"),
        "guarantees": [_guarantee(display, g) for g in filed.guarantees],
        "instruments": [(name, list(words.items())) for name, words in filed.instruments.items()],
        "attachments": [
            (
                a.file,
                f"records/{a.path}" if any(f.site_path == f"records/{a.path}" for f in archive.files) else None,
                a.sha256,
            )
            for a in filed.attachments
        ],
        "items": [i for i in archive.items if i.found_in == record.id],
    }


def record_page(plant: PlantData, data: SystemData, record: FiledRecord, archive: Archive) -> Sheet:
    """One visit as it was filed."""
    display = PageDisplay(plant.display.system, record.filed.barometric_pressure)
    filed = record.filed
    written = {k: r.written for k, r in filed.readings.items()}
    judged = [_deviation(display, k, d, written.get(k, "")) for k, d in filed.deviations.items()]
    alone = [_reading(display, k, r) for k, r in filed.readings.items() if k not in filed.deviations]
    corrected = archive.corrected.get(record.id)
    context = {
        **_shared(plant, record, archive),
        "deviations": judged,
        "alone": alone,
        "not_judged": [(label_of(k), why) for k, why in filed.not_judged.items()],
        "routes": [
            (r.route, label_of(r.quantity), None if r.value is None else display.of(r.quantity, r.value), r.refused)
            for r in filed.routes
        ],
        "corrected_page": archive.pages.get(corrected) if corrected else None,
        "corrects_page": archive.pages.get(record.file.corrects) if record.file.corrects else None,
        "certificate": certificate_id(record, archive) if _accepted(record, archive) else None,
        "records_page": data.page("records"),
    }
    title = f"{title_of(record)}, {record.started.date().isoformat()}"
    return Sheet(archive.pages[record.id], title, data.group, "record.html", context, data.kicker, listed=False)


def _accepted(record: FiledRecord, archive: Archive) -> bool:
    return record.file.mode == "test" and record.verdict == "conforming" and record.id not in archive.corrected


def certificate_id(record: FiledRecord, archive: Archive) -> str:
    """The page of the certificate."""
    return f"{archive.pages[record.id]}-certificate"


def certificates(plant: PlantData, data: SystemData, archive: Archive) -> tuple[Sheet, ...]:
    """A certificate for each accepted test, printed from what was frozen when it was filed."""
    return tuple(
        Sheet(
            certificate_id(r, archive),
            "Certificate of acceptance",
            data.group,
            "certificate.html",
            {**_shared(plant, r, archive), "plant_name": plant.name, "system_name": data.name,
             "address": plant.loaded.plant.plant.address, "record_page": archive.pages[r.id]},
            kicker=data.kicker,
            short=f"Certificate {r.started.date().isoformat()}",
            paper=True,
        )
        for r in archive.of(data.id)
        if _accepted(r, archive)
    )  # fmt: skip


def _head(item: OpenItem) -> str:
    """An item in a few words: a long one by its verdict, such as `Cooling capacity: undecided`, or by its line."""
    if len(item.what) <= _LONGEST_HEAD:
        return item.what
    verdict = re.split("[,;]", item.what)[0]
    if item.raised_by == "guarantee" and len(verdict) <= _LONGEST_HEAD:
        return verdict
    return label_of(item.line or "as found")


def open_lines(plant: PlantData, archive: Archive) -> tuple[OpenLine, ...]:
    """The open items for the front page: those with the nearest date first, then those without."""
    names = {d.id: d.name for d in plant.systems}
    waiting = sorted((i for i in archive.items if i.state == "open"), key=lambda i: (i.due is None, i.due, i.number))
    return tuple(
        OpenLine(
            i.number,
            _head(i),
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
        head = _head(i)
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
