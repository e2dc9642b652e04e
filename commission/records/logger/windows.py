"""Where a log stood still long enough for its readings to count."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.records.logger.rows import Log

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray

PARTS = 5
"""A window is cut in so many parts; their means are the samples. Rows of a logger follow one another too closely to
be independent: counting each row would make the spread of the mean far too small (batch means, a common method)."""


@dataclass(frozen=True, slots=True)
class Window:
    """A stretch of a log. `means` and `parts` (means of its parts in order) in SI; `score` is the largest movement over
    its limit, at most 1 for a steady window, None where nothing in it has a limit.
    """

    start: float
    end: float
    means: Mapping[str, float]
    parts: Mapping[str, tuple[float, ...]]
    score: float | None = None


def steady_windows(
    log: Log, length: float = 1200.0, *, limits: str = "site", liquid_sides: frozenset[str] = frozenset()
) -> tuple[Window, ...]:
    """All windows of `length` s, a quarter apart, in which every quantity stood still by the chosen limits.

    `limits` names a set of `steadiness.yaml`. A window with a gap, or in which a quantity has no value at all, is none.
    """
    return tuple(w for w in _windows(log, length, limits, liquid_sides) if w.score is not None and w.score <= 1.0)


def quietest(
    log: Log, length: float = 1200.0, *, limits: str = "site", liquid_sides: frozenset[str] = frozenset()
) -> Window | None:
    """The steadiest of the steady windows, the earliest of equals; None where nothing stood still."""
    found = steady_windows(log, length, limits=limits, liquid_sides=liquid_sides)
    return min(found, key=lambda w: (w.score or 0.0, w.start)) if found else None


def _windows(log: Log, length: float, limits: str, liquid_sides: frozenset[str]) -> Iterator[Window]:
    if not len(log.times):
        return
    start, last = float(log.times[0]), float(log.times[-1])
    step = length / 4.0
    sums = _running_sums(log)
    for n in range(max(0, math.floor((last - length - start) / step + 1e-9) + 1)):
        window = _window(log, start + n * step, start + n * step + length, sums)
        if window is not None:
            score = _score(log, window, limits, liquid_sides)
            yield Window(window.start, window.end, window.means, window.parts, score)


@dataclass(frozen=True, slots=True)
class _Sums:
    """Running sums of one quantity about `middle`, and how many values they count: any mean is one subtraction."""

    middle: float
    sums: NDArray[np.float64]
    counts: NDArray[np.int64]


def _running_sums(log: Log) -> dict[str, _Sums]:
    import numpy as np

    found = {}
    for key, values in log.values.items():
        there = np.isfinite(values)
        middle = float(np.mean(values[there])) if there.any() else 0.0
        sums = np.concatenate(([0.0], np.cumsum(np.where(there, values - middle, 0.0))))
        found[key] = _Sums(middle, sums, np.concatenate(([0], np.cumsum(there))))
    return found


def _window(log: Log, start: float, end: float, sums: Mapping[str, _Sums]) -> Window | None:
    """Means over a stretch; None where it holds a gap or a quantity has a part without values."""
    import numpy as np

    if any(g.start < end and g.end > start for g in log.report.gaps):
        return None
    edges = np.searchsorted(log.times, np.linspace(start, end, PARTS + 1))
    means, parts = {}, {}
    for key, running in sums.items():
        counts = np.diff(running.counts[edges])
        if int(counts.min()) < 1:
            return None
        totals = np.diff(running.sums[edges])
        parts[key] = tuple((running.middle + totals / counts).tolist())
        means[key] = running.middle + float(totals.sum() / counts.sum())
    return Window(start, end, means, parts)


def _score(log: Log, window: Window, limits: str, liquid_sides: frozenset[str]) -> float | None:
    """Largest movement of any row over its limit; None where no quantity of the log has a limit."""
    import numpy as np

    from commission.acceptance.instruments import Reading
    from commission.acceptance.steadiness import library, steadiness

    least = int(library()[limits]["least_samples"])
    first, last = np.searchsorted(log.times, (window.start, window.end))
    readings = []
    for key, mean in window.means.items():
        largest = float(np.nanmax(np.abs(log.values[key][first:last] - mean)))
        # The same mean and the same largest movement as all the rows have, in as few samples as the limits ask for.
        samples = (mean + largest, mean - largest, *(mean for _ in range(max(0, least - 2))))
        readings.append(Reading(key, mean, samples=samples))
    checks = steadiness(readings, None, None, limits=limits, liquid_sides=liquid_sides)
    found = [c.largest / c.limit for c in checks if c.largest is not None and c.limit > 0.0]
    return max(found, default=None)
