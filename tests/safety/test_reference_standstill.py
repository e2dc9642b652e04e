"""Standstill of carbon dioxide without liquid, against its equation of state and published tables."""

from __future__ import annotations

import pytest
from CoolProp.CoolProp import PropsSI

from commission.errors import NotCalculatedError
from commission.properties import refrigerant
from commission.safety.standstill import gas_pressure


@pytest.mark.parametrize("temperature", [304.2, 305.15, 308.15, 318.15, 333.15])
@pytest.mark.parametrize("density", [5.0, 100.0, 300.0, 467.6, 662.0, 800.0])
def test_pressure_of_a_density_against_the_equation_of_state(temperature: float, density: float) -> None:
    """Span and Wagner 1996 as CoolProp has it, asked by temperature and density; the other way round by halving."""
    expected = PropsSI("P", "T", temperature, "Dmass", density, "CarbonDioxide")
    assert gas_pressure(refrigerant("R-744"), temperature, density) == pytest.approx(expected, rel=1e-6)


@pytest.mark.parametrize(
    ("celsius", "megapascal", "density"), [(35.0, 8.0, 419.1), (40.0, 8.0, 277.9), (40.0, 10.0, 628.6)]
)
def test_pressure_of_a_density_against_tables(celsius: float, megapascal: float, density: float) -> None:
    """Densities of carbon dioxide in NIST Chemistry WebBook (from memory, 0.2 %)."""
    found = gas_pressure(refrigerant("R-744"), celsius + 273.15, density)
    assert found == pytest.approx(megapascal * 1e6, rel=2e-3)


def test_just_above_the_critical_point_the_two_ways_meet() -> None:
    """At the critical density the pressure leaves saturation without a step: 73.77 bar at 30.98 °C (NIST)."""
    fluid = refrigerant("R-744")
    assert gas_pressure(fluid, fluid.T_critical + 0.01, 467.6) == pytest.approx(fluid.p_critical, rel=1e-3)


@pytest.mark.parametrize(("name", "temperature", "density"), [("R-744", 303.15, 300.0), ("R-454B", 400.0, 300.0)])
def test_what_can_hold_liquid_is_refused(name: str, temperature: float, density: float) -> None:
    """Below the critical temperature, and for a blend, density alone does not give one phase."""
    with pytest.raises(NotCalculatedError, match="can hold liquid"):
        gas_pressure(refrigerant(name), temperature, density)


def test_a_density_beyond_the_equation_is_refused() -> None:
    """Nothing is carried on past the end of the equation of state."""
    with pytest.raises(NotCalculatedError, match="beyond its equation"):
        gas_pressure(refrigerant("R-744"), 308.15, 2000.0)
