"""Test pressures, order of the limit devices, standstill and design pressures of one system."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.errors import NotCalculatedError
from commission.quantities import Input, Kind
from commission.safety.facts import Fact, fact, load, read_value, weaker
from commission.safety.figure import Collector, fact_input
from commission.safety.formulas import nitrogen_pressure, pressure_steps

if TYPE_CHECKING:
    from commission.description import LoadedPlant
    from commission.description.model import System
    from commission.prediction import SystemModel
    from commission.properties import Refrigerant

NAMEPLATE = Fact("nameplate", 0.0, Kind.PRESSURE, "nameplate", "", "stated", "as stamped on the unit")
REFERENCE_TEMPERATURE = 293.15
"""Where the change of a nitrogen charge per kelvin is stated, K."""


@dataclass(frozen=True, slots=True)
class Stamped:
    """An allowable pressure as stamped: Pa absolute, gauge at the site, and its place in the description."""

    absolute: float
    gauge: float
    side: str
    origin: str

    def as_input(self) -> Input:
        """The stamped pressure as an input of a calculation."""
        return Input(f"allowable pressure of the {self.side} side", self.absolute, Kind.PRESSURE, self.origin)


def place(loaded: LoadedPlant, path: str) -> str:
    """Where a key is written, as file, line and column."""
    return str(loaded.where(path))


def hottest_ambient(loaded: LoadedPlant, system_id: str) -> tuple[float, str] | None:
    """The hottest air stated for a system in K, with its place: design weather, or a warmer rated or design point."""
    found: list[tuple[float, str]] = []
    summer = loaded.plant.plant.climate.summer_dry_bulb
    if summer is not None:
        found.append((summer, place(loaded, "plant.climate.summer_dry_bulb")))
    system = loaded.system(system_id)
    if system.heat_sink.medium == "air" and system.duty not in ("space_heating", "water_heating"):
        points = [*system.rated_points, *(system.condensing_unit.rated_points if system.condensing_unit else ())]
        for point in points:
            if point.heat_sink_inlet_temperature is not None:
                found.append((point.heat_sink_inlet_temperature, f"rated point, {place(loaded, f'systems.{system_id}')}"))
        if system.design is not None and system.design.heat_sink_inlet_temperature is not None:
            origin = place(loaded, f"systems.{system_id}.design.heat_sink_inlet_temperature")
            found.append((system.design.heat_sink_inlet_temperature, origin))
    return max(found, default=None)


def stamped_pressures(loaded: LoadedPlant, system_id: str) -> tuple[Stamped, ...]:
    """The allowable pressures that the nameplate states, low side first."""
    plate = loaded.system(system_id).nameplate
    found = []
    for side, value in (("low", plate.allowable_pressure_low), ("high", plate.allowable_pressure_high)):
        if value is not None:
            absolute = loaded.absolute(value)
            origin = place(loaded, f"systems.{system_id}.nameplate.allowable_pressure_{side}")
            found.append(Stamped(absolute, absolute - loaded.barometric_pressure, side, origin))
    return tuple(found)


def pressure_test_figures(loaded: LoadedPlant, system_id: str, out: Collector) -> None:
    """Strength and tightness test pressures from the lowest nameplate pressure still connected (EN 378-2, table 3).

    The ratio applies to the gauge pressure, as stamped pressures are gauge. A saturation pressure never raises them.
    """
    keys = tuple(
        f"{what}_test_pressure{side}" for what in ("strength", "tightness") for side in ("", "_high_side")
    )
    system = loaded.system(system_id)
    out.add("pre_test_pressure", fact("pre_test_pressure").gauge_at(loaded.barometric_pressure), "safety_rule_figure",
            (fact_input(fact("pre_test_pressure")),), fact("pre_test_pressure"))  # fmt: skip
    for hold in ("strength_test_hold", "tightness_test_hold"):
        out.add(hold, fact(hold).value, "safety_rule_figure", (fact_input(fact(hold)),), fact(hold))
    if system.sealed:
        out.refuse("the unit is factory sealed: it is not tested again on site", *keys, "nitrogen_change_per_kelvin")
        _lowest(loaded, system_id, out)
        return
    stamped = stamped_pressures(loaded, system_id)
    if not stamped:
        reason = "no allowable pressure is stated: write nameplate.allowable_pressure_low and _high as stamped"
        out.refuse(reason, *keys, "allowable_pressure_lowest", "nitrogen_change_per_kelvin")
        return
    lowest = _lowest(loaded, system_id, out)
    assert lowest is not None
    note = "" if len(stamped) == 2 else "only one side's allowable pressure is stated; read the other nameplate first"
    _test_pair(out, lowest, loaded.barometric_pressure, "", note)
    high = next((s for s in stamped if s.side == "high"), None)
    if high is None:
        out.refuse("the allowable pressure of the high side is not stated", keys[1], keys[3])
    else:
        _test_pair(out, high, loaded.barometric_pressure, "_high_side", "only with the low side shut off")
    _nitrogen_figure(out, lowest)


def _lowest(loaded: LoadedPlant, system_id: str, out: Collector) -> Stamped | None:
    stamped = stamped_pressures(loaded, system_id)
    if not stamped:
        out.refuse("no allowable pressure is stated on the nameplate", "allowable_pressure_lowest")
        return None
    lowest = min(stamped, key=lambda s: s.absolute)
    out.add("allowable_pressure_lowest", lowest.absolute, "lowest_nameplate_pressure",
            tuple(s.as_input() for s in stamped), NAMEPLATE)  # fmt: skip
    return lowest


def _test_pair(out: Collector, stamped: Stamped, barometric: float, suffix: str, note: str) -> None:
    for what in ("strength", "tightness"):
        rule = fact(f"{what}_test_ratio")
        value = rule.value * stamped.gauge + barometric
        out.add(f"{what}_test_pressure{suffix}", value, "test_pressure", (stamped.as_input(), fact_input(rule)), rule,
                note=note)  # fmt: skip


def _nitrogen_figure(out: Collector, lowest: Stamped) -> None:
    rule = Fact("virial", 0.0, Kind.NUMBER, "virial equation of nitrogen", "", "C", "dry nitrogen at constant volume")
    try:
        warmer = nitrogen_pressure(lowest.absolute, REFERENCE_TEMPERATURE, REFERENCE_TEMPERATURE + 1)
    except ValueError:
        out.refuse("the test pressure is above 60 bar: use tables of nitrogen", "nitrogen_change_per_kelvin")
        return
    out.add("nitrogen_change_per_kelvin", warmer - lowest.absolute, "nitrogen_hold",
            (lowest.as_input(), Input("temperature at the first reading", REFERENCE_TEMPERATURE, Kind.TEMPERATURE, "20 °C")),
            rule)  # fmt: skip


def strength_test_steps(loaded: LoadedPlant, system_id: str, *, high_side: bool = False) -> tuple[float, ...]:
    """The steps of the pressure test in Pa absolute, pre-test first (RSIF IF-09 1.3.1).

    Raises:
        NotCalculatedError: sealed unit, or no nameplate pressure.
    """
    out = Collector()
    pressure_test_figures(loaded, system_id, out)
    key = "strength_test_pressure_high_side" if high_side else "strength_test_pressure"
    if key not in out.found:
        raise NotCalculatedError(out.missing[key])
    barometric = loaded.barometric_pressure
    pre_test = fact("pre_test_pressure").gauge
    assert pre_test is not None
    steps = pressure_steps(pre_test, out.found[key].value - barometric, fact("strength_test_first_share").value,
                           fact("strength_test_step_share").value)  # fmt: skip
    return tuple(step + barometric for step in steps)


def standstill(loaded: LoadedPlant, system_id: str, fluid: Refrigerant, out: Collector) -> None:
    """Bubble-point pressure at the hottest design ambient: what the circuit holds when it stands, with liquid in it."""
    warmest = hottest_ambient(loaded, system_id)
    if warmest is None:
        out.refuse("the hottest ambient is not stated: write plant.climate.summer_dry_bulb", "standstill_pressure")
        return
    hottest, origin = warmest
    rule = Fact("standstill", 0.0, Kind.PRESSURE, "EN 378-2", "2016, 6.2.2", "V1",
                "the allowable pressure must cover standstill; nameplates decide")  # fmt: skip
    if hottest >= fluid.T_critical:
        out.refuse(
            f"{fluid.name} has no liquid at the hottest ambient: the standstill pressure follows charge and volume",
            "standstill_pressure",
        )
        return
    try:
        pressure = fluid.bubble(hottest).p
    except NotCalculatedError as error:
        out.refuse(str(error), "standstill_pressure")
        return
    out.add("standstill_pressure", pressure, "standstill_pressure",
            (Input("hottest ambient", hottest, Kind.TEMPERATURE, origin),), rule,
            note="only while liquid is present, everything at one temperature, and not after pump-down",
            uncertainty=pressure * fluid.pressure_relative_uncertainty)  # fmt: skip


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


def _design_rows(loaded: LoadedPlant, system: System) -> tuple[str | None, str]:
    high: str | None = "high_side_air_cooled" if system.heat_sink.medium == "air" else None
    space = loaded.plant.spaces.get(system.heat_source.space or "")
    low = "low_side_outdoors" if system.heat_source.medium == "air" and space and space.outdoors else "low_side_indoors"
    if system.evaporator.defrost and system.evaporator.defrost.method in ("hot gas", "reverse cycle"):
        low = high or low  # parts that can see hot gas take the value of the high side (RSIF IF-06)
    return high, low


def _water_cooled(system: System, fluid: Refrigerant, table: dict[str, object], out: Collector) -> None:
    outlets = [p.heat_sink_outlet_temperature for p in system.rated_points if p.heat_sink_outlet_temperature is not None]
    key = "design_pressure_high_side"
    if not outlets:
        out.refuse("no highest leaving water temperature is stated (heat_sink_outlet_temperature of a rated point)", key)
        return
    margin = table["water_cooled_margin"]
    assert isinstance(margin, dict)
    temperature = max(outlets) + read_value(margin["value"], Kind.TEMPERATURE_DIFFERENCE)
    _design_figure(key, temperature, fluid, out, margin["says"], table, margin["mark"], max(outlets))


def _design_figure(
    key: str, temperature: float, fluid: Refrigerant, out: Collector, title: str, table: dict[str, object], mark: str,
    hottest: float,
) -> None:  # fmt: skip
    rule = Fact(key, temperature, Kind.TEMPERATURE, str(table["document"]), str(table["edition"]), mark, title)
    try:
        pressure = fluid.bubble(temperature).p if temperature < fluid.T_critical else None
    except NotCalculatedError as error:
        out.refuse(str(error), key)
        return
    if pressure is None:
        out.refuse(f"{fluid.name} has no saturation at {temperature - 273.15:.0f} °C: allowable pressure from the maximum in operation", key)
        return
    inputs = (
        Input("design temperature", temperature, Kind.TEMPERATURE, rule.source),
        Input("hottest temperature it is chosen by", hottest, Kind.TEMPERATURE, "description"),
    )
    out.add(key, pressure, "design_pressure_saturation", inputs, rule, mark=weaker(mark, "C"),
            uncertainty=pressure * fluid.pressure_relative_uncertainty)  # fmt: skip


def limit_devices(loaded: LoadedPlant, system_id: str, fluid: Refrigerant, model: SystemModel | None, out: Collector) -> None:
    """Highest settings that the nameplate allows, the hottest expected day, and saturation at the settings."""
    system = loaded.system(system_id)
    high = next((s for s in stamped_pressures(loaded, system_id) if s.side == "high"), None)
    relief = system.receiver is not None and system.receiver.relief_valve is not None
    if high is None:
        out.refuse("the allowable pressure of the high side is not stated", "high_pressure_limit_highest", "relief_highest")
    else:
        rule = fact("high_pressure_limit_ratio_with_relief" if relief else "high_pressure_limit_ratio_without_relief")
        out.add("high_pressure_limit_highest", rule.value * high.gauge + loaded.barometric_pressure, "limit_setting",
                (high.as_input(), fact_input(rule)), rule)  # fmt: skip
        rule = fact("relief_setting_ratio")
        out.add("relief_highest", rule.value * high.gauge + loaded.barometric_pressure, "limit_setting",
                (high.as_input(), fact_input(rule)), rule)  # fmt: skip
    _hottest_day(loaded, system_id, model, out)
    _setting_temperatures(loaded, system_id, fluid, out)


def _hottest_day(loaded: LoadedPlant, system_id: str, model: SystemModel | None, out: Collector) -> None:
    keys = ("hottest_discharge_pressure", "high_pressure_margin")
    warmest = hottest_ambient(loaded, system_id)
    system = loaded.system(system_id)
    if model is None:
        out.refuse("the system could not be calculated", *keys)
        return
    if warmest is None or system.heat_sink.medium != "air" or system.duty in ("space_heating", "water_heating"):
        out.refuse("needs a condenser cooled by outdoor air, and the hottest ambient", *keys)
        return
    hottest, origin = warmest
    rule = Fact("hottest", hottest, Kind.TEMPERATURE, "design model", "", "C", "expected on the hottest design day")
    try:
        expected = model.predict({"heat_sink_inlet_temperature": hottest}).expected["discharge_pressure"]
    except (NotCalculatedError, KeyError) as error:
        out.refuse(f"no expected discharge pressure on the hottest day: {error}", *keys)
        return
    inputs = (Input("hottest ambient", hottest, Kind.TEMPERATURE, origin),)
    out.add(keys[0], expected.value, expected.method, (*inputs, *expected.inputs), rule, assumptions=expected.assumptions,
            uncertainty=expected.uncertainty)  # fmt: skip
    setting = system.controls.high_pressure_limit
    if setting is None:
        out.refuse("the setting of the high-pressure limit is not stated (controls.high_pressure_limit)", keys[1])
        return
    limit = loaded.absolute(setting)
    origin = place(loaded, f"systems.{system_id}.controls.high_pressure_limit")
    inputs = (Input("high-pressure limit", limit, Kind.PRESSURE, origin),
              Input("expected discharge pressure, hottest day", expected.value, Kind.PRESSURE, "calculated"))  # fmt: skip
    out.add(keys[1], limit - expected.value, "limit_margin", inputs, rule, assumptions=expected.assumptions,
            uncertainty=expected.uncertainty)  # fmt: skip


def _setting_temperatures(loaded: LoadedPlant, system_id: str, fluid: Refrigerant, out: Collector) -> None:
    controls = loaded.system(system_id).controls
    rule = Fact("setting", 0.0, Kind.PRESSURE, "saturation of the refrigerant", "", "C", "dew point at the setting")
    for name in ("high_pressure_limit", "low_pressure_cut_out", "low_pressure_cut_in"):
        key = f"{name}_temperature"
        setting = getattr(controls, name)
        if setting is None:
            out.refuse(f"not stated: controls.{name}", key)
            continue
        absolute = loaded.absolute(setting)
        try:
            temperature = fluid.dew_temperature(absolute)
        except NotCalculatedError as error:
            out.refuse(str(error), key)
            continue
        origin = place(loaded, f"systems.{system_id}.controls.{name}")
        out.add(key, temperature, "saturation_at_setting", (Input(name.replace("_", " "), absolute, Kind.PRESSURE, origin),), rule)
