"""Expected values as series over the conditions of the day, one for each regime: what a page can carry to the plant.

A regime (head pressure held, free condensing) is a smooth branch of the machine, so a short sum of Chebyshev
polynomials follows it; where one regime ends and another begins is told by a grid of points. Each series is held
against points that it was not made from, and the largest miss goes with it, so that nothing is judged more sharply
than it allows.
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from functools import partial
from typing import TYPE_CHECKING

import numpy as np
from numpy.polynomial import chebyshev

from commission.errors import NotCalculatedError

if TYPE_CHECKING:
    from commission.prediction import Nominal, SystemModel

GRID = {1: (41,), 2: (15, 23), 3: (7, 7, 5)}
"""Points of the grid along each axis, by the number of axes."""
DEGREES = {1: (8, 6, 4, 2, 1), 2: (7, 6, 5, 4, 3, 2, 1), 3: (5, 4, 3, 2, 1)}
"""Total degrees that are tried over the axes, by the number of axes."""
WITH_EXTRA = 2
"""Total degree over the axes of the terms that a further condition is multiplied with."""
POINTS_PER_TERM = 1.5
MOST_CHECKS = 60
SHARE = 0.1
"""Largest miss of a series that counts as none, as a share of the deviation that a reading could just show (95 %)."""
ROUNDS, MOST_DROPPED = 6, 0.4
"""Rounds in which the worst tenth of the points that nothing follows are left out, and the share that may be."""

Array = np.ndarray[tuple[int, ...], np.dtype[np.float64]]
Point = tuple[float, ...]
Terms = tuple[tuple[int, ...], ...]
Band = Callable[[str, str, Point], float | None]
GOLDEN = (0.6180339887498949, 0.7548776662466927, 0.8191725133961645)
"""Steps of an even, repeatable scatter (Roberts' sequence for one, two, three dimensions)."""


@dataclass(frozen=True, slots=True)
class Series:
    """Sums of products of Chebyshev polynomials in `terms` (a degree for each condition), one row for each key.

    A condition x enters as (x - centre) / half; the sum of a key among `logs` is the logarithm of its value. `errors`
    is the largest miss at points beside those of the fit, as a share of the deviation that a reading could just show.
    """

    centres: tuple[float, ...]
    halves: tuple[float, ...]
    terms: Terms
    rows: Mapping[str, tuple[float, ...]]
    logs: frozenset[str]
    errors: Mapping[str, float]

    def at(self, key: str, point: Sequence[float]) -> float:
        """The value of one key."""
        scaled = [(x - c) / h for x, c, h in zip(point, self.centres, self.halves, strict=True)]
        found = float(np.array(self.rows[key]) @ _basis(np.array([scaled]), self.terms)[0])
        return math.exp(found) if key in self.logs else found


@dataclass(frozen=True, slots=True)
class LiveTable:
    """`axes` are the grid, `regimes` the number of each of its points in `names` (-1: no balance), the last axis
    fastest; `extras` the range of each further condition; `series` by the name of the regime."""

    axes: Mapping[str, tuple[float, ...]]
    extras: Mapping[str, tuple[float, float, float]]
    names: tuple[str, ...]
    regimes: tuple[int, ...]
    series: Mapping[str, Series]

    def regimes_around(self, point: Sequence[float]) -> tuple[str, ...]:
        """The regimes at the corners of the cell that holds the point; none outside what was tabulated."""
        corners: list[tuple[int, ...]] = []
        for axis, x in zip(self.axes.values(), point, strict=True):
            if not axis[0] <= x <= axis[-1]:
                return ()
            low = min(max(int(np.searchsorted(axis, x, side="right")) - 1, 0), len(axis) - 2)
            corners.append((low, low + 1))
        shape = [len(a) for a in self.axes.values()]
        found = [self.regimes[int(np.ravel_multi_index(c, shape))] for c in itertools.product(*corners)]
        if any(n < 0 or self.names[n] not in self.series for n in found):
            return ()
        return tuple(dict.fromkeys(self.names[n] for n in found))


class Asked:
    """The answers of a model at points of the axes and of the further conditions, walked so that each starts from its
    neighbour."""

    def __init__(self, model: SystemModel, keys: Sequence[str]) -> None:
        self._model, self._keys = model, tuple(keys)

    def __call__(self, points: Sequence[Point]) -> dict[Point, Nominal | None]:
        """The answer at each point, None where there is no balance."""
        found = self._model.nominal([dict(zip(self._keys, p, strict=True)) for p in points])
        return {p: None if isinstance(one, NotCalculatedError) else one for p, one in zip(points, found, strict=True)}


def grid_axes(ranges: Mapping[str, tuple[float, float, float]]) -> dict[str, tuple[float, ...]]:
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
    axes: Mapping[str, tuple[float, ...]],
    extras: Mapping[str, tuple[float, float, float]],
    found: Mapping[Point, Nominal | None],
    keys: Sequence[str],
    band: Band,
) -> LiveTable:
    """The table of `keys` from the answers `found` on the grid, asked again with the further conditions moved.

    `band(regime, key, point)` is the deviation that a reading could just show; None where it is never judged. Points of
    the grid that no series follows (where a flow runs away, say) count as not tabulated.
    """
    rated = tuple(r for _, r, _ in extras.values())
    order = list(itertools.product(*axes.values()))
    names = tuple(dict.fromkeys(one.regime for one in found.values() if one is not None))
    known: dict[Point, Nominal | None] = {(*p, *rated): one for p, one in found.items()}
    if extras:
        known |= ask([(*p, *_scattered(n, extras)) for n, (p, one) in enumerate(found.items()) if one is not None])
    checks = ask(_beside(axes, extras, found))
    series: dict[str, Series] = {}
    dropped: set[Point] = set()
    for name in names:
        work = Fitting(_of(known, name), _of(checks, name), len(axes), keys, partial(band, name))
        made = work.series()
        if made is not None:
            series[name] = made
            dropped |= {p[: len(axes)] for p in work.dropped}
    regimes = tuple(-1 if (one := found[p]) is None or p in dropped else names.index(one.regime) for p in order)
    return LiveTable(axes, extras, names, regimes, series)


