"""What the supplier states, as data for the fit: each rated point with the values the model must reproduce there."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

from commission.description import Conditions, RatedPoint
from commission.description.model import CondensingUnit
from commission.errors import NotCalculatedError
from commission.prediction.compressors import estimate
from commission.prediction.facts import COMPRESSOR, CONDENSER_FAN, Facts
from commission.prediction.frost import counts_defrosts
from commission.prediction.plan import STAGE, Rated
from commission.prediction.ratings import MEAN_BELOW_DEW, rating_difference
from commission.prediction.streams import SINK_HUMIDITY, at_a_stage, flow_for, humidity, once_through, stream
from commission.properties import moist_air

MARGIN = 0.015
"""Relative standard uncertainty of one figure of a table with many points, until the scatter tells a better one:
catalogue points miss the first law by 2 to 4 % through rounding and boundary."""


@dataclass(frozen=True, slots=True)
class Datum:
    """One value to be reproduced at a rated point. `of` names what the model calculates; `sigma` is in its unit.

    `assumption` is the key of the assumption list that gave the value, None where the description states it.
    """

    of: str
    value: float
    sigma: float
    origin: str
    assumption: str | None = None


@dataclass(frozen=True, slots=True)
class Case:
    """One rated point: condition and data. `unit` holds where the condensing unit is rated apart from its cooler.

    `defrosts` where heat and power are averages over frost and defrosts.

    `source_temperature` and `sink_temperature` (K) are those of the rating, at inlet or outlet as `conditions` say.
    """

    source_temperature: float
    sink_temperature: float
    conditions: Mapping[str, float]
    data: tuple[Datum, ...]
    origin: str
    unit: UnitRating | None = None
    defrosts: bool = False


@dataclass(frozen=True, slots=True)
class UnitRating:
    """How a condensing unit is rated: dew point at its suction (K); superheat and subcooling, None where assumed.

    `condensing` (K) is given for a compressor that is rated alone, between two dew points.
    """

    evaporating: float
    superheat: float | None
    subcooling: float | None
    counts_fan: bool | None
    condensing: float | None = None


def cases_of(facts: Facts) -> tuple[Case, ...]:
    """All rated points of the system, or those of its condensing unit where the system as a whole has none.

    A table of the compressor alone is added to them; where it or polynomials are all that is stated, the design
    condition stands first, without data of its own.

    Raises:
        NotCalculatedError: the description states no rated point from which the machine could be known.
    """
    system = facts.system
    table = _table_cases(facts)
    if system.rated_points:
        return (*(_system_case(facts, n, point) for n, point in enumerate(system.rated_points)), *table)
    if system.condensing_unit is not None:
        return (*_unit_cases(facts, system.condensing_unit), *table)
    if table or system.compressor.polynomial is not None:
        return (_design_case(facts), *table)
    raise NotCalculatedError(
        "the description has no rated point: state under rated_points a cooling or heating capacity and its power "
        "input at one condition, or the rated points of the condensing unit"
    )


def _table_cases(facts: Facts) -> tuple[Case, ...]:
    """The points of a supplier's table of the compressor alone."""
    table = facts.system.compressor.table
    if table is None:
        return ()
    count = facts.system.compressor.count
    cases = []
    for number, point in enumerate(table.points):
        path = f"compressor.table.points.{number}"
        superheat = table.suction_superheat
        if superheat is None and table.suction_temperature is not None:
            superheat = table.suction_temperature - point.evaporating_temperature
        figures = (
            ("cooling_capacity", point.cooling_capacity),
            ("refrigerant_flow", point.refrigerant_flow),
            ("compressor_power", point.compressor_power),
        )
        data = tuple(
            Datum(key, count * v, MARGIN * count * v, facts.origin(f"{path}.{key}"))
            for key, v in figures
            if v is not None
        )
        rating = UnitRating(
            point.evaporating_temperature, superheat, table.liquid_subcooling, None, point.condensing_temperature
        )
        evaporating, condensing = point.evaporating_temperature, point.condensing_temperature
        cases.append(Case(evaporating, condensing, {}, data, facts.origin(path), rating))
    return tuple(cases)


