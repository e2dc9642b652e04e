"""Facts that are not written and would be worth most."""

from __future__ import annotations

import math
from collections.abc import Iterator

from commission.quantities import Kind
from commission.review.facts import PlantFacts, SystemFacts
from commission.review.finding import Figure, Remark

HEADLINE = (
    "suction_pressure", "discharge_pressure", "discharge_temperature", "cooling_capacity", "heating_capacity",
    "power_input",
)  # fmt: skip
"""What is said of the assumption that is most worth replacing: how far it moves these."""

TESTED_ON_SITE = (
    "nameplate.allowable_pressure_low",
    "nameplate.allowable_pressure_high",
    "controls.high_pressure_limit",
)
"""Facts that a factory-sealed unit does not need, since nothing of it is tested on site."""


def most_worth_knowing(facts: SystemFacts) -> Iterator[Remark]:
    """The assumption that makes most of the uncertainty of the leading values at the design condition.

    Source: JCGM 100: share of each cause in the variance, mean over the leading values (`prediction.worth`).
    """
    from commission.prediction import value_used
    from commission.prediction.worth import most_worth

    outlook = facts.outlooks.get("design")
    if facts.model is None or outlook is None or outlook.prediction is None:
        return
    key = most_worth(outlook.prediction.parts, facts.model.assumptions)
    if key is None:
        return
    parts = {k: part for k, part in outlook.prediction.parts.items() if k in HEADLINE}
    assumption = facts.model.assumptions[key]
    kind = assumption.kind
    show = facts.plant.display
    title = f"{assumption.title[:1].lower()}{assumption.title[1:]}"
    ends = show.between(assumption.low, assumption.high, kind)
    used = value_used(facts.model, assumption)
    listed = show.text(assumption.value, kind)
    moved = f"moved by the rated points from {listed}; " if show.text(used, kind) != listed else ""
    figures = [Figure(f"assumed: {title}", f"{show.text(used, kind)} ({moved}range {ends})", used, kind)]
    for moved, part in parts.items():
        size = abs(part.get(key, 0.0))
        if size > 0.1 * math.hypot(*part.values()) and moved in outlook.prediction.expected:
            moved_kind = show.kind(moved)
            text = f"± {show.spread(size, moved_kind)} {show.spread_unit(moved_kind)}".rstrip()
            figures.append(Figure(f"it moves {show.words(moved)} by", text, size, moved_kind))
    yield Remark(
        "note",
        facts.path(),
        f"The fact most worth finding out about {facts.title}: {title}.",
        tuple(figures),
        f"Replace the assumption by {assumption.replaced_by}.",
        assumption.source,
        assumption.mark,
    )


def of_the_system(facts: SystemFacts) -> Iterator[Remark]:
    """Facts that stand on a nameplate or a setting sheet and that limits, checks and the emergency card need.

    Source: EN 378-2, 6.4 (marking) and EN 378-4; common practice for settings.
    """
    system = facts.system
    wanted = [
        ("charge", system.charge, "charge limits, leak checks, the card for the door"),
        ("nameplate.allowable_pressure_low", system.nameplate.allowable_pressure_low, "test pressures"),
        ("nameplate.allowable_pressure_high", system.nameplate.allowable_pressure_high, "test pressures, limiter"),
        ("controls.high_pressure_limit", system.controls.high_pressure_limit, "proof of the limiter"),
        ("spaces", system.spaces.evaporator or system.spaces.condensing_unit, "charge limits of the rooms"),
    ]
    needed = [entry for entry in wanted if not system.sealed or entry[0] not in TESTED_ON_SITE]
    missing = [(key, use) for key, value, use in needed if value is None]
    if missing:
        yield Remark(
            "note",
            facts.path(),
            f"Not all is written of {facts.title} that other pages need: {_facts(len(missing))} missing.",
            tuple(Figure(key, f"needed for {use}") for key, use in missing),
            "Read them from nameplate and setting sheet and write them.",
        )


def of_the_plant(plant: PlantFacts) -> Iterator[Remark]:
    """Design weather and the law, without which hot days, cold days and dates cannot be judged.

    Source: EN 378-2, 6.2.2 chooses pressures by the ambient; the dates follow from the law that applies.
    """
    site = plant.loaded.plant.plant
    missing = []
    if site.climate.summer_dry_bulb is None:
        missing.append(("climate.summer_dry_bulb", "pressures on the hottest day"))
    if site.climate.winter_dry_bulb is None:
        missing.append(("climate.winter_dry_bulb", "readings on the coldest day"))
    if site.rules.refrigerant_law == "none stated":
        missing.append(("rules.refrigerant_law", "leak checks and dates"))
    if site.rules.safety == "none stated":
        missing.append(("rules.safety", "the safety standard that the owner and the authority agreed on"))
    if missing:
        yield Remark(
            "note",
            "plant",
            f"Not all is written of the plant as a whole: {_facts(len(missing))} missing.",
            tuple(Figure(key, f"needed for {use}") for key, use in missing),
            "Ask the owner, and write them.",
        )


def _facts(number: int) -> str:
    return "1 fact is" if number == 1 else f"{number} facts are"


def winter_heat(facts: SystemFacts) -> Iterator[Remark]:
    """A heating system on outdoor air, without a back-up, whose design condition is warmer than the coldest day.

    Source: capacity falls with the temperature of the source; what heats on the coldest day must be known.
    """
    winter = facts.plant.loaded.plant.plant.climate.winter_dry_bulb
    if facts.system.duty != "space_heating" or facts.system.heat_source.medium != "air" or winter is None:
        return
    if facts.system.back_up is not None:
        return
    design = facts.system.design.heat_source_inlet_temperature if facts.system.design else None
    if design is not None and design <= winter:
        return
    figures = [facts.plant.figure("coldest day of the site", winter, Kind.TEMPERATURE)]
    if design is not None:
        figures.append(facts.plant.figure("design condition, source inlet", design, Kind.TEMPERATURE))
    for name in ("design", "coldest"):
        heat = facts.expected(name, "heating_capacity")
        if heat is not None:
            figures.append(facts.plant.quantity("heating_capacity", heat.value, f"heat {facts.outlooks[name].name}"))
    yield Remark(
        "warning",
        facts.path("design") if facts.system.design else facts.path(),
        f"{facts.title} is not designed down to the coldest day of the site, and no back-up is written.",
        tuple(figures),
        "Find out the heat demand on the coldest day and what covers the rest; write it under back_up.",
    )
