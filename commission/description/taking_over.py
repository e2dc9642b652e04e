"""`like: other-system`: a system takes over, key by key, what it does not say itself."""

from __future__ import annotations

from dataclasses import dataclass, field
from itertools import islice
from typing import Any

from commission.description.checking import MAX_PROBLEMS
from commission.description.positions import DescriptionError, KeyPath, Mark, Positions
from commission.errors import Problem, nearest, shorten

MAX_TAKEN_OVER = 30_000
"""Most keys that all `like` of a plant take over together, so that a short file cannot become a huge plant."""

NOT_TAKEN_OVER: tuple[KeyPath, ...] = (
    ("like",), ("without",), ("name",), ("serves",), ("spaces",), ("installed_on",), ("guarantee",), ("documents",),
    ("nameplate", "serial"), ("nameplate", "year"), ("heat_source", "space"), ("heat_sink", "space"),
)  # fmt: skip
"""What belongs to one machine in one place, and is never taken over."""


def take_over(systems: dict[str, Any], positions: Positions) -> list[Problem]:
    """Complete each system that says `like` from the one it names, in `systems` and `positions`.

    A system may follow one that follows another. Returns the problems found: an unknown id, a circle, or a key of
    `without` that is not there.

    Raises:
        DescriptionError: more than `MAX_TAKEN_OVER` keys are taken over in all.
    """
    run = _Run(systems, positions)
    for path, mark in positions.marks.items():
        if len(path) > 2 and path[0] == "systems":
            run.marks.setdefault(str(path[1]), []).append((path[2:], mark))
    for identity in list(systems):
        if len(run.problems) > MAX_PROBLEMS:
            break
        for one in run.chain(identity):
            run.complete(one, systems[one]["like"])
            run.done.add(one)
    return run.problems


def at(data: Any, path: KeyPath) -> Any:
    """What stands at `path` inside plain data, or None."""
    for part in path:
        data = data.get(part) if isinstance(data, dict) else None
    return data


@dataclass(slots=True)
class _Run:
    """The work on one plant: its systems, the marks inside each, what is complete, and the problems found."""

    systems: dict[str, Any]
    positions: Positions
    marks: dict[str, list[tuple[KeyPath, Mark]]] = field(default_factory=dict)
    done: set[str] = field(default_factory=set)
    problems: list[Problem] = field(default_factory=list)
    taken: int = 0

    def chain(self, identity: str) -> list[str]:
        """The systems to complete so that `identity` is complete, in order; each fault is noted once."""
        chain: dict[str, None] = {}  # a list that is quick to search
        while identity not in self.done:
            system = self.systems[identity]
            base = system.get("like") if isinstance(system, dict) else None
            if not isinstance(base, str):
                break
            path: KeyPath = ("systems", identity, "like")
            if not isinstance(self.systems.get(base), dict):
                known = [one for one in islice(self.systems, 50) if one != identity]
                allowed = shorten(", ".join(known)) or "no other system is described"
                near = nearest(base, known)
                self.problems.append(
                    self.positions.problem(path, "no system has this id", allowed=allowed, nearest=near)
                )
                self.done.add(identity)
                break
            chain[identity] = None
            if base in chain:
                message = "these systems take over from each other in a circle"
                self.problems.append(self.positions.problem(path, message))
                self.done.update(chain)
                return []
            identity = base
        return list(reversed(chain))

    def complete(self, identity: str, base: str) -> None:
        """Take over from `base` what `identity` does not say itself."""
        taken: set[KeyPath] = set()
        left_out = set(NOT_TAKEN_OVER) | self.without(identity, base)
        self.systems[identity] = _filled(self.systems[identity], self.systems[base], (), left_out, taken)
        own = self.marks.setdefault(identity, [])
        known = {inside for inside, _ in own}
        for inside, mark in self.marks.get(base, []):
            if inside not in known and any(inside[:length] in taken for length in range(1, len(inside) + 1)):
                own.append((inside, mark))
                self.positions.marks["systems", identity, *inside] = mark
                self.taken += 1
        if self.taken > MAX_TAKEN_OVER:
            message = "the systems take over too much from each other"
            too_much = self.positions.problem(("systems", identity, "like"), message)
            raise DescriptionError(*self.problems, too_much)

    def without(self, identity: str, base: str) -> set[KeyPath]:
        """The key paths that `without` leaves out; each must stand in the base."""
        asked = self.systems[identity].get("without")
        paths: set[KeyPath] = set()
        for number, text in enumerate(asked if isinstance(asked, list) else []):
            path: KeyPath = tuple(str(text).split("."))
            if at(self.systems[base], path) is None:
                near = nearest(str(text), self.systems[base])
                place: KeyPath = ("systems", identity, "without", number)
                message = f"{shorten(base, 60)} has no such key"
                self.problems.append(self.positions.problem(place, message, nearest=near))
            paths.add(path)
        return paths


def _filled(own: Any, base: Any, path: KeyPath, left_out: set[KeyPath], taken: set[KeyPath]) -> Any:
    """`own` with the keys of `base` that it lacks; mappings are filled inside, lists are kept whole."""
    result = dict(own)
    for key, value in base.items():
        here: KeyPath = (*path, key)
        if here in left_out:
            continue
        if key not in result:
            result[key] = _stripped(value, here, left_out)
            taken.add(here)
        elif isinstance(result[key], dict) and isinstance(value, dict):
            result[key] = _filled(result[key], value, here, left_out, taken)
    return result


def _stripped(value: Any, path: KeyPath, left_out: set[KeyPath]) -> Any:
    """A value taken over whole, without the keys inside it that are never taken over."""
    if not isinstance(value, dict):
        return value
    return {k: _stripped(v, (*path, k), left_out) for k, v in value.items() if (*path, k) not in left_out}
