"""One charge limit of one document, with its inputs shown, or the reason why it does not apply."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from commission.quantities import Explained, Input, Kind
from commission.safety.facts import Fact, fact, weaker
from commission.safety.substance import Known, Substance


@dataclass(frozen=True, slots=True)
class Situation:
    """What a charge limit depends on. `access` a, b, c and `location` I to IV as in EN 378-1 (ISO 5149-1 alike)."""

    substance: Substance
    access: Literal["a", "b", "c"]
    access_stated: bool
    location: Literal["I", "II", "III", "IV"]
    below_ground: bool
    comfort: bool
    commercial: bool
    sealed: bool
    mounting: Literal["floor", "window", "wall", "ceiling"] | None
    area: float | None
    volume: float | None
    inputs: tuple[Input, ...] = ()

    @property
    def release_height(self) -> Fact:
        """Height at which a leak enters the room; a unit whose mounting is not stated counts as on the floor."""
        return fact(f"release_height_{self.mounting or 'floor'}")


@dataclass(frozen=True, slots=True)
class ChargeLimit:
    """`value` in kg, or None with the `reason`. `rule` says in words what was applied."""

    document: str
    edition: str
    rule: str
    mark: str
    value: Explained | None
    reason: str | None = None


def known_input(name: str, known: Known, kind: Kind = Kind.DENSITY) -> Input:
    """A figure of the register as an input."""
    return Input(name, known.value, kind, f"register: {known.source} ({known.mark})")


def fact_as_input(rule: Fact) -> Input:
    """A figure of a document as an input."""
    return Input(rule.says, rule.value, rule.kind, f"{rule.source} ({rule.mark})")


def limit(
    document: str,
    edition: str,
    rule: str,
    marks: tuple[str, ...],
    kilograms: float,
    method: str,
    inputs: tuple[Input, ...],
) -> ChargeLimit:
    """A limit in kg."""
    explained = Explained("room_charge_limit", kilograms, None, method, inputs)
    return ChargeLimit(document, edition, rule, weaker(*marks), explained)


def not_applicable(document: str, edition: str, rule: str, mark: str, reason: str) -> ChargeLimit:
    """No limit by this document, and why."""
    return ChargeLimit(document, edition, rule, mark, None, reason)
