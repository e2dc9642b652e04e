"""What the notes of a prediction tell of fans, coils, controllers, and of a Carnot COP that says nothing."""

from __future__ import annotations

import pytest

from commission.description import LoadedPlant
from commission.errors import NotCalculatedError
from commission.prediction import SystemModel, fit
from commission.prediction.expected import TOO_NEAR, _carnot

KELVIN = 273.15
SOURCE, SINK = "heat_source_inlet_temperature", "heat_sink_inlet_temperature"


def test_a_slowed_fan_is_told_with_its_flow(cold_room: SystemModel) -> None:
    """At −10 °C the fan is slowed: the stated flow is that at full speed; heat over flow and change gives what is left.

    The heat to the air is flow times heat capacity times change of temperature, by the first law.
    """
    found = cold_room.predict({SINK: KELVIN - 10})
    (said,) = [w for w in found.warnings if "full speed" in w]
    flow = found.sink_flow_share * found.conditions["heat_sink_flow"]
    assert f"about {flow * 3600:.0f} m³/h" in said
    change = found.expected["heat_sink_temperature_change"].value
    density = 82000 / (287.05 * (KELVIN - 10)), 102000 / (287.05 * (KELVIN - 10))
    heat = found.expected["heating_capacity"].value / (flow * 1006 * change)
    assert density[0] < heat < density[1]
    assert cold_room.predict().sink_flow_share == 1.0
    assert not [w for w in cold_room.predict().warnings if "full speed" in w]


def test_a_cooling_coil_without_defrost_that_ices_up(example: LoadedPlant) -> None:
    """Little air at full speed takes the coil of the air conditioner below freezing; the rated condition does not."""
    model = fit(example, "dining-hall")
    low = {SOURCE: KELVIN + 22, "heat_source_relative_humidity": 0.45, "heat_source_flow": 0.3, SINK: KELVIN + 20}
    found = model.predict({**low, "compressor_speed": 80.0})
    assert found.expected["evaporating_temperature"].value < KELVIN
    assert any("it ices up" in w for w in found.warnings)
    assert not any("it ices up" in w for w in model.predict().warnings)


def test_a_high_pressure_above_the_controller(example: LoadedPlant) -> None:
    """Water that enters at 52 °C leaves the gas too warm for the highest pressure of the controller, 118 bar g."""
    model = fit(example, "shower-water")
    found = model.predict({SOURCE: KELVIN + 32, SINK: KELVIN + 52})
    assert found.expected["discharge_pressure"].value > example.barometric_pressure + 118e5
    assert any("above the highest pressure of the controller, 118.00 bar g" in w for w in found.warnings)
    assert not any("controller" in w for w in model.predict().warnings)


def test_no_carnot_cop_between_media_that_nearly_meet() -> None:
    """Two kelvin apart there is no number but a reason; four kelvin apart there is T / dT."""
    with pytest.raises(NotCalculatedError) as refused:
        _carnot(280.0, 282.0)
    assert str(refused.value) == TOO_NEAR
    assert _carnot(280.0, 284.0) == pytest.approx(70.0)
