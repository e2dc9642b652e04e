"""Expected values as series over the conditions of the day, one for each regime: what a page can carry to the plant.

A regime (head pressure held, free condensing) is a smooth branch of the machine, so a short sum of Chebyshev
polynomials follows it nearly; what it leaves at the points of a grid (a coil that turns wet bends the values) is kept
beside it and read between the points in straight lines. The same grid tells where one regime ends and another begins.
Both are held against points that they were not made from, and the largest miss goes with them, so that nothing is
judged more sharply than it allows.
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from functools import partial
from typing import TYPE_CHECKING

from commission.errors import NotCalculatedError
from commission.manual.live_fit import Axes, Fitting, Point, Series, cell_of

if TYPE_CHECKING:
    from commission.prediction import Nominal, SystemModel

GRID = {1: (41,), 2: (15, 23), 3: (7, 7, 4)}
"""Points of the grid along each axis, by the number of axes."""
MOST_CHECKS = 60
Ranges = Mapping[str, tuple[float, float, float]]
Band = Callable[[str, str, Point], float | None]
GOLDEN = (0.6180339887498949, 0.7548776662466927, 0.8191725133961645)
"""Steps of an even, repeatable scatter (Roberts' sequence for one, two, three dimensions)."""


@dataclass(frozen=True, slots=True)
class LiveTable:
    """`axes` are the grid, `regimes` the number of each of its points in `names` (-1: no balance), the last axis
    fastest; `extras` the lowest, rated and highest value of each further condition; `series` by name of the regime."""

    axes: Axes
    extras: Ranges
    names: tuple[str, ...]
    regimes: tuple[int, ...]
    series: Mapping[str, Series]

    def regimes_around(self, point: Sequence[float]) -> tuple[str, ...]:
        """The regimes at the corners of the cell that holds the point; none outside what was tabulated."""
        cell = cell_of(list(self.axes.values()), point)
        found = [self.regimes[n] for n, _ in cell]
        if not cell or any(n < 0 or self.names[n] not in self.series for n in found):
            return ()
        return tuple(dict.fromkeys(self.names[n] for n in found))

    def value(self, name: str, key: str, point: Sequence[float]) -> float:
        """The expected value of a key in a regime at a point of the axes and the further conditions, SI."""
        series = self.series[name]
        left = math.fsum(series.left[key][n] * share for n, share in cell_of(list(self.axes.values()), point))
        return series.at(key, point) + left


class Asked:
    """The answers of a model at points of the axes and of the further conditions, walked so that each starts from its
    neighbour."""

    def __init__(self, model: SystemModel, keys: Sequence[str]) -> None:
        self._model, self._keys = model, tuple(keys)

    def __call__(self, points: Sequence[Point]) -> dict[Point, Nominal | None]:
        """The answer at each point, None where there is no balance."""
        found = self._model.nominal([dict(zip(self._keys, p, strict=True)) for p in points])
        return {p: None if isinstance(one, NotCalculatedError) else one for p, one in zip(points, found, strict=True)}


def grid_axes(ranges: Ranges) -> dict[str, tuple[float, ...]]:
    """Even points along each axis from its lowest to its highest value."""
    counts = GRID[len(ranges)]
    return {
        k: tuple(low + (high - low) * i / (n - 1) for i in range(n))
        for (k, (low, _, high)), n in zip(ranges.items(), counts, strict=True)
    }


def along_the_way(axes: Sequence[Sequence[float]]) -> list[Point]:
    """All points of a grid so that each lies beside the one before."""
    if not axes:
        return [()]
    rest = along_the_way(axes[1:])
    return [(x, *p) for n, x in enumerate(axes[0]) for p in (rest if n % 2 == 0 else rest[::-1])]


def make_table(
    ask: Asked,
    axes: Axes,
    extras: Ranges,
    found: Mapping[Point, Nominal | None],
    keys: Sequence[str],
    band: Band,
) -> LiveTable:
    """The table of `keys` from the answers `found` on the grid, asked again with the further conditions moved.

    `band(regime, key, point)` is the deviation that a reading could just show; None where it is never judged. Points of
    the grid that no series follows (where a flow runs away, say) count as not tabulated.
    """
    order = list(itertools.product(*axes.values()))
    names = tuple(dict.fromkeys(one.regime for one in found.values() if one is not None))
    moved: Mapping[Point, Nominal | None] = {}
    if extras:
        way = [p for p, one in found.items() if one is not None]
        moved = ask([(*p, *_scattered(n, extras)) for n, p in enumerate(way)])
    checks = ask(_beside(axes, extras, found))
    rated = tuple(r for _, r, _ in extras.values())
    series: dict[str, Series] = {}
    dropped: set[Point] = set()
    for name in names:
        grid = {(*p, *rated): one.values for p, one in found.items() if one is not None and one.regime == name}
        work = Fitting(axes, grid, _of(moved, name), _of(checks, name), keys, partial(band, name))
        made = work.series()
        if made is not None:
            series[name] = made
            dropped |= {p[: len(axes)] for p in work.dropped}
    regimes = tuple(-1 if (one := found[p]) is None or p in dropped else names.index(one.regime) for p in order)
    return LiveTable(axes, extras, names, regimes, series)


def _of(known: Mapping[Point, Nominal | None], name: str) -> dict[Point, Mapping[str, float]]:
    return {p: one.values for p, one in known.items() if one is not None and one.regime == name}


def _scattered(n: int, extras: Ranges) -> Point:
    """The n-th point of an even scatter over the ranges of the further conditions."""
    return tuple(
        low + (high - low) * ((0.5 + (n + 1) * step) % 1.0)
        for (low, _, high), step in zip(extras.values(), GOLDEN, strict=False)
    )


def _beside(
    axes: Axes,
    extras: Ranges,
    found: Mapping[Point, Nominal | None],
) -> list[Point]:
    """Middles of cells, some of them where there are many, with the further conditions scattered anew."""
    middles = [[0.5 * (a + b) for a, b in itertools.pairwise(axis)] for axis in axes.values()]
    way = along_the_way(middles)
    step = max(1, len(way) // (MOST_CHECKS * max(1, len({o.regime for o in found.values() if o}))))
    return [(*p, *_scattered(7 * n + 3, extras)) for n, p in enumerate(way[::step])]
