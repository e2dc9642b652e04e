"""Records as they were filed: the list of a system with what has moved, and the open items."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from commission.manual.archive import Archive, head_of, title_of, when
from commission.manual.book import Sheet
from commission.manual.gather import PlantData, SystemData
from commission.manual.plots import Figure
from commission.quantities import Display, Kind

if TYPE_CHECKING:
    from commission.records import OpenItem, Series


ITEMS = "open-items.csv"
"""All open items as a table for a spreadsheet, at the top of the site."""


VERDICT_CLASS = {"conforming": "good", "not conforming": "danger", "undecided": "care", "none": ""}


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


def open_items_page(plant: PlantData, archive: Archive) -> Sheet:
    """Open items first, then what was closed."""
    names = {d.id: d.name for d in plant.systems}

    def view(i: OpenItem) -> dict[str, Any]:
        head = head_of(i, plant)
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
