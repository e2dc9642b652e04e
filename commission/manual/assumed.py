"""The assumption list of a system: what each one moves, and which is most worth replacing by a fact."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from commission.description import Assumption
from commission.manual.gather import SystemData, far_point
from commission.manual.showing import spread_text
from commission.quantities import Display, Kind

_NARROW = 0.2
"""Range of a share below which whole per cents would hide what moved."""


@dataclass(frozen=True, slots=True)
class ShownAssumption:
    """One assumption in words: the value used, what moved it off the listed one (empty where nothing did), range,
    source, and its largest effects."""

    key: str
    title: str
    value: str
    moved: str
    range: str
    source: str
    mark: str
    origin: str
    replaced_by: str
    effects: tuple[str, ...]
    share: float | None


def _effects(changes: Mapping[str, float], values: Mapping[str, float], display: Display) -> tuple[str, ...]:
    """The largest relative effects, in words, at most four."""
    from commission.prediction.worth import LEADING

    sized = []
    for key, change in changes.items():
        if key not in LEADING or change == 0:
            continue
        kind = display.kind(key)
        text = spread_text(display, kind, change)
        scale = 10.0 if "temperature" in kind.value else abs(values.get(key, 1.0)) * 0.1
        sized.append((abs(change) / scale if scale else 0.0, f"{display.words(key)} {text}"))
    sized.sort(key=lambda item: -item[0])
    return tuple(text for size, text in sized[:4] if size > 0.002)


def shown_assumptions(data: SystemData, display: Display) -> tuple[ShownAssumption, ...]:
    """The assumptions in use, the one most worth replacing first; their effects are those at the far point."""
    from commission.prediction.worth import shares

    point = far_point(data.grid, data.rated) if data.rated is not None else None
    share = shares(data.rated.parts) if data.rated is not None else {}
    values = {k: e.value for k, e in point.expected.items()} if point is not None else {}
    rows = [_row(data, a, share.get(a.key), values, display) for a in data.assumptions.values()]
    return tuple(sorted(rows, key=lambda r: -(r.share or 0.0)))


def _digits(a: Assumption) -> int | None:
    """Digits behind the point that tell the ends of a narrow range apart; None for the usual ones."""
    return 1 if a.kind is Kind.RATIO and a.high - a.low < _NARROW else None


def _moved(a: Assumption, used: float, display: Display) -> str:
    """Why the value used is not the listed one, or nothing."""
    digits = _digits(a)
    listed = display.text(a.value, a.kind, digits)
    if display.text(used, a.kind, digits) == listed:
        return ""
    where = "the list" if a.origin == "library" else "the description"
    within = "within its range" if a.low <= used <= a.high else "beyond its range"
    return f"{where} says {listed}: moved {within} to meet the rated points best"


def _row(
    data: SystemData, a: Assumption, share: float | None, values: Mapping[str, float], display: Display
) -> ShownAssumption:
    from commission.prediction import value_used

    digits = _digits(a)
    known = a.low == a.high
    used = value_used(data.model, a) if data.model is not None else a.value
    return ShownAssumption(
        key=a.key,
        title=a.title,
        value=display.text(used, a.kind, digits),
        moved=_moved(a, used, display),
        range="taken as exact" if known
        else display.between(a.low, a.high, a.kind, digits),
        source=a.source,
        mark=a.mark,
        origin=a.origin,
        replaced_by=a.replaced_by,
        effects=_effects(data.effects.get(a.key, {}), values, display),
        share=share,
    )  # fmt: skip
