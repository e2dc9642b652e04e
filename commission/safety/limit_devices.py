"""Settings of the limit devices: the highest the nameplate allows, the hottest expected day, saturation at each."""

from __future__ import annotations

from typing import TYPE_CHECKING

from commission.errors import NotCalculatedError
from commission.quantities import Input, Kind
from commission.safety.facts import Fact, fact
from commission.safety.figure import Collector, fact_input
from commission.safety.stamped import hottest_ambient, place, relief_valves, stamped_pressures

if TYPE_CHECKING:
    from commission.description import LoadedPlant
    from commission.prediction import SystemModel
    from commission.properties import Refrigerant


def limit_devices(
    loaded: LoadedPlant, system_id: str, fluid: Refrigerant, model: SystemModel | None, out: Collector
) -> None:
    """Highest settings that the nameplate allows, the hottest expected day, and saturation at the settings."""
    system = loaded.system(system_id)
    high = next((s for s in stamped_pressures(loaded, system_id) if s.side == "high"), None)
    relief = bool(relief_valves(system))
    if high is None:
        out.refuse(
            "the allowable pressure of the high side is not stated", "high_pressure_limit_highest", "relief_highest"
        )
    else:
        rule = fact("high_pressure_limit_ratio_with_relief" if relief else "high_pressure_limit_ratio_without_relief")
        out.add(
            "high_pressure_limit_highest",
            rule.value * high.gauge + loaded.barometric_pressure,
            "limit_setting",
            (high.as_input(), fact_input(rule)),
            rule,
        )
        rule = fact("relief_setting_ratio")
        out.add(
            "relief_highest",
            rule.value * high.gauge + loaded.barometric_pressure,
            "limit_setting",
            (high.as_input(), fact_input(rule)),
            rule,
        )
    _hottest_day(loaded, system_id, model, out)
    _setting_temperatures(loaded, system_id, fluid, out)
    _lowest_trip(loaded, system_id, fluid, out)


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
    out.add(
        keys[0],
        expected.value,
        expected.method,
        (*inputs, *expected.inputs),
        rule,
        assumptions=expected.assumptions,
        uncertainty=expected.uncertainty,
    )
    setting = system.controls.high_pressure_limit
    if setting is None:
        out.refuse("the setting of the high-pressure limit is not stated (controls.high_pressure_limit)", keys[1])
        return
    limit = loaded.absolute(setting)
    origin = place(loaded, f"systems.{system_id}.controls.high_pressure_limit")
    both = (
        Input("high-pressure limit", limit, Kind.PRESSURE, origin),
        Input("expected discharge pressure, hottest day", expected.value, Kind.PRESSURE, "calculated"),
    )
    out.add(
        keys[1],
        limit - expected.value,
        "limit_margin",
        both,
        rule,
        assumptions=expected.assumptions,
        uncertainty=expected.uncertainty,
    )


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
        out.add(
            key,
            temperature,
            "saturation_at_setting",
            (Input(name.replace("_", " "), absolute, Kind.PRESSURE, origin),),
            rule,
        )


def _lowest_trip(loaded: LoadedPlant, system_id: str, fluid: Refrigerant, out: Collector) -> None:
    """No cut-out acts so late that the low side draws in air, unless the plant was made to run below it, or that carbon
    dioxide turns to dry ice."""
    key = "low_pressure_trip_lowest"
    setting = loaded.system(system_id).controls.low_pressure_cut_out
    if setting is None:
        out.refuse("not stated: controls.low_pressure_cut_out", key)
        return
    if loaded.absolute(setting) < loaded.barometric_pressure:
        out.refuse("the plant is set to run below the pressure of the air (controls.low_pressure_cut_out)", key)
        return
    rule = fact("low_pressure_trip_lowest")
    air = Input("pressure of the air", loaded.barometric_pressure, Kind.PRESSURE, "plant.altitude, ISO 2533")
    inputs: tuple[Input, ...] = (air,)
    lowest = rule.gauge_at(loaded.barometric_pressure)
    if fluid.name == "R-744":
        solid = fact("carbon_dioxide_triple_point")
        lowest, inputs = max(lowest, solid.value), (air, fact_input(solid))
    out.add(key, lowest, "air_kept_out", inputs, rule)
