"""Which instrument reads a quantity, and which quantities nobody can read."""

from __future__ import annotations

from pathlib import Path

import pytest

from commission.acceptance.choosing import NO_HOOD, NO_PORTS, SHUT, cannot_be_read, choose_instrument
from commission.description import LoadedPlant, load_plant
from commission.quantities import NOMENCLATURE

AIR_FLOWS = {
    "cold-room": ("heat_source_flow", "heat_sink_flow"),
    "freezer-room": ("heat_source_flow", "heat_sink_flow"),
    "dining-hall": ("heat_sink_flow",),
    "floor-heating": ("heat_source_flow",),
    "shower-water": ("heat_source_flow",),
}
"""Open coils of the example: coolers in rooms, condensers and evaporators outdoors."""


@pytest.fixture(scope="module")
def example(example_folder: Path) -> LoadedPlant:
    """The example plant, with an air hood that its dining hall names for the air to the room."""
    return load_plant(example_folder)


@pytest.mark.parametrize("identity", AIR_FLOWS)
def test_no_hood_takes_the_air_of_an_open_coil(example: LoadedPlant, identity: str) -> None:
    """The plant's hood has the right scale for these flows, but nowhere to be held."""
    system = example.system(identity)
    for key in AIR_FLOWS[identity]:
        assert cannot_be_read(key, system) == NO_HOOD
        assert choose_instrument(key, 2100.0 / 3600.0, example, system) is None


def test_a_hood_that_is_named_is_used(example: LoadedPlant) -> None:
    """Where the description names an instrument for the flow, or the fan works against ducts, it can be read."""
    hall = example.system("dining-hall")
    assert choose_instrument("heat_source_flow", 1680.0 / 3600.0, example, hall) == "air hood"
    ducted = hall.model_copy(update={"measured_with": {}})
    assert hall.heat_source.external_pressure is not None
    assert choose_instrument("heat_source_flow", 1680.0 / 3600.0, example, ducted) == "air hood"


def test_a_flow_of_water_needs_no_hood(example: LoadedPlant) -> None:
    """A meter in a pipe may be chosen by its scale."""
    floor = example.system("floor-heating")
    plain = floor.model_copy(update={"measured_with": {}})
    assert choose_instrument("heat_sink_flow", 1.5 / 3600.0, example, plain) == "water meter"


def test_a_sealed_unit_shows_neither_gauges_nor_pipes(example: LoadedPlant) -> None:
    """No pressure and no pipe can be read, nor what follows from either; what `measured_with` names can."""
    floor = example.system("floor-heating")
    assert floor.sealed
    reasons = {k: cannot_be_read(k, floor) for k in NOMENCLATURE}
    assert reasons["suction_pressure"] == NO_PORTS
    assert reasons["liquid_temperature"] == SHUT
    assert reasons["discharge_temperature"] is None
    for key in ("superheat", "subcooling", "condensing_temperature", "pressure_ratio"):
        assert reasons[key] == f"it follows from a pressure, and {NO_PORTS}"
    for key in ("suction_temperature", "liquid_temperature"):
        assert choose_instrument(key, 280.0, example, floor) is None


def test_with_its_own_gauge_a_sealed_unit_still_keeps_its_pipes(example: LoadedPlant) -> None:
    """A pressure on the unit's own display gives the saturation temperature, but no superheat."""
    floor = example.system("floor-heating")
    shown = floor.model_copy(update={"measured_with": {"suction_pressure": "gauge to 25 bar"}})
    assert cannot_be_read("evaporating_temperature", shown) is None
    assert cannot_be_read("superheat", shown) == f"it follows from a pipe temperature, and {SHUT}"
    assert cannot_be_read("condensing_temperature", shown) == f"it follows from a pressure, and {NO_PORTS}"
