"""Values in words: texts with their expressions filled in, and what a reading must be, with unit and band."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.checklists.bands import AS_READ, as_read
from commission.checklists.evaluate import evaluate, parse_literal
from commission.checklists.language import Expression, Value
from commission.checklists.templates import Template
from commission.errors import NotCalculatedError
from commission.quantities import Display, Explained, Kind, parse

if TYPE_CHECKING:
    from commission.checklists.library import CheckedItem
    from commission.checklists.words import Facts

VACUUM = 5000.0
"""Below this, in Pa absolute, a pressure is a vacuum and shown so: a gauge pressure would say nothing."""
MICRON = 0.133322387415
STATED_NOWHERE = "not stated"
COVERAGE = 2.0
"""Coverage factor of the band of an expected value, about 95 %."""
BANDS = ("band", AS_READ)
"""Margins that are the band of an expected value: of the calculation alone, or with rated figures and instrument."""


@dataclass(frozen=True, slots=True)
class Target:
    """What a reading must be.

    `text` is ready to show. `value`, `low` and `high` are in SI (pressures absolute), None where there is none; `kind`
    is their kind. `missing` says why a value is not calculated. `explained` are the numbers it rests on.
    """

    text: str
    value: float | None = None
    low: float | None = None
    high: float | None = None
    kind: Kind | None = None
    missing: str | None = None
    explained: tuple[Explained, ...] = ()


def show(value: float, kind: Kind, display: Display) -> str:
    """A value as a person reads it, a vacuum in Pa and micron."""
    if kind is Kind.PRESSURE and value < VACUUM:
        return f"{value:.0f} Pa absolute ({round(value / MICRON, -1):.0f} micron)"
    if kind is Kind.NUMBER:
        return f"{value:g}"
    return display.text(value, kind)


def fill(template: Template, facts: Facts) -> tuple[str, tuple[Explained, ...]]:
    """The text with its values, and the calculated numbers in it; what is not known says so and leaves room."""
    parts: list[str] = []
    explained: list[Explained] = []
    for part in template.parts:
        if isinstance(part, str):
            parts.append(part)
            continue
        if isinstance(part, Template):
            if stands(part, facts):
                inner, more = fill(part, facts)
                parts.append(inner)
                explained += more
            continue
        value = evaluate(part, facts.lookup, facts.loaded.barometric_pressure)
        explained += value.explained
        parts.append(_word(value, facts.display))
    return "".join(parts), tuple(explained)


def stands(template: Template, facts: Facts) -> bool:
    """Whether a part that can be left out stands: its condition is yes, and all its values are known."""
    barometric_pressure = facts.loaded.barometric_pressure
    when = template.when
    if when is not None and evaluate(when, facts.lookup, barometric_pressure).content is not True:
        return False
    return all(
        evaluate(part, facts.lookup, barometric_pressure).known
        for part in template.parts
        if isinstance(part, Expression)
    )


def _word(value: Value, display: Display) -> str:
    if not value.known:
        return f"______ ({value.missing})"
    if isinstance(value.content, bool):
        return "yes" if value.content else "no"
    if isinstance(value.content, float) and isinstance(value.type, Kind):
        return show(value.content, value.type, display)
    return str(value.content)


def target(item: CheckedItem, says: str | None, facts: Facts) -> Target | None:
    """What the item's reading must be; None where the item asks for none."""
    if item.entry.must_read is None:
        return None
    kind = _kind(item, facts.display)
    if kind is None:
        return Target(says) if says else None
    worked = {key: _work(bound, kind, facts) for key, bound in item.must_read.items() if key != "within"}
    within = item.must_read.get("within")
    if "value" in worked and within is not None:
        # a bound beside a value with a margin only caps the margin: one that is not known takes nothing away
        worked = {key: found for key, found in worked.items() if key == "value" or found.known}
    explained = tuple(e for value in worked.values() for e in value.explained)
    missing = next((v.missing for v in worked.values() if not v.known), None)
    if missing is not None:
        text = missing if missing.startswith(STATED_NOWHERE) else f"not calculated: {missing}"
        return Target(f"{text}; {says}" if says else text, kind=kind, missing=missing, explained=explained)
    numbers = {key: float(v.content) for key, v in worked.items() if isinstance(v.content, float)}
    if within in BANDS:
        numbers = as_far_as_can_be(numbers, explained)
    margin = _margin(numbers.get("value"), within if isinstance(within, str) else None, kind, explained)
    held = None
    if within == AS_READ and margin is not None and item.entry.quantity is not None:
        margin, held = as_read(facts, item.entry.quantity, numbers["value"], margin / COVERAGE)
    readable = _readable(item, numbers.get("value"), facts) if margin is not None and within not in BANDS else None
    finest = readable is not None and margin is not None and readable[1] > margin
    value, low, high = _range(numbers, readable[1] if finest and readable else margin)
    text = _range_text(value, low, high, kind, facts.display)
    if finest and readable:
        text += f" (no closer than {readable[0]} can read)"
    if held:
        text += f", {held}"
    if within in BANDS and low is not None and "expected." in _text_of(item):
        text += f", expected at {facts.lookup('words.condition').content}"
    shown = "; ".join(part for part in (text, says) if part)
    return Target(shown, value, low, high, kind, None, explained)


