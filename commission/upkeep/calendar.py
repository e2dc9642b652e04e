"""The days that are due as an iCalendar file (RFC 5545): the same plant and records give the same bytes."""

from __future__ import annotations

import datetime as dt
import hashlib
from collections.abc import Iterable, Sequence
from typing import TYPE_CHECKING

from commission.records import FiledRecord, history
from commission.safety import MARKS
from commission.upkeep.due import Duty, due

if TYPE_CHECKING:
    from icalendar import Alarm, Event

    from commission.description import LoadedPlant

PRODUCT = "-//commission//upkeep//EN"
NOTHING_KNOWN = dt.datetime(1970, 1, 1, tzinfo=dt.UTC)
"""DTSTAMP is wanted by RFC 5545 3.8.7.2; where nothing is filed or dated, no later moment can be named."""


def calendar(loaded: LoadedPlant, duties: Sequence[Duty] | None = None) -> bytes:
    """One all-day event for each duty that has a day, as UTF-8 with the line ends of RFC 5545 3.1.

    UIDs follow plant, subject and duty, so that a calendar read in again moves its events instead of doubling them;
    DTSTAMP is the moment of the last filed record (else the last day the description names), SEQUENCE the number of
    filed records. Only the next day is written, no repetition: the one after counts from the day it is done.
    `duties` are those of `due`, where the caller has them already.

    Raises:
        UpkeepError, ChecklistError: as `due`.
    """
    from icalendar import Calendar

    site = loaded.plant.plant.name
    records = history(loaded)
    stamp = _stamp(loaded, records)
    duties = due(loaded) if duties is None else duties
    book = Calendar()
    book.add("prodid", PRODUCT)
    book.add("version", "2.0")
    book.add("calscale", "GREGORIAN")
    book.add("method", "PUBLISH")
    book.add("x-wr-calname", f"Upkeep: {site}")
    undated = sum(1 for d in duties if d.state == "no day")
    words = "Next days counted from the filed records."
    book.add("x-wr-caldesc", f"{words} {undated} more have no day yet: see the manual." if undated else words)
    for duty in duties:
        if duty.next is not None:
            book.add_component(_event(duty, duty.next, site, stamp, len(records)))
    return bytes(book.to_ical())


def _event(duty: Duty, day: dt.date, site: str, stamp: dt.datetime, sequence: int) -> Event:
    from icalendar import Event

    event = Event()
    event.add("uid", _uid(site, duty))
    event.add("dtstamp", stamp)
    event.add("sequence", sequence)
    event.add("dtstart", day)
    event.add("dtend", day + dt.timedelta(days=1) if day < dt.date.max else day)
    event.add("summary", f"{duty.subject_name}: {duty.what.rstrip('.')}")
    event.add("description", "\n".join(_lines(duty)))
    event.add("location", site)
    event.add("categories", ["upkeep", duty.id])
    event.add("transp", "TRANSPARENT")
    event.add("class", "PUBLIC")
    if duty.every is None or duty.every.days >= 90:
        event.add_component(_alarm(duty))
    return event


def _alarm(duty: Duty) -> Alarm:
    """Two weeks' notice, so that somebody can be booked; what is done every month needs none."""
    from icalendar import Alarm

    alarm = Alarm()
    alarm.add("action", "DISPLAY")
    alarm.add("trigger", -dt.timedelta(days=14))
    alarm.add("description", f"Due in two weeks: {duty.subject_name}: {duty.what}")
    return alarm


def _lines(duty: Duty) -> Iterable[str]:
    yield duty.what
    if duty.must_read:
        yield f"Must be: {duty.must_read}"
    for word, text in (("How", duty.how), ("If not", duty.if_not), ("Hazard", duty.hazard), ("Caution", duty.caution)):
        if text:
            yield f"{word}: {text}"
    if duty.who:
        yield f"Who: {duty.who}"
    yield f"Counted: {duty.counted}"
    interval = f"{duty.interval_text}; " if duty.every else ""
    yield f"Interval: {interval}{duty.source} ({MARKS[duty.mark]})"
    if duty.note:
        yield f"Note: {duty.note}"
    if duty.item:
        yield f"Answer {duty.item} in a record of this visit: the next day counts from it."


def _uid(site: str, duty: Duty) -> str:
    """RFC 7986 5.3: a UID that gives nothing away and is the same every time."""
    text = "\n".join((site, duty.key))
    return f"{hashlib.sha256(text.encode()).hexdigest()[:32]}@commission"


def _stamp(loaded: LoadedPlant, records: Iterable[FiledRecord]) -> dt.datetime:
    moments = [r.filed.filed_at or r.started for r in records]
    if moments:
        return max(m.astimezone(dt.UTC) for m in moments).replace(microsecond=0)
    days = [s.installed_on for s in loaded.plant.systems.values() if s.installed_on]
    days += [i.calibrated_on for i in loaded.plant.instruments.values() if i.calibrated_on]
    if not days:
        return NOTHING_KNOWN
    return dt.datetime.combine(max(days), dt.time(), dt.UTC)