def _of(known: Mapping[Point, Nominal | None], name: str) -> dict[Point, Nominal]:
    return {p: one for p, one in known.items() if one is not None and one.regime == name}


def _scattered(n: int, extras: Mapping[str, tuple[float, float, float]]) -> Point:
    """The n-th point of an even scatter over the ranges of the further conditions."""
    return tuple(
        low + (high - low) * ((0.5 + (n + 1) * step) % 1.0)
        for (low, _, high), step in zip(extras.values(), GOLDEN, strict=False)
    )


def _beside(
    axes: Mapping[str, tuple[float, ...]],
    extras: Mapping[str, tuple[float, float, float]],
    found: Mapping[Point, Nominal | None],
) -> list[Point]:
    """Middles of cells, some of them where there are many, with the further conditions scattered anew."""
    middles = [[0.5 * (a + b) for a, b in itertools.pairwise(axis)] for axis in axes.values()]
    way = along_the_way(middles)
    step = max(1, len(way) // (MOST_CHECKS * max(1, len({o.regime for o in found.values() if o}))))
    return [(*p, *_scattered(7 * n + 3, extras)) for n, p in enumerate(way[::step])]


def _terms(axes: int, extras: int, degree: int) -> Terms:
    """All products up to the total degree over the axes; those with a further condition up to a lower one."""
    found = []
    for powers in itertools.product(range(degree + 1), repeat=axes):
        if sum(powers) <= degree:
            found.append((*powers, *(0 for _ in range(extras))))
    least = min(WITH_EXTRA, degree)
    for n in range(extras):
        for powers in itertools.product(range(least + 1), repeat=axes):
            if sum(powers) <= least:
                found.append((*powers, *(int(i == n) for i in range(extras))))
        found.append((*(0 for _ in range(axes)), *(2 * int(i == n) for i in range(extras))))
    for a, b in itertools.combinations(range(extras), 2):
        found.append((*(0 for _ in range(axes)), *(int(i in (a, b)) for i in range(extras))))
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


class Fitting:
    """The fit of one regime: the degree that misses the points beside by least, without points that nothing follows."""

    def __init__(
        self, known: Mapping[Point, Nominal], checks: Mapping[Point, Nominal], axes: int, keys: Sequence[str],
        band: Callable[[str, Point], float | None],
    ) -> None:  # fmt: skip
        self.axes, self.keys = axes, [k for k in keys if known and all(k in one.values for one in known.values())]
        self.points, self.values, self.bands = self._arrays(known, band)
        self.beside, self.exact, self.bands_beside = self._arrays(checks or known, band)
        self.dropped: set[Point] = set()

    def _arrays(
        self, known: Mapping[Point, Nominal], band: Callable[[str, Point], float | None]
    ) -> tuple[Array, Array, Array]:
        """Points, values and bands; an endless band where a key is never judged."""
        whole = {p: one for p, one in known.items() if all(k in one.values for k in self.keys)}
        return (
            np.array(list(whole)),
            np.array([[one.values[k] for k in self.keys] for one in whole.values()]),
            np.array([[band(k, p) or math.inf for k in self.keys] for p in whole]),
        )

    def series(self) -> Series | None:
        """The series, or None where there are too few points for one."""
        if len(self.points) < 2 or not self.keys:
            return None
        for _ in range(ROUNDS):
            found = self._best()
            if found is None:
                return None
            series, misses, beside = found
            bad, bad_beside = misses.max(axis=1) > SHARE, beside.max(axis=1) > SHARE
            if not bad.any() or bad.mean() > MOST_DROPPED:
                break
            worst = misses.max(axis=1) >= max(SHARE, float(np.quantile(misses.max(axis=1), 0.9)))
            self.dropped |= {tuple(map(float, p)) for p in self.points[worst]}
            self.points, self.values, self.bands = self.points[~worst], self.values[~worst], self.bands[~worst]
            near = np.array([self._beside_dropped(p) for p in self.beside])
            keep = ~(near & bad_beside)
            if keep.any():
                self.beside, self.exact, self.bands_beside = (
                    self.beside[keep], self.exact[keep], self.bands_beside[keep]
                )  # fmt: skip
        return series

    def _beside_dropped(self, point: Array) -> bool:
        """Whether a point lies in a cell with a corner that was dropped."""
        steps = [np.diff(np.unique(self.points[:, n])).max(initial=0.0) for n in range(self.axes)]
        return any(all(abs(point[n] - other[n]) <= steps[n] for n in range(self.axes)) for other in self.dropped)

    def _best(self) -> tuple[Series, Array, Array] | None:
        """The best degree, with the misses at the points and beside them as shares of the band."""
        low, high = self.points.min(axis=0), self.points.max(axis=0)
        centres, halves = (high + low) / 2, np.where(high > low, (high - low) / 2, 1.0)
        logs = [bool((self.values[:, n] > 0.0).all()) for n in range(len(self.keys))]
        best: tuple[float, Series, Array, Array] | None = None
        for degree in DEGREES[self.axes]:
            terms = _terms(self.axes, self.points.shape[1] - self.axes, degree)
            if len(terms) * POINTS_PER_TERM > len(self.points):
                continue
            inside = _basis((self.points - centres) / halves, terms)
            outside = _basis((self.beside - centres) / halves, terms)
            plain = self._fit(inside, outside, np.zeros(len(self.keys), dtype=bool))
            logarithms = self._fit(inside, outside, np.array(logs))
            better = logarithms[2].max(axis=0, initial=0.0) < plain[2].max(axis=0, initial=0.0)
            rows, misses, beside = (np.where(better, b, a) for a, b in zip(plain, logarithms, strict=True))
            worst = float(np.quantile(beside.max(axis=1), 0.95))
            if best is None or worst < best[0]:
                used = frozenset(k for k, one, log in zip(self.keys, better, logs, strict=True) if one and log)
                series = Series(
                    tuple(map(float, centres)), tuple(map(float, halves)), terms,
                    {k: tuple(map(float, rows[:, n])) for n, k in enumerate(self.keys)}, used,
                    {k: float(beside[:, n].max()) for n, k in enumerate(self.keys)},
                )  # fmt: skip
                best = worst, series, misses, beside
        return None if best is None else best[1:]

    def _fit(self, inside: Array, outside: Array, logs: Array) -> tuple[Array, Array, Array]:
        """Rows of the series, and its misses as shares of the band, at the points and beside them."""
        wanted = np.where(logs, np.log(np.where(logs, self.values, 1.0)), self.values)
        rows: Array = np.asarray(np.linalg.lstsq(inside, wanted, rcond=None)[0], dtype=np.float64)

        def misses(basis: Array, exact: Array, bands: Array) -> Array:
            value = basis @ rows
            return np.abs(np.where(logs, np.exp(np.where(logs, value, 0.0)), value) - exact) / bands

        return rows, misses(inside, self.values, self.bands), misses(outside, self.exact, self.bands_beside)


def digits_for(step: float) -> int:
    """Digits behind the point that keep a number to within `step`."""
    return max(0, -math.floor(math.log10(step))) if step > 0.0 else 12
