"""Open items through their life, and their table."""

from __future__ import annotations

import csv
import datetime as dt
import io
from pathlib import Path

import pytest

from commission.description import LoadedPlant
from commission.prediction import SystemModel
from commission.records import OpenItem, RecordError, file_record, history, in_force, items_csv, open_items, read_filed

from .conftest import Write

RAISED = """\
system: store
stage: visit
started: 2026-04-21T10:20:00+01:00
people: {operator: {name: A fitter}}
answers: {visit.clean: {answer: no, reason: leaves in the fins}}
open_items:
  - {what: insulate the pipe, who: contractor, due: 2026-05-08, retest: look at it}
"""
LATER = """\
system: store
stage: visit
started: 2026-05-14T10:20:00+01:00
people: {operator: {name: A fitter}}
item_updates:
  - {item: 1, closed: yes, closed_by: the owner, remark: seen}
  - {item: 2, who: owner, due: 2026-06-01}
"""


@pytest.fixture
def raised(loaded: LoadedPlant, write: Write) -> LoadedPlant:
    """A plant with one item raised by hand and one raised by a failed answer."""
    file_record(loaded, write(text=RAISED))
    return loaded


def test_items_come_from_hands_and_from_failed_answers(raised: LoadedPlant) -> None:
    """Each has a number, what is wrong, and where it was found; nobody is invented who must act."""
    by_hand, by_answer = open_items(raised)
    assert (by_hand.number, by_hand.raised_by, by_hand.who, by_hand.due) == (
        1, "hand", "contractor", dt.date(2026, 5, 8),
    )  # fmt: skip
    assert (by_answer.number, by_answer.raised_by, by_answer.line, by_answer.who) == (2, "answer", "visit.clean", None)
    assert "leaves in the fins" in by_answer.what
    assert by_answer.found_in == "2026-04-21-1020-store-visit"


def test_a_later_record_changes_and_closes_items(raised: LoadedPlant, write: Write) -> None:
    """A closed item names who closed it and in which record; the other got somebody who must act."""
    file_record(raised, write(text=LATER))
    first, second = open_items(raised)
    assert (first.state, first.closed_by, first.closed_in, first.remark) == (
        "closed", "the owner", "2026-05-14-1020-store-visit", "seen",
    )  # fmt: skip
    assert (second.state, second.who, second.due) == ("open", "owner", dt.date(2026, 6, 1))
    assert open_items(raised, "store", closed=False) == (second,)
    assert open_items(raised, "another") == ()


@pytest.mark.parametrize(("number", "words"), [(7, "no open item"), (1, "was closed by the owner")])
def test_an_update_of_an_item_that_is_not_open_is_refused(
    raised: LoadedPlant, write: Write, number: int, words: str
) -> None:
    """An unknown number and a closed item are errors at their place, and nothing is filed."""
    file_record(raised, write(text=LATER))
    text = LATER.replace("item: 1", f"item: {number}").replace("05-14", "05-20")
    with pytest.raises(RecordError, match=words) as caught:
        file_record(raised, write(text=text))
    assert (caught.value.problems[0].line, caught.value.problems[0].column) == (6, 12)
    assert len(history(raised)) == 2


def test_a_correction_keeps_the_number_of_an_item_it_says_again(raised: LoadedPlant, write: Write) -> None:
    """The same item in the corrected record is not a new one; the old record stays, out of force."""
    text = RAISED.replace("operator: {name: A fitter}", "operator: {name: B fitter}").replace("look at it", "touch it")
    text += "corrects: 2026-04-21-1020-store-visit\nwhy_corrected: wrong name\n"
    path = file_record(raised, write(text=text))
    assert [i.number for i in open_items(raised)] == [1, 2]
    assert len(history(raised)) == 2
    assert [r.id for r in in_force(history(raised))] == [path.stem]


def test_a_correction_of_nothing_names_the_nearest(raised: LoadedPlant, write: Write) -> None:
    """A slip in the name of the corrected record is met with the name that is there."""
    text = RAISED + "corrects: 2026-04-21-1020-store-vist\nwhy_corrected: a slip\n"
    with pytest.raises(RecordError) as caught:
        file_record(raised, write(text=text))
    assert caught.value.problems[0].nearest == "2026-04-21-1020-store-visit"


