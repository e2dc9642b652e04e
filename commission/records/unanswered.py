"""Items of the checklist that no filed record answers: an accepted guarantee says nothing of them."""

from __future__ import annotations

from collections.abc import Iterable
from typing import TYPE_CHECKING

from commission.description import LoadedPlant
from commission.records.answers import answered_by_reading
from commission.records.filed import FiledRecord
from commission.records.history import in_force

if TYPE_CHECKING:
    from commission.checklists import Stage

Unanswered = tuple[tuple[str, tuple[tuple[str, str], ...]], ...]
"""Title of each stage, with the id and the act of each of its items."""


def unanswered(loaded: LoadedPlant, system: str, records: Iterable[FiledRecord], until: str) -> Unanswered:
    """The items of a system's checklist up to and with the stage `until` that no record in force answers.

    An answer counts in whatever record it stands; a reading answers an item in a record of the item's own stage. What
    the plant's own list leaves out is not asked. Empty where the checklist of today has no such stage.

    Raises:
        InputError: no such system.
        ChecklistError: the plant's own checklists cannot be used.
    """
    from commission.checklists import stages

    kept = [r for r in in_force(records) if r.system == system]
    answered = {identity for r in kept for identity in r.file.answers}
    asked = stages(loaded, system)
    ids = [stage.id for stage in asked]
    if until not in ids:
        return ()
    found = []
    for stage in asked[: ids.index(until) + 1]:
        left = _left(stage, kept, answered)
        if left:
            found.append((stage.title, left))
    return tuple(found)


def _left(stage: Stage, kept: Iterable[FiledRecord], answered: set[str]) -> tuple[tuple[str, str], ...]:
    read = set[str]()
    for record in kept:
        if record.file.stage == stage.id:
            read |= answered_by_reading(stage.items, {*record.filed.readings, *record.filed.conditions})
    return tuple((i.id, i.do) for i in stage.items if i.left_out is None and i.id not in answered and i.id not in read)
