"""The condition a prediction is asked for: which quantities may be set, over which range, and their rated values."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from itertools import pairwise

from commission.description import outdoor_sides
from commission.errors import InputError, Problem, nearest
from commission.prediction.facts import Facts
from commission.prediction.plan import STAGE, Plan
from commission.prediction.rated import Case
from commission.prediction.streams import once_through
from commission.properties import moist_air
from commission.quantities import NOMENCLATURE, Quantity

KELVIN = 273.15
HUMIDITY, WET_BULB = "heat_source_relative_humidity", "heat_source_wet_bulb"


@dataclass(frozen=True, slots=True)
class ConditionAxis:
    """One quantity of the condition, SI: its rated value and the range over which expectations are shown.

    `steps` are all the values that it can have, where there are only some (capacity stages).
    """

    key: str
    rated: float
    low: float
    high: float
    steps: tuple[float, ...] = ()


def axes_of(facts: Facts, plan: Plan, case: Case) -> Mapping[str, ConditionAxis]:
    """The quantities that set the condition of this system, in the order in which a person would ask for them.

    A side that is rated by its outlet (water heating: flow temperature) has its outlet as condition.
    """
    rated = plan.rated
    axes = [_temperature_axis(facts, side, *_design(facts, plan, case, side)) for side in ("heat_source", "heat_sink")]
    if facts.source_liquid is None:
        wet = _stated(facts, case, HUMIDITY, plan.source_humidity)
        axes.append(ConditionAxis(HUMIDITY, wet, max(0.2, wet - 0.3), min(1.0, wet + 0.3)))
    own = (("heat_source_flow", rated.source_flow), ("heat_sink_flow", rated.sink_flow))
    flows = [(key, _stated(facts, case, key, value)) for key, value in own]
    if once_through(facts, case.conditions):
        flows.pop()
        hot = _of_design(facts, case, "heat_sink_outlet_temperature")
        cold = axes[1].rated
        axes[1] = ConditionAxis(axes[1].key, cold, min(cold, KELVIN + 5.0), max(cold, hot - 15.0))
        axes.append(ConditionAxis("heat_sink_outlet_temperature", hot, hot - 15.0, hot + 15.0))
    axes += [ConditionAxis(key, flow, 0.5 * flow, 1.2 * flow) for key, flow in flows]
    speed = _speed_axis(facts, rated.speed and _stated(facts, case, "compressor_speed", rated.speed))
    return {axis.key: axis for axis in (*axes, *speed, *_stage_axis(facts, case))}


def _stated(facts: Facts, case: Case, key: str, otherwise: float) -> float:
    """A quantity at the design condition: as the design states it, else the medium, else as it was rated or assumed."""
    design, source, sink = facts.system.design, facts.system.heat_source, facts.system.heat_sink
    stated = getattr(design, key) if design is not None else None
    if stated is None and key == HUMIDITY and design is not None and design.heat_source_wet_bulb is not None:
        dry = design.heat_source_inlet_temperature
        if dry is not None:
            return moist_air(dry, facts.pressure, wet_bulb=design.heat_source_wet_bulb).relative_humidity
    if stated is None and key in case.conditions:
        own = {HUMIDITY: source.relative_humidity, "heat_source_flow": source.flow, "heat_sink_flow": sink.flow}
        stated = own.get(key)
    return otherwise if stated is None else float(stated)


def _speed_axis(facts: Facts, rated: float | None) -> tuple[ConditionAxis, ...]:
    """The speed of a variable drive, where the speed of the rating is known."""
    stated, controls = facts.system.compressor, facts.system.controls
    if stated.drive != "variable speed" or rated is None:
        return ()
    low = controls.lowest_speed or stated.minimum_speed or 0.4 * rated
    high = controls.highest_speed or stated.maximum_speed or 1.2 * rated
    return (ConditionAxis("compressor_speed", rated, min(low, rated), max(high, rated)),)


def _stage_axis(facts: Facts, case: Case) -> tuple[ConditionAxis, ...]:
    """The capacity stage, where there are several."""
    steps = facts.system.compressor.steps
    if len(steps) < 2:
        return ()
    stated = _stated(facts, case, STAGE, case.conditions.get(STAGE, steps[-1]))
    rated = facts.system.compressor.step_near(stated)
    return (ConditionAxis(STAGE, steps[-1] if rated is None else rated, steps[0], steps[-1], steps),)


def _design(facts: Facts, plan: Plan, case: Case, side: str) -> tuple[str, float]:
    """Key and rated value of one medium's temperature: of the design where it is stated, else of the rated point."""
    inlet, outlet = f"{side}_inlet_temperature", f"{side}_outlet_temperature"
    design = facts.system.design
    if side == "heat_sink" and once_through(facts, case.conditions):
        return inlet, _of_design(facts, case, inlet)
    first, second = (outlet, inlet) if outlet in case.conditions else (inlet, outlet)
    for key in (first, second):
        stated = getattr(design, key) if design is not None else None
        if stated is not None and (key == inlet or outlet in case.conditions):
            return key, stated
    if outlet in case.conditions:
        return outlet, case.conditions[outlet]
    return inlet, plan.rated.source_temperature if side == "heat_source" else plan.rated.sink_temperature


def _of_design(facts: Facts, case: Case, key: str) -> float:
    """The value of the design where it is stated, else of the rated point."""
    stated = getattr(facts.system.design, key) if facts.system.design is not None else None
    return case.conditions[key] if stated is None else float(stated)


