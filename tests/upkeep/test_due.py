"""What is due: counted from records and description, in words that say so."""

from __future__ import annotations

import ast
import datetime as dt
from collections.abc import Callable
from importlib.resources import files
from typing import TYPE_CHECKING

import pytest

from commission.checklists.library import library
from commission.upkeep import UpkeepError, due, read_interval, shipped

if TYPE_CHECKING:
    from tests.upkeep.conftest import Site

Store = Callable[..., "Site"]
DAY = dt.date.fromisoformat


def test_every_act_is_an_item_of_the_checklist() -> None:
    """A duty whose item was renamed could never be recorded; an upkeep item without duty would never come due."""
    items = {item.entry.id for stage in library() for item in stage.items}
    stages = {stage.id for stage in library()}
    named = {entry.item for entry, _ in shipped() if entry.item}
    for entry, _ in shipped():
        assert set(entry.done_by.answers) <= items, entry.id
        assert set(entry.done_by.stages) | ({entry.stage} - {None}) <= stages, entry.id
    assert named == {item for item in items if item.startswith("upkeep.")}


def test_without_records_nothing_has_a_day(site: Site) -> None:
    """Each duty of a system says from which day it will count; none is invented."""
    for duty in site.duties().values():
        assert duty.next is None
        assert duty.counted in (
            "no record yet: due from the day of the first start",
            "no record yet: due from the day of hand-over",
        )
        assert duty.state == "no day"


def test_counted_from_the_first_start(site: Site) -> None:
    """What was never done says so, with the day it is counted from and the record that shows it."""
    identity = site.file("2026-03-10", "first-start")
    duty = site.duties()["store.alarm"]
    assert duty.next == DAY("2026-09-10")
    assert duty.last is None
    assert duty.record == identity
    assert duty.counted == "never done by the records; counted from the first start, 2026-03-10"


def test_readings_or_installation_stand_in_for_the_first_start(site: Site) -> None:
    """The earlier of the two counts, and the words name it."""
    site.file("2026-03-10", "trim", readings={"suction_pressure": "1 bar g"})
    assert "first readings" in site.duties()["store.alarm"].counted
    site.change("sealed: no", "sealed: no\n    installed_on: 2026-02-01")
    duty = site.duties()["store.alarm"]
    assert duty.next == DAY("2026-08-01")
    assert "the day of installation, since no first start is filed" in duty.counted


@pytest.mark.parametrize(
    ("records", "day", "words"),
    [
        ([("2026-04-01", "performance", "undecided")], "2027-02-01", "the first test, since no acceptance is filed"),
        (
            [("2026-04-01", "performance", "not conforming"), ("2026-05-01", "performance", "conforming")],
            "2027-03-01",
            "the first accepted test",
        ),
        (
            [("2026-05-01", "performance", "conforming"), ("2026-06-01", "handover", "none")],
            "2027-04-01",
            "counted from hand-over",
        ),
    ],
)
def test_hand_over_is_the_first_filed_acceptance(
    site: Site, records: list[tuple[str, str, str]], day: str, words: str
) -> None:
    """Its own record, else the first accepted test, else the first test; ten months later the last free visit."""
    for started, stage, verdict in records:
        mode = "trim" if stage == "handover" else "test"
        site.file(started, stage, mode=mode, verdict=verdict)
    duty = site.duties()["store.ten-months"]
    assert duty.next == DAY(day)
    assert words in duty.counted


def test_an_answer_counts_as_done(site: Site) -> None:
    """The next day counts from the visit that answered the item last, whatever its stage."""
    site.file("2026-03-10", "first-start")
    site.file("2026-09-01", answers={"upkeep.alarm": "yes"})
    identity = site.file("2026-11-30", "season", answers={"upkeep.alarm": "yes"})
    duty = site.duties()["store.alarm"]
    assert (duty.last, duty.next) == (DAY("2026-11-30"), DAY("2027-05-30"))
    assert duty.counted == f"last done in the record {identity} on 2026-11-30"


def test_an_answer_of_commissioning_counts_too(site: Site) -> None:
    """The alarm that was tried before hand-over need not be tried again the week after."""
    site.file("2026-03-10", "controls", answers={"controls.alarm": "yes"})
    assert site.duties()["store.alarm"].next == DAY("2026-09-10")


