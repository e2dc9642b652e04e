"""The saturation table at site pressure: what a gauge shows at each temperature."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.errors import NotCalculatedError
from commission.manual.book import Sheet
from commission.manual.gather import PlantData, SystemData
from commission.manual.showing import unit_of
from commission.quantities import Display, Kind

if TYPE_CHECKING:
    from commission.properties import Refrigerant

_ZERO_C = 273.15
_NEAR_CRITICAL = 0.98
_BLOCK = 26


@dataclass(frozen=True, slots=True)
class SaturationRow:
    """One line of the table, numbers alone."""

    t: str
    bubble: str
    dew: str
    strong: bool


def table_temperatures(low: float, high: float, display: Display, limit: float = 0.0) -> tuple[float, ...]:
    """Whole degrees from −40 °C to +63 °C in the unit of the site (every 2 °F), cut to what is known; in K.

    They go on up to `limit` (K), the saturation temperature of the highest pressure limit, where that is higher.
    """
    if display.system == "metric":
        wanted = [n + _ZERO_C for n in range(-40, max(64, math.ceil(limit - _ZERO_C) + 1))]
    else:
        last = 2 * math.ceil(((limit - _ZERO_C) * 1.8 + 32) / 2)
        wanted = [(n - 32) / 1.8 + _ZERO_C for n in range(-40, max(148, last + 2), 2)]
    return tuple(t for t in wanted if low <= t <= high)


def _highest_limit(plant: PlantData, data: SystemData, fluid: Refrigerant) -> float:
    """Saturation temperature (K) of the highest pressure limit that is described; 0 where there is none, or none below
    the critical pressure."""
    from commission.safety import relief_valves

    controls, plate = data.system.controls, data.system.nameplate
    stated = [controls.high_pressure_limit, plate.allowable_pressure_high, *relief_valves(data.system).values()]
    found = [plant.loaded.absolute(p) for p in stated if p is not None]
    below = [p for p in found if p < _NEAR_CRITICAL * fluid.p_critical]
    return fluid.dew_temperature(max(below)) if below else 0.0


def saturation_page(plant: PlantData, data: SystemData) -> Sheet:
    """Bubble and dew gauge pressures over temperature."""
    return Sheet(
        data.page("saturation-table"), "Saturation table", data.group, "saturation.html",
        {"because": None, **_context(plant, data)}, kicker=data.kicker,
    )  # fmt: skip


def _context(plant: PlantData, data: SystemData) -> dict[str, object]:
    from commission.prediction import saturation_table
    from commission.safety import fluid_of

    display = plant.display
    try:
        fluid = fluid_of(plant.loaded, data.id)
        temperatures = table_temperatures(fluid.T_low, fluid.T_high, display, _highest_limit(plant, data, fluid))
        table = saturation_table(fluid, plant.loaded.barometric_pressure, temperatures)
    except NotCalculatedError as error:
        return {"because": error.problems[0].message}
    rows = [
        SaturationRow(
            display.number(row.T, Kind.TEMPERATURE, 0),
            display.number(row.p_bubble, Kind.PRESSURE),
            display.number(row.p_dew, Kind.PRESSURE),
            round(display.convert(row.T, Kind.TEMPERATURE)) % (5 if display.system == "metric" else 10) == 0,
        )
        for row in table
    ]
    u = fluid.pressure_relative_uncertainty
    return {
        "refrigerant": fluid.name,
        "blend": fluid.is_blend,
        "barometric": f"{plant.loaded.barometric_pressure / 100:.0f} hPa",
        "blocks": [rows[n : n + _BLOCK] for n in range(0, len(rows), _BLOCK)],
        "temperature_unit": unit_of(display, Kind.TEMPERATURE),
        "pressure_unit": unit_of(display, Kind.PRESSURE),
        "uncertainty": f"Standard uncertainty of the pressures: {100 * u:.1g} % of the absolute pressure.",
        "source": f"equation of state in {fluid.property_source}.",
    }
