"""What the supplier states and what the contract promises, as tables and lists of text."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from pydantic import BaseModel

from commission.description import Conditions, LoadedPlant
from commission.manual.facts import Walker, stated_number, words_of
from commission.quantities import Display, Kind

Lines = tuple[tuple[str, str], ...]
_COUNTS, _PLACE = "The power input counts", "Written in"


@dataclass(frozen=True, slots=True)
class StatedTable:
    """Rated points side by side: what they have in common as lines, and a column for each thing that differs."""

    title: str
    common: Lines
    heads: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]


@dataclass(frozen=True, slots=True)
class Promise:
    """One guarantee: at which condition, and its lines."""

    at: str
    lines: Lines


def rated_tables(loaded: LoadedPlant, identity: str, display: Display) -> tuple[StatedTable, ...]:
    """What the supplier states, of the whole system and of the condensing unit."""
    system = loaded.system(identity)
    walker = Walker(loaded, display, identity)
    found = [_table("", [tuple(_point(walker, p, ("rated_points", n))) for n, p in enumerate(system.rated_points)])]
    unit = system.condensing_unit
    if unit is not None:
        counts = ((_COUNTS, ", ".join(unit.includes)),) if unit.includes else ()
        points = [
            (*counts, *_point(walker, p, ("condensing_unit", "rated_points", n)))
            for n, p in enumerate(unit.rated_points)
        ]
        found.append(_table("The condensing unit alone", points))
    return tuple(table for table in found if table.common or table.rows)


def _point(walker: Walker, point: BaseModel, path: tuple[str | int, ...]) -> Iterator[tuple[str, str]]:
    """Everything that one rated point states."""
    for key, info in type(point).model_fields.items():
        value = getattr(point, key)
        if value is None or key == "source":
            continue
        yield (_COUNTS if key == "includes" else words_of(key, walker.display)), walker.text(value, info, key)
    yield _PLACE, str(walker.loaded.where((*walker.base, *path))).rsplit(":", 1)[0]


def _table(title: str, points: list[Lines]) -> StatedTable:
    """A value that all points share is said once; a single point has no table at all."""
    labels = tuple(dict.fromkeys(label for point in points for label, _ in point))
    columns = {label: tuple(dict(point).get(label, "–") for point in points) for label in labels}
    common = tuple((label, texts[0]) for label, texts in columns.items() if len(set(texts)) == 1)
    differing = {label: texts for label, texts in columns.items() if len(set(texts)) > 1}
    return StatedTable(title, common, tuple(differing), tuple(zip(*differing.values(), strict=True)))


def promises(loaded: LoadedPlant, identity: str, display: Display) -> tuple[Promise, ...]:
    """What the contract promises."""
    return tuple(_promise(loaded, identity, display, n) for n in range(len(loaded.system(identity).guarantee)))


def _promise(loaded: LoadedPlant, identity: str, display: Display, n: int) -> Promise:
    g = loaded.system(identity).guarantee[n]
    tolerance = ", ".join(
        f"{stated_number(display, v, Kind.RATIO)} {word}"
        for v, word in ((g.tolerance.below, "below"), (g.tolerance.above, "above"))
        if v is not None
    )
    lines = [
        (display.label(g.quantity), display.text(g.value_si, display.kind(g.quantity))),
        ("Tolerance", tolerance or "none stated"),
        ("Decision", f"{g.decision} acceptance"),
        ("Carried to the day by", g.carried_by),
    ]
    if g.route:
        lines.append(("Measured by", g.route))
    if g.source:
        lines.append(("Clause", g.source))
    lines.append((_PLACE, str(loaded.where(("systems", identity, "guarantee", n))).rsplit(":", 1)[0]))
    return Promise(conditions_text(g.at, display), tuple(lines))


def conditions_text(conditions: BaseModel, display: Display) -> str:
    """The stated conditions in one line."""
    keys = [k for k in Conditions.model_fields if getattr(conditions, k, None) is not None]
    return ", ".join(f"{display.words(k)} {display.of(k, getattr(conditions, k))}" for k in keys)
