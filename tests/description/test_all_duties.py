"""Every kind of system can be described in depth: each value arrives in SI where it belongs."""

from pathlib import Path

import pytest

from commission.description import load_plant
from commission.quantities import Reference

PLANT = """\
plant: {name: Five systems, altitude: 310 m}
spaces:
  freezer: {floor_area: 10 m2, height: 2.6 m, trapped_person_alarm: yes, release_from_inside: yes}
  hall: {floor_area: 90 m2, height: 3.2 m, occupancy: general public, leak_detector: no, ventilation: 900 m3/h}
  yard: {outdoors: yes}
  plant-room: {floor_area: 14 m2, height: 2.5 m, below_ground: yes}
instruments:
  heat meter: {measures: heat, accuracy: {of_reading: 2 %}, drift_per_year: 10 W}
systems:
  freezer:
    duty: cold_storage
    refrigerant: R-455A
    charge: 2.4 kg
    spaces: {evaporator: freezer, condensing_unit: yard, pipework: [hall]}
    heat_source: {medium: air, space: freezer, flow: 2400 m3/h, relative_humidity: 90 %}
    heat_sink: {medium: air, space: yard}
    compressor:
      type: reciprocating
      build: semi-hermetic
      polynomial:
        temperature_unit: °C
        mass_flow: [120, 4.1, -0.6, 0.05, 0, 0.004, 2e-4, 0, 0, -2e-5]
        power: [900, 12, 18, 0.1, 0.2, -0.05, 0, 0, 0, 0]
        suction_temperature: 20 °C
        liquid_subcooling: 0 K
        speed: 1450 rpm
        lowest_evaporating: -40 °C
        highest_evaporating: -15 °C
      envelope:
        - {evaporating_temperature: -40 °C, condensing_temperature: 20 °C}
        - {evaporating_temperature: -15 °C, condensing_temperature: 55 °C}
      crankcase_heater: 60 W
    evaporator:
      rating: {air_on: -18 °C, temperature_difference: 7 K, capacity: 3.1 kW, surface: frosted}
      fan_power: 140 W
      internal_volume: 4 L
      defrost: {method: electric, start: by time, power: 2.4 kW, interval: 8 h, longest: 30 min, end_temperature: 8 °C,
                drip_time: 3 min, fan_start_temperature: -5 °C}
    receiver: {volume: 4 L, relief_valve: 28 bar g}
    suction_accumulator: 1.5 L
    suction_exchanger: {effectiveness: 40 %}
    expansion: {device: thermostatic valve, superheat: 6 K, maximum_operating_pressure: 1.6 bar g}
    lines:
      suction: {outside_diameter: 22 mm, length: 14 m, rise: 3 m, insulated: yes}
      liquid: {outside_diameter: 10 mm}
    controls:
      crankcase_pressure_regulator: 1.5 bar g
      head_pressure: {by: condenser flooding, hold: 30 °C}
      high_pressure_reset: by hand
      least_running_time: 3 min
    rated_points:
      - {heat_source_inlet_temperature: -18 °C, heat_sink_inlet_temperature: 32 °C, cooling_capacity: 2.9 kW,
         power_input: 2.1 kW, capacity_is: net, includes: [compressor, condenser fan, evaporator fan]}
  hall:
    duty: comfort_cooling
    refrigerant: R-32
    spaces: {evaporator: hall, evaporator_mounting: ceiling, condensing_unit: yard}
    heat_source: {medium: air, space: hall, flow: 1100 m3/h, flow_stages: {low: 700 m3/h, high: 1100 m3/h},
                  external_pressure: 30 Pa}
    heat_sink: {medium: air, space: yard}
    compressor: {type: rotary, drive: variable speed, minimum_speed: 20 Hz, nominal_speed: 60 Hz, maximum_speed: 100 Hz}
    rated_points:
      - {heat_source_inlet_temperature: 27 °C, heat_source_wet_bulb: 19 °C, heat_sink_inlet_temperature: 35 °C,
         compressor_speed: 60 Hz, cooling_capacity: 7.1 kW, cooling_cop: 3.3, sensible_heat_ratio: 74 %, current: 9.8 A}
  chiller:
    duty: liquid_cooling
    refrigerant: R-513A
    heat_source: {medium: propylene glycol, mass_fraction: 30 %, flow: 8 m3/h, least_flow: 5 m3/h, pump_power: 550 W,
                  exchanger_pressure_loss: 35 kPa}
    heat_sink: {medium: water, flow: 12 m3/h}
    compressor:
      count: 2
      stages: [50 %, 100 %]
      table:
        suction_superheat: 10 K
        points: {file: tables/compressor.csv}
    condenser: {type: shell and tube, internal_volume: 12 L}
    controls: {liquid_outlet_temperature: -2 °C, liquid_differential: 2 K, freeze_protection: -8 °C,
               head_pressure: {by: water valve, hold: 32 °C}, evaporator_pressure_regulator: 1.2 bar g}
    rated_points:
      - {heat_source_inlet_temperature: 3 °C, heat_source_outlet_temperature: -2 °C, heat_sink_inlet_temperature: 27 °C,
         heat_sink_outlet_temperature: 32 °C, cooling_capacity: 38 kW, power_input: 11 kW}
  floor:
    duty: space_heating
    refrigerant: R-290
    sealed: yes
    heat_source: {medium: air, space: yard}
    heat_sink: {medium: water, flow: 1.6 m3/h}
    evaporator: {defrost: {method: reverse cycle, start: on demand, longest: 10 min}}
    controls:
      weather_curve:
        points: [{outdoor: -15 °C, flow: 40 °C}, {outdoor: 0 °C, flow: 34 °C}, {outdoor: 15 °C, flow: 25 °C}]
        highest_flow: 42 °C
        heating_limit: 16 °C
    back_up: {power: 6 kW, where: flow pipe, mode: helps, starts_below: -7 °C, locked_out_above: 0 °C, delay: 20 min}
    rated_points:
      - {heat_source_inlet_temperature: 2 °C, heat_source_wet_bulb: 1 °C, heat_sink_inlet_temperature: 30 °C,
         heat_sink_outlet_temperature: 35 °C, heating_capacity: 7.4 kW, heating_cop: 3.7, frost_included: yes}
    guarantee:
      - {quantity: heating_cop, at: {heat_source_inlet_temperature: 2 °C, heat_sink_outlet_temperature: 35 °C},
         value: 3.6, tolerance: {below: 5 %}, decision: guarded, carried_by: as stated, route: liquid side,
         includes: [compressor, evaporator fan, controls, defrost]}
    measured_with: {heating_capacity: heat meter}
  showers:
    duty: water_heating
    refrigerant: R-744
    charge: 3.2 kg
    nameplate: {allowable_pressure_low: 80 bar g, allowable_pressure_high: 130 bar g}
    heat_source: {medium: air, space: yard}
    heat_sink: {medium: water, flow: 350 L/h}
    condenser: {type: gas cooler}
    controls: {gas_cooler_pressure: {by: follows the gas-cooler outlet, lowest: 75 bar g, highest: 115 bar g}}
    store:
      volume: 1000 L
      set_point: 65 °C
      differential: 8 K
      cold_water: 10 °C
      standing_loss: 120 W
      sensors:
        top: {height: 85 %, used_for: display}
        middle: {height: 50 %, used_for: start}
        bottom: {height: 10 %, used_for: stop}
      circulation: {return_temperature: 55 °C, flow: 300 L/h, heat_loss: 700 W, hours_per_day: 18 h, enters_at: 60 %}
      hygiene_heating: {temperature: 65 °C, interval: 7 d, hold: 1 h}
      unvented: yes
    back_up: {power: 9 kW, where: store top, mode: replaces, locked_out_above: 5 °C}
    rated_points:
      - {heat_source_inlet_temperature: 7 °C, heat_sink_inlet_temperature: 10 °C, heat_sink_outlet_temperature: 65 °C,
         heating_capacity: 20 kW, power_input: 6.2 kW}
"""
TABLE = (
    "evaporating_temperature [°F],condensing_temperature [°F],"
    "cooling_capacity [refrigeration tons],compressor_power [kW]\n"
    "14,95,5.1,4.8\n23,95,6.3,5.0\n"
)


