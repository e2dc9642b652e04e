"""Formulas of the safety room against published examples and an independent equation of state.

Sources: Spain, Real Decreto 552/2019 (RSIF), instructions IF-02 to IF-10, a public legal text that follows EN 378:2016;
NIST / Span et al. 2000 equation of state of nitrogen as in CoolProp.
"""

from __future__ import annotations

import pytest
from CoolProp.CoolProp import PropsSI

from commission.properties import refrigerant
from commission.quantities import Kind
from commission.safety.alternatives import measures_needed
from commission.safety.facts import fact, load, read_value
from commission.safety.formulas import (
    annualised_leak_rate,
    co2_equivalent,
    comfort_area,
    comfort_charge,
    concentration,
    dispersal_charge,
    emergency_ventilation_ashrae15,
    emergency_ventilation_en378,
    flammable_cap,
    nitrogen_pressure,
    pressure_steps,
)

ATMOSPHERE = 101325.0


def test_r410a_in_a_bedroom_by_practical_limit() -> None:
    """RSIF IF-04 appendix 5: R-410A, 16 m² x 2.7 m, practical limit 0.44 kg/m³: 19 kg."""
    assert dispersal_charge(0.44, 16 * 2.7) == pytest.approx(19.0, abs=0.05)


def test_propane_by_practical_limit_before_its_cap() -> None:
    """RSIF IF-04 appendix 5, example 2: R-290, 55 m² x 3.5 m, 0.008 kg/m³: 1.54 kg, then capped to 1.5 kg."""
    assert dispersal_charge(0.008, 55 * 3.5) == pytest.approx(1.54, abs=0.005)
    assert fact("class3_b_occupied_rsif").value == 1.5


def test_a_fifth_of_the_flammability_limit_of_ammonia() -> None:
    """RSIF IF-04 appendix 5: 0.116 kg/m³ x 20 % = 0.0232 kg/m³."""
    assert fact("lfl_share").value * 0.116 == pytest.approx(0.0232, abs=5e-5)


def test_caps_of_propane_in_round_figures() -> None:
    """RSIF IF-04: m1, m2, m3 of R-290 (0.038 kg/m³) come from 150 g, 1 kg and 5 kg."""
    m1, m2, m3 = (flammable_cap(0.038, fact(f"m{i}_volume").value) for i in (1, 2, 3))
    assert (m1, m2, m3) == pytest.approx((0.152, 0.988, 4.94), abs=5e-4)


@pytest.mark.parametrize(("height", "area"), [(0.6, 142.1), (1.0, 51.2), (1.8, 15.8), (2.2, 10.6)])
def test_smallest_room_for_propane_in_comfort_cooling(height: float, area: float) -> None:
    """EN 378-1 C.2.1 / IEC 60335-2-40 annex GG, 0.3 kg of R-290, LFL 0.038 (table recomputed from the formula)."""
    assert comfort_area(0.3, 0.038, height) == pytest.approx(area, abs=0.05)
    assert comfort_charge(0.038, height, area) == pytest.approx(0.3, rel=3e-3)


def test_r134a_between_the_two_quantity_limits_needs_one_measure() -> None:
    """RSIF IF-04 appendix 5: 90 kg of R-134a in 300 m³ is 0.30 kg/m³, over QLMV 0.28, under QLAV 0.58."""
    assert measures_needed(90 / 300, "R-134a", lowest_basement=False) == 1
    assert measures_needed(0.28, "R-134a", lowest_basement=False) == 0
    assert measures_needed(0.581, "R-134a", lowest_basement=False) == 2
    assert measures_needed(0.581, "R-134a", lowest_basement=True) is None


@pytest.mark.parametrize(
    ("name", "celsius", "published", "within"), [("R-717", 33.0, 11.75, 0.005), ("R-410A", 59.0, 36.1, 0.015)]
)
def test_allowable_pressure_from_saturation(name: str, celsius: float, published: float, within: float) -> None:
    """RSIF IF-06 3.6, gauge: R-717 at 33 °C 11.75 bar; R-410A at 59 °C 36.1 bar (older chart, 1.3 % lower)."""
    gauge = (refrigerant(name).bubble(celsius + 273.15).p - ATMOSPHERE) / 1e5
    assert gauge == pytest.approx(published, rel=within)


def test_design_temperatures_that_published_examples_use() -> None:
    """RSIF IF-06 3.6: 59 °C for an air-cooled high side, 33 °C for an indoor low side, ambient up to 38 °C."""
    table = load("design_temperatures.yaml")
    column = table["ambient_at_most"].index("38 °C")
    assert table["rows"]["high_side_air_cooled"]["at"][column] == "59 °C"
    assert table["rows"]["low_side_indoors"]["at"][column] == "33 °C"


def test_emergency_ventilation_of_a_hundred_kilograms() -> None:
    """EN 378-3:2016 5.13 gives 0.302 m³/s and ASHRAE 15 gives 0.700 m³/s for 100 kg; 100·√(220.46 lb) cfm agrees."""
    assert emergency_ventilation_en378(100) == pytest.approx(0.302, abs=5e-4)
    assert emergency_ventilation_ashrae15(100) == pytest.approx(0.700, abs=5e-4)
    assert emergency_ventilation_ashrae15(100) == pytest.approx(
        100 * (100 / 0.45359237) ** 0.5 * 0.3048**3 / 60, rel=0.0015
    )


