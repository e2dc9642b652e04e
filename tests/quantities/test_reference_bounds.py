"""Where the band of an expected value ends: at what the second law lets be (Clausius: no heat from cold to warm)."""

from __future__ import annotations

import pytest

from commission.quantities import NOMENCLATURE, Bounds, Explained, bounds
from commission.quantities.bounds import NOT_ABOVE, NOT_BELOW, NOT_NEGATIVE, SHARES

AT = {"heat_sink_inlet_temperature": 283.15, "heat_source_inlet_temperature": 275.15}


@pytest.mark.parametrize(
    ("key", "expected"),
    [
        ("superheat", (0.0, None)),
        ("gas_cooler_approach", (0.0, None)),
        ("gas_cooler_outlet_temperature", (283.15, None)),
        ("liquid_temperature", (283.15, None)),
        ("evaporating_temperature", (None, 275.15)),
        ("heat_source_outlet_temperature", (None, 275.15)),
        ("sensible_heat_ratio", (0.0, 1.0)),
        ("pressure_ratio", (1.0, None)),
        ("discharge_temperature", (None, None)),
    ],
)
def test_bounds_follow_from_the_media(key: str, expected: tuple[float | None, float | None]) -> None:
    """What leaves a cooler is no colder than what cools it; nothing evaporates warmer than what gives the heat."""
    assert bounds(key, AT) == expected


def test_a_bound_that_is_not_known_is_none() -> None:
    """Without the temperature of the medium that enters there is nothing to end a band at."""
    assert bounds("liquid_temperature", {}) == Bounds()


def test_every_name_is_one_of_the_nomenclature() -> None:
    """A misspelt key would silently bound nothing."""
    assert {*NOT_NEGATIVE, *NOT_BELOW, *NOT_BELOW.values(), *NOT_ABOVE, *NOT_ABOVE.values(), *SHARES} <= set(
        NOMENCLATURE
    )


def test_a_band_ends_at_its_bounds_and_nowhere_else() -> None:
    """11.5 degC +- 2.4 K over water of 10.0 degC is 10.0 to 13.9; without a stated uncertainty there is no band."""
    key = "gas_cooler_outlet_temperature"
    gas = Explained(key, 284.65, 1.2, "stated", bounds=bounds(key, AT))
    assert gas.band(2.0) == pytest.approx((283.15, 287.05))
    assert gas.band(1.0) == pytest.approx((283.45, 285.85))
    assert Explained(key, 284.65, None, "stated").band(2.0) is None


def test_a_value_beyond_its_bound_does_not_hide_it() -> None:
    """Where the value itself cannot be, its band is shown whole."""
    assert bounds("superheat", {}).around(-1.0, 0.5) == (-1.5, -0.5)
