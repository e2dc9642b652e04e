"""Test pressures, limit devices, standstill and design pressures of a described plant."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from commission.description import LoadedPlant, load_plant
from commission.errors import NotCalculatedError
from commission.properties import refrigerant
from commission.quantities import methods
from commission.safety import FIGURE_TITLES, hottest_ambient, limit_order, safety_figures, strength_test_steps

Plants = Callable[..., LoadedPlant]
VOLUMES = "evaporator: {{internal_volume: {}}}\n    condenser: {{internal_volume: {}}}"
CO2_PLATE = "allowable_pressure_low: 80 bar g, allowable_pressure_high: 130 bar g"


def gauge(loaded: LoadedPlant, absolute: float) -> float:
    """bar gauge at the site."""
    return (absolute - loaded.barometric_pressure) / 1e5


def test_the_lowest_stamped_pressure_sets_the_test_pressure(plant: Plants) -> None:
    """EN 378-2 table 3: 1.1 and 1.0 times the lowest nameplate pressure that is joined, counted in gauge."""
    loaded = plant()
    found = safety_figures(loaded, "one").found
    assert gauge(loaded, found["strength_test_pressure"].value) == pytest.approx(18.7)
    assert gauge(loaded, found["tightness_test_pressure"].value) == pytest.approx(17.0)
    assert gauge(loaded, found["strength_test_pressure_high_side"].value) == pytest.approx(30.8)


def test_altitude_does_not_change_a_gauge_test_pressure(plant: Plants) -> None:
    """Stamped pressures are gauge; at 2500 m the gauge reads the same, the absolute pressure less."""
    low, high = plant(), None
    low_value = safety_figures(low, "one").found["strength_test_pressure"].value
    high = plant(altitude="2500 m")
    high_value = safety_figures(high, "one").found["strength_test_pressure"].value
    assert gauge(high, high_value) == pytest.approx(18.7)
    assert high_value < low_value - 20e3


def test_a_saturation_pressure_never_sets_a_test_pressure(plant: Plants) -> None:
    """A hotter design day moves the calculated least allowable pressure, not the test pressure."""
    mild = safety_figures(plant(summer="30 °C"), "one").found
    hot = safety_figures(plant(summer="45 °C"), "one").found
    assert hot["design_pressure_high_side"].value > mild["design_pressure_high_side"].value
    assert hot["strength_test_pressure"].value == mild["strength_test_pressure"].value


def test_a_sealed_unit_is_not_tested_again(plant: Plants) -> None:
    """Factory-sealed units have no test pressure and no evacuation, and the reason is given."""
    figures = safety_figures(plant(sealed="yes"), "one")
    for key in ("strength_test_pressure", "tightness_test_pressure", "evacuation_target"):
        assert key not in figures.found
        assert "sealed" in figures.not_calculated[key]


def test_without_a_nameplate_there_is_no_test_pressure(plant: Plants) -> None:
    """Nothing is put in the place of a stamp that was not read."""
    loaded = plant(nameplate="voltage: 400 V")
    figures = safety_figures(loaded, "one")
    assert "strength_test_pressure" not in figures.found
    assert "nameplate.allowable_pressure_low" in figures.not_calculated["strength_test_pressure"]
    with pytest.raises(NotCalculatedError, match="no allowable pressure"):
        strength_test_steps(loaded, "one")


def test_one_stamp_alone_says_so(plant: Plants) -> None:
    """With one side stated only, the figure carries a warning to read the other nameplate."""
    figures = safety_figures(plant(nameplate="allowable_pressure_high: 28 bar g"), "one")
    assert "only one side" in figures.found["strength_test_pressure"].note


def test_standstill_is_the_bubble_point_at_the_hottest_ambient(plant: Plants) -> None:
    """CoolProp's published check: R-290 at 20 °C 836.46 kPa, at 40 °C 1369.4 kPa (handbook values)."""
    assert safety_figures(plant(summer="40 °C"), "one").found["standstill_pressure"].value == pytest.approx(
        1369.4e3, rel=1e-3
    )


def test_carbon_dioxide_has_no_standstill_saturation_on_a_hot_day(plant: Plants) -> None:
    """Above 31 °C there is no liquid: the figure says why it is missing."""
    figures = safety_figures(plant(refrigerant="R-744", summer="35 °C"), "one")
    assert "no liquid" in figures.not_calculated["standstill_pressure"]


