"""Values on a regular grid, read between its points: for the supplier's table and for the frozen sheet."""

from __future__ import annotations

import itertools
from bisect import bisect_right
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from commission.errors import NotCalculatedError
from commission.quantities import NOMENCLATURE, Quantity

_SLACK = 1e-6


@dataclass(frozen=True, slots=True)
class Axis:
    """One condition of a grid and its values in SI, ascending."""

    key: str
    values: tuple[float, ...]


def points(axes: Sequence[Axis]) -> list[dict[str, float]]:
    """All points of the grid in row order (the last axis runs fastest)."""
    return [
        dict(zip((a.key for a in axes), combination, strict=True))
        for combination in itertools.product(*(a.values for a in axes))
    ]


def middles(axes: Sequence[Axis]) -> list[dict[str, float]]:
    """The middle of every cell of the grid: where reading between its points is worst."""
    halves = [Axis(a.key, tuple((x + y) / 2 for x, y in itertools.pairwise(a.values)) or a.values) for a in axes]
    return points(halves)


def interpolate(
    axes: Sequence[Axis],
    values: Sequence[float],
    at: Mapping[str, float],
    names: Mapping[str, Quantity] = NOMENCLATURE,
) -> tuple[float, dict[str, float]]:
    """Value at a point, and its slope along each axis, linear along each axis between grid points.

    `names` is the nomenclature of the system.

    Raises:
        NotCalculatedError: a condition is missing, or lies outside the grid.
    """
    cells = [_cell(axis, at, names) for axis in axes]
    value = 0.0
    slopes = dict.fromkeys((a.key for a in axes), 0.0)
    for corner in itertools.product((0, 1), repeat=len(axes)):
        number, weights = 0, []
        for axis, (low, share), side in zip(axes, cells, corner, strict=True):
            number = number * len(axis.values) + min(low + side, len(axis.values) - 1)
            weights.append(share if side else 1.0 - share)
        value += _product(weights) * values[number]
        for n, axis in enumerate(axes):
            if len(axis.values) > 1:
                low = cells[n][0]
                sign = (1.0 if corner[n] else -1.0) / (axis.values[low + 1] - axis.values[low])
                slopes[axis.key] += sign * _product(weights[:n] + weights[n + 1 :]) * values[number]
    return value, slopes


def _cell(axis: Axis, at: Mapping[str, float], names: Mapping[str, Quantity]) -> tuple[int, float]:
    """Number of the cell along an axis and the share of it below the point."""
    label = names[axis.key].words
    if axis.key not in at:
        raise NotCalculatedError(f"it needs a reading of {label}")
    x, values = at[axis.key], axis.values
    slack = _SLACK * max(abs(values[0]), abs(values[-1]))
    if not values[0] - slack <= x <= values[-1] + slack:
        raise NotCalculatedError(f"the measured {label} lies outside the range that was agreed")
    if len(values) == 1:
        return 0, 0.0
    low = min(max(bisect_right(values, x) - 1, 0), len(values) - 2)
    return low, (x - values[low]) / (values[low + 1] - values[low])


def _product(numbers: Sequence[float]) -> float:
    result = 1.0
    for number in numbers:
        result *= number
    return result
