"""Plants whose lists are read, and their stages without a fitted model."""

from __future__ import annotations

from collections.abc import Callable
from functools import cache
from pathlib import Path

import pytest

from commission.checklists import Stage, stages
from commission.description import LoadedPlant, load_plant

YARD = Path(__file__).parent / "plants" / "yard"
DAIRY = Path(__file__).parent / "plants" / "dairy"
SYSTEMS = ("freezer", "split", "heat-pump", "chiller", "water-heater", "tower-chiller")


@cache
def _yard() -> LoadedPlant:
    return load_plant(YARD)


@cache
def _stages(system_id: str) -> tuple[Stage, ...]:
    return stages(_yard(), system_id)


@pytest.fixture(scope="session")
def yard() -> LoadedPlant:
    """An invented yard with a freezer room, a split unit, heat pumps, an ammonia chiller and a tower chiller."""
    return _yard()


@pytest.fixture(scope="session")
def yard_stages() -> Callable[[str], tuple[Stage, ...]]:
    """The stages of a system of the yard."""
    return _stages


@pytest.fixture(scope="session")
def cold_room(example_folder: Path) -> tuple[Stage, ...]:
    """The stages of the example's cold room, with its fitted model."""
    return fitted_stages(load_plant(example_folder), "cold-room")


@pytest.fixture(scope="session")
def propane_room() -> tuple[Stage, ...]:
    """The stages of a cold room of 6 kW with R-290, with its fitted model."""
    return fitted_stages(load_plant(DAIRY), "propane-room")


def fitted_stages(loaded: LoadedPlant, system_id: str) -> tuple[Stage, ...]:
    """The stages of a system with its fitted model."""
    from commission.prediction import fit

    return stages(loaded, system_id, fit(loaded, system_id))
