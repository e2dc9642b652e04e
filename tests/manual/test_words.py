"""The small functions that turn numbers and keys into what a person reads."""

from __future__ import annotations

from dataclasses import dataclass, replace
from pathlib import Path
from types import SimpleNamespace
from typing import Any

import pytest

from commission.description import Assumption, load_plant
from commission.manual import search
from commission.manual.archive import OpenLine
from commission.manual.assumed import shown_assumptions
from commission.manual.book import Book, Sheet, slug, slugs
from commission.manual.facts import stated_number, system_facts
from commission.manual.figures import Chart, Line, by_night, draw_chart
from commission.manual.figures.style import FIRST, INK
from commission.manual.page_display import PageDisplay
from commission.manual.paper import css_string
from commission.manual.plant_pages import by_date
from commission.manual.saturation import table_temperatures
from commission.manual.showing import COVERAGE, band_text, grouped, show, show_input, sourced, spread_text
from commission.manual.states import (
    Standing,
    Visit,
    has_faults,
    most_urgent,
    next_step,
    plural,
    steps,
    where_they_stand,
)
from commission.manual.upkeep_pages import NextDuty
from commission.manual.visit_pages import results_among
from commission.quantities import Display, Explained, Input, Kind

METRIC = Display("metric", 97655.0)
US = Display("us_customary", 97655.0)
PAGES = {k: k for k in ("what", "findings", "checklist", "day_sheet", "test", "open", "records")}


@pytest.mark.parametrize(
    ("kind", "value", "uncertainty", "text"),
    [
        (Kind.TEMPERATURE, 273.15 - 5.9, 0.15, "−6.2 to −5.6"),
        (Kind.PRESSURE, 97655.0 + 2.31e5, 2.5e3, "2.26 to 2.36"),
        (Kind.TEMPERATURE_DIFFERENCE, 6.0, 0.01, "within 0.1"),
        (Kind.POWER, 3400.0, 0.0, "within 0.01"),
        (Kind.NUMBER, 2.11, None, "not stated"),
    ],
)
def test_band_is_two_standard_uncertainties(kind: Kind, value: float, uncertainty: float | None, text: str) -> None:
    """The band is value plus and minus two standard uncertainties in display units; one that rounds away says so."""
    band = Explained("x", value, uncertainty, "stated").band(COVERAGE)
    assert band_text(METRIC, kind, band) == text


def test_a_moved_assumption_is_shown_as_it_is_used_with_the_listed_value_beside_it() -> None:
    """The value is the one the calculation used; why it is not the listed one is said, a narrow share with a digit."""
    kind, moves = Kind.RATIO, ("refrigerant_flow",)
    leak = Assumption("leak", "Leakage", 0.02, 0.008, 0.04, kind, "test", "test", moves, "a reading", "library")
    data: Any = SimpleNamespace(
        assumptions={"leak": leak}, model=SimpleNamespace(fit=SimpleNamespace(values={"leak": 0.0263})), rated=None,
        effects={},
    )  # fmt: skip
    (shown,) = shown_assumptions(data, METRIC)
    assert (shown.value, shown.range) == ("2.6 %", "0.8 to 4.0 %")
    assert shown.moved == "the list says 2.0 %: moved within its range to meet the rated points best"
    data.model.fit.values["leak"] = 0.0201
    assert shown_assumptions(data, METRIC)[0].moved == ""


def test_named_values_are_shown_as_values(example_folder: Path) -> None:
    """The flow of each fan stage stands with its unit, as a flow that stands alone does."""
    groups = system_facts(load_plant(example_folder), "dining-hall", PageDisplay("metric", 97655.0))
    stages = {f.label: f.text for g in groups for f in g.facts if "stage" in f.label.lower()}
    assert len(stages) == 3
    assert {text.split(" ")[1] for text in stages.values()} == {"m³/h"}
    assert min(float(text.split(" ")[0]) for text in stages.values()) > 500


def test_a_row_takes_the_unit_that_fits_and_a_heat_up_is_asked_for_in_hours() -> None:
    """A fan is shown in W with its band, seven hours as such, and written down in the same unit."""
    fan = show("fan_power", Explained("fan_power", 130.0, 5.0, "fan_power"), METRIC, {})
    assert (fan.value, fan.unit, fan.band) == ("130", "W", "120 to 140")
    time = show("heat_up_time", Explained("heat_up_time", 25632.0, 600.0, "fan_power"), METRIC, {})
    assert (time.value, time.unit, time.band) == ("7.1", "h", "6.8 to 7.5")
    assert METRIC.asking("heat_up_time").unit_and_digits(Kind.DURATION) == ("h", 1)
    assert METRIC.asking("defrost_time").unit_and_digits(Kind.DURATION)[0] == "min"


