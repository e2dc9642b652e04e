"""`predict --freeze`: targets over the range of the day, frozen into a file that both sides sign before the test."""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping
from pathlib import Path
from typing import TYPE_CHECKING

from commission.cli.options import parse_conditions
from commission.errors import InputError, Problem, nearest

if TYPE_CHECKING:
    from commission.acceptance import TestSheet
    from commission.description import LoadedPlant
    from commission.prediction import SystemModel

STEP = 5.0  # K between the points of a frozen grid; the error of reading between them is frozen with each target
POINTS = 3  # points of a range of any other kind


def freeze(
    loaded: LoadedPlant,
    model: SystemModel,
    name: str,
    grids: Mapping[str, tuple[float, ...]],
    held: Mapping[str, float] | None,
    day: dt.date | None,
) -> tuple[TestSheet, Path]:
    """Freeze a test sheet over the `grids` of its conditions, all others `held` (SI), and return it with its path.

    Raises:
        NotCalculatedError: the system has no expectation somewhere in the range.
        ExistsError: another sheet of this name is frozen already.
    """
    from commission.acceptance import make_sheet
    from commission.records import file_sheet

    sheet = make_sheet(loaded, model, grids, held=held, prepared_for=day, title=name)
    return sheet, file_sheet(loaded, sheet, name)


def grids_of(ranges: tuple[str, ...], model: SystemModel, barometric_pressure: float) -> dict[str, tuple[float, ...]]:
    """The points of each `KEY=LOW..HIGH` range in SI.

    Raises:
        InputError: a range that cannot be read, or a condition that the system does not have.
    """
    ends = {key: _grid(key, low, high) for key, low, high in (_range(r, barometric_pressure) for r in ranges)}
    unknown = [key for key in ends if key not in model.condition_axes]
    if unknown:
        known = ", ".join(model.condition_axes)
        raise InputError(
            *(
                Problem("this is not a condition of this system", path=f"--over {key}", allowed=known,
                        nearest=nearest(key, model.condition_axes))
                for key in unknown
            )
        )  # fmt: skip
    return ends


def _range(text: str, barometric_pressure: float) -> tuple[str, float, float]:
    key, _, value = text.partition("=")
    low, dots, high = value.partition("..")
    if not dots:
        raise InputError(Problem("write KEY=LOW..HIGH", path=f"--over {key}", value=text,
                                 allowed="for example 'heat_sink_inlet_temperature=15 °C..35 °C'"))  # fmt: skip
    first = parse_conditions((f"{key}={low}",), barometric_pressure)
    last = parse_conditions((f"{key}={high}",), barometric_pressure)
    name = key.strip()
    if first[name] >= last[name]:
        raise InputError(Problem("the range must rise", path=f"--over {name}", value=value))
    return name, first[name], last[name]


def _grid(key: str, low: float, high: float) -> tuple[float, ...]:
    from commission.acceptance import grid_of
    from commission.quantities import NOMENCLATURE, Kind

    return grid_of(low, high, STEP if NOMENCLATURE[key].kind is Kind.TEMPERATURE else (high - low) / (POINTS - 1))
