"""A speed that was not read is inferred from the power, which is spent; the rest is judged with a wider band."""

from __future__ import annotations

import pytest

from commission.acceptance import judge
from commission.acceptance.evaluation import evaluate
from commission.description import LoadedPlant
from commission.prediction import SystemModel
from tests.acceptance.visits import visit

SPEED = "compressor_speed"


def test_speed_is_found_again(variable: LoadedPlant, variable_model: SystemModel) -> None:
    """From the power that the model expects at 42 1/s the speed comes back, and nothing deviates."""
    found = evaluate(variable, variable_model, *visit(variable, variable_model, {SPEED: 42.0}))
    assert found.conditions[SPEED].value == pytest.approx(42.0, rel=1e-4)
    assert [d.key for d in found.deviations if d.ratio > 0.05] == []


def test_reading_is_spent(variable: LoadedPlant, variable_model: SystemModel) -> None:
    """The power that the speed was inferred from is not judged any more, and says why; no guarantee on it can be."""
    found = evaluate(variable, variable_model, *visit(variable, variable_model, {SPEED: 42.0}))
    assert "power_input" not in {d.key for d in found.deviations}
    assert "spent on the compressor speed" in found.not_judged["power_input"]
    assert [w for w in found.warnings if w == "compressor speed was not read: inferred from power input"]


def test_band_is_wider_than_with_a_known_speed(variable: LoadedPlant, variable_model: SystemModel) -> None:
    """What follows the speed is less certain with an inferred one: the capacity, the evaporating temperature."""
    asked, read = visit(variable, variable_model, {SPEED: 42.0})
    known = evaluate(variable, variable_model, *visit(variable, variable_model, {SPEED: 42.0}, compressor_speed=42.0))
    inferred = evaluate(variable, variable_model, asked, read)
    for key in ("cooling_capacity", "evaporating_temperature"):
        band = [next(d for d in e.deviations if d.key == key).expected.budget.standard for e in (known, inferred)]
        assert band[1] > band[0]
    assert known.conditions[SPEED].value == 42.0
    assert "power_input" in {d.key for d in known.deviations}


def test_no_speed_explains_the_power(variable: LoadedPlant, variable_model: SystemModel) -> None:
    """A power that no speed of the machine explains, or none at all, leaves nothing expected, with the reason."""
    asked, read = visit(variable, variable_model, power_input=60e3)
    found = evaluate(variable, variable_model, asked, read)
    assert found.deviations == ()
    assert "compressor speed was not read" in found.not_judged["suction_pressure"]
    without = evaluate(variable, variable_model, *visit(variable, variable_model, power_input=None))
    assert "neither power nor current" in without.not_judged["suction_pressure"]


def test_cop_can_still_be_judged(variable: LoadedPlant, variable_model: SystemModel) -> None:
    """A COP as stated is judged from capacity and power as read, whatever the speed was."""
    found = judge(variable, variable_model, *visit(variable, variable_model), "test", since_start=3600.0)
    assert [(g.terms.quantity, g.outcome) for g in found.guarantees] == [
        ("cooling_capacity", "conforming"),
        ("cooling_cop", "conforming"),
    ]
