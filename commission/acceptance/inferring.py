"""A compressor speed or stage that nobody could read, inferred from one reading, which is spent on it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.acceptance.budget import Measured, combine
from commission.acceptance.conditions import STAGE
from commission.acceptance.expectation import deviation, expect, model_budget
from commission.errors import NotCalculatedError

if TYPE_CHECKING:
    from commission.prediction import Prediction, SystemModel

SPEED = "compressor_speed"
TELLING = ("power_input", "compressor_power", "current")
"""Readings that a speed or a stage can be inferred from, the first that was taken is used: all rise with it."""
_TURNS = 12
_CLOSE = 1e-6


@dataclass(frozen=True, slots=True)
class Inferred:
    """The condition with its budget, and the reading that was spent on it and cannot be judged any more."""

    condition: Measured
    spent: str


def infer_speed(model: SystemModel, used: Mapping[str, Measured], measured: Mapping[str, Measured]) -> Inferred:
    """The speed at which the model expects what was read, by Newton's method.

    Its budget is that of the reading less that of the expectation, through the slope: so whatever is judged at this
    speed carries the doubt of the reading, of the model and of the condition, each under its own cause.

    Raises:
        NotCalculatedError: no such reading, or no speed within the limits of the machine explains it.
    """
    key, label = _telling(model, SPEED, measured)
    axis, read = model.condition_axes[SPEED], measured[key]
    speed = axis.rated
    for _ in range(_TURNS):
        at = {**{k: m.value for k, m in used.items()}, SPEED: speed}
        prediction, slopes = model.predict(at), model.sensitivities(at)
        slope = slopes.get(key, {}).get(SPEED, 0.0)
        if key not in prediction.expected or slope <= 0.0:
            raise NotCalculatedError(f"{label} was not read, and {model.facts.shown.words(key)} does not tell it")
        step = (read.value - prediction.expected[key].value) / slope
        if abs(step) < _CLOSE * axis.rated:
            return Inferred(_with_budget(model, prediction, slopes[key], used, read, speed), key)
        speed = min(max(speed + step, 0.8 * axis.low), 1.2 * axis.high)
    raise NotCalculatedError(
        f"{label} was not read, and none from {axis.low * 60:.0f} to {axis.high * 60:.0f} rpm explains the "
        f"{model.facts.shown.words(key)} that was"
    )


def _with_budget(
    model: SystemModel,
    prediction: Prediction,
    slopes: Mapping[str, float],
    used: Mapping[str, Measured],
    read: Measured,
    speed: float,
) -> Measured:
    through = [m.budget.scaled(slopes[k]) for k, m in used.items() if slopes.get(k)]
    expected = combine(model_budget(model, prediction, read.key), *through)
    budget = combine(read.budget.scaled(1.0 / slopes[SPEED]), expected.scaled(-1.0 / slopes[SPEED]))
    return Measured(SPEED, speed, budget)


def infer_stage(model: SystemModel, used: Mapping[str, Measured], measured: Mapping[str, Measured]) -> Inferred:
    """The only capacity stage at which the model expects what was read, within the doubt of both.

    Raises:
        NotCalculatedError: no such reading, none of the stages explains it, or several do.
    """
    key, label = _telling(model, STAGE, measured)
    found = []
    for step in model.condition_axes[STAGE].steps:
        stage = Measured(STAGE, step)
        try:
            expected = expect(model, {**used, STAGE: stage}, (key,)).get(key)
        except NotCalculatedError:
            continue
        if expected is not None and not deviation(measured[key], expected).significant:
            found.append(stage)
    if len(found) == 1:
        return Inferred(found[0], key)
    steps = ", ".join(f"{100 * stage.value:.0f} %" for stage in found)
    why = f"several of them ({steps}) explain" if found else "none of them explains"
    raise NotCalculatedError(f"{label} was not read, and {why} the {model.facts.shown.words(key)} that was")


def _telling(model: SystemModel, condition: str, measured: Mapping[str, Measured]) -> tuple[str, str]:
    """The reading that tells a condition, and the name of that condition.

    Raises:
        NotCalculatedError: there is no such reading.
    """
    label = model.facts.shown.words(condition)
    key = next((k for k in TELLING if k in measured), None)
    if key is None:
        raise NotCalculatedError(f"{label} was not read, and neither power nor current from which to infer it")
    return key, label