def _text_of(item: CheckedItem) -> str:
    bound = item.must_read.get("value")
    return bound.text if isinstance(bound, Expression) else ""


def _kind(item: CheckedItem, display: Display) -> Kind | None:
    """The kind of the reading: of its quantity, of an expression, or of the unit that is written."""
    if item.entry.quantity is not None:
        return display.kind(item.entry.quantity)
    for bound in item.must_read.values():
        if isinstance(bound, Expression) and isinstance(bound.type, Kind):
            return bound.type
    if item.entry.unit is not None and any(key in item.must_read for key in ("value", "at_least", "at_most")):
        from commission.checklists.library import kind_of_unit

        return kind_of_unit(item.entry.unit)
    return None


def _work(bound: Expression | str, kind: Kind, facts: Facts) -> Value:
    if isinstance(bound, Expression):
        return evaluate(bound, facts.lookup, facts.loaded.barometric_pressure)
    return Value(kind, parse_literal(bound, kind, facts.loaded.barometric_pressure))


def _margin(value: float | None, within: str | None, kind: Kind, explained: tuple[Explained, ...]) -> float | None:
    """The margin on both sides of a value in SI: stated, a share of it, or the band of the expected value."""
    if value is None or within is None:
        return None
    if within in BANDS:
        spread = next((e.uncertainty for e in explained if e.value == value and e.uncertainty is not None), None)
        return None if spread is None else COVERAGE * spread
    if within.strip().endswith("%") and kind is not Kind.RATIO:
        return abs(value) * parse(within, Kind.RATIO)
    return parse(within, _margin_kind(kind))


def _readable(item: CheckedItem, value: float | None, facts: Facts) -> tuple[str, float] | None:
    """The instrument that the system names for the quantity, and its expanded uncertainty (95 %) at this value."""
    from commission.acceptance import instrument_budget

    key = item.entry.quantity
    named = facts.system.measured_with.get(key or "")
    instrument = facts.loaded.plant.instruments.get(named or "")
    if key is None or named is None or instrument is None or value is None:
        return None
    try:
        budget = instrument_budget(instrument, key, value, facts.loaded.barometric_pressure)
    except NotCalculatedError:
        return None
    return named, budget.expanded()


def _range(numbers: dict[str, float], margin: float | None) -> tuple[float | None, float | None, float | None]:
    """Value, lower and upper bound in SI; a bound beside a value with a margin caps the margin."""
    value, low, high = numbers.get("value"), numbers.get("at_least"), numbers.get("at_most")
    if value is None or margin is None:
        return value, low, high
    first, last = value - margin, value + margin
    return value, first if low is None else max(first, low), last if high is None else min(last, high)


def as_far_as_can_be(numbers: dict[str, float], explained: tuple[Explained, ...]) -> dict[str, float]:
    """The numbers of a band, capped by what the expected value can be: no liquid leaves colder than its cooling."""
    value = numbers.get("value")
    least, most = next((e.bounds for e in explained if e.value == value), (None, None))
    found = dict(numbers)
    if value is not None and least is not None and value >= least:
        found["at_least"] = max(least, numbers.get("at_least", least))
    if value is not None and most is not None and value <= most:
        found["at_most"] = min(most, numbers.get("at_most", most))
    return found


def _margin_kind(kind: Kind) -> Kind:
    return {Kind.TEMPERATURE: Kind.TEMPERATURE_DIFFERENCE, Kind.PRESSURE: Kind.PRESSURE_DIFFERENCE}.get(kind, kind)


def _range_text(value: float | None, low: float | None, high: float | None, kind: Kind, display: Display) -> str:
    """Value and bounds in words; a band that does not show at the digits of the display is left out."""

    def shown(x: float) -> str:
        return show(x, kind, display)

    display = display.fitting(kind, *(x for x in (value, low, high) if x is not None))
    if low is not None and high is not None:
        first, last = shown(low), shown(high)
        unit = last[len(last.split(" ")[0]) :]
        span = f"{first.removesuffix(unit) if unit else first} to {last}"
        if value is None:
            return span
        return shown(value) if first == last else f"{shown(value)}, within {span}"
    if value is not None:
        return shown(value)
    if low is not None:
        return f"at least {shown(low)}"
    return f"at most {shown(high)}" if high is not None else ""