def test_carbon_dioxide_without_a_volume_says_the_least_one(plant: Plants) -> None:
    """Whatever the circuit holds, one smaller than charge over density at the stamp passes it; the keys are named."""
    loaded = plant(refrigerant="R-744", summer="35 °C", charge="2 kg", nameplate=CO2_PLATE)
    figures = safety_figures(loaded, "one")
    assert "evaporator.internal_volume and condenser.internal_volume" in figures.not_calculated["standstill_pressure"]
    least = figures.found["standstill_least_volume"].value
    density = refrigerant("R-744").vapour(308.15, 80e5 + loaded.barometric_pressure).rho
    assert least == pytest.approx(2.0 / density)


def test_the_least_volume_stands_at_the_stamp(plant: Plants) -> None:
    """Both figures are one relation: in the least volume the charge stands at the lowest stamped pressure."""
    changes = {"refrigerant": "R-744", "summer": "35 °C", "charge": "2 kg", "nameplate": CO2_PLATE}
    least = safety_figures(plant(**changes), "one").found["standstill_least_volume"].value
    half, quarter = (f"{least * 1e3 / parts:.9f} L" for parts in (2, 4))
    volumes = VOLUMES.format(half, quarter)
    loaded = plant(**changes, volumes=volumes, receiver=f"volume: {quarter}")
    figures = safety_figures(loaded, "one")
    assert gauge(loaded, figures.found["standstill_pressure"].value) == pytest.approx(80.0, rel=1e-6)
    assert limit_order(loaded, "one", figures).problems == ()


def test_too_small_a_circuit_is_out_of_order(plant: Plants) -> None:
    """2 kg in 2.9 L at 35 °C is denser than at 80 bar g: the low side passes its stamp when the power is cut."""
    changes = {"refrigerant": "R-744", "summer": "35 °C", "charge": "2 kg", "nameplate": CO2_PLATE}
    loaded = plant(**changes, volumes=VOLUMES.format("1.5 L", "0.4 L"), receiver="volume: 1 L")
    titles = [problem.title for problem in limit_order(loaded, "one", safety_figures(loaded, "one")).problems]
    assert any("at standstill on the hottest day the low side" in title for title in titles)


def test_without_a_charge_nothing_is_said_of_standstill(plant: Plants) -> None:
    """Neither figure stands on an assumed charge; and with liquid present no volume is asked for."""
    path = plant(refrigerant="R-744", summer="35 °C").folder / "plant.yaml"
    path.write_text(path.read_text(encoding="utf-8").replace("    charge: 0.45 kg\n", ""), encoding="utf-8")
    bare = safety_figures(load_plant(path.parent), "one").not_calculated
    assert all("the charge is not stated" in bare[key] for key in ("standstill_pressure", "standstill_least_volume"))
    assert "liquid present" in safety_figures(plant(), "one").not_calculated["standstill_least_volume"]


def test_a_blend_stands_at_its_bubble_point(plant: Plants) -> None:
    """A zeotropic blend is held to its bubble pressure (RSIF IF-06 1.2), above its dew pressure."""
    value = safety_figures(plant(refrigerant="R-448A"), "one").found["standstill_pressure"].value
    fluid = refrigerant("R-448A")
    assert value == pytest.approx(fluid.bubble(303.15).p)
    assert value > fluid.dew(303.15).p * 1.05


@pytest.mark.parametrize("altitude", ["0 m", "2500 m"])
def test_no_cut_out_may_act_below_the_air_of_its_site(plant: Plants, altitude: str) -> None:
    """Zero on the gauge, whatever the altitude (ISO 2533: 101.325 kPa at the sea, 74.7 kPa at 2500 m); a plant that is
    set to run below it says so, and so does one that states no cut-out."""
    found = safety_figures(plant(altitude=altitude), "one").found["low_pressure_trip_lowest"]
    assert found.value == pytest.approx({"0 m": 101325.0, "2500 m": 74690.0}[altitude], rel=1e-3)
    low = plant(altitude=altitude, controls="low_pressure_cut_out: -0.2 bar g, low_pressure_cut_in: 0.5 bar g")
    assert "below the pressure of the air" in safety_figures(low, "one").not_calculated["low_pressure_trip_lowest"]
    none = plant(altitude=altitude, controls="high_pressure_limit: 22 bar g")
    assert "not stated" in safety_figures(none, "one").not_calculated["low_pressure_trip_lowest"]