def test_not_applicable_is_not_done(site: Site) -> None:
    """An item that was passed over with a reason moves no day."""
    site.file("2026-03-10", "first-start")
    site.file("2026-08-01", answers={"upkeep.alarm": {"answer": "not applicable", "reason": "no telephone"}})
    assert site.duties()["store.alarm"].next == DAY("2026-09-10")


def test_answered_with_no_is_due_at_once(site: Site) -> None:
    """What failed is overdue from the day it failed, until a later visit puts it right, even on the same day."""
    site.file("2026-03-10", "first-start")
    no = {"upkeep.alarm": {"answer": "no", "reason": "nobody came"}}
    site.file("2026-06-01T09:00:00+00:00", answers={"upkeep.alarm": "yes"})
    site.file("2026-06-01T11:00:00+00:00", answers=no, raised=("upkeep.alarm",))
    duty = site.duties()["store.alarm"]
    assert duty.next == DAY("2026-06-01")
    assert duty.counted.endswith("and not done since")
    site.file("2026-06-01T15:00:00+00:00", answers={"upkeep.alarm": "yes"})
    assert site.duties()["store.alarm"].next == DAY("2026-12-01")


def test_a_value_outside_its_limits_is_not_done(site: Site) -> None:
    """Filing opened an item for it; the device counts as not proved."""
    site.change("sealed: no", "sealed: no\n    controls: {high_pressure_limit: 22 bar g}")
    value = {"upkeep.high-pressure": {"answer": "25 bar g", "reason": "switch is slow"}}
    site.file("2026-06-01", answers=value, raised=("upkeep.high-pressure",))
    assert site.duties()["store.high-pressure"].next == DAY("2026-06-01")


def test_a_corrected_record_counts_no_more(site: Site) -> None:
    """The record that takes its place is what counts."""
    site.file("2026-03-10", "first-start")
    wrong = site.file("2026-08-01", answers={"upkeep.alarm": "yes"})
    site.file("2026-08-02", answers={"upkeep.drain": "yes"}, corrects=wrong)
    duties = site.duties()
    assert duties["store.alarm"].last is None
    assert duties["store.drain"].last == DAY("2026-08-02")


def test_readings_count_as_a_seasonal_visit(site: Site) -> None:
    """Any filed readings show how the plant runs; the next half year counts from them."""
    site.file("2026-04-01", "handover")
    assert site.duties()["store.readings"].next == DAY("2026-10-01")
    site.file("2026-07-15", "season", readings={"suction_pressure": "1 bar g"})
    assert site.duties()["store.readings"].next == DAY("2027-01-15")


def test_a_visit_that_is_due_once_is_done_for_good(site: Site) -> None:
    """It stays on the list, without a day, with the record that did it."""
    site.file("2026-04-01", "handover")
    identity = site.file("2027-01-20", "ten-months")
    duty = site.duties()["store.ten-months"]
    assert duty.next is None
    assert duty.state == "done"
    assert duty.counted == f"done in the record {identity} on 2027-01-20; not due again"


def test_another_system_does_nothing_for_this_one(yard: Site) -> None:
    """Each system counts its own records."""
    yard.file("2026-03-10", "first-start", system="freezer")
    duties = yard.duties()
    assert duties["freezer.alarm"].next == DAY("2026-09-10")
    assert all(duty.next is None for key, duty in duties.items() if not key.startswith("freezer."))


def test_only_what_applies_is_due(yard: Site) -> None:
    """Ammonia, a store, filters and a walk-in room bring their own duties and nobody else's."""
    by_system: dict[str, set[str]] = {}
    for duty in due(yard.loaded):
        by_system.setdefault(duty.subject, set()).add(duty.id)
    assert {"shower", "breathing", "pipes", "relief-renewal", "antifreeze", "detectors"} <= by_system["chiller"]
    assert {"hot-water", "legionella", "mixing", "hygiene-heating", "relief-renewal"} <= by_system["water-heater"]
    assert {"release", "freezer-frame", "alarm"} <= by_system["freezer"]
    assert "air-filters" in by_system["split"]
    assert not {"shower", "hot-water", "air-filters", "tower-water", "strainers"} & by_system["freezer"]
    assert {"casing-gas", "leaks", "zone", "gas-vent"} <= by_system["heat-pump"]
    assert not {"casing-gas", "zone", "gas-vent"} & (by_system["freezer"] | by_system["water-heater"])


