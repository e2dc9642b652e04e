"""Expectations at a measured condition, and deviations that keep what both sides share."""

from __future__ import annotations

import random
import statistics

import pytest

from commission.acceptance import Budget, Component, Measured, deviation, evaluate, expect
from commission.acceptance.expectation import Expectation
from commission.description import LoadedPlant
from commission.prediction import SystemModel
from commission.quantities import Explained, methods
from tests.acceptance.visits import visit

EXPLAINED = Explained("suction_pressure", 4e5, None, "suction_pressure")
SINK, SOURCE = "heat_sink_inlet_temperature", "heat_source_inlet_temperature"


def conditions(sink: float, source: float, u: float = 0.2) -> dict[str, Measured]:
    """A measured condition with one cause for each reading."""
    return {
        SINK: Measured(SINK, sink, Budget((Component("probe", u, cause="sink probe"),))),
        SOURCE: Measured(SOURCE, source, Budget((Component("probe", u, cause="source probe"),))),
    }


def test_condition_comes_in_through_the_sensitivities(cold_room_model: SystemModel) -> None:
    """Budget = parts of the model and sensitivity times the uncertainty of the condition, each under its cause."""
    at = conditions(303.15, 275.15)
    found = expect(cold_room_model, at)
    values = {k: m.value for k, m in at.items()}
    slope = cold_room_model.sensitivities(values)["discharge_pressure"][SINK]
    model = cold_room_model.predict(values).expected["discharge_pressure"].uncertainty
    budget = found["discharge_pressure"].budget
    own = {c.cause: c.value for c in budget.components}
    assert own["sink probe"] == pytest.approx(0.2 * slope)
    only_model = Budget(tuple(c for c in budget.components if c.cause.startswith("model: ")))
    assert only_model.standard == pytest.approx(model)
    assert found["discharge_pressure"].explained.uncertainty == budget.standard


@pytest.mark.long
def test_budget_of_an_expectation_agrees_with_monte_carlo(cold_room_model: SystemModel) -> None:
    """JCGM 101: drawing the condition itself moves the expected pressures as the sensitivities say (8 %, 300 draws)."""
    at = conditions(303.15, 275.15, 1.0)
    found = expect(cold_room_model, at, ("suction_pressure", "discharge_pressure"))
    random.seed(3)
    draws: dict[str, list[float]] = {k: [] for k in found}
    for _ in range(300):
        one = cold_room_model.predict({SINK: random.gauss(303.15, 1.0), SOURCE: random.gauss(275.15, 1.0)})
        for key, values in draws.items():
            values.append(one.expected[key].value)
    for key, values in draws.items():
        through = Budget(tuple(c for c in found[key].budget.components if c.cause.endswith("probe")))
        assert statistics.stdev(values) == pytest.approx(through.standard, rel=0.08)


def test_keys_can_be_chosen(cold_room_model: SystemModel) -> None:
    """Only the wanted keys are worked out; an unknown one is no key of the model."""
    found = expect(cold_room_model, conditions(303.15, 275.15), ("superheat", "running_share"))
    assert set(found) == {"superheat"}


def test_deviation_keeps_the_shared_condition(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """Source inlet minus evaporating: its reading and its expectation share the probe at the inlet, so that the doubt
    of that probe weighs only with one minus the sensitivity, not with both in full."""
    found = evaluate(cold_room, cold_room_model, *visit(cold_room, cold_room_model))
    one = next(d for d in found.deviations if d.key == "evaporator_temperature_difference")
    cause = f"{SOURCE}: error of air probe"
    reading = sum(c.value for c in one.reading.budget.components if c.cause == cause)
    expected = sum(c.value for c in one.expected.budget.components if c.cause == cause)
    both = sum(c.value for c in one.budget.components if c.cause == cause)
    assert reading != 0.0
    assert expected != 0.0
    assert both == pytest.approx(reading - expected)
    independent = (one.reading.budget.standard**2 + one.expected.budget.standard**2) ** 0.5
    assert one.budget.standard < independent


def test_significance_and_ratio() -> None:
    """A deviation is significant beyond its expanded uncertainty; the ratio says by how much."""
    expected = Expectation("suction_pressure", 4e5, Budget((Component("model", 3000.0),)), EXPLAINED)
    near = deviation(Measured("suction_pressure", 4.05e5, Budget((Component("gauge", 4000.0),))), expected)
    far = deviation(Measured("suction_pressure", 4.11e5, Budget((Component("gauge", 4000.0),))), expected)
    assert near.budget.standard == pytest.approx(5000.0)
    assert (near.significant, far.significant) == (False, True)
    assert near.ratio == pytest.approx(5000.0 / 9800.0, rel=1e-3)


def test_few_samples_need_a_larger_deviation() -> None:
    """With two degrees of freedom a deviation of three standard uncertainties is not yet significant (t = 4.30)."""
    expected = Expectation("power_input", 1000.0, Budget(), EXPLAINED)
    few = Budget((Component("spread", 10.0, dof=2.0),))
    many = Budget((Component("spread", 10.0),))
    assert not deviation(Measured("power_input", 1030.0, few), expected).significant
    assert deviation(Measured("power_input", 1030.0, many), expected).significant


def test_a_plant_as_designed_deviates_from_nothing(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """Readings that are the expectation have deviations far below their uncertainty, derived ones and routes too."""
    found = evaluate(cold_room, cold_room_model, *visit(cold_room, cold_room_model, {SINK: 298.15}))
    assert {"suction_pressure", "compressor_superheat", "subcooling", "cooling_capacity", "cooling_cop"} <= {
        d.key for d in found.deviations
    }
    assert [d.key for d in found.deviations if d.ratio > 0.02] == []
    assert found.impossible == ()


def test_a_starved_evaporator_is_seen(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """A suction pressure of 0.6 bar too low is a significant deviation; superheat follows it."""
    expected = cold_room_model.predict().expected["suction_pressure"].value
    asked, read = visit(cold_room, cold_room_model, suction_pressure=expected - 6e4)
    found = {d.key: d for d in evaluate(cold_room, cold_room_model, asked, read).deviations}
    assert found["suction_pressure"].significant
    assert found["evaporating_temperature"].deviation < -4.0
    assert found["compressor_superheat"].deviation > 4.0


def test_without_an_inlet_temperature_nothing_is_expected(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """An expectation needs the condition: without the air on the condenser every reading says why it is not judged."""
    asked, read = visit(cold_room, cold_room_model, heat_sink_inlet_temperature=None)
    found = evaluate(cold_room, cold_room_model, asked, read)
    assert found.deviations == ()
    assert "outdoor air inlet temperature was not read" in found.not_judged["suction_pressure"]


def test_methods_are_in_the_table(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """Every number of an evaluation names a method that the table of methods holds."""
    found = evaluate(cold_room, cold_room_model, *visit(cold_room, cold_room_model))
    used = {d.explained.method for d in found.derived.values()} | {
        e.explained.method for e in found.expectations.values()
    }
    assert used <= set(methods())
