"""The machine of a system over two conditions at once: one of its source, one of its sink. SI units."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from commission.errors import InputError, NotCalculatedError, Problem
from commission.machine import OperatingMap, SingleStage, operating_map
from commission.prediction.model import SystemModel
from commission.prediction.streams import media


def operating_surface(
    model: SystemModel,
    source: tuple[str, Sequence[float]],
    sink: tuple[str, Sequence[float]],
    others: Mapping[str, float] | None = None,
) -> OperatingMap:
    """Operating points of the fitted machine over a condition of the source (rows) and one of the sink (columns).

    `source` and `sink` are a condition of the system with its values in SI; what is not in `others` stays at the rated
    condition. Nominal values alone, without uncertainty: many times quicker than as many predictions.

    Raises:
        InputError: a key that is no condition of this system, or not one of that side.
        NotCalculatedError: the machine is not of one stage below the critical point.
    """
    for (key, _), side in ((source, "heat_source_"), (sink, "heat_sink_")):
        if key not in model.condition_axes or not key.startswith(side):
            raise InputError(Problem("this is no condition of that side of this system", value=key))
    for key in others or {}:
        if key not in model.condition_axes:
            raise InputError(Problem("this is no condition of this system", value=key))
    rest = {**model.rated_condition, **(others or {})}
    plan = model.fit.plan.at(rest)
    if not isinstance(plan.machine, SingleStage):
        raise NotCalculatedError("a map is made of machines with one stage and a condenser only")
    along = [media(model.facts, plan, {**rest, source[0]: value}) for value in source[1]]
    across = [media(model.facts, plan, {**rest, sink[0]: value}) for value in sink[1]]
    if not along or not across:
        raise InputError(Problem("a map needs at least one value of each condition"))
    return operating_map(
        plan.machine,
        [m.source for m in along],
        [m.sink for m in across],
        [m.surroundings for m in across],
        across[0].speed_share,
    )
