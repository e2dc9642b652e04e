"""The page of what is due: every duty once, days that the browser can mark, links, and the calendar beside it."""

from __future__ import annotations

import datetime as dt
from pathlib import Path

import pytest
from icalendar import Calendar
from markupsafe import escape

from commission.description import load_plant
from commission.manual import BuildResult
from commission.manual.upkeep_pages import month
from commission.upkeep import Duty, due
from tests.manual.pages import ReadPage, read_page


@pytest.fixture(scope="module")
def duties(plant: Path) -> tuple[Duty, ...]:
    """What is due at the plant with filed visits."""
    return due(load_plant(plant))


@pytest.fixture(scope="module")
def page(site: Path) -> ReadPage:
    """The page of what is due."""
    return read_page(site / "upkeep.html")


def test_every_duty_stands_on_the_page_once_with_its_day(page: ReadPage, duties: tuple[Duty, ...]) -> None:
    """As many rows as duties, and the days in the order in which they come."""
    rows = [i for i in page.ids if i.startswith("due-")]
    assert len(rows) == len(set(rows)) == len(duties) > 10
    days = [str(a["data-until"]) for _, a in page.tags if a.get("data-until")]
    assert days == [d.next.isoformat() for d in duties if d.next is not None]
    assert days == sorted(days)


def test_a_duty_shows_what_it_counts_from_and_how_sure_its_interval_is(site: Path, duties: tuple[Duty, ...]) -> None:
    """Words, interval, what is counted and the source of the first and last duty are in its row."""
    text = " ".join((site / "upkeep.html").read_text(encoding="utf-8").split())
    for duty in (duties[0], duties[-1]):
        for words in (duty.what, duty.interval_text[1:], duty.counted[1:], duty.source[1:]):
            assert str(escape(words)) in text, words


def test_the_calendar_holds_the_dated_duties(site: Path, duties: tuple[Duty, ...]) -> None:
    """The file at the top of the manual has one event for each day of the page."""
    book = Calendar.from_ical((site / "upkeep.ics").read_bytes())
    days = sorted(e["DTSTART"].dt for e in book.walk("VEVENT"))
    assert days == sorted(d.next for d in duties if d.next is not None)
    assert all(isinstance(day, dt.date) for day in days)
    assert ("a", "upkeep.ics") in read_page(site / "upkeep.html").links


def test_the_first_page_of_a_system_shows_its_next_three_days(site: Path, duties: tuple[Duty, ...]) -> None:
    """The three nearest days of the system, each leading to its row."""
    first = read_page(site / "systems" / "cold-room" / "what-it-is.html")
    wanted = [d.next.isoformat() for d in duties if d.next is not None and d.subject == "cold-room"][:3]
    assert [a["data-until"] for _, a in first.tags if a.get("data-until")] == wanted
    assert sum(link.startswith("../../upkeep.html#due-") for _, link in first.links) == 3


def test_where_nothing_is_filed_the_page_says_so(hostile: BuildResult) -> None:
    """A plant without records is told that its days count from installation or are not known."""
    text = (hostile.first_page.parent / "upkeep.html").read_text(encoding="utf-8")
    assert "Nothing is filed yet" in text


def test_month_in_words() -> None:
    """A date as month and year."""
    assert month("2027-03-31") == "March 2027"