def test_acts_carry_hazard_and_marks(yard: Site) -> None:
    """What can hurt stands beside what is due, and a figure from memory says so."""
    duty = yard.duties()["chiller.high-pressure"]
    assert duty.hazard is not None
    assert "discharge valve" in duty.hazard
    assert duty.sureness == "from memory, check the edition in force"
    assert duty.must_read is not None
    assert duty.must_read.startswith("20.00 bar g")


def test_a_calibration_is_due_by_its_certificate(site: Site) -> None:
    """The last day it counts; a year after calibration where none is stated; else due before the next test."""
    site.change(
        "systems:\n",
        "instruments:\n"
        "  one: {measures: pressure, serial: A-1, calibrated_on: 2026-01-10, calibrated_until: 2026-07-31}\n"
        "  two: {measures: pressure, calibrated_on: 2024-02-29}\n"
        "  three: {measures: pressure}\n"
        "  four: {measures: pressure, calibrated_on: 9999-12-01}\n"
        "systems:\n",
    )
    duties = site.duties()
    one, two = duties["instrument.one.calibration"], duties["instrument.two.calibration"]
    assert (one.next, one.mark, one.interval_text) == (DAY("2026-07-31"), "stated", "as its certificate says")
    assert (two.next, two.mark) == (DAY("2025-02-28"), "practice")
    assert "before the next test" in duties["instrument.three.calibration"].counted
    assert duties["instrument.four.calibration"].next is None


def test_dated_duties_come_first_in_the_order_of_days(site: Site) -> None:
    """A page that is read from the top shows what comes next."""
    site.file("2026-03-10", "first-start")
    found = due(site.loaded)
    days = [duty.next for duty in found if duty.next]
    assert days == sorted(days)
    assert all(duty.next is None for duty in found[len(days) :])
    assert len({duty.key for duty in found}) == len(found)


def test_an_unknown_law_or_charge_is_said(store: Store) -> None:
    """The yearly check of the standard stands in, and the note says what is not known."""
    duty = store("R-134a", "20 kg", law="none stated").duties()["store.leaks"]
    assert duty.interval_text == "every 12 months"
    assert duty.note is not None
    assert "write plant.rules.refrigerant_law" in duty.note
    note = store("R-134a", None).duties()["store.leaks"].note
    assert note is not None
    assert "the charge is not stated" in note


def test_american_law_sets_no_interval(store: Store) -> None:
    """40 CFR 84.106 asks for repair above a leak rate; the note says so beside the standard's yearly check."""
    note = store("R-134a", "90 kg", law="US 40 CFR 82 and 84").duties()["store.leaks"].note
    assert note is not None
    assert "20 %" in note


def test_the_plants_own_register_decides(store: Store) -> None:
    """A GWP that the plant states for its refrigerant moves the interval."""
    site = store("R-134a", "20 kg")
    assert site.duties()["store.leaks"].interval_text == "every 12 months"
    path = site.folder / "plant.yaml"
    own = "refrigerants: {R-134a: {gwp_eu573: {value: '3000', source: a later annex}}}\n"
    path.write_text(path.read_text(encoding="utf-8") + own, encoding="utf-8")
    assert site.duties()["store.leaks"].interval_text == "every 6 months"


def test_a_plant_says_its_own_interval(site: Site) -> None:
    """For one system or all; source and place are the plant's."""
    site.file("2026-03-10", "first-start")
    site.own("duties:\n  - {id: alarm, every: 1 month, source: insurer}\n")
    duty = site.duties()["store.alarm"]
    assert (duty.next, duty.source, duty.mark) == (DAY("2026-04-10"), "insurer", "stated")
    assert duty.origin == "upkeep.yaml:2"
    site.own("duties:\n  - {id: leaks, every: 24 months, source: detection system LD-1}\n")
    assert site.duties()["store.leaks"].next == DAY("2028-03-10")


def test_a_plant_adds_a_duty(site: Site) -> None:
    """It applies to the systems that are named, and is done by what the plant says."""
    site.own(
        "duties:\n"
        "  - id: sprinklers\n"
        "    what: Have the sprinklers of the store inspected.\n"
        "    every: 1 year\n"
        "    from: handover\n"
        "    source: insurer\n"
        "done:\n"
        "  - {duty: sprinklers, system: store, on: 2026-02-03, by: the insurer's engineer, evidence: documents/s.pdf}\n"
    )
    duty = site.duties()["store.sprinklers"]
    assert duty.next == DAY("2027-02-03")
    assert "the insurer's engineer (documents/s.pdf), as upkeep.yaml says" in duty.counted


