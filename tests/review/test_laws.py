"""Rules that rest on the first and second law: each fires with its figures, and each leaves a sound plant alone."""

from __future__ import annotations

import math
from collections.abc import Callable

import pytest

from commission.review.facts import SystemFacts
from commission.review.finding import Figure, Remark
from commission.review.rules import exchangers, first_law, media, placement, second_law
from commission.review.stated import entropic_mean

Facts = Callable[..., SystemFacts]


def figure(remark: Remark, label: str) -> Figure:
    """The one figure of a remark with this label."""
    return next(f for f in remark.figures if f.label == label)


CHILLER = {
    "duty": "liquid_cooling",
    "heat_source": {"medium": "water", "space": None, "relative_humidity": None, "flow": "0.5 m3/h"},
    "evaporator": None,
    "controls": None,
}


def test_entropic_mean_of_a_stream() -> None:
    """Constant heat capacity: dh/ds is the logarithmic mean, here 303.15 K to 313.15 K by hand 308.12 K."""
    assert entropic_mean(303.15, 313.15) == pytest.approx(10 / math.log(313.15 / 303.15))
    assert entropic_mean(300.0, 300.0) == 300.0


def test_a_point_above_carnot_is_an_error(facts: Facts) -> None:
    """Between 4 °C and 32 °C no machine passes 277.15 / 28 = 9.90 (textbook, Carnot refrigerator)."""
    points = [
        {"heat_source_inlet_temperature": "4 °C", "heat_sink_inlet_temperature": "32 °C", "cooling_capacity": "34 kW",
         "power_input": "1.5 kW"}
    ]  # fmt: skip
    (remark,) = second_law.beats_carnot(facts({"rated_points": points}))
    assert remark.severity == "error"
    assert remark.path == "systems.one.rated_points.0"
    assert figure(remark, "COP stated").value == pytest.approx(34 / 1.5)
    assert figure(remark, "Carnot COP").value == pytest.approx(277.15 / 28, rel=1e-9)


def test_a_sound_point_is_below_carnot(facts: Facts) -> None:
    """The base plant has a COP of 2.3 where Carnot allows 9.9."""
    assert not list(second_law.beats_carnot(facts()))
    assert not list(second_law.too_good(facts()))


def test_heating_is_held_to_the_entropic_mean_of_its_sink(facts: Facts) -> None:
    """Water heated from 10 to 60 °C has a mean of 307.5 K: a COP of 10 from 5 °C air is possible, though hardly real.

    Against the outlet alone (333.15 / 55 = 6.06) it would be called impossible.
    """
    system = {
        "duty": "water_heating",
        "heat_sink": {"medium": "water", "space": None, "flow": None},
        "rated_points": [
            {"heat_source_inlet_temperature": "5 °C", "heat_sink_inlet_temperature": "10 °C",
             "heat_sink_outlet_temperature": "60 °C", "heating_capacity": "10 kW", "power_input": "1 kW"}
        ],
    }  # fmt: skip
    here = facts(system)
    assert not list(second_law.beats_carnot(here))
    (remark,) = second_law.too_good(here)
    mean = 50 / math.log(333.15 / 283.15)
    assert remark.severity == "warning"
    assert figure(remark, "Carnot COP").value == pytest.approx(mean / (mean - 278.15))
    assert figure(remark, "share of the Carnot COP").value == pytest.approx(10 * (mean - 278.15) / mean)


def test_a_guaranteed_cop_is_held_to_carnot_too(facts: Facts) -> None:
    """A contract cannot promise a COP of 12 where Carnot is 9.9."""
    promise = {"quantity": "cooling_cop", "value": "12",
               "at": {"heat_source_inlet_temperature": "4 °C", "heat_sink_inlet_temperature": "32 °C"}}  # fmt: skip
    (remark,) = second_law.beats_carnot(facts({"guarantee": [promise]}))
    assert remark.path == "systems.one.guarantee.0"


