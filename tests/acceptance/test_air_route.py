"""Capacity by the air side: by hand, against a worked example of the handbook, and where it is refused."""

from __future__ import annotations

from pathlib import Path

import pytest

from commission.acceptance import air_side
from commission.acceptance.budget import Measured
from commission.description import load_plant
from commission.description.model import Medium
from commission.errors import NotCalculatedError
from commission.prediction import fit
from commission.properties import moist_air
from tests.acceptance.visits import sure

AIR = 101_325.0


def test_air_side_of_a_condenser_by_hand() -> None:
    """2600 m3/h of air at 20 °C, 50 %: 1.19 kg/m3 times 1.02 kJ/kg K times 6 K is 5.26 kW (1 %); U is 10 % or more."""
    readings = sure(
        heat_sink_inlet_temperature=293.15, heat_sink_outlet_temperature=299.15, heat_sink_flow=2600 / 3600,
        heat_sink_relative_humidity=0.5,
    )  # fmt: skip
    found = air_side(Medium(medium="air"), "sink", AIR, readings).measured
    assert found.value == pytest.approx(2600 / 3600 * 1.19 * 1020.0 * 6.0, rel=0.01)
    assert found.budget.expanded() / found.value >= 0.095


def test_humidity_that_was_not_read_hardly_counts() -> None:
    """Without a humidity any is possible; that is in the budget, and it is little."""
    readings = sure(heat_sink_inlet_temperature=293.15, heat_sink_outlet_temperature=299.15, heat_sink_flow=2600 / 3600)
    stated = Medium.model_validate({"medium": "air", "relative_humidity": "60 %"})
    parts = []
    for medium, origin in ((Medium(medium="air"), "assumed: not read"), (stated, "plant.yaml")):
        found = air_side(medium, "sink", AIR, readings)
        (part,) = [c for c in found.measured.budget.components if c.name == "humidity not read"]
        parts.append(abs(part.value) / found.measured.value)
        assert [i.origin for i in found.derived.explained.inputs if i.name == "heat_sink_relative_humidity"] == [origin]
    assert 0.0 < parts[1] < parts[0] < 0.01


def test_air_side_refuses_a_wet_coil() -> None:
    """A coil below the dew point of its air takes water out: without the outlet humidity there is no capacity."""
    readings = sure(
        heat_source_inlet_temperature=300.15, heat_source_outlet_temperature=290.15, heat_source_flow=0.5,
        heat_source_relative_humidity=0.5, evaporating_temperature=280.15,
    )  # fmt: skip
    with pytest.raises(NotCalculatedError, match="the coil is wet"):
        air_side(Medium(medium="air"), "source", AIR, readings)
    dry = {**readings, "heat_source_relative_humidity": Measured("heat_source_relative_humidity", 0.2)}
    assert air_side(Medium(medium="air"), "source", AIR, dry).measured.value > 0.0
    del dry["heat_source_relative_humidity"]
    with pytest.raises(NotCalculatedError, match="may be wet"):
        air_side(Medium(medium="air"), "source", AIR, dry)


def test_wet_coil_of_the_handbook() -> None:
    """ASHRAE Handbook Fundamentals, chapter 1, worked example of cooling and dehumidification (from memory): 5 m3/s of
    air at 30 °C and 50 % leave saturated at 10 °C: 197 kW (0.5 %: the handbook's table is of real moist air)."""
    readings = sure(
        heat_source_inlet_temperature=303.15, heat_source_relative_humidity=0.5, heat_source_flow=5.0,
        heat_source_outlet_temperature=283.15, heat_source_outlet_wet_bulb=283.15, evaporating_temperature=278.15,
    )  # fmt: skip
    found = air_side(Medium(medium="air"), "source", AIR, readings)
    assert found.measured.value == pytest.approx(197e3, rel=0.005)
    assert found.derived.explained.method == "air_side_enthalpy"


def test_wet_and_dry_route_meet_where_nothing_condenses() -> None:
    """The balance with a wet bulb that belongs to the same humidity ratio gives the heat of the dry coil."""
    on = moist_air(300.15, AIR, relative_humidity=0.3)
    off = moist_air(290.15, AIR, humidity_ratio=on.W)
    readings = sure(
        heat_source_inlet_temperature=on.T, heat_source_relative_humidity=0.3, heat_source_flow=0.5,
        heat_source_outlet_temperature=off.T, heat_source_outlet_wet_bulb=off.wet_bulb,
    )  # fmt: skip
    wet = air_side(Medium(medium="air"), "source", AIR, readings)
    dry = air_side(Medium(medium="air"), "source", AIR, {**readings, **sure(evaporating_temperature=283.15)})
    assert (wet.derived.explained.method, dry.derived.explained.method) == ("air_side_enthalpy", "air_side_capacity")
    assert wet.measured.value == pytest.approx(dry.measured.value, rel=1e-6)


def test_a_frosted_coil_is_refused() -> None:
    """Where the air leaves at freezing the coil gathers frost: nothing is steady, and ice holds another heat."""
    readings = sure(
        heat_source_inlet_temperature=276.15, heat_source_relative_humidity=0.9, heat_source_flow=0.5,
        heat_source_outlet_temperature=272.15, heat_source_outlet_wet_bulb=271.15, evaporating_temperature=265.15,
    )  # fmt: skip
    with pytest.raises(NotCalculatedError, match="frost"):
        air_side(Medium(medium="air"), "source", AIR, readings)


def test_expected_bulbs_off_a_wet_coil_give_back_the_capacity(example_folder: Path) -> None:
    """First law: on the expected readings of an air conditioner the air side gives the capacity of the cycle (1 %: the
    coil model gives the condensate no heat to carry away), and the wet bulb lies less than 2 K below the dry bulb
    (common practice, no source: air leaves a wet coil almost saturated)."""
    plant = load_plant(example_folder)
    prediction = fit(plant, "dining-hall").predict()
    expected = {k: e.value for k, e in prediction.expected.items()}
    readings = sure(**{**expected, **prediction.conditions})
    found = air_side(Medium(medium="air"), "source", plant.barometric_pressure, readings)
    assert found.measured.value == pytest.approx(expected["cooling_capacity"], rel=0.01)
    assert 0.0 < expected["heat_source_outlet_temperature"] - expected["heat_source_outlet_wet_bulb"] < 2.0
