"""What saves people on every list: detectors, gear, rooms that fill, water that freezes or scalds, and their upkeep."""

from __future__ import annotations

import re
from pathlib import Path

from commission.checklists import Item
from commission.safety import Substance
from tests.checklists.conftest import after, ids, item_of

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
    "safety.interlock-sink": "upkeep.interlock-sink",
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
    "safety.limiters-unknown",  # asks for what nobody described; the description then names it
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
    hot = "flows.outlets-shut" in order or "safety.floor-limit" in order
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


def test_a_gas_without_smell_is_measured_itself(listed: tuple[Item, ...]) -> None:
    """Where people charge in a room, oxygen at 19.5 % already leaves 6.7 % of refrigerant in the air, more than the
    limit of R-134a (50 000 ppm, ISO 817 RCL): an oxygen alarm stands beside a detector, never in its place."""
    for item in listed:
        if item.id == "charging.air" and "oxygen" in item.do:
            assert "alarm for R-" in item.do
            assert item.must_read is not None
            assert "half of the practical limit" in item.must_read.text


def test_hands_and_eyes_are_covered_where_ammonia_is_tried(listed: tuple[Item, ...]) -> None:
    """Test gas and drops of ammonia burn eyes and skin (EN 378-4; common practice)."""
    toxic = "readiness.breathing" in ids(listed)
    for item in listed:
        if toxic and ("test gas" in item.do or "drops of ammonia" in item.do):
            assert "goggles" in (item.hazard or ""), item.id


def test_a_label_hangs_before_power_comes(listed: tuple[Item, ...]) -> None:
    """A unit that brings its gas can leak from the first day: card and label come with it."""
    order = ids(listed)
    assert order.index("handover.card") < order.index("electrical.report")
    assert order.index("handover.label") < order.index("electrical.report")


def test_water_pipes_are_tested_and_flushed_before_they_are_filled(listed: tuple[Item, ...]) -> None:
    """Pressure test, flush, fill, relief valve, and only then a pump (EN 806-4, EN 12828; common practice)."""
    chain = ("flows.pipe-test", "flows.flushed", "flows.store-filled", "flows.fill-water", "flows.water-pressure")
    order = ids(listed)
    there = [order.index(name) for name in (*chain, "electrical.pumps") if name in order]
    assert there == sorted(there)


def test_each_of_several_compressors_is_proved(listed: tuple[Item, ...]) -> None:
    """The plate of a machine with two motors protects neither: each has its own setting, sequence and limiter."""
    order = ids(listed)
    if "electrical.protection-each" in order:
        assert "electrical.protection" not in order
        assert "one after the other" in item_of(listed, "electrical.rotation").do
        for name in ("safety.high-pressure", "first-start.oil", "live-trips.high-pressure"):
            assert "each compressor" in item_of(listed, name).do


def test_the_stop_is_proved_while_nothing_runs(listed: tuple[Item, ...]) -> None:
    """An emergency stop that runs the plant to be tried is tried too late (ISO 13850)."""
    order = ids(listed)
    if "live-trips.stop-button" in order:
        assert order.index("safety.stop-button") < order.index("charging.keep-away")
