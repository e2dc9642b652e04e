"""Every expected value with its method, inputs and the assumptions that move it."""

from __future__ import annotations

import math
from collections.abc import Mapping

from commission.machine import OperatingPoint
from commission.prediction.expected import TOO_NEAR, Found
from commission.prediction.facts import Facts
from commission.prediction.fitting import Fit
from commission.quantities import NOMENCLATURE, Explained, Input, Kind, bounds

METHOD: Mapping[str, str] = {
    "evaporating_temperature": "component_balance",
    "condensing_temperature": "component_balance",
    "refrigerant_flow": "displacement_flow",
    "suction_pressure": "suction_pressure",
    "discharge_pressure": "discharge_pressure",
    "suction_temperature": "suction_temperature",
    "discharge_temperature": "discharge_temperature",
    "liquid_temperature": "liquid_temperature",
    "superheat": "held_superheat",
    "compressor_superheat": "compressor_superheat",
    "subcooling": "held_subcooling",
    "evaporator_temperature_difference": "temperature_difference",
    "condenser_temperature_difference": "temperature_difference",
    "evaporator_approach": "approach",
    "condenser_approach": "approach",
    "pressure_ratio": "pressure_ratio",
    "cooling_capacity": "refrigerant_heat",
    "net_cooling_capacity": "net_cooling",
    "heating_capacity": "refrigerant_heat",
    "compressor_power": "compressor_power",
    "fan_power": "fan_power",
    "power_input": "power_input",
    "current": "current_from_power",
    "compressor_current": "current_from_power",
    "cooling_cop": "cop",
    "heating_cop": "cop",
    "heating_capacity_with_defrosts": "frost_share",
    "heating_cop_with_defrosts": "frost_share",
    "carnot_cop": "carnot_cooling",
    "sensible_heat_ratio": "wet_coil",
    "heat_sink_flow": "medium_flow",
    "gas_cooler_outlet_temperature": "gas_cooler_balance",
    "gas_cooler_approach": "gas_cooler_difference",
    "heat_source_inlet_temperature": "medium_outlet",
    "heat_sink_inlet_temperature": "medium_outlet",
    "heat_source_outlet_temperature": "medium_outlet",
    "heat_source_outlet_wet_bulb": "wet_coil",
    "heat_sink_outlet_temperature": "medium_outlet",
    "heat_source_temperature_change": "medium_outlet",
    "heat_sink_temperature_change": "medium_outlet",
}
"""Method of `methods.yaml` for each expected quantity."""

GAS_COOLER: Mapping[str, str] = {
    "discharge_pressure": "gas_cooler_pressure",
    "liquid_temperature": "gas_cooler_balance",
}
"""Methods of a circuit with a gas cooler, in place of those above."""

_OF_POINT: Mapping[str, tuple[str, ...]] = {
    "suction_pressure": ("evaporating_temperature",),
    "discharge_pressure": ("condensing_temperature",),
    "suction_temperature": ("evaporating_temperature", "superheat"),
    "discharge_temperature": (
        "suction_pressure",
        "suction_temperature",
        "discharge_pressure",
        "compressor_power",
        "refrigerant_flow",
    ),
    "liquid_temperature": ("condensing_temperature", "subcooling"),
    "compressor_superheat": ("suction_temperature", "suction_pressure"),
    "evaporator_temperature_difference": ("evaporating_temperature",),
    "condenser_temperature_difference": ("condensing_temperature",),
    "evaporator_approach": ("heat_source_outlet_temperature", "evaporating_temperature"),
    "condenser_approach": ("condensing_temperature", "heat_sink_outlet_temperature"),
    "gas_cooler_outlet_temperature": ("discharge_pressure", "discharge_temperature", "refrigerant_flow"),
    "gas_cooler_approach": ("gas_cooler_outlet_temperature",),
    "pressure_ratio": ("suction_pressure", "discharge_pressure"),
    "refrigerant_flow": ("suction_pressure", "suction_temperature", "pressure_ratio"),
    "cooling_capacity": ("refrigerant_flow", "evaporating_temperature", "superheat", "liquid_temperature"),
    "net_cooling_capacity": ("cooling_capacity",),
    "heating_capacity": ("refrigerant_flow", "discharge_temperature", "liquid_temperature"),
    "compressor_power": ("refrigerant_flow", "suction_temperature", "suction_pressure", "discharge_pressure"),
    "power_input": ("compressor_power", "fan_power"),
    "current": ("power_input",),
    "compressor_current": ("compressor_power",),
    "cooling_cop": ("cooling_capacity", "power_input"),
    "heating_cop": ("heating_capacity", "power_input"),
    "heating_capacity_with_defrosts": ("heating_capacity",),
    "heating_cop_with_defrosts": ("heating_cop",),
    "carnot_cop": ("heat_source_outlet_temperature", "heat_sink_outlet_temperature"),
    "sensible_heat_ratio": ("cooling_capacity", "evaporating_temperature"),
    "heat_sink_flow": ("heating_capacity",),
    "heat_source_inlet_temperature": ("cooling_capacity",),
    "heat_sink_inlet_temperature": ("heating_capacity",),
    "heat_source_outlet_temperature": ("cooling_capacity",),
    "heat_source_outlet_wet_bulb": ("cooling_capacity", "sensible_heat_ratio"),
    "heat_sink_outlet_temperature": ("heating_capacity",),
    "heat_source_temperature_change": ("cooling_capacity",),
    "heat_sink_temperature_change": ("heating_capacity",),
}
"""Expected values that each value is calculated from."""

