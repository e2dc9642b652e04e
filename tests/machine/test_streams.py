"""Media: entropic means, Carnot, inlet and outlet."""

from __future__ import annotations

import math

import pytest

from commission.errors import NotCalculatedError
from commission.machine import Exchanger, air_stream, carnot_cooling, entropic_mean, liquid_stream
from commission.properties import liquid


def test_entropic_mean_lies_between_and_has_its_limit() -> None:
    """(T1 - T2)/ln(T1/T2) lies between geometric and arithmetic mean, and is the temperature itself without change."""
    mean = entropic_mean(280.0, 330.0)
    assert math.sqrt(280 * 330) < mean < 305.0
    assert entropic_mean(300.0, 300.0) == 300.0
    assert entropic_mean(300.0, 300.0001) == pytest.approx(300.00005, abs=1e-7)


def test_carnot_needs_a_warmer_sink() -> None:
    """A source warmer than the sink has no Carnot bound: refused with the reason."""
    with pytest.raises(NotCalculatedError, match="warmer"):
        carnot_cooling(300.0, 290.0)


def test_inlet_or_outlet_known_is_the_same_exchanger() -> None:
    """The heat is the same whether the inlet or the outlet it causes is given (water data at either end)."""
    water = liquid("water", 0.0)
    inlet = liquid_stream(303.15, 4e-4, water)
    exchanger = Exchanger(2500.0, 4e-4)
    heat = exchanger.heat_per_kelvin(inlet) * (311.15 - inlet.temperature)
    outlet = liquid_stream(inlet.outlet(heat), 4e-4, water, by_outlet=True)
    assert exchanger.heat_per_kelvin(outlet) * (311.15 - outlet.temperature) == pytest.approx(heat, rel=4e-3)
    assert outlet.inlet(heat) == pytest.approx(303.15, abs=0.02)


def test_flow_must_be_positive() -> None:
    """No flow is no condition: refused, not divided by."""
    with pytest.raises(NotCalculatedError, match="positive"):
        air_stream(293.15, 0.0, 0.5, 101325.0)
