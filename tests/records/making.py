"""Deviations and series made up for the tests of history."""

from __future__ import annotations

import datetime as dt
import math

from commission.quantities import Display
from commission.records import Point, Series
from commission.records.filed import FrozenDeviation

METRIC = Display("metric", 97_700.0)
START = dt.datetime(2026, 5, 14, 10, 20, tzinfo=dt.UTC)


def frozen(deviation: float, other: float, **parts: float) -> FrozenDeviation:
    """A deviation with its shares, at the usual 95 % coverage."""
    standard = math.hypot(other, *parts.values())
    return FrozenDeviation.model_construct(
        reading=deviation, expected=0.0, deviation=deviation, unit="K", uncertainty=standard, expanded=1.96 * standard,
        significant=False, model_parts=parts, other_part=other,
    )  # fmt: skip


def one_series(quantity: str, *changes: tuple[float, float]) -> Series:
    """A baseline and later visits half a year apart, each with a change and its expanded uncertainty."""
    points = [Point("base", START, 0.0, 1.0, False)]
    for n, (size, expanded) in enumerate(changes, 1):
        when = START + dt.timedelta(days=180 * n)
        points.append(Point(f"visit-{n}", when, size, 1.0, False, size, expanded, abs(size) > expanded))
    return Series("store", quantity, "K", "base", "first accepted test", tuple(points))
