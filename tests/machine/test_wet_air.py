"""Wet, dry and frosted air coils."""

from __future__ import annotations

import pytest

from commission.errors import NotCalculatedError
from commission.machine import Exchanger, air_stream, coil_conductance, leaving_air
from commission.machine.wet_air import FUSION, LATENT, coil_heat


def test_dry_coil_is_an_ordinary_exchanger() -> None:
    """Limit: with dry air the coil gives what effectiveness and NTU give, and all heat is sensible."""
    air = air_stream(303.15, 0.5, 0.05, 101325.0)
    heat = coil_heat(air, 293.15, 800.0, 0.75)
    assert heat == pytest.approx(Exchanger(800.0, 0.5).heat_per_kelvin(air) * 10.0)
    left = leaving_air(air, heat, 293.15, 800.0, 0.75)
    assert left.sensible_share == 1.0
    assert left.condensate == 0.0
    assert left.temperature == pytest.approx(303.15 - heat / air.capacity_rate)


def test_great_coil_brings_air_to_saturation_at_the_refrigerant() -> None:
    """Cooling-coil example of ASHRAE Fundamentals ch. 1: 30 °C, 50 %, 5 m3/s to saturated 10 °C: 197 to 198 kW with the
    condensate leaving as water at 10 °C (its enthalpy, 1.4 kW, counted apart)."""
    air = air_stream(303.15, 5.0, 0.50, 101325.0)
    heat = coil_heat(air, 283.15, 1e7, 0.75)
    left = leaving_air(air, heat, 283.15, 1e7, 0.75)
    assert left.temperature == pytest.approx(283.15, abs=0.05)
    assert left.humidity_ratio == pytest.approx(7.66e-3, rel=0.01)
    water = left.condensate * 4190 * 10
    assert heat - water == pytest.approx(197.6e3, rel=0.01)


def test_wet_coil_takes_more_than_a_dry_one() -> None:
    """Humidity below the dew point adds latent heat; the more humid, the more."""
    heats = [coil_heat(air_stream(300.15, 0.3, rh, 101325.0), 283.15, 500.0, 0.75) for rh in (0.2, 0.5, 0.7, 0.9)]
    assert heats[0] < heats[1] < heats[2] < heats[3]
    assert heats[0] == pytest.approx(coil_heat(air_stream(300.15, 0.3, 0.1, 101325.0), 283.15, 500.0, 0.75), rel=0.01)


@pytest.mark.parametrize(("air_on", "humidity", "refrigerant"), [(300.15, 0.5, 283.15), (275.15, 0.85, 267.15)])
def test_leaving_air_keeps_the_first_law(air_on: float, humidity: float, refrigerant: float) -> None:
    """Sensible heat of air and latent heat of condensate or frost add to the heat taken (1 %: vapour cooling)."""
    air = air_stream(air_on, 0.58, humidity, 97653.0)
    heat = coil_heat(air, refrigerant, 700.0, 0.75)
    left = leaving_air(air, heat, refrigerant, 700.0, 0.75)
    latent = LATENT + (FUSION if refrigerant < 271.15 else 0.0)
    sensible = air.capacity_rate * (air_on - left.temperature)
    assert sensible + left.condensate * latent == pytest.approx(heat, rel=0.01)
    assert 0.5 < left.sensible_share < 0.95
    assert refrigerant < left.temperature < air_on


def test_conductance_is_the_inverse() -> None:
    """Inverse route: the conductance found for a heat gives that heat, wet and dry."""
    for humidity in (0.2, 0.85):
        air = air_stream(275.15, 0.58, humidity, 97653.0)
        conductance = coil_conductance(3000.0, 267.15, air, 0.75)
        assert coil_heat(air, 267.15, conductance, 0.75) == pytest.approx(3000.0, rel=1e-9)


def test_more_than_the_air_can_give_is_refused() -> None:
    """A coil cannot take more heat than its air has, however great it is."""
    with pytest.raises(NotCalculatedError, match="at most"):
        coil_conductance(50_000.0, 267.15, air_stream(275.15, 0.58, 0.85, 97653.0), 0.75)


def test_nothing_jumps_where_frost_sets_in() -> None:
    """Heat is continuous in refrigerant temperature through 0 °C and through the dew point."""
    air = air_stream(280.15, 0.5, 0.7, 101325.0)
    last = coil_heat(air, 262.15, 600.0, 0.75)
    for step in range(1, 1800):
        heat = coil_heat(air, 262.15 + 0.01 * step, 600.0, 0.75)
        assert 0 < last - heat < 25.0
        last = heat
