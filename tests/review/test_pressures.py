"""Rules on the order of pressures: limiter, relief valve, standstill, cut-out, cut-in, suction below atmosphere."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import pytest

from commission.properties import refrigerant
from commission.review.facts import SystemFacts
from commission.review.finding import Figure, Remark
from commission.review.rules import allowable, high_pressure, low_pressure
from commission.safety import safety_figures

Facts = Callable[..., SystemFacts]
ATMOSPHERE = 101325.0


def figure(remark: Remark, label: str) -> Figure:
    """The one figure of a remark with this label."""
    return next(f for f in remark.figures if f.label == label)


def with_safety(facts: SystemFacts) -> SystemFacts:
    """The same facts with the figures of the safety room, which need no model."""
    return replace(facts, safety=safety_figures(facts.plant.loaded, facts.id))


@pytest.mark.parametrize(("setting", "severity"), [("24 bar g", None), ("26 bar g", "warning"), ("29 bar g", "error")])
def test_limiter_against_the_nameplate(facts: Facts, setting: str, severity: str | None) -> None:
    """With a relief valve the limiter may have 0.9 of 28 bar g = 25.2 bar g (EN 378-2 table 3, from memory)."""
    here = with_safety(facts({"controls": {"high_pressure_limit": setting}}))
    found = list(high_pressure.limiter_over_allowable(here))
    assert [remark.severity for remark in found] == ([severity] if severity else [])
    for remark in found:
        assert figure(remark, "high-pressure limiter").text == setting.replace(" bar g", ".00 bar g")
        assert figure(remark, "allowable pressure, high side").value == pytest.approx(28e5 + ATMOSPHERE)
        highest = [f.value for f in remark.figures][2]
        assert highest == pytest.approx(25.2e5 + ATMOSPHERE)


@pytest.mark.parametrize(
    ("relief", "titles"),
    [("28 bar g", 0), ("30 bar g", 1), ("23 bar g", 1)],
)
def test_relief_valve_in_order(facts: Facts, relief: str, titles: int) -> None:
    """It opens at most at 28 bar g, and after the limiter of 24 bar g."""
    found = list(high_pressure.relief_out_of_order(facts({"receiver": {"relief_valve": relief}})))
    assert [remark.severity for remark in found] == ["error"] * titles
    for remark in found:
        assert figure(remark, "relief valve").value == pytest.approx(float(relief.split()[0]) * 1e5 + ATMOSPHERE)


def test_a_receiver_without_a_relief_valve(facts: Facts) -> None:
    """A note, since small systems may go without; the base plant has one."""
    (remark,) = high_pressure.receiver_without_relief(facts({"receiver": {"relief_valve": None}}))
    assert (remark.severity, remark.path) == ("note", "systems.one.receiver")
    assert not list(high_pressure.receiver_without_relief(facts()))


@pytest.mark.parametrize(
    ("expected", "uncertainty", "severity"),
    [(15e5, 0.1e5, None), (23.5e5, 0.1e5, "warning"), (25.2e5, 0.3e5, "warning"), (27e5, 0.3e5, "error")],
)
def test_limiter_against_the_hottest_day(
    facts: Facts, expected: float, uncertainty: float, severity: str | None
) -> None:
    """24 bar g is 25.01 bar absolute: 23.5 bar is too near, 27 bar surely trips."""
    here = facts(expected={"hottest": {"discharge_pressure": (expected, uncertainty)}})
    found = list(high_pressure.limiter_below_the_day(here))
    assert [remark.severity for remark in found] == ([severity] if severity else [])
    for remark in found:
        limit = 24e5 + ATMOSPHERE
        share = figure(remark, "margin, share of the absolute setting").value
        assert share == pytest.approx((limit - expected) / limit)


def test_standstill_over_the_nameplate(facts: Facts) -> None:
    """R-290 at 32 °C stands at 11.3 bar absolute (reference tables: 11.34): too much for 8 bar g, not for 17."""
    here = with_safety(facts({"nameplate": {"allowable_pressure_low": "8 bar g"}}))
    (remark,) = allowable.standstill_over_allowable(here)
    assert remark.severity == "error"
    assert remark.path == "systems.one.nameplate.allowable_pressure_low"
    assert remark.figures[0].value == pytest.approx(11.3e5, rel=0.01)
    assert figure(remark, "allowable pressure, low side").value == pytest.approx(8e5 + ATMOSPHERE)
    assert not list(allowable.standstill_over_allowable(with_safety(facts())))


def test_standstill_of_carbon_dioxide_that_nothing_shows(facts: Facts) -> None:
    """Above 31 °C (NIST: 30.98 °C) a volume is asked for, with the least one; a volume, or a cool site, answers."""
    plate = {"allowable_pressure_low": "80 bar g", "allowable_pressure_high": "130 bar g"}
    carbon = {"refrigerant": "R-744", "nameplate": plate}
    (remark,) = allowable.standstill_not_shown(with_safety(facts(carbon)))
    assert remark.severity == "warning"
    assert "internal_volume" in remark.what_to_do
    assert 0 < remark.figures[1].value < 0.4 / 600
    volumes = {"evaporator": {"internal_volume": "2 L"}, "condenser": {"internal_volume": "0.5 L"}}
    answered = with_safety(facts({**carbon, **volumes}))
    assert not list(allowable.standstill_not_shown(answered))
    assert not list(allowable.standstill_over_allowable(answered))
    assert not list(allowable.standstill_not_shown(with_safety(facts())))


def test_standstill_of_carbon_dioxide_over_the_nameplate(facts: Facts) -> None:
    """0.4 kg in 0.5 L with a receiver of 2 L stays below 80 bar g; 2 kg in the same passes it."""
    carbon = {
        "refrigerant": "R-744",
        "nameplate": {"allowable_pressure_low": "80 bar g", "allowable_pressure_high": "130 bar g"},
        "evaporator": {"internal_volume": "0.3 L"},
        "condenser": {"internal_volume": "0.2 L"},
    }
    assert not list(allowable.standstill_over_allowable(with_safety(facts(carbon))))
    (remark,) = allowable.standstill_over_allowable(with_safety(facts({**carbon, "charge": "2 kg"})))
    assert remark.path == "systems.one.nameplate.allowable_pressure_low"


def test_a_nameplate_below_the_ambient_class(facts: Facts) -> None:
    """EN 378-2 table 2 asks for saturation at 55 °C on an air-cooled high side up to 32 °C: 19.1 bar absolute."""
    here = with_safety(facts({"nameplate": {"allowable_pressure_high": "16 bar g"}, "receiver": None}))
    (remark,) = allowable.allowable_below_table(here)
    assert remark.severity == "warning"
    assert remark.figures[0].value == pytest.approx(refrigerant("R-290").bubble(328.15).p, rel=1e-6)
    assert not list(allowable.allowable_below_table(with_safety(facts())))


@pytest.mark.parametrize(
    ("expected", "uncertainty", "severity"),
    [(3e5, 0.1e5, None), (1.6e5, 0.1e5, "warning"), (1.45e5, 0.1e5, "warning"), (1.2e5, 0.1e5, "error")],
)
def test_cut_out_against_the_expected_suction(
    facts: Facts, expected: float, uncertainty: float, severity: str | None
) -> None:
    """0.5 bar g is 1.51 bar absolute: 1.6 bar is too near, 1.2 bar surely stops the machine."""
    here = facts(expected={"design": {"suction_pressure": (expected, uncertainty)}})
    found = list(low_pressure.cut_out_over_suction(here))
    assert [remark.severity for remark in found] == ([severity] if severity else [])
    for remark in found:
        assert figure(remark, "low-pressure cut-out").text == "0.50 bar g"
        cut_out = 0.5e5 + ATMOSPHERE
        assert figure(remark, "margin, share of the absolute setting").value == pytest.approx(
            (expected - cut_out) / cut_out
        )


def test_a_cut_in_that_is_never_reached(facts: Facts) -> None:
    """R-290 at 4 °C holds 5.35 bar absolute (tables), 4.3 bar g: a cut-in of 5 bar g never closes, 2 bar g does."""
    (remark,) = low_pressure.never_cuts_in(facts({"controls": {"low_pressure_cut_in": "5 bar g"}}))
    assert remark.severity == "error"
    assert figure(remark, "saturation at the room temperature").value == pytest.approx(5.35e5, rel=0.01)
    assert not list(low_pressure.never_cuts_in(facts()))


@pytest.mark.parametrize(
    ("setting", "refrigerant_name", "suction", "severity"),
    [
        ("-0.1 bar g", "R-290", 1.5e5, "error"),
        ("-0.1 bar g", "R-290", 0.9e5, "warning"),
        ("0.1 bar g", "R-290", 1.5e5, None),
        ("-0.1 bar g", "R-448A", 1.5e5, None),
    ],
)
def test_a_cut_out_that_lets_air_in(
    facts: Facts, setting: str, refrigerant_name: str, suction: float, severity: str | None
) -> None:
    """R-290 burns (class A3), R-448A does not (A1); a plant made for a vacuum is told of it and not refused."""
    change = {"controls": {"low_pressure_cut_out": setting}, "refrigerant": refrigerant_name}
    here = facts(change, expected={"design": {"suction_pressure": (suction, 1e3)}})
    found = [remark.severity for remark in low_pressure.cut_out_below_the_air(here)]
    assert found == ([severity] if severity else [])


@pytest.mark.parametrize(("expected", "fires"), [(0.9e5, True), (1.2e5, False)])
def test_suction_below_atmosphere(facts: Facts, expected: float, fires: bool) -> None:
    """0.9 bar absolute draws in air at sea level; 1.2 bar does not."""
    found = list(low_pressure.below_atmosphere(facts(expected={"design": {"suction_pressure": (expected, 1e3)}})))
    assert [remark.severity for remark in found] == (["warning"] if fires else [])
    if fires:
        assert found[0].figures[0].text.startswith("−0.11 bar g")


def test_suction_below_the_atmosphere_of_a_mountain_is_judged_there(facts: Facts) -> None:
    """At 2000 m the air has 795 hPa (ISO 2533), so that 0.9 bar absolute is still above it."""
    expected = {"design": {"suction_pressure": (0.9e5, 1e3)}}
    here = facts(expected=expected, plant={"altitude": "2000 m"})
    assert not list(low_pressure.below_atmosphere(here))


def test_a_start_on_the_coldest_day(facts: Facts) -> None:
    """R-290 at -10 °C holds 3.45 bar absolute (reference tables), 2.4 bar g: a cut-in of 3 bar g does not close."""
    (remark,) = low_pressure.cold_start(facts({"controls": {"low_pressure_cut_in": "3 bar g"}}))
    assert remark.severity == "warning"
    assert figure(remark, "saturation at the coldest outdoor air").value == pytest.approx(3.45e5, rel=0.005)
    assert not list(low_pressure.cold_start(facts()))
