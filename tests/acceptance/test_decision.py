"""The decision rule: error rates at the limit by simulation, order, symmetry, and what it refuses."""

from __future__ import annotations

import random

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from commission.acceptance.budget import Budget, spread_of
from commission.acceptance.decision import Rule, decide, fixed, significant, sure_text

values = st.floats(-100.0, 100.0)
sizes = st.floats(0.001, 10.0)


def share(outcome: str, true: float, rule: Rule, largest: float | None = None, runs: int = 20_000) -> float:
    """Share of simulated tests of a plant whose true value is `true` (limit 100, u 2) that end in `outcome`."""
    random.seed(7)
    hits = sum(
        decide(random.gauss(true, 2.0), 2.0, 100.0, None, rule, 0.95, largest).outcome == outcome for _ in range(runs)
    )
    return hits / runs


def test_guarded_rule_keeps_its_error_rates_at_the_limit() -> None:
    """A plant exactly at the limit is accepted in 5 % and rejected in 5 % of guarded tests, the rest is undecided."""
    assert share("conforming", 100.0, "guarded") == pytest.approx(0.05, abs=0.005)
    assert share("not conforming", 100.0, "guarded") == pytest.approx(0.05, abs=0.005)
    assert share("undecided", 100.0, "guarded") == pytest.approx(0.90, abs=0.007)


def test_simple_rule_shares_the_risk_at_the_limit() -> None:
    """A plant exactly at the limit is accepted in half of the simple tests; a capable test never stays undecided."""
    assert share("conforming", 100.0, "simple", largest=5.0) == pytest.approx(0.5, abs=0.011)
    assert share("undecided", 100.0, "simple", largest=5.0) == 0.0


def test_simple_rule_with_too_poor_a_test_keeps_guarded_error_rates() -> None:
    """A test that is not capable wrongly accepts a plant at the limit in 5 % only: it mostly says undecided."""
    assert share("conforming", 100.0, "simple", largest=3.0) == pytest.approx(0.05, abs=0.005)
    assert share("undecided", 100.0, "simple", largest=3.0) == pytest.approx(0.90, abs=0.007)


def test_guarded_rule_keeps_its_error_rate_with_few_samples() -> None:
    """With four samples and an unknown spread the guarded rule still wrongly accepts 5 % (Student t)."""
    random.seed(11)
    hits = 0
    for _ in range(8000):
        samples = [random.gauss(100.0, 2.0) for _ in range(4)]
        budget = Budget((spread_of(samples),))
        hits += decide(sum(samples) / 4, budget, 100.0, None, "guarded").outcome == "conforming"
    assert hits / 8000 == pytest.approx(0.05, abs=0.0075)


@given(values, sizes, values, st.sampled_from(["simple", "guarded"]))
def test_mirror_image(value: float, u: float, limit: float, rule: Rule) -> None:
    """An upper limit decides as the lower limit of the mirrored value does."""
    lower = decide(value, u, limit, None, rule)
    upper = decide(-value, u, None, -limit, rule)
    assert lower.outcome == upper.outcome
    assert lower.probability_of_conformity == pytest.approx(upper.probability_of_conformity, abs=1e-12)


@given(values, sizes, values, st.sampled_from(["simple", "guarded"]), st.none() | st.floats(0.01, 30.0))
def test_better_value_never_gets_a_worse_verdict(
    value: float, u: float, limit: float, rule: Rule, largest: float | None
) -> None:
    """With one limit, a value further inside never turns a better verdict into a worse one."""
    order = ["not conforming", "undecided", "conforming"]
    worse = decide(value, u, limit, None, rule, 0.95, largest).outcome
    better = decide(value + 0.7 * u, u, limit, None, rule, 0.95, largest).outcome
    assert order.index(better) >= order.index(worse)


@given(values, sizes, values, st.sampled_from(["simple", "guarded"]), st.none() | st.floats(0.01, 30.0))
def test_needed_uncertainty_decides(value: float, u: float, limit: float, rule: Rule, largest: float | None) -> None:
    """An undecided value is decided at the uncertainty that is said to be needed, and not at one a little larger."""
    found = decide(value, u, limit, None, rule, 0.95, largest)
    if found.outcome != "undecided":
        assert found.uncertainty_needed is None
        return
    assume(found.uncertainty_needed is not None and found.uncertainty_needed > 1e-6)
    assert found.uncertainty_needed is not None
    assert decide(value, found.uncertainty_needed, limit, None, rule, 0.95, largest).outcome != "undecided"
    wider = min(u, found.uncertainty_needed * 1.001 + 1e-6)
    if wider > found.uncertainty_needed * 1.0005:
        assert decide(value, wider, limit, None, rule, 0.95, largest).outcome == "undecided"


def test_on_the_limit() -> None:
    """A value on the limit conforms under the simple rule; nothing would decide it under the guarded rule."""
    assert decide(5.0, 1.0, 5.0).outcome == "conforming"
    guarded = decide(5.0, 1.0, 5.0, None, "guarded")
    assert (guarded.outcome, guarded.uncertainty_needed) == ("undecided", None)


def test_budget_and_number_agree() -> None:
    """A budget of many degrees of freedom decides as its standard uncertainty does."""
    budget = Budget((spread_of((1.0, 2.0) * 5000),))
    assert decide(5.0, budget, 4.99).capable
    assert decide(5.0, budget, 4.99).standard_uncertainty == pytest.approx(budget.standard, rel=1e-3)


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        ((1.0, 1.0), "nothing to decide"),
        ((float("nan"), 1.0, 0.0), "finite numbers"),
        ((1.0, -1.0, 0.0), "zero or more"),
        ((1.0, float("inf"), 0.0), "finite numbers"),
        ((1.0, 1.0, 3.0, 2.0), "above the upper limit"),
        ((1.0, 1.0, 0.0, None, "simple", 0.4), "confidence"),
    ],
)
def test_nonsense_is_refused(arguments: tuple[float, ...], message: str) -> None:
    """No limit, numbers that are none, crossed limits or an odd confidence are errors, never a verdict."""
    with pytest.raises(ValueError, match=message):
        decide(*arguments)  # type: ignore[arg-type]  # the cases mix positions on purpose


def test_significance_is_two_sided() -> None:
    """A deviation is significant beyond 1.96 standard uncertainties, in either direction."""
    assert significant(1.97, 1.0)
    assert significant(-1.97, 1.0)
    assert not significant(1.95, 1.0)
    assert not significant(0.0, 0.0)


def test_fixed_rounds_halves_away_from_zero() -> None:
    """Halves go away from zero as in the browser, and there is no negative zero."""
    assert [fixed(x, 0) for x in (0.5, 1.5, 2.5, -2.5)] == ["1", "2", "3", "-3"]
    assert fixed(-0.04, 1) == "0.0"
    assert fixed(1.005, 2) == "1.00"  # the nearest double lies below 1.005


@pytest.mark.parametrize(
    ("probability", "printed"),
    [(1.0, "more than 99.9 %"), (0.9995, "more than 99.9 %"), (0.9731, "97.3 %"), (0.0002, "less than 0.1 %")],
)
def test_no_probability_is_printed_as_certain(probability: float, printed: str) -> None:
    """A measurement never makes conformity certain."""
    assert sure_text(probability) == printed
