"""What is not written is filled from a list of assumptions, each with its range, its source and what it moves."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from types import MappingProxyType
from typing import Literal

from pydantic import Field

from commission.description.checking import validate
from commission.description.model import AssumptionOverride, Part, System
from commission.description.positions import DescriptionError, KeyPath, Positions
from commission.description.reading import read_yaml
from commission.errors import Problem, nearest
from commission.quantities import NOMENCLATURE, Kind, QuantityError, Reference, parse, parse_pressure

LIBRARY = "assumptions.yaml"
Mark = Literal["published", "standard", "definition", "common practice, no source", "from memory"]
_ASPECTS = ("duty", "heat_source", "heat_sink", "compressor", "drive", "expansion", "receiver", "defrost")


@dataclass(frozen=True, slots=True)
class Assumption:
    """A value that nobody stated. `value`, `low` and `high` are in the SI unit of `kind`.

    `moves` are keys of the nomenclature; `replaced_by` is the key of the description, or the measurement, that puts a
    fact in its place; `origin` is `library`, or the place in the description that overrides it (`plant.yaml:12`).
    """

    key: str
    title: str
    value: float
    low: float
    high: float
    kind: Kind
    source: str
    mark: str
    moves: tuple[str, ...]
    replaced_by: str
    origin: str

    @property
    def standard_uncertainty(self) -> float:
        """Standard uncertainty in SI, of a rectangular distribution from low to high (JCGM 100:2008, 4.3.7)."""
        return (self.high - self.low) / math.sqrt(12)


class Case(Part):
    """Other values of an entry for some kinds of system."""

    when: dict[str, str | tuple[str, ...]] = Field()
    value: str = Field()
    low: str = Field()
    high: str = Field()
    source: str | None = Field(None)
    mark: Mark | None = Field(None)


class Entry(Part):
    """One entry of the library; its form is explained at the top of the file."""

    title: str = Field()
    kind: Kind = Field()
    value: str = Field()
    low: str = Field()
    high: str = Field()
    source: str = Field()
    mark: Mark = Field()
    moves: tuple[str, ...] = Field(min_length=1)
    replaced_by: str = Field()
    when: dict[str, str | tuple[str, ...]] = Field(default_factory=dict)
    cases: tuple[Case, ...] = Field(())


@cache
def library() -> Mapping[str, Entry]:
    """The entries of the library by key, checked.

    Raises:
        DescriptionError: the library is at fault (a fault of the package, not of a user).
    """
    text = (files("commission.description") / LIBRARY).read_text(encoding="utf-8")
    read = read_yaml(text, LIBRARY)
    entries: dict[str, Entry] = {}
    problems: list[Problem] = list(read.problems)
    for key, data in read.data.items():
        entry = validate(Entry, data, read.positions, at=(key,))
        problems += _faults(entry, read.positions, (key,))
        entries[key] = entry
    if problems:
        raise DescriptionError(*problems)
    return MappingProxyType(entries)


def in_si(text: str, kind: Kind) -> float:
    """A value of the list in SI; a pressure is absolute, since the list knows no site.

    Raises:
        QuantityError: the text is not a quantity of this kind, or a gauge pressure.
    """
    if kind is not Kind.PRESSURE:
        return parse(text, kind)
    pressure = parse_pressure(text)
    if pressure.reference is Reference.GAUGE:
        raise QuantityError(Problem("an absolute pressure is wanted here", value=text, allowed="such as 90 bar a"))
    return pressure.pascal


def _faults(entry: Entry, positions: Positions, at: KeyPath) -> Iterator[Problem]:
    for number, key in enumerate(entry.moves):
        if key not in NOMENCLATURE:
            yield positions.problem(
                (*at, "moves", number), "not a key of the nomenclature", nearest=nearest(key, NOMENCLATURE)
            )
    for path, when in ((at, entry.when), *(((*at, "cases", n), c.when) for n, c in enumerate(entry.cases))):
        for aspect in set(when) - set(_ASPECTS):
            yield positions.problem((*path, "when", aspect), "not known here", allowed=", ".join(_ASPECTS), at_key=True)
    yield from range_problems(entry, entry.kind, positions, at)
    for n, case in enumerate(entry.cases):
        yield from range_problems(case, entry.kind, positions, (*at, "cases", n))


def range_problems(
    one: Entry | Case | AssumptionOverride, kind: Kind, positions: Positions, at: KeyPath
) -> Iterator[Problem]:
    """What is wrong with value, low and high: their units, or their order."""
    read: dict[str, float] = {}
    for name in ("value", "low", "high"):
        text = getattr(one, name)
        if text is None:
            continue
        try:
            read[name] = in_si(text, kind)
        except QuantityError as error:
            first = error.problems[0]
            yield positions.problem((*at, name), first.message, allowed=first.allowed, nearest=first.nearest)
    value = read.get("value")
    if value is not None and not read.get("low", value) <= value <= read.get("high", value):
        yield positions.problem((*at, "value"), "the value lies outside its own range")


def aspects(system: System) -> Mapping[str, str]:
    """What the `when` of an entry may ask of a system."""
    return {
        "duty": system.duty,
        "heat_source": system.heat_source.medium,
        "heat_sink": system.heat_sink.medium,
        "compressor": system.compressor.type or "not stated",
        "drive": system.compressor.drive,
        "expansion": system.expansion.device if system.expansion else "not stated",
        "receiver": "yes" if system.receiver else "no",
        "defrost": system.evaporator.defrost.method if system.evaporator.defrost else "none",
    }


def _applies(when: Mapping[str, str | tuple[str, ...]], of: Mapping[str, str]) -> bool:
    return all(of[k] == words if isinstance(words, str) else of[k] in words for k, words in when.items())


def assumptions_for(system: System, positions: Positions | None = None, at: KeyPath = ()) -> Mapping[str, Assumption]:
    """Every assumption that applies to `system`, by key, with the system's own values in place of the library's.

    `positions` and `at` (the key path of the system) give the origin of own values. Which of them are needed is for
    the physics to say: an assumption that a stated fact replaces is not used.
    """
    of = aspects(system)
    found: dict[str, Assumption] = {}
    for key, entry in library().items():
        if not _applies(entry.when, of):
            continue
        own = system.assumptions.get(key)
        if own is not None:
            place = positions.mark((*at, "assumptions", key)).key if positions else None
            found[key] = _own(key, entry, own, f"{place.file}:{place.line}" if place else "plant.yaml")
            continue
        one: Entry | Case = next((case for case in entry.cases if _applies(case.when, of)), entry)
        found[key] = Assumption(
            key, entry.title, in_si(one.value, entry.kind), in_si(one.low, entry.kind), in_si(one.high, entry.kind),
            entry.kind, one.source or entry.source, one.mark or entry.mark, entry.moves, entry.replaced_by, "library",
        )  # fmt: skip
    return MappingProxyType(found)


def _own(key: str, entry: Entry, own: AssumptionOverride, origin: str) -> Assumption:
    value = in_si(own.value, entry.kind)
    low = in_si(own.low, entry.kind) if own.low is not None else value
    high = in_si(own.high, entry.kind) if own.high is not None else value
    return Assumption(
        key, entry.title, value, low, high, entry.kind, own.source, "stated in the description", entry.moves,
        entry.replaced_by, origin,
    )  # fmt: skip
