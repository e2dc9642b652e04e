"""The live day sheet without a browser: its series against the model, its lines against the properties, its size."""

from __future__ import annotations

import json
import math
import random
import re
from pathlib import Path

import numpy as np
import pytest

from commission.description import LoadedPlant, load_plant
from commission.manual.live_bands import work_through
from commission.manual.live_data import as_script, kind_data, saturation_rows
from commission.manual.live_plan import DERIVED
from commission.manual.live_sheet import live_sheet
from commission.manual.store import FolderStore
from commission.properties import refrigerant
from commission.quantities import Display, Kind
from tests.manual.live_sheets import calculated, plant_of, without_model, write_sheet

SHARE = 0.1
"""Largest miss of a series, as a share of the deviation that a reading could just show."""


@pytest.fixture(scope="module")
def loaded(example_folder: Path) -> LoadedPlant:
    """The example plant."""
    return load_plant(example_folder)


@pytest.mark.parametrize("system", ["cold-room", "freezer-room"])
def test_expected_values_and_bands_between_the_points_are_those_of_the_model(loaded: LoadedPlant, system: str) -> None:
    """Away from a change of regime a value misses by a tenth of its band at most, or by what goes with it where fan
    stages make the power jump; bands are as far off as they say."""
    plant = plant_of(loaded, system)
    plan, found = calculated(plant)
    model = plant.systems[0].model
    assert model is not None
    chance = random.Random(20260514)
    judged = sharp = 0
    for _ in range(25):
        at = {k: chance.uniform(low, high) for k, (low, _, high) in plan.axes.items()}
        point = tuple(at.values())
        regimes = found.table.regimes_around(point)
        if len(regimes) != 1:
            continue
        expected = model.predict(at)
        visit = work_through(loaded, model, at, plan.readings, plan.instruments, (*plan.readings, *DERIVED))
        assert expected.regime == regimes[0]
        for key, u in visit.uncertainties.items():
            judged += 1
            value = found.table.value(regimes[0], key, point)
            shown = found.bands.shown(regimes[0], key, point)
            error = found.table.series[regimes[0]].errors[key]
            missed = abs(value - expected.expected[key].value) / (1.96 * u)
            assert missed <= max(SHARE, error), (key, at)
            sharp += missed <= SHARE
            off = found.bands.logs[regimes[0]][key][1]
            assert shown is not None
            assert shown / (1.96 * u) == pytest.approx(1.0, abs=min(2 * off + 0.01, 0.6) + 0.05), (key, at)
    assert judged > 150
    assert sharp > 0.97 * judged


@pytest.mark.long
@pytest.mark.parametrize("system", ["dining-hall", "floor-heating", "shower-water"])
def test_series_over_three_conditions_miss_by_no_more_than_they_say(loaded: LoadedPlant, system: str) -> None:
    """At nine of ten random conditions, the further ones moved too, the miss is at most the one that goes with it."""
    plant = plant_of(loaded, system)
    plan, found = calculated(plant)
    model = plant.systems[0].model
    assert model is not None
    chance = random.Random(20260515)
    within = total = 0
    for _ in range(150):
        ranges = {**plan.axes, **plan.extras}
        at = {k: chance.uniform(low, high) for k, (low, _, high) in ranges.items()}
        point = tuple(at.values())
        regimes = found.table.regimes_around(point)
        if len(regimes) != 1:
            continue
        (exact,) = model.nominal([at])
        values = getattr(exact, "values", None)
        if values is None:
            continue
        series = found.table.series[regimes[0]]
        for key, error in series.errors.items():
            shown = found.bands.shown(regimes[0], key, point)
            if shown is None:
                continue
            total += 1
            within += abs(found.table.value(regimes[0], key, point) - values[key]) <= max(error, SHARE) * shown
    assert total > 300
    assert within >= 0.9 * total


@pytest.mark.parametrize("name", ["R-290", "R-448A", "R-32", "R-744", "R-717"])
def test_reference_saturation_lines_between_their_rows(name: str) -> None:
    """Dew and bubble temperatures read in straight lines are within 0.02 K of the property source."""
    fluid = refrigerant(name)
    rows = saturation_rows(fluid)
    chance = random.Random(name)
    for _ in range(200):
        x = chance.uniform(0.0, len(rows["dew"]) - 1.001)
        pressure = math.exp(rows["first"] + x * rows["step"])
        for line, exact in (("dew", fluid.dew_temperature), ("bubble", fluid.bubble_temperature)):
            read = float(np.interp(x, range(len(rows[line])), rows[line]))
            assert abs(read - exact(pressure)) < 0.02, (line, pressure)


def test_units_of_the_page_are_those_of_the_display() -> None:
    """SI = shown x factor + offset, gauges from the barometer, as the display shows the same value."""
    for display in (Display("metric", 97650.0), Display("us_customary", 97650.0)):
        for kind, value in (
            (Kind.TEMPERATURE, 271.3),
            (Kind.PRESSURE, 412345.0),
            (Kind.POWER, 1570.0),
            (Kind.RATIO, 0.47),
        ):
            data = kind_data(display, kind)
            shown = (value - data["offset"] - (97650.0 if data["gauge"] else 0.0)) / data["factor"]
            assert shown == pytest.approx(display.convert(value, kind))


def test_no_sign_of_the_data_ends_the_element_that_holds_it() -> None:
    """Names of a plant stand in the page as data: none closes the script element or opens a comment."""
    wild = {"plant": "</script><script>alert(1)</script><!-- & \u2028"}
    text = str(as_script(wild))
    assert not re.search("[<>&\u2028]", text)
    assert json.loads(text) == wild


@pytest.mark.parametrize("system", ["cold-room", pytest.param("dining-hall", marks=pytest.mark.long)])
def test_a_sheet_is_small_enough_to_send(loaded: LoadedPlant, system: str, tmp_path: Path) -> None:
    """As a single file it stays below 150 kB, also with three axes, two further conditions and three regimes."""
    assert write_sheet(plant_of(loaded, system), tmp_path).stat().st_size < 150 * 1024


def test_a_second_build_takes_the_table_from_the_store(
    loaded: LoadedPlant, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """The same description and package give the same page without calculating again."""
    plant = plant_of(loaded, "cold-room")
    store = FolderStore(tmp_path / "kept")
    first = live_sheet(plant, plant.systems[0], store)

    def never(*_: object) -> None:
        raise AssertionError("calculated again")

    monkeypatch.setattr("commission.manual.live_sheet.expected_data", never)
    assert live_sheet(plant, plant.systems[0], store).context == first.context


def test_a_system_that_cannot_be_calculated_still_has_a_sheet(loaded: LoadedPlant, tmp_path: Path) -> None:
    """Its readings can be written down, and the page says why nothing is expected."""
    plant = without_model(plant_of(loaded, "cold-room"), "the rating of the condenser is not stated")
    text = write_sheet(plant, tmp_path).read_text(encoding="utf-8")
    assert "because the rating of the condenser is not stated" in text
    found = re.search(r'id="live-data">(.*?)</script>', text, re.DOTALL)
    assert found is not None
    data = json.loads(found[1])
    assert data["expected"] is None
    assert {"suction_pressure", "discharge_pressure", "power_input"} <= set(data["readings"])
