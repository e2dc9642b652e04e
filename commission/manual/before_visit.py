"""Before the visit: can these instruments prove it? For the rated condition in the manual, for any day as one file."""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any

from commission.errors import NotCalculatedError
from commission.manual.book import Sheet
from commission.manual.gather import PlantData, SystemData
from commission.manual.sheet_pages import sheet_context
from commission.manual.showing import SHEET_KEYS, How, show_how, size_text
from commission.manual.system_pages import conditions_words
from commission.quantities import Display, Kind, limits_in_words

if TYPE_CHECKING:
    from commission.acceptance import Capability, GuaranteeCapability, ReadingCapability, TestSheet


@dataclass(frozen=True, slots=True)
class ProofRow:
    """One reading: what is expected, with which instrument, and the smallest deviation that would be seen."""

    label: str
    expected: str
    instrument: str
    detectable: str
    enough: str
    how: How


def before_the_visit(plant: PlantData, data: SystemData) -> Sheet:
    """What the instruments of the plant can prove, at the rated condition and over the weather."""
    context: dict[str, Any] = {"because": data.because, "day": None, "grids": (), "system_id": data.id}
    if data.model is not None:
        try:
            context |= _context(plant, data, None, None)
        except NotCalculatedError as error:
            context["because"] = error.problems[0].message
    return Sheet(data.page("before-the-visit"), "Before the visit", data.group, "before.html", context, data.kicker)


def for_the_day(
    plant: PlantData,
    data: SystemData,
    forecast: Mapping[str, float],
    sheet: TestSheet,
    *,
    frozen: str | None = None,
    on: dt.date | None = None,
) -> Sheet:
    """The page for a forecast condition (SI), with the targets of `sheet` as the grid for the pencil.

    `frozen` is the name of the sheet where it is frozen; `on` is the day of the visit, for the calibrations.

    Raises:
        InputError: a condition that this system does not have.
        NotCalculatedError: nothing can be expected at the forecast.
    """
    grid = sheet_context(plant, data, sheet, frozen)
    context = {
        **grid,
        **_context(plant, data, forecast, on),
        "day": on.isoformat() if on else None,
        "digest": sheet.digest if frozen else grid["description"],
    }
    title = "Before the visit" if on is None else f"Before the visit of {on.isoformat()}"
    page = data.page("before-the-visit-of-the-day")
    return Sheet(page, title, data.group, "before.html", context, data.kicker, listed=False, paper=True)


def _context(
    plant: PlantData, data: SystemData, forecast: Mapping[str, float] | None, on: dt.date | None
) -> dict[str, Any]:
    from commission.acceptance import capability

    assert data.model is not None
    found = capability(plant.loaded, data.model, forecast, on=on)
    order = {k: n for n, k in enumerate(SHEET_KEYS)}
    readings = sorted(found.readings, key=lambda r: order.get(r.key, len(order)))
    return {
        "because": None,
        "conditions": conditions_words(data, data.model.predict(forecast).conditions),
        "filled": [data.display.words(k) for k in found.filled] if forecast is not None else [],
        "rows": [_proof(r, data, data.display) for r in readings],
        "promises": [_promise(g, data.display) for g in found.guarantees],
        "not_read": _by_reason(found, data.display),
        "warnings": [_ahead(w) for w in found.warnings],
        "refusals": [(r.route, data.display.label(r.key), _ahead(r.reason)) for r in found.refusals],
        "assumptions_page": data.page("assumptions"),
        "weather": _over_weather(plant, data, forecast, on),
        "axis": data.grid.title if data.grid else "",
    }


def _ahead(text: str) -> str:
    """A sentence of the judgement, said of a visit that is still to come."""
    return text.replace(" was not read", " will not be read")


def _planned(how: How) -> How:
    """Workings for a visit to come: a condition is not yet a reading."""
    inputs = (replace(i, origin="condition of this page") if i.origin == "reading" else i for i in how.inputs)
    return replace(how, inputs=tuple(inputs))


def _proof(r: ReadingCapability, data: SystemData, display: Display) -> ProofRow:
    kind = display.kind(r.key)
    display = display.fitting(kind, r.expected.value)
    alone = size_text(display, kind, r.alone)
    less = "; what it shares with the expected value falls out of the deviation" if r.partly_cancels else ""
    return ProofRow(
        display.label(r.key),
        display.text(r.expected.value, kind),
        r.instrument or "from the readings above",
        size_text(display, kind, r.detectable),
        "" if r.good_enough else f"coarser than the calculation, ± {alone} by itself{less}",
        _planned(show_how(r.expected, display, data.assumptions)),
    )


def _promise(g: GuaranteeCapability, display: Display) -> dict[str, Any]:
    kind = display.kind(g.terms.quantity)
    measured = g.verdict.measured
    if measured is not None:
        display = display.fitting(kind, measured.value)
    spread = g.verdict.budget.expanded() if g.verdict.budget else None
    return {
        "label": display.label(g.terms.quantity),
        "decided": g.decided,
        "expected": display.text(measured.value, kind) if measured else None,
        "limit": _limit(g, display, kind),
        "expanded": f"{display.spread(spread, kind)} {display.spread_unit(kind)}".strip()
        if spread is not None
        else None,
        "route": g.verdict.route,
        "withheld": _ahead(g.verdict.withheld) if g.verdict.withheld else None,
        "what": g.verdict.what_would_decide,
    }


def _limit(g: GuaranteeCapability, display: Display, kind: Kind) -> str:
    d = g.decision
    if d is None:
        return ""
    return limits_in_words(d.limit_low, d.limit_high, lambda value: display.text(value, kind))


def _by_reason(found: Capability, display: Display) -> list[tuple[str, str]]:
    """What nobody will read, one line for each reason: the reason, and the quantities in one list."""
    reasons: dict[str, list[str]] = {}
    for key, why in found.not_read.items():
        reasons.setdefault(why, []).append(display.words(key))
    return [(why, ", ".join(labels)) for why, labels in reasons.items()]


def _over_weather(
    plant: PlantData, data: SystemData, forecast: Mapping[str, float] | None, on: dt.date | None
) -> list[tuple[str, list[tuple[str, bool]]]]:
    """For each temperature of the grid, whether each guarantee could be decided there; all else as on the day."""
    from commission.acceptance import capability

    if data.grid is None or data.model is None or not data.system.guarantee:
        return []
    rows = []
    for point in data.grid.points:
        if point.prediction is None:
            continue
        at = {**data.grid.fixed, **(forecast or {}), data.grid.key: point.temperature}
        try:
            found = capability(plant.loaded, data.model, at, on=on)
        except NotCalculatedError:
            continue
        head = data.display.text(point.temperature, Kind.TEMPERATURE, 0)
        rows.append((head, [(data.display.label(g.terms.quantity), g.decided) for g in found.guarantees]))
    return rows
