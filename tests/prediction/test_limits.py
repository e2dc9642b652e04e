"""What is stated of envelope and limit devices, beside what is expected."""

from __future__ import annotations

from dataclasses import replace

import pytest

from commission.description import LoadedPlant
from commission.prediction import SystemModel, fit
from commission.prediction.limits import inside

KELVIN = 273.15
OUTDOOR = "heat_source_inlet_temperature"
SQUARE = ((0.0, 0.0), (10.0, 0.0), (10.0, 10.0), (0.0, 10.0))
SLANTED = ((-30.0, 20.0), (5.0, 20.0), (10.0, 50.0), (-30.0, 50.0))


@pytest.fixture(scope="module")
def heating(example: LoadedPlant) -> SystemModel:
    """The floor heating of the example, whose envelope ends at 22 °C evaporating."""
    return fit(example, "floor-heating")


@pytest.mark.parametrize(
    ("corners", "x", "y", "within"),
    [
        (SQUARE, 5, 5, True),
        (SQUARE, 10, 10, True),
        (SQUARE, 10.04, 5, True),
        (SQUARE, 10.1, 5, False),
        (SQUARE, 5, -1, False),
        (SLANTED, 8, 40, True),
        (SLANTED, 8.5, 40, False),
    ],
)
def test_inside(corners: tuple[tuple[float, float], ...], x: float, y: float, within: bool) -> None:
    """Corners and edges count as inside; the slanted edge from (5, 20) to (10, 50) passes (8.33, 40)."""
    assert inside(corners, x, y) is within


def test_beyond_the_envelope(heating: SystemModel) -> None:
    """In outdoor air of 38 °C it would evaporate above 22 °C, where the envelope ends; the figures say so."""
    found = heating.predict({OUTDOOR: KELVIN + 38})
    assert found.expected["evaporating_temperature"].value > KELVIN + 22.1
    (said,) = [w for w in found.warnings if "envelope" in w]
    assert "from −30.0 °C to 22.0 °C evaporating" in said
    assert f"{found.expected['condensing_temperature'].value - KELVIN:.1f} °C condensing" in said


def test_within_all_limits(heating: SystemModel) -> None:
    """At the rated condition nothing stops the machine and nothing lies outside."""
    said = " ".join(heating.predict().warnings)
    assert not any(word in said for word in ("envelope", "stops the machine", "do not ask for heat"))


def test_above_the_heating_limit(heating: SystemModel) -> None:
    """Above 15 °C outdoors the weather curve of the example asks for no heat."""
    for outdoor, said in ((15.0, False), (15.5, True)):
        warnings = heating.predict({OUTDOOR: KELVIN + outdoor}).warnings
        assert any("do not ask for heat" in w for w in warnings) is said


def test_limit_devices(example: LoadedPlant) -> None:
    """In a room of −38 °C the freezer's low-pressure control (0.1 bar g) and its discharge thermostat (120 °C) stop it;
    each is named with both figures."""
    found = fit(example, "freezer-room").predict({OUTDOOR: KELVIN - 38})
    hot = found.expected["discharge_temperature"].value - KELVIN
    assert found.expected["suction_pressure"].value < example.barometric_pressure + 0.1e5
    assert hot > 120
    said = [w for w in found.warnings if "stops the machine" in w]
    assert said[0].startswith("the discharge thermostat, set to 120.0 °C")
    assert said[0].endswith(f"{hot:.1f} °C")
    assert said[1].startswith("the low-pressure control, set to 0.10 bar g")


def test_below_the_flow_switch(heating: SystemModel) -> None:
    """The floor heating's flow switch stops it below 0.95 m3/h of water: at 0.8 m3/h that is said, above it is not."""
    for flow, said in ((0.8, True), (0.949, True), (0.95, False), (1.5, False)):
        warnings = heating.predict({OUTDOOR: KELVIN + 2, "heat_sink_flow": flow / 3600.0}).warnings
        found = [w for w in warnings if "flow switch, set to 0.95" in w and "stops the machine" in w]
        assert bool(found) is said, flow


def test_an_expected_flow_below_the_flow_switch(example: LoadedPlant) -> None:
    """A water heater in one pass sets its own flow: where too little heat leaves less than the switch asks for, so it
    is said of the flow that is expected."""
    system = example.system("shower-water")
    fitted = fit(example, "shower-water")
    flow = fitted.predict().expected["heat_sink_flow"].value
    for factor, said in ((0.9, False), (1.1, True)):
        sink = system.heat_sink.model_copy(update={"least_flow": factor * flow})
        facts = replace(fitted.facts, system=system.model_copy(update={"heat_sink": sink}))
        warnings = replace(fitted, facts=facts).predict().warnings
        assert any("flow switch" in w for w in warnings) is said
