"""Machines for the tests of this room, in SI."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from commission.machine import (
    Compressor,
    EfficiencyShape,
    Exchanger,
    Media,
    SingleStage,
    SuctionLine,
    air_stream,
)
from commission.properties import refrigerant

IDEAL = EfficiencyShape(0.0, 1.1, 0.0, 0.0, 0.0)
RECIPROCATING = EfficiencyShape(0.04, 1.1, 0.006, 0.15, 0.08)


@pytest.fixture
def ideal() -> Callable[..., SingleStage]:
    """A machine without any loss, sized 1 m3/s: only its refrigerant circuit is of interest."""

    def make(name: str, subcooling: float = 0.0, superheat: float = 0.0, efficiency: float = 1.0) -> SingleStage:
        compressor = Compressor(1.0, 1.0, efficiency, IDEAL)
        exchanger = Exchanger(1.0, 1.0)
        return SingleStage(refrigerant(name), compressor, exchanger, exchanger, superheat, subcooling)

    return make


@pytest.fixture
def real() -> Callable[..., SingleStage]:
    """A cold-room machine of about 3.5 kW with losses, lines and shell loss."""

    def make(name: str = "R-290", **changes: object) -> SingleStage:
        values: dict[str, object] = {
            "refrigerant": refrigerant(name),
            "compressor": Compressor(8.0 / 3600, 0.9, 0.85, RECIPROCATING, 0.05),
            "evaporator": Exchanger(650.0, 2100 / 3600, 0.5),
            "condenser": Exchanger(560.0, 2600 / 3600, 0.5),
            "superheat": 6.0,
            "subcooling": 1.0,
            "suction_line": SuctionLine(1.0, 0.1),
            "discharge_line_loss": 0.4,
        }
        return SingleStage(**{**values, **changes})  # type: ignore[arg-type]  # any field may be changed by a test

    return make


@pytest.fixture
def cold_room_media() -> Callable[[float, float], Media]:
    """Room air and outdoor air at the given temperatures in °C."""

    def make(room: float, outdoors: float) -> Media:
        source = air_stream(room + 273.15, 2100 / 3600, 0.85, 97653.0)
        sink = air_stream(outdoors + 273.15, 2600 / 3600, 0.5, 97653.0)
        return Media(source, sink, outdoors + 273.15)

    return make


@pytest.fixture
def idle_media() -> Media:
    """Media for tests that look at the circuit alone."""
    air = air_stream(293.15, 1.0, 0.5, 101325.0)
    return Media(air, air, 293.15)