@pytest.mark.parametrize("bar", [1.0, 10.0, 18.7, 30.8, 60.0])
@pytest.mark.parametrize(("first", "later"), [(10.0, 30.0), (30.0, 0.0), (20.0, 21.0), (-10.0, 40.0)])
def test_nitrogen_hold_against_the_equation_of_state(bar: float, first: float, later: float) -> None:
    """Span et al. 2000 (CoolProp), constant density: within 0.03 % of the pressure up to 60 bar."""
    pressure, t1, t2 = bar * 1e5, first + 273.15, later + 273.15
    density = PropsSI("Dmolar", "P", pressure, "T", t1, "Nitrogen")
    expected = PropsSI("P", "Dmolar", density, "T", t2, "Nitrogen")
    assert nitrogen_pressure(pressure, t1, t2) == pytest.approx(expected, rel=3e-4)


@pytest.mark.parametrize("bar", [100.0, 145.0])
def test_nitrogen_hold_of_a_carbon_dioxide_plant(bar: float) -> None:
    """Span et al. 2000 (CoolProp) at the test pressures of carbon dioxide plants: within 0.3 %."""
    density = PropsSI("Dmolar", "P", bar * 1e5, "T", 283.15, "Nitrogen")
    expected = PropsSI("P", "Dmolar", density, "T", 303.15, "Nitrogen")
    assert nitrogen_pressure(bar * 1e5, 283.15, 303.15) == pytest.approx(expected, rel=3e-3)


def test_nitrogen_hold_tends_to_the_ideal_gas() -> None:
    """At low pressure p2 = p1·T2/T1, absolute (ideal gas)."""
    assert nitrogen_pressure(1e3, 280.0, 300.0) == pytest.approx(1e3 * 300 / 280, rel=1e-5)
    assert nitrogen_pressure(20e5, 290.0, 290.0) == pytest.approx(20e5, rel=1e-12)


@pytest.mark.parametrize("wrong", [(0.0, 290.0, 290.0), (2e7, 290.0, 290.0), (1e6, -5.0, 290.0), (1e6, 290.0, 500.0)])
def test_nitrogen_hold_refuses_what_it_cannot_answer(wrong: tuple[float, float, float]) -> None:
    """Outside its range the function says so instead of extrapolating."""
    with pytest.raises(ValueError, match="no nitrogen hold"):
        nitrogen_pressure(*wrong)


def test_evacuation_levels_in_both_units() -> None:
    """270 Pa = 2025 micron, 675 Pa = 5063 micron (RSIF IF-09 1.6; 1 micron = 0.133322 Pa); 500 micron = 66.7 Pa."""
    assert fact("evacuation_limit").value / 0.133322387415 == pytest.approx(2025, abs=0.5)
    assert fact("evacuation_limit_ammonia").value / 0.133322387415 == pytest.approx(5063, abs=0.5)
    assert fact("evacuation_target").value == pytest.approx(66.7, abs=0.05)


def test_the_evacuation_target_dries() -> None:
    """The target lies far below the vapour pressure of ice at −20 °C, 103 Pa (Goff-Gratch / IAPWS), so water leaves."""
    assert fact("evacuation_target").value < 103
    assert fact("evacuation_target_dry").value < fact("evacuation_target").value < fact("evacuation_limit").value


def test_steps_of_the_pressure_test() -> None:
    """RSIF IF-09 1.3.1: 1.5 bar, then 50 %, then about 10 % each up to the test pressure."""
    assert pressure_steps(1.5e5, 20e5) == pytest.approx([1.5e5, 10e5, 12e5, 14e5, 16e5, 18e5, 20e5])
    assert pressure_steps(1.5e5, 2.5e5) == pytest.approx([1.5e5, 1.75e5, 2.0e5, 2.25e5, 2.5e5])


@pytest.mark.parametrize(
    ("name", "kilograms"), [("R-134a", 3.5), ("R-404A", 1.27), ("R-407C", 2.8), ("R-410A", 2.4), ("R-32", 7.4)]
)
def test_kilograms_that_make_five_tonnes(name: str, kilograms: float) -> None:
    """Public trade page, kg for 5 t CO₂: R-134a 3.5, R-404A 1.27, R-407C 2.8, R-410A 2.4, R-32 7.4."""
    gwp = refrigerant(name).register.gwp["eu573"].number
    assert gwp is not None
    assert co2_equivalent(kilograms, gwp) == pytest.approx(5000, rel=0.01)


def test_leak_rate_counts_at_most_a_year() -> None:
    """40 CFR 82.152, annualizing: 5 of 50 lb after 73 days is 50 % a year; after two years 10 %."""
    assert annualised_leak_rate(5, 50, 73) == pytest.approx(0.5)
    assert annualised_leak_rate(5, 50, 730) == pytest.approx(0.1)
    with pytest.raises(ValueError, match="no leak rate"):
        annualised_leak_rate(5, 0, 73)


def test_mass_concentration_of_a_volume_share() -> None:
    """ASHRAE 34: R-134a 50 000 ppm is 210 g/m³, R-744 30 000 ppm is 54 g/m³ (M / 24.465 at 25 °C)."""
    assert concentration(50000, 0.10203) == pytest.approx(0.210, abs=0.002)
    assert concentration(30000, 0.04401) == pytest.approx(0.054, abs=0.0005)


def test_published_levels_for_people() -> None:
    """NIOSH: immediately dangerous to life or health, ammonia 300 ppm, carbon dioxide 40 000 ppm."""
    levels = load("people.yaml")["levels"]
    assert levels["R-717"][-1]["ppm"] == 300
    assert levels["R-744"][-1]["ppm"] == 40000


def test_gauge_facts_keep_their_reference() -> None:
    """A pressure written as gauge counts from the site's own air pressure."""
    pre_test = fact("pre_test_pressure")
    assert pre_test.gauge == pytest.approx(1.5e5)
    assert pre_test.gauge_at(90000.0) == pytest.approx(2.4e5)
    assert read_value("1.5 bar g", Kind.PRESSURE) == pytest.approx(1.5e5 + ATMOSPHERE)
