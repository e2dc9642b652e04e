"""What the pencil day sheet asks for: of every system all that its proof needs, of a sealed unit what it shows."""

from __future__ import annotations

from pathlib import Path
from types import SimpleNamespace
from typing import Any

import pytest

from commission.acceptance import make_sheet
from commission.acceptance.choosing import FOLLOWS_FROM, PRESSURES
from commission.description import load_plant
from commission.manual.day_sheet import asked, worked_out
from commission.manual.grid import temperatures
from commission.manual.sheet_pages import sheet_grids
from commission.manual.showing import COVERAGE, band_text, cut_off
from commission.manual.system_pages import cell
from commission.manual.worked_out import how
from commission.prediction import fit
from commission.quantities import NOMENCLATURE, Display, Explained, Kind, bounds


def _system(folder: Path, identity: str) -> tuple[Any, Any]:
    loaded = load_plant(folder)
    model = fit(loaded, identity)
    data = SimpleNamespace(system=loaded.system(identity), model=model, rated=model.predict())
    return SimpleNamespace(loaded=loaded), data


def test_the_day_sheet_of_a_sealed_unit_has_no_line_for_a_gauge(example_folder: Path) -> None:
    """No pressures, nothing worked out from them, and no pipe inside the casing but the one that is named."""
    plant, data = _system(example_folder, "floor-heating")
    conditions, readings = asked(plant, data)
    shut = {*PRESSURES, *FOLLOWS_FROM, "suction_temperature", "liquid_temperature"}
    assert not {*conditions, *readings, *worked_out(data, readings)} & shut
    assert {"discharge_temperature", "heat_sink_inlet_temperature"} <= set(readings)


@pytest.mark.parametrize("identity", ["cold-room", "freezer-room", "dining-hall", "floor-heating", "shower-water"])
def test_the_day_sheet_asks_for_all_that_is_measured(example_folder: Path, identity: str) -> None:
    """Every quantity of `measured_with` has a line, among the conditions or among the readings."""
    plant, data = _system(example_folder, identity)
    conditions, readings = asked(plant, data)
    assert set(data.system.measured_with) <= {*conditions, *readings}
    assert not set(conditions) & set(readings)
    assert set(conditions) >= {"heat_source_wet_bulb", "heat_source_relative_humidity"} & set(data.system.measured_with)


def test_a_band_that_cannot_be_negative_starts_at_zero() -> None:
    """A subcooling of 1.0 K +- 1.2 K is shown from zero with what lies below; a narrow band is left alone."""
    display, kind = Display("metric", 101325.0), Kind.TEMPERATURE_DIFFERENCE
    wide, narrow = (Explained("subcooling", 1.0, u, "stated", bounds=bounds("subcooling", {})) for u in (0.6, 0.4))
    assert band_text(display, kind, wide.band(COVERAGE)) == "0.0 to 2.2"
    assert cut_off(wide, display) == "less than 0 is flash gas in the liquid line"
    assert band_text(display, kind, narrow.band(COVERAGE)) == "0.2 to 1.8"
    assert cut_off(narrow, display) == ""


def test_gas_is_not_expected_colder_than_the_water_that_cools_it() -> None:
    """With water that enters at 10.0 °C the band of a gas cooler's outlet starts there, and the page says why."""
    display, at = Display("metric", 101325.0), {"heat_sink_inlet_temperature": 283.15}
    key = "gas_cooler_outlet_temperature"
    gas = Explained(key, 284.65, 1.2, "stated", bounds=bounds(key, at))
    assert band_text(display, Kind.TEMPERATURE, gas.band(COVERAGE)) == "10.0 to 13.9"
    assert cut_off(gas, display) == "not below 10.0 °C: what cools it enters at that"


def test_the_line_loss_is_said_where_a_gauge_lies_beyond_it(example_folder: Path) -> None:
    """Source inlet minus evaporating is 1.0 K more by the gauge than in the evaporator, and the label says so."""
    _, data = _system(example_folder, "cold-room")
    e = {k: x.value for k, x in data.rated.expected.items()}
    loss = e["evaporating_temperature"] - data.model.refrigerant.dew_temperature(e["suction_pressure"])
    text = how("evaporator_temperature_difference", data.model.refrigerant, [data.rated], Display("metric", 101325.0))
    assert f"plus the line loss of {loss:.1f} K, as it is in the evaporator" in text
    assert loss == pytest.approx(1.0, abs=0.1)


def test_no_column_beyond_the_heating_limit(example_folder: Path) -> None:
    """The weather grid of a heat pump with a weather curve ends where no heat is asked for."""
    plant, data = _system(example_folder, "floor-heating")
    limit = data.system.controls.weather_curve.heating_limit
    found = temperatures(plant.loaded, "heat_source_inlet_temperature", data.model)
    assert max(found) == pytest.approx(limit)
    assert len(found) > 3


def test_the_test_sheet_of_a_sealed_unit_asks_for_what_its_day_sheet_has(example_folder: Path) -> None:
    """No line for a gauge, nor for a pipe in the casing; the lines that are left can be read."""
    plant, data = _system(example_folder, "floor-heating")
    sheet = make_sheet(plant.loaded, data.model, {"heat_source_inlet_temperature": [275.15, 280.15]})
    display = Display("metric", 101325.0)
    lines = sheet_grids(sheet, display, data.system)[0].expected
    labels = {line.label.split(",")[0] for line in lines}
    conditions, readings = asked(plant, data)
    readable = {display.label(k) for k in (*conditions, *readings, *worked_out(data, readings))}
    assert labels <= readable
    assert display.label("heat_source_outlet_temperature") in labels
    assert {t.key for t in sheet.targets} >= {"suction_temperature", "superheat"}


def test_test_sheet_and_day_sheet_end_a_band_at_the_same_value(example_folder: Path) -> None:
    """Liquid line and subcooling of the dining hall on a cool day: the test sheet prints the band of the day sheet."""
    display, axis, at = Display("metric", 101325.0), "heat_sink_inlet_temperature", 291.15
    plant, data = _system(example_folder, "dining-hall")
    sheet = make_sheet(plant.loaded, data.model, {axis: [at]})
    printed = {line.label.split(",")[0]: line.cells[0] for line in sheet_grids(sheet, display, data.system)[0].expected}
    expected = data.model.predict({axis: at}).expected
    for key in ("subcooling", "liquid_temperature", "condenser_temperature_difference"):
        shown = cell(expected[key], NOMENCLATURE[key].kind, display)
        assert printed[display.label(key)] == (shown.value, shown.band)
