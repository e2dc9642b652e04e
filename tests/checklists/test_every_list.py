"""What no list may do, whatever the plant: each rule is read off every list of the example and of the test plants."""

from __future__ import annotations

import re
from collections.abc import Iterable
from functools import cache
from pathlib import Path

import pytest

from commission.checklists import Item, stages
from commission.description import LoadedPlant, load_plant
from commission.safety import Substance, fluid_of, substance_of
from tests.checklists.conftest import DAIRY, SYSTEMS, YARD

LISTS = (
    *(("example", name) for name in ("cold-room", "dining-hall", "floor-heating", "freezer-room", "shower-water")),
    *(("yard", name) for name in SYSTEMS),
    ("dairy", "propane-room"),
)


@cache
def _listed(folder: Path, system_id: str) -> tuple[Item, ...]:
    return tuple(item for stage in stages(load_plant(folder), system_id) for item in stage.items)


@pytest.fixture(params=LISTS, ids=lambda pair: pair[1])
def place(request: pytest.FixtureRequest, example_folder: Path) -> tuple[Path, str]:
    """The folder and the id of one system."""
    folder, system_id = request.param
    return {"example": example_folder, "yard": YARD, "dairy": DAIRY}[folder], system_id


@pytest.fixture
def listed(place: tuple[Path, str]) -> tuple[Item, ...]:
    """The items of one system in their order."""
    return _listed(*place)


@pytest.fixture
def loaded(place: tuple[Path, str]) -> LoadedPlant:
    """The plant of that system."""
    return load_plant(place[0])


@pytest.fixture
def substance(loaded: LoadedPlant, place: tuple[Path, str]) -> Substance:
    """The refrigerant of that system."""
    return substance_of(fluid_of(loaded, place[1]))


def ids(listed: tuple[Item, ...]) -> list[str]:
    """The ids of a list in their order."""
    return [item.id for item in listed]


def item_of(listed: tuple[Item, ...], name: str) -> Item:
    """The item of an id."""
    return next(item for item in listed if item.id == name)


def after(listed: tuple[Item, ...], first: str, later: Iterable[str]) -> list[str]:
    """Those of `later` that stand on a list, but not behind `first`."""
    order = ids(listed)
    start = order.index(first) if first in order else len(order)
    return [name for name in later if name in order and order.index(name) < start]


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
    if wanted[0] in order and listed == _listed(example_folder, "shower-water"):
        assert "30 min" in item_of(listed, wanted[0]).do


IN_THE_ROOMS = (
    "safety.room-detector",
    "safety.detector-power",
    "safety.detector-fan",
    "safety.door-switch",
    "safety.horn",
)
"""What warns people of refrigerant, or keeps it from them."""
LETS_IN = (
    "charging.open-valves",
    "charging.cylinder",
    "charging.vapour-first",
    "charging.first-vapour",
    "charging.weigh",
)
"""Items at which refrigerant is in the hand, or in the circuit."""


def test_detectors_are_proved_before_there_is_gas(listed: tuple[Item, ...]) -> None:
    """A detector that is proved afterwards was no protection while the cylinder was open (EN 378-3, EN 378-4)."""
    order = ids(listed)
    for proof in set(IN_THE_ROOMS) & set(order):
        assert not after(listed, proof, LETS_IN), proof


def test_nobody_opens_a_cylinder_bare_handed(listed: tuple[Item, ...]) -> None:
    """Liquid that escapes freezes skin and eyes: gloves and goggles or visor are on before the first gas, with ammonia
    a mask; card and label hang (EN 378-4; common practice)."""
    order = ids(listed)
    if "charging.weigh" not in order:
        return
    worn = [item for item in listed if "gloves" in item.do and re.search("goggles|visor|full-face", item.do)]
    assert worn
    assert not after(listed, worn[0].id, LETS_IN)
    assert ("mask" in worn[0].do) is ("readiness.breathing" in order)
    for sign in ("handover.card", "handover.label"):
        assert not after(listed, sign, LETS_IN), sign


def test_liquid_is_let_in_once_and_never_onto_still_water(listed: tuple[Item, ...], substance: Substance) -> None:
    """An exchanger with a liquid in it, on either side, sees vapour alone until the refrigerant boils above its
    freezing point; once only stands a start of liquid on a list (common practice)."""
    order = ids(listed)
    if "flows.flushed" not in order or "charging.weigh" not in order:
        return
    assert order.index("charging.water-flows") < order.index("charging.vapour-first") < order.index("charging.weigh")
    target = item_of(listed, "charging.vapour-first").must_read
    bar = AT_FREEZING[substance.name]
    assert target is not None
    assert target.low is not None
    assert 1.05 * bar < target.low / 1e5 < 1.15 * bar
    assert [item.id for item in listed if re.search("then liquid|Liquid, now", item.how or "")] == ["charging.weigh"]
    assert not any("then liquid" in item.must_read.text for item in listed if item.must_read)


