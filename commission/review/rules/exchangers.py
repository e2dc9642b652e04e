"""Temperatures that cross in an exchanger: heat would have to flow from cold to hot."""

from __future__ import annotations

from collections.abc import Iterator

from commission.description.model import RatedPoint
from commission.quantities import Kind
from commission.review.facts import SystemFacts
from commission.review.finding import Remark


def evaporator_crosses(facts: SystemFacts) -> Iterator[Remark]:
    """A stated evaporating temperature that is not below the heat source.

    Source: second law. The vapour leaves at the dew point or above, so the dew point lies below the inlet of the
    source; a fluid without glide evaporates at one temperature, which lies below its outlet too. A blend in counterflow
    may leave warmer than the source leaves, but enters colder: its temperature after the valve is compared.
    """
    for index, point in facts.rated_points():
        evaporating = point.evaporating_temperature
        if evaporating is None:
            continue
        inlet, outlet = point.heat_source_inlet_temperature, point.heat_source_outlet_temperature
        coldest = _after_the_valve(facts, point)
        figures = [facts.plant.quantity("evaporating_temperature", evaporating)]
        crossed = None
        if inlet is not None and evaporating >= inlet:
            crossed = "enters"
            figures.append(facts.plant.quantity("heat_source_inlet_temperature", inlet))
        elif outlet is not None and coldest >= outlet:
            crossed = "leaves"
            figures.append(facts.plant.figure("refrigerant after the valve", coldest, Kind.TEMPERATURE))
            figures.append(facts.plant.quantity("heat_source_outlet_temperature", outlet))
        if crossed:
            yield Remark(
                "error",
                facts.path("rated_points", index, "evaporating_temperature"),
                f"Rated point {index + 1} of {facts.title} evaporates warmer than its heat source {crossed}.",
                tuple(figures),
                "Check the evaporating temperature and the temperatures of the source of this point.",
            )


def _after_the_valve(facts: SystemFacts, point: RatedPoint) -> float:
    """Coldest refrigerant in the evaporator in K: the evaporating temperature itself where there is no glide."""
    evaporating = point.evaporating_temperature
    assert evaporating is not None
    fluid, condensing = facts.refrigerant, point.condensing_temperature
    if fluid is None or not fluid.is_blend or condensing is None:
        return evaporating
    return float(fluid.throttled(fluid.dew(evaporating).p, fluid.bubble(condensing).h).T)


def condenser_crosses(facts: SystemFacts) -> Iterator[Remark]:
    """A stated condensing temperature that is not above the heat sink.

    Source: second law. The dew point lies above the inlet of the sink. The sink may leave warmer than the dew point
    only by what the desuperheating gives (threshold `desuperheating_share` of the heat), because at the point where
    condensation starts it must still be colder. For evaporative rejection the wet bulb stands for the inlet.
    """
    for index, point in facts.rated_points():
        condensing = point.condensing_temperature
        key = "heat_sink_wet_bulb" if facts.evaporative else "heat_sink_inlet_temperature"
        inlet: float | None = getattr(point, key)
        outlet = None if facts.evaporative else point.heat_sink_outlet_temperature
        if condensing is None or inlet is None:
            continue
        figures = [facts.plant.quantity("condensing_temperature", condensing), facts.plant.quantity(key, inlet)]
        share = facts.plant.limit("desuperheating_share")
        where = None
        if condensing <= inlet:
            where = "enters"
        elif outlet is not None and inlet + (1 - share) * (outlet - inlet) >= condensing:
            where = "leaves"
            figures.append(facts.plant.quantity("heat_sink_outlet_temperature", outlet))
            figures.append(facts.plant.threshold_figure("desuperheating_share", "heat given above condensing, at most"))
        if where:
            yield Remark(
                "error",
                facts.path("rated_points", index, "condensing_temperature"),
                f"Rated point {index + 1} of {facts.title} condenses colder than its heat sink {where}.",
                tuple(figures),
                "Check the condensing temperature and the temperatures of the sink of this point.",
            )


