"""What today's description and tool would say of a filed record: beside the frozen verdict, never in its place."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from commission.description import LoadedPlant, read_yaml
from commission.records.filed import FiledRecord
from commission.records.freeze import versions
from commission.records.judge import judged_by
from commission.records.read import check_record
from commission.records.text import FILED_KEY

if TYPE_CHECKING:
    from commission.acceptance.judgement import Judgement
    from commission.prediction import SystemModel


@dataclass(frozen=True)
class Recomputation:
    """A second look at a filed record. `label` belongs above every figure of `judgement` that is shown.

    `changed` says in words what differs from the frozen block: what it rests on, then verdict, then deviations that
    moved by more than a tenth of their expanded uncertainty.
    """

    filed: FiledRecord
    judgement: Judgement
    label: str
    changed: tuple[str, ...]

    @property
    def outcome(self) -> str:
        """The outcome that today's description and tool would give; `none` where nothing is judged."""
        return self.judgement.outcome or "none"


def recompute(loaded: LoadedPlant, filed: FiledRecord, model: SystemModel | None = None) -> Recomputation:
    """Judge the readings of a filed record by the description, assumptions and libraries of today.

    The frozen sheet is left aside: with it, targets would be those of then. The filed record is not touched.

    Raises:
        RecordError: the record no longer fits the description (an instrument that is gone, for example).
        NotCalculatedError: the system cannot be calculated as it is described today.
    """
    from commission.acceptance.judgement import NO_SHEET

    read = read_yaml(filed.path, filed.path.name)
    data = {k: v for k, v in read.data.items() if k != FILED_KEY}
    record = check_record(filed.path, loaded, filed.file, read.content, data, read.positions, by_checklist=False)
    judgement = judged_by(loaded, record, None, model)
    judgement = replace(judgement, warnings=tuple(w for w in judgement.warnings if w != NO_SHEET))  # left aside here
    now = versions()
    tools = ", ".join(f"{name} {number}" for name, number in now.items())
    label = (
        f"recomputed with the description as it stands today ({loaded.digest[:12]}) and {tools}; "
        f"the filed verdict stands: {filed.verdict}"
    )
    return Recomputation(filed, judgement, label, tuple(_changes(loaded, filed, judgement, now)))


def _changes(loaded: LoadedPlant, filed: FiledRecord, judgement: Judgement, now: dict[str, str]) -> list[str]:
    block = filed.filed
    found = []
    if block.digests.description != loaded.digest:
        found.append("the description has been changed since this record was filed")
    for name, number in now.items():
        then = block.tool.get(name)
        if then != number:
            found.append(f"{name} was {then or 'not written down'} then and is {number} now")
    outcome = judgement.outcome or "none"
    if outcome != block.verdict:
        found.append(f"the verdict would be {outcome} instead of {block.verdict}")
    display = loaded.display(filed.system)
    before = block.model_deviations or block.deviations
    for deviation in judgement.deviations:
        then_frozen = before.get(deviation.key)
        if then_frozen is None:
            continue
        moved = deviation.deviation - then_frozen.deviation
        if abs(moved) > 0.1 * then_frozen.expanded:
            quantity = display.quantities[deviation.key]
            shown = f"{display.spread(moved, quantity.kind, 2)} {display.spread_unit(quantity.kind)}".rstrip()
            found.append(f"the deviation of {quantity.words} would be other by {shown}")
    return found
