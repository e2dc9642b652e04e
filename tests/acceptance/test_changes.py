"""What would decide: the computed change is the gentlest, and applied it decides."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from commission.acceptance import Budget, Component, apply_change, decide, smallest_change, spread_of
from commission.acceptance.changes import with_advice
from commission.acceptance.decision import Rule

LIMIT = 100.0


def budget(*sizes: float) -> Budget:
    """Components a, b, c ... that a person can make smaller."""
    return Budget(tuple(Component(n, s, cause=n, remedy=f"better {n}") for n, s in zip("abcdef", sizes, strict=False)))


@given(
    st.lists(st.floats(0.05, 5.0), min_size=1, max_size=5),
    st.floats(-8.0, 8.0),
    st.sampled_from(["simple", "guarded"]),
    st.none() | st.floats(0.5, 5.0),
)
def test_applied_change_decides(sizes: list[float], distance: float, rule: Rule, largest: float | None) -> None:
    """Whatever is undecided and can be decided on this budget is decided once the change is applied."""
    before = budget(*sizes)
    found = decide(LIMIT + distance, before, LIMIT, None, rule, 0.95, largest)
    if found.uncertainty_needed is None:
        return
    change = smallest_change(before, found.uncertainty_needed)
    assert change is not None  # all components can be bettered
    after = decide(LIMIT + distance, apply_change(before, change), LIMIT, None, rule, 0.95, largest)
    assert after.outcome != "undecided"


def test_gentlest_single_change_is_chosen() -> None:
    """Of the components that would do alone, the one that needs the least change is named."""
    change = smallest_change(budget(3.0, 2.0, 0.5), 3.0)
    assert change is not None
    assert change.causes == ("a",)
    assert change.factor == pytest.approx((9.0 - 4.0 - 0.25) ** 0.5 / 3.0, abs=1.1e-3)
    assert change.text().startswith("bring the uncertainty from a down to 72 % of what it is (better a)")


def test_two_changes_where_one_is_not_enough() -> None:
    """Where no single change would do, the largest two are made smaller together."""
    change = smallest_change(budget(3.0, 3.0, 0.1), 1.0)
    assert change is not None
    assert change.causes == ("a", "b")
    assert apply_change(budget(3.0, 3.0, 0.1), change).standard <= 1.0


def test_what_nobody_can_better_is_no_advice() -> None:
    """Components without a remedy are left alone, even where they are the largest."""
    fixed = Budget((Component("property source", 3.0), Component("a", 1.0, cause="a", remedy="better a")))
    change = smallest_change(fixed, 3.05)
    assert change is not None
    assert change.causes == ("a",)
    assert smallest_change(fixed, 2.0) is None


def test_more_samples() -> None:
    """For a spread the change is a number of samples, the smallest that decides (Student t included)."""
    spread = Budget((spread_of((1.0, 2.0, 3.0, 2.0), cause="spread"),))
    change = smallest_change(spread, 0.2)
    assert change is not None
    assert change.samples is not None
    assert apply_change(spread, change).one_sided() <= 0.2
    fewer = type(change)(change.causes, change.names, (4 / (change.samples - 1)) ** 0.5, change.samples - 1)
    assert apply_change(spread, fewer).one_sided() > 0.2
    assert change.text().startswith(f"take {change.samples} samples for spread of samples")


def test_nothing_to_change() -> None:
    """A budget that already fits needs no change."""
    assert smallest_change(budget(1.0), 2.0) is None


def test_advice_on_the_limit_and_beyond_reach() -> None:
    """On the limit only another test decides; where no instrument would do it says so and names other ways."""
    on_it = with_advice(decide(LIMIT, budget(1.0), LIMIT, None, "guarded"), budget(1.0))
    assert on_it.what_would_decide is not None
    assert "on the limit itself" in on_it.what_would_decide
    stuck = Budget((Component("property source", 1.0),))
    beyond = with_advice(decide(LIMIT + 0.5, stuck, LIMIT, None, "guarded"), stuck, ("the liquid side would",))
    assert beyond.what_would_decide == (
        "no better instrument on this route would decide: the value lies too near the limit; the liquid side would"
    )
    decided = decide(LIMIT + 5.0, stuck, LIMIT, None, "guarded")
    assert with_advice(decided, stuck) is decided


def test_change_in_the_unit_where_it_arises() -> None:
    """A change tells the standard uncertainty where it arises, before and after, whatever the budget is of."""
    probe = Component(
        "clamped on", 0.6, cause="liquid_temperature: clamped on", of="liquid_temperature", remedy="insulate"
    )
    capacity = Budget((probe.scaled(-50.0),))
    change = smallest_change(capacity, 10.0)
    assert change is not None
    assert change.of == ("liquid_temperature",)
    assert change.before == (pytest.approx(0.6),)
    assert change.after == (pytest.approx(0.2, abs=1e-3),)
    assert change.text() == (
        "bring the uncertainty from clamped on (liquid temperature) down to 33 % of what it is (insulate)"
    )
