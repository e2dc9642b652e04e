"""Charge against the rooms, and what the refrigerant law says of new equipment."""

from __future__ import annotations

from collections.abc import Iterator
from importlib.resources import files
from typing import Any

from commission.quantities import Kind, parse
from commission.review.facts import SystemFacts
from commission.review.finding import Figure, Remark


def charge_over_limit(facts: SystemFacts) -> Iterator[Remark]:
    """A charge above the lowest limit of the documents for a space that the refrigerant can reach.

    Source: the charge limits of the safety room, each with its document and mark; most are from memory, so this is a
    warning that sends the reader to the document.
    """
    from commission.safety import MARKS

    for space in facts.spaces:
        lowest = space.lowest
        if not space.over or lowest is None or lowest.value is None or space.charge is None:
            continue
        yield Remark(
            "warning",
            facts.path("charge"),
            f"The charge of {facts.title} is above the lowest charge limit for {space.name}.",
            (
                facts.plant.figure("charge", space.charge, Kind.MASS),
                facts.plant.figure("lowest limit", lowest.value.value, Kind.MASS),
                Figure("rule applied", lowest.rule),
            ),
            f"Less charge, a larger or ventilated room, or measures that the document names: {space.advice}.",
            f"{lowest.document}, {lowest.edition}" if lowest.edition else lowest.document,
            MARKS[lowest.mark],
        )


def leak_detection(facts: SystemFacts) -> Iterator[Remark]:
    """A charge from which the law asks for a leakage detection system, and none is written in any space.

    Source: EU 2024/573 article 6 (from memory; threshold `leak_detection_from` for CO2 equivalent, a figure of the
    safety rules for the mass of annex II gases).
    """
    from commission.safety import MARKS, fact

    entry = facts.plant.threshold("leak_detection_from")
    mass = fact("detection_system_duty_annex_ii")
    counts = (
        (facts.safety_figure("co2_equivalent"), entry.value, entry.source, entry.mark),
        (facts.safety_figure("annex_ii_mass"), mass.value, mass.source, MARKS[mass.mark]),
    )
    plant = facts.plant.loaded.plant
    if plant.plant.rules.refrigerant_law != "EU 2024/573":
        return
    if any(plant.spaces[space.space_id].leak_detector for space in facts.spaces):
        return
    over = next(((f, start, s, m) for f, start, s, m in counts if f is not None and f.value >= start), None)
    if over is None:
        return
    figure, start, source, mark = over
    yield Remark(
        "warning",
        facts.path("charge"),
        f"The law asks for a leakage detection system on {facts.title}, and none is written.",
        (
            facts.plant.figure(figure.title, figure.value, Kind.MASS, 0),
            facts.plant.figure("duty from", start, Kind.MASS, 0),
        ),
        "Fit one that calls the operator and have it checked every 12 months; write leak_detector under the space.",
        source,
        mark,
    )


def law_dates(facts: SystemFacts) -> Iterator[Remark]:
    """Dates after which new equipment of this kind with this refrigerant may no longer be placed on the market.

    Source: `market_dates.yaml`. With a day of the visit, dates that have passed are warnings; all others are notes.
    A plant that stands already may go on.
    """
    from commission.safety import MARKS, substance_of

    law = facts.plant.loaded.plant.plant.rules.refrigerant_law
    gwp = substance_of(facts.refrigerant).gwp if facts.refrigerant else None
    if gwp is None:
        return
    for entry in market_dates(law):
        if facts.system.duty not in entry["duties"] or gwp.value < parse(entry["gwp_from"], Kind.NUMBER):
            continue
        if not _in_size(facts, entry):
            continue
        day = entry["from"]
        passed = facts.plant.visit is not None and facts.plant.visit.isoformat() >= day
        yield Remark(
            "warning" if passed else "note",
            facts.path("refrigerant"),
            f"{entry['title']}: from {day} no new equipment of this kind with {facts.system.refrigerant} may be placed "
            "on the market.",
            (
                facts.plant.figure(f"GWP of {facts.system.refrigerant}", gwp.value, Kind.NUMBER, 0),
                Figure("no longer from GWP", entry["gwp_from"]),
            ),
            "A plant that stands may go on; think of it before buying a second one. Confirm with the law in force.",
            f"{entry['document']}; GWP: {gwp.source}",
            MARKS[entry["mark"]],
        )


def market_dates(law: str) -> tuple[dict[str, Any], ...]:
    """The entries of `market_dates.yaml` for a law as written in `plant.rules.refrigerant_law`."""
    import yaml

    text = (files("commission.review") / "market_dates.yaml").read_text(encoding="utf-8")
    return tuple(entry for entry in yaml.load(text, Loader=yaml.BaseLoader) if entry["law"] == law)


def _in_size(facts: SystemFacts, entry: dict[str, Any]) -> bool:
    """Whether the rated capacity lies in the range of the entry; an unknown capacity lies in every range."""
    capacity = rated_capacity(facts)
    if capacity is None:
        return True
    above, up_to = entry.get("capacity_above"), entry.get("capacity_up_to")
    if above is not None and capacity <= parse(above, Kind.HEAT_FLOW):
        return False
    return up_to is None or capacity <= parse(up_to, Kind.HEAT_FLOW)


def rated_capacity(facts: SystemFacts) -> float | None:
    """The rated capacity in W: of heat for heating duties, else of cooling; None where none is stated.

    A law goes by the rating and not by what the machine can do at full speed: it is the first point that states the
    capacity, of those at the nominal speed where that is stated, and with all compressors on. A list begins with the
    rating.
    """
    key = "cooling_capacity" if facts.cools else "heating_capacity"
    points = [point for point in facts.system.rated_points if getattr(point, key) is not None]
    points = [p for p in points if p.compressor_stage in (None, 1.0)] or points
    nominal = facts.system.compressor.nominal_speed
    at_nominal = [p for p in points if nominal is not None and _same(p.compressor_speed, nominal)]
    stated: list[float] = [getattr(point, key) for point in at_nominal or points]
    unit = facts.system.condensing_unit
    if unit is not None and facts.cools:
        stated += [row.cooling_capacity for row in unit.rated_points]
    return stated[0] if stated else None


def _same(speed: float | None, nominal: float) -> bool:
    """The same speed but for rounding of the printed figures."""
    return speed is not None and abs(speed - nominal) <= 0.01 * nominal
