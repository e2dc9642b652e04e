"""At small loads held superheat and assumed subcooling have no room: the prediction says so instead of hiding it."""

from __future__ import annotations

from commission.description import LoadedPlant
from commission.prediction import fit

KELVIN = 273.15


def test_gas_warmer_than_the_air_that_heats_it_is_said(example: LoadedPlant) -> None:
    """Second law: at 1500 rpm the coil runs closer to the air than the superheat of the valve."""
    model = fit(example, "floor-heating")
    slow = model.predict({
        "heat_source_inlet_temperature": 12.0 + KELVIN, "compressor_speed": 25.0,
        "heat_sink_outlet_temperature": 28.0 + KELVIN,
    })  # fmt: skip
    gas = slow.expected["evaporating_temperature"].value + slow.expected["superheat"].value
    assert gas > 12.0 + KELVIN
    assert any("warmer than the 12.0 °C that heat it" in w for w in slow.warnings)
    liquid, entering = (slow.expected[k].value for k in ("liquid_temperature", "heat_sink_inlet_temperature"))
    assert (liquid < entering) == any("colder than the" in w for w in slow.warnings)


def test_at_its_rated_point_nothing_is_said(example: LoadedPlant) -> None:
    """At the rated load there is room for both."""
    for system in ("cold-room", "floor-heating", "dining-hall"):
        assert not any("at this small load" in w for w in fit(example, system).predict().warnings)
