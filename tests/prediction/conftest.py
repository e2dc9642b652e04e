"""Plants for the tests of this room: the example, and small ones written on the spot."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from commission.description import LoadedPlant, load_plant
from commission.prediction import SystemModel, fit

EXAMPLE = Path(__file__).parents[2] / "example_plant"


@pytest.fixture(scope="session")
def example() -> LoadedPlant:
    """The example plant."""
    return load_plant(EXAMPLE)


@pytest.fixture(scope="session")
def cold_room(example: LoadedPlant) -> SystemModel:
    """The cold room of the example, fitted."""
    return fit(example, "cold-room")


@pytest.fixture
def written(tmp_path: Path) -> Callable[[str], LoadedPlant]:
    """A plant with one system `it`, from the YAML of that system."""

    def load(system: str) -> LoadedPlant:
        body = "\n".join("    " + line for line in system.strip().splitlines())
        (tmp_path / "plant.yaml").write_text(f"plant:\n  name: test\nsystems:\n  it:\n{body}\n", encoding="utf-8")
        return load_plant(tmp_path)

    return load


BRINE = """
duty: space_heating
refrigerant: {fluid}
heat_source: {{medium: ethylene glycol, mass_fraction: 25 %}}
heat_sink: {{medium: water}}
rated_points:
  - {{heat_source_inlet_temperature: 0 °C, heat_sink_outlet_temperature: 34 °C, heating_capacity: 10 kW,
     power_input: {power} kW, includes: [compressor]}}
"""


@pytest.fixture
def brine_heat_pump(written: Callable[[str], LoadedPlant]) -> Callable[..., SystemModel]:
    """A brine-to-water heat pump known by one rated point: 10 kW at brine 0 °C, water leaving at 34 °C."""

    def make(fluid: str, cop: float = 4.4) -> SystemModel:
        return fit(written(BRINE.format(fluid=fluid, power=round(10 / cop, 4))), "it")

    return make