AT_FREEZING = {"R-744": 34.85, "R-717": 4.29, "R-134a": 2.93}
"""Saturation pressure at 0 °C, bar: Span and Wagner 1996, Tillner-Roth et al. 1993, Tillner-Roth and Baehr 1994."""


def test_nobody_charges_alone_in_a_room_that_can_fill(listed: tuple[Item, ...]) -> None:
    """In a machinery room below ground or with a detector the fan runs and a second person stands at the door, whatever
    the refrigerant (EN 378-3, EN 378-4)."""
    order = ids(listed)
    if "installation.ventilation" in order and "charging.weigh" in order:
        assert not after(listed, "charging.air", LETS_IN)
        assert not after(listed, "charging.two-people", LETS_IN)


KEEPS_PEOPLE_WHOLE = re.compile(r"EN 378-[134]|EN 14624|ISO 13850|HSG274|EN 13136|EN 12828|EN 1490")
"""Documents about relief, gas in rooms, stops, legionella."""


def test_a_proof_that_fails_before_the_first_start_has_a_consequence(listed: tuple[Item, ...]) -> None:
    """What can hurt says what is not done while it fails: hazards, safety devices, and what keeps gas from people."""
    start = next(n for n, item in enumerate(listed) if item.id.startswith("first-start."))
    for item in listed[:start]:
        hurts = item.id.startswith(("safety.", "charging.")) or KEEPS_PEOPLE_WHOLE.search(item.source)
        if item.hazard or (hurts and item.must_read):
            assert item.if_not, item.id


IN_A_ROOM_THAT_FILLS = (
    "readiness.toxic-plan",
    "installation.doors",
    "installation.signs",
    "installation.fan-outlet",
    "installation.ventilation",
    "safety.room-detector",
    "safety.detector-fan",
    "safety.door-switch",
    "safety.horn",
    "charging.air",
    "charging.two-people",
)
"""What proves that a person is warned at the door, and comes out again."""


def test_a_machinery_room_is_proved_whatever_its_refrigerant(listed: tuple[Item, ...], place: tuple[Path, str]) -> None:
    """Below ground or with a detector: ammonia is smelt, carbon dioxide and R-134a are not (EN 378-3)."""
    indoors = place[1] in ("chiller", "water-heater", "tower-chiller")
    assert set(IN_A_ROOM_THAT_FILLS) & set(ids(listed)) <= (
        {"safety.room-detector"} if not indoors else set(ids(listed))
    )
    if indoors:
        assert set(IN_A_ROOM_THAT_FILLS) <= set(ids(listed))
        assert not after(listed, IN_A_ROOM_THAT_FILLS[0], LETS_IN)
        assert not [name for proof in IN_A_ROOM_THAT_FILLS for name in after(listed, proof, LETS_IN)]


def test_a_stop_leaves_the_fan_running_and_no_proof_can_start_a_machine(listed: tuple[Item, ...]) -> None:
    """An emergency stop that stops the emergency fan fills the room (EN 378-3); a proof that fails must not be the
    first start, so the compressor is isolated (common practice)."""
    for item in listed:
        if item.id == "safety.stop-button":
            assert item.must_read is not None
            assert "emergency fan, detection and light go on" in item.must_read.text
        if item.id in ("safety.interlock", "safety.freeze", "safety.stop-button", "safety.oil-pressure"):
            assert "ompressor isolated" in f"{item.do} {item.how}", item.id


def test_a_tower_is_clean_before_it_sprays(listed: tuple[Item, ...]) -> None:
    """Cleaned, disinfected, with drift eliminators and dosing, before a pump or fan of it runs (HSG274, VDI 2047)."""
    order = ids(listed)
    if "flows.tower-hygiene" in order:
        assert not after(listed, "flows.tower-clean", ("electrical.pumps", "flows.sink-flow", "flows.tower-fan"))
        assert "handover.tower-legionella" in order
        assert "ocked off" in (item_of(listed, "flows.tower-fan").hazard or "")