def test_a_condensing_unit_is_held_to_the_mean_of_its_refrigerant(facts: Facts) -> None:
    """At -10 °C evaporating, no superheat and 32 °C air, R-290 may reach 263.15 / 42 = 6.27 and not more."""
    row = {"evaporating_temperature": "-10 °C", "heat_sink_inlet_temperature": "32 °C", "power_input": "1 kW"}
    rows = [{**row, "cooling_capacity": "6.2 kW"}, {**row, "cooling_capacity": "6.4 kW"}]
    found = list(second_law.beats_carnot(facts({"condensing_unit": {"rated_points": rows}})))
    assert [remark.path for remark in found] == ["systems.one.condensing_unit.rated_points.1"]
    assert figure(found[0], "Carnot COP").value == pytest.approx(263.15 / 42, rel=1e-3)


BALANCE = {"heat_source_inlet_temperature": "4 °C", "heat_sink_inlet_temperature": "32 °C"}


@pytest.mark.parametrize(
    ("heating", "severity"),
    [("4.9 kW", None), ("5.03 kW", "note"), ("5.2 kW", "warning"), ("4.6 kW", "warning"), ("3.2 kW", "error"),
     ("5.8 kW", "error")],
)  # fmt: skip
def test_energy_balance(facts: Facts, heating: str, severity: str | None) -> None:
    """3.4 kW in and 1.5 kW power give 4.9 kW out; 3.2 kW is less than taken in, 5.8 kW beyond any fan."""
    point = {**BALANCE, "cooling_capacity": "3.4 kW", "power_input": "1.5 kW", "heating_capacity": heating}
    found = list(first_law.energy_balance(facts({"rated_points": [point]})))
    assert [remark.severity for remark in found] == ([severity] if severity else [])
    for remark in found:
        heat = float(heating.split()[0])
        missing = figure(remark, "missing in the balance, share of the heat to the sink")
        assert missing.value == pytest.approx((heat - 4.9) / heat)


@pytest.mark.parametrize(("capacity", "severity"), [("2.9 kW", None), ("3.2 kW", "warning"), ("4 kW", "error")])
def test_medium_balance(facts: Facts, capacity: str, severity: str | None) -> None:
    """0.5 m3/h of water from 12 to 7 °C carries 2.92 kW (999.7 kg/m3, 4.195 kJ/(kg K), steam tables)."""
    point = {"heat_source_inlet_temperature": "12 °C", "heat_source_outlet_temperature": "7 °C",
             "heat_sink_inlet_temperature": "32 °C", "cooling_capacity": capacity, "power_input": "1 kW"}  # fmt: skip
    found = list(first_law.medium_balance(facts({**CHILLER, "rated_points": [point]})))
    assert [remark.severity for remark in found] == ([severity] if severity else [])
    for remark in found:
        carried = 0.5 / 3600 * 999.65 * 4194 * 5
        assert figure(remark, "carried by flow and temperature change").value == pytest.approx(carried, rel=2e-3)


@pytest.mark.parametrize(("own", "fires"), [({}, False), ({"heat_sink_flow": "0.2 m3/h"}, True)])
def test_a_water_heater_in_one_pass_sets_its_flow(facts: Facts, own: dict[str, str], fires: bool) -> None:
    """140 L/h over 50 K carry 8.1 kW; at another point the machine sets another flow, unless that point states it."""
    point = {"heat_source_inlet_temperature": "-7 °C", "heat_sink_inlet_temperature": "10 °C",
             "heat_sink_outlet_temperature": "60 °C", "heating_capacity": "6 kW", "power_input": "2 kW"}  # fmt: skip
    sink = {"medium": "water", "space": None, "flow": "140 L/h"}
    found = first_law.medium_balance(
        facts({"duty": "water_heating", "heat_sink": sink, "rated_points": [{**point, **own}]})
    )
    assert bool(list(found)) == fires


def test_media_must_change_the_right_way(facts: Facts) -> None:
    """A source that leaves warmer and a sink that leaves colder are both errors."""
    design = {"heat_source_inlet_temperature": "4 °C", "heat_source_outlet_temperature": "6 °C",
              "heat_sink_inlet_temperature": "32 °C", "heat_sink_outlet_temperature": "30 °C"}  # fmt: skip
    found = list(media.wrong_way(facts({"design": design})))
    assert [remark.severity for remark in found] == ["error", "error"]
    assert figure(found[0], "Room air outlet temperature").value == pytest.approx(279.15)
    right = {**design, "heat_source_outlet_temperature": "1 °C", "heat_sink_outlet_temperature": "38 °C"}
    assert not list(media.wrong_way(facts({"design": right})))


