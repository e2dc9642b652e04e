"""Stated points against the first law: heat in plus work in is heat out."""

from __future__ import annotations

from collections.abc import Iterator

from commission.description.model import RatedPoint
from commission.quantities import Kind
from commission.review.facts import SystemFacts
from commission.review.finding import Figure, Remark, Severity


def energy_balance(facts: SystemFacts) -> Iterator[Remark]:
    """Heat to the sink against cooling capacity plus power, where a rated point states all three.

    Source: first law on the circuit. Rounding and a boundary drawn differently explain 2 to 4 %. An error is only what
    no boundary explains: less heat out than heat taken in, or more than both and every fan that could have been left
    out of the power.
    """
    for index, point in facts.rated_points():
        cooling, heating, power = point.cooling_capacity, point.heating_capacity, point.power_input
        if cooling is None or heating is None or power is None or heating <= 0:
            continue
        missed = (heating - cooling - power) / heating
        severity = _severity(facts, cooling, heating, power)
        if severity is None:
            continue
        plant = facts.plant
        yield Remark(
            severity,
            facts.path("rated_points", index),
            f"Rated point {index + 1} of {facts.title} does not balance: "
            + ("no boundary of the power explains it." if severity == "error" else _explain(point)),
            (
                plant.quantity("cooling_capacity", cooling),
                plant.quantity("power_input", power),
                plant.quantity("heating_capacity", heating),
                plant.figure("missing in the balance, share of the heat to the sink", missed, Kind.RATIO, 1),
                plant.threshold_figure("first_law_boundary", "usually explained by rounding and boundary"),
            ),
            "Ask the supplier which fans, pumps and controls the power counts, write them under includes, and check "
            "that the three figures belong to one point.",
        )


def _severity(facts: SystemFacts, cooling: float, heating: float, power: float) -> Severity | None:
    margin = facts.plant.limit("first_law_margin")
    most = (cooling + power * (1 + facts.plant.limit("uncounted_power_share"))) * (1 + margin)
    least = cooling * (1 - margin)
    missed = abs(heating - cooling - power) / heating
    if not least <= heating <= most:
        return "error"
    if missed > facts.plant.limit("first_law_boundary"):
        return "warning"
    return "note" if missed > margin else None


def _explain(point: RatedPoint) -> str:
    if point.includes is None:
        return "what the power counts is not written."
    return f"the power is said to count {', '.join(point.includes)}."


def medium_balance(facts: SystemFacts) -> Iterator[Remark]:
    """A stated capacity against flow, heat capacity and temperature change of a liquid.

    Source: first law on the stream, Q = V rho c (T_in - T_out), with density and heat capacity at the mean temperature.
    """
    for index, point in facts.rated_points():
        for side, medium, key in (
            ("source", facts.system.heat_source, "cooling_capacity"),
            ("sink", facts.system.heat_sink, "heating_capacity"),
        ):
            stated = getattr(point, key)
            inlet = getattr(point, f"heat_{side}_inlet_temperature")
            outlet = getattr(point, f"heat_{side}_outlet_temperature")
            flow = getattr(point, f"heat_{side}_flow") or medium.flow
            if medium.medium == "air" or flow is None or None in (stated, inlet, outlet):
                continue
            if side == "sink" and getattr(point, f"heat_{side}_flow") is None and _sets_its_flow(facts, outlet - inlet):
                continue
            from commission.properties import liquid

            stream = liquid(medium.medium, medium.mass_fraction or 0.0)
            mean = (inlet + outlet) / 2
            carried = flow * stream.density(mean) * stream.specific_heat(mean) * abs(inlet - outlet)
            missed = abs(stated - carried) / carried if carried else 1.0
            if missed <= facts.plant.limit("medium_balance_margin"):
                continue
            severity: Severity = "error" if missed > facts.plant.limit("medium_balance_impossible") else "warning"
            yield Remark(
                severity,
                facts.path("rated_points", index, key),
                f"Rated point {index + 1} of {facts.title}: flow and temperatures of the {medium.medium} carry "
                f"{'more' if carried > stated else 'less'} heat than the stated {facts.plant.display.words(key)}.",
                _stream_figures(facts, side, key, stated, carried, inlet, outlet, flow),
                "Check flow, both temperatures and the capacity of this point against the supplier's sheet.",
            )


def _sets_its_flow(facts: SystemFacts, lift: float) -> bool:
    """Hot water heated in one pass: the machine sets another flow at each point, the stated one is of its design."""
    from commission.prediction.streams import ONCE_THROUGH

    return facts.system.duty == "water_heating" and lift >= ONCE_THROUGH


def _stream_figures(
    facts: SystemFacts, side: str, key: str, stated: float, carried: float, inlet: float, outlet: float, flow: float
) -> tuple[Figure, ...]:
    plant = facts.plant
    return (
        plant.quantity(key, stated, "stated"),
        plant.figure("carried by flow and temperature change", carried, Kind.HEAT_FLOW),
        plant.quantity(f"heat_{side}_flow", flow),
        plant.quantity(f"heat_{side}_inlet_temperature", inlet),
        plant.quantity(f"heat_{side}_outlet_temperature", outlet),
    )