AGAIN = {
    "readiness.factory-test": "upkeep.factory-devices",
    "safety.release": "upkeep.release",
    "safety.trapped-alarm": "upkeep.release",
    "safety.high-pressure": "upkeep.high-pressure",
    "safety.high-pressure-circuit": "upkeep.high-pressure",
    "safety.limiters": "upkeep.high-pressure",
    "safety.relief-setting": "upkeep.relief-look",
    "safety.relief-settings": "upkeep.relief-look",
    "safety.compressor-relief": "upkeep.relief-look",
    "safety.discharge-limit": "upkeep.discharge-limit",
    "safety.freeze": "upkeep.frost-protection",
    "safety.interlock": "upkeep.flow-switches",
    "safety.oil-pressure": "upkeep.oil-pressure",
    "safety.level": "upkeep.level",
    "safety.room-detector": "upkeep.detectors",
    "safety.detector-power": "upkeep.detectors",
    "safety.detector-fan": "upkeep.detectors",
    "safety.door-switch": "upkeep.ventilation",
    "safety.horn": "upkeep.horn",
    "safety.fire-panel": "upkeep.horn",
    "safety.stop-button": "upkeep.stop-buttons",
    "safety.floor-limit": "upkeep.floor-limit",
    "safety.defrost-cut-out": "upkeep.defrost-cut-out",
    "safety.store-cut-out": "upkeep.element-cut-out",
    "safety.element-cut-out": "upkeep.element-cut-out",
    "live-trips.low-pressure": "upkeep.low-pressure",
    "live-trips.pump-down": "upkeep.low-pressure",
    "live-trips.stop-button": "upkeep.stop-buttons",
    "flows.source-switch": "upkeep.flow-switches",
    "flows.sink-switch": "upkeep.flow-switches",
    "flows.frost-outdoors": "upkeep.frost-outdoors",
    "flows.leak-into-liquid": "upkeep.leak-into-liquid",
    "flows.water-pressure": "upkeep.heating-relief",
    "installation.unvented": "upkeep.store-relief",
    "installation.ventilation": "upkeep.ventilation",
    "installation.emergency-light": "upkeep.back-up-power",
    "electrical.back-up-power": "upkeep.back-up-power",
}
"""Each proof of a safety device, and the visit at which the device is proved again."""
NOT_AGAIN = {
    "safety.relief-each-part",  # looks for valves that nobody described
    "safety.transmitters",  # no safety device: held to calibrated gauges
    "safety.check-valve",
}
"""Items among the safety devices that no visit repeats."""


def test_each_safety_device_is_proved_again(listed: tuple[Item, ...]) -> None:
    """What saves people is made to act once a year, device by device (EN 378-4)."""
    order = ids(listed)
    assert {name for name in order if name.startswith("safety.")} <= set(AGAIN) | NOT_AGAIN
    for once, again in AGAIN.items():
        assert again in order or once not in order, (once, again)


def test_water_under_pressure_is_let_off_and_read_against_the_plates(listed: tuple[Item, ...]) -> None:
    """Strainers of hot water are opened cold and without pressure; relief valves of water are no higher than what they
    protect, and vessels have their gas before the water is heated (EN 12828, EN 1490; common practice)."""
    order = ids(listed)
    hot = "flows.water-pressure" in order or "flows.outlets-shut" in order
    for item in listed:
        if item.id == "upkeep.strainers":
            assert "pressure let off" in (item.caution or "")
            assert ("hot" in (item.hazard or "")) is hot
        if item.id in ("flows.water-pressure", "installation.unvented"):
            assert item.must_read is not None
            assert "no higher than" in item.must_read.text
            assert item.if_not
            assert not after(listed, "flows.expansion-vessel", RUNNING_FIRST)


RUNNING_FIRST = ("electrical.pumps", "flows.sink-flow", "first-start.current")


def test_a_coupling_runs_behind_its_guard(listed: tuple[Item, ...]) -> None:
    """Whoever takes the guard off is asked for it again (EN ISO 14120)."""
    for item in listed:
        if item.id in ("installation.alignment", "trim.coupling-warm"):
            assert item.must_read is not None
            assert "the guard is back on" in item.must_read.text
        if item.id == "electrical.uncoupled":
            assert "guard" in (item.hazard or "")


def test_nobody_stands_by_while_refrigerant_is_let_in(listed: tuple[Item, ...]) -> None:
    """Wherever a circuit is charged on site, the place is closed first (EN 378-4; common practice)."""
    charged = "charging.weigh" in ids(listed)
    assert ("charging.keep-away" in ids(listed)) is charged
    assert not after(listed, "charging.keep-away", LETS_IN)


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
    trip = {i.id: i for i in _listed(example_folder, "freezer-room")}["live-trips.pump-down"]
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
