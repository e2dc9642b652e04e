"""Expected readings over outdoor temperature: the grid of every 5 K and the finer line of the charts."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING

from commission.description import LoadedPlant, System, outdoor_sides
from commission.errors import NotCalculatedError

if TYPE_CHECKING:
    from commission.prediction import Prediction, SystemModel

STEP = 5.0
_ZERO_C = 273.15
_MOST_POINTS = 14


@dataclass(frozen=True, slots=True)
class GridPoint:
    """One temperature of the grid with its prediction, or the reason why there is none."""

    temperature: float
    prediction: Prediction | None
    because: str | None = None


@dataclass(frozen=True, slots=True)
class Grid:
    """Expected readings along one condition; all other conditions are at `fixed`, but for those that are `led` by it
    through the weather curve. A table knows of the day only what varies along it: what is `fixed` is as stated, and how
    far the plant may lie from that is in the uncertainties.

    `key` is the condition that varies, `title` its name as a person says it, `points` every 5 K (the printed table)
    and `line` every 2.5 K (the charts), in ascending order; temperatures in K.
    """

    key: str
    title: str
    fixed: Mapping[str, float]
    led: tuple[str, ...]
    points: tuple[GridPoint, ...]
    line: tuple[GridPoint, ...]

    @property
    def shown(self) -> tuple[GridPoint, ...]:
        """The points from the first to the last that could be calculated."""
        good = [n for n, p in enumerate(self.points) if p.prediction is not None]
        return self.points[good[0] : good[-1] + 1] if good else ()

    @property
    def reasons(self) -> Mapping[str, tuple[float, ...]]:
        """Why some points could not be calculated, with their temperatures in K."""
        found: dict[str, tuple[float, ...]] = {}
        for point in self.points:
            if point.because is not None:
                found[point.because] = (*found.get(point.because, ()), point.temperature)
        return found


def outdoor_axis(loaded: LoadedPlant, system: System) -> str:
    """The condition that follows the weather: the side that is outdoors, else the duty's outdoor side."""
    heating = system.duty in ("space_heating", "water_heating")
    outdoors = outdoor_sides(loaded.plant, system)
    side = outdoors[-1] if outdoors else "heat_source" if heating else "heat_sink"
    return f"{side}_inlet_temperature"


def highest_asked(model: SystemModel, key: str) -> float:
    """Up to where (K) a sheet runs along a condition: the end of its range, or the heating limit, above which no heat
    is asked for."""
    high = model.condition_axes[key].high
    curve = model.facts.system.controls.weather_curve
    if curve is None or curve.heating_limit is None or model.facts.source_liquid is not None:
        return high
    return min(high, curve.heating_limit) if key == "heat_source_inlet_temperature" else high


def temperatures(loaded: LoadedPlant, key: str, model: SystemModel) -> tuple[float, ...]:
    """The temperatures of the printed grid in K: multiples of 5 °C that cover the site's weather and the rated point.

    They stay inside the range that the model states for this condition, and within its heating limit.
    """
    axis = model.condition_axes[key]
    climate = loaded.plant.plant.climate
    wanted = [axis.rated]
    wanted += [t for t in (climate.winter_dry_bulb, climate.summer_dry_bulb) if t is not None]
    low, high = (min(wanted), max(wanted)) if len(wanted) == 3 else (axis.low, axis.high)
    first = math.floor(round((low - _ZERO_C) / STEP, 6))
    last = math.ceil(round((high - _ZERO_C) / STEP, 6))
    all_of_them = [n * STEP + _ZERO_C for n in range(first, last + 1)]
    end = highest_asked(model, key)
    inside = [t for t in all_of_them if axis.low - 1e-6 <= t <= end + 1e-6]
    return tuple(inside[-_MOST_POINTS:])


def _walk(model: SystemModel, key: str, values: tuple[float, ...]) -> tuple[GridPoint, ...]:
    found = model.grid(key, values)
    return tuple(
        GridPoint(t, None, p.problems[0].message) if isinstance(p, NotCalculatedError) else GridPoint(t, p)
        for t, p in zip(values, found, strict=True)
    )


def make_grid(loaded: LoadedPlant, system: System, model: SystemModel) -> Grid | None:
    """The grid of one system, or None where the model has no such condition."""
    key = outdoor_axis(loaded, system)
    if key not in model.condition_axes:
        return None
    coarse = temperatures(loaded, key, model)
    middles = [0.5 * (a + b) for a, b in pairwise(coarse)]
    line = _walk(model, key, tuple(sorted({*coarse, *middles})))
    fixed = model.along(key)
    led = tuple(k for k in model.rated_condition if k != key and k not in fixed)
    title = loaded.display(model.system_id).short(key)
    return Grid(key, title, fixed, led, tuple(p for p in line if p.temperature in coarse), line)
