"""Plants for the safety tests, written as a person writes them."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from commission.description import LoadedPlant, load_plant

TEXT = """
plant:
  name: Test yard
  altitude: {altitude}
  climate: {{summer_dry_bulb: {summer}}}
  rules: {{refrigerant_law: EU 2024/573, safety: EN 378}}
spaces:
  room: {{name: Cold room, floor_area: 24 m2, height: 2.8 m, occupancy: {occupancy}, below_ground: {below}}}
  yard: {{name: Yard, outdoors: yes}}
systems:
  one:
    duty: {duty}
    refrigerant: {refrigerant}
    charge: {charge}
    sealed: {sealed}
    spaces: {{evaporator: room, condensing_unit: yard}}
    nameplate: {{{nameplate}}}
    heat_source: {{medium: air, space: room}}
    heat_sink: {{medium: air, space: yard}}
    receiver: {{{receiver}}}
    controls: {{{controls}}}
    {volumes}
    rated_points:
      - {{heat_source_inlet_temperature: 2 °C, heat_sink_inlet_temperature: 28 °C,
         cooling_capacity: 3.4 kW, power_input: 1.5 kW}}
"""
PLAIN = {
    "altitude": "0 m",
    "summer": "30 °C",
    "volumes": "",
    "occupancy": "authorised persons only",
    "below": "no",
    "duty": "cold_storage",
    "refrigerant": "R-290",
    "charge": "0.45 kg",
    "sealed": "no",
    "nameplate": "allowable_pressure_low: 17 bar g, allowable_pressure_high: 28 bar g",
    "receiver": "volume: 2 L, relief_valve: 28 bar g",
    "controls": "high_pressure_limit: 22 bar g, low_pressure_cut_out: 0.8 bar g, low_pressure_cut_in: 2.2 bar g",
}


@pytest.fixture
def plant(tmp_path: Path) -> Callable[..., LoadedPlant]:
    """Makes a plant with one system `one`; keyword arguments replace parts of its description."""

    def make(**changes: str) -> LoadedPlant:
        (tmp_path / "plant.yaml").write_text(TEXT.format(**{**PLAIN, **changes}), encoding="utf-8")
        return load_plant(tmp_path)

    return make
