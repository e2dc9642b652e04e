"""Conditions that no medium can have."""

from __future__ import annotations

from collections.abc import Iterator

from commission.description.model import Conditions
from commission.review.facts import SystemFacts
from commission.review.finding import Remark

WRONG = {"source": "warms up although heat is taken from it", "sink": "cools down although heat is given to it"}


def stated_conditions(facts: SystemFacts) -> Iterator[tuple[str, str, Conditions]]:
    """Key path, name and content of every condition that the description of a system states."""
    for index, point in facts.rated_points():
        yield facts.path("rated_points", index), f"Rated point {index + 1}", point
    if facts.system.design:
        yield facts.path("design"), "The design condition", facts.system.design
    for number, guarantee in enumerate(facts.system.guarantee):
        yield facts.path("guarantee", number, "at"), f"The condition of guarantee {number + 1}", guarantee.at


def wrong_way(facts: SystemFacts) -> Iterator[Remark]:
    """A heat source that leaves warmer than it enters, or a heat sink that leaves colder.

    Source: definition of source and sink: heat is taken from the one and given to the other.
    """
    for path, name, at in stated_conditions(facts):
        for side, verb in WRONG.items():
            inlet = getattr(at, f"heat_{side}_inlet_temperature")
            outlet = getattr(at, f"heat_{side}_outlet_temperature")
            if inlet is None or outlet is None or (outlet < inlet if side == "source" else outlet > inlet):
                continue
            plant = facts.plant
            yield Remark(
                "error",
                path,
                f"{name} of {facts.title}: the heat {side} {verb if outlet != inlet else 'keeps its temperature'}.",
                (
                    plant.quantity(f"heat_{side}_inlet_temperature", inlet),
                    plant.quantity(f"heat_{side}_outlet_temperature", outlet),
                ),
                "Check whether inlet and outlet, or source and sink, are exchanged.",
            )
