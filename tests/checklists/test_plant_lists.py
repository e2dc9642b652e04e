"""A plant's own checklists: added, replaced, left out, and refused with their line."""

from __future__ import annotations

from pathlib import Path

import pytest

from commission.checklists import ChecklistError, Item, Stage, stages
from commission.description import load_plant


def own(folder: Path, text: str, name: str = "ours.yaml") -> tuple[Stage, ...]:
    """The stages of the cold room with one file of the plant's own."""
    (folder / "checklists").mkdir(exist_ok=True)
    (folder / "checklists" / name).write_text(text, encoding="utf-8")
    return stages(load_plant(folder), "cold-room")


def items(found: tuple[Stage, ...]) -> dict[str, Item]:
    """Items by id."""
    return {item.id: item for stage in found for item in stage.items}


def refused(folder: Path, text: str) -> ChecklistError:
    """The error that a file brings."""
    with pytest.raises(ChecklistError) as caught:
        own(folder, text)
    return caught.value


def test_an_item_is_added_where_it_says(example_copy: Path) -> None:
    """`after` puts it behind another item of the stage."""
    text = """stage: charging
items:
  - id: charging.cellar-hatch
    do: Shut the hatch of the cellar.
    source: owner's house rules
    after: charging.detector
"""
    ids = [item.id for stage in own(example_copy, text) for item in stage.items]
    assert ids.index("charging.cellar-hatch") == ids.index("charging.detector") + 1


def test_an_item_that_is_moved_stands_behind_the_last_that_applies(example_copy: Path) -> None:
    """A move without a condition always holds; where the item it names does not apply, the one before it counts."""
    text = """stage: trim
items:
  - id: trim.shade
    do: Put up the shade of the unit.
    source: owner's house rules
    move: {to: installation, after: installation.sealed-charge}
"""
    order = [item.id for stage in own(example_copy, text) for item in stage.items]
    assert "installation.sealed-charge" not in order
    assert order.index("installation.zone") < order.index("trim.shade") < order.index("installation.room-ignition")


def test_an_item_is_replaced_by_its_id(example_copy: Path) -> None:
    """The same id replaces the shipped item in its place, and its origin tells."""
    text = """stage: evacuation
items:
  - id: evacuation.rise
    do: Shut the pump off and read the vacuum after an hour.
    answer: value
    unit: micron
    must_read: {at_most: 400 micron, says: the owner's rule}
    source: owner's specification
"""
    item = items(own(example_copy, text))["evacuation.rise"]
    assert item.must_read is not None
    assert item.must_read.text.startswith("at most 53 Pa absolute (400 micron)")
    assert item.origin.startswith("checklists/ours.yaml:3")


def test_an_item_that_is_left_out_keeps_its_reason(example_copy: Path) -> None:
    """It stays on the list with the reason, so that nobody asks twice."""
    text = """stage: controls
leave_out:
  - {id: controls.alarm, reason: the alarm line is tested with the fire alarm}
"""
    assert items(own(example_copy, text))["controls.alarm"].left_out == "the alarm line is tested with the fire alarm"


def test_a_new_stage_stands_where_it_says(example_copy: Path) -> None:
    """A stage of the plant's own follows the one it names."""
    text = """stage: commissioning-water-meter
title: Water meter
purpose: For the tenant's bill.
after: trim
items:
  - {id: commissioning-water-meter.read, do: Read the meter., source: contract, answer: text}
"""
    titles = [stage.id for stage in own(example_copy, text)]
    assert titles.index("commissioning-water-meter") == titles.index("trim") + 1