def test_a_plant_leaves_a_duty_out_with_its_reason(site: Site) -> None:
    """By upkeep.yaml or by its checklist: it stays on the list, without a day."""
    site.file("2026-03-10", "first-start")
    site.own("leave_out:\n  - {duty: alarm, reason: the fire alarm firm does it}\n")
    (site.folder / "checklists").mkdir()
    text = "stage: upkeep\nleave_out:\n  - {id: upkeep.drain, reason: no drain}\n"
    (site.folder / "checklists" / "ours.yaml").write_text(text, encoding="utf-8")
    duties = site.duties()
    assert duties["store.alarm"].left_out == "the fire alarm firm does it"
    assert duties["store.drain"].left_out == "no drain"
    for key in ("store.alarm", "store.drain"):
        assert (duties[key].next, duties[key].state) == (None, "left out")


@pytest.mark.parametrize(
    ("text", "line", "words"),
    [
        ("duties:\n  - {id: alrm, every: 1 month, source: us}\n", 2, "no duty has this id"),
        ("duties:\n  - {id: ours, what: Do it., source: us}\n", 2, "wants an interval"),
        ("duties:\n  - {id: alarm, every: monthly, source: us}\n", 2, "an interval is wanted"),
        ("duties:\n  - {id: alarm, every: 0 months, source: us}\n", 2, "an interval is wanted"),
        ("duties:\n  - {id: alarm, every: 1 month}\n", 2, "source"),
        ("duties:\n  - {id: alarm, every: 1 month, once: 2 months, source: us}\n", 2, "either an interval or one"),
        ("duties:\n  - {id: calibration, every: 1 month, source: us}\n", 2, "calibrated_until"),
        ("duties:\n  - {id: alarm, every: 1 month, source: us, systems: [stor]}\n", 2, "no system has this id"),
        (
            "duties:\n  - {id: alarm, every: 1 month, source: us}\n  - {id: alarm, every: 2 months, source: us}\n",
            3,
            "written twice",
        ),
        ("leave_out:\n  - {duty: alrm, reason: none}\n", 2, "no duty has this id"),
        ("done:\n  - {duty: alarm, system: stor, on: 2026-01-01, by: me, evidence: x}\n", 2, "no system has this id"),
        ("done:\n  - {duty: alarm, system: store, on: yesterday, by: me, evidence: x}\n", 2, "date"),
        ("dutys: []\n", 1, "not known"),
        ("- a\n", 1, ""),
        ("duties: [\n", 2, ""),
    ],
)
def test_what_cannot_be_used_is_refused_with_its_line(site: Site, text: str, line: int, words: str) -> None:
    """Each slip in upkeep.yaml is a problem at its place."""
    site.own(text)
    with pytest.raises(UpkeepError) as caught:
        due(site.loaded)
    problem = caught.value.problems[0]
    assert problem.file == "upkeep.yaml"
    assert problem.line == line
    assert words in f"{problem.message} {problem.path}"


NO_INTERVALS = ["", "0 days", "-1 month", "1.5 years", "6", "months", "6 fortnights", "101 years", "1２ months"]


@pytest.mark.parametrize("text", NO_INTERVALS)
def test_what_is_no_interval_is_refused(text: str) -> None:
    """Whole numbers of days, weeks, months or years, and nothing else."""
    with pytest.raises(ValueError, match="a whole number of days"):
        read_interval(text)


def test_an_empty_file_changes_nothing(site: Site) -> None:
    """An upkeep.yaml that says nothing is like none."""
    before = due(site.loaded)
    site.own("duties: []\n")
    assert due(site.loaded) == before


def test_no_clock_is_read() -> None:
    """Same input, same days: no call in the room asks what time it is."""
    for path in files("commission.upkeep").iterdir():
        if path.name.endswith(".py"):
            for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
                called = node.func if isinstance(node, ast.Call) else None
                name = called.attr if isinstance(called, ast.Attribute) else getattr(called, "id", "")
                assert name not in {"now", "today", "utcnow", "time_ns", "monotonic", "uuid4", "getmtime"}, path.name
