"""Capacity stages of equal compressors on one circuit: what share of them works, and what power that takes."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import TypeVar

from commission.machine.circuit import Parts

M = TypeVar("M", bound=Parts)
_WHOLE_MACHINES = 1e-9
"""Share of one machine below which it counts as whole, or as standing still."""


@dataclass(frozen=True, slots=True)
class Stage:
    """`displacement` and `power` as shares (0-1) of those of the whole set between the same pressures.

    `each` is the share (0-1) of the power at this stage that a machine takes which runs whole, or the only one.
    """

    displacement: float = 1.0
    power: float = 1.0
    each: float = 1.0


def stage_of(share: float, count: int, unloading_loss: float) -> Stage:
    """The stage at which a `share` (0-1) of the displacement of `count` equal machines works.

    Machines run whole one after the other, and those that stand still cost nothing; what is left of the share is one
    more machine, unloaded (cylinders held open, slide drawn back, scrolls apart). Between the same pressures a machine
    unloaded to r takes r + loss (1 - r) of its power: the straight line through full load to the power `unloading_loss`
    of friction and of gas that is moved without being compressed. It is the shape that EN 14825 gives the part-load
    power of water chillers and heat pumps, there with 1 - Cc = 0.1 (from memory).

    Raises:
        ValueError: no machine, or a share outside 0-1.
    """
    if count < 1 or not 0.0 < share <= 1.0:
        raise ValueError(f"{share} of {count} machines is no stage")
    whole = math.floor(share * count + _WHOLE_MACHINES)
    rest = share * count - whole
    if rest < _WHOLE_MACHINES:
        return Stage(whole / count, whole / count, 1.0 / whole)
    machines = whole + rest + unloading_loss * (1.0 - rest)
    return Stage(share, machines / count, 1.0 / machines if whole else 1.0)


def staged(machine: M, stage: Stage) -> M:
    """The machine at a stage; its exchangers are those of the whole set."""
    compressor = machine.compressor.staged(stage.displacement, stage.power)
    return replace(machine, compressor=compressor)
