"""The humidity of the day against psychrometric sources outside this project."""

from __future__ import annotations

import psychrolib
import pytest

from commission.acceptance import Budget, Component, Measured
from commission.acceptance.conditions import DRY, HUMIDITY, WET, with_air


def humidity(dry: float, wet: float, pressure: float, u_dry: float = 0.0, u_wet: float = 0.0) -> Measured:
    """Relative humidity from bulbs in °C, K and Pa."""
    at = {
        DRY: Measured(DRY, 273.15 + dry, Budget((Component("dry", u_dry, cause="dry"),))),
        WET: Measured(WET, 273.15 + wet, Budget((Component("wet", u_wet, cause="wet"),))),
    }
    return with_air(at, (HUMIDITY,), pressure)[HUMIDITY]


def test_example_of_the_handbook() -> None:
    """ASHRAE Fundamentals ch. 1, first example: 40 °C with wet bulb 20 °C is 14 % (from memory; half a per cent)."""
    assert humidity(40.0, 20.0, 101325.0).value == pytest.approx(0.14, abs=0.005)


@pytest.mark.parametrize(
    ("dry", "wet"), [(7.0, 6.0), (2.0, 1.0), (-7.0, -8.0), (-15.0, -15.5), (12.0, 11.0), (27.0, 19.0)]
)
@pytest.mark.parametrize("pressure", [101325.0, 85e3])
def test_rating_conditions_and_their_doubt(dry: float, wet: float, pressure: float) -> None:
    """Air of the rating conditions of EN 14511 by PsychroLib 2.5; the slopes by its differences over 0.05 K."""
    psychrolib.SetUnitSystem(psychrolib.SI)
    other = psychrolib.GetRelHumFromTWetBulb
    found = humidity(dry, wet, pressure, 0.1, 0.2)
    assert found.value == pytest.approx(other(dry, wet, pressure), abs=1e-6)
    by_dry = (other(dry + 0.05, wet, pressure) - other(dry - 0.05, wet, pressure)) / 0.1
    by_wet = (other(dry, wet + 0.05, pressure) - other(dry, wet - 0.05, pressure)) / 0.1
    parts = {c.cause: c.value for c in found.budget.components}
    assert parts == pytest.approx({"dry": 0.1 * by_dry, "wet": 0.2 * by_wet}, rel=1e-3)
