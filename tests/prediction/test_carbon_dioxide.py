"""Carbon-dioxide systems from one rated point."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from commission.description import LoadedPlant
from commission.errors import NotCalculatedError
from commission.prediction import fit

Written = Callable[[str], LoadedPlant]

WATER_HEATER = """
duty: water_heating
refrigerant: R-744
heat_source: {medium: air}
heat_sink: {medium: water}
compressor: {type: rotary}
rated_points:
  - {heat_source_inlet_temperature: 16 °C, heat_sink_inlet_temperature: 17 °C, heat_sink_outlet_temperature: 65 °C,
     heating_capacity: 4.5 kW, power_input: 1.0 kW}
"""
COLD = """
duty: cold_storage
refrigerant: R-744
heat_source: {medium: air}
heat_sink: {medium: air}
compressor: {type: reciprocating}
rated_points:
  - {heat_source_inlet_temperature: 2 °C, heat_sink_inlet_temperature: 32 °C, cooling_capacity: 8 kW,
     power_input: 5.2 kW}
"""


def test_a_water_heater_keeps_its_promise_and_sets_its_flow(written: Written) -> None:
    """Heated in one pass the water flow follows; colder inlet water means more heat and a better COP."""
    model = fit(written(WATER_HEATER), "it")
    rated = model.predict()
    assert rated.regime == "transcritical"
    assert rated.expected["heating_capacity"].value == pytest.approx(4500, rel=1e-4)
    assert rated.expected["power_input"].value == pytest.approx(1000, rel=1e-4)
    assert rated.expected["heat_sink_flow"].value == pytest.approx(4500 / (985 * 4180 * 48), rel=0.02)
    assert "critical" in rated.not_calculated["condensing_temperature"]
    cold = model.predict({"heat_sink_inlet_temperature": 282.15})
    assert cold.expected["heating_cop"].value > rated.expected["heating_cop"].value
    assert 0.5 < model.fitted["isentropic efficiency at the rated point"].value < 0.8
    assert rated.expected["heating_cop"].value < rated.expected["carnot_cop"].value


def test_a_cold_room_condenses_in_winter(written: Written) -> None:
    """Below about 20 °C outdoors carbon dioxide condenses, above it does not, and the model runs through."""
    model = fit(written(COLD), "it")
    assert model.predict().regime == "transcritical"
    winter = model.predict({"heat_sink_inlet_temperature": 278.15})
    assert winter.regime == "condensing below the critical point"
    assert winter.expected["condensing_temperature"].value < 295
    assert 1.5 < winter.expected["subcooling"].value < 8
    assert winter.expected["gas_cooler_approach"].value > 0
    assert winter.expected["cooling_cop"].value > model.predict().expected["cooling_cop"].value


def test_pressure_by_charge_alone_is_refused(written: Written) -> None:
    """A high pressure left to the charge is not carried by this model, and the reason says what to write."""
    text = COLD + "controls: {gas_cooler_pressure: {by: charge alone}}\n"
    with pytest.raises(NotCalculatedError, match="set point"):
        fit(written(text), "it")
