"""One fact of a description changed, and what that does to the list."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from commission.checklists import Item, stages
from commission.checklists.library import library
from commission.description import LoadedPlant, load_plant
from commission.prediction import fit
from tests.checklists.conftest import YARD

BACK_UP = "    back_up: {by: electric element, power: 6 kW, where: flow pipe"
THERMOSTAT = "{room_temperature: 25 °C, room_differential: 1 K}"
TEXT = (YARD / "plant.yaml").read_text(encoding="utf-8")


def listed(folder: Path, system_id: str, *changes: tuple[str, str]) -> dict[str, Item]:
    """The items of a system of the yard after changes of its text, without a fitted model."""
    text = TEXT
    for old, new in changes:
        assert old in text, old
        text = text.replace(old, new)
    (folder / "plant.yaml").write_text(text, encoding="utf-8")
    return {item.id: item for stage in stages(load_plant(folder), system_id) for item in stage.items}


def says(item: Item) -> str:
    """What an item must read, in words."""
    assert item.must_read is not None
    return item.must_read.text


def test_a_freezer_is_limited_by_its_regulator_or_by_its_valve(tmp_path: Path) -> None:
    """A valve that limits its pressure is read in place of a regulator; with neither, the missing one is said."""
    regulator = ", crankcase_pressure_regulator: 1.8 bar g"
    valve = ("superheat: 6 K}", "superheat: 6 K, maximum_operating_pressure: 1.5 bar g}")
    first = listed(tmp_path, "freezer")
    assert says(first["first-start.suction-limit"]) == "at most 1.80 bar g"
    assert "first-start.operating-limit" not in first
    by_valve = listed(tmp_path, "freezer", (regulator, ""), valve)
    assert says(by_valve["first-start.operating-limit"]).startswith("at most 1.50 bar g")
    assert "first-start.suction-limit" not in by_valve
    assert "not stated" in says(listed(tmp_path, "freezer", (regulator, ""))["first-start.suction-limit"])


def test_nobody_is_asked_for_pressures_of_a_sealed_unit(tmp_path: Path) -> None:
    """Without ports there is no condensing temperature to read; with ports there is."""
    assert "trim.approach-sink" not in listed(tmp_path, "heat-pump")
    assert "trim.approach-sink" in listed(tmp_path, "heat-pump", ("    sealed: yes\n", ""))


def test_a_store_of_heating_water_has_no_taps(tmp_path: Path) -> None:
    """A buffer of a heating circuit brings no items of hot water."""
    store = (BACK_UP, f"    store: {{volume: 300 L, unvented: yes}}\n{BACK_UP}")
    found = listed(tmp_path, "heat-pump", store)
    assert not {"flows.store-filled", "installation.unvented", "safety.store-cut-out", "upkeep.store-relief"} & set(
        found
    )
    assert {"flows.store-filled", "installation.unvented", "safety.store-cut-out"} <= set(
        listed(tmp_path, "water-heater")
    )


def test_an_element_has_its_cut_out_wherever_it_heats(tmp_path: Path) -> None:
    """In the flow pipe, or in a store of heating water: one cut-out, and no element without."""
    assert "safety.element-cut-out" in listed(tmp_path, "heat-pump")
    store = (BACK_UP, f"    store: {{volume: 300 L}}\n{BACK_UP.replace('flow pipe', 'store top')}")
    in_store = listed(tmp_path, "heat-pump", store)
    assert "safety.store-cut-out" in in_store
    assert "safety.element-cut-out" not in in_store
    boiler = ("by: electric element, power: 6 kW, where: flow pipe", "by: boiler, power: 6 kW, where: flow pipe")
    assert "safety.element-cut-out" not in listed(tmp_path, "heat-pump", boiler)


def test_air_conditioning_has_its_stages_and_its_thermostat(tmp_path: Path) -> None:
    """Each stage that is stated is measured; a thermostat is read where its setting is stated."""
    plain = listed(tmp_path, "split")
    assert not {"first-start.air-stages", "controls.thermostat"} & set(plain)
    stated = listed(
        tmp_path,
        "split",
        ("flow: 1500 m3/h,", "flow: 1500 m3/h, flow_stages: {low: 1000 m3/h, high: 1500 m3/h},"),
        ("compressor: {type: rotary,", f"controls: {THERMOSTAT}\n    compressor: {{type: rotary,"),
    )
    assert says(stated["first-start.air-stages"]) == "low 1000 m³/h, high 1500 m³/h, each within 10 %"
    assert says(stated["controls.thermostat"]).startswith("25.0 °C")


HEATER = ", crankcase_heater: 70 W"


def test_the_crankcase_heater_is_asked_for_where_there_is_one(tmp_path: Path) -> None:
    """By what the description states, whatever the refrigerant; elsewhere nothing speaks of it."""
    found = listed(tmp_path, "freezer")
    assert "(70 W)" in found["electrical.heater"].do
    assert "crankcase heater" in (found["evacuation.level"].caution or "")
    without = listed(tmp_path, "freezer", (HEATER, ""))
    assert "electrical.heater" not in without
    assert "crankcase" not in (without["evacuation.level"].caution or "")
    carbon = ("    condenser: {type: gas cooler}", "    condenser: {type: gas cooler}\n")
    heated = ("oil: PAG 100}", "oil: PAG 100, crankcase_heater: 40 W}")
    assert "electrical.heater" in listed(tmp_path, "water-heater", carbon, heated)


@pytest.mark.parametrize(
    ("stated", "words"),
    [
        ("automatic", "starts again by itself only after the pressure has fallen"),
        ("by hand", "stays out until somebody resets the device by hand"),
        ("by hand with tool", "with a tool"),
        (None, "which is not stated"),
    ],
)
def test_a_limiter_is_reset_as_it_is_made(tmp_path: Path, stated: str | None, words: str) -> None:
    """EN 12263: limiter, cut-out (by hand), safety cut-out (tool); static proof and live trip say the same."""
    old = "high_pressure_limit: 27 bar g, high_pressure_reset: by hand,"
    new = "high_pressure_limit: 27 bar g," + (f" high_pressure_reset: {stated}," if stated else "")
    found = listed(tmp_path, "freezer", (old, new))
    for key in ("safety.high-pressure", "live-trips.high-pressure", "upkeep.high-pressure"):
        assert words in says(found[key])


OTHER_RELIEF = {"heating", "Regulator", "separator"}
"""Words of sentences on the relief valve of the heating water, of its gas vent, or of the nitrogen regulator."""


def test_nothing_speaks_of_relief_valves_that_are_not_described(tmp_path: Path) -> None:
    """The split has none, the freezer's receiver states none; the water heater has two beside a receiver."""
    for system_id in ("split", "freezer", "heat-pump"):
        for item in listed(tmp_path, system_id).values():
            texts = (item.do, item.how, item.if_not, item.hazard, item.must_read.text if item.must_read else None)
            assert not [t for t in texts if t and "relief valve" in t and not OTHER_RELIEF & set(t.split())], item.id
    found = listed(tmp_path, "water-heater")
    assert says(found["safety.relief-settings"]).startswith("gas cooler 130.00 bar g, low side 80.00 bar g; seals")
    assert {"upkeep.relief-look", "upkeep.relief-renewal", "installation.relief-outlet"} <= set(found)


