"""What moves which way, as everybody in the trade knows it (common practice, no source)."""

from __future__ import annotations

from collections.abc import Mapping
from itertools import pairwise

import pytest

from commission.prediction import Prediction, SystemModel
from tests.example.conditions import C

TRENDS = [
    ("cold-room", "heat_sink_inlet_temperature", (22 + C, 27 + C, 32 + C),
     {"discharge_pressure": 1, "power_input": 1, "cooling_capacity": -1, "cooling_cop": -1}),
    ("freezer-room", "heat_sink_inlet_temperature", (22 + C, 27 + C, 32 + C),
     {"discharge_pressure": 1, "discharge_temperature": 1, "power_input": 1, "cooling_capacity": -1,
      "cooling_cop": -1}),
    ("freezer-room", "heat_source_inlet_temperature", (-24 + C, -20 + C, -16 + C),
     {"suction_pressure": 1, "cooling_capacity": 1, "power_input": 1, "pressure_ratio": -1,
      "discharge_temperature": -1}),
    ("freezer-room", "heat_source_flow", (0.5, 0.7, 0.9),
     {"suction_pressure": 1, "cooling_capacity": 1, "evaporator_temperature_difference": -1}),
    ("dining-hall", "heat_sink_inlet_temperature", (25 + C, 30 + C, 35 + C),
     {"discharge_pressure": 1, "power_input": 1, "cooling_capacity": -1, "cooling_cop": -1}),
    ("dining-hall", "compressor_speed", (40.0, 60.0, 80.0),
     {"cooling_capacity": 1, "power_input": 1, "suction_pressure": -1, "discharge_pressure": 1, "cooling_cop": -1,
      "sensible_heat_ratio": -1}),
    ("dining-hall", "heat_source_flow", (0.30, 0.38, 0.46),
     {"suction_pressure": 1, "cooling_capacity": 1, "sensible_heat_ratio": 1, "heat_source_temperature_change": -1}),
    ("dining-hall", "heat_source_relative_humidity", (0.4, 0.5, 0.6),
     {"suction_pressure": 1, "cooling_capacity": 1, "sensible_heat_ratio": -1}),
    ("floor-heating", "heat_source_inlet_temperature", (-9 + C, 0 + C, 9 + C),
     {"suction_pressure": 1, "heating_capacity": 1, "heating_cop": 1, "discharge_temperature": -1}),
    ("floor-heating", "heat_sink_outlet_temperature", (30 + C, 36 + C, 42 + C),
     {"discharge_pressure": 1, "discharge_temperature": 1, "power_input": 1, "heating_cop": -1}),
    ("floor-heating", "compressor_speed", (30.0, 50.0, 70.0),
     {"heating_capacity": 1, "power_input": 1, "suction_pressure": -1, "heat_sink_temperature_change": 1}),
    ("shower-water", "heat_source_inlet_temperature", (-9 + C, 5 + C, 19 + C),
     {"suction_pressure": 1, "heating_capacity": 1, "heating_cop": 1, "discharge_temperature": -1,
      "heat_sink_flow": 1}),
    ("shower-water", "heat_sink_inlet_temperature", (10 + C, 25 + C, 40 + C),
     {"heating_capacity": -1, "heating_cop": -1, "gas_cooler_outlet_temperature": 1, "heat_sink_flow": 1}),
]  # fmt: skip


@pytest.mark.parametrize(("system", "key", "axis", "moves"), TRENDS, ids=[f"{t[0]}-{t[1]}" for t in TRENDS])
def test_readings_move_as_the_trade_knows(
    models: Mapping[str, SystemModel], system: str, key: str, axis: tuple[float, ...], moves: dict[str, int]
) -> None:
    """Each expected value rises (1) or falls (-1) all along the axis."""
    found = models[system].grid(key, axis)
    for low, high in pairwise(found):
        assert isinstance(low, Prediction)
        assert isinstance(high, Prediction)
        for name, sign in moves.items():
            assert sign * (high.expected[name].value - low.expected[name].value) > 0, name
