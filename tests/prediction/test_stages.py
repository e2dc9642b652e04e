"""Capacity stages of a described plant: a condition of its own, with ratings, refusals and what it does to readings."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from commission.description import LoadedPlant
from commission.errors import NotCalculatedError
from commission.prediction import fit, operating_surface

Written = Callable[[str], LoadedPlant]
STAGE = "compressor_stage"
RATED = (
    "heat_source_inlet_temperature: 12 °C, heat_source_outlet_temperature: 7 °C, heat_sink_inlet_temperature: 30 °C, "
    "heat_sink_outlet_temperature: 35 °C"
)
CHILLER = f"""
duty: liquid_cooling
refrigerant: R-134a
nameplate: {{voltage: 400 V, phases: 3, rated_current: 320 A}}
heat_source: {{medium: water, flow: 90 m3/h}}
heat_sink: {{medium: water, flow: 110 m3/h}}
compressor: {{type: screw, COMPRESSORS}}
receiver: {{volume: 60 L}}
rated_points:
  - {{{RATED}, cooling_capacity: 520 kW, power_input: 110 kW}}
"""
THREE = CHILLER.replace("COMPRESSORS", "count: 3, stages: [33 %, 67 %, 100 %]")
SLIDE = CHILLER.replace("COMPRESSORS", "stages: [50 %, 75 %, 100 %]")


def test_full_stage_is_what_it_was(written: Written) -> None:
    """With all compressors on, every value is that of the description without stages, bit for bit."""
    with_stages, without = (
        fit(written(t), "it").predict() for t in (SLIDE, CHILLER.replace("COMPRESSORS", "count: 1"))
    )
    assert with_stages.conditions[STAGE] == 1.0
    assert {k: e.value for k, e in with_stages.expected.items()} == {k: e.value for k, e in without.expected.items()}


def test_stage_is_a_condition(written: Written) -> None:
    """Two of three: evaporation rises, condensation falls, each running machine draws less than at full load, and the
    capacity is more than two thirds (Stoecker & Jones, 2nd ed. 1982, ch. 14)."""
    model = fit(written(THREE), "it")
    assert model.condition_axes[STAGE].steps == (1 / 3, 2 / 3, 1.0)
    full, two = model.predict().expected, model.predict({STAGE: 0.66}).expected
    assert two["evaporating_temperature"].value > full["evaporating_temperature"].value + 1
    assert two["condensing_temperature"].value < full["condensing_temperature"].value - 1
    assert 2 / 3 < two["cooling_capacity"].value / full["cooling_capacity"].value < 0.8
    assert 0.9 < two["compressor_current"].value / full["compressor_current"].value < 1
    assert two["compressor_current"].value == pytest.approx(two["current"].value / 2)
    assert full["compressor_current"].value == pytest.approx(full["current"].value / 3)
    assert two["cooling_cop"].value > full["cooling_cop"].value
    assert "compressor_unloading_loss" not in model.assumptions


def test_one_machine_alone_has_no_current_of_each(written: Written) -> None:
    """Where there is one compressor its current is that of the unit."""
    assert "compressor_current" not in fit(written(SLIDE), "it").predict().expected


def test_unloading_is_an_assumption(written: Written) -> None:
    """What unloading costs moves the expected power at part stage by its range, and nothing at full load."""
    model = fit(written(SLIDE), "it")
    effects = [model.assumption_effects({STAGE: s})["compressor_unloading_loss"] for s in (1.0, 0.5)]
    assert effects[0]["compressor_power"] == pytest.approx(0.0, abs=1e-3)
    power = model.predict({STAGE: 0.5}).expected["compressor_power"].value
    assert effects[1]["compressor_power"] / power == pytest.approx(0.12 / 3**0.5 * 0.5 / 0.65, rel=0.1)


def test_rating_at_part_stage_replaces_the_assumption(written: Written) -> None:
    """A point that was measured at half stage is met, and the power there is then known far better."""
    point = f"  - {{{RATED}, compressor_stage: 50 %, cooling_capacity: 280 kW, power_input: 64 kW}}\n".replace(
        "heat_source_outlet_temperature: 7 °C, ", ""
    ).replace(", heat_sink_outlet_temperature: 35 °C", "")
    rated, guessed = fit(written(SLIDE + point), "it"), fit(written(SLIDE), "it")
    found = [m.predict({STAGE: 0.5}).expected["power_input"] for m in (rated, guessed)]
    assert found[0].value == pytest.approx(64e3, rel=0.03)
    assert (found[0].uncertainty or 0) < 0.6 * (guessed.predict({STAGE: 0.5}).expected["power_input"].uncertainty or 0)
    assert rated.rated_condition[STAGE] == 1.0


def test_all_ratings_at_a_part_stage(written: Written) -> None:
    """A plant that was rated at one of two machines is expected there, as rated, and its capacity grows with both."""
    text = CHILLER.replace("COMPRESSORS", "count: 2, stages: [50 %, 100 %]").replace(
        "cooling_capacity", "compressor_stage: 50 %, cooling_capacity"
    )
    model = fit(written(text), "it")
    assert model.rated_condition[STAGE] == 0.5
    rated = model.predict()
    assert rated.expected["cooling_capacity"].value == pytest.approx(520e3, rel=0.01)
    assert 1.5 < model.predict({STAGE: 1.0}).expected["cooling_capacity"].value / 520e3 < 2.0


def test_no_such_stage(written: Written) -> None:
    """Between two stages the nearest is named, in the words of the plant."""
    with pytest.raises(NotCalculatedError, match=r"60 % cannot be: the stages are 50 %, 75 %, 100 %.* nearest is 50 %"):
        fit(written(SLIDE), "it").predict({STAGE: 0.6})


def test_no_slope_along_a_stage(written: Written) -> None:
    """A stage is one or another: the sensitivities at part stage leave it out and hold all other conditions."""
    slopes = fit(written(SLIDE), "it").sensitivities({STAGE: 0.75})
    assert STAGE not in slopes["cooling_capacity"]
    assert slopes["cooling_capacity"]["heat_source_inlet_temperature"] > 0


def test_map_at_a_stage(written: Written) -> None:
    """A map over source and sink at a stage gives what single predictions there give."""
    model = fit(written(SLIDE), "it")
    sources, sinks = (283.15, 286.15), (295.15, 303.15)
    found = operating_surface(
        model, ("heat_source_inlet_temperature", sources), ("heat_sink_inlet_temperature", sinks), {STAGE: 0.5}
    )
    one = model.predict({"heat_source_inlet_temperature": 286.15, "heat_sink_inlet_temperature": 295.15, STAGE: 0.5})
    assert found.heat_from_source[1, 0] == pytest.approx(one.expected["cooling_capacity"].value, rel=1e-6)
    assert found.power[1, 0] == pytest.approx(one.expected["compressor_power"].value, rel=1e-6)
