"""The efficiencies that a description states, each with the highest that the second law allows between its media."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass

from commission.description.model import CompressorPoint, CondensingUnitPoint, Conditions, Medium, RatedPoint
from commission.errors import NotCalculatedError
from commission.quantities import Explained, Input, Kind
from commission.review.facts import SystemFacts


@dataclass(frozen=True, slots=True)
class StatedCop:
    """A stated COP, cooling or heating, and the Carnot COP between the two streams; None where there is no limit."""

    path: str
    name: str
    quantity: str
    cop: float
    source_mean: float
    sink_mean: float
    limit: Explained


def entropic_mean(inlet: float, outlet: float) -> float:
    """Entropic mean temperature in K of a stream of constant heat capacity: (T_in - T_out) / ln(T_in / T_out).

    Source: dh/ds of the stream with dh = c dT and ds = c dT/T. Temperatures in K.
    """
    if math.isclose(inlet, outlet, abs_tol=1e-6):
        return (inlet + outlet) / 2
    return (inlet - outlet) / math.log(inlet / outlet)


def stated_cops(facts: SystemFacts) -> Iterator[StatedCop]:
    """Every COP that rated points, the condensing unit's table and guarantees state."""
    for index, point in facts.rated_points():
        path, name = facts.path("rated_points", index), f"Rated point {index + 1}"
        heat = (point.cooling_capacity, point.heating_capacity)
        for quantity in ("cooling_cop", "heating_cop"):
            cop = cop_of(point, quantity)
            if cop is not None:
                yield from _between_media(facts, path, name, quantity, cop, point, heat)
    unit, table = facts.system.condensing_unit, facts.system.compressor.table
    for index, row in enumerate(unit.rated_points if unit else ()):
        yield from _of_condensing_unit(facts, index, row)
    for index, line in enumerate(table.points if table else ()):
        yield from _of_compressor_table(facts, index, line)
    for index, guarantee in enumerate(facts.system.guarantee):
        if guarantee.quantity in ("cooling_cop", "heating_cop"):
            path = facts.path("guarantee", index)
            name = f"Guarantee {index + 1}"
            value = guarantee.value_si
            yield from _between_media(facts, path, name, guarantee.quantity, value, guarantee.at, (None, None))


def cop_of(point: RatedPoint, quantity: str) -> float | None:
    """The COP that a rated point states, or that follows from its capacity and power; None where neither is there."""
    stated: float | None = getattr(point, quantity)
    if stated is not None:
        return stated
    capacity: float | None = getattr(point, quantity.replace("_cop", "_capacity"))
    return capacity / point.power_input if capacity is not None and point.power_input else None


def _between_media(
    facts: SystemFacts,
    path: str,
    name: str,
    quantity: str,
    cop: float,
    at: Conditions,
    heat: tuple[float | None, float | None],
) -> Iterator[StatedCop]:
    cooling, heating = heat
    source = stream_mean(facts, "source", at, cooling)
    sink = stream_mean(facts, "sink", at, heating)
    if source is not None and sink is not None and sink > source:
        yield StatedCop(path, name, quantity, cop, source, sink, carnot(quantity, source, sink, path))


def carnot(quantity: str, source: float, sink: float, origin: str) -> Explained:
    """Highest COP between two mean temperatures in K: cooling T_so / (T_si - T_so), heating T_si / (T_si - T_so)."""
    cooling = quantity == "cooling_cop"
    inputs = (
        Input("entropic mean temperature of the heat source", source, Kind.TEMPERATURE, origin),
        Input("entropic mean temperature of the heat sink", sink, Kind.TEMPERATURE, origin),
    )
    value = (source if cooling else sink) / (sink - source)
    return Explained("carnot_cop", value, None, "carnot_cooling" if cooling else "carnot_heating", inputs)


