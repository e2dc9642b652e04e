"""The example's cold room: believable, lawful, explained."""

from __future__ import annotations

import math
from itertools import pairwise

import pytest

from commission.errors import InputError, NotCalculatedError
from commission.prediction import Prediction, SystemModel
from commission.quantities import NOMENCLATURE, methods

C = 273.15


def _values(prediction: Prediction) -> dict[str, float]:
    return {key: e.value for key, e in prediction.expected.items()}


def test_rated_condition_is_believable(cold_room: SystemModel) -> None:
    """Room 2 °C, 32 °C outdoors: 7-9 K at the cooler, 10-14 K at the condenser, discharge 65-82 °C, COP 2-2.5
    (common practice, no source)."""
    v = _values(cold_room.predict())
    assert 7 < v["evaporator_temperature_difference"] < 9
    assert 10 < v["condenser_temperature_difference"] < 14
    assert 65 < v["discharge_temperature"] - C < 82
    assert 2.0 < v["cooling_cop"] < 2.5
    assert 0.5 < cold_room.fitted["isentropic efficiency at the rated point"].value < 0.75
    assert 0.6 < cold_room.fitted["volumetric efficiency at the rated point"].value < 0.95


def test_first_law_at_every_outdoor_temperature(cold_room: SystemModel) -> None:
    """Heat to the sink = cooling + line gain + compressor power - shell loss, between -10 and 35 °C outdoors."""
    share = cold_room.fit.plan.machine.compressor.shell_loss
    for outdoors in (-10, 0, 10, 20, 35):
        found = cold_room.predict({"heat_sink_inlet_temperature": outdoors + C})
        v = _values(found)
        states = {s.label: s for s in found.states}
        line = v["refrigerant_flow"] * (states["2"].h - states["1"].h)
        given = v["cooling_capacity"] + line + (1 - share) * v["compressor_power"]
        assert v["heating_capacity"] == pytest.approx(given, rel=1e-6)
        if "carnot_cop" in v:
            assert v["cooling_capacity"] / v["compressor_power"] < v["carnot_cop"]
        else:  # the room and the air outdoors nearly meet, or the air is the colder one
            assert outdoors < 20


def test_trends_with_outdoor_temperature(cold_room: SystemModel) -> None:
    """Warmer outdoors: higher discharge pressure and power, less cooling, lower COP (common practice, no source)."""
    found = cold_room.grid("heat_sink_inlet_temperature", [t + C for t in (20, 25, 30, 35)])
    values = [_values(p) for p in found if isinstance(p, Prediction)]
    assert len(values) == 4
    for cool, warm in pairwise(values):
        assert warm["discharge_pressure"] > cool["discharge_pressure"]
        assert warm["power_input"] > cool["power_input"]
        assert warm["cooling_capacity"] < cool["cooling_capacity"]
        assert warm["cooling_cop"] < cool["cooling_cop"]


def test_head_pressure_is_held_in_winter(cold_room: SystemModel) -> None:
    """Below about 15 °C outdoors the fan slows and keeps the condensing temperature at the setting of 28 °C."""
    winter, summer = cold_room.predict({"heat_sink_inlet_temperature": C}), cold_room.predict()
    assert winter.regime == "head pressure held"
    assert summer.regime == "free condensing"
    assert winter.expected["condensing_temperature"].value == pytest.approx(28 + C, abs=1e-6)
    assert winter.expected["fan_power"].value < 0.3 * summer.expected["fan_power"].value


def test_every_value_is_explained(cold_room: SystemModel) -> None:
    """Each expected value has a key, a method, inputs with origins, and parts whose root sum is its uncertainty."""
    found = cold_room.predict()
    known = methods()
    for key, one in found.expected.items():
        assert key in NOMENCLATURE
        assert one.method in known
        assert one.inputs
        assert all(i.origin for i in one.inputs)
        total = math.sqrt(sum(v * v for v in found.parts[key].values()))
        assert one.uncertainty == pytest.approx(total)
        assert set(one.assumptions) <= set(cold_room.assumptions)
    origins = {i.origin for i in found.expected["cooling_capacity"].inputs}
    assert any(o.startswith("plant.yaml:") for o in origins)


def test_grid_and_prediction_agree(cold_room: SystemModel) -> None:
    """A grid started from its neighbours gives what single predictions give."""
    axis = [t + C for t in (-5, 5, 15, 25)]
    for value, one in zip(axis, cold_room.grid("heat_sink_inlet_temperature", axis), strict=True):
        alone = cold_room.predict({"heat_sink_inlet_temperature": value})
        assert isinstance(one, Prediction)
        for key, e in alone.expected.items():
            assert one.expected[key].value == pytest.approx(e.value, rel=1e-6)
            assert one.expected[key].uncertainty == pytest.approx(e.uncertainty, rel=1e-3, abs=1e-6 * abs(e.value))


def test_sensitivities_are_the_slope_of_predictions(cold_room: SystemModel) -> None:
    """d(expected)/d(condition) agrees with two predictions 1 K apart."""
    slope = cold_room.sensitivities()
    low = cold_room.predict({"heat_sink_inlet_temperature": 31.5 + C})
    high = cold_room.predict({"heat_sink_inlet_temperature": 32.5 + C})
    for key in ("condensing_temperature", "power_input", "cooling_capacity", "discharge_pressure"):
        difference = high.expected[key].value - low.expected[key].value
        assert slope[key]["heat_sink_inlet_temperature"] == pytest.approx(difference, rel=0.02)


def test_effects_of_assumptions_are_the_parts(cold_room: SystemModel) -> None:
    """`assumption_effects` and the parts of the uncertainty are the same numbers."""
    effects, parts = cold_room.assumption_effects(), cold_room.predict().parts
    for assumption in cold_room.assumptions:
        effect = effects.get(assumption, {}).get("discharge_temperature", 0.0)
        assert parts["discharge_temperature"].get(assumption, 0.0) == pytest.approx(effect, abs=1e-6)
    assert abs(effects["shell_heat_loss_share"]["discharge_temperature"]) > 0.5


def test_missing_conditions_are_filled_and_said(cold_room: SystemModel) -> None:
    """A condition that is not given comes from the rated one and is listed."""
    found = cold_room.predict({"heat_sink_inlet_temperature": 300.15})
    assert "heat_source_inlet_temperature" in found.filled
    assert "heat_sink_inlet_temperature" not in found.filled
    assert found.conditions["heat_source_inlet_temperature"] == pytest.approx(275.15)


def test_unknown_condition_names_the_nearest(cold_room: SystemModel) -> None:
    """A condition that the system does not have is refused with the nearest key."""
    with pytest.raises(InputError) as caught:
        cold_room.predict({"heat_sink_inlet_temperatur": 300.0})
    assert caught.value.problems[0].nearest == "heat_sink_inlet_temperature"
    with pytest.raises(InputError):
        cold_room.predict({"heat_sink_inlet_temperature": math.nan})


def test_outside_its_range_a_prediction_warns(cold_room: SystemModel) -> None:
    """Beyond the range of the description the value is given with a warning."""
    assert cold_room.predict({"heat_sink_inlet_temperature": 318.15}).warnings
    assert not cold_room.predict().warnings


def test_a_condition_without_balance_is_not_calculated(cold_room: SystemModel) -> None:
    """Where no balance exists, the reason and the nearest condition that has one stand instead of a number."""
    with pytest.raises(NotCalculatedError) as caught:
        cold_room.predict({"heat_sink_inlet_temperature": 95 + C})
    assert "coming from the rated condition it still runs at outdoor air inlet temperature" in str(caught.value)
