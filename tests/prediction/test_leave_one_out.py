"""Honest uncertainty: each rated point of each example system predicted from the others.

The tables of the example are invented, so this tests the arithmetic of the uncertainty (scatter, assumptions, refit),
not the truth of the assumptions; for that see `test_reference_published_cop.py`.
"""

from __future__ import annotations

import math

import pytest

from commission.description import LoadedPlant
from commission.prediction import fitting, problem, rated, simulating
from commission.prediction.facts import facts_of

TEMPERATURES = ("evaporating_temperature", "condensing_temperature")
SYSTEMS = [
    ("cold-room", 18),
    ("dining-hall", 18),
    ("floor-heating", 20),
    pytest.param("freezer-room", 30, marks=pytest.mark.long),
    pytest.param("shower-water", 13, marks=pytest.mark.long),
]


def _misses(example: LoadedPlant, system: str, monkeypatch: pytest.MonkeyPatch) -> list[tuple[str, float, float]]:
    """(quantity, miss in its own standard uncertainty, relative miss) of every left-out value."""
    facts = facts_of(example, system)
    cases = rated.cases_of(facts)
    found = []
    for left in cases:
        monkeypatch.setattr(problem, "cases_of", lambda _, left=left: tuple(c for c in cases if c is not left))
        fit = fitting.fit_system(facts)
        point = simulating.simulate(facts, fit.values, fit.plan, left, None)
        for datum in left.data:
            value = simulating.observed(point, datum.of)
            square = 0.0 if datum.of in TEMPERATURES else (fit.scatter * value) ** 2
            for variant in fit.variants:
                moved = simulating.simulate(facts, fit.values, variant.plan, left, point)
                square += (variant.sign * (simulating.observed(moved, datum.of) - value)) ** 2
            found.append((datum.of, (value - datum.value) / math.sqrt(square), value / datum.value - 1))
    return found


@pytest.mark.parametrize(("system", "count"), SYSTEMS)
def test_each_point_of_the_example_is_covered_by_the_others(
    example: LoadedPlant, monkeypatch: pytest.MonkeyPatch, system: str, count: int
) -> None:
    """Leave-one-out over each table: at least 95 % of left-out values within k = 2, and the band not idle."""
    misses = _misses(example, system, monkeypatch)
    covered = [abs(m) < 2 for _, m, _ in misses]
    assert len(misses) >= count
    assert sum(covered) >= 0.95 * len(covered)
    assert max(abs(m) for _, m, _ in misses) > 0.5
    assert max(abs(r) for _, _, r in misses) < 0.03
