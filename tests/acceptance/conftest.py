"""Two invented plants for the tests of acceptance: a cold room, and a chiller with water on both sides."""

from __future__ import annotations

from pathlib import Path

import pytest

from commission.description import LoadedPlant, load_plant
from commission.prediction import SystemModel, fit

COLD_ROOM = """
plant: {name: Test cold room, altitude: 310 m}
spaces:
  room: {floor_area: 24 m2, height: 2.8 m}
  yard: {outdoors: yes}
instruments:
  low gauge:
    {measures: pressure, from: -1 bar g, to: 10 bar g, accuracy: {of_span: 0.25 %}, resolution: 0.01 bar,
     calibrated_on: 2026-03-30, calibrated_until: 2027-03-31}
  high gauge:
    {measures: pressure, from: 0 bar g, to: 30 bar g, accuracy: {of_span: 0.5 %}, resolution: 0.05 bar,
     calibrated_on: 2026-03-30, calibrated_until: 2027-03-31}
  pipe probes:
    {measures: temperature, class: IEC 60751 A, clamped_on: yes, resolution: 0.1 K, calibrated_until: 2027-02-28}
  air probe: {measures: temperature, class: IEC 60751 A, resolution: 0.1 K, calibrated_until: 2027-02-28}
  power meter: {measures: electric power, accuracy: {of_reading: 1 %}, resolution: 1 W, calibrated_until: 2027-01-31}
systems:
  cold-room:
    duty: cold_storage
    refrigerant: R-290
    spaces: {evaporator: room, condensing_unit: yard}
    heat_source: {medium: air, space: room, flow: 2100 m3/h, relative_humidity: 85 %}
    heat_sink: {medium: air, space: yard, flow: 2600 m3/h}
    compressor: {type: reciprocating, displacement: 8.2 m3/h, nominal_speed: 1450 rpm}
    evaporator: {rating: {air_on: 2 °C, temperature_difference: 8 K, capacity: 3.6 kW}, fan_power: 110 W}
    condenser: {fan_power: 130 W}
    receiver: {volume: 1.6 L}
    expansion: {device: thermostatic valve, superheat: 6 K}
    condensing_unit:
      suction_superheat: 10 K
      liquid_subcooling: 0 K
      includes: [compressor, condenser fan]
      rated_points:
        - {evaporating_temperature: -10 °C, heat_sink_inlet_temperature: 32 °C, cooling_capacity: 3.45 kW,
           power_input: 1.55 kW}
    guarantee:
      - {quantity: cooling_capacity, at: {heat_source_inlet_temperature: 2 °C, heat_sink_inlet_temperature: 32 °C},
         value: 3.3 kW, tolerance: {below: 5 %}, decision: simple, largest_uncertainty: 5 %,
         route: compressor heat balance}
      - {quantity: power_input, at: {heat_source_inlet_temperature: 2 °C, heat_sink_inlet_temperature: 32 °C},
         value: 1.7 kW, tolerance: {above: 5 %}, decision: guarded}
    measured_with: {power_input: power meter}
"""

CHILLER = """
plant: {name: Test chiller, altitude: 0 m}
instruments:
  low gauge: {measures: pressure, from: 0 bar g, to: 16 bar g, class: EN 837-1 class 1.0, calibrated_until: 2027-03-31}
  high gauge: {measures: pressure, from: 0 bar g, to: 40 bar g, class: EN 837-1 class 1.0, calibrated_until: 2027-03-31}
  probe: {measures: temperature, class: IEC 60751 B, resolution: 0.1 K, calibrated_until: 2027-02-28}
  pair: {measures: temperature, class: IEC 60751 A, matched_pair: yes, resolution: 0.01 K, calibrated_until: 2027-02-28}
  flow meter: {measures: volume flow, to: 10 m3/h, class: EN 1434 class 2, calibrated_until: 2028-01-31}
  power meter: {measures: electric power, class: MID class B, calibrated_until: 2028-01-31}
systems:
  chiller:
    duty: liquid_cooling
    refrigerant: R-134a
    heat_source: {medium: water, flow: 6.5 m3/h}
    heat_sink: {medium: water, flow: 8.0 m3/h}
    compressor: {type: scroll}
    expansion: {device: thermostatic valve, superheat: 6 K}
    rated_points:
      - {heat_source_inlet_temperature: 12 °C, heat_sink_inlet_temperature: 30 °C, cooling_capacity: 38 kW,
         power_input: 8.6 kW, includes: [compressor]}
      - {heat_source_inlet_temperature: 12 °C, heat_sink_inlet_temperature: 35 °C, cooling_capacity: 36 kW,
         power_input: 9.6 kW, includes: [compressor]}
      - {heat_source_inlet_temperature: 14 °C, heat_sink_inlet_temperature: 30 °C, cooling_capacity: 40.5 kW,
         power_input: 8.7 kW, includes: [compressor]}
      - {heat_source_inlet_temperature: 14 °C, heat_sink_inlet_temperature: 35 °C, cooling_capacity: 38.4 kW,
         power_input: 9.7 kW, includes: [compressor]}
    guarantee:
      - {quantity: cooling_capacity, at: {heat_source_inlet_temperature: 12 °C, heat_sink_inlet_temperature: 30 °C},
         value: 38 kW, tolerance: {below: 5 %}, decision: simple, largest_uncertainty: 5 %,
         carried_by: supplier's table, route: liquid side}
      - {quantity: cooling_cop, at: {heat_source_inlet_temperature: 12 °C, heat_sink_inlet_temperature: 30 °C},
         value: "4.3", tolerance: {below: 5 %}, decision: guarded, carried_by: as stated, route: liquid side}
    measured_with:
      heat_source_inlet_temperature: pair
      heat_source_outlet_temperature: pair
      heat_sink_inlet_temperature: probe
      heat_source_flow: flow meter
      power_input: power meter
"""


