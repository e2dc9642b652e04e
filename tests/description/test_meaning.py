"""The second pass: what no single field can see. Each check is shown firing, and silent on the small plant."""

from collections.abc import Callable
from typing import Any

import pytest

from commission.description import LoadedPlant
from commission.errors import Problem

Problems = Callable[..., tuple[Problem, ...]]
Load = Callable[..., LoadedPlant]


def one(data: dict[str, Any]) -> dict[str, Any]:
    """The one system of the small plant."""
    system: dict[str, Any] = data["systems"]["one"]
    return system


def gauge(data: dict[str, Any]) -> dict[str, Any]:
    """The one instrument of the small plant."""
    instrument: dict[str, Any] = data["instruments"]["low gauge"]
    return instrument


def point(data: dict[str, Any]) -> dict[str, Any]:
    """The one rated point of the small plant."""
    rated: dict[str, Any] = one(data)["rated_points"][0]
    return rated


def test_the_small_plant_is_without_fault(load: Load) -> None:
    """Duty, refrigerant, media and one rated point are enough."""
    assert load().plant.systems["one"].rated_points[0].cooling_capacity == pytest.approx(3400.0)


GUARANTEE = {
    "quantity": "cooling_capacity",
    "at": {"heat_source_inlet_temperature": "2 °C", "heat_sink_inlet_temperature": "32 °C"},
    "value": "3.3 kW",
}
TABLE_POINT = {"evaporating_temperature": "-10 °C", "condensing_temperature": "45 °C", "compressor_power": "1 kW"}
FAULTS: dict[str, tuple[Callable[[dict[str, Any]], object], str, str]] = {
    "wet bulb above dry bulb of the site": (
        lambda d: d["plant"].update(climate={"summer_dry_bulb": "29 °C", "summer_wet_bulb": "30 °C"}),
        "plant.climate.summer_wet_bulb",
        "above its dry bulb",
    ),
    "winter warmer than summer": (
        lambda d: d["plant"].update(climate={"summer_dry_bulb": "29 °C", "winter_dry_bulb": "30 °C"}),
        "plant.climate.winter_dry_bulb",
        "winter cannot be warmer",
    ),
    "sealed with a part of its charge": (
        lambda d: one(d).update(sealed="yes", charge="1 kg", factory_charge="1 kg"),
        "systems.one.factory_charge",
        "brings its whole charge",
    ),
    "more from the factory than in all": (
        lambda d: one(d).update(charge="1 kg", factory_charge="1.1 kg"),
        "systems.one.factory_charge",
        "cannot bring more",
    ),
    "barometer in gauge": (
        lambda d: d["plant"].update(barometric_pressure="1 bar g"),
        "plant.barometric_pressure",
        "is absolute",
    ),
    "barometer that cannot be": (
        lambda d: d["plant"].update(barometric_pressure="2 bar a"),
        "plant.barometric_pressure",
        "pressure of the air",
    ),
    "scale in another unit": (
        lambda d: gauge(d).update({"from": "-1 °C"}),
        "instruments.low gauge.from",
        "is a unit of temperature",
    ),
    "scale without reference": (
        lambda d: gauge(d).update(to="10 bar"),
        "instruments.low gauge.to",
        "say gauge or absolute",
    ),
    "scale upside down": (lambda d: gauge(d).update(to="-2 bar g"), "instruments.low gauge.to", "above the lower end"),
    "scale of two references": (
        lambda d: gauge(d).update(to="10 bar a"),
        "instruments.low gauge.to",
        "both ends of the scale",
    ),
    "share of an unknown span": (
        lambda d: gauge(d).pop("to"),
        "instruments.low gauge.accuracy.of_span",
        "needs both ends",
    ),
    "error in another unit": (
        lambda d: gauge(d).update(accuracy={"absolute": "0.5 K"}),
        "instruments.low gauge.accuracy.absolute",
        "is a unit of temperature difference",
    ),
    "resolution of nothing": (
        lambda d: gauge(d).update(resolution="0 bar"),
        "instruments.low gauge.resolution",
        "more than nothing",
    ),
    "calibration that ends before it began": (
        lambda d: gauge(d).update(calibrated_on="2026-02-01", calibrated_until="2026-01-01"),
        "instruments.low gauge.calibrated_until",
        "before it was done",
    ),
    "below vacuum at the site": (
        lambda d: one(d).update(controls={"low_pressure_cut_out": "-1 bar g"}),
        "systems.one.controls.low_pressure_cut_out",
        "below a perfect vacuum",
    ),
    "unknown refrigerant": (
        lambda d: one(d).update(refrigerant="R-29O"),
        "systems.one.refrigerant",
        "not in the register",
    ),
    "figure of the register without its unit": (
        lambda d: d.update(refrigerants={"R-290": {"lfl": {"value": "0.038", "source": "a book"}}}),
        "refrigerants.R-290.lfl",
        "unit",
    ),
    "unknown figure of the register": (
        lambda d: d.update(refrigerants={"R-290": {"lfll": {"value": "0.038 kg/m3", "source": "a book"}}}),
        "refrigerants.R-290.lfll",
        "no such figure",
    ),
    "cold store that cools a liquid": (
        lambda d: one(d)["heat_source"].update(medium="water"),
        "systems.one.heat_source.medium",
        "takes heat from air",
    ),
    "chiller that cools air": (
        lambda d: one(d).update(duty="liquid_cooling"),
        "systems.one.heat_source.medium",
        "from a liquid",
    ),
    "water heater that heats air": (
        lambda d: one(d).update(duty="water_heating"),
        "systems.one.heat_sink.medium",
        "to water",
    ),
    "glycol without fraction": (
        lambda d: one(d)["heat_sink"].update(medium="ethylene glycol"),
        "systems.one.heat_sink.medium",
        "mass_fraction",
    ),
    "water with glycol fraction": (
        lambda d: one(d)["heat_sink"].update(medium="water", mass_fraction="30 %"),
        "systems.one.heat_sink.mass_fraction",
        "no glycol fraction",
    ),
    "humid water": (
        lambda d: one(d)["heat_sink"].update(medium="water", relative_humidity="50 %"),
        "systems.one.heat_sink.relative_humidity",
        "only air",
    ),
    "a cooling tower behind air": (
        lambda d: one(d)["heat_sink"].update(cooled_by="cooling tower"),
        "systems.one.heat_sink.cooled_by",
        "here there is none",
    ),
    "unknown space of the air": (
        lambda d: one(d)["heat_source"].update(space="rom"),
        "systems.one.heat_source.space",
        "no space has this id",
    ),
    "unknown space of a part": (
        lambda d: one(d).update(spaces={"pipework": ["room", "attic"]}),
        "systems.one.spaces.pipework.1",
        "no space has this id",
    ),
    "measured quantity unknown": (
        lambda d: one(d).update(measured_with={"suction_presure": "low gauge"}),
        "systems.one.measured_with.suction_presure",
        "not a quantity of the nomenclature",
    ),
    "measured with an unknown instrument": (
        lambda d: one(d).update(measured_with={"suction_pressure": "lo gauge"}),
        "systems.one.measured_with.suction_pressure",
        "no instrument has this id",
    ),
    "measured with the wrong instrument": (
        lambda d: one(d).update(measured_with={"suction_temperature": "low gauge"}),
        "systems.one.measured_with.suction_temperature",
        "this instrument measures pressure",
    ),
    "heat measured with a meter of electric power": (
        lambda d: (
            d["instruments"].update({"power meter": {"measures": "electric power"}}),
            one(d).update(measured_with={"cooling_capacity": "power meter"}),
        ),
        "systems.one.measured_with.cooling_capacity",
        "cooling_capacity is a heat flow rate",
    ),
    "rated point without result": (
        lambda d: [point(d).pop(k) for k in ("cooling_capacity", "power_input")],
        "systems.one.rated_points.0",
        "a result",
    ),
    "rated point without source": (
        lambda d: point(d).pop("heat_source_inlet_temperature"),
        "systems.one.rated_points.0",
        "of the heat source",
    ),
    "wet bulb above dry bulb of a point": (
        lambda d: point(d).update(heat_source_wet_bulb="3 °C"),
        "systems.one.rated_points.0.heat_source_wet_bulb",
        "above its dry bulb",
    ),
    "humidity said twice": (
        lambda d: point(d).update(heat_source_wet_bulb="1 °C", heat_source_relative_humidity="85 %"),
        "systems.one.rated_points.0.heat_source_relative_humidity",
        "say the same",
    ),
    "wet bulb of water": (
        lambda d: (one(d)["heat_sink"].update(medium="water"), point(d).update(heat_sink_wet_bulb="20 °C")),
        "systems.one.rated_points.0.heat_sink_wet_bulb",
        "only air has a wet bulb",
    ),
    "guarantee without unit": (
        lambda d: one(d).update(guarantee=[{**GUARANTEE, "value": "3.3"}]),
        "systems.one.guarantee.0.value",
        "bare number",
    ),
    "guaranteed COP with a unit": (
        lambda d: one(d).update(guarantee=[{**GUARANTEE, "quantity": "cooling_cop", "value": "2 kW"}]),
        "systems.one.guarantee.0.value",
        "plain number",
    ),
    "guarantee of nothing": (
        lambda d: one(d).update(guarantee=[{**GUARANTEE, "value": "0 kW"}]),
        "systems.one.guarantee.0.value",
        "more than nothing",
    ),
    "guarantee without condition": (
        lambda d: one(d).update(guarantee=[{**GUARANTEE, "at": {}}]),
        "systems.one.guarantee.0.at",
        "needs the condition",
    ),
    "speeds out of order": (
        lambda d: one(d).update(compressor={"minimum_speed": "60 Hz", "maximum_speed": "50 Hz"}),
        "systems.one.compressor.maximum_speed",
        "below the minimum_speed",
    ),
    "stages that end below full load": (
        lambda d: one(d).update(compressor={"stages": ["50 %", "75 %"]}),
        "systems.one.compressor.stages.1",
        "full load",
    ),
    "stage of nothing": (
        lambda d: one(d).update(compressor={"stages": ["0 %", "100 %"]}),
        "systems.one.compressor.stages.0",
        "stands still",
    ),
    "stage that the compressor does not have": (
        lambda d: one(d).update(compressor={"stages": ["50 %", "100 %"]}, design={"compressor_stage": "75 %"}),
        "systems.one.design.compressor_stage",
        "no such stage",
    ),
    "stages out of order": (
        lambda d: one(d).update(compressor={"stages": ["75 %", "50 %", "100 %"]}),
        "systems.one.compressor.stages.1",
        "must rise",
    ),
    "polynomials without flow": (
        lambda d: one(d).update(compressor={"polynomial": {"temperature_unit": "°C", "power": ["1"] * 10}}),
        "systems.one.compressor.polynomial",
        "need a flow or a capacity",
    ),
    "polynomials beside a table": (
        lambda d: one(d).update(
            compressor={
                "polynomial": {"temperature_unit": "°C", "power": ["1"] * 10, "mass_flow": ["1"] * 10},
                "table": {"points": [{**TABLE_POINT, "cooling_capacity": "3 kW"}]},
            }
        ),
        "systems.one.compressor.table",
        "say the same",
    ),
    "compressor point without result": (
        lambda d: one(d).update(compressor={"table": {"points": [TABLE_POINT]}}),
        "systems.one.compressor.table.points.0",
        "a capacity or a flow",
    ),
    "condensing below evaporating": (
        lambda d: one(d).update(
            compressor={
                "table": {"points": [{**TABLE_POINT, "condensing_temperature": "-20 °C", "cooling_capacity": "3 kW"}]}
            }
        ),
        "systems.one.compressor.table.points.0.condensing_temperature",
        "above evaporating",
    ),
    "cut-in below cut-out": (
        lambda d: one(d).update(controls={"low_pressure_cut_out": "1 bar g", "low_pressure_cut_in": "1.5 bar a"}),
        "systems.one.controls.low_pressure_cut_in",
        "must cut in above",
    ),
    "weather curve that rises": (
        lambda d: one(d).update(
            controls={
                "weather_curve": {
                    "points": [{"outdoor": "-10 °C", "flow": "30 °C"}, {"outdoor": "10 °C", "flow": "40 °C"}]
                }
            }
        ),
        "systems.one.controls.weather_curve.points.1.flow",
        "falls as it gets warmer",
    ),
    "weather curve out of order": (
        lambda d: one(d).update(
            controls={
                "weather_curve": {
                    "points": [{"outdoor": "10 °C", "flow": "30 °C"}, {"outdoor": "-10 °C", "flow": "40 °C"}]
                }
            }
        ),
        "systems.one.controls.weather_curve.points.1.outdoor",
        "from the coldest day",
    ),
    "back-up locked out where it should start": (
        lambda d: one(d).update(back_up={"starts_below": "0 °C", "locked_out_above": "-5 °C"}),
        "systems.one.back_up.locked_out_above",
        "below the starts_below",
    ),
    "back-up in a store that is not there": (
        lambda d: one(d).update(back_up={"where": "store top"}),
        "systems.one.back_up.where",
        "no store",
    ),
    "store set below cold water": (
        lambda d: one(d).update(store={"volume": "300 L", "cold_water": "10 °C", "set_point": "5 °C"}),
        "systems.one.store.set_point",
        "below the cold_water",
    ),
    "unknown assumption": (
        lambda d: one(d).update(assumptions={"evaporator_superheatt": {"value": "6 K", "source": "x"}}),
        "systems.one.assumptions.evaporator_superheatt",
        "not in the assumption list",
    ),
    "assumption in another unit": (
        lambda d: one(d).update(assumptions={"evaporator_superheat": {"value": "6 °C", "source": "x"}}),
        "systems.one.assumptions.evaporator_superheat.value",
        "write 6 K",
    ),
    "assumption outside its own range": (
        lambda d: one(d).update(assumptions={"evaporator_superheat": {"value": "6 K", "low": "7 K", "source": "x"}}),
        "systems.one.assumptions.evaporator_superheat.value",
        "outside its own range",
    ),
}


