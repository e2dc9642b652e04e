"""What an instrument of the description means in SI: its kind of quantity, range, fixed error and resolution."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType

from commission.quantities import Kind, Reference, parse, parse_pressure

MEASURED: Mapping[str, tuple[Kind, Kind]] = MappingProxyType(
    {
        "temperature": (Kind.TEMPERATURE, Kind.TEMPERATURE_DIFFERENCE),
        "temperature difference": (Kind.TEMPERATURE_DIFFERENCE, Kind.TEMPERATURE_DIFFERENCE),
        "pressure": (Kind.PRESSURE, Kind.PRESSURE_DIFFERENCE),
        "vacuum": (Kind.PRESSURE, Kind.PRESSURE_DIFFERENCE),
        "pressure difference": (Kind.PRESSURE_DIFFERENCE, Kind.PRESSURE_DIFFERENCE),
        "heat": (Kind.HEAT_FLOW, Kind.HEAT_FLOW),
        "energy": (Kind.ENERGY, Kind.ENERGY),
        "velocity": (Kind.VELOCITY, Kind.VELOCITY),
        "electric power": (Kind.POWER, Kind.POWER),
        "current": (Kind.CURRENT, Kind.CURRENT),
        "voltage": (Kind.VOLTAGE, Kind.VOLTAGE),
        "relative humidity": (Kind.RATIO, Kind.RATIO),
        "volume flow": (Kind.VOLUME_FLOW, Kind.VOLUME_FLOW),
        "mass": (Kind.MASS, Kind.MASS),
        "rotational speed": (Kind.SPEED, Kind.SPEED),
        "duration": (Kind.DURATION, Kind.DURATION),
        "sound level": (Kind.SOUND_LEVEL, Kind.SOUND_LEVEL),
    }
)
"""For each word of `measures`: the kind of what is read, and the kind of a difference of two readings."""


@dataclass(frozen=True, slots=True)
class ResolvedInstrument:
    """An instrument in SI. What the description leaves out is None.

    For pressures the ends of the scale are Pa in `reference` (gauge or absolute) and the fixed error and the
    resolution are pressure differences in Pa; a temperature scale is in K, its errors in K.
    """

    measures: str
    kind: Kind
    difference_kind: Kind
    range_low: float | None
    range_high: float | None
    reference: Reference | None
    accuracy_of_span: float | None
    accuracy_of_reading: float | None
    accuracy_absolute: float | None
    resolution: float | None
    drift_per_year: float | None = None

    @property
    def span(self) -> float | None:
        """Upper minus lower end of the scale; an end left out makes it unknown."""
        if self.range_low is None or self.range_high is None:
            return None
        return self.range_high - self.range_low


def read_end(text: str, kind: Kind) -> tuple[float, Reference | None]:
    """One end of a scale in SI, with the reference of a pressure.

    Raises:
        QuantityError: the text is not a quantity of this kind.
    """
    if kind is Kind.PRESSURE:
        pressure = parse_pressure(text)
        return pressure.pascal, pressure.reference
    return parse(text, kind), None
