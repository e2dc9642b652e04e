"""`predict --before-visit`: one file to print for a forecast day: what can be proven, and the grid for the pencil."""

from __future__ import annotations

import datetime as dt
import math
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

from commission.cli.freeze import freeze, grids_of
from commission.cli.options import parse_conditions
from commission.errors import InputError, Problem

if TYPE_CHECKING:
    from commission.acceptance import TestSheet
    from commission.description import LoadedPlant
    from commission.prediction import SystemModel

AROUND = 5.0  # K to either side of the forecast, and between the columns: what a forecast of a week ahead may miss
_ZERO_C = 273.15


@dataclass(frozen=True, slots=True)
class Ahead:
    """What is asked for a visit that is still to come: a sheet to freeze by `name`, a `page` to print, the `ranges` of
    the day, and the day."""

    name: str | None
    page: Path | None
    ranges: tuple[str, ...]
    day: dt.date | None


def before_visit(
    loaded: LoadedPlant,
    system: str,
    pairs: tuple[str, ...],
    ahead: Ahead,
) -> list[Path]:
    """The frozen sheet, the page, or both with the same grid; returns the paths written.

    Raises:
        InputError: an option that cannot be read, or a file that cannot be written.
        NotCalculatedError: nothing can be expected at the forecast or in the range.
    """
    from commission.prediction import fit

    model, name, page, day = fit(loaded, system), ahead.name, ahead.page, ahead.day
    forecast = parse_conditions(pairs, loaded.barometric_pressure, tuple(model.condition_axes))
    grids = grids_of(ahead.ranges, model, loaded.barometric_pressure) or columns_of(loaded, model, forecast)
    if name is not None:
        sheet, path = freeze(loaded, model, name, grids, forecast or None, day)
        made = [path]
    else:
        from commission.acceptance import make_sheet

        sheet, made = make_sheet(loaded, model, grids, held=forecast, prepared_for=day), []
    if page is not None:
        made.append(write_before(loaded, model, forecast, sheet, page, frozen=name, day=day))
    return made


def columns_of(loaded: LoadedPlant, model: SystemModel, forecast: Mapping[str, float]) -> dict[str, tuple[float, ...]]:
    """Multiples of 5 °C that cover the forecast and 5 K to either side, along the condition that follows the weather.

    Raises:
        InputError: no condition of this system follows the weather, or the forecast lies outside its range.
    """
    from commission.manual.grid import highest_asked, outdoor_axis

    key = outdoor_axis(loaded, loaded.system(model.system_id))
    if key not in model.condition_axes:
        allowed = f"--over with one of {', '.join(model.condition_axes)}"
        raise InputError(Problem("no condition of this system follows the weather", path="--over", allowed=allowed))
    axis = model.condition_axes[key]
    middle = forecast.get(key, axis.rated) - _ZERO_C
    first = math.floor(round((middle - AROUND) / AROUND, 6))
    last = math.ceil(round((middle + AROUND) / AROUND, 6))
    found = [n * AROUND + _ZERO_C for n in range(first, last + 1)]
    limit = highest_asked(model, key)
    high = limit if forecast.get(key, axis.rated) <= limit else axis.high  # made to run above its heating limit
    inside = tuple(t for t in found if axis.low - 1e-6 <= t <= high + 1e-6)
    if not inside:
        message = "the forecast lies outside the range that this system is calculated for"
        raise InputError(Problem(message, path=f"--at {key}", allowed="say the range with --over"))
    return {key: inside}


def write_before(
    loaded: LoadedPlant,
    model: SystemModel,
    forecast: Mapping[str, float],
    sheet: TestSheet,
    out: Path,
    *,
    frozen: str | None,
    day: dt.date | None,
) -> Path:
    """Write the page for the forecast (SI) with the targets of `sheet`, and return its path.

    Raises:
        InputError: the file cannot be written, or a file that is no such page is there already.
        NotCalculatedError: nothing can be expected at the forecast.
    """
    from commission.manual.lone_page import MADE_BY, before_visit_file

    content = before_visit_file(loaded, model, forecast, sheet, frozen=frozen, on=day)
    try:
        if out.exists() and MADE_BY not in out.read_bytes()[:2000]:
            raise InputError(Problem("another file is there already; choose another name", file=str(out)))
        out.write_bytes(content)
    except OSError as error:
        raise InputError(Problem(f"this file cannot be written: {error.strerror}", file=str(out))) from error
    return out
