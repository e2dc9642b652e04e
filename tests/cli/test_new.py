"""`new`: the help says what a schedule looks like; a contractor's schedule runs from CSV to expected readings."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from tests.conftest import Run

SCHEDULES = Path(__file__).parents[1] / "description" / "schedules"


def test_help_lists_the_headings_of_a_schedule(commission: Run) -> None:
    """Nobody has to guess a heading: the help names one for each thing that is understood."""
    text = " ".join(commission("new", "--help").stdout.split())
    for heading in ("refrigerant", "ambient", "water in", "high pressure limit", "capacity"):
        assert f" {heading}," in text


@pytest.mark.parametrize("name", ["us_contractor.csv", "european_export.csv"])
def test_a_schedule_as_kept_runs_without_an_edit(commission: Run, tmp_path: Path, name: str) -> None:
    """What a contractor's spreadsheet holds is enough for expected readings of every system in it."""
    done = commission("new", tmp_path / "plant", "--from-schedule", SCHEDULES / name)
    assert done.returncode == 0, done.stderr
    done = commission("predict", tmp_path / "plant")
    assert done.returncode == 0, done.stderr
    assert done.stdout.count("Suction pressure") == done.stdout.count("regime: ") >= 4


def test_a_freezer_without_its_power_is_still_calculated(commission: Run, tmp_path: Path) -> None:
    """With capacity and temperatures alone a freezer at a high pressure ratio gets a power that the laws allow."""
    text = "Tag,Description,Refrigerant,Box temp [°F],Ambient [°F],Capacity [MBH]\nF,Walk-in freezer,R-448A,-10,95,16\n"
    (tmp_path / "s.csv").write_text(text, encoding="utf-8")
    assert commission("new", tmp_path / "p", "--from-schedule", tmp_path / "s.csv").returncode == 0
    done = commission("predict", tmp_path / "p", "--json")
    assert done.returncode == 0, done.stderr
    expected = json.loads(done.stdout)["systems"]["F"]["expected"]
    value = {key: expected[key]["value"] for key in expected}
    carnot = 249.8167 / (308.15 - 249.8167)
    assert value["cooling_capacity"] == pytest.approx(16e3 * 0.29307107, rel=1e-4)
    assert 0.2 * carnot < value["cooling_capacity"] / value["compressor_power"] < carnot