@pytest.mark.parametrize(("evaporating", "fires"), [("5 °C", True), ("-4 °C", False)])
def test_evaporating_must_be_colder_than_the_source(facts: Facts, evaporating: str, fires: bool) -> None:
    """Air of 4 °C cannot boil a refrigerant at 5 °C."""
    point = {**BALANCE, "evaporating_temperature": evaporating, "cooling_capacity": "3.4 kW", "power_input": "1.5 kW"}
    found = list(exchangers.evaporator_crosses(facts({"rated_points": [point]})))
    assert [remark.severity for remark in found] == (["error"] if fires else [])
    if fires:
        assert figure(found[0], "Evaporating temperature").value == pytest.approx(278.15)


def test_a_pure_fluid_stays_below_the_outlet_a_blend_need_not(facts: Facts) -> None:
    """At 8 °C dew R-290 crosses water leaving at 7 °C; R-454C enters some 5 K colder and may do it in counterflow."""
    point = {"heat_source_inlet_temperature": "12 °C", "heat_source_outlet_temperature": "7 °C",
             "heat_sink_inlet_temperature": "32 °C", "evaporating_temperature": "8 °C",
             "condensing_temperature": "42 °C", "cooling_capacity": "2.9 kW", "power_input": "1 kW"}  # fmt: skip
    (remark,) = exchangers.evaporator_crosses(facts({**CHILLER, "rated_points": [point]}))
    assert figure(remark, "refrigerant after the valve").value == pytest.approx(281.15)
    assert not list(exchangers.evaporator_crosses(facts({**CHILLER, "refrigerant": "R-454C", "rated_points": [point]})))


@pytest.mark.parametrize(
    ("condensing", "outlet", "fires"),
    [("31 °C", None, True), ("42 °C", "40 °C", False), ("42 °C", "44 °C", False), ("42 °C", "47 °C", True)],
)
def test_condensing_must_be_warmer_than_the_sink(
    facts: Facts, condensing: str, outlet: str | None, fires: bool
) -> None:
    """A sink from 32 °C may leave 2 K above 42 °C condensing by desuperheating, but not 5 K."""
    point = {**BALANCE, "condensing_temperature": condensing, "cooling_capacity": "3.4 kW", "power_input": "1.5 kW"}
    if outlet:
        point["heat_sink_outlet_temperature"] = outlet
    found = list(exchangers.condenser_crosses(facts({"rated_points": [point]})))
    assert [remark.severity for remark in found] == (["error"] if fires else [])


@pytest.mark.parametrize(("condensing", "fires"), [("30 °C", False), ("20 °C", True)])
def test_an_evaporative_condenser_is_held_to_the_wet_bulb(facts: Facts, condensing: str, fires: bool) -> None:
    """30 °C condensing is below the dry bulb of 32 °C and fair, 20 °C is below the wet bulb of 22 °C and impossible."""
    point = {**BALANCE, "heat_sink_wet_bulb": "22 °C", "condensing_temperature": condensing}
    point |= {"cooling_capacity": "3.4 kW", "power_input": "1.5 kW"}
    system = {"condenser": {"type": "evaporative"}, "rated_points": [point]}
    found = list(exchangers.condenser_crosses(facts(system)))
    assert [remark.severity for remark in found] == (["error"] if fires else [])
    if fires:
        assert figure(found[0], "Outdoor air wet bulb").text == "22.0 °C"


@pytest.mark.parametrize(
    ("outlet", "evaporating", "fires"),
    [(38.0, -4.0, False), (44.0, -4.0, False), (65.0, -4.0, True), (38.0, 6.0, True)],
)
def test_expected_readings_may_not_cross(facts: Facts, outlet: float, evaporating: float, fires: bool) -> None:
    """42 °C condensing cannot heat a sink from 32 to 65 °C, nor can 4 °C air boil a refrigerant at 6 °C."""
    values = {
        "condensing_temperature": 42.0, "heat_sink_inlet_temperature": 32.0, "heat_sink_outlet_temperature": outlet,
        "evaporating_temperature": evaporating, "heat_source_inlet_temperature": 4.0,
    }  # fmt: skip
    expected = {"design": {key: (value + 273.15, 0.5) for key, value in values.items()}}
    found = list(exchangers.expected_crosses(facts(expected=expected)))
    assert [remark.severity for remark in found] == (["error"] if fires else [])
    if fires:
        shown = {f.label: f.value for f in found[0].figures}
        if outlet > 60:
            assert shown["Outdoor air outlet temperature"] == pytest.approx(outlet + 273.15)
        else:
            assert shown["Evaporating temperature"] == pytest.approx(evaporating + 273.15)


