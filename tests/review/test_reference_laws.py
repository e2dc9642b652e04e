"""The laws that the review holds a plant to, against textbooks and handbooks; the source stands beside each."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from commission.review.facts import SystemFacts
from commission.review.rules import exchangers, placement
from commission.review.stated import carnot, entropic_mean

Facts = Callable[..., SystemFacts]
CELSIUS = 273.15


def test_carnot_refrigerator_of_a_textbook() -> None:
    """Moran & Shapiro, Fundamentals of Engineering Thermodynamics, example 10.1: 0 °C and 26 °C give 10.5."""
    assert carnot("cooling_cop", CELSIUS, 26 + CELSIUS, "textbook").value == pytest.approx(10.5, abs=0.05)


def test_reversed_carnot_heat_pump_of_a_textbook() -> None:
    """Cengel & Boles, reversed Carnot heat pump: a house at 21 °C from -5 °C outside gives 11.3 (from memory)."""
    assert carnot("heating_cop", -5 + CELSIUS, 21 + CELSIUS, "textbook").value == pytest.approx(11.3, abs=0.05)


def test_heating_is_cooling_plus_one_between_the_same_temperatures() -> None:
    """First law on a circuit that loses nothing: heating COP = cooling COP + 1, for Carnot machines too."""
    cooling, heating = (carnot(q, 270.0, 310.0, "").value for q in ("cooling_cop", "heating_cop"))
    assert heating == pytest.approx(cooling + 1)


def test_a_lorenz_cycle_of_water_heating() -> None:
    """Water from 10 to 60 °C has the entropic mean 307.5 K (definition of the Lorenz cycle, dh/ds of a stream)."""
    assert entropic_mean(283.15, 333.15) == pytest.approx(307.5, abs=0.05)


def test_cooling_coil_of_the_handbook(facts: Facts) -> None:
    """ASHRAE Handbook Fundamentals, chapter 1: 5 m3/s from 30 °C, 50 % to saturated 10 °C give 197 to 198.2 kW.

    The published answer deducts the condensate at 10 °C, as the rule does. Another library gives 197.7 and 198.2 kW.
    """
    system = {
        "heat_source": {"flow": "18000 m3/h", "relative_humidity": "50 %"},
        "evaporator": {"rating": {"air_on": "30 °C", "temperature_difference": "20 K", "capacity": "250 kW"}},
    }
    (remark,) = exchangers.cooler_beyond_its_air(facts(system))
    most = next(f.value for f in remark.figures if f.label == "most that the air can carry")
    assert most == pytest.approx(197.7e3, rel=0.006)


def test_a_refrigerator_in_a_closed_room_warms_it(facts: Facts) -> None:
    """A closed room with its own refrigerator is warmed by the power drawn (common practice; first law on the room)."""
    (remark,) = placement.rejects_into_its_own_space(facts({"heat_sink": {"space": "store"}}))
    assert remark.severity == "error"
    assert "warmed by the power the machine draws" in remark.title