def test_all_problems_of_a_file_in_one_run_with_their_lines(example_copy: Path) -> None:
    """Unknown names, kinds and units are all found when the file is read, each with its line and the nearest name."""
    text = """stage: trim
items:
  - id: trim.one
    do: Read {expected.suction_presure}.
    source: ours
    when: system.duty == 'cold_storge'
  - id: trim.two
    do: Read it.
    source: ours
    answer: value
    quantity: superheat
    must_read: {value: expected.suction_pressure}
  - id: trim.three
    do: Read it again.
    source: ours
    answer: value
    unit: furlong
  - id: trim.four
    do: Read {system.charge!r}.
    source: ours
    when: __import__('os').system('true')
"""
    problems = refused(example_copy, text).problems
    lines = {problem.line for problem in problems}
    assert {4, 6, 12, 17, 19, 21} <= lines
    assert all(problem.file == "checklists/ours.yaml" for problem in problems)
    assert "expected.suction_pressure" in {problem.nearest for problem in problems}
    assert "cold_storage" in {problem.nearest for problem in problems}


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("stage: trim\nitmes: []\n", "not known here"),
        ("stage: brand-new\nitems: []\n", "a new stage wants a title"),
        ("stage: trim\nleave_out:\n  - {id: trim.nothing, reason: x}\n", "has this id"),
        ("stage: trim\nitems:\n  - {id: charging.weigh, do: Weigh., source: ours}\n", "stands in the stage charging"),
        ("stage: trim\nitems:\n  - {id: Trim One, do: Weigh., source: ours}\n", "plain words"),
        ("stage: trim\nitems:\n  - {id: trim.x, do: 'Read {system.charge.', source: ours}\n", "brace is not closed"),
        ("stage: trim\nitems:\n  - {id: trim.x, do: 'Read [[it.', source: ours}\n", "brackets are not closed"),
        (
            "stage: trim\nitems:\n  - {id: trim.x, do: Read., source: ours, move: {to: nowhere, when: 'yes'}}\n",
            "no stage has this id",
        ),
        (
            "stage: trim\nitems:\n  - {id: trim.x, do: Read., source: ours, when: system.charge}\n",
            "a condition is wanted",
        ),
        (
            "stage: trim\nitems:\n  - {id: trim.x, do: Read., source: ours}\n  - {id: trim.x, do: Go., source: ours}\n",
            "used twice",
        ),
        ("stage: trim\nitems: !!python/object:os.system [true]\n", "tag"),
        ("stage: trim\nstage: trim\n", "written twice"),
    ],
)
def test_what_cannot_be_used_is_refused(example_copy: Path, text: str, words: str) -> None:
    """Each fault of form or meaning is a problem at its place."""
    assert any(words in problem.message for problem in refused(example_copy, text).problems)


def test_items_of_a_plant_are_moved_behind_or_before_others(example_copy: Path) -> None:
    """Several moved to one place keep their order; where the named item does not apply, the next that does counts."""
    found = own(
        example_copy,
        """stage: safety
items:
  - {id: safety.one, do: Look once., source: ours, move: {to: charging, before: charging.detector-people}}
  - {id: safety.two, do: Look twice., source: ours, move: {to: charging, before: charging.detector-people}}
  - {id: safety.three, do: Look thrice., source: ours, move: {to: charging, after: charging.detector}}
  - {id: safety.four, do: Look again., source: ours, move: {to: charging, after: charging.detector}}
""",
    )
    order = [item.id for stage in found if stage.id == "charging" for item in stage.items]
    assert order[0:4] == ["charging.keep-away", "charging.detector", "safety.three", "safety.four"]
    assert order[4:7] == ["safety.one", "safety.two", "charging.weigh"]


@pytest.mark.parametrize(
    ("move", "value", "message"),
    [
        ("{to: charge}", "charge", "no stage has this id"),
        ("{to: charging, before: charging.cylindre}", "charging.cylindre", "no item of the stage charging"),
        ("{to: charging, after: charging.detector, before: charging.cylinder}", "charging.cylinder", "not both"),
    ],
)
def test_a_move_names_one_place_that_exists(example_copy: Path, move: str, value: str, message: str) -> None:
    """A stage or item that no list holds, or two places at once, is refused with its line."""
    text = f"stage: safety\nitems:\n  - {{id: safety.one, do: Look once., source: ours, move: {move}}}\n"
    problem = next(p for p in refused(example_copy, text).problems if message in p.message)
    assert (problem.value, problem.line) == (value, 3)