def test_a_sealed_unit_has_no_words_of_an_open_circuit(tmp_path: Path) -> None:
    """No ports, gauges, empty circuit, pressure test or opened limiter; its arrival and its factory papers instead."""
    found = listed(tmp_path, "heat-pump")
    purposes = [stage.purpose for stage in stages(load_plant(tmp_path), "heat-pump")]
    words = " ".join(purposes + [f"{i.do} {i.how or ''} {i.if_not or ''} {i.caution or ''}" for i in found.values()])
    for wrong in ("service port", "gauges", "still empty", "under vacuum", "comes to the site", "0.3 m"):
        assert wrong not in words, wrong
    assert not [key for key in found if key.startswith(("strength.", "evacuation.", "charging."))]
    assert {"readiness.factory-test", "installation.arrival", "installation.sealed-charge"} <= set(found)


def test_superheat_has_one_lower_bound(plant: LoadedPlant) -> None:
    """What the valve holds less its margin, and the band at the compressor; no other figure stands beside them."""
    for system_id in ("cold-room", "freezer-room", "dining-hall", "shower-water"):
        found = fitted(plant, system_id)
        # the valve of an air conditioner that came charged is set by its own controller, and no gauge reads beside it
        assert ("trim.superheat" in found) is (system_id != "dining-hall")
        for key in {"trim.superheat", "trim.compressor-superheat"} & set(found):
            item = found[key]
            assert item.must_read is not None
            assert item.must_read.low is not None
            assert "never below" not in item.must_read.text
            assert not re.search(r"(?<![\d.])5 K", " ".join(filter(None, (item.how, item.if_not, item.caution))))


def test_a_trip_is_judged_no_closer_than_the_gauge_reads(plant: LoadedPlant) -> None:
    """0.25 % of 100 bar is a limit of 0.25 bar: with resolution and air pressure 0.29 bar (95 %), more than the 0.2 bar
    of common practice; the low-side gauge of the freezer room reads finer, and its margin stays (JCGM 100, 4.3.7)."""
    wide = fitted(plant, "shower-water")["live-trips.low-pressure"].must_read
    assert wide is not None
    assert wide.high is not None
    assert wide.value is not None
    assert wide.high - wide.value == pytest.approx(0.2885e5, rel=0.02)
    assert "no closer than gauge to 100 bar can read" in wide.text
    fine = fitted(plant, "freezer-room")["live-trips.pump-down"].must_read
    assert fine is not None
    assert fine.high is not None
    assert fine.value is not None
    assert fine.high - fine.value == pytest.approx(0.2e5)
    assert "no closer" not in fine.text


