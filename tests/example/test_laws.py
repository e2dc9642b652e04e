"""First and second law at every condition of every system, held to figures that do not come from the model."""

from __future__ import annotations

import math

import pytest

from tests.example.conditions import EVERYWHERE, Predicted, values

R_AIR, CP_AIR = 287.05, 1006.0
"""Gas constant and specific heat of dry air in J/(kg K); textbook values, moisture adds less than 2 %."""


def _mean(inlet: float, outlet: float) -> float:
    """Entropic mean temperature in K of a stream of constant specific heat: (T1 - T2) / ln(T1/T2)."""
    return inlet if abs(inlet - outlet) < 1e-3 else (inlet - outlet) / math.log(inlet / outlet)


@pytest.mark.parametrize(("system", "number"), EVERYWHERE)
def test_energy_is_kept(predicted: Predicted, system: str, number: int) -> None:
    """Heat to the sink = heat from the source + heat into the suction line + compressor power - loss of the shell."""
    found = predicted(system, number)
    v, states = values(found), {s.label: s for s in found.states}
    line = v["refrigerant_flow"] * (states["2"].h - states["1"].h)
    gas = v["refrigerant_flow"] * (states["3"].h - states["2"].h)
    lost = v["compressor_power"] - gas
    assert 0.0 <= lost <= 0.15 * v["compressor_power"]
    assert v["heating_capacity"] == pytest.approx(v["cooling_capacity"] + line + gas, rel=1e-5)
    assert v["power_input"] == pytest.approx(v["compressor_power"] + v["fan_power"], rel=1e-9)


@pytest.mark.parametrize(("system", "number"), EVERYWHERE)
def test_the_sink_takes_up_the_heat(predicted: Predicted, system: str, number: int) -> None:
    """Flow times density times specific heat times temperature change of the sink, by textbook values: water 995 kg/m³
    and 4179 J/(kg K), within 1 % from 10 to 65 °C; dry air, whose flow is known only with the fan at full speed."""
    found = predicted(system, number)
    v = values(found)
    change = v["heat_sink_outlet_temperature"] - v["heat_sink_inlet_temperature"]
    if system in ("floor-heating", "shower-water"):
        assert v["heating_capacity"] == pytest.approx(v["heat_sink_flow"] * 995.0 * 4179.0 * change, rel=0.01)
    elif "head pressure held" not in found.regime:
        density = 97656.0 / (R_AIR * v["heat_sink_inlet_temperature"])
        assert v["heating_capacity"] == pytest.approx(v["heat_sink_flow"] * density * CP_AIR * change, rel=0.03)


@pytest.mark.parametrize(("system", "number"), EVERYWHERE)
def test_no_machine_beats_carnot(predicted: Predicted, system: str, number: int) -> None:
    """COP of the compressor alone stays below Carnot between the entropic mean temperatures of the media, and no real
    machine of this size comes above 65 % of it where the lift is more than 20 K (common practice, no source)."""
    v = values(predicted(system, number))
    source = _mean(v["heat_source_inlet_temperature"], v["heat_source_outlet_temperature"])
    sink = _mean(v["heat_sink_inlet_temperature"], v["heat_sink_outlet_temperature"])
    if sink <= source:
        pytest.skip("the sink is colder than the source here: Carnot sets no bound")
    carnot = source / (sink - source)
    cop = v["cooling_capacity"] / v["compressor_power"]
    assert cop < carnot
    if sink - source > 20.0:
        assert cop < 0.65 * carnot


@pytest.mark.parametrize(("system", "number"), EVERYWHERE)
def test_entropy_rises_and_heat_flows_downhill(predicted: Predicted, system: str, number: int) -> None:
    """Entropy rises in compressor and valve, the valve keeps enthalpy, and refrigerant is colder than what it cools and
    warmer than what it heats."""
    found = predicted(system, number)
    v, states = values(found), {s.label: s for s in found.states}
    assert states["3"].s > states["2"].s
    assert states["7"].s > states["6"].s
    assert states["7"].h == pytest.approx(states["6"].h, abs=1.0)
    assert v["heat_source_inlet_temperature"] > states["1"].T
    assert v["heat_source_outlet_temperature"] > v["evaporating_temperature"]
    assert v["heat_sink_inlet_temperature"] < states["6"].T
    assert v["discharge_temperature"] > v["heat_sink_outlet_temperature"]


def test_every_system_is_calculated_without_a_warning_at_its_design(predicted: Predicted) -> None:
    """Nothing is left out at the design condition but what a gas cooler has not; only frost of a coil is mentioned."""
    for system in dict.fromkeys(name for name, _ in EVERYWHERE):
        found = predicted(system, 0)
        assert all("critical point" in reason for reason in found.not_calculated.values()), system
        assert all("frost" in text for text in found.warnings), system