def expected_crosses(facts: SystemFacts) -> Iterator[Remark]:
    """Expected readings whose temperatures cross, so that the calculation itself cannot be right.

    Source: second law, as for stated points: the sink leaves colder than the discharge gas and, where it is already
    colder than it when condensation starts, by no more than desuperheating gives; the source enters warmer than the
    refrigerant evaporates.
    """
    share = facts.plant.limit("desuperheating_share")
    for name, outlook in facts.outlooks.items():
        values = {key: found.value for key in CROSSING if (found := outlook.get(key)) is not None}
        condensing, inlet, outlet = (values.get(key) for key in CROSSING[:3])
        evaporating, source = (values.get(key) for key in CROSSING[3:])
        crossed = []
        if condensing is not None and inlet is not None and not facts.evaporative:
            start = inlet + (1 - share) * ((outlet if outlet is not None else inlet) - inlet)
            if start >= condensing:
                crossed += list(CROSSING[:3])
        if evaporating is not None and source is not None and evaporating >= source:
            crossed += list(CROSSING[3:])
        if not crossed:
            continue
        yield Remark(
            facts.severity(name, "error"),
            facts.path(),
            f"What is expected of {facts.title} {outlook.name} cannot be, since temperatures cross in an exchanger.",
            tuple(facts.plant.quantity(key, values[key]) for key in crossed if key in values),
            "Do not use the expected readings of this system; check refrigerant, media and rated points.",
        )
        return


CROSSING = (
    "condensing_temperature", "heat_sink_inlet_temperature", "heat_sink_outlet_temperature",
    "evaporating_temperature", "heat_source_inlet_temperature",
)  # fmt: skip


def cooler_beyond_its_air(facts: SystemFacts) -> Iterator[Remark]:
    """A catalogue rating of an air cooler that asks more of its air flow than saturated air at coil temperature gives.

    Source: first and second law: no air leaves colder than the refrigerant, so the heat is at most the mass flow of dry
    air times the fall of enthalpy to saturated air at the evaporating temperature (Braun, Klein & Mitchell 1989), less
    the enthalpy that the condensate, or the ice, takes along.
    """
    from commission.properties import moist_air

    rating, medium = facts.system.evaporator.rating, facts.system.heat_source
    if rating is None or rating.air_on is None or medium.medium != "air" or not medium.flow:
        return
    pressure = facts.plant.loaded.barometric_pressure
    humidity = 1.0 if medium.relative_humidity is None else medium.relative_humidity
    air = moist_air(rating.air_on, pressure, relative_humidity=humidity)
    coil = moist_air(rating.air_on - rating.temperature_difference, pressure, relative_humidity=1.0)
    removed = (air.W - coil.W) * enthalpy_of_water(rating.air_on - rating.temperature_difference)
    most = medium.flow * air.density * (air.h - coil.h - removed)
    yield from _effectiveness(facts, "evaporator", rating.capacity, most, medium.flow)


def enthalpy_of_water(temperature: float) -> float:
    """Enthalpy in J/kg of liquid water, or of ice below 0 °C, at `temperature` in K, counted from liquid at 0 °C.

    4.19 kJ/(kg K) for water; -333.4 + 2.1 t kJ/kg for ice (ASHRAE Handbook Fundamentals, psychrometrics).
    """
    t = temperature - 273.15
    return 4190.0 * t if t >= 0 else -333.4e3 + 2100.0 * t


def condenser_beyond_its_air(facts: SystemFacts) -> Iterator[Remark]:
    """A catalogue rating of an air-cooled condenser that asks more of its air flow than it can carry.

    Source: first and second law: the air leaves at most at the condensing temperature, plus what desuperheating gives.
    """
    from commission.properties import moist_air

    rating, medium = facts.system.condenser.rating, facts.system.heat_sink
    if rating is None or rating.air_on is None or medium.medium != "air" or not medium.flow:
        return
    air = moist_air(rating.air_on, facts.plant.loaded.barometric_pressure, relative_humidity=0.0)
    share = facts.plant.limit("desuperheating_share")
    most = medium.flow * air.density * air.cp * rating.temperature_difference / (1 - share)
    yield from _effectiveness(facts, "condenser", rating.capacity, most, medium.flow)


def _effectiveness(facts: SystemFacts, part: str, capacity: float, most: float, flow: float) -> Iterator[Remark]:
    entry = facts.plant.threshold("exchanger_effectiveness_high")
    share = capacity / most
    if share <= entry.value:
        return
    impossible = share > 1
    yield Remark(
        "error" if impossible else "warning",
        facts.path(part, "rating"),
        f"The catalogue rating of the {part} of {facts.title} is {'more than' if impossible else 'nearly all'} its "
        "air flow can carry at this temperature difference.",
        (
            facts.plant.figure("rated heat", capacity, Kind.HEAT_FLOW),
            facts.plant.figure("most that the air can carry", most, Kind.HEAT_FLOW),
            facts.plant.figure("air flow", flow, Kind.VOLUME_FLOW),
            facts.plant.figure("share", share, Kind.RATIO),
        ),
        "Check the air flow, the temperature difference of the rating and its capacity.",
        None if impossible else entry.source,
        None if impossible else entry.mark,
    )