def _temperature_axis(facts: Facts, side: str, key: str, rated: float) -> ConditionAxis:
    """Outdoor air spans the weather of the site and 5 K more; rooms and liquids span what a visit may meet."""
    system = facts.system
    if side in outdoor_sides(facts.loaded.plant, system):
        climate = facts.loaded.plant.plant.climate
        low = (climate.winter_dry_bulb if climate.winter_dry_bulb is not None else KELVIN - 10.0) - 5.0
        high = (climate.summer_dry_bulb if climate.summer_dry_bulb is not None else KELVIN + 33.0) + 5.0
        return ConditionAxis(key, rated, min(low, rated - 5.0), max(high, rated + 5.0))
    if side == "heat_source":
        return ConditionAxis(key, rated, rated - 6.0, rated + 12.0)
    return ConditionAxis(key, rated, rated - 15.0, rated + 20.0)


FLOW, OUTDOOR = "heat_sink_outlet_temperature", "heat_source_inlet_temperature"


def followers(facts: Facts, axes: Mapping[str, ConditionAxis], key: str) -> frozenset[str]:
    """The conditions that the controls set by the condition `key`: by outdoor air, the flow of a weather curve."""
    led = facts.system.controls.weather_curve is not None and facts.source_liquid is None and FLOW in axes
    return frozenset({FLOW}) if led and key == OUTDOOR else frozenset()


def with_weather_curve(
    facts: Facts, axes: Mapping[str, ConditionAxis], given: Mapping[str, float]
) -> tuple[Mapping[str, float], tuple[str, ...]]:
    """The given conditions, with the flow temperature of the weather curve where the outdoor temperature is given and
    neither temperature of the heating water is; and a sentence that says so.

    The curve is straight between its points and level beyond them, within its lowest and highest flow temperature.
    """
    curve = facts.system.controls.weather_curve
    told = {FLOW, _other_end(FLOW)} & set(given)
    if curve is None or told or OUTDOOR not in given or not followers(facts, axes, OUTDOOR):
        return given, ()
    points = sorted((p.outdoor, p.flow) for p in curve.points)
    outdoor = min(max(given[OUTDOOR], points[0][0]), points[-1][0])
    flow = points[0][1]
    for (cold, hot), (warm, cool) in pairwise(points):
        if cold <= outdoor <= warm and warm > cold:
            flow = hot + (cool - hot) * (outdoor - cold) / (warm - cold)
    if curve.lowest_flow is not None:
        flow = max(flow, curve.lowest_flow)
    if curve.highest_flow is not None:
        flow = min(flow, curve.highest_flow)
    shown = f"{facts.shown.words(FLOW)} {facts.shown.of(FLOW, flow)}"
    note = f"{shown} is that of the weather curve, it was not given"
    return {**given, FLOW: flow}, (note,)


def complete(
    axes: Mapping[str, ConditionAxis],
    given: Mapping[str, float] | None,
    pressure: float = 101325.0,
    names: Mapping[str, Quantity] = NOMENCLATURE,
) -> tuple[dict[str, float], tuple[str, ...], tuple[str, ...]]:
    """The whole condition, the keys filled from the rated one, and a warning for each value outside its range.

    A wet bulb of the source air may stand in place of its relative humidity, at barometric `pressure` (Pa). `names` is
    the nomenclature of the system.

    Raises:
        InputError: a key that this system has no condition for, or a value that is no finite number.
    """
    given = dict(given or {})
    problems = []
    known = {*axes, *(_other_end(key) for key in axes)}
    if HUMIDITY in axes:
        known.add(WET_BULB)
    for key, value in given.items():
        if key not in known:
            problems.append(
                Problem(
                    "this is no condition of this system",
                    value=key,
                    allowed=", ".join(axes),
                    nearest=nearest(key, axes),
                )
            )
        elif not math.isfinite(value):
            problems.append(Problem("a condition must be a finite number", value=str(value), path=key))
    if problems:
        raise InputError(*problems)
    wet = given.pop(WET_BULB, None)
    if wet is not None:
        rated = OUTDOOR in axes and _other_end(OUTDOOR) not in given
        dry = given.get(OUTDOOR, axes[OUTDOOR].rated if rated else None)
        if dry is None:
            raise InputError(
                Problem("a wet bulb needs the temperature of the air that enters beside it", path=WET_BULB)
            )
        given[HUMIDITY] = moist_air(dry, pressure, wet_bulb=wet).relative_humidity
    whole: dict[str, float] = {}
    for key, axis in axes.items():
        other = _other_end(key)
        used = other if other not in axes and other in given and key not in given else key
        whole[used] = given.get(used, axis.rated)
    filled = tuple(key for key in whole if key not in given)
    outside = tuple(
        f"{names[key].label} lies outside the range for which this system is described"
        for key, axis in axes.items()
        if key in whole and not axis.low - 1e-9 <= whole[key] <= axis.high + 1e-9
    )
    return whole, filled, outside


def _other_end(key: str) -> str:
    """The outlet temperature for an inlet temperature and the other way round; other keys as they are."""
    for one, other in (("_inlet_temperature", "_outlet_temperature"), ("_outlet_temperature", "_inlet_temperature")):
        if key.endswith(one):
            return key.removesuffix(one) + other
    return key
