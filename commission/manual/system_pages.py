"""The pages of one system that description and prediction fill: what it is, how it should run, what is assumed."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from itertools import pairwise
from typing import Any

from commission.manual.assumed import ShownAssumption, shown_assumptions
from commission.manual.book import Sheet
from commission.manual.documents import DocumentLink
from commission.manual.facts import stated_number, system_facts
from commission.manual.gather import PlantData, SystemData
from commission.manual.grid import Grid, GridPoint
from commission.manual.heating_up import heating_ups
from commission.manual.plots import Figure
from commission.manual.showing import (
    COVERAGE,
    GRID_KEYS,
    How,
    Row,
    band_text,
    grouped,
    not_calculated,
    show,
    show_how,
    unit_of,
)
from commission.manual.stated import promises, rated_tables
from commission.manual.upkeep_pages import NextDuty
from commission.quantities import NOMENCLATURE, Display, Explained, Kind


def what_it_is(
    plant: PlantData,
    data: SystemData,
    documents: tuple[DocumentLink, ...],
    coming: tuple[NextDuty, ...],
    filed: bool,
    upkeep: str,
) -> Sheet:
    """What comes due next (all of it on page `upkeep`), nameplate, components, boundary, settings and documents."""
    return Sheet(
        data.page("what-it-is"),
        "What it is",
        data.group,
        "what.html",
        {
            "coming": coming,
            "filed": filed,
            "upkeep": upkeep,
            "groups": system_facts(plant.loaded, data.id, data.display),
            "rated": rated_tables(plant.loaded, data.id, data.display),
            "promised": promises(plant.loaded, data.id, data.display),
            "documents": documents,
            "assumptions_page": data.page("assumptions"),
        },
        kicker=data.kicker,
    )


_PARTS = (
    ("inlet_temperature", "{} in"), ("outlet_temperature", "{} out"), ("wet_bulb", "{} wet bulb"),
    ("relative_humidity", "{} relative humidity"), ("flow", "{}"),
)  # fmt: skip


def conditions_words(data: SystemData, conditions: Mapping[str, float]) -> tuple[tuple[str, str], ...]:
    """Conditions by medium: what, and its values in one line."""
    display = data.display
    lines = []
    for side in ("heat_source", "heat_sink"):
        values = [
            form.format(stated_number(display, conditions[f"{side}_{part}"], display.kind(f"{side}_{part}")))
            for part, form in _PARTS
            if f"{side}_{part}" in conditions
        ]
        if values:
            lines.append((display.medium(side), ", ".join(values)))
    others = {k: v for k, v in conditions.items() if not k.startswith(("heat_source", "heat_sink"))}
    lines += [(display.label(k), display.of(k, v)) for k, v in others.items() if k in NOMENCLATURE]
    return tuple(lines)


def conditions_line(data: SystemData, conditions: Mapping[str, float]) -> str:
    """The same in one sentence part."""
    return "; ".join(f"{what[:1].lower()}{what[1:]} {values}" for what, values in conditions_words(data, conditions))


def grid_conditions(data: SystemData, grid: Grid) -> str:
    """What stays while the grid's condition varies, and what the weather curve sets by it."""
    led = "; ".join(f"{data.display.words(k)} as the weather curve sets it" for k in grid.led)
    return "; ".join(text for text in (conditions_line(data, grid.fixed), led, _slowed(data, grid)) if text)


def _slowed(data: SystemData, grid: Grid) -> str:
    """Where the head-pressure control leaves least of the stated flow, and how much; empty where it never acts."""
    from commission.prediction.operation import FULL, flow_left

    shares = [(p.prediction.sink_flow_share, p.temperature) for p in grid.points if p.prediction is not None]
    share, at = min(shares, default=(1.0, 0.0))
    control = data.system.controls.head_pressure
    if control is None or share >= FULL:
        return ""
    flow, outdoors = data.display.words("heat_sink_flow"), data.display.text(at, Kind.TEMPERATURE, 0)
    return f"the {flow} {flow_left(control.by, share)} at {outdoors}"


def expected_rows(data: SystemData, display: Display) -> tuple[tuple[str, tuple[Row, ...]], ...]:
    """All expected values at the rated condition, grouped; what is not calculated stands in its place too."""
    assert data.rated is not None
    p = data.rated
    keys = tuple(p.expected) + tuple(k for k in p.not_calculated if k not in p.expected)
    return tuple(
        (
            title,
            tuple(
                show(k, p.expected[k], display, data.assumptions, p.parts.get(k))
                if k in p.expected
                else not_calculated(k, p.not_calculated[k], display)
                for k in members
            ),
        )
        for title, members in grouped(keys)
    )


