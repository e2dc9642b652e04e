"""What a day sheet asks for: which conditions, which readings, with which instrument, and what follows from them."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from commission.quantities import NOMENCLATURE, Kind

if TYPE_CHECKING:
    from commission.description import LoadedPlant, System
    from commission.prediction import Prediction, SystemModel

MOST_AXES = 3
SPEED = "compressor_speed"
DERIVED = (
    "evaporating_temperature", "evaporator_temperature_difference", "compressor_superheat",
    "condensing_temperature", "condenser_temperature_difference", "evaporator_approach", "condenser_approach",
    "subcooling", "heat_source_temperature_change", "heat_sink_temperature_change", "pressure_ratio",
    "cooling_capacity", "heating_capacity", "cooling_cop", "heating_cop",
)  # fmt: skip
"""What the page works out of the readings."""
APPROACHES = {"evaporator_approach": "heat_source", "condenser_approach": "heat_sink"}
"""What is worked out where this medium is a liquid."""
USUAL = (
    "heat_source_outlet_temperature", "heat_sink_outlet_temperature", "suction_pressure", "discharge_pressure",
    "suction_temperature", "discharge_temperature", "liquid_temperature", "power_input", "current",
)  # fmt: skip
"""What is read of every system, where nothing tells that it is not."""
LINE_LOSSES = {
    "suction_pressure": ("evaporating_temperature",),
    "discharge_pressure": ("condensing_temperature", "liquid_temperature", "subcooling"),
}
"""Expected values that the difference between a gauge and its exchanger is made of."""
HOW = {
    "evaporating_temperature": "saturation at the low-side gauge, as it is in the evaporator",
    "compressor_superheat": "suction line minus saturation at the low-side gauge",
    "condensing_temperature": "saturation at the high-side gauge, as it is in the condenser",
    "subcooling": "saturation at the high-side gauge minus liquid line",
    "heat_source_temperature_change": "inlet minus outlet",
    "heat_sink_temperature_change": "outlet minus inlet",
    "pressure_ratio": "high side over low side, both absolute",
    "cooling_capacity": "flow and temperatures of the liquid",
    "heating_capacity": "flow and temperatures of the liquid",
    "cooling_cop": "capacity over power input",
    "heating_cop": "capacity over power input",
}
_FLOW_RANGE = (0.85, 1.15)
_HUMIDITY_RANGE = 0.15


@dataclass(frozen=True, slots=True)
class LivePlan:
    """Keys of the nomenclature. `axes` gives low, rated and high value of at most three conditions, `extras` the same
    of further ones that are measured here, `held` the value of those that are not; `steps` are the values of one that
    can have no others (capacity stages), for each of which there is a table; `readings` are read directly,
    `instruments` names what reads each, None where the plant has nothing for it."""

    axes: Mapping[str, tuple[float, float, float]]
    extras: Mapping[str, tuple[float, float, float]]
    held: Mapping[str, float]
    readings: tuple[str, ...]
    instruments: Mapping[str, str | None]
    steps: Mapping[str, tuple[float, ...]] = field(default_factory=dict)

    @property
    def tabulated(self) -> tuple[str, ...]:
        """The conditions over which each table is made."""
        return (*self.axes, *self.extras)

    @property
    def conditions(self) -> tuple[str, ...]:
        """Everything that is asked of the day."""
        return (*self.axes, *self.steps, *self.extras)


def make_plan(loaded: LoadedPlant, model: SystemModel, rated: Prediction) -> LivePlan:
    """The plan of a system that can be calculated."""
    system = loaded.system(model.system_id)
    temperatures = [k for k in model.condition_axes if NOMENCLATURE[k].kind is Kind.TEMPERATURE]
    axes = [*temperatures, *(k for k in model.condition_axes if k == SPEED)][:MOST_AXES]
    steps = {k: a.steps for k, a in model.condition_axes.items() if a.steps}
    others = [k for k in model.condition_axes if k not in axes and k not in steps]
    extras = [k for k in others if k in system.measured_with or _liquid_flow(k, system)]
    values = {**rated.conditions, **{k: e.value for k, e in rated.expected.items()}}
    readings = readings_of(loaded, system, values, frozenset(model.condition_axes))
    return LivePlan(
        {k: (a.low, a.rated, a.high) for k, a in model.condition_axes.items() if k in axes},
        {k: _around(k, model) for k in extras},
        {k: model.condition_axes[k].rated for k in others if k not in extras},
        readings,
        instruments_of(loaded, system, (*axes, *extras, *readings), values),
        steps,
    )


def bare_plan(loaded: LoadedPlant, system: System) -> LivePlan:
    """The plan of a system that cannot be calculated: nothing is expected, everything can be written down."""
    conditions = [f"heat_{side}_{what}" for side in ("source", "sink") for what in ("inlet_temperature",)]
    axes = dict.fromkeys(conditions, (0.0, 0.0, 0.0))
    readings = readings_of(loaded, system, {}, frozenset(conditions))
    return LivePlan(axes, {}, {}, readings, instruments_of(loaded, system, (*conditions, *readings), {}))


def readings_of(
    loaded: LoadedPlant, system: System, values: Mapping[str, float], conditions: frozenset[str]
) -> tuple[str, ...]:
    """What is read directly: what the plant says it measures, and what it has an instrument for."""
    from commission.acceptance.choosing import DIRECT, cannot_be_read

    instruments = loaded.plant.instruments
    asked = []
    for key in NOMENCLATURE:
        if key in conditions or key == "barometric_pressure" or cannot_be_read(key, system):
            continue
        if key in system.measured_with:
            asked.append(key)
        elif key in DERIVED:
            continue
        elif key in DIRECT and (key in values or not values):
            fits = instruments_of(loaded, system, (key,), values)[key] is not None
            if fits or not instruments or (not values and key in USUAL):
                asked.append(key)
    return tuple(asked)


def instruments_of(
    loaded: LoadedPlant, system: System, keys: tuple[str, ...], values: Mapping[str, float]
) -> dict[str, str | None]:
    """The instrument of the plant for each quantity."""
    from commission.acceptance.choosing import choose_instrument

    measured = system.measured_with
    return {k: choose_instrument(k, values[k], loaded, system) if k in values else measured.get(k) for k in keys}


def _liquid_flow(key: str, system: System) -> bool:
    sides = {"heat_source_flow": system.heat_source, "heat_sink_flow": system.heat_sink}
    return key in sides and sides[key].medium != "air"


def _around(key: str, model: SystemModel) -> tuple[float, float, float]:
    """The range in which a further condition is followed: nearer to the rated value than the range of an axis."""
    axis = model.condition_axes[key]
    if NOMENCLATURE[key].kind is Kind.RATIO:
        low, high = axis.rated - _HUMIDITY_RANGE, axis.rated + _HUMIDITY_RANGE
    elif NOMENCLATURE[key].kind is Kind.TEMPERATURE:
        low, high = axis.low, axis.high
    else:
        low, high = (share * axis.rated for share in _FLOW_RANGE)
    return max(low, axis.low), axis.rated, min(high, axis.high)
