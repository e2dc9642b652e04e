"""The test sheet: what both sides sign before the test, as a draft and as it was frozen."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import product
from typing import TYPE_CHECKING, Any

from commission.errors import CommissionError
from commission.manual.book import Sheet, slug
from commission.manual.gather import PlantData, SystemData
from commission.manual.page_display import page_display
from commission.manual.showing import COVERAGE, SHEET_KEYS, band_text, unit_of
from commission.manual.system_pages import conditions_words
from commission.quantities import Display, Kind, bounds, limits_in_words

if TYPE_CHECKING:
    from commission.acceptance import Target, Terms, TestSheet
    from commission.description import System


@dataclass(frozen=True, slots=True)
class SheetLine:
    """One target over the last axis of a sheet."""

    label: str
    instruments: str
    cells: tuple[tuple[str, str], ...]


@dataclass(frozen=True, slots=True)
class SheetGrid:
    """The targets at fixed values of all axes but the last."""

    fixed: str
    axis: str
    heads: tuple[str, ...]
    promised: tuple[SheetLine, ...]
    expected: tuple[SheetLine, ...]


def sheet_grids(sheet: TestSheet, display: Display, system: System) -> tuple[SheetGrid, ...]:
    """A sheet as tables: columns along its last axis, one table for each combination of the others; a quantity that
    nobody can read of this system is not asked for."""
    from commission.acceptance.choosing import cannot_be_read
    from commission.acceptance.grid import points

    asked = [k for k in SHEET_KEYS if cannot_be_read(k, system) is None]
    *outer, last = sheet.axes
    kind = display.kind(last.key)
    heads = tuple(display.text(v, kind, 0) for v in last.values)
    grids = []
    for n, values in enumerate(product(*(a.values for a in outer))):
        fixed = ", ".join(f"{display.words(a.key)} {display.of(a.key, v)}" for a, v in zip(outer, values, strict=True))
        place = slice(n * len(last.values), (n + 1) * len(last.values))
        where = [{**sheet.conditions, **at} for at in points(sheet.axes)[place]]
        expected = [t for t in sheet.targets_for("expectation") if t.key in asked]
        expected.sort(key=lambda t: SHEET_KEYS.index(t.key))
        grids.append(
            SheetGrid(
                fixed,
                display.label(last.key),
                heads,
                tuple(_promised_line(t, place, display) for t in sheet.targets_for("guarantee")),
                tuple(_expected_line(t, place, where, display) for t in expected),
            )
        )
    return tuple(grids)


def _head(target: Target, display: Display) -> str:
    kind = display.kind(target.key)
    unit = unit_of(display, kind)
    return f"{display.label(target.key)}, {unit}" if unit else display.label(target.key)


def _expected_line(target: Target, place: slice, where: Sequence[Mapping[str, float]], display: Display) -> SheetLine:
    kind = display.kind(target.key)
    cells = tuple(
        (display.number(v, kind), band_text(display, kind, bounds(target.key, at).around(v, COVERAGE * u)))
        for v, u, at in zip(target.values[place], target.uncertainties[place], where, strict=True)
    )
    return SheetLine(_head(target, display), ", ".join(target.instruments), cells)


def _promised_line(target: Target, place: slice, display: Display) -> SheetLine:
    kind = display.kind(target.key)
    cells = []
    for value in target.values[place]:
        low, high = target.terms.limits(value) if target.terms else (None, None)
        limit = limits_in_words(low, high, lambda end: display.number(end, kind))
        cells.append((display.number(value, kind), limit))
    return SheetLine(_head(target, display), ", ".join(target.instruments), tuple(cells))


def _terms(sheet: TestSheet, display: Display) -> list[dict[str, Any]]:
    found = []
    for t in sheet.targets_for("guarantee"):
        if t.terms is None:
            continue
        kind = display.kind(t.key)
        at = ", ".join(f"{display.words(k)} {display.of(k, v)}" for k, v in t.terms.at.items())
        shares = [
            f"{display.text(v, Kind.RATIO, 1)} {w}"
            for v, w in ((t.terms.below, "below"), (t.terms.above, "above"))
            if v
        ]
        facts = [
            ("Promised", f"{display.text(t.terms.value, kind)} at {at}"),
            ("Tolerance", ", ".join(shares) or "none stated"),
            ("Decision rule", f"{t.terms.rule} acceptance{_agreed(t.terms, display)}"),
            ("Carried to the day by", t.terms.carried_by),
            ("Measured by", t.terms.route or "the best route that can be used"),
            ("Clause", t.terms.source or "not stated"),
        ]
        found.append({"label": display.label(t.key), "facts": [{"label": a, "text": b} for a, b in facts]})
    return found


def _agreed(terms: Terms, display: Display) -> str:
    """What the simple rule asks of the test itself: only what the contract states."""
    if terms.rule != "simple":
        return ""
    if terms.largest is None:
        return ": the measured value decides, whatever its uncertainty"
    largest = display.text(terms.largest, Kind.RATIO, 1)
    return f": the measured value decides, where its uncertainty (95 %) is at most {largest} of the promised value"


def sheet_context(plant: PlantData, data: SystemData, sheet: TestSheet, frozen: str | None) -> dict[str, Any]:
    """What the template shows of a sheet; `frozen` is its name where it is frozen."""
    display = page_display(plant.loaded, data.id, sheet.barometric_pressure)
    return {
        "because": None,
        "frozen": frozen,
        "title": sheet.title,
        "prepared_for": sheet.prepared_for,
        "digest": sheet.digest,
        "description": sheet.description_digest,
        "versions": list(sheet.versions.items()),
        "held": conditions_words(data, sheet.conditions),
        "terms": _terms(sheet, display),
        "grids": sheet_grids(sheet, display, data.system),
        "instruments": [(name, list(words.items())) for name, words in sheet.instruments.items()],
        "plant_name": plant.name,
        "system_name": data.name,
        "coverage": f"{COVERAGE:g}",
    }


def test_sheets(plant: PlantData, data: SystemData) -> tuple[Sheet, ...]:
    """The frozen sheets of a system, and a draft from the description as it stands."""
    from commission.records import digest_of_file

    pages = []
    folder = plant.loaded.folder / "records" / "sheets"
    frozen = {n: s for n, s in plant.sheets.items() if isinstance(s, str) or s.system == data.id}
    links = []
    for name, found in frozen.items():
        page = data.page(f"test-sheet-{slug(name)}")
        if isinstance(found, str):
            links.append({"name": name, "page": None, "because": found})
            continue
        links.append({"name": name, "page": page, "because": None})
        context = sheet_context(plant, data, found, name) | {
            "sheets": [],
            "file_digest": digest_of_file(folder / f"{name}.yaml"),
        }
        title = found.title or f"Test sheet {name}"
        pages.append(Sheet(page, title, data.group, "test_sheet.html", context, data.kicker, listed=False, paper=True))
    context = {
        "because": data.because or "the weather range of this system is not known",
        "sheets": links,
        "frozen": None,
        "file_digest": None,
    }
    if data.model is not None and data.grid is not None:
        try:
            context |= sheet_context(plant, data, _draft(plant, data), None)
        except CommissionError as error:
            context["because"] = error.problems[0].message
    first = Sheet(
        data.page("test-sheet"), "Test sheet", data.group, "test_sheet.html", context, data.kicker, paper=True
    )
    return first, *pages


def _draft(plant: PlantData, data: SystemData) -> TestSheet:
    from commission.acceptance import make_sheet

    assert data.model is not None
    assert data.grid is not None
    good = [p.temperature for p in data.grid.points if p.prediction is not None]
    return make_sheet(plant.loaded, data.model, {data.grid.key: good}, title=f"{data.name}: draft")