def test_carbon_dioxide_never_falls_to_its_triple_point(example_folder: Path) -> None:
    """Its cut-out may act no lower than 5.18 bar absolute (Span and Wagner 1996; CoolProp: 5.180): dry ice below."""
    lowest = safety_figures(load_plant(example_folder), "shower-water").found["low_pressure_trip_lowest"]
    assert lowest.value == pytest.approx(refrigerant("R-744").dew(216.6).p, rel=0.002)


@pytest.mark.parametrize(
    ("summer", "high", "low"),
    [("32 °C", 55, 27), ("32.1 °C", 59, 33), ("38 °C", 59, 33), ("43 °C", 63, 38), ("55 °C", 67, 38)],
)
def test_ambient_classes_and_their_edges(plant: Plants, summer: str, high: float, low: float) -> None:
    """EN 378-2 table 2 (from memory; 59 and 33 °C at up to 38 °C read in RSIF): an edge belongs to its own column."""
    found = safety_figures(plant(summer=summer), "one").found
    fluid = refrigerant("R-290")
    assert found["design_pressure_high_side"].value == pytest.approx(fluid.bubble(high + 273.15).p)
    assert found["design_pressure_low_side"].value == pytest.approx(fluid.bubble(low + 273.15).p)


def test_hotter_than_the_table_is_not_extrapolated(plant: Plants) -> None:
    """Above 55 °C the table ends, and so does the figure."""
    assert "ends there" in safety_figures(plant(summer="56 °C"), "one").not_calculated["design_pressure_high_side"]


def test_limits_in_good_order_give_no_finding(plant: Plants) -> None:
    """Expected, limit, relief and allowable pressure in rising order."""
    loaded = plant()
    order = limit_order(loaded, "one", safety_figures(loaded, "one"))
    assert order.problems == ()
    pressures = [step.pressure for step in order.steps]
    assert pressures == sorted(pressures)


@pytest.mark.parametrize(
    ("changes", "words"),
    [
        ({"controls": "high_pressure_limit: 25.3 bar g"}, "above what the nameplate allows"),
        ({"receiver": "volume: 2 L, relief_valve: 28.1 bar g"}, "opens above the allowable pressure"),
        (
            {"controls": "high_pressure_limit: 24 bar g", "receiver": "volume: 2 L, relief_valve: 23 bar g"},
            "before the high-pressure limit",
        ),
        (
            {"nameplate": "allowable_pressure_low: 9 bar g, allowable_pressure_high: 28 bar g", "summer": "38 °C"},
            "at standstill on the hottest day the low side",
        ),
    ],
)
def test_limits_out_of_order_are_found(plant: Plants, changes: dict[str, str], words: str) -> None:
    """EN 378-2 table 3: limit up to 0.9 PS with relief, relief up to PS, limit below relief; standstill below PS."""
    loaded = plant(**changes)
    problems = limit_order(loaded, "one", safety_figures(loaded, "one")).problems
    assert any(words in problem.title for problem in problems)
    assert all(problem.figures and problem.what_to_do and problem.path for problem in problems)


def test_the_limit_may_reach_the_stamp_where_no_relief_is_fitted(plant: Plants) -> None:
    """EN 378-2 table 3 (from memory): 1.0 PS without a relief device, 0.9 PS with one."""
    without = plant(receiver="volume: 2 L", controls="high_pressure_limit: 28 bar g")
    figures = safety_figures(without, "one")
    assert gauge(without, figures.found["high_pressure_limit_highest"].value) == pytest.approx(28.0)
    assert limit_order(without, "one", figures).problems == ()


def test_every_figure_is_found_or_explained(plant: Plants) -> None:
    """No key is silently missing, and each figure names a known method, a document and a known mark."""
    figures = safety_figures(plant(), "one")
    assert set(figures.found) | set(figures.not_calculated) == set(FIGURE_TITLES)
    for figure in figures.found.values():
        assert figure.explained.method in methods()
        assert figure.document
        assert figure.sureness