def test_spread_has_a_sign_and_never_shows_nothing_for_something() -> None:
    """A change shows its sign, takes one more digit where it would round to zero, and needs no offset."""
    assert spread_text(METRIC, Kind.TEMPERATURE, 1.23) == "+1.2 K"
    assert spread_text(METRIC, Kind.TEMPERATURE, -0.04) == "−0.04 K"
    assert spread_text(METRIC, Kind.PRESSURE, 2.0e4) == "+0.20 bar"
    assert spread_text(US, Kind.TEMPERATURE, 1.0) == "+1.8 °F difference"


def test_row_shows_gauge_pressure_and_its_workings() -> None:
    """A pressure is shown as the gauge at this site shows it; an assumption among the inputs is recognised."""
    inputs = (Input("evaporating_temperature", 267.25, Kind.TEMPERATURE, "calculated"),
              Input("line loss", 1.0, Kind.TEMPERATURE_DIFFERENCE, "assumption suction_line_loss"))  # fmt: skip
    explained = Explained("suction_pressure", 97655.0 + 2.31e5, 2.0e3, "carnot_cooling", inputs, ("suction_line_loss",))
    row = show("suction_pressure", explained, METRIC, {}, {"suction_line_loss": -1.9e3, "property source": 500.0})
    assert (row.value, row.unit, row.band) == ("2.31", "bar g", "2.27 to 2.35")
    assert row.how is not None
    assert [i.assumption for i in row.how.inputs] == [None, "suction_line_loss"]
    assert row.how.inputs[0].value == "−5.9 °C"
    assert [cause for cause, _ in row.how.parts] == ["suction_line_loss", "property source"]


def test_small_plain_numbers_keep_their_digits() -> None:
    """A factor of 0.025 does not become 0.03."""
    assert show_input(Input("factor", 0.025, Kind.NUMBER, "fitted"), METRIC).value == "0.0250"


def test_stated_values_are_shown_as_stated() -> None:
    """A stated value gets as many decimals as it needs: 8.2 m³/h stays so, and hours stay hours."""
    assert stated_number(METRIC, 8.2 / 3600, Kind.VOLUME_FLOW) == "8.2 m³/h"
    assert stated_number(METRIC, 2100 / 3600, Kind.VOLUME_FLOW) == "2100 m³/h"
    assert stated_number(METRIC, 6 * 3600, Kind.DURATION) == "6 h"
    assert stated_number(METRIC, 0.005, Kind.RATIO) == "0.5 %"
    assert stated_number(METRIC, 7 * 86400, Kind.DURATION) == "7 days"
    assert stated_number(METRIC, 0.0159, Kind.LENGTH) == "15.9 mm"
    assert stated_number(Display("us_customary", 101325.0), 0.015875, Kind.LENGTH) == "0.625 in"
    assert stated_number(METRIC, 12.0, Kind.LENGTH) == "12.00 m"


def test_groups_keep_what_they_do_not_know() -> None:
    """Quantities stand in the order of reading; an unknown one comes last and is not lost."""
    found = grouped(("cooling_cop", "suction_pressure", "something_new"))
    assert [members for _, members in found] == [("suction_pressure",), ("cooling_cop",), ("something_new",)]


def test_slugs_are_different_for_different_keys() -> None:
    """Names that differ only in signs or case do not share a page."""
    assert slug("Cold Room № 1") == "cold-room-1"
    assert slugs(("a b", "A-B", "…")) == {"a b": "a-b", "A-B": "a-b-2", "…": "item"}


def test_links_are_relative_quoted_and_checked() -> None:
    """A link goes from page to page inside the folder; one to nowhere is an error of the build."""
    book = Book()
    for page in ("index", "systems/one/records", "pages/call & ask"):
        book.add(Sheet(page, "T", "plant", "t.html"))
    assert book.link("systems/one/records", "index") == "../../index.html"
    assert book.link("index", "pages/call & ask", "a b") == "pages/call%20%26%20ask.html#a%20b"
    with pytest.raises(KeyError, match="nowhere"):
        book.link("index", "nowhere")
    with pytest.raises(ValueError, match="index"):
        book.add(Sheet("index", "again", "plant", "t.html"))


def test_search_entry_leaves_out_code_and_cannot_end_a_script() -> None:
    """Scripts are no text, headings are kept apart, and a closing tag in a text cannot end the index."""
    found = search.entry("a.html", "Title", "", "<h2>Head</h2><script>no()</script><p>Text &lt;/script&gt; PT-15</p>")
    assert found.headings == ("Head",)
    assert "no()" not in found.text
    script = search.index_script([found])
    assert "</script" not in script
    assert "pt-15" in script


