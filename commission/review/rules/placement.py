"""Where the heat goes: a machine that rejects heat into the space it cools only warms it."""

from __future__ import annotations

from collections.abc import Iterator

from commission.description.model import System
from commission.quantities import Kind
from commission.review.facts import SystemFacts
from commission.review.finding import Figure, Remark


def rejects_into_its_own_space(facts: SystemFacts) -> Iterator[Remark]:
    """Source air and sink air of one closed space.

    Source: first law on the room: averaged over cycles it is warmed by the power the machine draws, door open or not.
    A machine that heats a room with air of the same room gives it that power too, and nothing from the source.
    """
    system = facts.system
    taken, given = source_space(system), sink_space(system)
    if taken is None or taken != given or facts.plant.loaded.plant.spaces[taken].outdoors:
        return
    space = facts.plant.loaded.plant.spaces[taken]
    name = space.name or taken
    figures = [Figure("heat is taken from", name), Figure("heat is given to", name)]
    power = drawn_power(facts)
    if power is not None:
        figures.append(facts.plant.figure("power drawn, which warms the space while running", power, Kind.POWER))
    path = facts.path("heat_sink", "space") if system.heat_sink.space else facts.path("spaces", "condensing_unit")
    yield Remark(
        "error",
        path,
        f"{facts.title} rejects its heat into the space it {'cools' if facts.cools else 'takes heat from'}: the space "
        "is warmed by the power the machine draws.",
        tuple(figures),
        "Give the heat to another space or outdoors, or correct the ids of the spaces.",
    )


def warms_a_room(facts: SystemFacts) -> Iterator[Remark]:
    """The condenser of a cooling system breathes the air of another closed space.

    Source: first law: that space receives the heat from the source and the power, and must lose it again.
    """
    given = sink_space(facts.system)
    if not facts.cools or given is None or given == source_space(facts.system):
        return
    space = facts.plant.loaded.plant.spaces[given]
    heat = facts.expected("design", "heating_capacity")
    if space.outdoors or heat is None:
        return
    yield Remark(
        "note",
        facts.path("heat_sink"),
        f"{facts.title} gives its heat to the air of {space.name or given}, which is not outdoors.",
        (facts.plant.quantity("heating_capacity", heat.value),),
        "Make sure that this space is ventilated or cooled enough, in summer with the door shut, and design for the "
        "temperature it then has.",
    )


def source_space(system: System) -> str | None:
    """The space whose air is cooled, None where it is not air or not known."""
    if system.heat_source.medium != "air":
        return None
    return system.heat_source.space or (system.spaces.evaporator if system.duty == "cold_storage" else None)


def sink_space(system: System) -> str | None:
    """The space whose air takes the heat, None where it is not air or not known."""
    if system.heat_sink.medium != "air":
        return None
    return system.heat_sink.space or system.spaces.condensing_unit


def drawn_power(facts: SystemFacts) -> float | None:
    """Power drawn at the design condition in W, else the largest that the supplier states; None where neither is."""
    expected = facts.expected("design", "power_input")
    if expected is not None:
        return expected.value
    unit = facts.system.condensing_unit
    stated = [point.power_input for point in facts.system.rated_points if point.power_input is not None]
    stated += [row.power_input for row in unit.rated_points] if unit else []
    return max(stated, default=None)
