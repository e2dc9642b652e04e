"""Compressor efficiencies that a description states or implies, against what machines can do."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace

from commission.errors import NotCalculatedError
from commission.quantities import Explained, Input, Kind
from commission.review.facts import SystemFacts
from commission.review.finding import Figure, Remark

NAMES = {"volumetric_efficiency": "volumetric efficiency", "isentropic_efficiency": "overall isentropic efficiency"}


@dataclass(frozen=True, slots=True)
class Duty:
    """What a compressor does at one stated point: SI, temperatures as dew points.

    `lift` are the least and the greatest condensing temperature the point can mean; `power` likewise the least and the
    greatest power of the compressor alone, None where no power is stated.
    """

    path: str
    name: str
    evaporating: float
    lift: tuple[float, float]
    suction_superheat: float
    subcooling: float
    capacity: float
    power: tuple[float, float] | None
    origin: str


def stated_efficiency(facts: SystemFacts) -> Iterator[Remark]:
    """An efficiency written in the description that no machine, or hardly one, has.

    Source: definition (not above 1) and the thresholds of `thresholds.yaml`.
    """
    for key in NAMES:
        value = getattr(facts.system.compressor, key)
        if value is not None:
            yield from _judge(facts, key, (value, value), facts.path("compressor", key), "stated", ())


def implied_isentropic(facts: SystemFacts) -> Iterator[Remark]:
    """The overall isentropic efficiency that a stated capacity and power imply: m (h_2s - h_1) / P.

    Source: definition; m from the cooling capacity. Where condensing temperature or fan power are not stated the whole
    range of what they may be is taken, and only a range that lies outside as a whole is a finding.
    """
    for duty in duties(facts):
        if duty.power is None:
            continue
        low = _isentropic(facts, duty, duty.lift[0], duty.power[1])
        high = _isentropic(facts, duty, duty.lift[1], duty.power[0])
        yield from _judge(facts, "isentropic_efficiency", (low.value, high.value), duty.path, duty.name, (low, high))


def implied_volumetric(facts: SystemFacts) -> Iterator[Remark]:
    """The volumetric efficiency that a stated capacity implies for the written displacement: m v_1 / V.

    Source: definition; m from the cooling capacity, v_1 at the suction of the rating. Not for variable speed, where the
    speed of a point is not known.
    """
    compressor = facts.system.compressor
    if compressor.displacement is None or compressor.drive == "variable speed":
        return
    for duty in duties(facts):
        swept = compressor.displacement * compressor.count
        ends = [_volumetric(facts, duty, condensing, swept) for condensing in duty.lift]
        low, high = sorted(ends, key=lambda end: end.value)
        yield from _judge(facts, "volumetric_efficiency", (low.value, high.value), duty.path, duty.name, (low, high))


def _judge(
    facts: SystemFacts, key: str, ends: tuple[float, float], path: str, name: str, explained: tuple[Explained, ...]
) -> Iterator[Remark]:
    low, high = ends
    impossible = facts.plant.limit("volumetric_efficiency_impossible") if key == "volumetric_efficiency" else 1.0
    top, bottom = facts.plant.threshold(f"{key}_high"), facts.plant.threshold(f"{key}_low")
    if low > top.value:
        severity, words, entry = ("error" if low > impossible else "warning"), "high", top
    elif high < bottom.value:
        severity, words, entry = "warning", "low", bottom
    else:
        return
    figures = _end_figures(facts, NAMES[key], ends, explained)
    label = "believable up to" if words == "high" else "believable from"
    figures.append(facts.plant.threshold_figure(entry.key, label))
    if name == "stated":
        what = f"The {NAMES[key]} of {facts.title} that is written"
    else:
        article = "an" if NAMES[key][0] in "aeiou" else "a"
        what = f"{name} of {facts.title} implies {article} {NAMES[key]} that"
    yield Remark(
        "error" if severity == "error" else "warning",
        path,
        f"{what} is too {words} to be {'possible' if severity == 'error' else 'believed'}.",
        tuple(figures),
        "Check displacement, speed, capacity, power and the temperatures of the rating with the supplier's sheet.",
        entry.source,
        entry.mark,
    )


def _end_figures(
    facts: SystemFacts, label: str, ends: tuple[float, float], explained: tuple[Explained, ...]
) -> list[Figure]:
    """One figure where both ends are the same, else the least and the most, with the explanation where there is one."""
    words = (label,) if ends[0] == ends[1] else (f"{label}, at least", f"{label}, at most")
    return [
        replace(facts.plant.figure(text, value, Kind.RATIO), explained=explained[number] if explained else None)
        for number, (text, value) in enumerate(zip(words, ends, strict=False))
    ]


def duties(facts: SystemFacts) -> Iterator[Duty]:
    """Every stated point that says enough of the compressor's two pressures."""
    yield from _of_condensing_unit(facts)
    yield from _of_compressor_table(facts)
    yield from _of_rated_points(facts)


def _of_compressor_table(facts: SystemFacts) -> Iterator[Duty]:
    table = facts.system.compressor.table
    for index, point in enumerate(table.points if table else ()):
        if table is None or point.cooling_capacity is None:
            continue
        evaporating = point.evaporating_temperature
        stated = None if table.suction_temperature is None else max(0.0, table.suction_temperature - evaporating)
        superheat = _stated_or_assumed(facts, table.suction_superheat if stated is None else stated, "rating_superheat")
        path = facts.path("compressor", "table", "points", index)
        yield Duty(
            path,
            f"Row {index + 1} of the compressor's table",
            evaporating,
            (point.condensing_temperature, point.condensing_temperature),
            superheat,
            _stated_or_assumed(facts, table.liquid_subcooling, "rating_subcooling"),
            point.cooling_capacity,
            (point.compressor_power, point.compressor_power),
            path,
        )