def test_power_is_read_of_what_its_rating_counts(plant: LoadedPlant, tmp_path: Path) -> None:
    """What the supplier includes, by name; where nobody says, the whole machine, and no guarantee is spoken of."""
    assert fitted(plant, "cold-room")["performance.power"].do == (
        "Read the power input of compressor and condenser fan."
    )
    assert listed(tmp_path, "split")["performance.power"].do == "Read the power input of the whole machine."


def test_voltage_has_its_band(plant: LoadedPlant) -> None:
    """IEC 60038 and EN 50160: nominal voltage within 10 %."""
    found = fitted(plant, "cold-room")["electrical.voltage"]
    assert found.must_read is not None
    assert (found.must_read.low, found.must_read.high) == pytest.approx((360.0, 440.0))
    assert "EN 50160" in found.source


def test_oil_that_draws_water_is_named_with_its_vacuum(plant: LoadedPlant) -> None:
    """PVE and PAG get the deep vacuum, and no sentence on polyolester (common practice, no source)."""
    found = fitted(plant, "dining-hall")
    assert says(found["evacuation.level"]).startswith("at most 40 Pa absolute (300 micron)")
    assert "with PVE 68" in says(found["evacuation.level"])
    for system_id in ("dining-hall", "floor-heating", "shower-water", "cold-room"):
        assert "POE" not in says(fitted(plant, system_id)["performance.discharge-temperature"])
    assert "for POE oil kept below 105 to 110 °C; only at 120.0 °C the limiter stops it" in says(
        fitted(plant, "freezer-room")["performance.discharge-temperature"]
    )


def test_oil_return_is_looked_at_on_every_circuit_that_is_piped(tmp_path: Path, plant: LoadedPlant) -> None:
    """By the glass at the smallest load; by the lowest speed where a machine shows no oil; never on a sealed unit."""
    for system_id in ("cold-room", "freezer-room", "shower-water"):
        assert "trim.oil-return" in fitted(plant, system_id)
    assert "1200 rpm" in fitted(plant, "dining-hall")["trim.oil-return-at-low-speed"].do
    for system_id in ("chiller", "tower-chiller", "water-heater"):
        assert "trim.oil-return" in listed(tmp_path, system_id)
    assert not [key for key in listed(tmp_path, "heat-pump") if "oil-return" in key]


SPLIT = "    charge: 1.9 kg\n"


@pytest.mark.parametrize(
    ("brought", "there", "gone"),
    [
        ("1.6 kg", {"charging.open-valves", "charging.weigh", "installation.arrival"}, set()),
        ("1.9 kg", {"charging.open-valves", "charging.leak-search"}, {"charging.weigh"}),
        ("0 kg", {"charging.weigh"}, {"charging.open-valves", "installation.arrival"}),
    ],
)
def test_a_split_is_listed_by_the_charge_that_it_brings(
    tmp_path: Path, brought: str, there: set[str], gone: set[str]
) -> None:
    """More is weighed in only where the lines take more; a unit that comes empty is charged like any other."""
    found = listed(tmp_path, "split", (SPLIT, f"{SPLIT}    factory_charge: {brought}\n"))
    assert there <= set(found)
    assert not gone & set(found)
    assert not [item.id for item in found.values() if item.note and item.id.startswith("charging.")]
    if brought == "1.6 kg":
        assert "0.30 kg" in found["charging.weigh"].do
        assert "plate says what it brings, 1.60 kg" in (found["charging.weigh"].how or "")


def test_a_split_that_does_not_say_its_charge_is_taken_as_charged(tmp_path: Path) -> None:
    """The outdoor unit of an air conditioner comes charged (common practice, no source); what is not known is said."""
    found = listed(tmp_path, "split")
    assert {"charging.open-valves", "installation.arrival"} <= set(found)
    assert "factory_charge" in (found["charging.weigh"].note or "")


def test_dwellings_are_spared_what_the_law_asks_of_landlords(tmp_path: Path) -> None:
    """Samples for legionella are a duty where hot water is given to others (HSG274; DVGW W 551; national rules)."""
    home = ("  address: 1 Far Lane, Nowhere", "  address: 1 Far Lane, Nowhere\n  dwelling: yes")
    duties = {"upkeep.legionella", "handover.legionella", "handover.legionella-first"}
    let = listed(tmp_path, "water-heater")
    assert duties <= set(let)
    assert "disinfected" in let["flows.disinfected"].do
    assert "legionella count" in says(let["flows.outlets-shut"])
    found = listed(tmp_path, "water-heater", home)
    assert not duties & set(found)
    assert {"controls.hygiene", "first-start.mixing"} <= set(found)
    assert "disinfected" not in found["flows.disinfected"].do
    assert "legionella" not in says(found["flows.outlets-shut"])


