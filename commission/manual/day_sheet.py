"""The day sheet for pencil: conditions, readings, and the expected band at each outdoor temperature."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from commission.errors import NotCalculatedError
from commission.manual.book import Sheet
from commission.manual.facts import stated_number
from commission.manual.gather import PlantData, SystemData
from commission.manual.grid import Grid, GridPoint
from commission.manual.live_plan import readings_of
from commission.manual.showing import cut_off, size_text, unit_of
from commission.manual.system_pages import Cell, cell, grid_cell, grid_conditions
from commission.manual.worked_out import EVAPORATOR_OUTLET, WORKED_OUT, evaporator_outlet, how
from commission.quantities import Display, Kind

if TYPE_CHECKING:
    from commission.prediction import Prediction

_MOST_COLUMNS = 7
"""More temperatures leave no room for a pencil beside them."""


@dataclass(frozen=True, slots=True)
class SheetRow:
    """One line: what, unit, how it is worked out, instrument, and a band for each column."""

    label: str
    unit: str
    how: str
    instrument: str
    cells: tuple[Cell, ...]


@dataclass(frozen=True, slots=True)
class SheetTable:
    """A table with at most as many columns as fit on paper."""

    heads: tuple[str, ...]
    read: tuple[SheetRow, ...]
    worked_out: tuple[SheetRow, ...]


def instrument_words(plant: PlantData, data: SystemData, key: str, value: float | None) -> str:
    """The instrument that reads a quantity, with its expanded uncertainty (95 %) where it can be stated."""
    from commission.acceptance import Reading, measure
    from commission.acceptance.choosing import choose_instrument

    loaded, instruments = plant.loaded, plant.loaded.plant.instruments
    named = data.system.measured_with.get(key, "")
    if value is None:
        return named
    name = choose_instrument(key, value, loaded, data.system)
    if name is None:
        return named
    try:
        budget = measure(Reading(key, value, name), instruments, loaded.barometric_pressure).budget
    except NotCalculatedError:
        return name
    return f"{name} ± {size_text(data.display, data.display.kind(key), budget.expanded())}"


def _used(plant: PlantData, data: SystemData, wanted: Mapping[str, float | None]) -> list[tuple[str, str, str]]:
    """The instruments that will read these quantities, with serial and end of calibration; all where none fits."""
    from commission.acceptance.choosing import choose_instrument

    instruments, measured = plant.loaded.plant.instruments, data.system.measured_with
    names = {
        measured.get(k) if v is None else choose_instrument(k, v, plant.loaded, data.system) for k, v in wanted.items()
    }
    chosen = {n: i for n, i in instruments.items() if n in names} or instruments
    return [
        (n, i.serial or "", i.calibrated_until.isoformat() if i.calibrated_until else "") for n, i in chosen.items()
    ]


def _values(data: SystemData) -> dict[str, float]:
    """Conditions and expected values at the rated condition, SI."""
    if data.rated is None:
        return {}
    return {**data.rated.conditions, **{k: e.value for k, e in data.rated.expected.items()}}


def asked(plant: PlantData, data: SystemData) -> tuple[tuple[str, ...], tuple[str, ...]]:
    """Conditions, and readings: all that the live sheet of the system asks for, whether it can be expected or not."""
    if data.model is None:
        conditions = ["heat_source_inlet_temperature", "heat_sink_inlet_temperature"]
    else:
        conditions = list(data.model.condition_axes)
    values = _values(data)
    readings = readings_of(plant.loaded, data.system, values, frozenset(conditions))
    of_media = [k for k in readings if k.startswith("heat_s") and values and k not in values]
    return (*conditions, *of_media), tuple(k for k in readings if k not in of_media)


def worked_out(data: SystemData, readings: tuple[str, ...]) -> tuple[str, ...]:
    """What is worked out from the readings of a system: nothing that is read itself, no pressures of a sealed unit."""
    from commission.acceptance.choosing import cannot_be_read

    keys = [k for k in WORKED_OUT if cannot_be_read(k, data.system) is None and k not in readings]
    if "gas_cooler_outlet_temperature" not in readings:
        keys = [k for k in keys if k != "gas_cooler_approach"]
    given = data.model.condition_axes if data.model is not None else {}
    settled = [f"heat_{s}_temperature_change" for s in ("source", "sink") if _both_ends(s) <= set(given)]
    return tuple(k for k in keys if k not in settled)


def _both_ends(side: str) -> set[str]:
    return {f"heat_{side}_{end}_temperature" for end in ("inlet", "outlet")}


def _read_rows(plant: PlantData, data: SystemData, points: tuple[GridPoint, ...]) -> tuple[SheetRow, ...]:
    display, values = data.display, _values(data)
    readings = asked(plant, data)[1]
    rows = [
        SheetRow(
            display.label(key),
            unit_of(display.asking(key), display.kind(key)),
            "",
            instrument_words(plant, data, key, values.get(key)),
            tuple(grid_cell(p, key, display.asking(key)) for p in points),
        )
        for key in readings
    ]
    if "superheat" in worked_out(data, readings):
        rows.append(_outlet_row(plant, data, points))
    return tuple(rows)


def _outlet_row(plant: PlantData, data: SystemData, points: tuple[GridPoint, ...]) -> SheetRow:
    """The pipe at the evaporator outlet, read with what reads the suction line."""
    display, found = data.display, [evaporator_outlet(p.prediction) if p.prediction else None for p in points]
    cells = tuple(Cell("–", "") if e is None else cell(e, Kind.TEMPERATURE, display) for e in found)
    probe = instrument_words(plant, data, "suction_temperature", _values(data).get("suction_temperature"))
    return SheetRow(EVAPORATOR_OUTLET, unit_of(display, Kind.TEMPERATURE), "", probe, cells)


def _cut(key: str, predictions: Sequence[Prediction], display: Display) -> str:
    """What a band that is shown only as far as it can be leaves out, where one is."""
    expected = [p.expected[key] for p in predictions if key in p.expected]
    return next((text for e in expected if (text := cut_off(e, display))), "")


def _worked_out_rows(plant: PlantData, data: SystemData, points: tuple[GridPoint, ...]) -> tuple[SheetRow, ...]:
    display, predictions = data.display, [p.prediction for p in points if p.prediction]
    fluid = data.model.refrigerant if data.model else None
    return tuple(
        SheetRow(
            display.label(key),
            unit_of(display.asking(key), display.kind(key)),
            "; ".join(t for t in (how(key, fluid, predictions, display), _cut(key, predictions, display)) if t),
            "",
            tuple(grid_cell(p, key, display.asking(key)) for p in points),
        )
        for key in worked_out(data, asked(plant, data)[1])
        if not points or any(key in p.expected for p in predictions)
    )


def sheet_tables(plant: PlantData, data: SystemData, grid: Grid) -> tuple[SheetTable, ...]:
    """The grid in tables that fit on a page."""
    display = data.display
    shown = grid.shown
    n = len(shown)
    count = -(-n // _MOST_COLUMNS)
    size = -(-n // count) if count else 0
    tables = []
    for start in range(0, n, size or 1):
        points = shown[start : start + size]
        heads = tuple(display.number(p.temperature, Kind.TEMPERATURE, 0) for p in points)
        tables.append(SheetTable(heads, _read_rows(plant, data, points), _worked_out_rows(plant, data, points)))
    return tuple(tables)


def _condition_rows(plant: PlantData, data: SystemData) -> list[dict[str, str]]:
    rated = data.rated.conditions if data.rated else {}
    display = data.display
    return [
        {
            "label": display.label(k),
            "unit": unit_of(display.asking(k), display.kind(k)),
            "rated": stated_number(display, rated[k], display.kind(k), column=True) if k in rated else "",
            "instrument": instrument_words(plant, data, k, rated.get(k)),
        }
        for k in asked(plant, data)[0]
    ]


def day_sheet(plant: PlantData, data: SystemData) -> Sheet:
    """The sheet as a page: made to be printed, filled in with a pencil, and filed as a record afterwards."""
    from commission.acceptance.choosing import cannot_be_read

    display = data.display
    conditions, readings = asked(plant, data)
    values = _values(data)
    grid = data.grid if data.grid and any(p.prediction for p in data.grid.points) else None
    tables = (
        sheet_tables(plant, data, grid)
        if grid
        else (SheetTable((), _read_rows(plant, data, ()), _worked_out_rows(plant, data, ())),)
    )
    context: dict[str, Any] = {
        "because": data.because,
        "no_gauges": cannot_be_read("suction_pressure", data.system) is not None,
        "plant_name": plant.name,
        "system_name": data.name,
        "digest": plant.loaded.digest[:12],
        "conditions": _condition_rows(plant, data),
        "tables": tables,
        "axis": grid.title if grid else "",
        "axis_unit": unit_of(display, Kind.TEMPERATURE),
        "fixed": grid_conditions(data, grid) if grid else "",
        "instruments": _used(plant, data, {k: values.get(k) for k in (*conditions, *readings)}),
        "saturation": data.page("saturation-table"),
        "live_sheet": data.page("live-sheet"),
    }
    return Sheet(data.page("day-sheet"), "Day sheet", data.group, "day_sheet.html", context, data.kicker, paper=True)