@dataclass(frozen=True, slots=True)
class Cell:
    """One expected value of the grid with its band, numbers alone."""

    value: str
    band: str


@dataclass(frozen=True, slots=True)
class RowInputs:
    """The inputs of one quantity at each temperature."""

    names: tuple[str, ...]
    rows: tuple[tuple[str, tuple[str, ...]], ...]


@dataclass(frozen=True, slots=True)
class GridRow:
    """One quantity of the grid: its name and unit, a cell for each temperature, and its workings."""

    key: str
    label: str
    unit: str
    cells: tuple[Cell, ...]
    definition: str
    how: How
    inputs: RowInputs | None


@dataclass(frozen=True, slots=True)
class GridTable:
    """The grid as a table of text: temperatures across, quantities down.

    `notes` say why a column is empty, `gaps` why a single cell is: quantity, temperatures, reason.
    """

    title: str
    unit: str
    heads: tuple[str, ...]
    rows: tuple[GridRow, ...]
    notes: tuple[tuple[str, str], ...]
    gaps: tuple[tuple[str, str, str], ...] = ()


def grid_table(data: SystemData, grid: Grid, display: Display) -> GridTable | None:
    """The printed grid, or None where no point could be calculated."""
    good = [p for p in grid.points if p.prediction is not None]
    if not good:
        return None
    keys = [k for k in GRID_KEYS if any(p.prediction and k in p.prediction.expected for p in good)]
    return GridTable(
        grid.title,
        unit_of(display, Kind.TEMPERATURE),
        tuple(_head(p, display) for p in grid.shown),
        tuple(_grid_row(data, k, grid.shown, good, display) for k in keys),
        reasons_in_words(grid, display),
        _gaps(grid, keys, display),
    )


def _gaps(grid: Grid, keys: list[str], display: Display) -> tuple[tuple[str, str, str], ...]:
    """Why a quantity has no value at some temperatures of the table, where it has one at others."""
    found: dict[tuple[str, str], list[str]] = {}
    for point in grid.shown:
        reasons = point.prediction.not_calculated if point.prediction else {}
        for key in keys:
            if key in reasons:
                found.setdefault((key, reasons[key]), []).append(_head(point, display))
    unit = unit_of(display, Kind.TEMPERATURE)
    return tuple((display.label(k), f"{', '.join(heads)} {unit}", why) for (k, why), heads in found.items())


def reasons_in_words(grid: Grid, display: Display) -> tuple[tuple[str, str], ...]:
    """At which temperatures nothing could be calculated, and why."""
    unit = unit_of(display, Kind.TEMPERATURE)
    return tuple(
        (", ".join(display.number(t, Kind.TEMPERATURE, 0) for t in temperatures) + f" {unit}", because)
        for because, temperatures in grid.reasons.items()
    )


def _head(point: GridPoint, display: Display) -> str:
    return display.number(point.temperature, Kind.TEMPERATURE, 0)


def grid_cell(point: GridPoint, key: str, display: Display) -> Cell:
    """One cell; a dash where this value is not calculated at this temperature."""
    explained = point.prediction.expected.get(key) if point.prediction else None
    if explained is None:
        return Cell("–", "")
    return cell(explained, display.kind(key), display)


def cell(explained: Explained, kind: Kind, display: Display) -> Cell:
    """The cell of one value of a kind."""
    return Cell(display.number(explained.value, kind), band_text(display, kind, explained.band(COVERAGE)))


def _grid_row(
    data: SystemData, key: str, points: tuple[GridPoint, ...], good: list[GridPoint], display: Display
) -> GridRow:
    first = next(p.prediction.expected[key] for p in good if p.prediction and key in p.prediction.expected)
    how = show_how(first, display, data.assumptions)
    quantity = display.quantities[key]
    return GridRow(
        key,
        quantity.label,
        unit_of(display, quantity.kind),
        tuple(grid_cell(p, key, display) for p in points),
        quantity.definition,
        How(how.method, how.name, how.formula, how.source, how.mark, (), how.assumptions, (), None),
        _row_inputs(data, key, good, display),
    )


