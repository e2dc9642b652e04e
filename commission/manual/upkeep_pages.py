"""What is due at plant and instruments: the list by days, the calendar file, and the next days of each system."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from itertools import groupby
from typing import TYPE_CHECKING

from commission.manual.book import Book, Sheet, slug
from commission.manual.gather import PlantData, SystemData
from commission.manual.showing import sourced

if TYPE_CHECKING:
    from commission.manual.archive import Archive
    from commission.upkeep import Duty

CALENDAR = "upkeep.ics"
"""The calendar file, at the top of the site."""

PAGE = "upkeep"
_MONTHS = (
    "January", "February", "March", "April", "May", "June", "July", "August", "September", "October", "November",
    "December",
)  # fmt: skip


@dataclass(frozen=True, slots=True)
class DutyView:
    """One duty as its row shows it.

    `until` is the day as a date in text, None where there is none; `instead` is what stands in its place. `sources`
    pairs the words before a source with the source and how sure it is. `record_page`, and `item_page` with
    `item_anchor`, are places to go to.
    """

    anchor: str
    until: str | None
    instead: str
    subject: str
    what: str
    interval: str
    counted: str
    who: str | None
    sources: tuple[tuple[str, str], ...]
    details: tuple[tuple[str, str], ...]
    hazard: str | None
    caution: str | None
    record: str | None
    record_page: str | None
    item: str | None
    item_page: str | None
    item_anchor: str


@dataclass(frozen=True, slots=True)
class NextDuty:
    """One line on the first page of a system."""

    anchor: str
    until: str
    what: str
    interval: str


def _sentence(text: str) -> str:
    return text[:1].upper() + text[1:]


def anchor(duty: Duty) -> str:
    """The anchor of a duty on the page of what is due."""
    return f"due-{slug(duty.key)}"


def _view(duty: Duty, plant: PlantData, archive: Archive, items: dict[str, set[str]]) -> DutyView:
    from commission.safety import MARKS

    page = next((d.page("checklist") for d in plant.systems if d.id == duty.subject and duty.of == "system"), None)
    known = duty.item is not None and duty.item in items.get(duty.subject, set())
    sources = [("Interval", _sentence(sourced(duty.source, duty.sureness)))]
    if duty.act_source and duty.act_mark:
        sources.append(("What to do", _sentence(sourced(duty.act_source, MARKS[duty.act_mark]))))
    pairs = (
        ("Must read", duty.must_read), ("How", duty.how), ("If not", duty.if_not),
        ("Last done", duty.last.isoformat() if duty.last else None),
        ("Note", _sentence(duty.note) if duty.note else None),
    )  # fmt: skip
    return DutyView(
        anchor=anchor(duty),
        until=duty.next.isoformat() if duty.next else None,
        instead=f"done {duty.last.isoformat()}" if duty.state == "done" and duty.last else duty.state,
        subject=_sentence(duty.subject_name),
        what=duty.what,
        interval=duty.interval_text,
        counted=_sentence(duty.counted),
        who=duty.who,
        sources=tuple(sources),
        details=tuple((a, t) for a, t in pairs if t),
        hazard=duty.hazard,
        caution=duty.caution,
        record=duty.record,
        record_page=archive.pages.get(duty.record) if duty.record else None,
        item=duty.item,
        item_page=page if known else None,
        item_anchor=f"item-{duty.item}",
    )


def month(until: str) -> str:
    """The month of a date in words: `March 2027`."""
    year, number, _ = until.split("-")
    return f"{_MONTHS[int(number) - 1]} {year}"


def _months(views: Iterable[DutyView]) -> tuple[tuple[str, tuple[DutyView, ...]], ...]:
    """Views that have a day, in their order, by month."""
    return tuple((name, tuple(v)) for name, v in groupby(views, key=lambda v: month(v.until or "")))


def _items_of(book: Book, plant: PlantData) -> dict[str, set[str]]:
    """The checklist items of each system that have a place on its checklist page."""
    found: dict[str, set[str]] = {}
    for data in plant.systems:
        stages = book.get(data.page("checklist")).context.get("stages", ())
        found[data.id] = {view.item.id for stage in stages for view in stage.items}
    return found


def upkeep_page(book: Book, plant: PlantData, archive: Archive, duties: tuple[Duty, ...]) -> Sheet:
    """All duties: those with a day by month, those without, those done for good, those left out."""
    items = _items_of(book, plant)
    by_state: dict[str, list[DutyView]] = {"dated": [], "no day": [], "done": [], "left out": []}
    for duty in duties:
        by_state[duty.state].append(_view(duty, plant, archive, items))
    filed = {r.system for r in archive.folder.records}
    context = {
        "months": _months(by_state["dated"]),
        "dated": len(by_state["dated"]),
        "no_day": by_state["no day"],
        "done": by_state["done"],
        "left_out": by_state["left out"],
        "calendar": CALENDAR,
        "unfiled": [d.name for d in plant.systems if d.id not in filed],
        "systems": len(plant.systems),
    }
    return Sheet(PAGE, "What is due", "plant", "upkeep.html", context)


def next_duties(data: SystemData, duties: tuple[Duty, ...], count: int = 3) -> tuple[NextDuty, ...]:
    """The next duties of one system that have a day."""
    return tuple(
        NextDuty(anchor(d), d.next.isoformat(), d.what, d.interval_text)
        for d in duties
        if d.of == "system" and d.subject == data.id and d.next is not None
    )[:count]
