"""A small plant with its own checklist, fitted once, and records of it as a person would write them."""

from __future__ import annotations

import shutil
from collections.abc import Callable
from pathlib import Path

import pytest

from commission.description import LoadedPlant, load_plant
from commission.prediction import SystemModel, fit

PLANT = """\
plant: {name: Test house, altitude: 310 m}
spaces:
  room: {floor_area: 24 m2, height: 2.8 m, occupancy: authorised persons only}
  yard: {outdoors: yes}
instruments:
  low gauge:
    {measures: pressure, from: -1 bar g, to: 10 bar g, accuracy: {of_span: 0.25 %}, resolution: 0.01 bar, serial: L-1,
     calibrated_on: 2026-03-30, calibrated_until: 2027-03-31}
  high gauge:
    {measures: pressure, from: 0 bar g, to: 30 bar g, accuracy: {of_span: 0.5 %}, resolution: 0.05 bar, serial: H-1,
     calibrated_on: 2026-03-30, calibrated_until: 2027-03-31}
  pipe probe:
    {measures: temperature, class: IEC 60751 A, clamped_on: yes, resolution: 0.1 K, serial: P-1,
     calibrated_on: 2026-03-30, calibrated_until: 2027-03-31}
  air probe:
    {measures: temperature, class: IEC 60751 A, resolution: 0.1 K, serial: A-1,
     calibrated_on: 2026-03-30, calibrated_until: 2027-03-31}
  power meter:
    {measures: electric power, accuracy: {of_reading: 1 %}, resolution: 1 W, serial: W-1,
     calibrated_on: 2026-03-30, calibrated_until: 2027-03-31}
systems:
  store:
    name: Store
    duty: cold_storage
    refrigerant: R-290
    charge: 0.45 kg
    spaces: {evaporator: room, condensing_unit: yard}
    nameplate: {allowable_pressure_low: 17 bar g, allowable_pressure_high: 28 bar g}
    heat_source: {medium: air, space: room, flow: 2100 m3/h, relative_humidity: 85 %}
    heat_sink: {medium: air, space: yard, flow: 2600 m3/h}
    compressor: {type: reciprocating, displacement: 8.2 m3/h, nominal_speed: 1450 rpm}
    evaporator:
      rating: {air_on: 2 °C, temperature_difference: 8 K, capacity: 3.6 kW}
      fan_power: 110 W
      defrost: {method: off cycle}
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
    design: {heat_source_inlet_temperature: 2 °C, heat_sink_inlet_temperature: 32 °C}
    guarantee:
      - {quantity: cooling_capacity, at: {heat_source_inlet_temperature: 2 °C, heat_sink_inlet_temperature: 32 °C},
         value: 3.0 kW, tolerance: {below: 5 %}, route: compressor heat balance}
    measured_with: {discharge_pressure: high gauge, power_input: power meter}
"""

CHECKLIST = """\
stage: visit
title: Visit
purpose: Items that the tests know.
after: performance
items:
  - {id: visit.clean, do: See that it is clean., answer: yes/no, source: common practice}
  - {id: visit.setting, do: Read the setting., answer: value, unit: bar g, must_read: {at_most: 22 bar g},
     source: common practice}
  - {id: visit.suction, do: Read the gauge., answer: value, quantity: suction_pressure, source: common practice}
  - {id: visit.paper, do: File the paper., answer: file, source: common practice}
  - {id: visit.words, do: Say what you saw., answer: text, source: common practice}
"""

TRIM = """\
# the valve is set
system: store
stage: visit
mode: trim
started: 2026-04-21T10:20:00+01:00
since_start: 40 min
since_defrost: 95 min
people:
  operator: {name: A fitter, firm: Invented Cooling}
conditions:
  heat_source_inlet_temperature: {value: 2.4 °C, instrument: air probe, where: air on the cooler}
  heat_sink_inlet_temperature: {value: 24.0 °C, instrument: air probe}
readings:
  suction_pressure: {value: 2.90 bar g, instrument: low gauge, where: service port}
  discharge_pressure: 11.80 bar g
answers:
  visit.clean: yes
"""

Write = Callable[..., Path]


@pytest.fixture(scope="session")
def plant_template(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The folder of the test plant, never written to after it is made."""
    folder = tmp_path_factory.mktemp("template") / "plant"
    (folder / "checklists").mkdir(parents=True)
    (folder / "plant.yaml").write_text(PLANT, encoding="utf-8")
    (folder / "checklists" / "own.yaml").write_text(CHECKLIST, encoding="utf-8")
    return folder


@pytest.fixture(scope="session")
def model(plant_template: Path) -> SystemModel:
    """The fitted model of the store: fitting is slow and gives the same each time."""
    return fit(load_plant(plant_template), "store")


@pytest.fixture
def folder(tmp_path: Path, plant_template: Path) -> Path:
    """A copy of the test plant that a test may change."""
    target = tmp_path / "plant"
    shutil.copytree(plant_template, target)
    return target


@pytest.fixture
def loaded(folder: Path) -> LoadedPlant:
    """The test plant, read."""
    return load_plant(folder)


@pytest.fixture
def write(tmp_path: Path) -> Write:
    """Write a record as a draft; pairs of old and new text change the trim record."""

    def make(*changes: tuple[str, str], text: str = TRIM, name: str = "draft.yaml") -> Path:
        for old, new in changes:
            assert old in text, old
            text = text.replace(old, new)
        path = tmp_path / name
        path.write_text(text, encoding="utf-8")
        return path

    return make


@pytest.fixture(scope="session")
def test_text(model: SystemModel) -> str:
    """A witnessed test whose readings are what the model expects, rounded to what the instruments show."""
    return as_expected(model, "test", "2026-05-14T10:20:00+01:00", 2.4, 24.0)


def as_expected(model: SystemModel, mode: str, started: str, source: float, sink: float, **off: float) -> str:
    """A record of a plant that reads as expected, but for `off` (key to SI difference)."""
    conditions = {"heat_source_inlet_temperature": source + 273.15, "heat_sink_inlet_temperature": sink + 273.15}
    values = {k: e.value + off.get(k, 0.0) for k, e in model.predict(conditions).expected.items()}
    barometric = 101325.0 * (1 - 2.25577e-5 * 310) ** 5.25588
    low, high = ((values[k] - barometric) / 1e5 for k in ("suction_pressure", "discharge_pressure"))
    suction, discharge, liquid = (
        values[k] - 273.15 for k in ("suction_temperature", "discharge_temperature", "liquid_temperature")
    )
    return f"""\
system: store
stage: visit
mode: {mode}
started: {started}
since_start: 75 min
since_defrost: 180 min
people:
  operator: {{name: A fitter, firm: Invented Cooling, certificate: C-1}}
  witness: {{name: The owner}}
conditions:
  heat_source_inlet_temperature: {{value: {source:.1f} °C, instrument: air probe}}
  heat_sink_inlet_temperature: {{value: {sink:.1f} °C, instrument: air probe}}
readings:
  suction_pressure: {{value: {low:.2f} bar g, instrument: low gauge}}
  discharge_pressure: {{value: {high:.2f} bar g, instrument: high gauge}}
  suction_temperature: {{value: {suction:.1f} °C, instrument: pipe probe}}
  discharge_temperature: {{value: {discharge:.1f} °C, instrument: pipe probe}}
  liquid_temperature: {{value: {liquid:.1f} °C, instrument: pipe probe}}
  power_input: {{value: {values["power_input"]:.0f} W, instrument: power meter}}
"""
