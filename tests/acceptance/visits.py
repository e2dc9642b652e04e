"""Readings of an imagined visit: what the model expects, with some of it changed."""

from __future__ import annotations

from collections.abc import Mapping

from commission.acceptance import Measured, Reading, measure
from commission.acceptance.choosing import DIRECT, choose_instrument
from commission.description import LoadedPlant
from commission.prediction import SystemModel


def visit(
    loaded: LoadedPlant,
    model: SystemModel,
    conditions: Mapping[str, float] | None = None,
    **changes: float | None,
) -> tuple[list[Reading], list[Reading]]:
    """Conditions and readings of a plant that reads as expected at `conditions`; a change of None leaves one out."""
    prediction = model.predict(conditions)
    system = loaded.system(model.system_id)
    values: dict[str, float | None] = {k: e.value for k, e in prediction.expected.items()}
    values.update(prediction.conditions)
    values.update(changes)
    asked, read = [], []
    for key, value in values.items():
        if value is None or (key not in DIRECT and key not in changes):
            continue
        name = choose_instrument(key, value, loaded, system)
        if name is None and key not in changes:
            continue
        (asked if key in prediction.conditions else read).append(Reading(key, value, name))
    return asked, read


def measured(loaded: LoadedPlant, readings: list[Reading]) -> dict[str, Measured]:
    """Readings with their budgets."""
    return {r.key: measure(r, loaded.plant.instruments, loaded.barometric_pressure) for r in readings}


def sure(**values: float) -> dict[str, Measured]:
    """Readings without uncertainty."""
    return {k: Measured(k, v) for k, v in values.items()}
