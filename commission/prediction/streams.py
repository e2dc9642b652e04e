"""From a condition in the keys of the nomenclature to the media that enter the exchangers."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

from commission.errors import NotCalculatedError
from commission.machine import Media, Stream, air_stream, liquid_stream
from commission.prediction.facts import Facts
from commission.prediction.plan import STAGE, Plan
from commission.properties import Liquid

KELVIN = 273.15
SINK_HUMIDITY = 0.5
"""Humidity of sink air: it changes the capacity rate by less than 1 % and nothing else, so it is not asked for."""
SINK_ENDS = ("heat_sink_inlet_temperature", "heat_sink_outlet_temperature")
ONCE_THROUGH = 12.0
"""Temperature change in K from which a water heater is taken to set its flow for the outlet temperature."""


def stream(
    temperature: float,
    flow: float,
    medium: Liquid | None,
    relative_humidity: float,
    pressure: float,
    by_outlet: bool = False,
) -> Stream:
    """Medium of one side at its exchanger.

    Raises:
        NotCalculatedError: air is known by its outlet, which its humidity there would have to go with.
    """
    if medium is not None:
        return liquid_stream(temperature, flow, medium, by_outlet)
    if by_outlet:
        raise NotCalculatedError("a condition of air is its inlet temperature; the outlet follows")
    return air_stream(temperature, flow, relative_humidity, pressure)


def flow_for(
    heat: float, change: float, temperature: float, medium: Liquid | None, wet: float, pressure: float
) -> float:
    """Volume flow in m3/s that changes by `change` K when it takes or gives `heat` in W."""
    unit = stream(temperature, 1.0, medium, wet, pressure)
    return heat / (change * unit.capacity_rate)


def humidity(facts: Facts, a: Mapping[str, float]) -> float:
    """Relative humidity of source air; a liquid has none, 0 then."""
    if facts.source_liquid is not None:
        return 0.0
    stated = facts.system.heat_source.relative_humidity
    return stated if stated is not None else a["source_humidity"]


def media(facts: Facts, plan: Plan, conditions: Mapping[str, float]) -> Media:
    """The media at a condition (keys of the nomenclature, SI)."""
    wet = conditions.get("heat_source_relative_humidity", plan.source_humidity)
    source = _side(conditions, "heat_source", plan.rated.source_flow, facts.source_liquid, wet, facts.pressure)
    sink = _side(conditions, "heat_sink", plan.rated.sink_flow, facts.sink_liquid, SINK_HUMIDITY, facts.pressure)
    around = sink.temperature if plan.surroundings is None else plan.surroundings
    speed = plan.rated.speed
    share = conditions["compressor_speed"] / speed if speed and "compressor_speed" in conditions else 1.0
    return Media(source, sink, around, share)


def _side(
    conditions: Mapping[str, float], side: str, flow: float, medium: Liquid | None, wet: float, pressure: float
) -> Stream:
    by_outlet = f"{side}_inlet_temperature" not in conditions
    temperature = conditions[f"{side}_{'outlet' if by_outlet else 'inlet'}_temperature"]
    one = stream(temperature, conditions.get(f"{side}_flow", flow), medium, wet, pressure, by_outlet)
    outlet = conditions.get(f"{side}_outlet_temperature")
    if by_outlet or outlet is None or medium is None:
        return one
    if outlet <= temperature:
        raise NotCalculatedError("the medium would have to leave colder than it came")
    return replace(one, outlet_wanted=outlet)


def at_a_stage(facts: Facts, conditions: Mapping[str, float]) -> dict[str, float]:
    """The condition with the stage that a rounded share means; one that means none is left as it is."""
    step = facts.system.compressor.step_near(conditions[STAGE]) if STAGE in conditions else None
    return {**conditions, STAGE: step} if step is not None else dict(conditions)


def lifts(facts: Facts) -> bool:
    """Whether the rated points are those of a machine that heats hot water in one pass."""
    temperatures = [
        {k: getattr(point, k) for k in SINK_ENDS if getattr(point, k) is not None}
        for point in facts.system.rated_points
    ]
    return bool(temperatures) and all(once_through(facts, t) for t in temperatures)


def once_through(facts: Facts, conditions: Mapping[str, float]) -> bool:
    """Whether the flow of the sink follows from its inlet and outlet: hot water heated in one pass."""
    inlet = conditions.get("heat_sink_inlet_temperature")
    outlet = conditions.get("heat_sink_outlet_temperature")
    if facts.system.duty != "water_heating" or facts.sink_liquid is None or inlet is None or outlet is None:
        return False
    return outlet - inlet >= ONCE_THROUGH
