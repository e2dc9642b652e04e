"""Rules on how the plant runs: too hot, too cold, frozen, held up, short of heat, unsafe for people."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from typing import Any

import pytest

from commission.review.facts import SystemFacts
from commission.review.finding import Figure, Remark
from commission.review.rules import duties, envelope, freezing, low_pressure, missing, people, stores
from commission.safety import charge_limits, safety_figures, substance_of

Facts = Callable[..., SystemFacts]
CELSIUS = 273.15


def figure(remark: Remark, label: str) -> Figure:
    """The one figure of a remark with this label."""
    return next(f for f in remark.figures if f.label == label)


@pytest.mark.parametrize(
    ("refrigerant", "celsius", "fires"),
    [
        ("R-290", 95, False),
        ("R-290", 115, True),
        ("R-717", 130, False),
        ("R-717", 145, True),
        ("R-744", 120, False),
        ("R-744", 133, True),
    ],
)
def test_discharge_too_hot(facts: Facts, refrigerant: str, celsius: float, fires: bool) -> None:
    """110 °C for hydrocarbons, 140 °C for ammonia, 130 °C for carbon dioxide (common practice, no source)."""
    expected = {"hottest": {"discharge_temperature": (celsius + CELSIUS, 2.0)}}
    found = list(envelope.discharge_too_hot(facts({"refrigerant": refrigerant}, expected=expected)))
    assert [remark.severity for remark in found] == (["warning"] if fires else [])
    if fires:
        assert found[0].figures[0].text == f"{celsius:.1f} °C (standard uncertainty 2.0 K)"


def test_discharge_above_its_own_limit(facts: Facts) -> None:
    """A thermostat set to 90 °C opens at 95 °C."""
    expected = {"hottest": {"discharge_temperature": (95 + CELSIUS, 2.0)}}
    (remark,) = envelope.discharge_too_hot(
        facts({"controls": {"discharge_temperature_limit": "90 °C"}}, expected=expected)
    )
    assert remark.path == "systems.one.controls.discharge_temperature_limit"
    assert figure(remark, "limit that is set").value == pytest.approx(90 + CELSIUS)


@pytest.mark.parametrize(("ratio", "fires"), [(8.0, False), (11.0, True)])
def test_pressure_ratio(facts: Facts, ratio: float, fires: bool) -> None:
    """One stage up to about 10 (common practice, no source)."""
    found = list(envelope.pressure_ratio_too_high(facts(expected={"design": {"pressure_ratio": (ratio, 0.1)}})))
    assert [remark.severity for remark in found] == (["warning"] if fires else [])
    if fires:
        assert found[0].figures[0].value == ratio


CORNERS = [
    {"evaporating_temperature": f"{x} °C", "condensing_temperature": f"{y} °C"}
    for x, y in ((-30, 20), (5, 20), (10, 50), (-30, 50))
]


@pytest.mark.parametrize(("evaporating", "fires"), [(-10, False), (9, True), (-35, True)])
def test_envelope(facts: Facts, evaporating: float, fires: bool) -> None:
    """The warm side of the polygon leans from (5, 20) to (10, 50): at 40 °C condensing it ends at 8.3 °C."""
    values = {"evaporating_temperature": (evaporating + CELSIUS, 0.5), "condensing_temperature": (40 + CELSIUS, 0.5)}
    found = list(envelope.outside_envelope(facts({"compressor": {"envelope": CORNERS}}, expected={"design": values})))
    assert [remark.severity for remark in found] == (["warning"] if fires else [])
    if fires:
        assert [f.value for f in found[0].figures] == [evaporating + CELSIUS, 40 + CELSIUS]


@pytest.mark.parametrize(("condensing", "fires"), [(40, False), (25, True)])
def test_head_pressure_hold(facts: Facts, condensing: float, fires: bool) -> None:
    """A hold of 25 °C is for winter where 40 °C are expected at the design condition, and wrong where 25 °C are."""
    expected = {"design": {"condensing_temperature": (condensing + CELSIUS, 0.5)}}
    found = list(envelope.head_pressure_hold(facts(expected=expected)))
    assert [remark.severity for remark in found] == (["warning"] if fires else [])
    if fires:
        assert figure(found[0], "held").value == pytest.approx(25 + CELSIUS)


@pytest.mark.parametrize(
    ("head_pressure", "condensing", "fires"), [(None, 5, True), (None, 20, False), ({"by": "fan speed"}, 5, False)]
)
def test_head_pressure_in_winter(facts: Facts, head_pressure: Any, condensing: float, fires: bool) -> None:
    """A thermostatic valve at 5 °C condensing starves, unless something holds the pressure up."""
    expected = {"coldest": {"condensing_temperature": (condensing + CELSIUS, 0.5)}}
    found = list(
        envelope.no_head_pressure_in_winter(facts({"controls": {"head_pressure": head_pressure}}, expected=expected))
    )
    assert [remark.severity for remark in found] == (["warning"] if fires else [])
    if fires:
        assert figure(found[0], "usually held above").text == "15.0 °C"


@pytest.mark.parametrize(("stamped", "fires"), [("5 A", False), ("3 A", True)])
def test_current_over_the_nameplate(facts: Facts, stamped: str, fires: bool) -> None:
    """4 A on the hottest day are too much for a nameplate of 3 A."""
    here = facts({"nameplate": {"rated_current": stamped}}, expected={"hottest": {"current": (4.0, 0.1)}})
    found = list(envelope.over_the_nameplate_current(here))
    assert [remark.severity for remark in found] == (["warning"] if fires else [])
    if fires:
        assert [f.value for f in found[0].figures] == [4.0, 3.0]


@pytest.mark.parametrize(
    ("system", "fires"),
    [({"expansion": {"maximum_operating_pressure": "4 bar g"}}, False),
     ({"expansion": {"maximum_operating_pressure": "2 bar g"}}, True),
     ({"controls": {"crankcase_pressure_regulator": "2 bar g"}}, True)],
)  # fmt: skip
def test_suction_limit(facts: Facts, system: dict[str, Any], fires: bool) -> None:
    """A limit of 2 bar g acts where 4 bar absolute are expected, one of 4 bar g does not."""
    found = list(low_pressure.suction_limit(facts(system, expected={"design": {"suction_pressure": (4e5, 1e4)}})))
    assert [remark.severity for remark in found] == (["warning"] if fires else [])
    if fires:
        assert figure(found[0], "limit").text == "2.00 bar g"


LIQUID: dict[str, Any] = {
    "duty": "liquid_cooling",
    "heat_source": {"medium": "water", "space": None, "relative_humidity": None, "flow": None},
    "evaporator": None,
    "controls": {"room_temperature": None},
}


@pytest.mark.parametrize(("coldest", "severity"), [(3.0, None), (0.5, "note"), (-1.0, "warning")])
def test_water_freezes_by_the_coldest_refrigerant(facts: Facts, coldest: float, severity: str | None) -> None:
    """What enters the evaporator at -1 °C freezes water, at 0.5 °C nearly."""
    found = list(freezing.liquid_can_freeze(facts(LIQUID, coldest={"design": coldest + CELSIUS})))
    assert [remark.severity for remark in found] == ([severity] if severity else [])
    for remark in found:
        assert figure(remark, "refrigerant where it enters the evaporator").value == pytest.approx(coldest + CELSIUS)
        assert figure(remark, "freezing point of the water").value == pytest.approx(CELSIUS)


def test_a_chiller_may_not_run_on_the_coldest_day(facts: Facts) -> None:
    """Whether a chiller runs in winter is not known, so that freezing on the coldest day is a note, not a warning."""
    (remark,) = freezing.liquid_can_freeze(facts(LIQUID, coldest={"coldest": -3 + CELSIUS}))
    assert remark.severity == "note"


def test_brine_freezes_later(facts: Facts) -> None:
    """Propylene glycol of 30 % by mass freezes near -12.7 °C (ASHRAE tables): -5 °C is no risk, -14 °C is."""
    brine = {**LIQUID, "heat_source": {**LIQUID["heat_source"], "medium": "propylene glycol", "mass_fraction": "30 %"}}
    assert not list(freezing.liquid_can_freeze(facts(brine, coldest={"design": -5 + CELSIUS})))
    (remark,) = freezing.liquid_can_freeze(facts(brine, coldest={"design": -14 + CELSIUS}))
    assert figure(remark, "freezing point of the propylene glycol").value == pytest.approx(-12.8 + CELSIUS, abs=0.7)


@pytest.mark.parametrize(("setting", "severity"), [("3 °C", None), ("-1 °C", "error"), ("7.5 °C", "warning")])
def test_frost_protection(facts: Facts, setting: str, severity: str | None) -> None:
    """Water leaves at 7 °C: a protection at -1 °C comes too late, one at 7.5 °C too early."""
    expected = {"design": {"heat_source_outlet_temperature": (7 + CELSIUS, 0.1)}}
    here = facts({**LIQUID, "controls": {**LIQUID["controls"], "freeze_protection": setting}}, expected=expected)
    found = list(freezing.protection_setting(here))
    assert [remark.severity for remark in found] == ([severity] if severity else [])
    for remark in found:
        assert figure(remark, "frost protection").value == pytest.approx(float(setting.split()[0]) + CELSIUS)
        assert figure(remark, "expected to leave at").text == "7.0 °C"


@pytest.mark.parametrize(("defrost", "coldest", "fires"), [(None, -5, True), (None, 2, False), ({}, -5, False)])
def test_frost_without_a_defrost(facts: Facts, defrost: Any, coldest: float, fires: bool) -> None:
    """A coil at -5 °C frosts: a note where no defrost is written."""
    found = list(
        freezing.coil_can_frost(facts({"evaporator": {"defrost": defrost}}, coldest={"design": coldest + CELSIUS}))
    )
    assert [remark.severity for remark in found] == (["note"] if fires else [])
    if fires:
        assert found[0].figures[0].text == "−5.0 °C"


@pytest.mark.parametrize(
    ("room", "differential", "severity"),
    [("4 °C", "2 K", None), ("0 °C", "2 K", "warning"), ("-18 °C", "2 K", "error")],
)
def test_off_cycle_defrost(facts: Facts, room: str, differential: str, severity: str | None) -> None:
    """Ice does not melt in a freezer by waiting; near 0 °C hardly."""
    controls = {"room_temperature": room, "room_differential": differential}
    found = list(freezing.off_cycle_cannot_melt(facts({"controls": controls})))
    assert [remark.severity for remark in found] == ([severity] if severity else [])
    for remark in found:
        warmest = float(room.split()[0]) + 2
        assert figure(remark, "warmest room air in ordinary cycling").value == pytest.approx(warmest + CELSIUS)


HEATING: dict[str, Any] = {
    "duty": "space_heating",
    "spaces": {"evaporator": "yard", "condensing_unit": "yard"},
    "heat_source": {"space": "yard"},
    "heat_sink": {"medium": "water", "space": None, "flow": None},
    "evaporator": {"rating": None},
    "controls": None,
    "receiver": None,
    "rated_points": [
        {"heat_source_inlet_temperature": "7 °C", "heat_sink_inlet_temperature": "30 °C",
         "heat_sink_outlet_temperature": "35 °C", "heating_capacity": "8 kW", "power_input": "1.8 kW"}
    ],
    "design": {"heat_source_inlet_temperature": "-2 °C", "heat_sink_inlet_temperature": "30 °C"},
}  # fmt: skip


def test_heating_without_a_back_up(facts: Facts) -> None:
    """Designed to -2 °C where winter has -10 °C: a warning, but not with a back-up or a design that reaches it."""
    expected = {"coldest": {"heating_capacity": (5000.0, 200.0)}}
    (remark,) = missing.winter_heat(facts(HEATING, expected=expected))
    assert remark.severity == "warning"
    assert figure(remark, "coldest day of the site").text == "−10.0 °C"
    assert figure(remark, "heat on the coldest day").value == 5000.0
    assert not list(missing.winter_heat(facts({**HEATING, "back_up": {"power": "6 kW"}})))
    design = {**HEATING["design"], "heat_source_inlet_temperature": "-10 °C"}
    assert not list(missing.winter_heat(facts({**HEATING, "design": design})))


WATER: dict[str, Any] = {**HEATING, "duty": "water_heating"}


def test_a_store_that_stays_lukewarm_below_its_element(facts: Facts) -> None:
    """An element at mid height that replaces the machine leaves the lower half lukewarm; at the bottom it does not."""
    store = {"volume": "300 L", "set_point": "55 °C"}

    def judge(where: str, mode: str) -> list[Remark]:
        system = {**WATER, "store": store, "back_up": {"where": where, "mode": mode}}
        return list(stores.lukewarm_below_element(facts(system)))

    (remark,) = judge("store middle", "replaces")
    assert remark.severity == "warning"
    assert figure(remark, "volume of the store").text == "300 L"
    assert not judge("store bottom", "replaces")
    assert not judge("store middle", "helps")


def test_a_store_that_is_not_heated_through(facts: Facts) -> None:
    """50 °C without hygiene heating is a warning; 60 °C, or hygiene heating to 60 °C, is not."""
    store = {"volume": "300 L", "set_point": "50 °C"}
    (remark,) = stores.not_heated_through(facts({**WATER, "store": store}))
    assert remark.severity == "warning"
    assert figure(remark, "set point of the store").text == "50.0 °C"
    assert figure(remark, "whole store to").text == "60.0 °C"
    hygiene = {"temperature": "60 °C", "interval": "7 d"}
    assert not list(stores.not_heated_through(facts({**WATER, "store": {**store, "hygiene_heating": hygiene}})))
    assert not list(stores.not_heated_through(facts({**WATER, "store": {**store, "set_point": "62 °C"}})))


def test_a_circulation_that_does_not_balance(facts: Facts) -> None:
    """First law by hand: 180 L/h over 8 K carry 1.65 kW, not 380 W; 66 L/h over 5 K carry 0.38 kW. What is not written
    cannot contradict."""

    def judge(**loop: str) -> list[Remark]:
        store = {"volume": "300 L", "set_point": "60 °C", "circulation": loop}
        return list(stores.circulation_does_not_balance(facts({**WATER, "store": store})))

    (remark,) = judge(return_temperature="52 °C", flow="180 L/h", heat_loss="380 W")
    assert remark.severity == "warning"
    assert figure(remark, "heat that this flow gives up between the two").text == "1.65 kW"
    assert not judge(return_temperature="55 °C", flow="66 L/h", heat_loss="380 W")
    assert not judge(return_temperature="52 °C", heat_loss="380 W")


@pytest.mark.parametrize(
    ("space", "severity", "figures"),
    [({}, "note", 2), ({"release_from_inside": "yes"}, "note", 1),
     ({"release_from_inside": "yes", "trapped_person_alarm": "no"}, "warning", 1),
     ({"release_from_inside": "yes", "trapped_person_alarm": "yes"}, None, 0)],
)  # fmt: skip
def test_nobody_is_locked_in(facts: Facts, space: dict[str, str], severity: str | None, figures: int) -> None:
    """Nothing said is a note, a missing alarm a warning, both there are fine."""
    found = list(people.locked_in(facts(spaces={"store": space})))
    assert [(remark.severity, len(remark.figures)) for remark in found] == ([(severity, figures)] if severity else [])


def with_spaces(facts: SystemFacts) -> SystemFacts:
    """The same facts with the charge limits of the safety room."""
    assert facts.refrigerant is not None
    return replace(facts, spaces=charge_limits(facts.plant.loaded, facts.id, substance_of(facts.refrigerant)))


def with_safety(facts: SystemFacts) -> SystemFacts:
    """The same facts with charge limits and safety figures."""
    return replace(with_spaces(facts), safety=safety_figures(facts.plant.loaded, facts.id))


@pytest.mark.parametrize(
    ("charge", "detector", "severity"), [("0.4 kg", None, None), ("4 kg", None, "note"), ("4 kg", "no", "warning"),
                                         ("4 kg", "yes", None)]
)  # fmt: skip
def test_a_leak_that_nobody_notices(facts: Facts, charge: str, detector: str | None, severity: str | None) -> None:
    """4 kg of R-290 in 300 m3 are 0.0133 kg/m3, above the practical limit of 0.008 (RSIF); 0.4 kg are not."""
    space = {"leak_detector": detector} if detector else {}
    found = list(people.detection(with_spaces(facts({"charge": charge}, spaces={"store": space}))))
    assert [remark.severity for remark in found] == ([severity] if severity else [])
    for remark in found:
        assert figure(remark, "charge over volume of the room").value == pytest.approx(4 / 300)
        assert figure(remark, "practical limit").value == pytest.approx(0.008)


def test_a_charge_over_the_limit_of_a_room(facts: Facts) -> None:
    """30 kg of R-290 are over every limit for a store of 300 m3; 0.4 kg are under all of them."""
    (remark,) = duties.charge_over_limit(with_spaces(facts({"charge": "30 kg"})))
    assert remark.severity == "warning"
    assert figure(remark, "charge").text == "30.00 kg"
    lowest = figure(remark, "lowest limit").value
    assert lowest is not None
    assert 0.15 <= lowest <= 25.0
    assert not list(duties.charge_over_limit(with_spaces(facts())))


def test_leak_detection_by_law(facts: Facts) -> None:
    """130 kg of R-404A are 510 t CO2 equivalent, over the 500 t of article 6; 100 kg are not; a detector ends it.

    128 kg of R-454C are only 19 t, but hold 100.5 kg of R-1234yf (78.5 %), over the 100 kg of annex II gases."""
    big = with_safety(facts({"refrigerant": "R-404A", "charge": "130 kg"}))
    (remark,) = duties.leak_detection(big)
    assert remark.severity == "warning"
    assert figure(remark, "CO₂ equivalent of the charge").value == pytest.approx(130 * 3922, rel=1e-3)
    assert not list(duties.leak_detection(with_safety(facts({"refrigerant": "R-404A", "charge": "100 kg"}))))
    (blend,) = duties.leak_detection(with_safety(facts({"refrigerant": "R-454C", "charge": "128 kg"})))
    assert figure(blend, "gases of annex II, section 1, in the charge").value == pytest.approx(128 * 0.785, rel=1e-3)
    assert not list(duties.leak_detection(with_safety(facts({"refrigerant": "R-454C", "charge": "127 kg"}))))
    watched = facts({"refrigerant": "R-404A", "charge": "130 kg"}, spaces={"store": {"leak_detector": "yes"}})
    assert not list(duties.leak_detection(with_safety(watched)))


def test_market_dates(facts: Facts) -> None:
    """R-404A in a cold store (GWP 3922): none from 2030, a warning once that has passed; R-290 has no such date."""
    import datetime as dt

    here = facts({"refrigerant": "R-404A"})
    (remark,) = duties.law_dates(here)
    assert remark.severity == "note"
    assert "2030-01-01" in remark.title
    assert figure(remark, "GWP of R-404A").value == pytest.approx(3922, abs=2)
    later = replace(here, plant=replace(here.plant, visit=dt.date(2031, 5, 1)))
    assert [remark.severity for remark in duties.law_dates(later)] == ["warning"]
    assert not list(duties.law_dates(facts()))
    none_stated = {"rules": {"refrigerant_law": None}}
    assert not list(duties.law_dates(facts({"refrigerant": "R-404A"}, plant=none_stated)))


def test_market_dates_follow_the_size(facts: Facts) -> None:
    """A chiller of 10 kW falls under GWP 150 from 2027, one of 20 kW under GWP 750 only."""

    def dates(capacity: str) -> list[str]:
        point = {"heat_source_outlet_temperature": "7 °C", "heat_sink_inlet_temperature": "35 °C",
                 "cooling_capacity": capacity, "power_input": "3 kW"}  # fmt: skip
        here = facts({**LIQUID, "refrigerant": "R-32", "rated_points": [point]})
        return [remark.title.split(":")[0] for remark in duties.law_dates(here)]

    assert dates("10 kW") == ["Chillers up to 12 kW with GWP 150 or more"]
    assert dates("20 kW") == []


def test_market_dates_go_by_the_rating_and_not_by_full_speed(facts: Facts) -> None:
    """A split rated 9.9 kW at its nominal speed that reaches 12.1 kW at full speed is one of up to 12 kW."""

    def split(speed: str, capacity: str) -> dict[str, str]:
        return {"heat_source_inlet_temperature": "27 °C", "heat_sink_inlet_temperature": "35 °C",
                "compressor_speed": speed, "cooling_capacity": capacity, "power_input": "3 kW"}  # fmt: skip

    points = [split("5400 rpm", "12.1 kW"), split("3600 rpm", "9.9 kW"), split("1800 rpm", "5 kW")]
    system = {"duty": "comfort_cooling", "refrigerant": "R-32", "rated_points": points}
    at_speed = facts({**system, "compressor": {"drive": "variable speed", "nominal_speed": "3600 rpm"}})
    assert duties.rated_capacity(at_speed) == pytest.approx(9900.0)
    assert [r.title.split(":")[0] for r in duties.law_dates(at_speed)] == [
        "Split air-to-air systems up to 12 kW with GWP 150 or more"
    ]
    staged = {**points[1], "compressor_stage": "50 %", "cooling_capacity": "5 kW"}
    in_stages = facts({**system, "rated_points": [staged, points[1]], "compressor": {"stages": ["50 %", "100 %"]}})
    assert duties.rated_capacity(in_stages) == pytest.approx(9900.0)
    not_said = facts({**system, "rated_points": points[1:], "compressor": {"drive": "variable speed"}})
    assert duties.rated_capacity(not_said) == pytest.approx(9900.0)
