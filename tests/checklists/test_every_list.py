"""What no list may do, whatever the plant: each rule is read off every list of the example and of the test plants."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from commission.checklists import Item
from commission.description import LoadedPlant, load_plant
from commission.safety import Substance
from tests.checklists.conftest import after, every_list, ids, item_of

POWER = re.compile(
    r"\b(power|switch\w*|pumps?|run\w*|start\w*|current|voltage|heaters?|heated|light\w*|lamps?|alarms?|fans?|horn|detectors?"
    r"|speed|stop\w*)\b",
    re.IGNORECASE,
)
"""Words of acts for which something must have power."""
WITHOUT_POWER = {
    "readiness.shower",  # runs with water
    "readiness.detector-toxic",  # read off its plate
    "installation.zone",  # looks for what could light the gas
    "installation.arrival",  # a detector in the hand, before power is connected
}
"""Items with such a word that need none of the plant's own power."""


def test_nothing_is_switched_on_before_the_electricians_report(listed: tuple[Item, ...]) -> None:
    """Earth, insulation and earth-fault protection are proved before a heater, fan or pump runs (IEC 60364-6)."""
    report = ids(listed).index("electrical.report")
    early = {item.id for item in listed[:report] if POWER.search(item.do)}
    assert early <= WITHOUT_POWER


PIPES_PROVED = ("strength.hold", "strength.end-pressure", "evacuation.level", "evacuation.rise")


def test_refrigerant_meets_a_circuit_that_is_tight_and_dry(listed: tuple[Item, ...]) -> None:
    """The cylinder or the valves of a unit that comes charged are opened behind pressure test and vacuum, and joints
    that a unit has filled are searched before more is weighed in."""
    order = ids(listed)
    for opened in ("charging.open-valves", "charging.cylinder"):
        if opened in order:
            assert all(order.index(name) < order.index(opened) for name in PIPES_PROVED if name in order)
    if "charging.open-valves" in order:
        assert order[order.index("charging.open-valves") + 1] == "charging.leak-search"
        assert not after(listed, "charging.leak-search", ("charging.weigh", "charging.foreign-gas"))
    elif "charging.weigh" in order:
        assert not after(listed, "charging.weigh", ("charging.leak-search",))


def test_no_list_takes_a_charged_unit_for_an_empty_one(listed: tuple[Item, ...]) -> None:
    """Refrigerant that is there from the first day is sniffed for before the electrician's tests, where it burns."""
    texts = " ".join(text for item in listed for text in (item.do, item.how, item.if_not, item.caution) if text)
    order = ids(listed)
    if "charging.open-valves" in order or "installation.sealed-charge" in order:
        assert "before any refrigerant comes to the site" not in texts
        assert "before the refrigerant comes to the site" not in texts
        if item_of(listed, "electrical.report").caution:
            assert order.index("installation.arrival") < order.index("electrical.report")
    else:
        assert "service valves" not in texts
        assert "installation.arrival" not in order


RUNNING = ("first-start.", "live-trips.", "controls.", "trim.", "performance.", "season.")


def test_nothing_makes_hot_water_before_people_are_safe_from_it(listed: tuple[Item, ...]) -> None:
    """Outlets are shut to users before the machine or an element first runs, and every mixing valve is proved with the
    first hot water, before any other trial heats the store (EN 1111; HSG274 part 2)."""
    order = ids(listed)
    running = [name for name in order if name.startswith(RUNNING)]
    if "installation.unvented" not in order:
        assert "first-start.mixing" not in order
        return
    assert not after(listed, "flows.outlets-shut", running)
    assert not after(listed, "first-start.mixing", [name for name in running if not name.startswith("first-start.")])
    assert "every mixing valve" in (item_of(listed, "controls.hygiene").hazard or "")


