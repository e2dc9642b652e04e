"""What each gauge, probe and meter should read at the measured condition, and how far the reading is from it."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.acceptance.budget import Budget, Component, Measured, combine
from commission.acceptance.conditions import day_condition
from commission.acceptance.decision import significant
from commission.quantities import NOMENCLATURE, Explained, Input

if TYPE_CHECKING:
    from commission.prediction import Prediction, SystemModel

PROPERTY_SOURCE = "property source"
SCATTER = "scatter of rated points"


@dataclass(frozen=True, slots=True)
class Expectation:
    """An expected value with its budget: parts of the model, of the property source, of the measured condition."""

    key: str
    value: float
    budget: Budget
    explained: Explained


@dataclass(frozen=True, slots=True)
class Deviation:
    """Reading minus expectation. `budget` is that of the difference, shared causes kept.

    `significant`: larger than its expanded uncertainty (95 %); `ratio` is size over expanded uncertainty. That is no
    verdict: without a contract nothing passes or fails.
    """

    key: str
    reading: Measured
    expected: Expectation
    deviation: float
    budget: Budget
    significant: bool
    ratio: float


def model_cause(cause: str) -> str:
    """The name under which a part of the model is shared between all values that it moves."""
    return f"model: {cause}"


def model_component(model: SystemModel, cause: str, value: float, key: str) -> Component:
    """One part of the model uncertainty as a component; an assumption says what would replace it by a fact."""
    assumption = model.assumptions.get(cause)
    if assumption is not None:
        return Component(
            assumption.title, value, "rectangular", source=assumption.source, mark=assumption.mark,
            cause=model_cause(cause), of=key, remedy=f"replace the assumption by a fact: {assumption.replaced_by}",
        )  # fmt: skip
    sources = {
        PROPERTY_SOURCE: "distance of the property source from published boiling points",
        SCATTER: "residuals of the rated points about the fitted model",
    }
    return Component(cause, value, source=sources.get(cause, "the fitted model"), cause=model_cause(cause), of=key)


def model_budget(model: SystemModel, prediction: Prediction, key: str) -> Budget:
    """The parts of the model uncertainty of one expected value."""
    return Budget(tuple(model_component(model, c, v, key) for c, v in prediction.parts.get(key, {}).items() if v))


def expect(
    model: SystemModel, conditions: Mapping[str, Measured], keys: Iterable[str] | None = None
) -> Mapping[str, Expectation]:
    """Expected values at a measured condition, with everything that makes them uncertain.

    `conditions` by nomenclature key; those that set no condition of the model are left out of account (a wet bulb and
    the other end of a medium do, see `conditions.day_condition`), and axes that were not measured are taken at the
    rated condition (`Prediction.filled` lists them). The uncertainty of the measured condition comes in through the
    sensitivities of the model, under the causes of the readings themselves, so that a deviation of a reading that
    shares them keeps the correlation (JCGM 100, 5.2 and F.1.2.3).

    Raises:
        NotCalculatedError: the model has no solution there.
    """
    used = dict(day_condition(model, conditions).used)
    values = {k: m.value for k, m in used.items()}
    prediction = model.predict(values)
    sensitivities = model.sensitivities(values)
    wanted = prediction.expected if keys is None else [k for k in keys if k in prediction.expected]
    found = {}
    for key in wanted:
        slopes = sensitivities.get(key, {})
        through = [m.budget.scaled(slopes[k]) for k, m in used.items() if slopes.get(k)]
        budget = combine(model_budget(model, prediction, key), *through)
        found[key] = _expectation(prediction, key, budget, used)
    return found


def _expectation(prediction: Prediction, key: str, budget: Budget, used: Mapping[str, Measured]) -> Expectation:
    original = prediction.expected[key]
    inputs = tuple(Input(k, m.value, NOMENCLATURE[k].kind, "reading") for k, m in used.items())
    names = {i.name for i in inputs}
    explained = Explained(
        key, original.value, budget.standard, original.method,
        (*inputs, *(i for i in original.inputs if i.name not in names)), original.assumptions, original.bounds,
    )  # fmt: skip
    return Expectation(key, original.value, budget, explained)


def deviation(reading: Measured, expected: Expectation) -> Deviation:
    """Reading minus expectation with the budget of the difference."""
    budget = combine(reading.budget, expected.budget.scaled(-1.0))
    difference = reading.value - expected.value
    expanded = budget.expanded()
    ratio = abs(difference) / expanded if expanded > 0.0 else float("inf") if difference else 0.0
    # One rule for page and package: the widened standard uncertainty makes the normal quantile do for few samples too.
    is_significant = significant(difference, budget.one_sided(0.975))
    return Deviation(reading.key, reading, expected, difference, budget, is_significant, ratio)
