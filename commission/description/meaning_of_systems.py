"""The meaning of one system: references, combinations and orders that no single field can see."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from itertools import pairwise

from commission.description.assumptions import library, range_problems
from commission.description.instruments import MEASURED
from commission.description.looked import Looked
from commission.description.model import Compressor, Conditions, Guarantee, Medium, System
from commission.description.positions import KeyPath
from commission.errors import InputError, Problem, nearest
from commission.quantities import NOMENCLATURE, Quantity, parse

CheckOfASystem = Callable[[Looked, KeyPath, System], Iterator[Problem]]


def _refrigerant(looked: Looked, at: KeyPath, system: System) -> Iterator[Problem]:
    from commission.properties.models import designation

    try:
        designation(system.refrigerant)
    except InputError as error:
        first = error.problems[0]
        path = (*at, "refrigerant")
        yield looked.positions.problem(path, first.message, allowed=first.allowed, nearest=first.nearest)


def _factory_charge(looked: Looked, at: KeyPath, system: System) -> Iterator[Problem]:
    """A part of the charge, of a unit whose pipes are joined on site."""
    brought, path = system.factory_charge, (*at, "factory_charge")
    if brought is None:
        return
    if system.sealed:
        yield looked.positions.problem(path, "a factory-sealed unit brings its whole charge; write charge alone")
    elif system.charge is not None and brought > system.charge:
        yield looked.positions.problem(path, "the unit cannot bring more than the charge of the system")


def _media(looked: Looked, at: KeyPath, system: System) -> Iterator[Problem]:
    """Duty and media belong together."""
    source, sink = system.heat_source.medium, system.heat_sink.medium
    if system.duty in ("cold_storage", "comfort_cooling") and source != "air":
        message = f"{system.duty} takes heat from air; a machine that cools a liquid is liquid_cooling"
        yield looked.positions.problem((*at, "heat_source", "medium"), message, allowed="air")
    if system.duty == "liquid_cooling" and source == "air":
        message = "liquid_cooling takes heat from a liquid; a machine that cools air is cold_storage or comfort_cooling"
        allowed = "water, propylene glycol, ethylene glycol"
        yield looked.positions.problem((*at, "heat_source", "medium"), message, allowed=allowed)
    if system.duty == "water_heating" and sink == "air":
        yield looked.positions.problem(
            (*at, "heat_sink", "medium"), "water_heating gives its heat to water", allowed="water"
        )
    for side in ("heat_source", "heat_sink"):
        yield from _medium(looked, (*at, side), getattr(system, side))


def _medium(looked: Looked, at: KeyPath, medium: Medium) -> Iterator[Problem]:
    yield from looked.reference((*at, "space"), medium.space, looked.plant.spaces, "space")
    brine = medium.medium.endswith("glycol")
    if brine and medium.mass_fraction is None:
        message = f"{medium.medium} needs its mass_fraction"
        yield looked.positions.problem((*at, "medium"), message, allowed="mass_fraction: 30 %")
    if not brine and medium.mass_fraction is not None:
        yield looked.positions.problem((*at, "mass_fraction"), f"{medium.medium} has no glycol fraction")
    if medium.cooled_by is not None and (medium.medium == "air" or at[-1] == "heat_source"):
        message = "this says where the heat of a heat-sink liquid goes; here there is none"
        yield looked.positions.problem((*at, "cooled_by"), message)
    if medium.medium != "air" and medium.relative_humidity is not None:
        yield looked.positions.problem((*at, "relative_humidity"), "only air has a relative humidity")


def _spaces(looked: Looked, at: KeyPath, system: System) -> Iterator[Problem]:
    known = looked.plant.spaces
    yield from looked.reference((*at, "spaces", "evaporator"), system.spaces.evaporator, known, "space")
    yield from looked.reference((*at, "spaces", "condensing_unit"), system.spaces.condensing_unit, known, "space")
    for number, space in enumerate(system.spaces.pipework):
        yield from looked.reference((*at, "spaces", "pipework", number), space, known, "space")


def _measured_with(looked: Looked, at: KeyPath, system: System) -> Iterator[Problem]:
    instruments = looked.plant.instruments
    for key, identity in system.measured_with.items():
        path = (*at, "measured_with", key)
        quantity = NOMENCLATURE.get(key)
        if quantity is None:
            near = nearest(key, NOMENCLATURE)
            yield looked.positions.problem(
                path, "this is not a quantity of the nomenclature", nearest=near, at_key=True, value=key
            )
            continue
        yield from looked.reference(path, identity, instruments, "instrument")
        if identity in instruments:
            measures = instruments[identity].measures
            if not _fits(measures, quantity):
                fit = [one for one, i in instruments.items() if _fits(i.measures, quantity)]
                message = f"this instrument measures {measures}; {key} is a {quantity.kind.value}"
                allowed = ", ".join(fit) or "an instrument for it is not described yet"
                yield looked.positions.problem(path, message, allowed=allowed)


def _fits(measures: str, quantity: Quantity) -> bool:
    """An instrument reads quantities of its own kind; a meter of electric power reads no heat, nor the other way."""
    return MEASURED[measures][0] is quantity.kind


def _conditions(looked: Looked, at: KeyPath, system: System) -> Iterator[Problem]:
    """Every condition written in a system can be, and a rated point says enough to be one."""
    if system.design is not None:
        yield from _condition(looked, (*at, "design"), system.design, system)
    for number, point in enumerate(system.rated_points):
        path: KeyPath = (*at, "rated_points", number)
        yield from _condition(looked, path, point, system)
        results = (point.cooling_capacity, point.heating_capacity, point.power_input)
        if all(result is None for result in results):
            allowed = "cooling_capacity, heating_capacity, power_input"
            yield looked.positions.problem(path, "a rated point needs a result", allowed=allowed)
        for side in ("heat_source", "heat_sink"):
            ends = [f"{side}_inlet_temperature", f"{side}_outlet_temperature"]
            if all(getattr(point, key) is None for key in ends):
                message = f"a rated point needs a temperature of the {side.replace('_', ' ')}"
                yield looked.positions.problem(path, message, allowed=" or ".join(ends))


def _condition(looked: Looked, at: KeyPath, condition: Conditions, system: System) -> Iterator[Problem]:
    for side in ("heat_source", "heat_sink"):
        air = getattr(system, side).medium == "air"
        dry, wet = getattr(condition, f"{side}_inlet_temperature"), getattr(condition, f"{side}_wet_bulb")
        humidity = getattr(condition, f"{side}_relative_humidity")
        for key, value in ((f"{side}_wet_bulb", wet), (f"{side}_relative_humidity", humidity)):
            if value is not None and not air:
                yield looked.positions.problem((*at, key), "only air has a wet bulb or a relative humidity")
        if air and None not in (dry, wet) and wet > dry:
            yield looked.positions.problem((*at, f"{side}_wet_bulb"), "a wet bulb cannot be above its dry bulb")
        if wet is not None and humidity is not None:
            message = "wet bulb and relative humidity say the same; write one of them"
            yield looked.positions.problem((*at, f"{side}_relative_humidity"), message)
    stage, compressor = condition.compressor_stage, system.compressor
    if stage is not None and compressor.step_near(stage) is None:
        allowed = ", ".join(f"{100 * step:.0f} %" for step in compressor.steps)
        allowed = allowed or "write the stages under compressor.stages first"
        yield looked.positions.problem((*at, "compressor_stage"), "the compressor has no such stage", allowed=allowed)


def _guarantees(looked: Looked, at: KeyPath, system: System) -> Iterator[Problem]:
    for number, guarantee in enumerate(system.guarantee):
        path: KeyPath = (*at, "guarantee", number)
        yield from _guarantee(looked, path, guarantee)
        yield from _condition(looked, (*path, "at"), guarantee.at, system)


def _guarantee(looked: Looked, at: KeyPath, guarantee: Guarantee) -> Iterator[Problem]:
    kind = NOMENCLATURE[guarantee.quantity].kind
    value, problems = looked.quantity((*at, "value"), lambda: parse(guarantee.value, kind))
    yield from problems
    if value is not None and value <= 0:
        yield looked.positions.problem((*at, "value"), "a guaranteed value must be more than nothing")
    if not guarantee.at.model_fields_set:
        yield looked.positions.problem((*at, "at"), "a guarantee needs the condition at which it holds")


def _compressor(looked: Looked, at: KeyPath, system: System) -> Iterator[Problem]:
    compressor, path = system.compressor, (*at, "compressor")
    speeds = ("minimum_speed", "nominal_speed", "maximum_speed")
    yield from _ascending(looked, path, compressor, speeds)
    yield from _ascending(looked, (*at, "controls"), system.controls, ("lowest_speed", "highest_speed"))
    for number, (low, high) in enumerate(pairwise(compressor.steps)):
        if high <= low:
            yield looked.positions.problem((*path, "stages", number + 1), "stages must rise one after the other")
    if compressor.stages and not compressor.stages[0] > 0.0:
        yield looked.positions.problem((*path, "stages", 0), "a stage of nothing is a compressor that stands still")
    if compressor.stages and compressor.stages[-1] < 1.0:
        message = "the last stage is that of all compressors at full load"
        yield looked.positions.problem((*path, "stages", len(compressor.stages) - 1), message, allowed="100 %")
    if compressor.polynomial and compressor.table:
        message = "polynomials and table say the same; write one of them"
        yield looked.positions.problem((*path, "table"), message, at_key=True)
    if compressor.polynomial:
        polynomial = compressor.polynomial
        if polynomial.mass_flow is None and polynomial.cooling_capacity is None:
            message = "the polynomials need a flow or a capacity"
            allowed = "mass_flow, cooling_capacity"
            yield looked.positions.problem((*path, "polynomial"), message, allowed=allowed, at_key=True)
        for pair in (("lowest_evaporating", "highest_evaporating"), ("lowest_condensing", "highest_condensing")):
            yield from _ascending(looked, (*path, "polynomial"), polynomial, pair)
    yield from _compressor_points(looked, path, compressor)


def _compressor_points(looked: Looked, path: KeyPath, compressor: Compressor) -> Iterator[Problem]:
    for number, point in enumerate(compressor.table.points if compressor.table else ()):
        here: KeyPath = (*path, "table", "points", number)
        if point.cooling_capacity is None and point.refrigerant_flow is None:
            allowed = "cooling_capacity, refrigerant_flow"
            yield looked.positions.problem(here, "a point needs a capacity or a flow", allowed=allowed)
        if point.condensing_temperature <= point.evaporating_temperature:
            message = "condensing must be above evaporating"
            yield looked.positions.problem((*here, "condensing_temperature"), message)


def _ascending(looked: Looked, at: KeyPath, part: object, keys: tuple[str, ...]) -> Iterator[Problem]:
    """Values that must rise in the order of `keys`, where they are written."""
    written = [(key, getattr(part, key)) for key in keys if getattr(part, key) is not None]
    for (low_key, low), (high_key, high) in pairwise(written):
        if low > high:
            yield looked.positions.problem((*at, high_key), f"this is below the {low_key}")


def _controls(looked: Looked, at: KeyPath, system: System) -> Iterator[Problem]:
    controls, path = system.controls, (*at, "controls")
    low, again = controls.low_pressure_cut_out, controls.low_pressure_cut_in
    if low and again and again.absolute(looked.barometric_pressure) <= low.absolute(looked.barometric_pressure):
        message = "the machine must cut in above the pressure at which it cuts out"
        yield looked.positions.problem((*path, "low_pressure_cut_in"), message)
    curve = controls.weather_curve
    if curve is not None:
        for number, (colder, warmer) in enumerate(pairwise(curve.points), start=1):
            here: KeyPath = (*path, "weather_curve", "points", number)
            if warmer.outdoor <= colder.outdoor:
                yield looked.positions.problem(
                    (*here, "outdoor"), "write the points from the coldest day to the warmest"
                )
            elif warmer.flow > colder.flow:
                yield looked.positions.problem((*here, "flow"), "a weather curve falls as it gets warmer outdoors")
        yield from _ascending(looked, (*path, "weather_curve"), curve, ("lowest_flow", "highest_flow"))


def _store_and_back_up(looked: Looked, at: KeyPath, system: System) -> Iterator[Problem]:
    back_up = system.back_up
    if back_up is not None:
        yield from _ascending(looked, (*at, "back_up"), back_up, ("starts_below", "locked_out_above"))
        if back_up.where in ("store top", "store middle", "store bottom") and system.store is None:
            yield looked.positions.problem((*at, "back_up", "where"), "no store is described in this system")
    store = system.store
    if store is not None:
        yield from _ascending(looked, (*at, "store"), store, ("cold_water", "set_point"))


def _assumptions(looked: Looked, at: KeyPath, system: System) -> Iterator[Problem]:
    entries = library()
    for key, own in system.assumptions.items():
        path = (*at, "assumptions", key)
        if key not in entries:
            near = nearest(key, entries)
            message = "this is not in the assumption list"
            yield looked.positions.problem(path, message, nearest=near, at_key=True, value=key)
        else:
            yield from range_problems(own, entries[key].kind, looked.positions, path)


CHECKS_OF_A_SYSTEM: tuple[CheckOfASystem, ...] = (
    _refrigerant,
    _factory_charge,
    _media,
    _spaces,
    _compressor,
    _controls,
    _store_and_back_up,
    _conditions,
    _guarantees,
    _measured_with,
    _assumptions,
)
"""Every check of one system, in the order of the description."""
