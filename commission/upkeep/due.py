"""What is due and when: days counted from the filed records and the description, never from a clock."""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

from commission.errors import NotCalculatedError
from commission.records import FiledRecord, history, in_force
from commission.safety import MARKS, LeakDuty, fact, leak_duty_of
from commission.upkeep.counting import Day, counted_from, last_done, last_failed
from commission.upkeep.entries import LAW, DutyEntry, Mark
from commission.upkeep.intervals import Interval
from commission.upkeep.reading import Upkeep, upkeep_of

if TYPE_CHECKING:
    from commission.checklists import Item
    from commission.description import LoadedPlant
    from commission.description.model import Instrument


STRICTEST_MONTHS = 3
"""The interval of the last row of EU 2024/573, article 5(6): from 500 t CO₂ equivalent, or 100 kg of annex II."""


@dataclass(frozen=True, slots=True)
class Duty:
    """One thing that comes due, at one system or instrument.

    `key` is unique in the plant and stays the same as long as the plant describes it so. `next` is the day by which it
    is due, None where it is not known, done for good, or left out; `counted` says in words what it is counted from, or
    why there is no day. `source` and `mark` are those of the interval, `act_source` and `act_mark` those of the act.
    `item` is the checklist item that a record answers when it is done. `origin` is the data file and line.
    """

    key: str
    id: str
    subject: str
    subject_name: str
    of: str
    what: str
    next: dt.date | None
    last: dt.date | None
    counted: str
    every: Interval | None
    once: bool
    source: str
    mark: Mark
    origin: str
    record: str | None = None
    item: str | None = None
    act_source: str | None = None
    act_mark: str | None = None
    how: str | None = None
    must_read: str | None = None
    if_not: str | None = None
    hazard: str | None = None
    caution: str | None = None
    who: str | None = None
    note: str | None = None
    left_out: str | None = None

    @property
    def state(self) -> Literal["dated", "done", "left out", "no day"]:
        """It has a day; is done and not due again; is left out; or nothing tells the day: then see `counted`."""
        if self.next is not None:
            return "dated"
        if self.left_out is not None:
            return "left out"
        return "done" if self.once and self.last is not None else "no day"

    @property
    def sureness(self) -> str:
        """What the mark of the interval means, in words."""
        return MARKS[self.mark]

    @property
    def interval_text(self) -> str:
        """`every 6 months`, `once, after 10 months` or what is known instead."""
        if self.every is None and self.of == "instrument":
            return "as its certificate says"
        if self.every is None:
            return "no interval known"
        return f"once, after {self.every.text}" if self.once else f"every {self.every.text}"


@dataclass(frozen=True, slots=True)
class _Timing:
    """The interval of one duty of one system and by whose word."""

    every: Interval | None
    source: str
    mark: Mark
    note: str | None = None


def due(loaded: LoadedPlant) -> tuple[Duty, ...]:
    """Everything that comes due at the plant: what has a day first, in the order of days; then what has none.

    Raises:
        UpkeepError: the plant's upkeep.yaml cannot be used.
        ChecklistError: the plant's own checklists cannot be used.
    """
    upkeep = upkeep_of(loaded)
    records = in_force(history(loaded))
    found: list[Duty] = []
    for identity in loaded.plant.systems:
        found += _of_system(loaded, identity, upkeep, [r for r in records if r.system == identity])
    for entry, origin in upkeep.of_instruments:
        found += (_calibration(key, tool, entry, origin) for key, tool in loaded.plant.instruments.items())
    return tuple(sorted(found, key=lambda d: (d.next is None, d.next or dt.date.max, d.left_out is not None, d.key)))


def _of_system(loaded: LoadedPlant, identity: str, upkeep: Upkeep, records: Sequence[FiledRecord]) -> Iterator[Duty]:
    from commission.checklists import stages

    try:
        listed = stages(loaded, identity)
        law = leak_duty_of(loaded, identity)
    except NotCalculatedError as error:
        yield _without(loaded, identity, str(error))
        return
    items = {item.id: item for stage in listed for item in stage.items}
    named = {stage.id for stage in listed}
    for entry, origin in upkeep.of_system[identity]:
        if entry.item is not None and entry.item not in items and entry.what is None:
            continue
        if entry.stage is not None and entry.stage not in named:
            continue
        item = items.get(entry.item or "")
        timing = _timing(entry, law)
        days = (
            counted_from(entry.from_, loaded.system(identity), records),
            last_done(entry, identity, records, upkeep.done),
            last_failed(entry, records),
        )
        left_out = upkeep.left_out.get((identity, entry.id)) or (item.left_out if item else None)
        yield _duty(loaded, identity, entry, origin, item, timing, days, left_out)


def _timing(entry: DutyEntry, law: LeakDuty) -> _Timing:
    """The interval of a duty; that of a leak check follows the law, and common practice where the law sets none."""
    if entry.every != LAW:
        assert not isinstance(entry.every, str)
        return _Timing(entry.every or entry.once, entry.source, entry.mark, entry.unknown)
    if law.applies and law.months is not None:
        note = law.reason
        if law.months_with_detection is not None:
            note = (
                f"{law.reason}; {_detection_duty(law)}the longer interval counts only where such a system watches the "
                "whole circuit: then write it in upkeep.yaml"
            )
        return _Timing(Interval(law.months, "month"), f"{law.document}, {law.edition}", _mark(law.mark), note)
    assert entry.otherwise is not None
    if law.applies is None:
        note = f"whether a law asks for more is not known: {law.reason}"
    else:
        note = f"{law.document}: {law.reason}"
    return _Timing(entry.otherwise.every, entry.otherwise.source, entry.otherwise.mark, note)


