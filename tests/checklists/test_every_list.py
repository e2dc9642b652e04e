"""What no list may do, whatever the plant: each rule is read off every list of the example and of the test plants."""

from __future__ import annotations

from collections.abc import Iterable
from functools import cache
from pathlib import Path

import pytest

from commission.checklists import Item, stages
from commission.description import load_plant
from tests.checklists.conftest import DAIRY, SYSTEMS, YARD

LISTS = (
    *(("example", name) for name in ("cold-room", "dining-hall", "floor-heating", "freezer-room", "shower-water")),
    *(("yard", name) for name in SYSTEMS),
    ("dairy", "propane-room"),
)


@cache
def _listed(folder: Path, system_id: str) -> tuple[Item, ...]:
    return tuple(item for stage in stages(load_plant(folder), system_id) for item in stage.items)


@pytest.fixture(params=LISTS, ids=lambda pair: pair[1])
def listed(request: pytest.FixtureRequest, example_folder: Path) -> tuple[Item, ...]:
    """The items of one system in their order."""
    folder, system_id = request.param
    return _listed({"example": example_folder, "yard": YARD, "dairy": DAIRY}[folder], system_id)


def ids(listed: tuple[Item, ...]) -> list[str]:
    """The ids of a list in their order."""
    return [item.id for item in listed]


def after(listed: tuple[Item, ...], first: str, later: Iterable[str]) -> list[str]:
    """Those of `later` that stand on a list, but not behind `first`."""
    order = ids(listed)
    start = order.index(first) if first in order else len(order)
    return [name for name in later if name in order and order.index(name) < start]


POWERED = (
    "installation.drain-heater",
    "installation.door-frame",
    "installation.relief-port",
    "installation.ventilation",
    "installation.emergency-light",
    "electrical.pumps",
    "flows.source-flow",
    "flows.sink-flow",
    "flows.sink-reach",
    "flows.source-switch",
    "flows.sink-switch",
    "flows.tower-fan",
    "flows.tower-frost",
    "charging.water-flows",
    "electrical.voltage",
)


def test_nothing_is_switched_on_before_the_electricians_report(listed: tuple[Item, ...]) -> None:
    """Earth, insulation and earth-fault protection are proved before a heater, fan or pump runs (IEC 60364-6)."""
    assert "electrical.report" in ids(listed)
    assert not after(listed, "electrical.report", POWERED)