def test_a_cooler_is_held_to_what_its_air_can_carry(facts: Facts) -> None:
    """2100 m3/h from 4 °C, 85 % to saturation at -4 °C gives 9.2 kW: 3.6 kW is sound, 8.5 kW hardly, 12 kW impossible.

    By hand (ASHRAE moist air): h(4 °C, 85 %) = 14.7, h(-4 °C, saturated) = 2.7 kJ/kg, ice of 1.6 g/kg takes -0.5
    kJ/kg along, 0.737 kg/s: 9.2 kW.
    """
    assert not list(exchangers.cooler_beyond_its_air(facts()))
    rating = {"air_on": "4 °C", "temperature_difference": "8 K"}
    (doubtful,) = exchangers.cooler_beyond_its_air(facts({"evaporator": {"rating": {**rating, "capacity": "8.5 kW"}}}))
    (wrong,) = exchangers.cooler_beyond_its_air(facts({"evaporator": {"rating": {**rating, "capacity": "12 kW"}}}))
    assert (doubtful.severity, wrong.severity) == ("warning", "error")
    assert figure(wrong, "most that the air can carry").value == pytest.approx(9.2e3, rel=0.02)


def test_a_condenser_is_held_to_what_its_air_can_carry(facts: Facts) -> None:
    """2600 m3/h of 32 °C air warmed by 10 K takes 8.3 kW, and at most 11.9 kW with desuperheating."""
    rating = {"air_on": "32 °C", "temperature_difference": "10 K", "capacity": "5 kW"}
    assert not list(exchangers.condenser_beyond_its_air(facts({"condenser": {"rating": rating}})))
    (wrong,) = exchangers.condenser_beyond_its_air(facts({"condenser": {"rating": {**rating, "capacity": "13 kW"}}}))
    assert wrong.severity == "error"
    carried = 2600 / 3600 * 101325 / (287.05 * 305.15) * 1006 * 10 / 0.7
    assert figure(wrong, "most that the air can carry").value == pytest.approx(carried, rel=5e-3)


def test_a_machine_that_heats_the_space_it_cools_is_an_error(facts: Facts) -> None:
    """First law on the closed room: it is warmed by the power drawn, here the 1.5 kW of the rated point."""
    (remark,) = placement.rejects_into_its_own_space(facts({"heat_sink": {"space": "store"}}))
    assert remark.severity == "error"
    assert remark.path == "systems.one.heat_sink.space"
    assert figure(remark, "power drawn, which warms the space while running").value == pytest.approx(1500)


def test_the_same_by_the_place_of_the_condensing_unit(facts: Facts) -> None:
    """Where the air of the condenser is not named, it is that around the condensing unit."""
    system = {"heat_sink": {"space": None}, "spaces": {"condensing_unit": "store"}}
    (remark,) = placement.rejects_into_its_own_space(facts(system))
    assert remark.path == "systems.one.spaces.condensing_unit"


def test_heat_given_outdoors_or_next_door_is_no_error(facts: Facts) -> None:
    """The base plant gives its heat to the yard."""
    assert not list(placement.rejects_into_its_own_space(facts()))


def test_heat_given_to_another_room_is_worth_a_note(facts: Facts) -> None:
    """A plant room that takes 4.9 kW needs ventilation; the yard does not."""
    rooms = {"plant room": {"floor_area": "10 m2", "height": "2.5 m"}}
    expected = {"design": {"heating_capacity": (4900.0, 100.0)}}
    (remark,) = placement.warms_a_room(facts({"heat_sink": {"space": "plant room"}}, expected=expected, spaces=rooms))
    assert remark.severity == "note"
    assert figure(remark, "Heat to the air of plant room").value == pytest.approx(4900)
    assert not list(placement.warms_a_room(facts(expected=expected)))
