"""Whole cycles of a log, and what is read over them: where the plant cycles or defrosts no single moment speaks for it.

A cycle by `start` runs from one start of the compressor to the next. What the model expects is the plant running
steadily, so readings are means of the running time, without the first minutes after each start.

A cycle by `defrost` runs from one beginning of a defrost to the next, in a machine that runs through. What is counted
in energy (power, capacity, flows) and the media are means over the whole cycle, the defrost included, as EN 14511-3
takes them for a transient test (from memory); pressures and temperatures of the refrigerant are means of the time
between defrosts, without the first minutes after each.
"""

from __future__ import annotations

import itertools
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

from commission.errors import NotCalculatedError
from commission.quantities import NOMENCLATURE, Kind
from commission.records.logger.rows import Log

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray

SETTLE = 180.0
"""Seconds after a start or a defrost in which nothing is read: pressures are being pulled apart, probes lag (common
practice, no source)."""
_SHORTEST = 60.0
"""Seconds; what is on for less is the bounce of a contactor, no start."""
_WHOLE: Mapping[str, tuple[Kind, ...]] = {
    "start": (),
    "defrost": (Kind.POWER, Kind.HEAT_FLOW, Kind.VOLUME_FLOW, Kind.RATIO),
}
"""Kinds that are means over the whole cycle. The media are too, whatever their kind; nothing is in cycles by start."""


@dataclass(frozen=True, slots=True)
class Cycles:
    """Whole cycles that follow one another without a hole; `edges` are their beginnings and the end of the last one (s
    since 1970-01-01 UTC).

    `means` holds for each quantity one mean for each cycle, SI. `shares` is the part of each in which the compressor
    ran (`by` start), or in which it defrosted (`by` defrost).
    """

    by: Literal["start", "defrost"]
    edges: tuple[float, ...]
    means: Mapping[str, tuple[float, ...]]
    shares: tuple[float, ...]

    @property
    def count(self) -> int:
        """How many whole cycles there are."""
        return len(self.shares)

    @property
    def seconds(self) -> float:
        """How long they last together."""
        return self.edges[-1] - self.edges[0]

    @property
    def share(self) -> float:
        """The part of all their time in which it ran, or defrosted."""
        lengths = (b - a for a, b in itertools.pairwise(self.edges))
        return sum(s * length for s, length in zip(self.shares, lengths, strict=True)) / self.seconds

    def last(self, count: int) -> Cycles:
        """The last `count` of them."""
        means = {k: v[-count:] for k, v in self.means.items()}
        return Cycles(self.by, self.edges[-count - 1 :], means, self.shares[-count:])


def whole_cycles(log: Log) -> tuple[Cycles, ...]:
    """Every stretch of whole cycles of the log in the order of their times, each as long as it can be.

    A hole in the log, or a cycle in which a quantity has no value where it should be read, ends a stretch.

    Raises:
        NotCalculatedError: the log shows no level of running and standstill, or less than one whole cycle.
    """
    by, on = _signal(log)
    found: list[list[_Cycle]] = [[]]
    for first, last in itertools.pairwise(_beginnings(log.times, on)):
        one = _of_one(log, by, on, first, last)
        if one is None:
            found.append([])
        else:
            found[-1].append(one)
    stretches = tuple(_together(by, cycles) for cycles in found if cycles)
    if not stretches:
        what = "from one start of the compressor to the next" if by == "start" else "from one defrost to the next"
        raise NotCalculatedError(f"the log holds less than one whole cycle, {what}, in which everything was read")
    return stretches


def best_cycles(log: Log, least: int, least_seconds: float) -> Cycles:
    """The latest cycles that are enough: `least` of them, or fewer that last `least_seconds`; else all that there are.

    Raises:
        NotCalculatedError: as `whole_cycles`.
    """
    stretches = whole_cycles(log)
    for stretch in reversed(stretches):
        for count in range(1, stretch.count + 1):
            cut = stretch.last(count)
            if count >= least or cut.seconds >= least_seconds:
                return cut
    return max(stretches, key=lambda s: (s.count, s.edges[-1]))


@dataclass(frozen=True, slots=True)
class _Cycle:
    """One whole cycle from `start` to `end`."""

    start: float
    end: float
    means: Mapping[str, float]
    share: float


def _signal(log: Log) -> tuple[Literal["start", "defrost"], NDArray[np.bool_]]:
    """What the mapping says shows the cycle, or else the power by its two levels; True while it runs, or defrosts."""
    import numpy as np

    named = log.mapping.cycle
    if named is not None:
        assert log.cycle is not None
        return named.by, np.asarray(log.cycle > named.level)
    power = log.values.get("power_input")
    if power is None or not np.any(np.isfinite(power)):
        raise NotCalculatedError("nothing in the log shows when it runs: name a column under `cycle` in the mapping")
    low, high = (float(x) for x in np.nanpercentile(power, (10, 90)))
    if high <= 2.0 * abs(low):
        raise NotCalculatedError("the power in the log has no two clear levels: it does not cycle, or the log is short")
    return "start", np.where(np.isfinite(power), power, low) > 0.5 * (low + high)


def _beginnings(times: NDArray[np.float64], on: NDArray[np.bool_]) -> list[float]:
    """Moments at which it goes on and stays on for a while."""
    import numpy as np

    edges = np.flatnonzero(np.diff(on.astype(np.int8))) + 1
    ends = [float(times[e]) for e in edges[1:]] + [float(times[-1])]
    pairs = zip(edges, ends, strict=False)
    return [float(times[e]) for e, end in pairs if on[e] and end - float(times[e]) >= _SHORTEST]


def _of_one(log: Log, by: str, on: NDArray[np.bool_], first: float, last: float) -> _Cycle | None:
    """One cycle, None where it has a hole or something was not read."""
    import numpy as np

    if any(g.start < last and g.end > first for g in log.report.gaps):
        return None
    a, b = (int(n) for n in np.searchsorted(log.times, (first, last)))
    settled = _settled(log.times[a:b], on[a:b] if by == "start" else ~on[a:b])
    means = {}
    for key, values in log.values.items():
        chosen = values[a:b] if _is_whole(by, key) else values[a:b][settled]
        chosen = chosen[np.isfinite(chosen)]
        if not len(chosen):
            return None
        means[key] = float(np.mean(chosen))
    return _Cycle(first, last, means, float(np.mean(on[a:b])))


def _is_whole(by: str, key: str) -> bool:
    return by == "defrost" and (NOMENCLATURE[key].kind in _WHOLE[by] or key.startswith(("heat_source_", "heat_sink_")))


def _settled(times: NDArray[np.float64], counts: NDArray[np.bool_]) -> NDArray[np.bool_]:
    """Which rows count: those in which it runs (or does not defrost), later than `SETTLE` after that began."""
    import numpy as np

    begins = np.flatnonzero(np.diff(np.concatenate(([False], counts)).astype(np.int8)) == 1)
    last = np.searchsorted(begins, np.arange(len(times)), side="right") - 1
    since = np.where(last >= 0, times - times[begins[np.maximum(last, 0)]], -1.0) if len(begins) else times * 0.0 - 1.0
    return np.asarray(counts & (since >= SETTLE))


def _together(by: Literal["start", "defrost"], cycles: Sequence[_Cycle]) -> Cycles:
    means = {key: tuple(one.means[key] for one in cycles) for key in cycles[0].means}
    edges = (*(one.start for one in cycles), cycles[-1].end)
    return Cycles(by, edges, means, tuple(one.share for one in cycles))
