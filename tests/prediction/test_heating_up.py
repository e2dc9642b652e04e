"""Heat-up of a store from the predicted capacity: first law, element, lock-out, reasons."""

from __future__ import annotations

from collections.abc import Callable
from itertools import pairwise

import pytest

from commission.description import LoadedPlant
from commission.errors import NotCalculatedError
from commission.prediction import fit, heat_up
from commission.prediction.element_below import Cold, heated_from_below

Written = Callable[[str], LoadedPlant]
HEATER = """
duty: water_heating
refrigerant: R-744
heat_source: {{medium: air}}
heat_sink: {{medium: water}}
compressor: {{type: rotary}}
store: {store}
{more}
rated_points:
  - {{heat_source_inlet_temperature: 7 °C, heat_sink_inlet_temperature: 10 °C, heat_sink_outlet_temperature: 60 °C,
     heating_capacity: 8 kW, power_input: 2 kW}}
"""
PROPANE = """
duty: water_heating
refrigerant: R-290
heat_source: {medium: air}
heat_sink: {medium: water}
store: {volume: 300 L, set_point: 50 °C, stratified: no}
rated_points:
  - {heat_source_inlet_temperature: 7 °C, heat_sink_inlet_temperature: 45 °C, heat_sink_outlet_temperature: 50 °C,
     heating_capacity: 6 kW, power_input: 2 kW}
"""
ELEMENT = "back_up: {power: 6 kW, where: store middle, starts_below: -5 °C, locked_out_above: 2 °C, delay: 30 min}"


def _heater(store: str = "{volume: 1000 L, set_point: 60 °C}", more: str = "") -> str:
    return HEATER.format(store=store, more=more)


def test_plug_flow_at_the_promised_point(written: Written) -> None:
    """1000 L from 10 to 60 °C at the promised 8 kW and 2 kW: 999.7 kg x 4.181 kJ/(kg K) x 50 K (IAPWS) over 8 kW,
    energy at COP 4; the volume's range (rectangular, 8 % wide) is the only doubt at a promised point."""
    found = heat_up(fit(written(_heater()), "it"), 283.15)
    heat = 999.7 * 4181 * 50
    assert found.way == "plug flow"
    assert found.time.value == pytest.approx(heat / 8000, rel=0.003)
    assert found.energy.value == pytest.approx(heat / 4, rel=0.003)
    assert found.time.uncertainty == pytest.approx(0.08 / 12**0.5 * found.time.value, rel=0.02)
    assert found.time_with_element is None
    assert found.element_reason == "there is no back-up element"


def test_layers_are_heated_from_the_bottom_and_hot_ones_left(written: Written) -> None:
    """A store already hot above needs the heat of its lower half only; warmer water takes longer by the kilojoule."""
    model = fit(written(_heater()), "it")
    whole = heat_up(model, 283.15)
    half = heat_up(model, [333.15, 283.15])
    assert half.time.value == pytest.approx(0.5 * whole.time.value, rel=1e-6)
    warm = heat_up(model, 308.15)
    assert warm.energy.value > 1.2 * 0.5 * whole.energy.value


def test_the_element_helps_where_it_may(written: Written) -> None:
    """First law with the element in the middle: heat = machine's over the whole time + 6 kW from its delay on until the
    upper half is hot; above its limit it does not start, and the reason says so."""
    model = fit(written(_heater(more=ELEMENT)), "it")
    mild = heat_up(model, 283.15)
    assert mild.time_with_element is None
    assert "7.0 °C" in str(mild.element_reason)
    cold = heat_up(model, 283.15, conditions={"heat_source_inlet_temperature": 265.15})
    assert cold.time_with_element is not None
    assert cold.energy_with_element is not None
    heat = 999.7 * 4181 * 50
    machine = heat / cold.time.value
    by_element = heat - machine * cold.time_with_element.value
    upper = (0.5 * heat + 6000 * 1800) / (machine + 6000)
    assert by_element == pytest.approx(6000 * (upper - 1800), rel=0.01)
    power = cold.energy.value / cold.time.value
    assert cold.energy_with_element.value == pytest.approx(power * cold.time_with_element.value + by_element, rel=0.005)
    assert cold.energy_with_element.value > cold.energy.value