def test_css_string_cannot_be_left() -> None:
    """Quotes, backslashes and line ends of a plant's name cannot end the string in the style sheet."""
    text = css_string('a"b\\c\n}d')
    assert text == '"a\\22 b\\5c c\\a \\7d d"'


def test_saturation_temperatures_are_whole_degrees_of_the_site() -> None:
    """Metric: every degree from −40 to 63 °C; US: every second degree Fahrenheit; cut to what is known."""
    metric = table_temperatures(200.0, 369.0, METRIC)
    assert len(metric) == 104
    assert (metric[0], metric[-1]) == (pytest.approx(233.15), pytest.approx(336.15))
    fahrenheit = [round(t * 1.8 - 459.67, 6) for t in table_temperatures(200.0, 369.0, US)]
    assert fahrenheit[:2] == [-40.0, -38.0]
    assert table_temperatures(250.0, 260.0, METRIC)[0] == pytest.approx(250.15)


def test_the_saturation_table_goes_on_to_the_highest_pressure_limit() -> None:
    """A limiter that acts above 63 °C stands on the page; what is known ends it all the same."""
    assert table_temperatures(200.0, 369.0, METRIC, 350.85)[-1] == pytest.approx(351.15)
    assert table_temperatures(200.0, 345.0, METRIC, 350.85)[-1] == pytest.approx(344.15)
    assert table_temperatures(200.0, 369.0, METRIC, 330.0)[-1] == pytest.approx(336.15)
    assert table_temperatures(200.0, 369.0, US, 350.85)[-1] * 1.8 - 459.67 == pytest.approx(172.0)


def test_how_a_medium_left_is_a_result_and_no_condition_unless_the_machine_is_given_it() -> None:
    """A record holds both ends of a medium in one place; an outlet that the machine is rated by stays a condition."""
    data: Any = SimpleNamespace(rated=SimpleNamespace(conditions={"heat_sink_outlet_temperature": 333.15}))
    keys = ("heat_source_inlet_temperature", "heat_source_outlet_temperature", "heat_sink_outlet_temperature")
    assert results_among(data, keys) == {"heat_source_outlet_temperature"}


def test_figures_are_the_same_to_the_byte_and_have_a_dark_twin() -> None:
    """Two drawings are equal, hold real text and no date; by night each colour of ours is replaced."""
    chart = Chart(
        "T", "Outdoor air in °C", "Pressures", (0.0, 5.0), (Line("suction", (1.0, 2.0), ((0.9, 1.1), None)),), 5.0
    )
    day = draw_chart(chart)
    assert day == draw_chart(chart)
    assert b"Outdoor air in" in day
    assert b"<dc:date>" not in day
    night = by_night(day)
    for colour in (FIRST, INK):
        assert colour.encode() in day
        assert colour.encode() not in night


@dataclass(frozen=True)
class Case:
    """A standing and what follows from it."""

    standing: Standing
    done: tuple[bool, bool, bool, bool]
    do: str
    page: str


def _visit(mode: str, outcome: str, page: str = "test page") -> Visit:
    return Visit("Visit", "2026-05-14", mode, outcome, page)  # type: ignore[arg-type]  # an outcome


TRIM, UNDECIDED = _visit("trim", "none"), _visit("test", "undecided")
FAILED, PASSED = _visit("test", "not conforming"), _visit("test", "conforming")


def _standing(*visits: Visit, because: str | None = None, errors: int = 0, items: int = 0) -> Standing:
    return Standing(because, errors, 1, visits, True, items)


CASES = [
    Case(_standing(because="no rated point"), (False, True, False, False), "Complete the description", "what"),
    Case(_standing(errors=2), (True, False, False, False), "Resolve 2 errors", "findings"),
    Case(_standing(), (True, True, False, False), "Work through the checklist", "checklist"),
    Case(_standing(TRIM, items=1), (True, True, False, False), "Agree and sign", "test"),
    Case(_standing(UNDECIDED, items=1), (True, True, True, False), "Test again", "test page"),
    Case(_standing(FAILED, items=1), (True, True, True, False), "Find and remove", "open"),
    Case(_standing(PASSED, items=2), (True, True, True, True), "Close 2 open items", "open"),
    Case(_standing(PASSED), (True, True, True, True), "Compare the next visit", "day_sheet"),
    Case(replace(_standing(PASSED), unanswered=31), (True, True, True, True), "Answer 31 items", "records"),
]


@pytest.mark.parametrize("case", CASES, ids=lambda c: c.do)
def test_what_to_do_next_follows_from_where_a_system_stands(case: Case) -> None:
    """Each standing leads to its next step and page, and the four stations say how far it is."""
    found = next_step(case.standing, PAGES)
    assert found.do.startswith(case.do)
    assert found.page == case.page
    assert tuple(s.done for s in steps(case.standing)) == case.done


