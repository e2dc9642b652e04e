"""One live day sheet by itself, made as a single file without building a manual, and its fields in a browser."""

from __future__ import annotations

import dataclasses
from collections.abc import Mapping
from pathlib import Path
from typing import TYPE_CHECKING

import commission.prediction
from commission.description import LoadedPlant
from commission.manual.gather import PlantData, gather_one
from commission.manual.live_data import Calculated, calculate
from commission.manual.live_plan import LivePlan, make_plan
from commission.manual.live_sheet import live_sheet
from commission.manual.rendering import environment
from commission.manual.single import LoneBook, one_file
from commission.manual.where import templates_folder

if TYPE_CHECKING:
    from playwright.sync_api import Page


def plant_of(loaded: LoadedPlant, system: str) -> PlantData:
    """What the pages of one system are made from."""
    return gather_one(loaded, commission.prediction.fit(loaded, system))


def calculated(plant: PlantData) -> tuple[LivePlan, Calculated]:
    """Plan, table and bands of its system."""
    (data,) = plant.systems
    assert data.model is not None
    assert data.rated is not None
    plan = make_plan(plant.loaded, data.model, data.rated)
    return plan, calculate(plant, data.model, plan)


def write_sheet(plant: PlantData, folder: Path) -> Path:
    """The sheet of its system as a single file."""
    (data,) = plant.systems
    templates = templates_folder()
    page = one_file(LoneBook(), environment(templates, plant.display), templates, plant, live_sheet(plant, data))
    path = folder / f"{data.id}.html"
    path.write_bytes(page)
    return path


def without_model(plant: PlantData, because: str) -> PlantData:
    """The plant as it is where the system cannot be calculated."""
    (data,) = plant.systems
    bare = dataclasses.replace(data, model=None, rated=None, grid=None, because=because)
    return dataclasses.replace(plant, systems=(bare,))


def type_in(page: Page, values: Mapping[str, str]) -> None:
    """Type into fields by their names."""
    for name, text in values.items():
        page.fill(f"[data-field='{name}']", text)


def said(page: Page, key: str) -> list[str]:
    """What stands beside one row, part by part: value, band, verdict."""
    return [one.inner_text() for one in page.query_selector_all(f"#o-{key} > *")]


def outcomes(page: Page) -> dict[str, str]:
    """Inside, outside, edge or filed, by row."""
    rows = page.query_selector_all("[data-outcome]")
    return {str(r.get_attribute("data-row")): str(r.get_attribute("data-outcome")) for r in rows}


def heard(page: Page) -> list[str]:
    """A list that fills with what the page complains about."""
    found: list[str] = []
    page.on("console", lambda message: found.append(message.text))
    page.on("pageerror", lambda error: found.append(str(error)))
    return found


def record_text(page: Page) -> str:
    """The record as the page gives it."""
    page.click("#live-text")
    return page.input_value("#live-yaml")
