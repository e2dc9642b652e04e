"""The fit behind the series of a live day sheet: Chebyshev products, and what they leave at the points of the grid."""

from __future__ import annotations

import itertools
import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.polynomial import chebyshev

DEGREES = {1: (8, 6, 4, 2, 1), 2: (7, 6, 5, 4, 3, 2, 1), 3: (4, 3, 2, 1)}
"""Total degrees that are tried over the axes, by the number of axes."""
WITH_EXTRA, WITH_SQUARE = 2, 1
"""Total degrees over the axes of the terms that a further condition, and its square, are multiplied with."""
POINTS_PER_TERM = 1.5
RUNAWAY = 1.5
"""A point that a series misses by more than so many bands is one that nothing follows."""
MARGIN, NEAR = 1.5, {1: 1.0, 2: 1.0, 3: 0.9}
"""The miss to reckon with is this times the largest at points beside. Of three conditions, the tenth of the points with
the largest misses is left out: they lie in far corners of the range, where a coil dries or a flow runs away."""
UNSEEN = 0.1
"""The miss to reckon with, as a share of the band, where no point lies beside."""
ROUNDS, MOST_DROPPED = 8, 0.35
"""Rounds in which the worst tenth of such points are left out, and the share of all that may be."""

Array = np.ndarray[tuple[int, ...], np.dtype[np.float64]]
Flags = np.ndarray[tuple[int, ...], np.dtype[np.bool_]]
Point = tuple[float, ...]
Axes = Mapping[str, tuple[float, ...]]
Terms = tuple[tuple[int, ...], ...]
Known = Mapping[Point, Mapping[str, float]]


@dataclass(frozen=True, slots=True)
class Series:
    """Sums of products of Chebyshev polynomials in `terms` (a degree for each condition), one row for each key.

    A condition x enters as (x - centre) / half; the sum of a key among `logs` is the logarithm of its value. `left` is
    what remains at each point of the grid, the last axis fastest, zero where another regime holds. `errors` is the
    miss to reckon with, from points beside, as a share of the deviation that a reading could just show.
    """

    centres: tuple[float, ...]
    halves: tuple[float, ...]
    terms: Terms
    rows: Mapping[str, tuple[float, ...]]
    logs: frozenset[str]
    left: Mapping[str, Array]
    errors: Mapping[str, float]

    def at(self, key: str, point: Sequence[float]) -> float:
        """The sum alone."""
        scaled = [(x - c) / h for x, c, h in zip(point, self.centres, self.halves, strict=True)]
        found = float(np.array(self.rows[key]) @ _basis(np.array([scaled]), self.terms)[0])
        return math.exp(found) if key in self.logs else found


def cell_of(axes: Sequence[Sequence[float]], point: Sequence[float]) -> list[tuple[int, float]]:
    """The corners of the cell that holds a point, by number in the grid, with their shares; none outside."""
    corners: list[tuple[int, float]] = [(0, 1.0)]
    for axis, x in zip(axes, point, strict=False):
        if not axis[0] - 1e-9 <= x <= axis[-1] + 1e-9:
            return []
        low = min(max(int(np.searchsorted(axis, x, side="right")) - 1, 0), len(axis) - 2)
        share = (x - axis[low]) / (axis[low + 1] - axis[low])
        corners = [
            (number * len(axis) + low + side, part * (share if side else 1.0 - share))
            for number, part in corners
            for side in (0, 1)
        ]
    return corners


def _terms(axes: int, extras: int, degree: int) -> Terms:
    """All products up to the total degree over the axes; those with further conditions up to lower ones."""

    def over_axes(most: int) -> list[tuple[int, ...]]:
        return [p for p in itertools.product(range(most + 1), repeat=axes) if sum(p) <= most]

    alone = tuple(0 for _ in range(extras))
    found = [(*powers, *alone) for powers in over_axes(degree)]
    for n in range(extras):
        for power, most in ((1, WITH_EXTRA), (2, WITH_SQUARE)):
            with_it = tuple(power * int(i == n) for i in range(extras))
            found += [(*powers, *with_it) for powers in over_axes(min(most, degree))]
    for pair in itertools.combinations(range(extras), 2):
        found.append((*(0 for _ in range(axes)), *(int(i in pair) for i in range(extras))))
    return tuple(found)


def _basis(scaled: Array, terms: Terms) -> Array:
    """Products of Chebyshev polynomials: a row for each point, a column for each term."""
    degree = max(max(t) for t in terms)
    polynomials = [chebyshev.chebvander(scaled[:, n], degree) for n in range(scaled.shape[1])]
    columns = np.ones((len(scaled), len(terms)))
    for column, term in enumerate(terms):
        for n, power in enumerate(term):
            columns[:, column] *= polynomials[n][:, power]
    return columns


def _to_reckon_with(errors: Array, share: float) -> list[float]:
    """For each key the miss that goes with the series; a tenth of the band where no point lay beside."""
    if not len(errors):
        return [UNSEEN] * errors.shape[1]
    return [MARGIN * float(x) for x in np.quantile(errors, share, axis=0)]


