"""Answers to checklist items: each must belong to an item of the stage and be of the sort that the item asks for.

What is read is written once: a reading answers the item of the stage that asks for its quantity.
"""

from __future__ import annotations

from collections.abc import Collection, Mapping, Sequence
from typing import TYPE_CHECKING

from commission.description import KeyPath
from commission.errors import nearest
from commission.quantities import NOMENCLATURE, Kind, find_unit
from commission.records.model import Answer
from commission.records.readings import ReadingsReader
from commission.records.record import CheckedAnswer, SiteReading
from commission.records.together import beyond, judge_together

if TYPE_CHECKING:
    from commission.checklists import Item

NOT_APPLICABLE = "not applicable"
_YES_NO = ("yes", "no", NOT_APPLICABLE)


def check_answers(
    reader: ReadingsReader,
    written: Mapping[str, Answer],
    stage: str,
    items: Mapping[str, Sequence[Item]],
    files: Sequence[str],
    read: Mapping[str, SiteReading],
) -> tuple[dict[str, CheckedAnswer], tuple[str, ...]]:
    """The answers that fit, and the ids of items of `stage` without one; slips are kept by `reader`.

    `items` are the items of all stages by stage id: an answer to an item of another stage is allowed, since one
    visit often settles what an earlier one left. `files` are those that are filed with the record; `read` are its
    conditions and readings by quantity.
    """
    by_id = {item.id: item for of_stage in items.values() for item in of_stage}
    answers: dict[str, CheckedAnswer] = {}
    for identity, answer in written.items():
        path: KeyPath = ("answers", identity)
        item = by_id.get(identity)
        if item is None:
            near = nearest(identity, by_id)
            reader.problem(path, "no item of this system's checklist has this id", nearest=near, at_key=True)
            continue
        checked = _check(reader, path, item, answer, files)
        if checked is not None:
            answers[identity] = checked
    of_stage = items.get(stage, ())
    by_reading = answered_by_reading(of_stage, read)
    for item in of_stage:
        if item.id in by_reading and item.id not in written and item.quantity is not None:
            one = read[item.quantity]
            answers[item.id] = CheckedAnswer(item.id, one.as_written, "done", one.value, None, one.remark)
    judge_together(reader, answers, by_id)
    unanswered = tuple(item.id for item in of_stage if item.id not in written and item.id not in by_reading)
    return answers, unanswered


def answered_by_reading(items: Sequence[Item], read: Collection[str]) -> frozenset[str]:
    """The ids of a stage's items that a reading answers: those that ask for a reading of the running plant.

    So does the only item of its stage that asks for a quantity and holds it to nothing. A setting, a trip or a pressure
    at rest is of another moment, whatever its quantity: it is answered by itself.
    """
    asked = [i.quantity for i in items if i.answer == "value"]
    return frozenset(
        i.id
        for i in items
        if i.answer == "value"
        and i.quantity in read
        and (i.reading or (i.must_read is None and i.rest_at is None and asked.count(i.quantity) == 1))
    )


def _check(
    reader: ReadingsReader, path: KeyPath, item: Item, answer: Answer, files: Sequence[str]
) -> CheckedAnswer | None:
    at = (*path, "answer") if (*path, "answer") in reader.positions else path
    text = answer.answer.strip()
    value: float | None = None
    outcome = "done"
    if text == NOT_APPLICABLE:
        outcome = NOT_APPLICABLE
    elif item.answer == "yes/no":
        if text not in _YES_NO:
            reader.problem(at, "this item is answered with yes or no", allowed=", ".join(_YES_NO))
            return None
        outcome = "done" if text == "yes" else "failed"
    elif item.answer == "file":
        if text not in files:
            allowed = ", ".join(files) or "name the file under attachments as well"
            near = nearest(text, files)
            reader.problem(at, "this item is answered with a file that is filed with it", allowed=allowed, nearest=near)
            return None
    elif item.answer == "value":
        kind = kind_of(item)
        value = reader.si_of_kind(at, kind, text) if kind is not None else None
        if kind is not None and value is None:
            return None
        outcome = "failed" if _outside(item, value) else "done"
    if outcome != "done" and not answer.reason:
        what = f"{text!r}" if value is None else f"{text!r} is outside what it must be and"
        reader.problem(at, f"{what} needs a reason, so that another person can judge it", allowed="reason: ...")
        return None
    return CheckedAnswer(item.id, text, outcome, value, answer.reason, answer.remark, answer.by)


def kind_of(item: Item) -> Kind | None:
    """The kind of quantity that an item asks for; None where its unit is no unit of a known kind."""
    if item.quantity is not None:
        return NOMENCLATURE[item.quantity].kind
    if item.must_read is not None and item.must_read.kind is not None:
        return item.must_read.kind
    return next((kind for kind in Kind if item.unit and find_unit(item.unit, kind)), None)


def _outside(item: Item, value: float | None) -> bool:
    """Whether a setting or test value lies outside what it must be.

    The checklist is read without a prediction here, so bounds of expected readings are not known and decide nothing:
    they depend on the condition of the visit and on the instrument, which the judgement of the readings takes in.
    """
    return value is not None and item.must_read is not None and beyond(item.must_read, value)