def test_a_failed_retest_takes_the_acceptance_back() -> None:
    """The last test that decided counts; an undecided one decides nothing."""
    assert not _standing(PASSED, FAILED).accepted
    assert _standing(FAILED, PASSED).accepted
    assert _standing(PASSED, UNDECIDED).accepted


def test_the_most_urgent_system_comes_first() -> None:
    """What cannot be calculated is more urgent than a failed test, and that more than a plant to start."""
    standings = [CASES[2].standing, CASES[5].standing, CASES[0].standing]
    items = [(str(n), next_step(s, PAGES), s) for n, s in enumerate(standings)]
    assert most_urgent(items) == ("2", items[2][1])
    assert most_urgent(items[:2]) == ("1", items[1][1])
    assert most_urgent([]) is None


def test_what_is_due_first_stands_first() -> None:
    """Open items and duties of all systems by their day; an item without a day is not among them."""
    items = (OpenLine(4, "wash the coil", "Hall", None, "2026-11-30"), OpenLine(5, "a valve", "Hall", None, None))
    duties = {"Hall": (NextDuty("due-a", "2026-12-24", "Read the log", ""),),
              "Freezer": (NextDuty("due-b", "2026-10-20", "Search for leaks", ""),)}  # fmt: skip
    found = by_date(items, duties)
    assert [(d.system, d.what) for d in found] == [
        ("Freezer", "Search for leaks"), ("Hall", "wash the coil"), ("Hall", "Read the log"),
    ]  # fmt: skip
    assert [(d.page, d.anchor) for d in found][:2] == [("upkeep", "due-b"), ("open-items", "item-4")]
    assert by_date(items, duties, 1) == found[:1]


def test_faults_come_before_what_is_only_due() -> None:
    """A failed test, errors and what cannot be calculated are faults; a plant to be started is none."""
    assert has_faults([_standing(PASSED), _standing(FAILED)])
    assert has_faults([_standing(errors=1)])
    assert not has_faults([_standing(PASSED), _standing()])


def test_plural() -> None:
    """None, one and several."""
    assert [plural(n, "error") for n in (0, 1, 2)] == ["no errors", "1 error", "2 errors"]


def test_air_flows_have_three_figures() -> None:
    """2601 m³/h out of the calculation and 2600 as stated read the same; small flows and other kinds are untouched."""
    page = PageDisplay("metric", 97655.0)
    assert page.text(2601.0 / 3600.0, Kind.VOLUME_FLOW) == "2600 m³/h"
    assert stated_number(page, 2601.0 / 3600.0, Kind.VOLUME_FLOW) == "2600 m³/h"
    assert stated_number(page, 2615.0 / 3600.0, Kind.VOLUME_FLOW) == "2615 m³/h"
    assert page.text(0.139 / 3600.0, Kind.VOLUME_FLOW) == METRIC.text(0.139 / 3600.0, Kind.VOLUME_FLOW)
    assert page.text(2601.0, Kind.POWER) == METRIC.text(2601.0, Kind.POWER)


def test_how_far_the_systems_are_counts_each_once() -> None:
    """Accepted, waiting, nothing promised, not calculated: the numbers add up to the systems."""
    bare = Standing(None, 0, 0, (), False, 0)
    found = where_they_stand((_standing(PASSED), _standing(FAILED), bare, _standing(because="no rated point")))
    assert found == "1 cannot be calculated, 1 accepted, 1 to be accepted, 1 with nothing promised"


def test_common_practice_is_said_once() -> None:
    """A source that its mark repeats is not written twice."""
    assert sourced("common practice", "common practice, no source") == "common practice, no source"
    assert sourced("EN 378-2", "from memory") == "EN 378-2 (from memory)"


def test_inputs_are_said_as_their_reader_says_them() -> None:
    """A vacuum stands in pascal absolute, a room in cubic metres, a vessel in litres."""
    display = Display("metric", 97600.0)
    assert show_input(Input("limit", 270.0, Kind.PRESSURE, "rule"), display).value == "270 Pa absolute"
    assert show_input(Input("test", 1.5e5 + 97600.0, Kind.PRESSURE, "rule"), display).value == "1.50 bar g"
    assert show_input(Input("room volume", 67.2, Kind.VOLUME, "area times height"), display).value == "67.2 m³"
    assert show_input(Input("receiver", 0.0016, Kind.VOLUME, "plant.yaml"), display).value == "1.6 L"


def test_open_items_are_a_table_too(site: Path) -> None:
    """The page of open items links to them as comma-separated values with one row each and a head."""
    page = (site / "open-items.html").read_text(encoding="utf-8")
    assert 'href="open-items.csv"' in page
    rows = (site / "open-items.csv").read_text(encoding="utf-8").splitlines()
    assert rows[0].startswith("number,")
    assert len(rows) > 1
