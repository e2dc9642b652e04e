"""A reading of the test is held to the calculation, to rated figures that are no certainty, and to its own meter."""

from __future__ import annotations

import math
from pathlib import Path

import pytest

from commission.checklists import Target, stages
from commission.description import load_plant
from commission.prediction import fit
from commission.quantities import FLOWS
from tests.checklists.conftest import YARD


def targets(folder: Path, system_id: str) -> dict[str, Target]:
    """What the items of a system with its fitted model must read, by id."""
    loaded = load_plant(folder)
    found = stages(loaded, system_id, fit(loaded, system_id))
    return {item.id: item.must_read for stage in found for item in stage.items if item.must_read is not None}


def half(target: Target) -> float:
    """Half the width of a band as a share of its value."""
    assert target.low is not None
    assert target.high is not None
    assert target.value is not None
    return (target.high - target.low) / 2 / target.value


def test_one_rated_point_that_is_met_exactly_is_no_certainty() -> None:
    """5 % of a rated power (AHRI 540, EN 12900, from memory) and 3 % of a clamp meter, both rectangular, k = 2."""
    power = targets(YARD, "tower-chiller")["performance.power"]
    assert half(power) == pytest.approx(2.0 * math.hypot(0.05, 0.03) / math.sqrt(3), rel=0.01)
    assert "rated figures (5 %) and a usual instrument" in power.text


def test_a_capacity_carries_flow_and_temperature_change() -> None:
    """10 % of a flow and 0.5 K of 5.0 K by usual instruments, beside 5 % of the rated figure: 17 % (k = 2)."""
    capacity = targets(YARD, "tower-chiller")["performance.capacity"]
    parts = (0.05 / math.sqrt(3), 0.10 / math.sqrt(3), 0.5 / 5.0 / math.sqrt(3), 0.1 / 5.0 / math.sqrt(12))
    assert half(capacity) == pytest.approx(2.0 * math.hypot(*parts), rel=0.02)


def test_an_instrument_of_the_plant_is_named_at_the_line(example_folder: Path) -> None:
    """Pressures carry gauge and calculation alone; no rated figure states them."""
    found = targets(example_folder, "cold-room")
    assert "with the errors of calculation and high-side gauge" in found["performance.discharge-pressure"].text
    assert "power meter" in found["performance.power"].text


def test_no_band_of_the_discharge_ends_above_the_limiter() -> None:
    """133.7 °C within its errors would end at 145 °C; the limiter of this plant stops it at 140 °C."""
    found = targets(YARD, "chiller")["performance.discharge-temperature"]
    assert found.high == pytest.approx(413.15)
    assert "only at 140.0 °C the limiter stops it" in found.text


def test_a_small_flow_is_asked_in_the_unit_in_which_it_must_read(example_folder: Path) -> None:
    """60 L/h over a box in m3/h would be a slip of a thousand: text and box of every flow on every list are alike."""
    loaded = load_plant(example_folder)
    seen = 0
    for system in loaded.plant.systems:
        for stage in stages(loaded, system):
            for item in stage.items:
                if item.must_read is not None and item.must_read.kind in FLOWS and item.unit and item.must_read.value:
                    seen += 1
                    assert f" {item.unit}" in item.must_read.text, item.id
    assert seen >= 4
