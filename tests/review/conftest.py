"""Small plants for the rules: a sound base description, with what a test changes merged into it."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from types import SimpleNamespace
from typing import Any

import pytest
import yaml

from commission.description import LoadedPlant, load_plant
from commission.properties import refrigerant
from commission.quantities import NOMENCLATURE, Explained
from commission.review.facts import Outlook, PlantFacts, SystemFacts

BASE = """
plant:
  name: Test plant
  altitude: 0 m
  climate: {summer_dry_bulb: 32 °C, winter_dry_bulb: -10 °C}
  rules: {refrigerant_law: EU 2024/573, safety: EN 378}
spaces:
  store: {name: Store, floor_area: 100 m2, height: 3 m, occupancy: authorised persons only}
  yard: {name: Yard, outdoors: "yes"}
instruments:
  low gauge: {measures: pressure, from: -1 bar g, to: 12 bar g, accuracy: {of_span: 0.25 %}, serial: A,
              calibrated_until: 2030-01-01}
  high gauge: {measures: pressure, from: 0 bar g, to: 40 bar g, accuracy: {of_span: 0.5 %}, serial: B,
               calibrated_until: 2030-01-01}
  probe: {measures: temperature, class: IEC 60751 A, serial: C, calibrated_until: 2030-01-01}
systems:
  one:
    name: Chiller one
    duty: cold_storage
    refrigerant: R-290
    charge: 0.4 kg
    spaces: {evaporator: store, condensing_unit: yard}
    nameplate: {allowable_pressure_low: 17 bar g, allowable_pressure_high: 28 bar g}
    heat_source: {medium: air, space: store, flow: 2100 m3/h, relative_humidity: 85 %}
    heat_sink: {medium: air, space: yard, flow: 2600 m3/h}
    compressor: {type: reciprocating}
    evaporator: {rating: {air_on: 4 °C, temperature_difference: 8 K, capacity: 3.6 kW}, defrost: {method: off cycle}}
    expansion: {device: thermostatic valve, superheat: 6 K}
    receiver: {volume: 2 L, relief_valve: 28 bar g}
    controls: {room_temperature: 4 °C, high_pressure_limit: 24 bar g, low_pressure_cut_out: 0.5 bar g,
               low_pressure_cut_in: 2 bar g, head_pressure: {by: fan speed, hold: 25 °C}}
    rated_points:
      - {heat_source_inlet_temperature: 4 °C, heat_sink_inlet_temperature: 32 °C, cooling_capacity: 3.4 kW,
         power_input: 1.5 kW, includes: [compressor, condenser fan]}
    design: {heat_source_inlet_temperature: 4 °C, heat_sink_inlet_temperature: 32 °C}
"""


class Plain(yaml.SafeDumper):
    """Writes a part that is used twice in full, as a person would."""

    def ignore_aliases(self, data: Any) -> bool:
        """No anchors: the reader refuses them."""
        return True


def merge(base: Any, change: Any) -> Any:
    """`change` laid over `base`: mappings are merged, None takes a key away, all else replaces."""
    if not isinstance(base, dict) or not isinstance(change, dict):
        return change
    merged = {key: value for key, value in base.items() if change.get(key, "") is not None}
    for key, value in change.items():
        if value is not None:
            merged[key] = merge(base.get(key), value) if isinstance(value, dict) else value
    return merged


@pytest.fixture
def make_plant(tmp_path: Path) -> Callable[..., LoadedPlant]:
    """Write the base description with changes and load it: `make_plant(system={...}, plant={...}, ...)`."""

    def make(system: dict[str, Any] | None = None, **parts: Any) -> LoadedPlant:
        base = yaml.load(BASE, Loader=yaml.BaseLoader)
        data = merge(base, {**parts, "systems": {"one": system or {}}})
        text = yaml.dump(data, allow_unicode=True, sort_keys=False, Dumper=Plain)
        (tmp_path / "plant.yaml").write_text(text, encoding="utf-8")
        return load_plant(tmp_path)

    return make


@pytest.fixture
def facts(make_plant: Callable[..., LoadedPlant]) -> Callable[..., SystemFacts]:
    """The facts of the one system without its model, and with whatever the test expects of it.

    `expected={"design": {"discharge_pressure": (value, standard uncertainty)}}` stands in for the prediction, so that a
    rule is tested on figures that the test knows.
    """

    def make(
        system: dict[str, Any] | None = None,
        *,
        expected: dict[str, dict[str, tuple[float, float]]] | None = None,
        coldest: dict[str, float] | None = None,
        **parts: Any,
    ) -> SystemFacts:
        loaded = make_plant(system, **parts)
        plant = PlantFacts(loaded, loaded.display("one"), None)
        one = loaded.plant.systems["one"]
        names = {"design": "at the design condition", "hottest": "on the hottest day", "coldest": "on the coldest day"}
        outlooks = {
            key: Outlook(
                names[key],
                SimpleNamespace(  # type: ignore[arg-type]  # only what the rules read of a prediction
                    expected={k: _explained(k, *pair) for k, pair in (expected or {}).get(key, {}).items()},
                    states=(SimpleNamespace(T=coldest[key]),) if coldest and key in coldest else (),
                    warnings=(),
                    parts={},
                ),
                None,
            )
            for key in {*(expected or {}), *(coldest or {})}
        }
        return SystemFacts(plant, "one", one, refrigerant(one.refrigerant), None, None, outlooks)

    return make


def _explained(key: str, value: float, uncertainty: float) -> Explained:
    assert key in NOMENCLATURE
    return Explained(key, value, uncertainty, "as_stated")
