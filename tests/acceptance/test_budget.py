"""Budgets: correlation, degrees of freedom, and agreement with an independent library and with Monte Carlo."""

from __future__ import annotations

import math
import random

import pytest
import uncertainties
import uncertainties.umath
from hypothesis import given
from hypothesis import strategies as st

from commission.acceptance.budget import (
    Budget,
    Component,
    Measured,
    combine,
    largest_first,
    propagate,
    repeated_means,
    spread_of,
)
from commission.acceptance.distributions import normal_cdf, normal_quantile, student_quantile


def measured(name: str, value: float, standard: float, cause: str = "") -> Measured:
    """A value with one component."""
    return Measured(name, value, Budget((Component(name, standard, cause=cause or name),)))


@given(st.floats(0.51, 0.9999))
def test_student_quantile_against_closed_forms(probability: float) -> None:
    """With one and two degrees of freedom the t quantile has a closed form (Cauchy; Abramowitz & Stegun 26.7)."""
    p = probability
    assert student_quantile(p, 1) == pytest.approx(math.tan(math.pi * (p - 0.5)), rel=1e-8)
    assert student_quantile(p, 2) == pytest.approx((2 * p - 1) * math.sqrt(2 / (4 * p * (1 - p))), rel=1e-8)


@given(st.floats(0.51, 0.9999), st.floats(1.0, 500.0))
def test_fewer_degrees_of_freedom_never_narrow(probability: float, dof: float) -> None:
    """The t quantile falls with the degrees of freedom, broken ones too, towards the normal one."""
    assert student_quantile(probability, dof) >= student_quantile(probability, dof + 1.5)
    assert student_quantile(probability, dof) >= normal_quantile(probability) * (1 - 1e-9)


def test_student_limits() -> None:
    """Infinite degrees of freedom are the normal distribution, the median is zero, nonsense is refused."""
    assert student_quantile(0.975, math.inf) == pytest.approx(1.959963985)
    assert student_quantile(0.5, 7) == pytest.approx(0.0, abs=1e-12)
    assert student_quantile(0.1, 5) == pytest.approx(-student_quantile(0.9, 5))
    assert normal_cdf(1.0) == pytest.approx(0.8413447)
    with pytest.raises(ValueError, match="degree of freedom"):
        student_quantile(0.9, 0.5)
    with pytest.raises(ValueError, match="between 0 and 1"):
        normal_quantile(1.0)


def test_one_cause_adds_before_it_is_squared() -> None:
    """Two components of one cause add with their signs; of different causes they add as squares."""
    together = Budget((Component("a", 3.0, cause="x"), Component("b", -4.0, cause="x")))
    apart = Budget((Component("a", 3.0, cause="x"), Component("b", -4.0, cause="y")))
    assert together.standard == pytest.approx(1.0)
    assert apart.standard == pytest.approx(5.0)
    assert Budget((Component("a", 3.0), Component("a", 4.0))).standard == pytest.approx(5.0)


def test_empty_budget_is_certain() -> None:
    """No components: no uncertainty, infinite degrees of freedom."""
    nothing = Budget()
    assert (nothing.standard, nothing.dof, nothing.expanded()) == (0.0, math.inf, 0.0)


def test_few_samples_widen_the_interval() -> None:
    """Three samples: two degrees of freedom, t 4.30; the one-sided width covers what t covers."""
    budget = Budget((spread_of((1.0, 2.0, 3.0)),))
    assert budget.dof == pytest.approx(2.0)
    assert budget.coverage_factor == pytest.approx(4.303, abs=5e-4)
    assert budget.one_sided(0.95) * normal_quantile(0.95) == pytest.approx(2.920 * budget.standard, rel=1e-3)
    with pytest.raises(ValueError, match="two samples"):
        spread_of((1.0,))


def test_simultaneous_columns_are_checked() -> None:
    """Columns of different length, or a single reading, are refused; a constant column has no correlation."""
    with pytest.raises(ValueError, match="one length"):
        repeated_means([(1.0, 2.0), (1.0,)])
    _, u, r = repeated_means([(1.0, 1.0, 1.0), (1.0, 2.0, 3.0)])
    assert u[0] == 0.0
    assert r == [[1.0, 0.0], [0.0, pytest.approx(1.0)]]


@given(st.floats(200.0, 350.0), st.floats(0.01, 2.0), st.floats(1.0, 50.0), st.floats(0.001, 0.3), st.floats(0.01, 0.5))
def test_agrees_with_an_independent_library(t: float, ut: float, x: float, ux: float, common: float) -> None:
    """Value and uncertainty of a non-linear function with a shared cause agree with the uncertainties library."""
    shared = Component("shared", common, cause="shared")
    a = Measured("a", t, Budget((Component("a", ut, cause="a"), shared)))
    b = Measured("b", x, Budget((Component("b", ux, cause="b"), shared.scaled(0.01))))
    found = propagate("y", lambda a, b: b * math.log(a) - a / 50.0, {"a": a, "b": b})
    pa, pb, pc = uncertainties.ufloat(0.0, ut), uncertainties.ufloat(0.0, ux), uncertainties.ufloat(0.0, common)
    ua, ub = t + pa + pc, x + pb + 0.01 * pc
    expected = ub * uncertainties.umath.log(ua) - ua / 50.0
    assert found.value == pytest.approx(expected.nominal_value)
    assert found.budget.standard == pytest.approx(expected.std_dev, rel=2e-4)


def test_difference_of_alike_is_certain() -> None:
    """A value minus itself has no uncertainty: the shared cause cancels to nothing."""
    a = measured("a", 5.0, 0.3)
    found = propagate("d", lambda p, q: p - q, {"p": a, "q": a})
    assert found.value == 0.0
    assert found.budget.standard == pytest.approx(0.0, abs=1e-12)


def test_own_value_can_be_recovered_from_a_contribution() -> None:
    """Contribution over sensitivity is the standard uncertainty where it arises, through any number of steps."""
    a = measured("a", 2.0, 0.1)
    cubed = propagate("c", lambda a: a**3, {"a": a})
    scaled = cubed.budget.scaled(-2.0).components[0]
    assert abs(scaled.value / scaled.sensitivity) == pytest.approx(0.1)


def test_warnings_travel_and_are_said_once() -> None:
    """Combining budgets keeps each warning once."""
    both = combine(Budget(warnings=("old",)), Budget(warnings=("old", "new")))
    assert both.warnings == ("old", "new")


def test_largest_first_sums_causes() -> None:
    """The list of contributions is by cause and sorted."""
    budget = Budget((Component("a", 1.0, cause="x"), Component("b", 2.5), Component("c", 1.0, cause="x")))
    assert list(largest_first(budget)) == [("b", 2.5), ("x", 2.0)]


def test_interval_covers_as_often_as_it_says() -> None:
    """Simulation: the 95 % interval from five samples covers the true mean in 95 % of 4000 visits (2 sigma: 0.7 %)."""
    random.seed(20260514)
    hits = 0
    for _ in range(4000):
        samples = [random.gauss(10.0, 0.5) for _ in range(5)]
        hits += abs(sum(samples) / 5 - 10.0) <= Budget((spread_of(samples),)).expanded()
    assert hits / 4000 == pytest.approx(0.95, abs=0.0105)