def _of_condensing_unit(facts: SystemFacts) -> Iterator[Duty]:
    unit = facts.system.condensing_unit
    lift = facts.plant.loaded.assumptions(facts.id).get("condensing_minus_sink_inlet")
    if unit is None or lift is None:
        return
    for index, row in enumerate(unit.rated_points):
        superheat = _stated_or_assumed(facts, unit.suction_superheat, "rating_superheat")
        if unit.suction_temperature is not None:
            superheat = max(0.0, unit.suction_temperature - row.evaporating_temperature)
        path = facts.path("condensing_unit", "rated_points", index)
        yield Duty(
            path,
            f"Row {index + 1} of the condensing unit's table",
            row.evaporating_temperature,
            (row.heat_sink_inlet_temperature + lift.low, row.heat_sink_inlet_temperature + lift.high),
            superheat,
            _stated_or_assumed(facts, unit.liquid_subcooling, "rating_subcooling"),
            row.cooling_capacity,
            _compressor_power(facts, row.power_input, unit.includes),
            path,
        )


def _of_rated_points(facts: SystemFacts) -> Iterator[Duty]:
    """Those with all compressors at full load: what unloading costs is no fault of theirs."""
    expansion = facts.system.expansion
    for index, point in facts.rated_points():
        if point.compressor_stage not in (None, 1.0):
            continue
        evaporating, condensing = point.evaporating_temperature, point.condensing_temperature
        if evaporating is None or condensing is None or point.cooling_capacity is None:
            continue
        path = facts.path("rated_points", index)
        held = _stated_or_assumed(facts, expansion.superheat if expansion else None, "evaporator_superheat")
        yield Duty(
            path,
            f"Rated point {index + 1}",
            evaporating,
            (condensing, condensing),
            held + _stated_or_assumed(facts, None, "suction_line_superheat"),
            _stated_or_assumed(facts, None, "liquid_subcooling"),
            point.cooling_capacity,
            _compressor_power(facts, point.power_input, point.includes) if point.power_input else None,
            path,
        )


def _stated_or_assumed(facts: SystemFacts, stated: float | None, key: str) -> float:
    """What is written, else the assumption list's value, else nothing (0 K)."""
    if stated is not None:
        return stated
    assumption = facts.plant.loaded.assumptions(facts.id).get(key)
    return assumption.value if assumption is not None else 0.0


def _compressor_power(facts: SystemFacts, power: float, includes: tuple[str, ...] | None) -> tuple[float, float]:
    """Least and greatest power of the compressor alone in W: known fans taken off, unknown ones up to their share."""
    most = facts.plant.limit("uncounted_power_share") * power
    if includes is None:
        return power - most, power
    fans = {"condenser fan": facts.system.condenser.fan_power, "evaporator fan": facts.system.evaporator.fan_power}
    others = [part for part in includes if part != "compressor"]
    known = [fans.get(part) for part in others]
    if all(value is not None for value in known):
        total = sum(value for value in known if value is not None)
        return power - total, power - total
    return power - most, power


def _states(facts: SystemFacts, duty: Duty, condensing: float) -> tuple[float, float, float, float]:
    """Refrigerant flow (kg/s), volume at suction (m3/kg), enthalpy there and after ideal compression (J/kg)."""
    fluid = facts.refrigerant
    if fluid is None:
        raise NotCalculatedError(facts.reason or "the refrigerant is not known")
    evaporating, high = fluid.dew(duty.evaporating), fluid.dew(condensing).p
    suction = fluid.vapour(duty.evaporating + duty.suction_superheat, evaporating.p)
    liquid = fluid.bubble(fluid.bubble_temperature(high) - duty.subcooling)
    flow = duty.capacity / (suction.h - liquid.h)
    return flow, 1 / suction.rho, suction.h, fluid.isentropic_end(suction, high).h


def _inputs(duty: Duty, condensing: float, flow: float) -> tuple[Input, ...]:
    return (
        Input("evaporating_temperature", duty.evaporating, Kind.TEMPERATURE, duty.origin),
        Input("condensing_temperature", condensing, Kind.TEMPERATURE, duty.origin),
        Input("compressor_superheat", duty.suction_superheat, Kind.TEMPERATURE_DIFFERENCE, duty.origin),
        Input("subcooling", duty.subcooling, Kind.TEMPERATURE_DIFFERENCE, duty.origin),
        Input("cooling_capacity", duty.capacity, Kind.HEAT_FLOW, duty.origin),
        Input("refrigerant_flow", flow, Kind.MASS_FLOW, "calculated"),
    )


def _isentropic(facts: SystemFacts, duty: Duty, condensing: float, power: float) -> Explained:
    flow, _, suction, end = _states(facts, duty, condensing)
    inputs = (*_inputs(duty, condensing, flow), Input("compressor_power", power, Kind.POWER, duty.origin))
    value = flow * (end - suction) / power
    return Explained("isentropic_efficiency", value, None, "implied_isentropic_efficiency", inputs)


def _volumetric(facts: SystemFacts, duty: Duty, condensing: float, displacement: float) -> Explained:
    flow, volume, _, _ = _states(facts, duty, condensing)
    origin = facts.path("compressor", "displacement")
    inputs = (*_inputs(duty, condensing, flow), Input("swept volume flow", displacement, Kind.VOLUME_FLOW, origin))
    value = flow * volume / displacement
    return Explained("volumetric_efficiency", value, None, "implied_volumetric_efficiency", inputs)
