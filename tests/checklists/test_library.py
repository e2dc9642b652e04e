"""The shipped library: complete, single, and in an order that hurts nobody."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from commission.checklists import Item, Stage
from commission.checklists.derived import DERIVED
from commission.checklists.library import CheckedItem, library
from commission.checklists.names import WORDS, names
from commission.checklists.phrases import PHRASES

SYSTEMS = ("freezer", "split", "heat-pump", "chiller", "water-heater", "tower-chiller")
Stages = Callable[[str], tuple[Stage, ...]]


def every() -> list[CheckedItem]:
    """All items of the library."""
    return [item for stage in library() for item in stage.items]


def order(stages: tuple[Stage, ...]) -> list[str]:
    """Item ids in the order of work."""
    return [item.id for stage in stages for item in stage.items]


def commissioning(stages: tuple[Stage, ...]) -> tuple[Stage, ...]:
    """The stages that are worked through once; what comes due again is never done on one visit."""
    return tuple(stage for stage in stages if stage.id != "upkeep")


def items(stages: tuple[Stage, ...]) -> dict[str, Item]:
    """Items by id."""
    return {item.id: item for stage in stages for item in stage.items}


def test_ids_are_unique_and_named_after_their_stage() -> None:
    """An answer in a record is found by its id for twenty years."""
    ids = [item.entry.id for item in every()]
    assert len(ids) == len(set(ids))
    for stage in library():
        for item in stage.items:
            assert item.entry.id.startswith(f"{stage.id}.")


def test_every_item_has_a_source() -> None:
    """A document, the plant itself, or common practice."""
    for item in every():
        assert item.entry.source.strip()


def test_no_two_items_ask_for_the_same_act() -> None:
    """Two items that say the same are a defect."""
    acts = ["".join(c for c in item.entry.do.lower() if c.isalnum()) for item in every()]
    assert len(acts) == len(set(acts))


@pytest.mark.parametrize("system_id", SYSTEMS)
def test_acts_are_plain_imperatives(yard_stages: Stages, system_id: str) -> None:
    """One sentence that begins with a verb and ends with a full stop, short enough for a tablet."""
    for item in items(yard_stages(system_id)).values():
        assert item.do.endswith("."), item.id
        assert " ." not in item.do, item.id
        assert item.do[0].isupper(), item.id
        assert item.do.split()[0].lower() not in {"the", "a", "is", "are", "check", "ensure", "verify"}, item.id
        assert len(item.do) < 170, item.id


@pytest.mark.parametrize("system_id", SYSTEMS)
def test_sentences_hold_together(yard_stages: Stages, system_id: str) -> None:
    """Parts that are left out leave no doubled space, no space before a stop, and no sentence that begins small."""
    for stage in yard_stages(system_id):
        texts = [stage.purpose]
        for item in stage.items:
            parts = (item.do, item.how, item.if_not, item.hazard, item.caution)
            texts += [text for text in parts if text] + ([item.must_read.text] if item.must_read else [])
            assert all(text[0].isupper() for text in parts if text), (item.id, parts)
        for text in texts:
            assert "  " not in text, text
            assert not any(wrong in text for wrong in (" .", " ,", " ;", "..", "[[", "{?")), text


def test_a_reading_says_what_it_must_be() -> None:
    """An item that asks for a value says what it must read, or how it is used."""
    for item in every():
        if item.entry.answer == "value":
            assert item.entry.must_read is not None or item.entry.how is not None, item.entry.id


def test_names_of_derived_facts_all_have_values() -> None:
    """The table of names and the table of values hold the same keys."""
    assert set(WORDS) == set(PHRASES) | set(DERIVED)
    assert set(WORDS) <= set(names())


BEFORE = [
    ("readiness.pressure-papers", "strength.hold"),
    ("installation.lowest-pressure", "strength.hold"),
    ("strength.isolate", "strength.hold"),
    ("strength.hold", "strength.bubbles"),
    ("strength.end-pressure", "evacuation.level"),
    ("evacuation.reconnect", "evacuation.level"),
    ("evacuation.level", "evacuation.rise"),
    ("evacuation.rise", "charging.weigh"),
    ("evacuation.rise", "charging.open-valves"),
    ("charging.open-valves", "charging.leak-search"),
    ("charging.detector", "charging.open-valves"),
    ("strength.end-pressure", "charging.open-valves"),
    ("charging.open-valves", "charging.weigh"),
    ("charging.leak-search", "first-start.current"),
    ("electrical.report", "electrical.voltage"),
    ("electrical.heater", "first-start.current"),
    ("electrical.rotation", "first-start.current"),
    ("safety.high-pressure", "first-start.current"),
    ("safety.high-pressure-circuit", "first-start.current"),
    ("readiness.factory-test", "first-start.current"),
    ("installation.arrival", "electrical.report"),
    ("electrical.report", "charging.weigh"),
    ("charging.keep-away", "charging.cylinder"),
    ("charging.water-flows", "charging.open-valves"),
    ("charging.water-flows", "charging.cylinder"),
    ("charging.delivery", "charging.first-vapour"),
    ("charging.first-vapour", "charging.vapour-first"),
    ("electrical.report", "safety.release"),
    ("safety.trapped-alarm", "safety.release"),
    ("safety.release", "installation.room-ignition"),
    ("safety.relief-setting", "charging.cylinder"),
    ("safety.relief-settings", "charging.cylinder"),
    ("safety.relief-each-part", "charging.cylinder"),
    ("safety.compressor-relief", "charging.cylinder"),
    ("electrical.back-up-power", "charging.cylinder"),
    ("electrical.uncoupled", "installation.alignment"),
    ("installation.alignment", "first-start.current"),
    ("flows.tower-notice", "flows.flushed"),
    ("flows.tower-hygiene", "flows.sink-flow"),
    ("flows.expansion-vessel", "flows.flushed"),
    ("first-start.oil-pressure", "first-start.current"),
    ("live-trips.high-pressure", "first-start.sight-glass"),
    ("safety.room-detector", "charging.keep-away"),
    ("first-start.pull-down", "controls.release-cold"),
    ("first-start.pull-down", "controls.port-cold"),
    ("controls.release-cold", "controls.defrost-end"),
    ("charging.rest-temperature", "charging.foreign-gas"),
    ("charging.foreign-gas", "first-start.current"),
    ("flows.tower-notice", "first-start.current"),
    ("installation.room-heaters", "first-start.pull-down"),
    ("safety.release", "first-start.current"),
    ("safety.trapped-alarm", "first-start.current"),
    ("safety.trapped-alarm", "strength.hold"),
    ("safety.defrost-cut-out", "electrical.defrost-heater"),
    ("safety.room-detector", "charging.cylinder"),
    ("safety.horn", "charging.first-vapour"),
    ("live-trips.high-pressure", "first-start.pull-down"),
    ("first-start.pull-down", "first-start.sight-glass"),
    ("first-start.suction-limit", "first-start.pull-down"),
    ("first-start.operating-limit", "first-start.pull-down"),
    ("installation.floor-heating", "first-start.pull-down"),
    ("first-start.valves", "first-start.current"),
    ("first-start.current", "live-trips.high-pressure"),
    ("safety.high-pressure", "live-trips.high-pressure"),
    ("live-trips.high-pressure", "performance.discharge-pressure"),
    ("trim.superheat", "performance.suction-pressure"),
    ("performance.sheet", "handover.settings"),
    ("flows.source-flow", "charging.weigh"),
    ("flows.source-switch", "first-start.current"),
    ("flows.sink-flow", "first-start.current"),
    ("flows.antifreeze-source", "charging.weigh"),
    ("safety.interlock", "first-start.current"),
    ("charging.detector-people", "charging.weigh"),
    ("charging.detector", "charging.cylinder"),
    ("charging.vapour-first", "charging.weigh"),
    ("charging.first-vapour", "charging.weigh"),
    ("charging.two-people", "charging.first-vapour"),
    ("strength.blow-out", "strength.hold"),
    ("electrical.uncoupled", "first-start.current"),
    ("electrical.prelubrication", "first-start.current"),
    ("safety.compressor-relief", "first-start.current"),
    ("safety.limiters", "first-start.current"),
    ("first-start.unloaded", "first-start.current"),
    ("installation.oil-drains", "charging.weigh"),
    ("flows.leak-into-liquid", "charging.weigh"),
    ("performance.suction-pressure", "performance.sheet"),
    ("performance.hot-water", "performance.suction-pressure"),
    ("readiness.breathing", "charging.weigh"),
    ("installation.ventilation", "charging.weigh"),
    ("installation.relief-outlet", "charging.weigh"),
    ("flows.store-filled", "controls.hygiene"),
    ("safety.store-cut-out", "controls.hygiene"),
    ("flows.store-filled", "electrical.pumps"),
    ("flows.disinfected", "flows.outlets-shut"),
    ("flows.outlets-shut", "first-start.current"),
    ("controls.hygiene-bottom", "handover.legionella-first"),
]
"""Pairs whose order keeps people or the compressor whole."""


@pytest.mark.parametrize("system_id", SYSTEMS)
def test_the_order_is_safe(yard_stages: Stages, system_id: str) -> None:
    """Pressure test before evacuation before charge before start; static proof before the first start; flow first."""
    found = order(yard_stages(system_id))
    for first, later in BEFORE:
        if first in found and later in found:
            assert found.index(first) < found.index(later), (first, later)


def test_the_order_of_cold_rooms_is_safe(cold_room: tuple[Stage, ...], propane_room: tuple[Stage, ...]) -> None:
    """The same where a flammable refrigerant changes the order."""
    for found in (order(cold_room), order(propane_room)):
        for first, later in BEFORE:
            if first in found and later in found:
                assert found.index(first) < found.index(later), (first, later)


def test_every_pair_of_the_order_names_items_that_exist() -> None:
    """A rule about an item that was renamed would prove nothing."""
    ids = {item.entry.id for item in every()}
    assert {word for pair in BEFORE for word in pair} <= ids


def test_a_cold_room_has_the_right_size(cold_room: tuple[Stage, ...], propane_room: tuple[Stage, ...]) -> None:
    """A small cold room with a flammable refrigerant takes 40 to 60 items, upkeep apart, a split unit fewer."""
    assert 40 <= len(order(commissioning(cold_room))) <= 60
    assert 40 <= len(order(commissioning(propane_room))) <= 60


def test_the_cold_room_has_nothing_that_does_not_apply(cold_room: tuple[Stage, ...]) -> None:
    """No item of water, glycol, ammonia, carbon dioxide, stores, back-ups or freezers; none for want of a fact."""
    found = items(cold_room)
    for word in (
        "electrical.heater",
        "flows.",
        "fan-delay",
        "floor-heating",
        "toxic",
        "water",
        "back-up",
        "hygiene",
        "gas-cooler",
        "detector-people",
    ):
        assert not [i for i in found if word in i], word
    assert not [item.id for item in found.values() if item.note]
    assert not [item.id for item in found.values() if item.must_read and item.must_read.missing]


def test_an_ammonia_chiller_has_the_right_size(yard_stages: Stages) -> None:
    """An ammonia chiller takes 150 to 200 items, a split unit fewer than a cold room."""
    assert 150 <= len(order(commissioning(yard_stages("chiller")))) <= 200
    assert len(order(commissioning(yard_stages("split")))) < 55


@pytest.mark.parametrize("system_id", SYSTEMS)
def test_a_list_holds_each_act_once(yard_stages: Stages, system_id: str) -> None:
    """Filled in, no two items of one list read the same."""
    acts = [item.do for stage in yard_stages(system_id) for item in stage.items]
    assert len(acts) == len(set(acts))


@pytest.mark.parametrize(
    ("system_id", "has", "has_not"),
    [
        (
            "freezer",
            (
                "installation.floor-heating",
                "installation.relief-port",
                "controls.defrost-end",
                "first-start.suction-limit",
                "electrical.rotation",
                "controls.release-cold",
                "controls.port-cold",
                "safety.release",
            ),
            ("charging.detector", "installation.zone", "flows.source-flow"),
        ),
        (
            "split",
            (
                "installation.drain",
                "readiness.air-report",
                "controls.condensate-pump",
                "charging.detector",
                "trim.subcooling",
                "handover.log-book",
            ),
            ("safety.release", "first-start.oil", "live-trips.pump-down", "electrical.rotation"),
        ),
        (
            "heat-pump",
            (
                "installation.zone",
                "installation.outdoor-drain",
                "season.frost",
                "controls.curve",
                "controls.back-up",
                "controls.curve-mild",
                "installation.sealed-charge",
                "installation.arrival",
                "readiness.factory-test",
                "performance.noise-night",
            ),
            (
                "charging.weigh",
                "safety.discharge-limit",
                "safety.high-pressure-circuit",
                "controls.alarm",
                "strength.hold",
                "evacuation.level",
                "charging.weigh",
                "performance.suction-pressure",
                "trim.superheat",
            ),
        ),
        (
            "chiller",
            (
                "readiness.breathing",
                "readiness.shower",
                "charging.detector-people",
                "installation.steel-only",
                "installation.ventilation",
                "installation.two-relief",
                "flows.source-switch",
                "safety.freeze",
                "evacuation.twice",
                "evacuation.rise",
                "flows.antifreeze-source",
            ),
            ("charging.detector", "safety.release", "electrical.heater"),
        ),
        (
            "water-heater",
            (
                "charging.vapour-first",
                "safety.relief-each-part",
                "controls.hygiene",
                "first-start.mixing",
                "installation.unvented",
                "safety.store-cut-out",
                "flows.store-filled",
                "trim.gas-cooler-pressure",
                "safety.relief-settings",
                "upkeep.relief-renewal",
                "trim.oil-return",
            ),
            ("electrical.heater", "charging.detector", "controls.release-cold"),
        ),
        (
            "tower-chiller",
            (
                "flows.tower-hygiene",
                "flows.tower-notice",
                "electrical.heater",
                "trim.oil-return",
                "first-start.oil",
                "charging.air",
                "upkeep.building-inspection-large",
                "safety.interlock",
                "electrical.rotation",
                "installation.relief-outlet",
            ),
            ("charging.detector", "readiness.breathing", "installation.two-relief"),
        ),
    ],
)
def test_what_hurts_people_is_on_the_list_and_nothing_else(
    yard_stages: Stages, system_id: str, has: tuple[str, ...], has_not: tuple[str, ...]
) -> None:
    """Refrigerant, duty, store, defrost and seal decide what stands on a list."""
    found = order(yard_stages(system_id))
    assert not set(has) - set(found)
    assert not set(has_not) & set(found)
