"""A page of one system made by itself, as one file, without building the manual."""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping
from typing import TYPE_CHECKING

from commission.manual.before_visit import for_the_day
from commission.manual.gather import gather_one
from commission.manual.rendering import environment
from commission.manual.single import LoneBook, one_file
from commission.manual.where import templates_folder

if TYPE_CHECKING:
    from commission.acceptance import TestSheet
    from commission.description import LoadedPlant
    from commission.prediction import SystemModel

MADE_BY = b'<meta name="generator" content="commission">'
"""What every such file carries near its top, so that no other file is written over."""


def before_visit_file(
    loaded: LoadedPlant,
    model: SystemModel,
    forecast: Mapping[str, float],
    sheet: TestSheet,
    *,
    frozen: str | None = None,
    on: dt.date | None = None,
) -> bytes:
    """The page for a forecast condition (SI) with the targets of `sheet` as the grid for the pencil.

    Raises:
        InputError: a condition that this system does not have.
        NotCalculatedError: nothing can be expected at the forecast.
    """
    plant = gather_one(loaded, model)
    (data,) = plant.systems
    page = for_the_day(plant, data, forecast, sheet, frozen=frozen, on=on)
    templates = templates_folder()
    return one_file(LoneBook(), environment(templates, plant.display), templates, plant, page)
