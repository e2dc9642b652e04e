"""What moist air refuses, and its limits."""

from __future__ import annotations

import math

import pytest

from commission.properties import PropertyRangeError, moist_air, moist_air_from_enthalpy, saturated_air_at_enthalpy
from commission.properties.psychrometrics import dew_point

P = 101325.0


def test_dry_air_has_no_dew_point_and_the_lowest_wet_bulb() -> None:
    """Dry air: dew point 0 K, wet bulb far below, specific heat that of air."""
    air = moist_air(303.15, P, relative_humidity=0.0)
    assert (air.W, air.dew_point, air.cp) == (0.0, 0.0, 1006.0)
    assert 280 < air.wet_bulb < 285


def test_saturated_air_has_one_temperature() -> None:
    """At saturation dry bulb, wet bulb and dew point are one."""
    air = moist_air(290.0, P, relative_humidity=1.0)
    assert air.wet_bulb == pytest.approx(290.0, abs=1e-6)
    assert air.dew_point == pytest.approx(290.0, abs=1e-8)


@pytest.mark.parametrize(
    ("given", "words"),
    [
        ({"relative_humidity": 1.2}, "120.0 %"),
        ({"relative_humidity": -0.1}, "-10.0 %"),
        ({"relative_humidity": math.nan}, "nan"),
        ({"wet_bulb": 305.0}, "above the dry bulb of 26.9 °C"),
        ({"wet_bulb": 270.0}, "lower than that of dry air"),
        ({"humidity_ratio": 0.05}, "50.00 g/kg at 26.9 °C is above saturation"),
        ({"humidity_ratio": -0.001}, "cannot be"),
    ],
)
def test_impossible_air_is_refused_with_the_value(given: dict[str, float], words: str) -> None:
    """The message shows the value that cannot be."""
    with pytest.raises(PropertyRangeError) as caught:
        moist_air(300.0, P, **given)
    assert words in str(caught.value)
    assert caught.value.substance == "moist air"


def test_temperatures_outside_the_formulas_are_refused() -> None:
    """-100 °C and 200 °C are the ends, boiling another."""
    for T in (170.0, 480.0, math.nan):
        with pytest.raises(PropertyRangeError, match=r"outside -100\.0 °C to 200\.0 °C"):
            moist_air(T, P, relative_humidity=0.5)
    with pytest.raises(PropertyRangeError, match="water would boil"):
        moist_air(380.0, P, relative_humidity=1.0)
    with pytest.raises(PropertyRangeError, match="no dew point"):
        dew_point(-1.0)
    with pytest.raises(PropertyRangeError, match="no saturated air"):
        saturated_air_at_enthalpy(-5e5, P)
    with pytest.raises(PropertyRangeError, match="above saturation"):
        moist_air_from_enthalpy(20e3, 0.02, P)


def test_exactly_one_measure_of_water_is_wanted() -> None:
    """None or two of them is a mistake of the caller."""
    with pytest.raises(TypeError, match="exactly one"):
        moist_air(300.0, P)
    with pytest.raises(TypeError, match="exactly one"):
        moist_air(300.0, P, relative_humidity=0.5, wet_bulb=290.0)


def test_height_raises_the_humidity_ratio() -> None:
    """At the same temperature and relative humidity thinner air carries more water per kg."""
    low, high = (moist_air(298.15, p, relative_humidity=0.5) for p in (101325.0, 80000.0))
    assert high.W > 1.25 * low.W
