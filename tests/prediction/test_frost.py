"""Heat lost to frost and defrosts: a function of air temperature and humidity, told by points on both sides."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from commission.description import LoadedPlant
from commission.prediction import SystemModel, fit
from commission.prediction.frost import severity

Written = Callable[[str], LoadedPlant]
KELVIN, PRESSURE = 273.15, 101325.0
HEAT, COP = "heating_capacity_with_defrosts", "heating_cop_with_defrosts"
OUTDOOR, FLOW = "heat_source_inlet_temperature", "heat_sink_outlet_temperature"
HEAD = """
duty: space_heating
refrigerant: R-290
heat_source: {medium: air, flow: 3300 m3/h, relative_humidity: 85 %}
heat_sink: {medium: water}
compressor: {type: scroll}
evaporator: {type: air coil, fan_power: 90 W}
rated_points:
"""
STEADY = ((-15, 35, 5.2, 2.0), (-7, 35, 6.6, 2.05), (7, 35, 10.0, 2.13), (7, 45, 9.7, 2.6), (12, 35, 11.6, 2.15))


def _point(air: float, flow: float, heat: float, power: float, frost: str) -> str:
    return (
        f"  - {{heat_source_inlet_temperature: {air} °C, heat_sink_outlet_temperature: {flow} °C, "
        f"heating_capacity: {heat:.3f} kW, power_input: {power:.3f} kW, frost_included: {frost}, "
        "includes: [compressor, evaporator fan]}\n"
    )


@pytest.fixture
def steady(written: Written) -> SystemModel:
    """A machine known by points without frost, on both sides of 2 °C."""
    return fit(written(HEAD + "".join(_point(*p, "no") for p in STEADY)), "it")


def test_where_frost_takes_most() -> None:
    """All at 35 °F in damp air, none below 17 or above 45 °F (10 CFR 430 appendix M1), less in dry air, more in fog."""
    assert severity(274.82, 0.85, PRESSURE) == pytest.approx(1.0)
    assert severity(264.0, 0.9, PRESSURE) == severity(281.0, 0.9, PRESSURE) == 0.0
    assert severity(274.82, 0.5, PRESSURE) < 0.2 < 1.2 < severity(274.82, 1.0, PRESSURE) < 1.6
    assert severity(270.0, 0.85, PRESSURE) == pytest.approx((270.0 - 264.82) / 10.0)
    assert severity(274.82, 0.2, PRESSURE) == 0.0


def test_values_with_defrosts(steady: SystemModel) -> None:
    """At 2 °C the assumed tenth is lost, its range stands in the uncertainty; above freezing nothing is."""
    cold = steady.predict({OUTDOOR: KELVIN + 2})
    share = cold.expected[HEAT].value / cold.expected["heating_capacity"].value
    assert share == pytest.approx(0.9, abs=0.012)
    u = steady.assumptions["frost_share"].standard_uncertainty
    part = cold.parts[HEAT]["frost_share"] / cold.expected["heating_capacity"].value
    assert part == pytest.approx(-u * (1 - share) / 0.1, rel=1e-3)
    assert "frost_share" not in cold.parts["heating_capacity"]
    assert 1 > cold.expected[COP].value / cold.expected["heating_cop"].value > share
    mild = steady.predict({OUTDOOR: KELVIN + 14})
    assert HEAT not in mild.expected
    assert "above freezing" in mild.not_calculated[HEAT]


@pytest.mark.parametrize("lost", [0.07, 0.13])
def test_a_point_with_defrosts_tells_the_share(written: Written, steady: SystemModel, lost: float) -> None:
    """A point at 2 °C that lies below the line of clean points gives the share lost, and leaves the machine as it was;
    a sentence names it. Taken for a clean one it is scatter."""
    clean = steady.predict({OUTDOOR: KELVIN + 2, FLOW: KELVIN + 35}).expected
    seen = severity(KELVIN + 2, 0.85, PRESSURE) * lost
    heat, power = (
        clean["heating_capacity"].value * (1 - seen) / 1e3,
        clean["power_input"].value * (1 - 0.15 * seen) / 1e3,
    )
    text = HEAD + "".join(_point(*p, "no") for p in STEADY)
    told = fit(written(text + _point(2, 35, heat, power, "yes")), "it")
    taken = fit(written(text + _point(2, 35, heat, power, "no")), "it")
    assert told.fit.values["frost_share"] == pytest.approx(lost, abs=0.01)
    assert told.fit.scatter < 0.7 * taken.fit.scatter
    for air in (-7, 7):
        asked = {OUTDOOR: KELVIN + air, FLOW: KELVIN + 35}
        one, other = (m.predict(asked).expected["heating_capacity"].value for m in (told, steady))
        assert one == pytest.approx(other, rel=0.004)
    (said,) = [w for w in told.predict().warnings if "count frost and defrosts" in w]
    assert "plant.yaml:" in said


def test_a_lone_point_with_defrosts(written: Written) -> None:
    """One point that counts defrosts is met with the assumed share: the clean machine gives a tenth more there."""
    model = fit(written(HEAD + _point(2, 35, 8.0, 2.1, "yes")), "it")
    found = model.predict({OUTDOOR: KELVIN + 2, FLOW: KELVIN + 35})
    assert found.expected[HEAT].value == pytest.approx(8000, rel=1e-4)
    assert found.expected["heating_capacity"].value == pytest.approx(8000 / 0.906, rel=2e-3)
    assert abs(found.parts[HEAT]["frost_share"]) < 0.1 * abs(found.parts["heating_capacity"]["frost_share"])


def test_coils_in_rooms_are_left_alone(cold_room: SystemModel) -> None:
    """A cold room has no such values: its defrosts are set by its own clock."""
    found = cold_room.predict()
    assert HEAT not in found.expected
    assert HEAT not in found.not_calculated


def test_outside_the_range_of_the_method_there_is_a_reason(steady: SystemModel) -> None:
    """Below 17 °F a coil below freezing gets no value with defrosts, which would be the steady one, but the reason."""
    there = steady.predict({OUTDOOR: KELVIN - 9})
    assert HEAT not in there.expected
    assert COP not in there.expected
    assert "from −8.3 to 7.2 °C outdoors only" in there.not_calculated[HEAT]


def test_fins_above_freezing_may_frost_and_fins_below_do(example: LoadedPlant) -> None:
    """Refrigerant a little below 0 °C leaves the fins above it: dew, and frost at most where they are coldest."""
    model = fit(example, "shower-water")
    mild, cold = model.predict(), model.predict({"heat_source_inlet_temperature": 273.15})
    assert mild.expected["evaporating_temperature"].value < 273.15
    assert any("dew runs off, and frost may form" in w for w in mild.warnings)
    assert any("below freezing and collects frost" in w for w in cold.warnings)
    warm = model.predict({"heat_source_inlet_temperature": 288.15})
    assert not any("frost" in w for w in warm.warnings)


def test_a_heat_pump_has_no_net_cooling_capacity(example: LoadedPlant) -> None:
    """Nobody asks what it cools; where cooling is the duty the fan's heat is deducted."""
    assert "net_cooling_capacity" not in fit(example, "shower-water").predict().expected
    assert "net_cooling_capacity" in fit(example, "cold-room").predict().expected


def test_inputs_are_told_once_and_a_worked_back_inlet_names_what_it_comes_from(example: LoadedPlant) -> None:
    """No value lists an input twice; an inlet that follows from a rated outlet lists outlet, flow and heat."""
    for system in ("floor-heating", "shower-water", "dining-hall"):
        for explained in fit(example, system).predict().expected.values():
            told = [(i.name, i.origin) for i in explained.inputs]
            assert len(told) == len(set(told)), explained.quantity
    inlet = fit(example, "floor-heating").predict().expected["heat_sink_inlet_temperature"]
    wanted = {"heat_sink_outlet_temperature", "heat_sink_flow", "heating_capacity"}
    assert wanted <= {i.name for i in inlet.inputs}
