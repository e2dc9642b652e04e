"""The benchmarks still run and their two sides agree; nothing here looks at a time."""

from __future__ import annotations

import sys

import pytest

from tests.benchmarks import points, processes, whole_maps


def test_a_point_agrees_with_the_plain_calculation() -> None:
    """Propane by PropsSI and fsolve gives our temperatures to 0.05 K and our heat and power to 0.5 %."""
    rows = points.run(1, ("R-290",))
    assert [row.what.split()[0] for row in rows] == ["operating", "operating"]


def test_a_map_agrees_with_its_points() -> None:
    """Small maps of all cases of the benchmark are the same to 1e-5 K as their points."""
    assert len(whole_maps.run(1, 6)) == len(whole_maps.CASES)


@pytest.mark.skipif(sys.platform == "win32", reason="counts processor time and memory of a child as Unix does")
def test_processes_are_measured() -> None:
    """Help, one prediction and a short logger's file each end well and give a row."""
    assert len(processes.run(1, 2000)) == 3


@pytest.mark.long
@pytest.mark.parametrize("name", ["R-717", "R-134a", "R-410A", "R-454B"])
def test_more_points_agree_with_the_plain_calculation(name: str) -> None:
    """The same for ammonia, R-134a, R-410A as a pseudo-pure fluid, and a blend (seconds for its one point)."""
    assert points.against_plain(name, 1).measured
