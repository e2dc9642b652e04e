"""The least allowable pressures by ambient class (EN 378-2)."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from commission.errors import NotCalculatedError
from commission.quantities import Input, Kind
from commission.safety.facts import Fact, load, read_value, weaker
from commission.safety.figure import Collector
from commission.safety.stamped import hottest_ambient

if TYPE_CHECKING:
    from commission.description import LoadedPlant
    from commission.description.model import System
    from commission.properties import Refrigerant


def design_pressures(loaded: LoadedPlant, system_id: str, fluid: Refrigerant, out: Collector) -> None:
    """Least allowable pressures by ambient class (EN 378-2, table 2): they question a nameplate, never replace it."""
    table = load("design_temperatures.yaml")
    system = loaded.system(system_id)
    warmest = hottest_ambient(loaded, system_id)
    keys = ("design_pressure_high_side", "design_pressure_low_side")
    if warmest is None:
        out.refuse("the hottest ambient is not stated: write plant.climate.summer_dry_bulb", *keys)
        return
    hottest = warmest[0]
    if loaded.plant.plant.rules.safety == "ASHRAE 15":
        _ashrae_15(loaded, system, fluid, table, hottest, out)
        return
    limits = [read_value(t, Kind.TEMPERATURE) for t in table["ambient_at_most"]]
    column = next((i for i, limit in enumerate(limits) if hottest <= limit), None)
    if column is None:
        out.refuse("the hottest ambient is above 55 °C: the table of EN 378-2 ends there", *keys)
        return
    for key, row_name in zip(keys, _design_rows(loaded, system), strict=True):
        if row_name is None:
            _water_cooled(system, fluid, table, out)
            continue
        row = table["rows"][row_name]
        temperature = read_value(row["at"][column], Kind.TEMPERATURE)
        _design_figure(key, temperature, fluid, out, row["title"], table, row["marks"][column], hottest)


def _ashrae_15(
    loaded: LoadedPlant, system: System, fluid: Refrigerant, table: dict[str, Any], hottest: float, out: Collector
) -> None:
    """Design pressures of ASHRAE 15, 9.2.1 (from memory): low side at 80 °F; high side 30 °F above the summer air."""
    rule = table["ashrae_15"]
    source = {"document": rule["document"], "edition": rule["edition"]}
    low = read_value(rule["low_side"], Kind.TEMPERATURE)
    _design_figure("design_pressure_low_side", low, fluid, out, "low side", source, rule["mark"], hottest)
    margin = read_value(rule["margin"], Kind.TEMPERATURE_DIFFERENCE)
    if system.heat_sink.medium == "air":
        high = max(hottest + margin, read_value(rule["air_cooled_at_least"], Kind.TEMPERATURE))
        _design_figure(
            "design_pressure_high_side", high, fluid, out, "high side, air-cooled", source, rule["mark"], hottest
        )
        return
    wet_bulb = loaded.plant.plant.climate.summer_wet_bulb
    if wet_bulb is None:
        out.refuse(
            "the summer wet bulb is not stated: write plant.climate.summer_wet_bulb", "design_pressure_high_side"
        )
        return
    title = "high side, cooled by water or evaporation"
    _design_figure("design_pressure_high_side", wet_bulb + margin, fluid, out, title, source, rule["mark"], wet_bulb)


def _design_rows(loaded: LoadedPlant, system: System) -> tuple[str | None, str]:
    high: str | None = "high_side_air_cooled" if system.heat_sink.medium == "air" else None
    space = loaded.plant.spaces.get(system.heat_source.space or "")
    low = "low_side_outdoors" if system.heat_source.medium == "air" and space and space.outdoors else "low_side_indoors"
    if system.evaporator.defrost and system.evaporator.defrost.method in ("hot gas", "reverse cycle"):
        low = high or low  # parts that can see hot gas take the value of the high side (RSIF IF-06)
    return high, low


def _water_cooled(system: System, fluid: Refrigerant, table: dict[str, Any], out: Collector) -> None:
    outlets = [
        p.heat_sink_outlet_temperature for p in system.rated_points if p.heat_sink_outlet_temperature is not None
    ]
    key = "design_pressure_high_side"
    if not outlets:
        out.refuse(
            "no highest leaving water temperature is stated (heat_sink_outlet_temperature of a rated point)", key
        )
        return
    margin = table["water_cooled_margin"]
    temperature = max(outlets) + read_value(margin["value"], Kind.TEMPERATURE_DIFFERENCE)
    _design_figure(key, temperature, fluid, out, margin["says"], table, margin["mark"], max(outlets))


def _design_figure(
    key: str,
    temperature: float,
    fluid: Refrigerant,
    out: Collector,
    title: str,
    table: dict[str, Any],
    mark: str,
    hottest: float,
) -> None:
    rule = Fact(key, temperature, Kind.TEMPERATURE, str(table["document"]), str(table["edition"]), mark, title)
    try:
        pressure = fluid.bubble(temperature).p if temperature < fluid.T_critical else None
    except NotCalculatedError as error:
        out.refuse(str(error), key)
        return
    if pressure is None:
        where = f"{temperature - 273.15:.0f} °C"
        out.refuse(f"{fluid.name} does not condense at {where}: PS follows the highest in operation", key)
        return
    inputs = (
        Input("design temperature", temperature, Kind.TEMPERATURE, rule.source),
        Input("hottest temperature it is chosen by", hottest, Kind.TEMPERATURE, "description"),
    )
    out.add(
        key,
        pressure,
        "design_pressure_saturation",
        inputs,
        rule,
        mark=weaker(mark, "C"),
        uncertainty=pressure * fluid.pressure_relative_uncertainty,
    )
