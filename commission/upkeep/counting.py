"""What the records and the description say of days: first start, hand-over, and when a duty was last done."""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.records import FiledRecord
from commission.upkeep.entries import CountedFrom, DoneEntry, DutyEntry

if TYPE_CHECKING:
    from commission.description.model import System

NO = "no"
NOT_APPLICABLE = "not applicable"


@dataclass(frozen=True, slots=True)
class Day:
    """A day to count from and why; `on` is None where nothing tells it.

    `record` is the filed record that shows it, `at` the moment of its visit.
    """

    on: dt.date | None
    says: str
    record: str | None = None
    at: dt.datetime | None = None

    @property
    def moment(self) -> dt.datetime:
        """To tell two visits of one day apart; a day without a time counts from its beginning."""
        return self.at or dt.datetime.combine(self.on or dt.date.min, dt.time(), dt.UTC)


def counted_from(which: CountedFrom, system: System, records: Sequence[FiledRecord]) -> Day:
    """The day a duty is first counted from. `records` are those of this system in force, in the order of visits."""
    if which == "handover":
        return handover(records)
    if which == "installed" and system.installed_on is not None:
        return Day(system.installed_on, "the day of installation")
    return first_start(system, records)


def handover(records: Sequence[FiledRecord]) -> Day:
    """The hand-over: its own record, else the first accepted test, else the first test."""
    for record in records:
        if record.file.stage == "handover":
            return _of(record, "hand-over")
    for record in records:
        if record.file.mode == "test" and record.verdict == "conforming":
            return _of(record, "the first accepted test")
    for record in records:
        if record.file.mode == "test":
            return _of(record, "the first test, since no acceptance is filed")
    return Day(None, "no record yet: due from the day of hand-over")


def first_start(system: System, records: Sequence[FiledRecord]) -> Day:
    """The first start: its own record, else the earlier of the first readings and the day of installation."""
    for record in records:
        if record.file.stage == "first-start":
            return _of(record, "the first start")
    says = "the first readings, since no first start is filed"
    readings = next((_of(r, says) for r in records if r.file.readings), None)
    installed = system.installed_on
    if installed is not None and (readings is None or installed < (readings.on or dt.date.max)):
        return Day(installed, "the day of installation, since no first start is filed")
    return readings or Day(None, "no record yet: due from the day of the first start")


def last_done(
    entry: DutyEntry, system_id: str, records: Iterable[FiledRecord], done: Iterable[DoneEntry]
) -> Day | None:
    """The last day on which the duty was done, by a filed record or by the plant's upkeep.yaml."""
    found = [_of(r, f"done in the record {r.id}") for r in records if does(entry, r)]
    found += [
        Day(d.on, f"done by {d.by} ({d.evidence}), as upkeep.yaml says")
        for d in done
        if d.duty == entry.id and d.system == system_id
    ]
    return max(found, key=lambda day: day.moment, default=None)


def last_failed(entry: DutyEntry, records: Iterable[FiledRecord]) -> Day | None:
    """The last visit that answered the duty with no."""
    found = [_of(r, f"answered with no in the record {r.id}") for r in records if fails(entry, r)]
    return max(found, key=lambda day: day.moment, default=None)


def does(entry: DutyEntry, record: FiledRecord) -> bool:
    """Whether a record counts as done: one of its items answered, and none of them with no."""
    if fails(entry, record):
        return False
    answered = [a for key in _items(entry) if (a := record.file.answers.get(key)) is not None]
    if any(a.answer.strip() != NOT_APPLICABLE for a in answered):
        return True
    if record.file.stage in (entry.stage, *entry.done_by.stages):
        return True
    return entry.done_by.readings and bool(record.file.readings)


def fails(entry: DutyEntry, record: FiledRecord) -> bool:
    """Whether a record answers one of the duty's items with no, or with a value that is outside what it must be.

    Filing opened an item for each such answer; that was judged by the list of its day.
    """
    keys = _items(entry)
    raised = {item.line for item in record.filed.open_items if item.raised_by == "answer"}
    answers = record.file.answers
    return any(key in answers and (key in raised or answers[key].answer.strip() == NO) for key in keys)


def _items(entry: DutyEntry) -> tuple[str, ...]:
    return (*((entry.item,) if entry.item else ()), *entry.done_by.answers)


def _of(record: FiledRecord, says: str) -> Day:
    return Day(record.started.date(), says, record.id, record.started)
