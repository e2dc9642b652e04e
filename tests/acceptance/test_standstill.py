"""The pressure of a plant at rest."""

from __future__ import annotations

import pytest

from commission.acceptance import Budget, Component, Measured
from commission.acceptance.standstill import Standstill, standstill
from commission.errors import NotCalculatedError
from commission.properties import refrigerant


def at(celsius: float, u: float = 0.1) -> Measured:
    """A temperature with its standard uncertainty in K."""
    return Measured("temperature", 273.15 + celsius, Budget((Component("probe", u),)))


def gauge(bar: float, u: float = 0.05) -> Measured:
    """An absolute pressure in bar with its standard uncertainty in bar."""
    return Measured("suction_pressure", bar * 1e5, Budget((Component("gauge", u * 1e5),)))


def rest(name: str, bar: float, *temperatures: float, u: float = 0.05) -> Standstill:
    """A plant with liquid in it, valves open."""
    places = [at(t) for t in temperatures]
    return standstill(refrigerant(name), gauge(bar, u), places, liquid_present=True, pumped_down=False)


def test_propane_at_twenty_degrees() -> None:
    """R-290 at 20 °C stands at 8.365 bar absolute (tables of Lemmon et al. 2009; from memory, half a per cent)."""
    found = rest("R-290", 8.36, 20.0, 20.2, 19.8)
    assert found.finding == "as it should be"
    assert found.low == pytest.approx(8.365e5, rel=5e-3)
    assert found.low == pytest.approx(found.high)


def test_air_raises_it_and_want_of_liquid_lowers_it() -> None:
    """Half a bar of air is seen; a pressure of half of saturation says that no liquid is left."""
    air = rest("R-290", 8.87, 20.0)
    assert air.finding == "too high"
    assert air.excess == pytest.approx(0.5e5, abs=0.03e5)
    assert "air or nitrogen" in air.text
    empty = rest("R-290", 4.2, 20.0)
    assert empty.finding == "too low"
    assert empty.excess < 0.0


def test_a_coarse_gauge_finds_nothing() -> None:
    """The same half bar, by a gauge of half a bar, is no finding."""
    assert rest("R-290", 8.87, 20.0, u=0.5).finding == "as it should be"


def test_a_blend_lies_between_bubble_and_dew() -> None:
    """Anywhere between the two is sound; half a bar outside either end is not."""
    middle = rest("R-454C", 9.0, 20.0)
    assert middle.high > middle.low + 1e5
    for share in (0.05, 0.5, 0.95):
        bar = (middle.low + share * (middle.high - middle.low)) / 1e5
        found = rest("R-454C", bar, 20.0)
        assert (found.finding, found.excess) == ("as it should be", 0.0)
    assert rest("R-454C", middle.high / 1e5 + 0.5, 20.0).finding == "too high"
    assert rest("R-454C", middle.low / 1e5 - 0.5, 20.0).finding == "too low"


def test_a_warm_day_moves_the_expectation_by_its_slope() -> None:
    """The doubt of a probe counts with the slope of the saturation line: 0.24 bar per kelvin for propane at 20 °C."""
    sharp = standstill(
        refrigerant("R-290"), gauge(8.365, 1e-4), [at(20.0, 0.5)], liquid_present=True, pumped_down=False
    )
    fluid = refrigerant("R-290")
    slope = (fluid.bubble(294.15).p - fluid.bubble(292.15).p) / 2.0
    part = next(c.value for c in sharp.budget.components if c.name == "probe")
    assert part == pytest.approx(-0.5 * slope, rel=0.01)


@pytest.mark.parametrize(
    ("name", "temperatures", "liquid", "pumped", "reason"),
    [
        ("R-744", (35.0,), True, False, "has no liquid at 35.0 °C"),
        ("R-290", (20.0, 24.0), True, False, "not at one temperature: 4.0 K"),
        ("R-290", (20.0,), False, False, "without liquid"),
        ("R-290", (20.0,), True, True, "after a pump-down"),
        ("R-290", (), True, False, "needs a reading of the temperature"),
    ],
)
def test_what_it_does_not_hold_for(
    name: str, temperatures: tuple[float, ...], liquid: bool, pumped: bool, reason: str
) -> None:
    """No liquid, carbon dioxide above 31 °C, two temperatures, a pump-down: refused with the reason."""
    places = [at(t) for t in temperatures]
    with pytest.raises(NotCalculatedError, match=reason):
        standstill(refrigerant(name), gauge(20.0), places, liquid_present=liquid, pumped_down=pumped)


def test_carbon_dioxide_on_a_cool_day() -> None:
    """Below 31 °C it is judged like any other: 57.3 bar absolute at 20 °C (Span and Wagner 1996, from memory)."""
    found = rest("R-744", 57.3, 20.0, u=0.3)
    assert found.finding == "as it should be"
    assert found.high == pytest.approx(57.3e5, rel=2e-3)
