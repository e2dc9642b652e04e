"""The assumption list of a system: what each one moves, and which is most worth replacing by a fact."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from commission.description import Assumption
from commission.manual.gather import SystemData, far_point
from commission.manual.showing import label_of, spread_text
from commission.quantities import NOMENCLATURE, Display


@dataclass(frozen=True, slots=True)
class ShownAssumption:
    """One assumption in words: value, range, source, and its largest effects."""

    key: str
    title: str
    value: str
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
        kind = NOMENCLATURE[key].kind
        text = spread_text(display, kind, change)
        scale = 10.0 if "temperature" in kind.value else abs(values.get(key, 1.0)) * 0.1
        sized.append((abs(change) / scale if scale else 0.0, f"{label_of(key).lower()} {text}"))
    sized.sort(key=lambda item: -item[0])
    return tuple(text for size, text in sized[:4] if size > 0.002)


def shown_assumptions(data: SystemData, display: Display) -> tuple[ShownAssumption, ...]:
    """The assumptions in use, the one most worth replacing first; their effects are those at the far point."""
    from commission.prediction.worth import shares

    point = far_point(data.grid, data.rated) if data.rated is not None else None
    share = shares(data.rated.parts) if data.rated is not None else {}
    values = {k: e.value for k, e in point.expected.items()} if point is not None else {}
    rows = [_row(a, share.get(a.key), data.effects.get(a.key, {}), values, display) for a in data.assumptions.values()]
    return tuple(sorted(rows, key=lambda r: -(r.share or 0.0)))


def _row(
    a: Assumption, share: float | None, changes: Mapping[str, float], values: Mapping[str, float], display: Display
) -> ShownAssumption:
    unit = display.unit_and_digits(a.kind)[0]
    digits = 3 if not unit else None
    known = a.low == a.high
    return ShownAssumption(
        key=a.key,
        title=a.title,
        value=display.text(a.value, a.kind, digits),
        range="taken as exact" if known
        else f"{display.number(a.low, a.kind, digits)} to {display.text(a.high, a.kind, digits)}",
        source=a.source,
        mark=a.mark,
        origin=a.origin,
        replaced_by=a.replaced_by,
        effects=_effects(changes, values, display),
        share=share,
    )  # fmt: skip
