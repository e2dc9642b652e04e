"""Bands that a practitioner expects, system by system. Unless a line says otherwise: common practice, no source."""

from __future__ import annotations

import math

import pytest

from tests.example.conditions import CONDITIONS, Predicted, values
from tests.example.conditions import C as ZERO

BANDS: dict[str, dict[str, tuple[float, float]]] = {
    "cold-room": {
        "evaporator_temperature_difference": (5, 9), "condenser_temperature_difference": (8, 15),
        "superheat": (5, 8), "compressor_superheat": (8, 20), "cooling_cop": (1.9, 2.6), "pressure_ratio": (2, 6),
    },
    "freezer-room": {
        "evaporator_temperature_difference": (5, 7), "condenser_temperature_difference": (8, 15),
        "superheat": (3, 6), "compressor_superheat": (8, 20), "cooling_cop": (1.0, 1.6), "pressure_ratio": (5, 10),
    },
    "dining-hall": {
        "evaporator_temperature_difference": (15, 20), "condenser_temperature_difference": (8, 15),
        "superheat": (3, 6), "subcooling": (3, 8), "cooling_cop": (3.0, 4.5), "sensible_heat_ratio": (0.65, 0.8),
        "heat_source_temperature_change": (9, 15), "pressure_ratio": (2, 4),
    },
    "floor-heating": {
        "evaporator_temperature_difference": (5, 10), "superheat": (3, 6), "subcooling": (3, 8),
        "heat_sink_temperature_change": (4, 8), "heating_cop": (3.5, 4.5), "pressure_ratio": (2, 5),
    },
    "shower-water": {
        "evaporator_temperature_difference": (5, 10), "superheat": (3, 6), "gas_cooler_approach": (1.5, 8),
        "heating_cop": (3.2, 4.5), "pressure_ratio": (2, 4), "discharge_pressure": (80e5, 110e5),
    },
}  # fmt: skip


@pytest.mark.parametrize(("system", "key"), [(s, key) for s, band in BANDS.items() for key in band])
def test_the_design_condition_lies_in_the_bands_of_the_trade(predicted: Predicted, system: str, key: str) -> None:
    """Differences at the exchangers, superheat, subcooling, COP and pressure ratio at the design condition."""
    low, high = BANDS[system][key]
    assert low <= values(predicted(system, 0))[key] <= high


@pytest.mark.parametrize("system", CONDITIONS)
def test_no_discharge_line_is_too_hot_for_the_oil(predicted: Predicted, system: str) -> None:
    """Below 110 °C on the discharge line (130 °C with carbon dioxide and its oils), and at least 10 K above
    the condensing temperature, or above the hot water of a gas cooler, at every condition."""
    for number in range(len(CONDITIONS[system])):
        v = values(predicted(system, number))
        highest = 130.0 if system == "shower-water" else 110.0
        hot = v.get("condensing_temperature", v["heat_sink_outlet_temperature"])
        assert hot + 10.0 < v["discharge_temperature"] < highest + ZERO


@pytest.mark.parametrize("system", CONDITIONS)
def test_current_and_power_belong_together(predicted: Predicted, system: str) -> None:
    """Power over root 3 times 400 V times current is a power factor between 0.7 and 1."""
    for number in range(len(CONDITIONS[system])):
        v = values(predicted(system, number))
        assert 0.7 < v["power_input"] / (math.sqrt(3) * 400.0 * v["current"]) <= 1.0


def test_the_freezer_starts_with_its_suction_pressure_limited(predicted: Predicted) -> None:
    """With the room at 10 °C the regulator holds 1.2 bar g at the compressor, and the power is at most a quarter above
    that of the design condition, so that the motor is not overloaded."""
    warm, cold = values(predicted("freezer-room", 3)), values(predicted("freezer-room", 0))
    assert predicted("freezer-room", 3).regime.startswith("suction pressure regulated")
    assert warm["suction_pressure"] == pytest.approx(1.2e5 + 97656.0, abs=2.0)
    assert warm["evaporating_temperature"] > cold["evaporating_temperature"] + 15.0
    assert warm["power_input"] < 1.25 * cold["power_input"]


def test_the_blend_boils_with_glide(predicted: Predicted) -> None:
    """R-454C enters the evaporator 4 to 7 K colder than its dew point there: glide of about 8 K less the share that
    is vapour already (glide from the register's boiling points)."""
    found = predicted("freezer-room", 0)
    after = next(s for s in found.states if s.label == "7")
    assert 4.0 < values(found)["evaporating_temperature"] - after.T < 7.0


def test_dry_air_is_cooled_further_than_damp_air(predicted: Predicted) -> None:
    """At the same room temperature damp air gives more heat in all, but leaves warmer and with more of it latent."""
    damp, dry = values(predicted("dining-hall", 1)), values(predicted("dining-hall", 2))
    assert damp["cooling_capacity"] > 1.05 * dry["cooling_capacity"]
    assert damp["heat_source_outlet_temperature"] > dry["heat_source_outlet_temperature"] + 1.0
    assert damp["sensible_heat_ratio"] < 0.7 < 0.85 < dry["sensible_heat_ratio"]
    assert damp["suction_pressure"] > dry["suction_pressure"]


def test_the_outdoor_coil_frosts_near_freezing(predicted: Predicted) -> None:
    """At 2 °C and 84 % the coil works below 0 °C and under the dew point: the prediction says that it frosts."""
    found = predicted("floor-heating", 0)
    assert values(found)["evaporating_temperature"] < ZERO
    assert any("frost" in text for text in found.warnings)


def test_the_machine_meets_the_demand_down_to_the_balance_point(predicted: Predicted) -> None:
    """The demand of the data sheet, 11.2 kW at -9 °C, is more than the machine gives there at full speed, and the 6 kW
    of the element make up for it; the COP there is 2.5 to 3.2."""
    v = values(predicted("floor-heating", 2))
    assert v["heating_capacity"] < 11.2e3 < v["heating_capacity"] + 6e3
    assert 2.5 < v["heating_cop"] < 3.2


def test_warm_water_at_the_bottom_of_the_store_costs_most(predicted: Predicted) -> None:
    """Water that enters the gas cooler at 35 °C instead of 10 °C takes a fifth to two fifths of the COP: heat is given
    up above the critical point, along a falling temperature, so that the cold end decides."""
    cold, warm = values(predicted("shower-water", 0)), values(predicted("shower-water", 3))
    assert 0.6 < warm["heating_cop"] / cold["heating_cop"] < 0.8
    assert warm["gas_cooler_outlet_temperature"] > cold["gas_cooler_outlet_temperature"] + 15.0
    assert warm["heat_sink_flow"] > 1.4 * cold["heat_sink_flow"]


def test_the_shower_water_is_heated_above_the_critical_point(predicted: Predicted) -> None:
    """Carbon dioxide gives its heat up above 73.8 bar absolute (critical point; Span & Wagner 1996), within the limits
    of the controller, and nothing is said of condensing or subcooling."""
    for number in range(len(CONDITIONS["shower-water"])):
        found = predicted("shower-water", number)
        assert found.regime == "transcritical"
        assert 73.8e5 < found.expected["discharge_pressure"].value < 119e5
        assert {"condensing_temperature", "subcooling"} <= set(found.not_calculated)
