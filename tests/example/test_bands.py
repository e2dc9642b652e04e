"""One width of band for one reading: wherever it stands, it rests on what is known of the day, and on nothing else."""

from __future__ import annotations

from collections.abc import Mapping

import pytest

from commission.acceptance import make_sheet
from commission.description import LoadedPlant
from commission.manual.grid import make_grid
from commission.prediction import Prediction, SystemModel

SYSTEMS = ("cold-room", "freezer-room", "dining-hall", "floor-heating", "shower-water")


def widths(prediction: Prediction) -> dict[str, float | None]:
    """Standard uncertainty of each expected value."""
    return {k: e.uncertainty for k, e in prediction.expected.items()}


@pytest.mark.parametrize("system", SYSTEMS)
def test_table_prediction_and_test_sheet_agree(
    plant: LoadedPlant, models: Mapping[str, SystemModel], system: str
) -> None:
    """The table over the weather, a prediction at the same temperature and a draft of the test sheet print one band."""
    model = models[system]
    grid = make_grid(plant, plant.system(system), model)
    assert grid is not None
    point = next(p for p in reversed(grid.points) if p.prediction is not None)
    assert point.prediction is not None
    asked = model.predict({grid.key: point.temperature})
    assert set(asked.as_stated) == set(model.may_differ)
    assert widths(point.prediction) == pytest.approx(widths(asked), rel=1e-4, abs=1e-9)
    held = {k: v for k, v in asked.conditions.items() if k != grid.key}
    sheet = make_sheet(plant, model, {grid.key: [point.temperature]}, held=held)
    frozen = {t.key: t.uncertainties[0] for t in sheet.targets_for("expectation")}
    assert frozen == pytest.approx({k: widths(asked)[k] for k in frozen}, rel=1e-4, abs=1e-9)


@pytest.mark.parametrize("system", SYSTEMS)
def test_the_rated_column_is_the_column_of_a_table(models: Mapping[str, SystemModel], system: str) -> None:
    """At the rated temperature a table and the rated column are the same prediction."""
    model = models[system]
    key = "heat_source_inlet_temperature"
    with_one = model.predict(model.along(key) | {key: model.rated_condition[key]}, as_stated=tuple(model.along(key)))
    assert widths(model.predict()) == pytest.approx(widths(with_one), rel=1e-4, abs=1e-9)


def test_only_a_reading_makes_a_flow_known(models: Mapping[str, SystemModel]) -> None:
    """At 30 °C outdoors the air off the condenser of the cold room is known to 0.8 K with the stated air flow, and to
    less than half of that where the flow was read."""
    model = models["cold-room"]
    asked = {"heat_sink_inlet_temperature": 303.15}
    stated = model.predict(asked).expected["heat_sink_outlet_temperature"].uncertainty
    read = model.predict({**asked, "heat_sink_flow": model.rated_condition["heat_sink_flow"]})
    known = read.expected["heat_sink_outlet_temperature"].uncertainty
    assert stated is not None
    assert known is not None
    assert 0.3 < stated < 0.5
    assert known < 0.5 * stated


OUTDOORS = {
    "cold-room": ("heat_sink_inlet_temperature", (273.15, 288.15, 308.15)),
    "freezer-room": ("heat_sink_inlet_temperature", (288.15, 298.15, 308.15)),
    "shower-water": ("heat_source_inlet_temperature", (263.15, 268.15, 273.15, 293.15)),
}


@pytest.mark.parametrize("system", OUTDOORS)
def test_no_band_breaks_the_second_law(models: Mapping[str, SystemModel], system: str) -> None:
    """Liquid and gas are nowhere expected colder than the air or the water that cools them, evaporation nowhere warmer
    than the air that gives the heat, no superheat below nothing."""
    key, temperatures = OUTDOORS[system]
    for temperature in temperatures:
        found = models[system].predict({key: temperature})
        coldest, warmest = (found.conditions[f"heat_{s}_inlet_temperature"] for s in ("sink", "source"))
        bands = {k: e.band(2.0) for k, e in found.expected.items()}
        for name in ("liquid_temperature", "gas_cooler_outlet_temperature", "condensing_temperature"):
            assert (band := bands.get(name)) is None or band[0] >= coldest, (temperature, name)
        for name in ("superheat", "subcooling", "gas_cooler_approach", "condenser_temperature_difference"):
            assert (band := bands.get(name)) is None or band[0] >= 0.0, (temperature, name)
        evaporating = bands["evaporating_temperature"]
        assert evaporating is not None
        assert evaporating[1] <= warmest
