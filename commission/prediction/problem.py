"""What a fit is about: data, free levels, where to start, and the machine at given levels."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

from commission.errors import NotCalculatedError
from commission.machine import SingleStage, Transcritical, conductance_for
from commission.prediction.building import air_share, build, superheat_setting
from commission.prediction.facts import Facts
from commission.prediction.plan import Levels, Plan, Rated
from commission.prediction.rated import Case, Datum, cases_of, rated_of, reference, with_data
from commission.prediction.ratings import (
    MEAN_BELOW_DEW,
    RATED_SUPERHEAT,
    condenser_conductance,
    evaporator_conductance,
    rated_superheat,
    rating_difference,
    source_conductance,
    wetted_conductance,
)
from commission.prediction.streams import KELVIN, SINK_HUMIDITY, media, once_through, stream


@dataclass(frozen=True)
class Problem:
    """Everything fixed during one fit: which levels are free and which assumptions may move."""

    facts: Facts
    cases: tuple[Case, ...]
    reference: int
    fixed_compressor: bool
    fixed_evaporator: bool
    fixed_condenser: bool
    loose: tuple[str, ...]

    @property
    def free(self) -> tuple[int, ...]:
        """Numbers of the levels (in the order of `Levels`) that the fit may move."""
        return (
            *(() if self.fixed_compressor else (0, 1)),
            *(() if self.fixed_condenser else (2,)),
            *(() if self.fixed_evaporator else (3,)),
        )


def prepare(facts: Facts, a: Mapping[str, float]) -> tuple[Problem, Levels]:
    """Data, free levels, and levels to start from; assumptions become data where too little is stated."""
    cases = list(cases_of(facts))
    middle = reference(tuple(cases))
    case = cases[middle]
    rated = rated_of(facts, a, case)
    evaporator = _evaporator(facts, a, rated, case)
    condenser = condenser_conductance(facts, a, rated.sink_flow)
    published = facts.system.compressor.polynomial is not None and not any(c.data for c in cases)
    missing = _missing(facts, cases, rated, case, evaporator is None, condenser is None, published)
    cases[middle] = with_data(case, tuple(missing))
    problem = Problem(facts, tuple(cases), middle, published, evaporator is not None, condenser is not None, ())
    return problem, _start(problem, a, rated)


def _evaporator(facts: Facts, a: Mapping[str, float], rated: Rated, case: Case) -> float | None:
    """Conductance in W/K of the evaporator with all its surface wetted, where it is stated, rated or, for a condensing
    unit, assumed; None where it must be fitted. A rating has part of the surface dry."""
    known = evaporator_conductance(facts, a, rated.source_flow)
    part, share = facts.system.evaporator, a["dry_surface_share"]
    if part.conductance is not None or (known is None and case.unit is None):
        return known
    if known is None:
        medium = stream(
            rated.source_temperature, rated.source_flow, facts.source_liquid, rated.source_humidity, facts.pressure
        )
        known = source_conductance(rated.source_heat, a["source_minus_evaporating"], medium, air_share(facts, a))
        difference = rated.source_difference
        assert difference is not None
        superheat = rated_superheat(a, superheat_setting(facts, a), difference)
        return wetted_conductance(
            facts, known, rated.source_heat, rated.source_temperature, difference, share, superheat
        )
    rating = part.rating
    assert rating is not None
    air_on = rating.air_on if rating.air_on is not None else 2.0 + KELVIN
    difference = rating_difference(facts, a)
    assert difference is not None
    superheat = RATED_SUPERHEAT * difference
    return wetted_conductance(facts, known, rating.capacity, air_on, difference, share, superheat)


def _missing(
    facts: Facts, cases: Sequence[Case], rated: Rated, case: Case, evaporator: bool, condenser: bool, published: bool
) -> list[Datum]:
    """Assumptions that stand in for data that nobody states, at the reference case."""
    stated = {d.of for c in cases for d in c.data}
    extra = []

    def assume(of: str, key: str) -> None:
        one = facts.assumptions[key]
        extra.append(Datum(of, one.value, 0.02 * (one.standard_uncertainty or 1.0), f"assumption {key}", key))

    compressor = facts.system.compressor
    if evaporator and "evaporating_temperature" not in stated:
        assume("source_minus_evaporating", "source_minus_evaporating")
    if condenser and "condensing_temperature" not in stated:
        assume(*sink_difference(facts, case, rated))
    if published:
        return extra
    if not {"power_input", "compressor_power"} & stated and not {"cooling_capacity", "heating_capacity"} <= stated:
        value, origin = compressor.isentropic_efficiency, facts.origin("compressor.isentropic_efficiency")
        if value is not None:
            extra.append(Datum("isentropic_efficiency", value, 0.01 * value, origin))
        else:
            assume("isentropic_efficiency", "compressor_isentropic_efficiency")
    if not {"cooling_capacity", "heating_capacity", "refrigerant_flow"} & stated:
        value, origin = compressor.volumetric_efficiency, facts.origin("compressor.volumetric_efficiency")
        if value is not None:
            extra.append(Datum("volumetric_efficiency", value, 0.01 * value, origin))
        else:
            assume("volumetric_efficiency", "compressor_volumetric_efficiency")
    return extra


def _start(problem: Problem, a: Mapping[str, float], rated: Rated) -> Levels:
    """Levels from the reference point with dew points as stated or assumed, without any balance."""
    facts, case = problem.facts, problem.cases[problem.reference]
    given = {d.of: d.value for d in case.data}
    evaporating, condensing = _dew_points(problem, a, rated, given)
    plan = build(facts, a, Levels(1.0, 1.0, 1.0, 1.0), rated).at(case.conditions)
    conditions = {**case.conditions, "heat_source_inlet_temperature": rated.source_temperature}
    compression, source, _ = plan.machine.cycle(evaporating, condensing, media(facts, plan, conditions))
    if isinstance(plan.machine, Transcritical):
        return _gas_cooler_start(problem, a, rated, plan, evaporating, condensing)
    if problem.fixed_compressor:
        heat = source + compression.power
        return Levels(1.0, 1.0, *_conductances(problem, a, rated, evaporating, condensing, heat))
    if source <= 0:
        raise NotCalculatedError(
            f"between {evaporating - 273.15:.1f} °C evaporating and {condensing - 273.15:.1f} °C condensing "
            f"{facts.fluid.name} takes up no heat: the temperatures at {case.origin} are not for this refrigerant"
        )
    swept = rated.source_heat / source
    power = given.get("power_input")
    if power is None and "cooling_capacity" not in given and "heating_capacity" not in given:
        power = rated.sink_heat - rated.source_heat
    counted = plan.fans.counted(1.0) if "power_input" in given else 0.0
    if power is not None and power <= counted:
        raise NotCalculatedError(
            f"the power input at {case.origin} ({power / 1e3:.2f} kW) is no more than the fans it is said to include "
            f"({counted / 1e3:.2f} kW): nothing is left for the compressor"
        )
    isentropic = swept * compression.power / (power - counted) if power else 0.65
    heat = rated.source_heat + swept * compression.power / isentropic
    if not power:  # a start only: the estimate by which the flow of the sink was sized, or the flow could not carry it
        heat = rated.sink_heat
    return Levels(swept, isentropic, *_conductances(problem, a, rated, evaporating, condensing, heat))


def _gas_cooler_start(
    problem: Problem, a: Mapping[str, float], rated: Rated, plan: Plan, evaporating: float, outlet: float
) -> Levels:
    """Levels of a transcritical machine: the gas cooler's conductance follows from its outlet temperature."""
    facts, case = problem.facts, problem.cases[problem.reference]
    machine = plan.machine
    assert isinstance(machine, Transcritical)
    conditions = {**case.conditions, "heat_source_inlet_temperature": rated.source_temperature}
    around = media(facts, plan, conditions)
    compression, source, _ = machine.cycle(evaporating, outlet, around)
    swept = 1.0 if problem.fixed_compressor else rated.source_heat / source
    power = {d.of: d.value for d in case.data}.get("power_input")
    counted = plan.fans.counted(1.0)
    isentropic = swept * compression.power / (power - counted) if power is not None and power > counted else 0.65
    if problem.fixed_compressor:
        isentropic = 1.0
    small = replace(around, sink=replace(around.sink, capacity_rate=around.sink.capacity_rate / swept))
    slow = build(facts, a, Levels(1.0, isentropic, 1.0, 1.0), rated).at(case.conditions).machine
    assert isinstance(slow, Transcritical)
    conductance = swept * slow.cycle_conductance(evaporating, outlet, small)
    evaporator = _evaporator(facts, a, rated, case)
    if evaporator is None:
        difference = rated.source_temperature - evaporating
        evaporator = source_conductance(rated.source_heat, difference, around.source, air_share(facts, a))
    return Levels(swept, isentropic, conductance, evaporator)