def _design_case(facts: Facts) -> Case:
    """The design condition, at which flows and differences that nobody states are assumed."""
    design = facts.system.design
    conditions = {}
    if design is not None:
        conditions = {k: v for k in Conditions.model_fields if k != STAGE and (v := getattr(design, k)) is not None}
    for side in ("heat_source", "heat_sink"):
        if not {f"{side}_inlet_temperature", f"{side}_outlet_temperature"} & set(conditions):
            raise NotCalculatedError(
                f"the compressor is stated, but not the condition it is to work at: write design with its "
                f"{side}_inlet_temperature"
            )
    _one_temperature_each(facts, conditions, {})
    _as_relative_humidity(facts, conditions)
    source = conditions.get("heat_source_inlet_temperature", conditions.get("heat_source_outlet_temperature", 0.0))
    sink = conditions.get("heat_sink_inlet_temperature", conditions.get("heat_sink_outlet_temperature", 0.0))
    return Case(source, sink, conditions, (), facts.origin("design"))


def _system_case(facts: Facts, number: int, point: RatedPoint) -> Case:
    path = f"rated_points.{number}"
    stated = {key: value for key in Conditions.model_fields if (value := getattr(point, key)) is not None}
    conditions = at_a_stage(facts, stated)
    for side in ("heat_source", "heat_sink"):
        if not {f"{side}_inlet_temperature", f"{side}_outlet_temperature"} & set(conditions):
            raise NotCalculatedError(
                f"the rated point at {facts.origin(path)} does not say its {side}_inlet_temperature"
            )
    data = _stated(facts, path, point)
    _one_temperature_each(facts, conditions, {d.of: d.value for d in data})
    _as_relative_humidity(facts, conditions)
    source = conditions.get("heat_source_inlet_temperature", conditions.get("heat_source_outlet_temperature"))
    sink = conditions.get("heat_sink_inlet_temperature", conditions.get("heat_sink_outlet_temperature"))
    assert source is not None
    assert sink is not None
    return Case(source, sink, conditions, data, facts.origin(path), defrosts=counts_defrosts(facts, point))


def _stated(facts: Facts, path: str, point: RatedPoint) -> tuple[Datum, ...]:
    """Capacities and power of a rated point; a COP that is stated in place of the power gives the power."""
    values = {key: getattr(point, key) for key in ("cooling_capacity", "heating_capacity", "power_input")}
    origin = {key: f"{path}.{key}" for key in values}
    for capacity, cop in (("cooling_capacity", point.cooling_cop), ("heating_capacity", point.heating_cop)):
        if cop is not None and values["power_input"] is None and values[capacity] is not None:
            values["power_input"] = values[capacity] / cop
            origin["power_input"] = f"{path}.{capacity.replace('capacity', 'cop')}"
    if values["cooling_capacity"] is not None and point.capacity_is == "net":
        values["cooling_capacity"] += facts.system.evaporator.fan_power or 0.0
    data = [Datum(key, v, MARGIN * v, facts.origin(origin[key])) for key, v in values.items() if v is not None]
    for key in ("evaporating_temperature", "condensing_temperature"):
        value = getattr(point, key)
        if value is not None:
            data.append(Datum(key, value, 0.3, facts.origin(f"{path}.{key}")))
    return tuple(data)


def _one_temperature_each(facts: Facts, conditions: dict[str, float], stated: Mapping[str, float]) -> None:
    """Where inlet and outlet of a medium are both stated, its flow follows from the heat, and one of them is kept:
    the outlet of the sink of a heating plant (its flow temperature), the inlet elsewhere."""
    heating = stated.get("heating_capacity")
    cooling = stated.get("cooling_capacity")
    power = stated.get("power_input", 0.0)
    heats = {
        "heat_source": cooling if cooling is not None else (heating or 0.0) - power,
        "heat_sink": heating if heating is not None else (cooling or 0.0) + power,
    }
    for side, medium in (("heat_source", facts.source_liquid), ("heat_sink", facts.sink_liquid)):
        inlet, outlet = f"{side}_inlet_temperature", f"{side}_outlet_temperature"
        if not (inlet in conditions and outlet in conditions):
            continue
        if side == "heat_sink" and once_through(facts, conditions):
            continue
        change = abs(conditions[inlet] - conditions[outlet])
        dry = medium is not None or side == "heat_sink"
        if f"{side}_flow" not in conditions and dry and change > 0 and heats[side] > 0:
            flow = flow_for(heats[side], change, conditions[inlet], medium, SINK_HUMIDITY, facts.pressure)
            conditions[f"{side}_flow"] = flow
        heats_water = facts.system.duty in ("space_heating", "water_heating") and side == "heat_sink"
        del conditions[inlet if heats_water and medium is not None else outlet]