_MEDIA: Mapping[str, tuple[str, ...]] = {
    "evaporating_temperature": (
        "heat_source_inlet_temperature",
        "heat_source_relative_humidity",
        "heat_source_flow",
    ),
    "condensing_temperature": ("heat_sink_inlet_temperature", "heat_sink_flow"),
    "refrigerant_flow": ("compressor_stage",),
    "compressor_power": ("compressor_stage",),
    "evaporator_temperature_difference": ("heat_source_inlet_temperature",),
    "condenser_temperature_difference": ("heat_sink_inlet_temperature",),
    "evaporator_approach": ("heat_source_outlet_temperature",),
    "condenser_approach": ("heat_sink_outlet_temperature",),
    "gas_cooler_outlet_temperature": ("heat_sink_inlet_temperature", "heat_sink_outlet_temperature", "heat_sink_flow"),
    "gas_cooler_approach": ("heat_sink_inlet_temperature",),
    "heating_capacity_with_defrosts": ("heat_source_inlet_temperature", "heat_source_relative_humidity"),
    "heating_cop_with_defrosts": ("heat_source_inlet_temperature", "heat_source_relative_humidity"),
    "carnot_cop": ("heat_source_inlet_temperature", "heat_sink_inlet_temperature"),
    "sensible_heat_ratio": ("heat_source_inlet_temperature", "heat_source_relative_humidity", "heat_source_flow"),
    "heat_source_outlet_temperature": (
        "heat_source_inlet_temperature",
        "heat_source_flow",
        "heat_source_relative_humidity",
    ),
    "heat_source_outlet_wet_bulb": (
        "heat_source_inlet_temperature",
        "heat_source_flow",
        "heat_source_relative_humidity",
    ),
    "heat_sink_outlet_temperature": ("heat_sink_inlet_temperature", "heat_sink_flow"),
    "heat_sink_flow": ("heat_sink_inlet_temperature", "heat_sink_outlet_temperature"),
    "heat_source_inlet_temperature": ("heat_source_outlet_temperature", "heat_source_flow"),
    "heat_sink_inlet_temperature": ("heat_sink_outlet_temperature", "heat_sink_flow"),
    "heat_source_temperature_change": ("heat_source_flow",),
    "heat_sink_temperature_change": ("heat_sink_flow",),
}
"""Conditions that each value is calculated from."""

NOTICED = 0.03
"""An assumption is named beside a value when it makes at least this share of the value's standard uncertainty."""


def explain(
    facts: Facts,
    fit: Fit,
    conditions: Mapping[str, float],
    point: OperatingPoint,
    found: Found,
    parts: Mapping[str, Mapping[str, float]],
) -> dict[str, Explained]:
    """`Explained` for every expected value."""
    stated = _stated(facts, fit, point)
    table = {}
    methods = {**METHOD, **GAS_COOLER} if facts.transcritical else METHOD
    for key, value in found.values.items():
        own = parts[key]
        uncertainty = math.sqrt(sum(v * v for v in own.values()))
        inputs = [
            Input(name, conditions[name], NOMENCLATURE[name].kind, "condition")
            for name in _MEDIA.get(key, ())
            if name in conditions
        ]
        inputs += [
            Input(name, found.values[name], NOMENCLATURE[name].kind, "calculated")
            for name in _OF_POINT.get(key, ())
            if name in found.values
        ]
        inputs += stated.get(key, ())
        named = [c for c, v in own.items() if c in fit.used and abs(v) >= NOTICED * uncertainty]
        named.sort(key=lambda c: -abs(own[c]))
        told = {i.origin for i in inputs}
        inputs += [
            Input(c, fit.values[c], fit.used[c].kind, origin)
            for c in named
            if (origin := f"assumption {c}") not in told
        ]
        at = bounds(key, conditions)
        table[key] = Explained(key, value, uncertainty, methods[key], tuple(inputs), tuple(named), at)
    return table


