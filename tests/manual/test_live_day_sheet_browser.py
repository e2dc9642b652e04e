"""The live day sheet as a person meets it: typed in, judged, kept, and read by `commission compare`."""

from __future__ import annotations

import json
import random
import shutil
from collections.abc import Callable, Mapping
from pathlib import Path
from typing import TYPE_CHECKING, Any

import pytest
from click.testing import CliRunner

from commission.cli.compare import command as compare
from commission.description import LoadedPlant, load_plant
from commission.manual.where import templates_folder
from commission.properties import moist_air
from commission.properties.psychrometrics import ICE, MASS_RATIO, TRIPLE_POINT, WATER
from commission.quantities import NOMENCLATURE, Display
from tests.manual.live_sheets import heard, outcomes, plant_of, record_text, said, type_in, without_model, write_sheet

if TYPE_CHECKING:
    from playwright.sync_api import BrowserContext, Page

Look = Callable[..., "BrowserContext"]
VISIT = {"started": "2026-05-14T10:20", "operator": "A. Reader", "since-start": "45", "since-defrost": "120"}
CONDITION = {"v-heat_source_inlet_temperature": "2.0", "v-heat_sink_inlet_temperature": "27,5"}
READ = {
    "v-heat_source_outlet_temperature": "\u22122.4", "v-suction_pressure": "2.25", "v-discharge_pressure": "12.9",
    "v-suction_temperature": "0.5", "v-discharge_temperature": "66", "v-liquid_temperature": "33.0",
    "v-power_input": "1.45",
}  # fmt: skip
HUMIDITY = "heat_source_relative_humidity"
BY_REFRIGERANT = {"cooling_capacity", "heating_capacity", "cooling_cop", "heating_cop"}


@pytest.fixture(scope="module")
def loaded(example_folder: Path) -> LoadedPlant:
    """The example plant."""
    return load_plant(example_folder)


