"""A record that holds two answers of which one decides the other."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from commission.description import LoadedPlant
from commission.records import RecordError, read_record

Write = Callable[..., Path]
REST = "visit.clean: yes\n  charging.rest-temperature: 20.0 °C\n  charging.foreign-gas: "
"""R-290 at 20 °C: 8.365 bar absolute (Lemmon et al. 2009), 7.39 bar g at 310 m."""


def test_a_pressure_at_rest_at_saturation_is_done(write: Write, loaded: LoadedPlant) -> None:
    """Within the error of gauge and probe nothing is asked."""
    record = read_record(write(("visit.clean: yes", REST + "7.40 bar g")), loaded)
    assert record.answers["charging.foreign-gas"].outcome == "done"


def test_air_in_the_circuit_wants_a_reason_and_counts_as_failed(write: Write, loaded: LoadedPlant) -> None:
    """0.8 bar above saturation: refused without a reason, with the bounds and what it means; failed with one."""
    with pytest.raises(RecordError) as caught:
        read_record(write(("visit.clean: yes", REST + "8.2 bar g")), loaded)
    (problem,) = caught.value.problems
    assert problem.path == "answers.charging.foreign-gas"
    assert "another answer" in problem.message
    assert problem.allowed is not None
    assert "too high: air or nitrogen in the circuit" in problem.allowed
    said = REST + "{answer: 8.2 bar g, reason: not purged yet}"
    record = read_record(write(("visit.clean: yes", said)), loaded)
    assert record.answers["charging.foreign-gas"].outcome == "failed"


def test_the_end_of_a_hold_is_held_to_its_start(write: Write, loaded: LoadedPlant) -> None:
    """A fall of half a bar in 24 hours is a leak, whatever the gauge (0.5 % of 30 bar)."""
    held = "visit.clean: yes\n  strength.start-pressure: 17.00 bar g\n  strength.end-pressure: "
    kept = read_record(write(("visit.clean: yes", held + "16.95 bar g")), loaded)
    assert kept.answers["strength.end-pressure"].outcome == "done"
    fell = held + "{answer: 16.5 bar g, reason: a flare leaks}"
    assert read_record(write(("visit.clean: yes", fell)), loaded).answers["strength.end-pressure"].outcome == "failed"


def test_one_answer_alone_is_only_kept(write: Write, loaded: LoadedPlant) -> None:
    """Without the temperature nobody can judge the pressure."""
    alone = "visit.clean: yes\n  charging.foreign-gas: 8.2 bar g"
    assert read_record(write(("visit.clean: yes", alone)), loaded).answers["charging.foreign-gas"].outcome == "done"
