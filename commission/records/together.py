"""Answers that another answer of the same record shows to be wrong: a pressure at rest, the end of a pressure hold."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from typing import TYPE_CHECKING

from commission.description import KeyPath
from commission.records.readings import ReadingsReader
from commission.records.record import CheckedAnswer

if TYPE_CHECKING:
    from commission.checklists import Item, Target


def judge_together(
    reader: ReadingsReader, answers: dict[str, CheckedAnswer], by_id: Mapping[str, Item]
) -> dict[str, CheckedAnswer]:
    """Fail, in `answers`, each answer that lies outside what another answer says; one without a reason is a slip.

    Returns `answers`.
    """
    from commission.checklists import target_with

    system_id = next((key for key, system in reader.loaded.plant.systems.items() if system is reader.system), None)
    values = {identity: answer.value for identity, answer in answers.items() if answer.value is not None}
    for identity, value in values.items():
        answer = answers[identity]
        found = None if system_id is None else target_with(by_id[identity], values, reader.loaded, system_id)
        if found is None or answer.outcome == "failed" or not beyond(found, value):
            continue
        if answer.reason:
            answers[identity] = replace(answer, outcome="failed")
            continue
        path: KeyPath = ("answers", identity)
        at = (*path, "answer") if (*path, "answer") in reader.positions else path
        message = f"{answer.answer!r} is outside what another answer says it must be, and needs a reason"
        reader.problem(at, message, allowed=f"{found.text}; or a reason: ...")
    return answers


def beyond(target: Target, value: float) -> bool:
    """Whether a value in SI lies outside the bounds of what it must be."""
    low, high = target.low, target.high
    slack = 1e-9 * abs(value)
    return (low is not None and value < low - slack) or (high is not None and value > high + slack)