def _detection_duty(law: LeakDuty) -> str:
    """From the amount of the strictest row a leakage detection system is itself a duty (EU 2024/573, article 6)."""
    if law.months != STRICTEST_MONTHS:
        return ""
    rule = fact("detection_system_duty")
    by = f"{rule.source}; {MARKS[rule.mark]}"
    return f"a leakage detection system is a duty for this amount, proved every 12 months ({by}); "


def _mark(text: str) -> Mark:
    marks: Mapping[str, Mark] = {
        "V2": "V2", "V1": "V1", "C": "C", "M": "M", "M-low": "M-low", "practice": "practice", "stated": "stated"
    }  # fmt: skip
    return marks[text]


def _duty(
    loaded: LoadedPlant,
    identity: str,
    entry: DutyEntry,
    origin: str,
    item: Item | None,
    timing: _Timing,
    days: tuple[Day, Day | None, Day | None],
    left_out: str | None,
) -> Duty:
    day, counted, record = _next(entry, timing, days)
    last = days[1]
    notes = [n for n in (timing.note if timing.every else None, item.note if item else None) if n]
    return Duty(
        key=f"{identity}.{entry.id}",
        id=entry.id,
        subject=identity,
        subject_name=loaded.system(identity).name or identity,
        of="system",
        what=entry.what or (item.do if item else entry.id),
        next=None if left_out else day,
        last=last.on if last else None,
        counted=f"left out: {left_out}" if left_out else counted,
        every=timing.every,
        once=entry.once is not None,
        source=timing.source,
        mark=timing.mark,
        origin=origin,
        record=record,
        item=entry.item if item else None,
        act_source=item.source if item else None,
        act_mark=item.mark if item else None,
        how=item.how if item else None,
        must_read=item.must_read.text if item and item.must_read else None,
        if_not=item.if_not if item else None,
        hazard=item.hazard if item else None,
        caution=item.caution if item else None,
        who=entry.who or (item.who if item else None),
        note="; ".join(notes) or None,
        left_out=left_out,
    )


def _next(
    entry: DutyEntry, timing: _Timing, days: tuple[Day, Day | None, Day | None]
) -> tuple[dt.date | None, str, str | None]:
    """The next day, what it is counted from in words, and the record that shows it."""
    start, last, failed = days
    if failed is not None and last is not None and last.moment >= failed.moment:
        failed = None  # it was put right since
    if entry.once is not None and last is not None:
        return None, f"{last.says} on {last.on}; not due again", last.record
    if timing.every is None:
        if last is not None:
            return None, f"last {last.says} on {last.on}; {timing.note or 'no interval is known'}", last.record
        return None, timing.note or "no interval is known", None
    base = last or start
    regular, words = _counted(base, last is not None, timing.every)
    if failed is None or failed.on is None:
        return regular, words, base.record
    if entry.again is not None:  # it was done, and found something
        days_after = (_later(entry.again.within, failed.on), _later(timing.every, failed.on))
        soon = min((d for d in days_after if d is not None), default=None)
        again = f"again within {entry.again.within.text} ({entry.again.source}; {MARKS[entry.again.mark]})"
        return soon, f"{failed.says} on {failed.on}: {again}", failed.record
    first = min((d for d in (regular, failed.on) if d is not None), default=failed.on)
    return first, f"{failed.says} on {failed.on}, and not done since", failed.record


def _counted(base: Day, done: bool, every: Interval) -> tuple[dt.date | None, str]:
    if base.on is None:
        return None, base.says
    day = _later(every, base.on)
    if done:
        return day, f"last {base.says} on {base.on}"
    return day, f"never done by the records; counted from {base.says}, {base.on}"


def _later(every: Interval, day: dt.date) -> dt.date | None:
    """None where the calendar ends before: a slip of the pen in a year must not end the list."""
    try:
        return every.after(day)
    except OverflowError:
        return None


def _calibration(key: str, tool: Instrument, entry: DutyEntry, origin: str) -> Duty:
    """The calibration of one instrument, by its certificate; where that names no last day, a year after."""
    every = entry.every
    assert isinstance(every, Interval)
    day, source, mark = tool.calibrated_until, "calibration certificate", "stated"
    counted = "the last day of its calibration, as described"
    if day is None and tool.calibrated_on is not None:
        day, source, mark = _later(every, tool.calibrated_on), entry.source, entry.mark
        counted = f"calibrated on {tool.calibrated_on}; the description does not say until when"
    elif day is None:
        source, mark = entry.source, entry.mark
        counted = "no calibration is described: due before the next test, which is void without it"
    name = f"{key} ({tool.serial})" if tool.serial else key
    return Duty(
        key=f"instrument.{key}.{entry.id}",
        id=entry.id,
        subject=key,
        subject_name=name,
        of="instrument",
        what=f"{entry.what}.",
        next=day,
        last=tool.calibrated_on,
        counted=counted,
        every=None if tool.calibrated_until else every,
        once=False,
        source=source,
        mark=_mark(mark),
        origin=origin,
    )


def _without(loaded: LoadedPlant, identity: str, reason: str) -> Duty:
    """A system whose duties cannot be worked out says so; the others are listed."""
    return Duty(
        key=f"{identity}.not-worked-out",
        id="not-worked-out",
        subject=identity,
        subject_name=loaded.system(identity).name or identity,
        of="system",
        what="Ask for what comes due at this system.",
        next=None,
        last=None,
        counted=f"not worked out: {reason}",
        every=None,
        once=False,
        source="design model",
        mark="C",
        origin="",
    )
