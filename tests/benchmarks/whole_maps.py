"""A 15 x 15 map of operating points balanced at once, against the same points one after another."""

from __future__ import annotations

import numpy as np

from commission.machine import OperatingMap, OperatingPoint, operating_map
from commission.properties import refrigerant
from tests.benchmarks.machines import machine, media
from tests.benchmarks.timing import Row, interleaved, spent

RATIO, SAME = 8.0, 1e-5
CASES = (
    ("R-290", None, 0.0, 4.0, "dry coil"),
    ("R-290", 0.75, 0.0, 4.0, "wet coil"),
    ("R-290", 0.75, 0.0, 6.0, "wet coil, more superheat set than it can give"),
    ("R-290", 0.75, 0.1, 4.0, "wet coil, suction line in the air of the sink"),
    ("R-454B", 0.75, 0.0, 4.0, "wet coil"),
)


def against_points(
    name: str, air_share: float | None, heating_share: float, superheat: float, how: str, repetitions: int, n: int
) -> Row:
    """The map over its points one by one, each started from its neighbour; both must agree to 1e-5 K."""
    one = machine(refrigerant(name), air_share, heating_share, superheat)
    around = None if heating_share else 20.0
    grid = [[media(float(a), float(b), around) for b in np.linspace(10, 38, n)] for a in np.linspace(-8, 12, n)]
    sources, sinks = [row[0].source for row in grid], [m.sink for m in grid[0]]
    surroundings = [m.surroundings for m in grid[0]]

    def points() -> list[OperatingPoint]:
        found: list[OperatingPoint] = []
        for row in grid:
            for at in row:
                found.append(one.operate(at, found[-1].balance if found else None))
        return found

    def whole() -> OperatingMap:
        return operating_map(one, sources, sinks, surroundings)

    at_once, each = whole(), [p.balance for p in points()]
    wanted = np.array([[b.evaporating_temperature, b.condensing_temperature or np.nan] for b in each]).T
    given = np.stack((at_once.evaporating_temperature.ravel(), at_once.condensing_temperature.ravel()))
    worst = float(np.abs(given - wanted).max())
    assert worst <= SAME, f"{name}, {how}: the map differs by {worst:.2g} K"
    times = interleaved({"points": (points, 1), "whole": (whole, 1)}, repetitions)
    ratio = times["points"] / times["whole"]
    return Row(
        f"{n} x {n} map of {name} ({how}), point by point over all at once",
        f"{ratio:.1f} ({spent(times['points'])} : {spent(times['whole'])}; {worst:.0e} K apart)",
        f"at least {RATIO:.0f}",
        ratio >= RATIO,
    )


def run(repetitions: int = 5, n: int = 15) -> list[Row]:
    """All rows about maps."""
    return [against_points(*case, repetitions, n) for case in CASES]
