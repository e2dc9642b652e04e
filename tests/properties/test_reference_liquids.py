"""Heat carriers and the standard atmosphere against published tables."""

from __future__ import annotations

import math
from itertools import pairwise

import pytest

from commission.errors import InputError
from commission.properties import PropertyRangeError, barometric_pressure, liquid


@pytest.mark.parametrize(
    ("celsius", "density", "cp"),
    [(4, 1000.0, 4205), (20, 998.2, 4184), (40, 992.2, 4179), (60, 983.2, 4185), (80, 971.8, 4197)],
)
def test_water_agrees_with_steam_tables(celsius: float, density: float, cp: float) -> None:
    """IAPWS tables at atmospheric pressure, from memory; the circuit's 3 bar adds 0.1 kg/m3."""
    water = liquid("water")
    assert water.density(celsius + 273.15) == pytest.approx(density, abs=0.25)
    assert water.specific_heat(celsius + 273.15) == pytest.approx(cp, abs=4)


@pytest.mark.parametrize(
    ("medium", "fraction", "celsius"),
    [
        ("ethylene glycol", 0.1, -3.2),
        ("ethylene glycol", 0.2, -7.8),
        ("ethylene glycol", 0.3, -14.1),
        ("ethylene glycol", 0.4, -22.3),
        ("ethylene glycol", 0.5, -33.8),
        ("propylene glycol", 0.1, -3.3),
        ("propylene glycol", 0.2, -7.1),
        ("propylene glycol", 0.3, -12.7),
        ("propylene glycol", 0.4, -21.1),
        ("propylene glycol", 0.5, -33.5),
    ],
)
def test_freezing_points_agree_with_the_handbook(medium: str, fraction: float, celsius: float) -> None:
    """ASHRAE Handbook Fundamentals, chapter on secondary coolants, by mass, from memory; measurements scatter, 2.3 K
    apart at 50 % ethylene glycol, so a brine is not to be run within 3 K of it."""
    tolerance = 1.0 if fraction < 0.4 else 2.3
    assert liquid(medium, fraction).freezing_temperature - 273.15 == pytest.approx(celsius, abs=tolerance)


def test_more_glycol_carries_less_heat_per_kg_and_freezes_later() -> None:
    """Trends: with the mass fraction density rises, specific heat and freezing point fall, viscosity rises."""
    for medium in ("propylene glycol", "ethylene glycol"):
        steps = [liquid(medium, f / 10) for f in range(7)]
        assert all(a.density(293.15) < b.density(293.15) for a, b in pairwise(steps))
        assert all(a.specific_heat(293.15) > b.specific_heat(293.15) for a, b in pairwise(steps))
        assert all(a.freezing_temperature > b.freezing_temperature for a, b in pairwise(steps))
        assert all(a.viscosity(293.15) < b.viscosity(293.15) for a, b in pairwise(steps))
        assert all(a.conductivity(293.15) > b.conductivity(293.15) for a, b in pairwise(steps))


def test_a_liquid_is_refused_outside_its_range_with_the_limits() -> None:
    """Below freezing, too hot, and a mass fraction that cannot be."""
    brine = liquid("propylene glycol", 0.3)
    with pytest.raises(PropertyRangeError) as caught:
        brine.density(255.0)
    assert "-18.1 °C is outside -12.8 °C (freezing) to 100.0 °C" in str(caught.value)
    assert caught.value.substance == "propylene glycol 30 % by mass"
    with pytest.raises(PropertyRangeError, match=r"0\.0 °C \(freezing\)"):
        liquid("water").specific_heat(272.0)
    with pytest.raises(PropertyRangeError, match="nan"):
        liquid("water").density(math.nan)
    with pytest.raises(PropertyRangeError, match=r"70\.0 % is outside 0 % to 60 %"):
        liquid("ethylene glycol", 0.7)
    with pytest.raises(PropertyRangeError, match=r"10\.0 % is outside 0 % to 0 %"):
        liquid("water", 0.1)


def test_an_unknown_liquid_names_the_nearest() -> None:
    """A slip of the pen is answered with the word meant."""
    with pytest.raises(InputError) as caught:
        liquid("propylen glycol", 0.3)
    (problem,) = caught.value.problems
    assert (problem.value, problem.nearest) == ("propylen glycol", "propylene glycol")


@pytest.mark.parametrize(
    ("metres", "kpa"),
    [(-500, 107.478), (0, 101.325), (500, 95.461), (1000, 89.875), (1500, 84.556), (2000, 79.495), (3000, 70.108)],
)
def test_standard_atmosphere(metres: float, kpa: float) -> None:
    """ASHRAE Handbook Fundamentals 2017, chapter 1, table 1 (ISO 2533), from memory."""
    assert barometric_pressure(metres) == pytest.approx(kpa * 1e3, abs=1.5)


def test_no_atmosphere_outside_the_layer() -> None:
    """Nothing is extrapolated above 11 km or for a height that is not a number."""
    for height in (11001.0, -2001.0, math.nan):
        with pytest.raises(PropertyRangeError, match="outside -2000 m to 11000 m"):
            barometric_pressure(height)