def _as_relative_humidity(facts: Facts, conditions: dict[str, float]) -> None:
    """A wet bulb of the source air becomes its relative humidity."""
    wet = conditions.pop("heat_source_wet_bulb", None)
    dry = conditions.get("heat_source_inlet_temperature")
    if wet is not None and dry is not None and facts.source_liquid is None:
        conditions["heat_source_relative_humidity"] = moist_air(dry, facts.pressure, wet_bulb=wet).relative_humidity


def _unit_cases(facts: Facts, unit: CondensingUnit) -> tuple[Case, ...]:
    cases = []
    counts = None if unit.includes is None else CONDENSER_FAN in unit.includes
    if unit.includes is not None and COMPRESSOR not in unit.includes:
        raise NotCalculatedError("the power of the condensing unit does not include its compressor")
    for number, point in enumerate(unit.rated_points):
        path = f"condensing_unit.rated_points.{number}"
        superheat = unit.suction_superheat
        if superheat is None and unit.suction_temperature is not None:
            superheat = unit.suction_temperature - point.evaporating_temperature
        data = tuple(
            Datum(key, value, MARGIN * value, facts.origin(f"{path}.{key}"))
            for key, value in (("cooling_capacity", point.cooling_capacity), ("power_input", point.power_input))
        )
        rating = UnitRating(point.evaporating_temperature, superheat, unit.liquid_subcooling, counts)
        cases.append(
            Case(
                source_temperature=point.evaporating_temperature,
                sink_temperature=point.heat_sink_inlet_temperature,
                conditions={"heat_sink_inlet_temperature": point.heat_sink_inlet_temperature},
                data=data,
                origin=facts.origin(path),
                unit=rating,
            )
        )
    return tuple(cases)


def reference(cases: tuple[Case, ...]) -> int:
    """Number of the case nearest to the middle of all that have media, of those with all compressors on where there are
    such: the assumed differences belong to it."""
    whole = [n for n, c in enumerate(cases) if c.unit is None or c.unit.condensing is None]
    highest = max(cases[n].conditions.get(STAGE, 1.0) for n in whole)
    whole = [n for n in whole if cases[n].conditions.get(STAGE, 1.0) == highest]
    middle = [
        sum(cases[n].source_temperature for n in whole) / len(whole),
        sum(cases[n].sink_temperature for n in whole) / len(whole),
    ]

    def distance(case: Case) -> float:
        return abs(case.source_temperature - middle[0]) + abs(case.sink_temperature - middle[1])

    return min(whole, key=lambda n: distance(cases[n]))