def test_the_table_is_read_back_by_any_reader(raised: LoadedPlant) -> None:
    """RFC 4180: header, one row each, lines end with CR LF; the standard reader gives the same back."""
    text = items_csv(open_items(raised))
    assert text.count("\r\n") == 3
    rows = list(csv.DictReader(io.StringIO(text, newline="")))
    assert [(r["number"], r["state"], r["due"]) for r in rows] == [("1", "open", "2026-05-08"), ("2", "open", "")]


@pytest.mark.parametrize("start", ["=", "+", "-", "@"])
def test_the_table_holds_no_formula(start: str) -> None:
    """A text that a spreadsheet would run is shown as text; commas, quotes and line ends stay inside their cell."""
    what = f'{start}SUM(A1), "quoted",\nsecond line'
    item = OpenItem(1, "store", what, "hand", "a-record", dt.date(2026, 4, 21))
    (row,) = csv.DictReader(io.StringIO(items_csv([item]), newline=""))
    assert row["what"] == f"'{what}"


def test_numbers_are_not_given_twice(raised: LoadedPlant, write: Write, model: SystemModel) -> None:
    """The next record goes on counting where the last one ended."""
    text = RAISED.replace("04-21", "04-22").replace("insulate the pipe", "label the pipe")
    file_record(raised, write(text=text), model=model)
    assert [i.number for i in open_items(raised)] == [1, 2, 3, 4]


ACCEPTED = """\
system: store
stage: visit
mode: test
started: 2026-05-14T10:20:00+01:00
people: {operator: {name: A fitter}, witness: {name: The owner}}
reservations:
  - the capacity on a hot day has not been seen
  - {what: the log of the room is to follow, who: contractor, due: 2026-06-01}
"""


def _standing(path: Path) -> list[tuple[int, str]]:
    return [(s.number, s.found_in) for s in read_filed(path).filed.standing]


def test_a_reservation_stands_until_a_record_closes_it(loaded: LoadedPlant, write: Write) -> None:
    """Each is an open item; a retest that says nothing of it stands under it too; closing one leaves the other."""
    first = file_record(loaded, write(text=ACCEPTED))
    found = open_items(loaded)
    assert [(i.number, i.raised_by, i.who, i.due) for i in found] == [
        (1, "reservation", None, None), (2, "reservation", "contractor", dt.date(2026, 6, 1)),
    ]  # fmt: skip
    assert _standing(first) == [(1, first.stem), (2, first.stem)]
    retest = ACCEPTED.split("reservations", maxsplit=1)[0].replace("05-14", "07-14")
    again = file_record(loaded, write(text=retest))
    assert _standing(again) == [(1, first.stem), (2, first.stem)]
    closing = retest.replace("07-14", "07-21") + "item_updates: [{item: 1, closed: yes, closed_by: the owner}]\n"
    last = file_record(loaded, write(text=closing))
    assert _standing(last) == [(2, first.stem)]
    assert _standing(first) == [(1, first.stem), (2, first.stem)]


def test_a_trim_accepts_nothing(loaded: LoadedPlant, write: Write) -> None:
    """Reservations in a trim are refused at their place: nothing was accepted under them."""
    with pytest.raises(RecordError, match="a trim is not") as caught:
        file_record(loaded, write(text=ACCEPTED.replace("mode: test", "mode: trim")))
    assert caught.value.problems[0].path == "reservations"


def test_a_trim_with_nothing_to_compare_says_why(loaded: LoadedPlant, write: Write) -> None:
    """Readings without the temperature of a medium: the sentence names what was not read, and counts nothing."""
    path = write(
        ("  heat_source_inlet_temperature: {value: 2.4 °C, instrument: air probe, where: air on the cooler}\n", ""),
    )
    said = read_filed(file_record(loaded, path)).filed.sentence
    assert said.startswith("trim, no verdict, and nothing to compare: room air inlet temperature was not read")