def _row_inputs(data: SystemData, key: str, good: list[GridPoint], display: Display) -> RowInputs | None:
    shown = [
        (_head(p, display), show_how(p.prediction.expected[key], display, data.assumptions).inputs)
        for p in good
        if p.prediction and key in p.prediction.expected
    ]
    names = tuple(dict.fromkeys(i.name for _, inputs in shown for i in inputs))
    if not names:
        return None
    rows = tuple((head, tuple({i.name: i.value for i in inputs}.get(n, "–") for n in names)) for head, inputs in shown)
    return RowInputs(names, rows)


def how_it_should_run(plant: PlantData, data: SystemData, figures: tuple[Figure, ...], ph: Figure | None) -> Sheet:
    """Expected readings at the rated condition and over the weather, charts and cycle."""
    display = data.display
    context: dict[str, Any] = {"because": data.because}
    if data.rated is not None:
        grid = data.grid
        context |= {
            "conditions": conditions_words(data, data.rated.conditions),
            "warnings": data.rated.warnings,
            "settings": [words for one in data.rated.held_off if (words := one.words(display))],
            "groups": expected_rows(data, display),
            "charts": figures,
            "grid_note": _grid_note(data, grid) if grid else "",
            "table": grid_table(data, grid, display) if grid else None,
            "heating_up": heating_ups(plant, data),
            "ph": _ph_context(data, ph, display) if ph else None,
            "assumptions_page": data.page("assumptions"),
            "day_sheet": data.page("day-sheet"),
        }
    return Sheet(data.page("how-it-should-run"), "How it should run", data.group, "expected.html", context, data.kicker)


def _grid_note(data: SystemData, grid: Grid) -> str:
    display = data.display
    fixed = grid_conditions(data, grid)
    text = f"Everything else is as rated: {fixed}. " if fixed else ""
    regimes = [(p.temperature, p.prediction.regime) for p in grid.points if p.prediction]
    changes = [(t, r) for (_, before), (t, r) in pairwise(regimes) if r != before]
    if changes:
        text += f"When it is cold: {regimes[0][1]}"
        text += "".join(f"; from about {display.text(t, Kind.TEMPERATURE, 0)}: {r}" for t, r in changes) + ". "
    elif regimes:
        text += f"Throughout: {regimes[0][1]}. "
    return text + "The tinted bands are plus and minus two standard uncertainties of the calculation."


def _ph_context(data: SystemData, ph: Figure, display: Display) -> dict[str, Any]:
    assert data.rated is not None
    states = [
        {
            "label": s.label,
            "name": s.name,
            "p": f"{display.absolute(s.p):.{display.unit_and_digits(Kind.PRESSURE)[1]}f}",
            "t": display.number(s.T, Kind.TEMPERATURE),
            "h": display.number(s.h, Kind.SPECIFIC_ENTHALPY),
        }
        for s in data.rated.states
    ]
    return {
        "figure": ph,
        "states": states,
        "pressure_unit": display.absolute_unit,
        "temperature_unit": unit_of(display, Kind.TEMPERATURE),
        "enthalpy_unit": unit_of(display, Kind.SPECIFIC_ENTHALPY),
    }


def assumptions(data: SystemData) -> Sheet:
    """What is assumed, with its effect, and the one most worth replacing."""
    shown = shown_assumptions(data, data.display)
    worst = shown[0] if shown and (shown[0].share or 0) > 0 else None
    note = ""
    if data.effects:
        note = "“Moves” is the change of each expected reading when the assumption is one standard uncertainty higher, "
        note += "at the end of the weather range furthest from the rated condition."
    return Sheet(
        data.page("assumptions"),
        "Assumptions",
        data.group,
        "assumptions.html",
        {
            "assumptions": [_percent(a) for a in shown],
            "worst": worst,
            "worst_why": _why(worst),
            "effect_note": note,
        },
        kicker=data.kicker,
    )


def _percent(a: ShownAssumption) -> Mapping[str, Any]:
    share = None if a.share is None else ("under 1 %" if a.share < 0.01 else f"{a.share:.0%}".replace("%", " %"))
    fields = ("key", "title", "value", "moved", "range", "source", "mark", "origin", "replaced_by", "effects")
    return {f: getattr(a, f) for f in fields} | {"share": share}


def _why(worst: ShownAssumption | None) -> str:
    if worst is None or worst.share is None:
        return ""
    share = f"{worst.share:.0%}".replace("%", " %")
    text = f"At the rated condition it makes about {share} of the uncertainty of the expected readings."
    moved = f" Far from it, one standard uncertainty of it moves {', '.join(worst.effects)}."
    return text + (moved if worst.effects else "")