@pytest.mark.parametrize(
    ("oil", "micron"),
    [("POE 32", 300), ("PAG 100", 300), ("PVE 68", 300), ("mineral oil 46", 500), ("AB 32", 500), ("house mix", 500)],
)
def test_an_oil_that_draws_water_asks_for_a_deeper_vacuum(plant: Plants, oil: str, micron: int) -> None:
    """Common practice, no source: 200 to 300 micron with polyolester, PAG and PVE, 500 micron with others."""
    loaded = plant(controls=f"high_pressure_limit: 22 bar g}}\n    compressor: {{oil: {oil}")
    found = safety_figures(loaded, "one").found["evacuation_target"]
    assert found.value / 0.133322387415 == pytest.approx(micron, rel=1e-3)
    assert found.value < safety_figures(loaded, "one").found["rise_test_limit"].value
    assert (oil in found.note) is (oil != "house mix")


def test_one_hottest_ambient_for_the_site(plant: Plants) -> None:
    """Units in one yard share the site's figure whatever each is designed for; a hotter place states its own."""
    loaded = plant(controls="high_pressure_limit: 22 bar g}\n    design: {heat_sink_inlet_temperature: 43 °C")
    found = hottest_ambient(loaded, "one")
    assert found is not None
    assert found[0] == pytest.approx(303.15)
    path = loaded.folder / "plant.yaml"
    text = path.read_text(encoding="utf-8")
    path.write_text(text.replace("outdoors: yes", "outdoors: yes, hottest_air: 38 °C"), encoding="utf-8")
    hotter = hottest_ambient(load_plant(loaded.folder), "one")
    assert hotter is not None
    assert hotter[0] == pytest.approx(311.15)
    path.write_text(text.replace("climate: {summer_dry_bulb: 30 °C}", "climate: {}"), encoding="utf-8")
    designed = hottest_ambient(load_plant(loaded.folder), "one")
    assert designed is not None
    assert designed[0] == pytest.approx(316.15)


def test_each_relief_valve_stands_in_the_order(plant: Plants) -> None:
    """EN 378-2 table 3: a valve of the low side may open below the high-pressure limit, one of the high side not."""
    valves = "high_pressure_limit: 22 bar g}\n    relief_valves: {low side: 17 bar g, condenser: CONDENSER"
    good = plant(receiver="volume: 2 L", controls=valves.replace("CONDENSER", "28 bar g"))
    order = limit_order(good, "one", safety_figures(good, "one"))
    assert order.problems == ()
    assert [s.title for s in order.steps if s.low_side] == ["relief valve, low side", "allowable pressure, low side"]
    assert gauge(good, safety_figures(good, "one").found["high_pressure_limit_highest"].value) == pytest.approx(25.2)
    bad = plant(receiver="volume: 2 L", controls=valves.replace("CONDENSER", "21 bar g"))
    (problem,) = limit_order(bad, "one", safety_figures(bad, "one")).problems
    assert problem.title == "the relief valve, condenser opens before the high-pressure limit stops the compressor"


def test_evacuation_follows_refrigerant_and_charge(plant: Plants) -> None:
    """RSIF IF-09 1.6.2: 3 h below 20 kg, 6 h from 20 kg on and for ammonia; 675 Pa for ammonia."""
    small = safety_figures(plant(charge="19.9 kg"), "one").found
    large = safety_figures(plant(charge="20 kg"), "one").found
    ammonia = safety_figures(plant(refrigerant="R-717", charge="5 kg"), "one")
    assert (small["evacuation_hold"].value, large["evacuation_hold"].value) == (10800.0, 21600.0)
    assert ammonia.found["evacuation_hold"].value == 21600.0
    assert ammonia.found["evacuation_limit"].value == 675.0
    assert ammonia.found["rise_test_limit"].value == 675.0


def test_a_gauge_figure_is_shown_at_the_air_pressure_of_the_site(plant: Plants) -> None:
    """The pre-test pressure of RSIF IF-09 1.3.1 is 1.5 bar g at any altitude, in the figure and in its input alike."""
    loaded = plant()
    found = safety_figures(loaded, "one").found["pre_test_pressure"]
    (given,) = found.explained.inputs
    assert found.value - loaded.barometric_pressure == pytest.approx(1.5e5)
    assert given.value == found.value
