"""What no machine can read, whatever its faults: where the band of an expected value ends.

Heat goes from warm to cold by itself (second law, in the words of Clausius): liquid and gas leave what cools them no
colder than it enters, nothing evaporates warmer than what gives it heat; and amounts, such as a power or a flow, are
not negative.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import NamedTuple

NOT_NEGATIVE = frozenset({
    "superheat", "compressor_superheat", "subcooling", "evaporator_temperature_difference",
    "condenser_temperature_difference", "gas_cooler_approach", "heat_source_temperature_change",
    "heat_sink_temperature_change", "cooling_capacity", "heating_capacity", "heating_capacity_with_defrosts",
    "power_input", "compressor_power", "fan_power", "current", "refrigerant_flow", "heat_source_flow", "heat_sink_flow",
    "cooling_cop", "heating_cop", "heating_cop_with_defrosts", "sensible_heat_ratio", "running_share",
})  # fmt: skip
NOT_BELOW = {
    "condensing_temperature": "heat_sink_inlet_temperature",
    "liquid_temperature": "heat_sink_inlet_temperature",
    "gas_cooler_outlet_temperature": "heat_sink_inlet_temperature",
    "heat_sink_outlet_temperature": "heat_sink_inlet_temperature",
}
NOT_ABOVE = {
    "evaporating_temperature": "heat_source_inlet_temperature",
    "heat_source_outlet_temperature": "heat_source_inlet_temperature",
}
SHARES = frozenset({"sensible_heat_ratio", "running_share"})


class Bounds(NamedTuple):
    """Least and greatest value that can be, SI; None where there is none."""

    least: float | None = None
    most: float | None = None

    def around(self, value: float, half: float) -> tuple[float, float]:
        """The band of `half` on both sides of a value, up to what can be. A value beyond a bound keeps its band: then
        it is the value that is wrong, and its band must not hide that."""
        low, high = value - half, value + half
        if self.least is not None and value >= self.least:
            low = max(low, self.least)
        if self.most is not None and value <= self.most:
            high = min(high, self.most)
        return low, high


UNBOUNDED = Bounds()


def bounds(key: str, conditions: Mapping[str, float]) -> Bounds:
    """The bounds of a quantity of the nomenclature at a condition (keys of the nomenclature, SI)."""
    least = 0.0 if key in NOT_NEGATIVE else 1.0 if key == "pressure_ratio" else conditions.get(NOT_BELOW.get(key, ""))
    return Bounds(least, 1.0 if key in SHARES else conditions.get(NOT_ABOVE.get(key, "")))