class Fitting:
    """The fit of one regime: the degree that misses the points beside by least, without points that nothing follows."""

    def __init__(
        self, axes: Axes, grid: Known, moved: Known, checks: Known, keys: Sequence[str],
        band: Callable[[str, Point], float | None],
    ) -> None:  # fmt: skip
        self.axes = list(axes.values())
        self.keys = [k for k in keys if grid and all(k in values for values in (*grid.values(), *moved.values()))]
        self._band = band
        self.on_grid = len(grid)
        self.points, self.values, self.bands = self._arrays({**grid, **moved})
        self.checks = {p: v for p, v in checks.items() if all(k in v for k in self.keys)}
        self.dropped: set[Point] = set()

    def _arrays(self, known: Known) -> tuple[Array, Array, Array]:
        """Points, values and bands; an endless band where a key is never judged."""
        return (
            np.array(list(known)),
            np.array([[values[k] for k in self.keys] for values in known.values()]),
            np.array([[self._band(k, p) or math.inf for k in self.keys] for p in known]),
        )

    def series(self) -> Series | None:
        """The series, or None where there are too few points for one."""
        if self.on_grid < 2 or not self.keys:
            return None
        allowed = MOST_DROPPED * len(self.points)
        for _ in range(ROUNDS):
            found = self._best()
            if found is None:
                return None
            series, misses = found
            bad = misses > max(RUNAWAY, float(np.quantile(misses, 0.9)))
            if not bad.any() or bad.sum() > allowed:
                break
            allowed -= bad.sum()
            self.dropped |= {tuple(map(float, p)) for p in self.points[: self.on_grid][bad[: self.on_grid]]}
            self.on_grid -= int(bad[: self.on_grid].sum())
            self.points, self.values, self.bands = self.points[~bad], self.values[~bad], self.bands[~bad]
        return series

    def _best(self) -> tuple[Series, Array] | None:
        """The best degree, with how far the sum alone misses each point, in bands."""
        best: tuple[float, Series, Array] | None = None
        corners = self._corners()
        for degree in DEGREES[len(self.axes)]:
            terms = _terms(len(self.axes), self.points.shape[1] - len(self.axes), degree)
            if len(terms) * POINTS_PER_TERM <= len(self.points):
                series, misses, worst = self._try(terms, corners)
                if best is None or worst < best[0]:
                    best = worst, series, misses
        return None if best is None else best[1:]

    def _corners(self) -> list[tuple[Point, list[tuple[int, float]]]]:
        """The points beside that lie in cells whose every corner is fitted here, with these corners."""
        known = set(self._numbers())
        found = [(p, cell_of(self.axes, p)) for p in self.checks]
        return [(p, cell) for p, cell in found if cell and all(n in known for n, _ in cell)]

    def _numbers(self) -> list[int]:
        """The number in the grid of each fitted point of it."""
        places = [np.searchsorted(a, self.points[: self.on_grid, n] - 1e-9) for n, a in enumerate(self.axes)]
        return [int(n) for n in np.ravel_multi_index(places, [len(a) for a in self.axes])]

    def _try(
        self, terms: Terms, corners: Sequence[tuple[Point, list[tuple[int, float]]]]
    ) -> tuple[Series, Array, float]:
        """One set of terms: the series, how far its sum misses each point, and the worst share beside the points."""
        low, high = self.points.min(axis=0), self.points.max(axis=0)
        centres, halves = (high + low) / 2, np.where(high > low, (high - low) / 2, 1.0)
        basis = _basis((self.points - centres) / halves, terms)
        positive: Flags = np.asarray((self.values > 0.0).all(axis=0), dtype=np.bool_)
        plain, plain_gaps = self._fit(basis, np.zeros_like(positive))
        logs, log_gaps = self._fit(basis, positive)
        better = positive & (np.abs(log_gaps).max(axis=0) < np.abs(plain_gaps).max(axis=0))
        rows, gaps = np.where(better, logs, plain), np.where(better, log_gaps, plain_gaps)
        left = np.zeros((math.prod(len(a) for a in self.axes), len(self.keys)))
        left[self._numbers()] = gaps[: self.on_grid]
        used = frozenset(k for k, log in zip(self.keys, better, strict=True) if log)
        errors = self._beside(corners, (centres, halves, terms), rows, better, left)
        series = Series(
            tuple(map(float, centres)), tuple(map(float, halves)), terms,
            {k: tuple(map(float, rows[:, n])) for n, k in enumerate(self.keys)}, used,
            {k: left[:, n] for n, k in enumerate(self.keys)},
            dict(zip(self.keys, _to_reckon_with(errors, NEAR[len(self.axes)]), strict=True)),
        )  # fmt: skip
        worst = float(np.quantile(errors.max(axis=1), 0.9)) if len(errors) else math.inf
        return series, (np.abs(gaps) / self.bands).max(axis=1), worst

    def _fit(self, basis: Array, logs: Flags) -> tuple[Array, Array]:
        """Rows of the series, and what they leave at each point."""
        wanted = np.where(logs, np.log(np.where(logs, self.values, 1.0)), self.values)
        rows: Array = np.asarray(np.linalg.lstsq(basis, wanted, rcond=None)[0], dtype=np.float64)
        sums = basis @ rows
        return rows, self.values - np.where(logs, np.exp(np.where(logs, sums, 0.0)), sums)

    def _beside(
        self, corners: Sequence[tuple[Point, list[tuple[int, float]]]], scale: tuple[Array, Array, Terms], rows: Array,
        logs: Flags, left: Array,
    ) -> Array:  # fmt: skip
        """The miss at each point beside, as a share of its band, for each key."""
        if not corners:
            return np.zeros((0, len(self.keys)))
        centres, halves, terms = scale
        sums = _basis((np.array([p for p, _ in corners]) - centres) / halves, terms) @ rows
        found = np.where(logs, np.exp(np.where(logs, sums, 0.0)), sums)
        found += np.array([sum(left[n] * share for n, share in cell) for _, cell in corners])
        _, exact, bands = self._arrays({p: self.checks[p] for p, _ in corners})
        return np.abs(found - exact) / bands
