"""`new`: the help says what a schedule looks like; a contractor's schedule runs from CSV to expected readings."""

from __future__ import annotations

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
