"""Heat-up of a store as the page shows it: the numbers of the prediction, long times in hours, reasons where none."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import pytest

from commission.description import load_plant
from commission.manual.gather import PlantData, SystemData
from commission.manual.heating_up import heating_ups
from commission.manual.page_display import page_display
from commission.manual.visit_pages import _not_judged
from commission.prediction import heat_up
from commission.records import FiledBlock


@pytest.fixture(scope="module")
def water(example_folder: Path) -> tuple[PlantData, SystemData]:
    """The water heater of the example with its model, and nothing else calculated."""
    from commission.prediction import fit  # late: the tests fit once for each description

    loaded = load_plant(example_folder)
    system = loaded.system("shower-water")
    model = fit(loaded, "shower-water")
    data = SystemData(
        "shower-water",
        "shower-water",
        system,
        model,
        None,
        None,
        model.assumptions,
        None,
        {},
        page_display(loaded, "shower-water"),
    )
    return PlantData(loaded, page_display(loaded), (data,)), data


def test_rows_are_what_the_prediction_says(water: tuple[PlantData, SystemData]) -> None:
    """Rated and coldest day stand apart; the time is that of the prediction in hours, inside its band."""
    plant, data = water
    found = heating_ups(plant, data)
    assert found is not None
    assert [w.title.partition(", ")[2] for w in found.ways] == ["as rated", "the coldest design day"]
    assert data.model is not None
    assert data.system.store is not None
    expected = heat_up(data.model, data.system.store.cold_water, None, dict(data.model.rated_condition))
    row = found.ways[0].rows[0]
    assert row.unit == "h"
    assert row.value is not None
    assert float(row.value) == pytest.approx(expected.time.value / 3600.0, abs=0.051)
    low, high = (float(t) for t in row.band.split(" to "))
    assert low < float(row.value) < high
    assert row.how is not None
    assert row.how.inputs


def test_the_element_helps_on_the_coldest_day_only(water: tuple[PlantData, SystemData]) -> None:
    """Where it is locked out the page says why; where it runs, the heat-up is shorter and costs more."""
    found = heating_ups(*water)
    assert found is not None
    rated, coldest = found.ways
    assert rated.element is not None
    assert "does not start" in rated.element
    assert len(rated.rows) == 2
    alone, energy, helped, more = (float(r.value or "nan") for r in coldest.rows)
    assert helped < alone
    assert more > energy
    assert len({r.key for way in (rated, coldest) for r in way.rows}) == 6


def test_what_is_not_stated_is_named(water: tuple[PlantData, SystemData]) -> None:
    """Without the temperature of the cold water there is no start: the key to write is named."""
    plant, data = water
    assert data.system.store is not None
    store = data.system.store.model_copy(update={"cold_water": None})
    bare = replace(data, system=data.system.model_copy(update={"store": store}))
    found = heating_ups(plant, bare)
    assert found is not None
    assert "store.cold_water" in str(found.because)
    assert heating_ups(plant, replace(data, system=data.system.model_copy(update={"store": None}))) is None


def test_a_record_shows_what_the_rated_day_would_take(water: tuple[PlantData, SystemData]) -> None:
    """A record of a heat-up holds no start temperatures: the page gives the figure of the rated day beside it."""
    filed = FiledBlock.model_construct(not_judged={"heat_up_time": "nothing", "voltage": "within"})
    found = _not_judged(*water, filed)
    heat, voltage = found["not_judged"]
    today = heating_ups(*water)
    assert today is not None
    row = today.ways[0].rows[0]
    assert f"as rated: {row.value} h, {row.band}" in heat[1]
    assert voltage == ("Voltage", "within")
    assert "from 10.0 °C to 60.0 °C" in found["heated"]
