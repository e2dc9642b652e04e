"""Plants whose lists are read, and their stages without a fitted model."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from functools import cache
from pathlib import Path

import pytest

from commission.checklists import Item, Stage, stages
from commission.description import LoadedPlant, load_plant
from commission.safety import Substance, fluid_of, substance_of

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


LISTS = (
    *(("example", name) for name in ("cold-room", "dining-hall", "floor-heating", "freezer-room", "shower-water")),
    *(("yard", name) for name in SYSTEMS),
    ("dairy", "propane-room"),
)


@cache
def every_list(folder: Path, system_id: str) -> tuple[Item, ...]:
    """The items of one system in their order."""
    return tuple(item for stage in stages(load_plant(folder), system_id) for item in stage.items)


@pytest.fixture(params=LISTS, ids=lambda pair: pair[1])
def place(request: pytest.FixtureRequest, example_folder: Path) -> tuple[Path, str]:
    """The folder and the id of one system."""
    folder, system_id = request.param
    return {"example": example_folder, "yard": YARD, "dairy": DAIRY}[folder], system_id


@pytest.fixture
def listed(place: tuple[Path, str]) -> tuple[Item, ...]:
    """The items of one system in their order."""
    return every_list(*place)


@pytest.fixture
def loaded(place: tuple[Path, str]) -> LoadedPlant:
    """The plant of that system."""
    return load_plant(place[0])


@pytest.fixture
def substance(loaded: LoadedPlant, place: tuple[Path, str]) -> Substance:
    """The refrigerant of that system."""
    return substance_of(fluid_of(loaded, place[1]))


def ids(listed: tuple[Item, ...]) -> list[str]:
    """The ids of a list in their order."""
    return [item.id for item in listed]


def item_of(listed: tuple[Item, ...], name: str) -> Item:
    """The item of an id."""
    return next(item for item in listed if item.id == name)


def after(listed: tuple[Item, ...], first: str, later: Iterable[str]) -> list[str]:
    """Those of `later` that stand on a list, but not behind `first`."""
    order = ids(listed)
    start = order.index(first) if first in order else len(order)
    return [name for name in later if name in order and order.index(name) < start]