def test_drinking_water_never_holds_glycol(listed: tuple[Item, ...]) -> None:
    """A water heater's pipes hold drinking water; only a heating circuit may be filled against frost."""
    heater = "flows.outlets-shut" in ids(listed)
    for item in listed:
        if item.id == "flows.frost-outdoors":
            assert item.must_read is not None
            assert ("or glycol" in item.must_read.text) is not heater
            assert ("never glycol" in item.must_read.text) is heater


def test_a_hygiene_heating_is_read_where_it_is_asked_for(listed: tuple[Item, ...], example_folder: Path) -> None:
    """The hold by the coldest sensor, the bottom by the drain, the loop by its return: one value each."""
    order = ids(listed)
    wanted = ["controls.hygiene", "controls.hygiene-bottom", "controls.hygiene-return"]
    assert [name for name in order if name.startswith("controls.hygiene")] in ([], wanted)
    if wanted[0] in order and listed == every_list(example_folder, "shower-water"):
        assert "30 min" in item_of(listed, wanted[0]).do


def test_no_low_pressure_trip_reaches_below_the_air(listed: tuple[Item, ...]) -> None:
    """Air that is drawn in can explode with a refrigerant that burns: no margin reaches below its pressure."""
    for item in listed:
        if item.id in ("live-trips.low-pressure", "live-trips.pump-down"):
            assert item.must_read is not None
            low = item.must_read.low
            assert low is None or low >= AIR, item.must_read.text


AIR = 95000.0
"""Pa; no site of these plants lies so high that the air there weighs less (310 m: 97.7 kPa, ISO 2533)."""


def test_a_margin_stops_at_the_pressure_of_the_air(example_folder: Path) -> None:
    """0.10 bar g less 0.2 bar would be 0.10 bar below the air: the band of the freezer room begins at 0 bar g."""
    loaded = load_plant(example_folder)
    trip = {i.id: i for i in every_list(example_folder, "freezer-room")}["live-trips.pump-down"]
    assert trip.must_read is not None
    assert trip.must_read.low == pytest.approx(loaded.barometric_pressure)
    assert trip.must_read.text.startswith("0.10 bar g, within 0.00 to 0.30 bar g")
    assert "explode" in (trip.hazard or "")


def test_no_flame_or_glow_is_offered_where_the_refrigerant_burns(
    listed: tuple[Item, ...], substance: Substance
) -> None:
    """What a danger forbids no method of the same list may offer (EN 378-4; common practice)."""
    for item in listed:
        if substance.flammable:
            assert "heat gun" not in (item.how or ""), item.id
    offered = [item.how for item in listed if item.id == "safety.defrost-cut-out"]
    assert all(("heat gun" in (how or "")) is not substance.flammable for how in offered)


def test_every_instrument_that_an_item_names_is_brought(listed: tuple[Item, ...], loaded: LoadedPlant) -> None:
    """Serial by serial; where no gauge reaches, the first list says what to bring."""
    first = next(item for item in listed if item.id == "readiness.instruments")
    for item in listed:
        words = f"{item.do} {item.how or ''}"
        for instrument in loaded.plant.instruments.values():
            if instrument.serial and re.search(rf"\b{re.escape(instrument.serial)}\b", words):
                assert instrument.serial in (first.how or ""), (item.id, instrument.serial)
        wanted = re.search(r"bring one that reads to ([\d.]+ bar g) or more", words)
        if wanted:
            assert f"a gauge that reads to {wanted[1]} or more" in (first.how or ""), item.id


def test_a_unit_that_can_burn_is_sniffed_before_it_is_opened_for_upkeep(listed: tuple[Item, ...]) -> None:
    """What burns is looked at again: casing before a cover is off, leak search, zone, vent of the water."""
    order = ids(listed)
    upkeep = [name for name in order if name.startswith("upkeep.")]
    for once, again in (("installation.zone", "upkeep.zone"), ("flows.gas-vent", "upkeep.gas-vent")):
        assert (once in order) is (again in order)
    if "charging.detector" in order or "installation.arrival" in order:
        assert upkeep[:2] == ["upkeep.casing-gas", "upkeep.leaks"]
    else:
        assert "upkeep.casing-gas" not in order
