"""From one rated point to a model; and refusals that say what is missing or what cannot be."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from commission.description import LoadedPlant
from commission.errors import NotCalculatedError
from commission.prediction import fit

Written = Callable[[str], LoadedPlant]

AIR_HEAT_PUMP = """
duty: space_heating
refrigerant: R-454B
heat_source: {medium: air}
heat_sink: {medium: water}
rated_points:
  - {heat_source_inlet_temperature: 7 °C, heat_sink_outlet_temperature: 35 °C, heating_capacity: 8 kW,
     power_input: 1.8 kW}
"""
CHILLER = """
duty: liquid_cooling
refrigerant: R-134a
heat_source: {medium: water, flow: 8.6 m3/h}
heat_sink: {medium: air}
compressor: {type: screw}
rated_points:
  - {heat_source_inlet_temperature: 12 °C, heat_sink_inlet_temperature: 35 °C, cooling_capacity: 50 kW,
     power_input: 17 kW}
"""
WET_AIR_CONDITIONER = """
duty: comfort_cooling
refrigerant: R-32
heat_source: {medium: air}
heat_sink: {medium: air}
rated_points:
  - {heat_source_inlet_temperature: 27 °C, heat_source_wet_bulb: 19 °C, heat_sink_inlet_temperature: 35 °C,
     cooling_capacity: 5 kW, power_input: 1.55 kW}
"""
AIR_CONDITIONER = """
duty: comfort_cooling
refrigerant: R-32
heat_source: {medium: air}
heat_sink: {medium: air}
compressor: {type: rotary}
rated_points:
  - {heat_source_inlet_temperature: 27 °C, heat_sink_inlet_temperature: 35 °C, cooling_capacity: 3.5 kW,
     power_input: 1.05 kW}