def stream_mean(facts: SystemFacts, side: str, at: Conditions, heat: float | None) -> float | None:
    """Entropic mean temperature in K of a medium, or a bound of it that no honest machine can be hurt by.

    Both ends where they are written; an end that is missing follows from flow and heat where the medium is a liquid
    (`heat` in W). A lone inlet is itself a bound: the source gets no warmer, the sink no colder than it. A lone outlet
    of a liquid is moved by the largest usual change of temperature. Evaporative rejection is bounded by the wet bulb.
    None where nothing bounds it.
    """
    if side == "sink" and facts.evaporative:
        return at.heat_sink_wet_bulb
    inlet = getattr(at, f"heat_{side}_inlet_temperature")
    outlet = getattr(at, f"heat_{side}_outlet_temperature")
    medium = facts.system.heat_source if side == "source" else facts.system.heat_sink
    if inlet is not None and outlet is not None:
        return entropic_mean(inlet, outlet)
    if inlet is None and outlet is None:
        return None
    known = inlet if inlet is not None else outlet
    flow = getattr(at, f"heat_{side}_flow") or medium.flow
    change = _liquid_change(medium, flow, heat, known)
    falls = side == "source"
    if change is not None:
        sign = -1.0 if (inlet is not None) == falls else 1.0
        return entropic_mean(known, known + sign * change)
    if inlet is not None:
        return float(inlet)
    if facts.system.duty == "water_heating" and side == "sink":
        return None  # a store or a tap may start anywhere
    return float(outlet) + (1 if falls else -1) * facts.plant.limit("medium_change_unknown")


def _liquid_change(medium: Medium, flow: float | None, heat: float | None, temperature: float) -> float | None:
    """Temperature change in K of a liquid stream, None for air or where flow or heat is not known."""
    if medium.medium == "air" or not flow or heat is None:
        return None
    from commission.properties import liquid

    stream = liquid(medium.medium, medium.mass_fraction or 0.0)
    return heat / (flow * stream.density(temperature) * stream.specific_heat(temperature))


def _of_condensing_unit(facts: SystemFacts, index: int, row: CondensingUnitPoint) -> Iterator[StatedCop]:
    """A condensing unit by its refrigerant: mean temperature in the cooler against the air on the condenser."""
    path = facts.path("condensing_unit", "rated_points", index)
    name = f"Row {index + 1} of the condensing unit's table"
    unit = facts.system.condensing_unit
    assert unit is not None
    suction = suction_of_rating(row.evaporating_temperature, unit.suction_temperature, unit.suction_superheat)
    sink = row.heat_sink_inlet_temperature
    source = mean_refrigerant_temperature(facts, row.evaporating_temperature, suction, sink)
    if sink > source:
        cop = row.cooling_capacity / row.power_input
        yield StatedCop(path, name, "cooling_cop", cop, source, sink, carnot("cooling_cop", source, sink, path))


def _of_compressor_table(facts: SystemFacts, index: int, point: CompressorPoint) -> Iterator[StatedCop]:
    """A compressor alone, by its refrigerant: mean temperature in the evaporator against the condensing temperature."""
    table = facts.system.compressor.table
    if table is None or point.cooling_capacity is None:
        return
    suction = suction_of_rating(point.evaporating_temperature, table.suction_temperature, table.suction_superheat)
    sink = point.condensing_temperature
    source = mean_refrigerant_temperature(facts, point.evaporating_temperature, suction, sink)
    path = facts.path("compressor", "table", "points", index)
    name = f"Row {index + 1} of the compressor's table"
    cop = point.cooling_capacity / point.compressor_power
    if sink > source:
        yield StatedCop(path, name, "cooling_cop", cop, source, sink, carnot("cooling_cop", source, sink, path))


def suction_of_rating(evaporating: float, suction: float | None, superheat: float | None) -> float:
    """Suction temperature of a rating in K: as stated, or by its superheat, or saturated where neither is stated."""
    return max(evaporating, suction) if suction is not None else evaporating + (superheat or 0.0)


def mean_refrigerant_temperature(facts: SystemFacts, evaporating: float, suction: float, liquid_at: float) -> float:
    """(h_1 - h_4) / (s_1 - s_4) in K from valve to suction; arguments in K.

    The liquid is taken saturated at `liquid_at`, the coldest it can be at the sink of the rating.

    Raises:
        NotCalculatedError: the refrigerant is not known or a state lies outside its range.
    """
    fluid = facts.refrigerant
    if fluid is None:
        raise NotCalculatedError(facts.reason or "the refrigerant is not known")
    pressure = fluid.dew(evaporating).p
    leaving = fluid.vapour(suction, pressure)
    inlet = fluid.throttled(pressure, fluid.bubble(liquid_at).h)
    return float((leaving.h - inlet.h) / (leaving.s - inlet.s))