def _stated(facts: Facts, fit: Fit, point: OperatingPoint) -> dict[str, list[Input]]:
    """Stated and fitted figures that enter each value, with their origin."""
    system, machine = facts.system, fit.plan.machine
    table: dict[str, list[Input]] = {}

    def add(keys: tuple[str, ...], one: Input) -> None:
        for key in keys:
            table.setdefault(key, []).append(one)

    rated = tuple("rated " + d.of.replace("_", " ") for d, _ in fit.misses)
    for (datum, _), name in zip(fit.misses[:6], rated, strict=False):
        kind = NOMENCLATURE[datum.of].kind if datum.of in NOMENCLATURE else Kind.RATIO
        keys = (
            ("cooling_capacity", "heating_capacity", "refrigerant_flow")
            if "capacity" in datum.of
            else ("compressor_power",)
        )
        add(keys, Input(name, datum.value, kind, datum.origin))
    conductance = Kind.CONDUCTANCE
    add(
        ("evaporating_temperature",),
        Input("conductance of the evaporator", machine.evaporator.conductance, conductance, "fitted"),
    )
    cooler = "gas cooler" if facts.transcritical else "condenser"
    add(
        ("condensing_temperature", "gas_cooler_outlet_temperature"),
        Input(f"conductance of the {cooler}", machine.condenser.conductance, conductance, "fitted"),
    )
    if system.evaporator.rating is not None:
        rating = system.evaporator.rating
        add(
            ("evaporating_temperature",),
            facts.input("rated capacity of the cooler", rating.capacity, Kind.HEAT_FLOW, "evaporator.rating.capacity"),
        )
        add(
            ("evaporating_temperature",),
            facts.input(
                "rated temperature difference of the cooler", rating.temperature_difference,
                Kind.TEMPERATURE_DIFFERENCE, "evaporator.rating.temperature_difference",
            ),
        )  # fmt: skip
    compression = point.balance.compression
    volumetric = compression.volumetric_efficiency
    if system.compressor.displacement is not None and volumetric is not None:
        add(("refrigerant_flow",), Input("volumetric efficiency", volumetric, Kind.RATIO, "fitted"))
    add(("compressor_power",), Input("isentropic efficiency", compression.isentropic_efficiency, Kind.RATIO, "fitted"))
    if system.compressor.displacement is not None:
        add(
            ("refrigerant_flow",),
            facts.input("displacement", system.compressor.displacement, Kind.VOLUME_FLOW, "compressor.displacement"),
        )
    if system.expansion is not None and system.expansion.superheat is not None:
        add(
            ("superheat",),
            facts.input(
                "superheat of the valve", system.expansion.superheat, Kind.TEMPERATURE_DIFFERENCE, "expansion.superheat"
            ),
        )
    if system.controls.head_pressure is not None:
        hold = system.controls.head_pressure.hold
        add(
            ("condensing_temperature", "fan_power"),
            facts.input("head pressure held at", hold, Kind.TEMPERATURE, "controls.head_pressure.hold"),
        )
    for part, path, word in (
        (system.evaporator, "evaporator.fan_power", "evaporator fan"),
        (system.condenser, "condenser.fan_power", "condenser fan"),
    ):
        if part.fan_power is not None:
            add(
                ("fan_power", "net_cooling_capacity") if "evap" in path else ("fan_power",),
                facts.input(word, part.fan_power, Kind.POWER, path),
            )
    currents = ("current", "compressor_current")
    if system.nameplate.voltage is not None:
        add(currents, facts.input("voltage", system.nameplate.voltage, Kind.VOLTAGE, "nameplate.voltage"))
    add(
        currents,
        Input(
            "power factor",
            fit.plan.power_factor,
            Kind.RATIO,
            facts.origin("compressor.power_factor")
            if system.compressor.power_factor is not None
            else "assumption power_factor",
        ),
    )
    return table


VAGUE = 0.2
"""Standard uncertainty over value from which a Carnot COP is not told."""


def drop_vague_carnot(nominal: Found, parts: Mapping[str, Mapping[str, float]]) -> None:
    """Takes a Carnot COP out that is known no better than to a fifth: the media lie near each other."""
    value = nominal.values.get("carnot_cop")
    if value is not None and math.hypot(*parts["carnot_cop"].values()) > VAGUE * value:
        del nominal.values["carnot_cop"]
        nominal.reasons["carnot_cop"] = TOO_NEAR


def add_part(parts: dict[str, float], cause: str, amount: float) -> None:
    """Add a contribution; several independent ones of one cause (the scatter moves the fit in several directions) are
    put together as their root sum of squares, with the sign of the first."""
    first = parts.get(cause)
    parts[cause] = amount if first is None else math.copysign(math.hypot(first, amount), first)