def rated_of(facts: Facts, a: Mapping[str, float], case: Case) -> Rated:
    """Heat, inlet temperatures and flows at the reference point; unstated flows follow from an assumed change."""
    given = {d.of: d.value for d in case.data if d.assumption is None}
    power = given.get("power_input", 0.0)
    if "cooling_capacity" in given:
        cooling = given["cooling_capacity"]
        heating = given.get("heating_capacity", cooling + (power or 0.3 * cooling))
    elif "heating_capacity" in given:
        heating = given["heating_capacity"]
        cooling = heating - (power or 0.25 * heating)
    elif facts.system.compressor.displacement is not None and power:
        cooling, heating = 2.5 * power, 3.5 * power
    elif facts.system.compressor.polynomial is not None or facts.system.compressor.table is not None:
        evaporating = case.source_temperature - a["source_minus_evaporating"]
        key = "gas_cooler_approach" if facts.transcritical else "condensing_minus_sink_inlet"
        condensing = case.sink_temperature + a[key]
        cooling, power = estimate(facts, a, evaporating, condensing)
        heating = cooling + power
    else:
        raise NotCalculatedError(
            f"the rated point at {case.origin} states no capacity, and the displacement of the compressor is not "
            "stated either"
        )
    if cooling <= 0:
        raise NotCalculatedError(f"at {case.origin} more power goes in than heat comes out: no heat is left to take up")
    source_temperature, sink_temperature = _temperatures(facts, a, case)
    stated = case.conditions.get("heat_source_relative_humidity")
    wet = stated if stated is not None else humidity(facts, a)
    source_flow = case.conditions.get("heat_source_flow")
    if source_flow is None and facts.system.heat_source.flow is not None:
        source_flow = facts.system.heat_source.flow * (1 + a["source_flow_departure"])
    if source_flow is None:
        change = a["source_temperature_change"]
        source_flow = flow_for(cooling, change, source_temperature, facts.source_liquid, wet, facts.pressure)
    sink_flow = case.conditions.get("heat_sink_flow")
    if sink_flow is None and facts.system.heat_sink.flow is not None:
        sink_flow = facts.system.heat_sink.flow * (1 + a["sink_flow_departure"])
    if once_through(facts, case.conditions):
        change = case.conditions["heat_sink_outlet_temperature"] - case.conditions["heat_sink_inlet_temperature"]
        sink_flow = flow_for(heating, change, sink_temperature, facts.sink_liquid, SINK_HUMIDITY, facts.pressure)
    if sink_flow is None:
        change = a["sink_temperature_change"]
        sink_flow = flow_for(heating, change, sink_temperature, facts.sink_liquid, SINK_HUMIDITY, facts.pressure)
    if "heat_source_outlet_temperature" in case.conditions and "heat_source_inlet_temperature" not in case.conditions:
        unit = stream(source_temperature, source_flow, facts.source_liquid, wet, facts.pressure)
        source_temperature += cooling / unit.capacity_rate
    if "heat_sink_outlet_temperature" in case.conditions and "heat_sink_inlet_temperature" not in case.conditions:
        unit = stream(sink_temperature, sink_flow, facts.sink_liquid, SINK_HUMIDITY, facts.pressure)
        sink_temperature -= heating / unit.capacity_rate
    speed = case.conditions.get("compressor_speed", facts.system.compressor.nominal_speed)
    difference = _source_difference(facts, a, source_temperature, given)
    return Rated(source_temperature, sink_temperature, cooling, heating, source_flow, sink_flow, wet, speed, difference)


def _source_difference(facts: Facts, a: Mapping[str, float], inlet: float, given: Mapping[str, float]) -> float | None:
    """What the source enters above the dew point in K, as stated or assumed; None where it only follows."""
    if "evaporating_temperature" in given:
        return inlet - given["evaporating_temperature"]
    if facts.system.evaporator.conductance is not None:
        return None
    rated = rating_difference(facts, a)
    if rated is not None:
        return rated
    assumed = a["source_minus_evaporating"]
    return assumed - MEAN_BELOW_DEW * facts.glide(inlet - assumed)


def _temperatures(facts: Facts, a: Mapping[str, float], case: Case) -> tuple[float, float]:
    """Media temperatures of the reference point; a condensing unit's table knows no source, its design does."""
    if case.unit is None:
        return case.source_temperature, case.sink_temperature
    design = facts.system.design
    rating = facts.system.evaporator.rating
    if design is not None and design.heat_source_inlet_temperature is not None:
        return design.heat_source_inlet_temperature, case.sink_temperature
    if rating is not None and rating.air_on is not None:
        return rating.air_on, case.sink_temperature
    difference = rating.temperature_difference if rating is not None else a["source_minus_evaporating"]
    return case.unit.evaporating + difference, case.sink_temperature


def with_data(case: Case, extra: tuple[Datum, ...]) -> Case:
    """The case with further data to reproduce."""
    return replace(case, data=case.data + extra)
