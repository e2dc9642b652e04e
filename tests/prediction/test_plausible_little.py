"""Descriptions as people write them: few points, water that rises much, a speed that is not told."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from commission.description import LoadedPlant, load_plant
from commission.errors import NotCalculatedError
from commission.prediction import fit
from commission.prediction.guard import in_words

Written = Callable[[str], LoadedPlant]
HEAT_PUMP = """
duty: space_heating
refrigerant: {fluid}
heat_source: {{medium: air}}
heat_sink: {{medium: water}}
rated_points:
"""
POINT = """  - {{heat_source_inlet_temperature: {} °C, heat_sink_inlet_temperature: {} °C,
     heat_sink_outlet_temperature: {} °C, heating_capacity: {} kW, power_input: {} kW}}
"""
MILD, COLD, HOT = (7, 30, 35, 8, 1.7), (-7, 30, 35, 6.2, 2.1), (7, 47, 55, 7.4, 2.6)


def _text(*points: tuple[float, ...], fluid: str = "R-32") -> str:
    return HEAT_PUMP.format(fluid=fluid) + "".join(POINT.format(*point) for point in points)


def test_two_points_alone_are_enough(written: Written) -> None:
    """As many stated figures as sizes of the machine: answered, with the doubt of what was assumed."""
    model = fit(written(_text(MILD, COLD)), "it")
    assert model.fit.scatter > 0
    heat = model.predict().expected["heating_capacity"]
    assert abs(heat.value - 8000) < 2 * (heat.uncertainty or 0.0)


def test_points_of_a_controlled_speed_are_suspected(written: Written) -> None:
    """More power at -7 than at 7 °C is no fixed speed: the scatter is wide, and a sentence asks for the speed."""
    model = fit(written(_text(MILD, COLD, HOT)), "it")
    assert 0.05 < model.fit.scatter < 0.2
    assert any("compressor_speed" in w for w in model.predict().warnings)
    assert not any("compressor_speed" in w for w in fit(written(_text(MILD)), "it").predict().warnings)


@pytest.mark.parametrize(("inlet", "outlet", "power"), [(47, 55, 2.6), (27, 35, 1.7), (45, 57, 2.8), (25, 40, 2.0)])
def test_water_that_rises_much_is_condensed_above_its_outlet(
    written: Written, inlet: float, outlet: float, power: float
) -> None:
    """Where the flow gives a rise of 8 to 15 K the condensing temperature lies above the outlet, never below."""
    found = fit(written(_text((7, inlet, outlet, 8, power), fluid="R-290")), "it").predict().expected
    assert 1 <= found["condensing_temperature"].value - (outlet + 273.15) <= 6
    assert found["heating_capacity"].value == pytest.approx(8000, rel=1e-4)


def test_the_displacement_belongs_to_the_nominal_speed(written: Written) -> None:
    """At 1.4 times the nominal speed a machine sweeps 1.4 times its displacement: the efficiency stays below 1."""
    drive = "compressor: {type: rotary, drive: variable speed, displacement: 4.2 m3/h, nominal_speed: 3000 rpm}\n"
    text = drive + _text((7, 30, 35, 7.2, 1.5)).strip("\n").replace(
        "{heat_source", "{compressor_speed: SPEED, heat_source"
    )
    slow, fast = (
        fit(written(text.replace("SPEED", speed)), "it").fitted["volumetric efficiency at the rated point"].value
        for speed in ("3000 rpm", "4200 rpm")
    )
    assert fast == pytest.approx(slow / 1.4, rel=1e-6)


def test_a_doubtful_property_source_is_said_once(written: Written) -> None:
    """What a reader must know of the refrigerant's property source stands with each prediction, once."""
    found = fit(written(_text(MILD, fluid="R-466A")), "it").predict()
    assert sum("critical temperature" in w for w in found.warnings) == 1


def test_the_plant_may_correct_the_register(tmp_path: Path) -> None:
    """A boiling point that the plant states in the register's place widens the doubt about pressures."""
    text = "plant:\n  name: test\nsystems:\n  it:\n" + "".join(f"    {x}\n" for x in _text(MILD).splitlines())
    own = "refrigerants: {R-32: {boiling_dew: {value: -50.2 °C, source: a later edition}}}\n"
    relative = []
    for whole in (text, own + text):
        (tmp_path / "plant.yaml").write_text(whole, encoding="utf-8")
        expected = fit(load_plant(tmp_path), "it").predict().expected["suction_pressure"]
        relative.append(expected.uncertainty or 0.0)
    assert relative[1] > 1.1 * relative[0]


@pytest.mark.parametrize("failure", [ZeroDivisionError, OverflowError, ValueError("math domain error")])
def test_failing_arithmetic_becomes_a_sentence(failure: Exception | type[Exception]) -> None:
    """Division by zero, overflow and the like never reach a person as such; the cause stays for whoever looks."""

    @in_words
    def calculate() -> float:
        raise failure

    with pytest.raises(NotCalculatedError, match="slipped unit") as caught:
        calculate()
    assert isinstance(caught.value.__cause__, ArithmeticError | ValueError)


def test_a_limit_of_the_suction_pressure_is_not_held_exactly(written: Written) -> None:
    """A valve's limit is held to about 1 K: where it acts, the evaporating temperature is unsure by that range."""
    text = """
duty: cold_storage
refrigerant: R-290
heat_source: {medium: air}
heat_sink: {medium: air}
expansion: {device: thermostatic valve, superheat: 6 K, maximum_operating_pressure: 3.4 bar g}
rated_points:
  - {heat_source_inlet_temperature: 2 °C, heat_sink_inlet_temperature: 30 °C, cooling_capacity: 3 kW,
     power_input: 1.2 kW}
"""
    model = fit(written(text), "it")
    warm = model.predict({"heat_source_inlet_temperature": 288.15})
    assert warm.regime.startswith("suction pressure limited")
    assert warm.expected["evaporating_temperature"].uncertainty == pytest.approx(2 / 12**0.5, rel=0.02)
