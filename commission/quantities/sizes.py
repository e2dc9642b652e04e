"""Which unit a person would choose for a value by its size: 110 W and not 0.11 kW, 7.1 h and not 427 min."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal

from commission.quantities.kinds import Kind
from commission.quantities.units import find_unit

UnitSystem = Literal["metric", "us_customary"]
_ALWAYS = math.inf


@dataclass(frozen=True, slots=True)
class Step:
    """The unit of values below `below` (SI) and the figures it is shown with.

    `digits` are those behind the point; `figures` are significant ones in their place, at least whole numbers. With
    `round_numbers` a whole number is shown without a point: 24 h, 28 mm.
    """

    below: float
    unit: str
    digits: int = 0
    figures: int = 0
    round_numbers: bool = False


_TIMES = (
    Step(120.0, "s"),
    Step(7200.0, "min", 1, round_numbers=True),
    Step(172800.0, "h", 1, round_numbers=True),
    Step(_ALWAYS, "days", 1, round_numbers=True),
)
_SMALL_SHARE = (Step(0.1, "%", 1, round_numbers=True),)
_LITTLE_POWER = (Step(500.0, "W", figures=2),)
_LITTLE_WATER = (Step(0.5 / 3600, "L/h", figures=2),)
_BY_SIZE: Mapping[UnitSystem, Mapping[Kind, tuple[Step, ...]]] = {
    "metric": {
        Kind.DURATION: _TIMES,
        Kind.POWER: _LITTLE_POWER,
        Kind.HEAT_FLOW: _LITTLE_POWER,
        Kind.PRESSURE_DIFFERENCE: (Step(1e3, "Pa"), Step(5e3, "bar", 3), Step(_ALWAYS, "bar", 2)),
        Kind.MASS: (Step(0.1, "g", 0, 2),),
        Kind.VOLUME: (Step(0.1, "L", 1), Step(3.0, "L"), Step(_ALWAYS, "m3", 1)),
        Kind.VOLUME_FLOW: _LITTLE_WATER,
        Kind.LIQUID_FLOW: _LITTLE_WATER,
        Kind.DENSITY: (Step(1.0, "g/m3", 1, round_numbers=True),),
        Kind.RATIO: _SMALL_SHARE,
        Kind.LENGTH: (Step(0.5, "mm", 1, round_numbers=True),),
    },
    "us_customary": {
        Kind.DURATION: _TIMES,
        Kind.POWER: _LITTLE_POWER,
        Kind.PRESSURE_DIFFERENCE: (Step(1e3, "in w.g.", 2),),
        Kind.RATIO: _SMALL_SHARE,
        Kind.LENGTH: (Step(0.5, "in", figures=3),),
    },
}
"""Where no kind or size is named, the usual unit of the kind stands."""


def by_size(kind: Kind, size: float, system: UnitSystem) -> tuple[str, int] | None:
    """Unit and digits behind the point for a value of `size` (SI), or None where the usual unit of the kind is right.

    Raises:
        ValueError: a row names a unit that is not one of its kind (a fault of the package, not of a user).
    """
    size = abs(size)
    step = next((s for s in _BY_SIZE[system].get(kind, ()) if size < s.below), None)
    if step is None or size == 0.0:
        return None
    unit = find_unit(step.unit, kind)
    if unit is None:
        raise ValueError(f"{step.unit} is not a unit of {kind}")
    return step.unit, _digits(step, size / unit.factor)


def _digits(step: Step, shown: float) -> int:
    if step.figures:
        return max(0, step.figures - 1 - math.floor(math.log10(shown)))
    if step.round_numbers and abs(shown - round(shown)) < 1e-6 * max(1.0, shown):
        return 0
    return step.digits