def write_plant(folder: Path, text: str) -> LoadedPlant:
    """Write a description and read it."""
    folder.mkdir(exist_ok=True)
    (folder / "plant.yaml").write_text(text, encoding="utf-8")
    return load_plant(folder)


@pytest.fixture(scope="session")
def cold_room(tmp_path_factory: pytest.TempPathFactory) -> LoadedPlant:
    """The cold room as read from its file."""
    return write_plant(tmp_path_factory.mktemp("cold-room"), COLD_ROOM)


@pytest.fixture(scope="session")
def chiller(tmp_path_factory: pytest.TempPathFactory) -> LoadedPlant:
    """The chiller as read from its file."""
    return write_plant(tmp_path_factory.mktemp("chiller"), CHILLER)


@pytest.fixture(scope="session")
def cold_room_model(cold_room: LoadedPlant) -> SystemModel:
    """The fitted cold room."""
    return fit(cold_room, "cold-room")


@pytest.fixture(scope="session")
def chiller_model(chiller: LoadedPlant) -> SystemModel:
    """The fitted chiller."""
    return fit(chiller, "chiller")


VARIABLE = (
    CHILLER.replace("compressor: {type: scroll}", "compressor: {type: scroll, drive: variable speed}")
    .replace("cooling_capacity: ", "compressor_speed: 3000 rpm, cooling_capacity: ")
    .replace("quantity: compressor_speed: 3000 rpm, cooling_capacity", "quantity: cooling_capacity")
)
"""The chiller with a variable drive, rated at 3000 rpm."""


@pytest.fixture(scope="session")
def variable(tmp_path_factory: pytest.TempPathFactory) -> LoadedPlant:
    """The chiller with a variable drive as read from its file."""
    return write_plant(tmp_path_factory.mktemp("variable"), VARIABLE)


@pytest.fixture(scope="session")
def variable_model(variable: LoadedPlant) -> SystemModel:
    """The fitted chiller with a variable drive."""
    return fit(variable, "chiller")


CARBON_DIOXIDE = """
plant: {name: Test water heater}
instruments:
  low gauge: {measures: pressure, from: 0 bar g, to: 60 bar g, class: EN 837-1 class 1.0, calibrated_until: 2027-03-31}
  high gauge:
    {measures: pressure, from: 0 bar g, to: 160 bar g, class: EN 837-1 class 1.0, calibrated_until: 2027-03-31}
  probe: {measures: temperature, class: IEC 60751 A, resolution: 0.1 K, calibrated_until: 2027-02-28}
  flow meter: {measures: volume flow, to: 1 m3/h, class: EN 1434 class 2, calibrated_until: 2028-01-31}
  power meter: {measures: electric power, class: MID class B, calibrated_until: 2028-01-31}
systems:
  heater:
    duty: water_heating
    refrigerant: R-744
    heat_source: {medium: air, flow: 3000 m3/h, relative_humidity: 70 %}
    heat_sink: {medium: water}
    compressor: {type: reciprocating}
    rated_points:
      - {heat_source_inlet_temperature: 7 °C, heat_sink_inlet_temperature: 12 °C, heat_sink_outlet_temperature: 60 °C,
         heating_capacity: 10 kW, power_input: 2.7 kW, includes: [compressor, evaporator fan]}
"""
"""A carbon dioxide water heater, transcritical, rated by the outlet of its sink."""


STAGED = CHILLER.replace(
    "compressor: {type: scroll}", "compressor: {type: scroll, count: 3, stages: [33 %, 67 %, 100 %]}"
)
"""The chiller with three compressors that are switched on one after the other."""


@pytest.fixture(scope="session")
def staged_plant(tmp_path_factory: pytest.TempPathFactory) -> LoadedPlant:
    """The chiller with three compressors as read from its file."""
    return write_plant(tmp_path_factory.mktemp("staged"), STAGED)


@pytest.fixture(scope="session")
def staged_model(staged_plant: LoadedPlant) -> SystemModel:
    """The fitted chiller with three compressors."""
    return fit(staged_plant, "chiller")
