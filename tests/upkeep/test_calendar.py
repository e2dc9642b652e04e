"""The calendar as another program reads it: a second parser, not the one that wrote it."""

from __future__ import annotations

import datetime as dt
import subprocess
import sys
from typing import TYPE_CHECKING, Any

import pytest
import vobject

from commission.records import file_record
from commission.upkeep import calendar, due

if TYPE_CHECKING:
    from pathlib import Path

    from tests.upkeep.conftest import Site


def read_back(content: bytes) -> list[Any]:
    """The events of a calendar as vobject reads them."""
    return list(vobject.readOne(content.decode("utf-8"), validate=True).vevent_list)


@pytest.fixture
def started(site: Site) -> Site:
    """The store after its first start."""
    site.file("2026-03-10", "first-start")
    return site


def test_each_dated_duty_is_one_event_on_its_day(started: Site) -> None:
    """Read back by a second parser: day, summary, place and words are those of the duty."""
    dated = [duty for duty in due(started.loaded) if duty.next]
    events = read_back(calendar(started.loaded))
    assert len(events) == len(dated) > 5
    for duty, event in zip(dated, events, strict=True):
        assert event.dtstart.value == duty.next
        assert event.dtend.value - event.dtstart.value == dt.timedelta(days=1)
        assert event.summary.value == f"Store: {duty.what.rstrip('.')}"
        assert event.location.value == 'Store, yard; and "more"'
        assert duty.counted in event.description.value
        assert duty.sureness in event.description.value
        assert (duty.hazard or "") in event.description.value


def test_the_same_plant_gives_the_same_bytes(started: Site) -> None:
    """Also in a process of its own, with another seed for hashes."""
    first = calendar(started.loaded)
    assert calendar(started.loaded) == first
    code = (
        "import sys; from commission.description import load_plant; from commission.upkeep import calendar; "
        f"sys.stdout.buffer.write(calendar(load_plant({str(started.folder)!r})))"
    )
    run = subprocess.run(
        [sys.executable, "-c", code], capture_output=True, check=True, env={"PYTHONHASHSEED": "77", "PATH": ""}
    )
    assert run.stdout == first


def test_a_later_record_moves_the_event_and_keeps_its_uid(started: Site) -> None:
    """A calendar that is read in again moves events: same UID, higher sequence, later stamp (RFC 5545 3.8.7.4)."""
    before = {e.uid.value: e for e in read_back(calendar(started.loaded))}
    started.file("2026-08-01", answers={"upkeep.alarm": "yes"})
    after = {e.uid.value: e for e in read_back(calendar(started.loaded))}
    assert set(after) == set(before)
    moved = [uid for uid in after if after[uid].dtstart.value != before[uid].dtstart.value]
    assert [after[uid].summary.value.split(":")[1].strip()[:14] for uid in moved] == ["Make the tempe"]
    for uid in after:
        assert int(after[uid].sequence.value) == int(before[uid].sequence.value) + 1
        assert after[uid].dtstamp.value > before[uid].dtstamp.value


def test_stamp_is_the_last_visit_in_utc(started: Site) -> None:
    """10:00 at +01:00 is 09:00 UTC; no clock is read."""
    event = read_back(calendar(started.loaded))[0]
    assert event.dtstamp.value == dt.datetime(2026, 3, 10, 9, tzinfo=dt.UTC)


def test_lines_end_and_fold_as_the_standard_says(started: Site) -> None:
    """RFC 5545 3.1: CRLF, and no line longer than 75 octets without its end."""
    content = calendar(started.loaded)
    assert content.endswith(b"END:VCALENDAR\r\n")
    lines = content.split(b"\r\n")
    assert all(len(line) <= 75 for line in lines)
    assert not any(b"\n" in line or b"\r" in line for line in lines)


def test_what_every_calendar_must_have(started: Site) -> None:
    """RFC 5545 3.6 and 3.6.1: version, product, and UID and stamp in each event; UIDs are unique."""
    book = vobject.readOne(calendar(started.loaded).decode("utf-8"), validate=True)
    assert book.version.value == "2.0"
    assert book.prodid.value
    uids = [event.uid.value for event in book.vevent_list]
    assert len(set(uids)) == len(uids)


def test_notice_is_given_where_somebody_must_be_booked(started: Site) -> None:
    """Two weeks before what comes due every three months or less often; none for what is done every month."""
    for event in read_back(calendar(started.loaded)):
        monthly = "trapped-person alarm" in event.summary.value
        alarms = event.contents.get("valarm", [])
        assert len(alarms) == (0 if monthly else 1)
        assert all(alarm.trigger.value == dt.timedelta(days=-14) for alarm in alarms)


def test_a_plant_without_days_gives_an_empty_calendar_that_says_so(site: Site) -> None:
    """No event is invented; the description counts what has no day yet."""
    book = vobject.readOne(calendar(site.loaded).decode("utf-8"), validate=True)
    assert "vevent" not in book.contents
    assert "have no day yet" in book.contents["x-wr-caldesc"][0].value


def test_a_visit_that_is_filed_moves_the_day(site: Site, tmp_path: Path) -> None:
    """From the draft that a person writes to the next day: read, checked and filed by the room of records."""
    draft = tmp_path / "draft.yaml"
    draft.write_text(
        "system: store\nstage: upkeep\nstarted: 2027-02-01T09:00+01:00\npeople: {operator: {name: a fitter}}\n"
        "answers: {upkeep.alarm: yes, upkeep.leaks: {answer: no, reason: oil at a flare}}\n",
        encoding="utf-8",
    )
    file_record(site.loaded, draft)
    duties = site.duties()
    assert duties["store.alarm"].next == dt.date(2027, 8, 1)
    assert duties["store.leaks"].next == dt.date(2027, 3, 1)


def test_importing_the_room_is_light() -> None:
    """The calendar library, CoolProp and matplotlib are imported where they are used, not at the start."""
    heavy = {"icalendar", "CoolProp", "matplotlib", "scipy"}
    code = f"import commission.upkeep, sys; print(sorted({heavy} & set(sys.modules)))"
    run = subprocess.run([sys.executable, "-c", code], capture_output=True, check=True, encoding="utf-8")
    assert run.stdout.strip() == "[]"