@pytest.fixture(scope="module")
def cold_room(loaded: LoadedPlant, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The sheet of the cold room as one file."""
    return write_sheet(plant_of(loaded, "cold-room"), tmp_path_factory.mktemp("live"))


@pytest.fixture
def page(look: Look, cold_room: Path) -> Page:
    """That sheet, opened on a tablet."""
    opened = look().new_page()
    opened.goto(cold_room.as_uri())
    return opened


def compared(plant: Path, text: str, folder: Path) -> Mapping[str, Any]:
    """What `commission compare` makes of a record."""
    record = folder / "visit.yaml"
    record.write_text(text, encoding="utf-8")
    result = CliRunner().invoke(compare, [str(plant), str(record), "--json"])
    assert result.exit_code in (0, 1), result.output
    found: Mapping[str, Any] = json.loads(result.stdout)
    return found


def shown(loaded: LoadedPlant, key: str, value: float) -> str:
    """A value of the JSON as the page shows it."""
    kind = NOMENCLATURE[key].kind
    si = value + 273.15 if kind.value == "temperature" else value
    return Display("metric", loaded.barometric_pressure).text(si, kind)


def test_the_page_says_what_compare_says(
    page: Page, example_folder: Path, loaded: LoadedPlant, tmp_path: Path
) -> None:  # fmt: skip
    """Same expected values to the last digit shown, same readings inside and outside, for all that the page judges."""
    complaints = heard(page)
    type_in(page, {**VISIT, **CONDITION, **READ})
    judged = compared(example_folder, record_text(page), tmp_path)
    by_compare = {d["quantity"]: d for d in judged["deviations"] if d["quantity"] not in BY_REFRIGERANT}
    by_page = outcomes(page)
    assert set(by_page) == set(by_compare)
    assert len(by_page) >= 12
    assert {"inside", "outside"} <= set(by_page.values())
    for key, one in by_compare.items():
        assert by_page[key] == ("outside" if one["significant"] else "inside"), key
        assert said(page, key)[0] == shown(loaded, key, judged["expected"][key]["value"]), key
    assert complaints == []


def test_what_is_worked_out_is_what_compare_works_out(
    page: Page, example_folder: Path, loaded: LoadedPlant, tmp_path: Path
) -> None:
    """Superheat, subcooling and temperature differences from the same readings agree to the last digit shown."""
    type_in(page, {**VISIT, **CONDITION, **READ})
    judged = compared(example_folder, record_text(page), tmp_path)
    keys = ("evaporating_temperature", "compressor_superheat", "condensing_temperature", "subcooling",
            "evaporator_temperature_difference", "heat_source_temperature_change")  # fmt: skip
    for key in keys:
        assert page.inner_text(f"#d-{key}") == shown(loaded, key, judged["derived"][key]["value"]), key


def test_in_a_test_the_reading_comes_first(page: Page) -> None:
    """Nothing expected shows beside an empty field in a test; once it is typed, it does. A witness is wanted."""
    type_in(page, {**VISIT, **CONDITION})
    assert said(page, "suction_pressure")[0].endswith("bar g")
    page.check("[name=mode][value=test]")
    assert said(page, "suction_pressure") == ["shown once it is read"]
    type_in(page, {"v-suction_pressure": "2.8"})
    assert said(page, "suction_pressure")[0].endswith("bar g")
    page.click("#live-save")
    assert "witness" in page.inner_text("#live-missing").lower()


def test_nothing_is_shown_outside_what_was_tabulated(page: Page) -> None:
    """Beyond the range of a condition there is a sentence and no number."""
    type_in(page, {**VISIT, "v-heat_source_inlet_temperature": "2", "v-heat_sink_inlet_temperature": "52", **READ})
    assert "Outside what was tabulated: outdoor air inlet temperature" in page.inner_text("#live-condition")
    assert outcomes(page) == {}
    assert said(page, "suction_pressure") == []


def test_nothing_typed_is_lost_on_reload(page: Page) -> None:
    """Fields, choices and ticks come back; a new sheet clears them, after a second press."""
    type_in(page, {**VISIT, **CONDITION, **READ, "remarks": "Door was open until ten."})
    page.check("[data-field='unknown-since-defrost']")
    page.reload()
    assert page.input_value("[data-field='v-suction_pressure']") == "2.25"
    assert page.input_value("[data-field='remarks']") == "Door was open until ten."
    assert page.is_checked("[data-field='unknown-since-defrost']")
    page.click("#live-new")
    assert page.input_value("[data-field='v-suction_pressure']") == "2.25"
    page.click("#live-new")
    assert page.input_value("[data-field='v-suction_pressure']") == ""


def test_a_browser_that_keeps_nothing_is_told_of(look: Look, cold_room: Path) -> None:
    """Without storage the page says that typing is lost when it is closed."""
    opened = look().new_page()
    opened.add_init_script("Object.defineProperty(window, 'localStorage', {get() { throw new Error('denied'); }});")
    opened.goto(cold_room.as_uri())
    assert "keeps nothing" in opened.inner_text("#live-kept")


def test_another_instrument_leaves_the_judging_to_the_record(page: Page) -> None:
    """The bands are made for the plant's instruments: with another one the reading, and what follows, waits."""
    type_in(page, {**VISIT, **CONDITION, **READ})
    page.evaluate("document.querySelectorAll('.live-more').forEach(one => { one.open = true; })")
    page.select_option("[data-field='i-suction_pressure']", index=1)
    found = outcomes(page)
    assert found["suction_pressure"] == found["compressor_superheat"] == "filed"
    assert found["discharge_pressure"] == "inside"


def test_numbers_that_are_none_are_not_saved(page: Page) -> None:
    """A slip of the finger is shown at the field and named before saving."""
    type_in(page, {**VISIT, **CONDITION, "v-suction_pressure": "2.2.5"})
    assert page.get_attribute("[data-field='v-suction_pressure']", "aria-invalid") == "true"
    page.click("#live-save")
    assert "2.2.5" in page.inner_text("#live-missing")


def test_the_record_is_saved_as_a_file_that_is_read(page: Page, example_folder: Path, tmp_path: Path) -> None:
    """The downloaded file names its day and system, and its odd words come through as they were typed."""
    words = 'Says "steady": {no} # yes\nsecond line \\ é'
    type_in(page, {**VISIT, **CONDITION, **READ, "remarks": words, "v-barometric_pressure": "981"})
    with page.expect_download() as waiting:
        page.click("#live-save")
    assert waiting.value.suggested_filename == "2026-05-14-cold-room-performance.yaml"
    file = tmp_path / "saved.yaml"
    waiting.value.save_as(file)
    from commission.records import read_record

    record = read_record(file, load_plant(example_folder))
    assert record.file.remarks == words
    assert record.barometric_pressure == pytest.approx(98100.0)
    assert record.file.since_start == pytest.approx(45 * 60.0)
    assert {r.instrument for r in record.readings.values()} >= {"low-side gauge", "power meter"}


def test_a_page_whose_arithmetic_differs_refuses(look: Look, site: Path, tmp_path: Path) -> None:
    """The vectors hold the decision: where one is not answered as written, the sheet is not offered."""
    copy = tmp_path / "site"
    shutil.copytree(site, copy)
    vectors = copy / "scripts" / "decision_vectors.js"
    text = vectors.read_text(encoding="utf-8")
    assert '"outcome": "conforming"' in text
    vectors.write_text(text.replace('"outcome": "conforming"', '"outcome": "undecided"', 1), encoding="utf-8")
    opened = look().new_page()
    opened.goto((copy / "systems" / "cold-room" / "live-sheet.html").as_uri())
    assert opened.is_visible("#live-fault")
    assert not opened.is_visible("#live")


def test_liquid_side_heat_and_cop_as_compare_makes_them(
    look: Look, loaded: LoadedPlant, example_folder: Path, tmp_path: Path
) -> None:
    """With water flow and temperatures the page gives heat to the sink and COP, not before the plant stands still."""
    opened = look().new_page()
    opened.goto(write_sheet(plant_of(loaded, "floor-heating"), tmp_path).as_uri())
    type_in(opened, {
        **VISIT, "since-start": "5", "v-heat_source_inlet_temperature": "2", "v-heat_sink_outlet_temperature": "34",
        "v-compressor_speed": "4200", "v-heat_source_relative_humidity": "84", "v-heat_sink_flow": "1.55",
        "v-heat_sink_inlet_temperature": "28.4", "v-power_input": "2.46",
    })  # fmt: skip
    assert said(opened, "heating_cop") == ["not before the plant stands still"]
    assert "Read too early: 5 min after the start" in opened.inner_text("#live-steady")
    type_in(opened, {"since-start": "50"})
    judged = compared(example_folder, record_text(opened), tmp_path)
    for key in ("heating_capacity", "heating_cop"):
        assert opened.inner_text(f"#d-{key}") == shown(loaded, key, judged["derived"][key]["value"])
        significant = next(d for d in judged["deviations"] if d["quantity"] == key)["significant"]
        assert outcomes(opened)[key] in ("edge", "outside" if significant else "inside")


def test_not_known_is_an_answer(look: Look, loaded: LoadedPlant, tmp_path: Path) -> None:
    """An unknown humidity is taken as designed and said; an unknown speed leaves the expectation to the record."""
    opened = look().new_page()
    opened.goto(write_sheet(plant_of(loaded, "floor-heating"), tmp_path).as_uri())
    type_in(opened, {**VISIT, "v-heat_source_inlet_temperature": "2", "v-heat_sink_outlet_temperature": "34",
                     "v-compressor_speed": "4200", "v-heat_sink_flow": "1.55"})  # fmt: skip
    opened.check("[data-field='unknown-heat_source_relative_humidity']")
    assert "taken as designed: outdoor air relative humidity" in opened.inner_text("#live-condition")
    assert said(opened, "discharge_temperature")[0].endswith("°C")
    type_in(opened, {"v-compressor_speed": ""})
    opened.check("[data-field='unknown-compressor_speed']")
    assert "inferred from the power" in opened.inner_text("#live-condition")
    assert "Not known: " in record_text(opened)


def test_a_wet_bulb_stands_for_the_humidity(
    look: Look, loaded: LoadedPlant, example_folder: Path, tmp_path: Path
) -> None:
    """A psychrometer's wet bulb gives the humidity that `compare` works out, and what the page expects at it; bands are
    those of the humidity probe, so that the record is judged when it is filed. A humidity that is typed goes first."""
    opened = look().new_page()
    opened.goto(write_sheet(plant_of(loaded, "dining-hall"), tmp_path).as_uri())
    type_in(opened, {
        **VISIT, "v-heat_source_inlet_temperature": "26.4", "v-heat_sink_inlet_temperature": "29",
        "v-compressor_speed": "3600", "v-heat_source_wet_bulb": "20.4", "v-suction_pressure": "9.4",
    })  # fmt: skip
    assert "from the wet bulb" in opened.inner_text("#live-condition")
    judged = compared(example_folder, record_text(opened), tmp_path)
    humidity = shown(loaded, HUMIDITY, judged["conditions"][HUMIDITY]["value"])
    assert f" {humidity}, from the wet bulb" in opened.inner_text("#live-condition")
    from_bulbs = said(opened, "suction_pressure")
    assert outcomes(opened)["suction_pressure"] == "filed"
    type_in(opened, {f"v-{HUMIDITY}": humidity.split()[0]})
    assert "from the wet bulb" not in opened.inner_text("#live-condition")
    typed = said(opened, "suction_pressure")
    assert float(typed[0].split()[0]) == pytest.approx(float(from_bulbs[0].split()[0]), abs=0.03)  # a rounded per cent
    type_in(opened, {f"v-{HUMIDITY}": "38"})
    assert float(said(opened, "suction_pressure")[0].split()[0]) < float(typed[0].split()[0]) - 0.15


def test_humidity_in_the_browser_is_that_of_the_package(look: Look) -> None:
    """The script's humidity of dry and wet bulb is that of `moist_air` from -20 to 45 °C, iced wicks too, at two
    altitudes; where no air can have them it says so."""
    opened = look().new_page()
    opened.add_script_tag(path=templates_folder() / "scripts" / "live_air.js")
    air = {"ice": ICE, "water": WATER, "triple": TRIPLE_POINT, "massRatio": MASS_RATIO}
    chance = random.Random(18)
    for pressure in (101_325.0, 79_500.0):
        for _ in range(40):
            given = moist_air(chance.uniform(253.0, 318.0), pressure, relative_humidity=chance.uniform(0.05, 1.0))
            asked = [air, given.T, given.wet_bulb, pressure]
            got = opened.evaluate("a => commissionLiveAir(a[0]).humidity(a[1], a[2], a[3])", asked)
            assert got == pytest.approx(given.relative_humidity, abs=1e-6)
    for dry, wet in ((293.15, 294.15), (303.15, 280.15)):
        assert opened.evaluate("a => commissionLiveAir(a[0]).humidity(a[1], a[2], 101325)", [air, dry, wet]) is None


def test_us_units_and_gauge_pressures(look: Look, example_folder: Path, tmp_path: Path) -> None:
    """The sheet of a plant in US units takes psig and degrees Fahrenheit, and its record is read as such."""
    folder = tmp_path / "plant"
    shutil.copytree(example_folder, folder, ignore=shutil.ignore_patterns("records", "manual"))
    text = (folder / "plant.yaml").read_text(encoding="utf-8")
    assert "\nplant:\n" in text
    lines = [line for line in text.splitlines() if not line.startswith("  units:")]
    lines.insert(lines.index("plant:") + 1, "  units: us_customary")
    (folder / "plant.yaml").write_text("\n".join(lines) + "\n", encoding="utf-8")
    american = load_plant(folder)
    opened = look().new_page()
    opened.goto(write_sheet(plant_of(american, "cold-room"), tmp_path).as_uri())
    type_in(opened, {**VISIT, "v-heat_source_inlet_temperature": "35.6", "v-heat_sink_inlet_temperature": "81.5",
                     "v-suction_pressure": "40.2", "v-suction_temperature": "33"})  # fmt: skip
    assert said(opened, "suction_pressure")[0].endswith("psig")
    judged = compared(folder, record_text(opened), tmp_path)
    by_compare = {d["quantity"]: d["significant"] for d in judged["deviations"]}
    found = outcomes(opened)
    assert {k: v == "outside" for k, v in found.items()} == {k: by_compare[k] for k in found}
    assert {"suction_pressure", "compressor_superheat"} <= set(found)


def test_without_a_calculation_the_record_is_made_all_the_same(look: Look, loaded: LoadedPlant, tmp_path: Path) -> None:
    """Where nothing can be expected the sheet takes readings and gives the record."""
    bare = without_model(plant_of(loaded, "cold-room"), "the rating is not stated")
    opened = look().new_page()
    complaints = heard(opened)
    opened.goto(write_sheet(bare, tmp_path).as_uri())
    type_in(opened, {**VISIT, **CONDITION, "v-suction_pressure": "2.8"})
    assert "suction_pressure" in record_text(opened)
    assert outcomes(opened) == {}
    assert complaints == []
