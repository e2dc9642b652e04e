"""The conditions at which the systems of the example plant are looked at, and their predictions as plain numbers."""

from __future__ import annotations

from collections.abc import Callable, Mapping

from commission.prediction import Prediction

C = 273.15

Values = Mapping[str, float]

CONDITIONS: Mapping[str, tuple[Values, ...]] = {
    "cold-room": (
        {},
        {"heat_sink_inlet_temperature": 20 + C},
        {"heat_sink_inlet_temperature": -9 + C},
        {"heat_source_inlet_temperature": 6 + C, "heat_sink_inlet_temperature": 29 + C},
    ),
    "freezer-room": (
        {},
        {"heat_sink_inlet_temperature": 20 + C},
        {"heat_sink_inlet_temperature": -9 + C},
        {"heat_source_inlet_temperature": 10 + C, "heat_sink_inlet_temperature": 25 + C},
        {"heat_source_inlet_temperature": -18 + C, "heat_source_relative_humidity": 0.75},
    ),
    "dining-hall": (
        {},
        {"heat_source_inlet_temperature": 24 + C, "heat_source_relative_humidity": 0.65},
        {"heat_source_inlet_temperature": 24 + C, "heat_source_relative_humidity": 0.35},
        {"heat_source_flow": 1080 / 3600, "compressor_speed": 30.0},
        {"heat_sink_inlet_temperature": 34 + C, "compressor_speed": 80.0},
    ),
    "floor-heating": (
        {},
        {"heat_source_inlet_temperature": 7 + C, "heat_sink_outlet_temperature": 31 + C, "compressor_speed": 50.0},
        {"heat_source_inlet_temperature": -9 + C, "heat_sink_outlet_temperature": 38 + C, "compressor_speed": 90.0},
        {"heat_source_relative_humidity": 0.98},
        {"heat_sink_flow": 1.2 / 3600, "heat_sink_outlet_temperature": 42 + C},
    ),
    "shower-water": (
        {},
        {"heat_source_inlet_temperature": -9 + C},
        {"heat_source_inlet_temperature": 20 + C, "heat_source_relative_humidity": 0.6},
        {"heat_sink_inlet_temperature": 35 + C},
        {"heat_source_inlet_temperature": 2 + C, "heat_sink_outlet_temperature": 65 + C},
    ),
}
"""The rated condition and at least three others of each system, with what matters to it."""

EVERYWHERE = [(system, number) for system, found in CONDITIONS.items() for number in range(len(found))]

Predicted = Callable[[str, int], Prediction]


def values(prediction: Prediction) -> dict[str, float]:
    """Conditions and expected values together, SI."""
    return {**prediction.conditions, **{key: one.value for key, one in prediction.expected.items()}}
