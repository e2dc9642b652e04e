"""How far a reading may lie from what is expected before that means anything: per regime, over the conditions.

The rule is that of `acceptance`: each sample is a visit whose readings are exactly what is expected, evaluated with the
instruments of the plant. Through the logarithms of the uncertainties a low polynomial over the conditions is laid, and
they follow it well within a regime; the page reads the polynomial and knows nothing of how it came about.
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Callable, Collection, Mapping, Sequence
from dataclasses import dataclass
from functools import partial
from typing import TYPE_CHECKING

import numpy as np

from commission.errors import NotCalculatedError

if TYPE_CHECKING:
    from commission.acceptance import Evaluation
    from commission.description import LoadedPlant
    from commission.manual.live_fit import Point
    from commission.prediction import Nominal, SystemModel

SAMPLES = {1: 5, 2: 9, 3: 13}
"""Visits worked through, by the number of axes; a regime gets its share of them by its size."""


TWO_SIDED = 1.959963984540054
"""The normal quantile for 95 %, both sides; uncertainties from few samples are widened before (`Budget.one_sided`)."""


@dataclass(frozen=True, slots=True)
class Visit:
    """The standard uncertainty of reading minus expectation by key (SI), widened where samples were few; and which
    readings have none, with the reason."""

    uncertainties: Mapping[str, float]
    not_judged: Mapping[str, str]


@dataclass(frozen=True, slots=True)
class Bands:
    """How uncertain reading minus expectation is, over the conditions of each regime.

    `ends` are those of the axes; `logs` by regime and key the factors of `shape` for the logarithm of the standard
    uncertainty (SI) and how far off that may be, relative; `unknown` by condition, regime and key what the variance
    gains where the condition is not known.
    """

    ends: tuple[tuple[float, float], ...]
    logs: Mapping[str, Mapping[str, tuple[tuple[float, ...], float]]]
    unknown: Mapping[str, Mapping[str, Mapping[str, float]]]

    @property
    def judged(self) -> tuple[str, ...]:
        """The keys that have a band in some regime."""
        return tuple(dict.fromkeys(k for keys in self.logs.values() for k in keys))

    def standard(self, regime: str, key: str, point: Sequence[float]) -> float | None:
        """The standard uncertainty at a point of the axes (what follows is left out), all conditions known."""
        if key not in self.logs.get(regime, {}):
            return None
        factors = self.logs[regime][key][0]
        terms = shape(point[: len(self.ends)], self.ends)
        return math.exp(sum(f * x for f, x in zip(factors, terms, strict=False)))

    def shown(self, regime: str, key: str, point: Sequence[float]) -> float | None:
        """The deviation that a reading could just show, 95 %."""
        standard = self.standard(regime, key, point)
        return None if standard is None else TWO_SIDED * standard


def work_through(
    loaded: LoadedPlant,
    model: SystemModel,
    conditions: Mapping[str, float],
    readings: Collection[str],
    instruments: Mapping[str, str | None],
    counted: Collection[str],
) -> Visit:
    """A visit whose readings are what is expected, with these instruments; uncertainties of the `counted` keys.

    The capacity stage is that at which the model is rated.

    Raises:
        NotCalculatedError: the model has no balance there, or an assumption within its range has none.
    """
    from commission.acceptance import Reading, evaluate

    steps = {k: axis.rated for k, axis in model.condition_axes.items() if axis.steps}
    conditions = {**steps, **conditions}
    expected = model.predict(conditions).expected
    asked = [Reading(k, v, instruments.get(k)) for k, v in conditions.items()]
    read = [Reading(k, expected[k].value, instruments.get(k)) for k in readings if k in expected]
    found = evaluate(loaded, model, asked, read)
    return Visit(
        {d.key: d.budget.one_sided(0.975) for d in found.deviations if d.key in counted and _by_page(found, d.key)},
        found.not_judged,
    )


def _by_page(found: Evaluation, key: str) -> bool:
    """Whether the page can make this reading itself: capacities by the liquid alone, and COPs of these."""
    capacity = key.replace("_cop", "_capacity")
    if capacity not in ("cooling_capacity", "heating_capacity") or capacity in found.measured:
        return True
    return capacity in found.derived and found.derived[capacity].explained.method == "liquid_side_capacity"


def spread_out(points: Sequence[Point], ends: Sequence[tuple[float, float]], most: int) -> list[Point]:
    """At most so many of the points, each as far as can be from those before, the first nearest to their middle."""
    if not points:
        return []
    scaled = np.array([[(x - low) / (high - low) for x, (low, high) in zip(p, ends, strict=True)] for p in points])
    chosen = [int(np.argmin(((scaled - scaled.mean(axis=0)) ** 2).sum(axis=1)))]
    while len(chosen) < min(most, len(points)):
        distance = np.min([((scaled - scaled[n]) ** 2).sum(axis=1) for n in chosen], axis=0)
        chosen.append(int(np.argmax(distance)))
    return [points[n] for n in chosen]


def inner(points: Sequence[Point], axes: Sequence[Sequence[float]]) -> list[Point]:
    """Those of the points whose neighbours on the grid are among them: away from where another regime begins."""
    numbers = [{x: n for n, x in enumerate(axis)} for axis in axes]
    places = {tuple(number[x] for number, x in zip(numbers, p, strict=True)): p for p in points}

    def surrounded(place: tuple[int, ...]) -> bool:
        return all(
            not 0 <= place[n] + step < len(axes[n]) or (*place[:n], place[n] + step, *place[n + 1 :]) in places
            for n in range(len(axes))
            for step in (-1, 1)
        )

    return [p for place, p in places.items() if surrounded(place)]


def make_bands(
    loaded: LoadedPlant,
    model: SystemModel,
    axes: Mapping[str, Sequence[float]],
    found: Mapping[Point, Nominal | None],
    extras: Mapping[str, float],
    readings: Collection[str],
    instruments: Mapping[str, str | None],
    counted: Collection[str],
) -> Bands:
    """Bands from points where the model has an answer (`found`); `extras` holds further conditions at rated value.

    Raises:
        NotCalculatedError: at none of the points a visit could be worked through; the reason of the last.
    """
    ends = [(a[0], a[-1]) for a in axes.values()]
    regimes: dict[str, list[Point]] = {}
    for point, one in found.items():
        if one is not None:
            regimes.setdefault(one.regime, []).append(point)
    whole = sum(map(len, regimes.values()))
    planes: dict[str, dict[str, tuple[tuple[float, ...], float]]] = {}
    unknown: dict[str, dict[str, dict[str, float]]] = {k: {} for k in extras}
    reason = "no point of the range could be worked through"

    def visit(point: Point, without: str = "") -> Visit:
        at = {**dict(zip(axes, point, strict=True)), **{k: v for k, v in extras.items() if k != without}}
        return work_through(loaded, model, at, readings, instruments, counted)

    for regime, points in regimes.items():
        worked: list[tuple[Point, Visit]] = []
        inside = inner(points, list(axes.values())) or points
        share = len(points) / whole
        for point in spread_out(inside, ends, max(2, round(SAMPLES[len(axes)] * min(1.0, 2.0 * share)))):
            try:
                worked.append((point, visit(point)))
            except NotCalculatedError as error:
                reason = str(error)
        if not worked:
            continue
        planes[regime] = _fitted(worked, ends)
        for key in extras:
            unknown[key][regime] = _gained(worked[0][1], partial(visit, worked[0][0], key))
    if not planes:
        raise NotCalculatedError(reason)
    return Bands(tuple(ends), planes, unknown)


def _gained(known: Visit, visit_without: Callable[[], Visit]) -> dict[str, float]:
    """What the variance gains where a condition is not known."""
    try:
        without = visit_without()
    except NotCalculatedError:
        return {}
    both = known.uncertainties.keys() & without.uncertainties.keys()
    return {k: without.uncertainties[k] ** 2 - known.uncertainties[k] ** 2 for k in sorted(both)}


def _fitted(
    worked: Sequence[tuple[Point, Visit]], ends: Sequence[tuple[float, float]]
) -> dict[str, tuple[tuple[float, ...], float]]:
    """For each key the logarithm of the standard uncertainty over the conditions, and how far off it may be, relative.

    The error is found by leaving each visit out in turn; with too few visits the largest uncertainty stands for all.
    """
    found = {}
    for key in worked[0][1].uncertainties:
        pairs = [(p, v.uncertainties[key]) for p, v in worked if v.uncertainties.get(key, 0.0) > 0.0]
        if not pairs:
            continue
        rows = np.array([shape(p, ends) for p, _ in pairs])
        logs = np.log([u for _, u in pairs])
        terms = next((n for n in _term_counts(len(ends)) if 1.3 * n <= len(pairs)), 1)
        fitted = np.linalg.lstsq(rows[:, :terms], logs, rcond=None)[0]
        hat = rows[:, :terms] @ np.linalg.pinv(rows[:, :terms])
        left_out = (logs - rows[:, :terms] @ fitted) / np.maximum(1.0 - np.diag(hat), 0.2)
        error = float(np.sqrt(np.mean(left_out**2)))
        found[key] = tuple(map(float, fitted)), float(np.expm1(error))
    return found


def shape(point: Sequence[float], ends: Sequence[tuple[float, float]]) -> list[float]:
    """One, the conditions (from -1/2 to 1/2 over each axis), their squares, their products."""
    x = [(v - low) / (high - low) - 0.5 for v, (low, high) in zip(point, ends, strict=True)]
    return [1.0, *x, *(a * a for a in x), *(a * b for a, b in itertools.combinations(x, 2))]


def _term_counts(axes: int) -> tuple[int, ...]:
    """Numbers of terms that can be used, the most first: with products, with squares, level lines, a constant."""
    return 1 + 2 * axes + axes * (axes - 1) // 2, 1 + 2 * axes, 1 + axes, 1