def _dew_points(
    problem: Problem, a: Mapping[str, float], rated: Rated, given: Mapping[str, float]
) -> tuple[float, float]:
    """Evaporating and condensing dew points (K) at the reference point, as stated or assumed."""
    facts, case = problem.facts, problem.cases[problem.reference]

    def assumed(of: str, key: str) -> float:
        return given[of] if of in given else a[key]

    if case.unit is not None:
        evaporating = case.unit.evaporating
    elif "evaporating_temperature" in given:
        evaporating = given["evaporating_temperature"]
    else:
        evaporating = rated.source_temperature - assumed("source_minus_evaporating", "source_minus_evaporating")
        evaporating += MEAN_BELOW_DEW * facts.glide(evaporating)
    condensing = given.get("condensing_temperature")
    if condensing is None:
        of, key = sink_difference(facts, case, rated)
        difference = 12.0 if problem.fixed_condenser else assumed(of, key)
        end = rated.sink_temperature
        if of == LIFTED and once_through(facts, case.conditions):
            end = case.conditions["heat_sink_outlet_temperature"]
        elif of == LIFTED:
            end += known_rise(facts, case, rated) or 0.0
        condensing = end + difference
        condensing += 0.5 * facts.glide(condensing)
    return evaporating, condensing


LIFTED = "condensing_minus_sink_outlet"