def test_an_element_at_the_bottom_warms_what_the_machine_draws(written: Written) -> None:
    """The machine draws warmer water and gives less, so that it takes longer than with its capacity of cold water, but
    less than without the element."""
    model = fit(written(_heater(more=ELEMENT.replace("store middle", "store bottom"))), "it")
    cold = heat_up(model, 283.15, conditions={"heat_source_inlet_temperature": 265.15})
    assert cold.time_with_element is not None
    assert cold.energy_with_element is not None
    heat = 999.7 * 4181 * 50
    machine, power = heat / cold.time.value, cold.energy.value / cold.time.value
    as_if_cold = (heat + 6000 * 1800) / (machine + 6000)
    time = cold.time_with_element.value
    assert as_if_cold * 1.01 < time < cold.time.value
    assert cold.energy_with_element.value > power * time + 6000 * (time - 1800) * 0.99
    assert cold.time_with_element.method == "heat_up_with_element_below"


def test_heating_from_below_keeps_the_heat_balance() -> None:
    """With constant heat the time is heat over power, wherever the element sits; halving the steps moves it little."""
    cold = Cold(4.0e6, 283.15, 333.15)
    time, energy = heated_from_below(cold, lambda _: (6000.0, 2000.0), 200.0, 3000.0, 0.0, 4.0e6 * 50 / 5800)
    assert time == pytest.approx(4.0e6 * 50 / 8800, rel=1e-9)
    assert energy == pytest.approx(5000.0 * time, rel=1e-9)

    def worse(drawn: float) -> tuple[float, float]:
        return 6000.0 - 60.0 * (drawn - 283.15), 2000.0 + 10.0 * (drawn - 283.15)

    fine, coarse = (heated_from_below(cold, worse, 200.0, 3000.0, 0.0, longest)[0] for longest in (2.0e4, 4.0e4))
    assert fine == pytest.approx(coarse, rel=0.005)
    assert fine > time
    with pytest.raises(NotCalculatedError, match="no more heat"):
        heated_from_below(cold, lambda _: (100.0, 50.0), 200.0, 3000.0, 0.0, 1e4)


def test_losses_lengthen_it(written: Written) -> None:
    """Standing loss and the circulation loop are carried by the machine; without a stated loss the loop is refused."""
    loop = "{volume: 1000 L, set_point: 60 °C, standing_loss: 120 W, circulation: {heat_loss: 400 W}}"
    model = fit(written(_heater(loop)), "it")
    rest, running = heat_up(model, 283.15), heat_up(model, 283.15, circulating=True)
    assert running.time.value / rest.time.value == pytest.approx(1 + 400 / 7600, rel=0.01)
    with pytest.raises(NotCalculatedError, match="circulation"):
        heat_up(fit(written(_heater()), "it"), 283.15, circulating=True)


def test_a_mixed_store_is_integrated(written: Written) -> None:
    """300 L from 30 to 50 °C by a machine of fixed flow: time between that at the first and at the last capacity, and
    equal to a fine trapezoidal sum over the store's temperature within 0.2 %."""
    model = fit(written(PROPANE), "it")
    found = heat_up(model, 303.15)
    assert found.way == "mixed"
    steps = [303.15 + 20 * n / 16 for n in range(17)]
    given = [model.predict({"heat_sink_inlet_temperature": t}).expected["heating_capacity"].value for t in steps]
    heat = 0.3 * 995.6 * 4180 * 20
    mean = sum(0.5 * (1 / a + 1 / b) for a, b in pairwise(given)) / 16
    assert found.time.value == pytest.approx(heat * mean, rel=0.002)


@pytest.mark.parametrize(
    ("text", "start", "reason"),
    [
        (_heater("{volume: 1000 L}"), 283.15, "set point"),
        (_heater(), 334.15, "nothing is heated"),
        (_heater("{volume: 1000 L, set_point: 60 °C, stratified: no}"), 283.15, "stratified"),
        (PROPANE.replace("store:", "# store:"), 303.15, "no store"),
    ],
)
def test_reasons(written: Written, text: str, start: float, reason: str) -> None:
    """What cannot be calculated says why."""
    with pytest.raises(NotCalculatedError, match=reason):
        heat_up(fit(written(text), "it"), start)
