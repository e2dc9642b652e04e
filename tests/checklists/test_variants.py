"""One fact of a description changed, and what that does to the list."""

from __future__ import annotations

from pathlib import Path

import pytest

from commission.checklists import Item, stages
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


@pytest.fixture(scope="module")
def plant(example_folder: Path) -> LoadedPlant:
    """The example plant."""
    return load_plant(example_folder)


def fitted(plant: LoadedPlant, system_id: str) -> dict[str, Item]:
    """The items of a system of the example with its fitted model."""
    return {i.id: i for stage in stages(plant, system_id, fit(plant, system_id)) for i in stage.items}


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