@pytest.mark.parametrize("name", FAULTS)
def test_fault_of_meaning(problems: Problems, name: str) -> None:
    """One fault gives one problem, at its place."""
    change, path, message = FAULTS[name]
    (problem,) = problems(change)
    assert problem.path == path
    assert message in problem.message
    assert problem.file == "plant.yaml"
    assert problem.line
    assert problem.column


def test_all_faults_of_meaning_in_one_run(problems: Problems) -> None:
    """The second pass goes on after its first find."""
    names = ("barometer in gauge", "scale upside down", "unknown refrigerant", "rated point without result")
    found = problems(*(FAULTS[name][0] for name in names))
    assert sorted(p.path for p in found) == sorted(FAULTS[name][1] for name in names)


def test_right_combinations_are_silent(load: Load) -> None:
    """The counterparts of the faults above are accepted together."""

    def full(data: dict[str, Any]) -> None:
        data["plant"].update(
            barometric_pressure="977 hPa a", climate={"summer_dry_bulb": "29 °C", "summer_wet_bulb": "20 °C"}
        )
        gauge(data).update(resolution="0.01 bar", calibrated_on="2026-01-01", calibrated_until="2026-01-01")
        data["refrigerants"] = {"R-290": {"lfl": {"value": "0.038 kg/m3", "source": "a book"}}}
        point(data).update(heat_source_wet_bulb="1 °C")
        one(data).update(
            guarantee=[GUARANTEE, {**GUARANTEE, "quantity": "cooling_cop", "value": "1.9"}],
            measured_with={"suction_pressure": "low gauge"},
            compressor={
                "minimum_speed": "30 Hz",
                "nominal_speed": "50 Hz",
                "maximum_speed": "50 Hz",
                "stages": ["50 %", "100 %"],
            },
            controls={"low_pressure_cut_out": "-0.5 bar g", "low_pressure_cut_in": "1.5 bar a"},
            assumptions={"evaporator_superheat": {"value": "6 K", "low": "5 K", "high": "7 K", "source": "x"}},
        )

    loaded = load(full)
    system = loaded.system("one")
    assert [g.value_si for g in system.guarantee] == [3300.0, 1.9]
    assert loaded.barometric_pressure == pytest.approx(97_700.0)
    assert loaded.register["R-290"] is not None