@pytest.mark.parametrize(
    ("capacity", "items_"),
    [
        ("70 kW", set()),
        ("71 kW", {"upkeep.building-inspection", "handover.building-inspection"}),
        ("290 kW", {"upkeep.building-inspection", "handover.building-inspection"}),
        ("291 kW", {"upkeep.building-inspection-large", "handover.building-inspection"}),
    ],
)
def test_large_plants_of_buildings_are_inspected(tmp_path: Path, capacity: str, items_: set[str]) -> None:
    """Directive (EU) 2024/1275, article 23 (from memory): above 70 kW every five years, above 290 kW every three."""
    size = ("cooling_capacity: 520 kW, power_input: 110 kW", f"cooling_capacity: {capacity}, power_input: 20 kW")
    found = {key for key in listed(tmp_path, "tower-chiller", size) if "building" in key}
    assert found == items_


def test_a_tower_is_asked_for_where_it_is_stated(tmp_path: Path) -> None:
    """Stated yes, stated no, or not stated: then the items stand with the reason, since a tower can kill."""
    tower = {key for key in listed(tmp_path, "tower-chiller") if "tower" in key}
    assert {"flows.tower-notice", "flows.tower-hygiene", "upkeep.tower-legionella"} <= tower
    cooled = ("flow: 110 m3/h, cooled_by: cooling tower", "flow: 110 m3/h, cooled_by: dry cooler")
    assert not {key for key in listed(tmp_path, "tower-chiller", cooled) if "tower" in key}
    unknown = listed(tmp_path, "tower-chiller", ("flow: 110 m3/h, cooled_by: cooling tower", "flow: 110 m3/h"))
    assert "not known" in (unknown["flows.tower-notice"].note or "")


def test_the_weather_curve_is_tried_at_three_points(tmp_path: Path, plant: LoadedPlant) -> None:
    """Coldest, middle and mildest point; a curve of two points has no middle."""
    found = fitted(plant, "floor-heating")
    assert says(found["controls.curve"]).startswith("38.0 °C")
    assert says(found["controls.curve-middle"]).startswith("34.0 °C")
    assert "14.0 °C outdoors" in found["controls.curve-mild"].do
    assert "controls.curve-middle" not in listed(tmp_path, "heat-pump")


def test_antifreeze_is_held_to_the_table(tmp_path: Path) -> None:
    """Propylene glycol of 40 % by mass freezes at −21 °C (Melinder 2010; ASHRAE Handbook Fundamentals alike, 1 K)."""
    found = listed(tmp_path, "chiller")["flows.antifreeze-source"].must_read
    assert found is not None
    assert found.high == pytest.approx(273.15 - 21.0 + 2.0, abs=1.0)


@pytest.fixture(scope="module")
def plant(example_folder: Path) -> LoadedPlant:
    """The example plant."""
    return load_plant(example_folder)


def fitted(plant: LoadedPlant, system_id: str) -> dict[str, Item]:
    """The items of the shipped library for a system of the example with its fitted model."""
    found = stages(plant, system_id, fit(plant, system_id), library=library())
    return {i.id: i for stage in found for i in stage.items}


def test_a_heater_that_heats_in_one_pass_sets_its_own_flow(plant: LoadedPlant) -> None:
    """No design flow is asked for that nobody stated: the pump must reach the expected one, and in the test outlet
    temperature and flow are read in place of a fixed rise."""
    found = fitted(plant, "shower-water")
    assert not {"flows.sink-flow", "performance.sink-change"} & set(found)
    reach = found["flows.sink-reach"].must_read
    flow = found["performance.sink-flow"].must_read
    assert reach is not None
    assert flow is not None
    assert reach.low == flow.value
    assert flow.low is not None
    assert flow.high is not None
    assert flow.low < flow.high
    assert says(found["performance.hot-water"]).startswith("60.0 °C, within 58.0 to 62.0 °C")


def test_the_second_sheet_says_what_it_can(plant: LoadedPlant) -> None:
    """Both design days where both are calculated; the coldest alone for heating, by the discharge line of a sealed
    unit, and no sentence begins with a comma."""
    both = says(fitted(plant, "cold-room")["season.sheet"])
    assert both.startswith("expected at the discharge: ")
    assert both.count("bar g at ") == 2
    sealed = says(fitted(plant, "floor-heating")["season.sheet"])
    assert sealed.startswith("expected at the discharge: ")
    assert sealed.endswith("°C at −9.0 °C outdoors")