def test_five_systems_in_depth(tmp_path: Path) -> None:
    """Polynomials, a table beside, stages, defrost, limits of suction pressure, curve, back-up and store are read."""
    (tmp_path / "tables").mkdir()
    (tmp_path / "tables/compressor.csv").write_text(TABLE, encoding="utf-8")
    (tmp_path / "plant.yaml").write_text(PLANT, encoding="utf-8")
    loaded = load_plant(tmp_path)
    freezer, hall, chiller, floor, showers = loaded.plant.systems.values()

    assert freezer.compressor.polynomial is not None
    assert freezer.compressor.polynomial.mass_flow == (120, 4.1, -0.6, 0.05, 0, 0.004, 2e-4, 0, 0, -2e-5)
    assert freezer.expansion is not None
    assert freezer.expansion.maximum_operating_pressure is not None
    assert freezer.expansion.maximum_operating_pressure.reference is Reference.GAUGE
    assert freezer.evaporator.defrost is not None
    assert freezer.evaporator.defrost.interval == 8 * 3600.0
    assert freezer.lines.suction is not None
    assert freezer.lines.suction.outside_diameter == pytest.approx(0.022)
    assert hall.heat_source.flow_stages["low"] == pytest.approx(700 / 3600)
    assert hall.compressor.maximum_speed == 100.0
    assert chiller.compressor.table is not None
    assert chiller.compressor.table.points[0].cooling_capacity == pytest.approx(5.1 * 3516.8528, rel=1e-6)
    assert chiller.compressor.table.points[1].evaporating_temperature == pytest.approx(268.15)
    assert chiller.compressor.stages == (0.5, 1.0)
    assert floor.controls.weather_curve is not None
    assert [round(p.flow - 273.15) for p in floor.controls.weather_curve.points] == [40, 34, 25]
    assert floor.back_up is not None
    assert floor.back_up.locked_out_above == pytest.approx(273.15)
    assert floor.guarantee[0].value_si == 3.6
    assert showers.store is not None
    assert showers.store.volume == 1.0
    assert showers.store.sensors["bottom"].height == pytest.approx(0.1)
    assert showers.store.circulation is not None
    assert showers.store.circulation.heat_loss == 700.0
    assert loaded.plant.instruments["heat meter"].resolved.drift_per_year == 10.0
