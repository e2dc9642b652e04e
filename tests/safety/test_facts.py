"""The data files of the safety room are complete."""

from __future__ import annotations

import pytest

from commission.safety import MARKS, facts
from commission.safety.facts import fact, load, weaker


def test_every_fact_names_document_and_mark() -> None:
    """A figure without a source or a mark cannot be shown."""
    for entry in facts().values():
        assert entry.document
        assert entry.mark in MARKS
        assert entry.says


def test_common_practice_is_called_so() -> None:
    """What no document says is marked, and the mark is not used for anything else."""
    for entry in facts().values():
        assert (entry.mark == "practice") is (entry.document == "common practice")


def test_the_weaker_mark_wins() -> None:
    """A calculated figure is no surer than its weakest input."""
    assert weaker("V1", "M-low", "C") == "M-low"
    assert weaker("V2", "V1") == "V1"


def test_leak_rows_rise() -> None:
    """Rows of the leak-check table stand in rising order with falling intervals."""
    law = load("leak_checks.yaml")["EU 2024/573"]
    for group in ("annex_i", "annex_ii"):
        months = [row["months"] for row in law[group]["rows"]]
        assert months == sorted(months, reverse=True)


def test_an_unknown_fact_is_a_fault() -> None:
    """A key that does not exist is never answered."""
    with pytest.raises(KeyError):
        fact("no_such_figure")
