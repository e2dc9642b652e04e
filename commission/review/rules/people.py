"""What protects people in rooms with refrigerant or a heavy door."""

from __future__ import annotations

from collections.abc import Iterator

from commission.quantities import Kind
from commission.review.facts import SystemFacts
from commission.review.finding import Figure, Remark

GUARDS = (("release_from_inside", "release of the door from inside"), ("trapped_person_alarm", "trapped-person alarm"))


def locked_in(facts: SystemFacts) -> Iterator[Remark]:
    """A walk-in room without release from inside or alarm: a warning where it is denied, a note where nothing is said.

    Source: EN 378-1 and common practice for walk-in rooms (from memory): whoever is locked in must get out or be heard.
    """
    identity = facts.system.spaces.evaporator or facts.system.heat_source.space
    if facts.system.duty != "cold_storage" or identity is None:
        return
    space = facts.plant.loaded.plant.spaces[identity]
    if space.outdoors:
        return
    denied = [words for key, words in GUARDS if getattr(space, key) is False]
    silent = [words for key, words in GUARDS if getattr(space, key) is None]
    if not denied and not silent:
        return
    figures = [Figure(words, "there is none") for words in denied] + [Figure(words, "not written") for words in silent]
    name = space.name or identity
    yield Remark(
        "warning" if denied else "note",
        f"spaces.{identity}",
        f"Somebody can be locked in {name}."
        if denied
        else f"It is not written how somebody locked in {name} gets out.",
        tuple(figures),
        "Fit what is missing before anybody works in the room."
        if denied
        else "Look at the door, try it, and write it.",
    )


def detection(facts: SystemFacts) -> Iterator[Remark]:
    """A closed room where the whole charge would pass the practical limit and no leak detector watches.

    Source: EN 378-3 and the practical limits of EN 378-1 (register, with their marks): above the practical limit people
    must be warned.
    """
    from commission.safety import MARKS, substance_of

    limit = substance_of(facts.refrigerant).practical_limit if facts.refrigerant else None
    for space in facts.spaces:
        written = facts.plant.loaded.plant.spaces[space.space_id]
        if space.concentration is None or limit is None or written.leak_detector or written.outdoors:
            continue
        if space.concentration.value <= limit.value:
            continue
        yield Remark(
            "warning" if written.leak_detector is False else "note",
            f"spaces.{space.space_id}",
            f"A leak of the whole charge of {facts.title} passes the practical limit in {space.name}, and "
            + ("no detector watches it." if written.leak_detector is False else "no detector is written."),
            (
                facts.plant.figure("charge over volume of the room", space.concentration.value, Kind.DENSITY, 5),
                facts.plant.figure("practical limit", limit.value, Kind.DENSITY, 5),
            ),
            "Ask whether the standard that applies wants a detector or ventilation here.",
            f"EN 378-3; practical limit: {limit.source}",
            MARKS[limit.mark],
        )