"""


def test_outdoor_coil_runs_five_to_ten_kelvin_colder(written: Written) -> None:
    """A coil in outdoor air runs roughly 5 to 10 K colder than the air (common practice, no source)."""
    found = fit(written(AIR_HEAT_PUMP), "it").predict()
    assert 5 <= found.expected["evaporator_temperature_difference"].value <= 10
    assert found.expected["heating_capacity"].value == pytest.approx(8000, rel=1e-4)


@pytest.mark.parametrize(
    ("text", "key", "value", "power"),
    [
        (AIR_HEAT_PUMP, "heating_capacity", 8000, 1800),
        (WET_AIR_CONDITIONER, "cooling_capacity", 5000, 1550),
        (CHILLER, "cooling_capacity", 50_000, 17_000),
        (AIR_CONDITIONER, "cooling_capacity", 3500, 1050),
    ],
)
def test_one_point_is_enough(written: Written, text: str, key: str, value: float, power: float) -> None:
    """Duty, refrigerant, media and one rated point give a model that keeps the promise and lies below Carnot."""
    model = fit(written(text), "it")
    expected = model.predict().expected
    assert expected[key].value == pytest.approx(value, rel=1e-4)
    assert expected["power_input"].value == pytest.approx(power, rel=1e-4)
    assert expected[key].value / expected["compressor_power"].value < expected["carnot_cop"].value
    assert expected[key].uncertainty == pytest.approx(0, abs=2e-3 * value)
    assert 0.4 < model.fitted["isentropic efficiency at the rated point"].value < 0.8


def test_no_rated_point_says_what_to_write(written: Written) -> None:
    """Without any rated point the reason names the key to fill."""
    text = AIR_CONDITIONER.split("rated_points")[0]
    with pytest.raises(NotCalculatedError, match="rated_points"):
        fit(written(text), "it")


def test_power_that_is_all_fans_is_refused(written: Written) -> None:
    """A power input no larger than the fans it is said to include leaves nothing for the compressor."""
    text = AIR_CONDITIONER.replace("compressor: {type: rotary}", "condenser: {fan_power: 1.2 kW}")
    with pytest.raises(NotCalculatedError, match="nothing is left for the compressor"):
        fit(written(text), "it")


def test_rating_beyond_its_air_flow_is_refused(written: Written) -> None:
    """A cooler rating with more heat than its air flow carries at that difference cannot be."""
    text = AIR_CONDITIONER.replace("{medium: air}\nheat_sink", "{medium: air, flow: 200 m3/h}\nheat_sink")
    text += "evaporator: {rating: {air_on: 27 °C, temperature_difference: 8 K, capacity: 3.5 kW}}\n"
    with pytest.raises(NotCalculatedError, match="cannot both be right"):
        fit(written(text), "it")


def test_capacity_alone_takes_an_assumed_efficiency(written: Written) -> None:
    """Where no power is stated the isentropic efficiency is assumed, listed, and moves the power."""
    text = AIR_CONDITIONER.replace("3.5 kW,\n     power_input: 1.05 kW", "3.5 kW")
    model = fit(written(text), "it")
    assert "compressor_isentropic_efficiency" in model.assumptions
    power = model.predict().expected["power_input"]
    assert (power.uncertainty or 0) / power.value > 0.03


def test_unstated_current_gives_its_reason(written: Written) -> None:
    """Without voltage and phases the current is not calculated, and the reason says what is missing."""
    found = fit(written(AIR_CONDITIONER), "it").predict()
    assert "current" not in found.expected
    assert "voltage" in found.not_calculated["current"]


def test_a_wetter_room_gives_more_capacity_and_less_sensible_heat(written: Written) -> None:
    """Wet bulb is a condition of an air conditioner: 22 °C for 19 °C gives more total and less sensible heat."""
    model = fit(written(WET_AIR_CONDITIONER), "it")
    room = {"heat_source_inlet_temperature": 300.15}
    dry = model.predict({**room, "heat_source_wet_bulb": 292.15}).expected
    wet = model.predict({**room, "heat_source_wet_bulb": 295.15}).expected
    assert dry["cooling_capacity"].value == pytest.approx(5000, rel=1e-3)
    assert 1.04 < wet["cooling_capacity"].value / dry["cooling_capacity"].value < 1.15
    assert wet["sensible_heat_ratio"].value < dry["sensible_heat_ratio"].value - 0.1


def test_a_frosting_coil_is_said(written: Written) -> None:
    """An outdoor coil below freezing collects frost: said in winter, not in mild weather."""
    model = fit(written(AIR_HEAT_PUMP), "it")
    assert any("frost" in w for w in model.predict({"heat_source_inlet_temperature": 274.15}).warnings)
    assert not any("frost" in w for w in model.predict({"heat_source_inlet_temperature": 288.15}).warnings)


def test_superheat_follows_with_a_fixed_restriction(written: Written) -> None:
    """An orifice feeds less at low head pressure: more superheat when it is cool outdoors, less when it is hot (common
    practice, no source); at the rated condition the promise is kept."""
    text = AIR_CONDITIONER + "expansion: {device: orifice, superheat: 8 K}\n"
    model = fit(written(text), "it")
    cool, rated, hot = (model.predict({"heat_sink_inlet_temperature": t + 273.15}) for t in (27, 35, 38))
    assert rated.expected["cooling_capacity"].value == pytest.approx(3500, rel=1e-3)
    assert rated.expected["superheat"].value == pytest.approx(8.0, abs=0.05)
    assert cool.expected["superheat"].value > 8.5
    assert hot.expected["superheat"].value < 7.5
    assert rated.regime == "fixed restriction"


def test_capacity_heat_and_power_together_leave_one_degree_of_freedom(written: Written) -> None:
    """Where cooling, heating and power are all stated the first law is a third datum, and the fit says its miss."""
    text = AIR_HEAT_PUMP.replace("heating_capacity: 8 kW", "heating_capacity: 8 kW, cooling_capacity: 6.3 kW")
    model = fit(written(text), "it")
    assert model.fit.dof == 1
    expected = model.predict().expected
    assert expected["heating_capacity"].value == pytest.approx(8000, rel=0.02)
    assert 0 < (expected["heating_capacity"].uncertainty or 0) < 300


def test_nothing_stated_is_left_out_silently(written: Written) -> None:
    """A stated part that the model does not carry is named with every prediction, or refused with the reason."""
    text = CHILLER + "controls: {evaporator_pressure_regulator: 2 bar g}\n"
    assert any("wide open" in w for w in fit(written(text), "it").predict().warnings)
    with pytest.raises(NotCalculatedError, match="wet bulb"):
        fit(written(CHILLER + "condenser: {type: evaporative}\n"), "it")
