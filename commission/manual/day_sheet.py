"""The day sheet for pencil: conditions, readings, and the expected band at each outdoor temperature."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from commission.errors import NotCalculatedError
from commission.manual.book import Sheet
from commission.manual.facts import stated_number
from commission.manual.gather import PlantData, SystemData
from commission.manual.grid import Grid, GridPoint
from commission.manual.showing import label_of, size_text, unit_of
from commission.manual.system_pages import Cell, grid_cell, grid_conditions
from commission.quantities import NOMENCLATURE, Display, Kind

READ = (
    "suction_pressure", "discharge_pressure", "suction_temperature", "discharge_temperature", "liquid_temperature",
    "heat_source_outlet_temperature", "heat_sink_outlet_temperature", "power_input", "current",
)  # fmt: skip
"""What is read directly."""

WORKED_OUT = (
    "evaporator_temperature_difference", "superheat", "compressor_superheat", "condenser_temperature_difference",
    "subcooling", "heat_source_temperature_change", "heat_sink_temperature_change",
)  # fmt: skip
"""What follows from the readings: differences, which a pencil can do."""

_HOW = {
    "evaporator_temperature_difference": "source inlet minus saturation at the low-side gauge",
    "superheat": "evaporator outlet minus saturation at the low-side gauge",
    "compressor_superheat": "suction line minus saturation at the low-side gauge",
    "condenser_temperature_difference": "saturation at the high-side gauge minus sink inlet",
    "subcooling": "saturation at the high-side gauge minus liquid line",
    "heat_source_temperature_change": "inlet minus outlet",
    "heat_sink_temperature_change": "outlet minus inlet",
}
_MOST_COLUMNS = 11


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
    name = choose_instrument(key, value, instruments, data.system.measured_with, loaded.barometric_pressure)
    if name is None:
        return named
    try:
        budget = measure(Reading(key, value, name), instruments, loaded.barometric_pressure).budget
    except NotCalculatedError:
        return name
    kind = NOMENCLATURE[key].kind
    return f"{name} ± {size_text(plant.display, kind, budget.expanded())}"


def _used(plant: PlantData, data: SystemData, wanted: Mapping[str, float]) -> list[tuple[str, str, str]]:
    """The instruments that will read these quantities, with serial and end of calibration; all where none fits."""
    from commission.acceptance.choosing import choose_instrument

    instruments = plant.loaded.plant.instruments
    names = {
        choose_instrument(k, v, instruments, data.system.measured_with, plant.loaded.barometric_pressure)
        for k, v in wanted.items()
    }
    chosen = {n: i for n, i in instruments.items() if n in names} or instruments
    return [
        (n, i.serial or "", i.calibrated_until.isoformat() if i.calibrated_until else "") for n, i in chosen.items()
    ]


def _readable(data: SystemData, keys: tuple[str, ...]) -> tuple[str, ...]:
    """Those of the keys that can be read of this system: no pressures of a factory-sealed unit."""
    from commission.acceptance.choosing import cannot_be_read

    return tuple(k for k in keys if cannot_be_read(k, data.system) is None)


def _rows(
    plant: PlantData, data: SystemData, keys: tuple[str, ...], points: tuple[GridPoint, ...]
) -> tuple[SheetRow, ...]:
    rows = []
    display = plant.display
    for key in _readable(data, keys):
        expected = [p.prediction.expected[key] for p in points if p.prediction and key in p.prediction.expected]
        if not expected:
            continue
        rows.append(
            SheetRow(
                label_of(key),
                unit_of(display, NOMENCLATURE[key].kind),
                _HOW.get(key, ""),
                "" if key in _HOW else instrument_words(plant, data, key, expected[-1].value),
                tuple(grid_cell(p, key, display) for p in points),
            )
        )
    return tuple(rows)


def sheet_tables(plant: PlantData, data: SystemData, grid: Grid) -> tuple[SheetTable, ...]:
    """The grid in tables that fit on a page."""
    display = plant.display
    shown = grid.shown
    n = len(shown)
    count = -(-n // _MOST_COLUMNS)
    size = -(-n // count) if count else 0
    tables = []
    for start in range(0, n, size or 1):
        points = shown[start : start + size]
        heads = tuple(display.number(p.temperature, Kind.TEMPERATURE, 0) for p in points)
        tables.append(SheetTable(heads, _rows(plant, data, READ, points), _rows(plant, data, WORKED_OUT, points)))
    return tuple(tables)


def _plain_rows(data: SystemData, keys: tuple[str, ...], display: Display) -> tuple[SheetRow, ...]:
    """Rows without expectations, for a system that cannot be calculated."""
    return tuple(
        SheetRow(
            label_of(k),
            unit_of(display, NOMENCLATURE[k].kind),
            _HOW.get(k, ""),
            data.system.measured_with.get(k, ""),
            (),
        )
        for k in _readable(data, keys)
    )


def _condition_rows(plant: PlantData, data: SystemData) -> list[dict[str, str]]:
    keys = (
        list(data.model.condition_axes)
        if data.model
        else ["heat_source_inlet_temperature", "heat_sink_inlet_temperature"]
    )
    rated = data.rated.conditions if data.rated else {}
    display = plant.display
    return [
        {
            "label": label_of(k),
            "unit": unit_of(display, NOMENCLATURE[k].kind),
            "rated": stated_number(display, rated[k], NOMENCLATURE[k].kind) if k in rated else "",
            "instrument": instrument_words(plant, data, k, rated.get(k)),
        }
        for k in keys
    ]


def _wanted(data: SystemData) -> dict[str, float]:
    """What will be read, at its rated value in SI."""
    if data.rated is None:
        return {}
    read = {k: data.rated.expected[k].value for k in _readable(data, READ) if k in data.rated.expected}
    return {**data.rated.conditions, **read}


def day_sheet(plant: PlantData, data: SystemData) -> Sheet:
    """The sheet as a page: made to be printed, filled in with a pencil, and filed as a record afterwards."""
    display = plant.display
    grid = data.grid if data.grid and any(p.prediction for p in data.grid.points) else None
    tables = (
        sheet_tables(plant, data, grid)
        if grid
        else (SheetTable((), _plain_rows(data, READ, display), _plain_rows(data, WORKED_OUT, display)),)
    )
    context: dict[str, Any] = {
        "because": data.because,
        "no_gauges": _readable(data, READ) != READ,
        "plant_name": plant.name,
        "system_name": data.name,
        "digest": plant.loaded.digest[:12],
        "conditions": _condition_rows(plant, data),
        "tables": tables,
        "axis": grid.title if grid else "",
        "axis_unit": unit_of(display, Kind.TEMPERATURE),
        "fixed": grid_conditions(plant, data, grid) if grid else "",
        "instruments": _used(plant, data, _wanted(data)),
        "saturation": data.page("saturation-table"),
        "live_sheet": data.page("live-sheet"),
    }
    return Sheet(data.page("day-sheet"), "Day sheet", data.group, "day_sheet.html", context, data.kicker, paper=True)