LARGE_RISE = 5.5
"""Rise of a liquid in K, known from its flow, above which its condenser is sized by the outlet: the assumed difference
to the inlet (5 to 10 K) belongs to a rise of about 5 K and could be smaller than the rise itself."""


def sink_difference(facts: Facts, case: Case, rated: Rated) -> tuple[str, str]:
    """What sizes a condenser or a gas cooler of which nothing is stated: the datum, and the key of its assumption.

    Water that rises much (in one pass, or by a small stated flow) comes near the condensing temperature at its outlet,
    whatever its inlet.
    """
    if facts.transcritical:
        return "condensing_minus_sink_inlet", "gas_cooler_approach"
    if once_through(facts, case.conditions) or (known_rise(facts, case, rated) or 0.0) > LARGE_RISE:
        return LIFTED, LIFTED
    return "condensing_minus_sink_inlet", "condensing_minus_sink_inlet"


def known_rise(facts: Facts, case: Case, rated: Rated) -> float | None:
    """Temperature rise in K of a liquid sink at the reference point, where its flow is known; else None."""
    stated = case.conditions.get("heat_sink_flow", facts.system.heat_sink.flow)
    if facts.sink_liquid is None or stated is None:
        return None
    medium = stream(rated.sink_temperature, rated.sink_flow, facts.sink_liquid, SINK_HUMIDITY, facts.pressure)
    return rated.sink_heat / medium.capacity_rate


def _conductances(
    problem: Problem, a: Mapping[str, float], rated: Rated, evaporating: float, condensing: float, heat: float
) -> tuple[float, float]:
    facts, case = problem.facts, problem.cases[problem.reference]
    condenser = condenser_conductance(facts, a, rated.sink_flow)
    if condenser is None:
        medium = stream(rated.sink_temperature, rated.sink_flow, facts.sink_liquid, SINK_HUMIDITY, facts.pressure)
        condenser = conductance_for(
            heat, condensing - 0.5 * facts.glide(condensing) - rated.sink_temperature, medium.capacity_rate
        )
    evaporator = _evaporator(facts, a, rated, case)
    if evaporator is None:
        medium = stream(
            rated.source_temperature, rated.source_flow, facts.source_liquid, rated.source_humidity, facts.pressure
        )
        difference = rated.source_temperature - evaporating + MEAN_BELOW_DEW * facts.glide(evaporating)
        evaporator = source_conductance(rated.source_heat, difference, medium, air_share(facts, a))
    return condenser, evaporator


def plan_of(problem: Problem, a: Mapping[str, float], levels: Levels) -> Plan:
    """The machine with these free levels; conductances that are rated follow the assumption values."""
    facts, case = problem.facts, problem.cases[problem.reference]
    rated = rated_of(facts, a, case)
    evaporator = _evaporator(facts, a, rated, case) if problem.fixed_evaporator else levels.evaporator
    condenser = condenser_conductance(facts, a, rated.sink_flow) if problem.fixed_condenser else levels.condenser
    assert evaporator is not None
    assert condenser is not None
    if problem.fixed_compressor:
        flow = 1 + a["compressor_flow_departure"]
        levels = replace(levels, swept_flow=flow, isentropic=flow / (1 + a["compressor_power_departure"]))
    return build(facts, a, replace(levels, evaporator=evaporator, condenser=condenser), rated)


def restricted(problem: Problem, plan: Plan) -> Plan:
    """The plan with a fixed restriction sized so that the reference point has the superheat that is held there.

    Other devices are left as they are.
    """
    expansion, machine = problem.facts.system.expansion, plan.machine
    if expansion is None or expansion.device not in ("capillary", "orifice") or not isinstance(machine, SingleStage):
        return plan
    case = problem.cases[problem.reference]
    conditions = {"heat_source_inlet_temperature": plan.rated.source_temperature, **case.conditions}
    if case.unit is not None:
        conditions.setdefault("heat_sink_inlet_temperature", plan.rated.sink_temperature)
    if "heat_source_outlet_temperature" in case.conditions:
        del conditions["heat_source_inlet_temperature"]
    here = plan.at(conditions).machine
    assert isinstance(here, SingleStage)
    size = here.restriction_for(media(problem.facts, plan, conditions))
    return replace(plan, machine=replace(machine, restriction=size))
