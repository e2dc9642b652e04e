"""Answers that another answer decides: the pressure at rest, the end of a pressure hold."""

from __future__ import annotations

from pathlib import Path

import pytest

from commission.checklists import ChecklistError, Item, stages, target_with
from commission.checklists.library import library, merge
from commission.description import LoadedPlant, load_plant

T, P = "charging.rest-temperature", "charging.foreign-gas"
START, END = "strength.start-pressure", "strength.end-pressure"


@pytest.fixture(scope="module")
def plant(example_folder: Path) -> LoadedPlant:
    """The example plant."""
    return load_plant(example_folder)


def item(loaded: LoadedPlant, system_id: str, identity: str) -> Item:
    """One item of a system's list."""
    return next(i for stage in stages(loaded, system_id) for i in stage.items if i.id == identity)


def at_rest(loaded: LoadedPlant, system_id: str, bar: float, celsius: float) -> bool | None:
    """Whether an absolute pressure in bar is what it must be at this temperature; None where nobody can say."""
    answers = {P: bar * 1e5, T: 273.15 + celsius}
    found = target_with(item(loaded, system_id, P), answers, loaded, system_id)
    if found is None:
        return None
    assert found.low is not None
    assert found.high is not None
    return found.low <= bar * 1e5 <= found.high


@pytest.mark.parametrize(
    ("system_id", "bar", "celsius", "within"),
    [
        ("cold-room", 8.365, 20.0, True),  # R-290, Lemmon et al. 2009: 8.365 bar at 20 °C
        ("cold-room", 9.2, 20.0, False),  # 0.8 bar of air
        ("cold-room", 4.7, 20.0, False),  # saturated at 0 °C: no liquid left
        ("shower-water", 57.3, 20.0, True),  # R-744, Span and Wagner 1996: 57.3 bar at 20 °C
        ("shower-water", 62.0, 20.0, False),
        ("shower-water", 62.0, 35.0, None),  # above 31 °C there is no liquid
    ],
)
def test_the_pressure_at_rest_is_judged_by_its_temperature(
    plant: LoadedPlant, system_id: str, bar: float, celsius: float, within: bool | None
) -> None:
    """Saturation within the error of the plant's own gauge and probe; published values from memory, half a per cent."""
    assert at_rest(plant, system_id, bar, celsius) is within


def test_a_blend_at_rest_lies_between_dew_and_bubble_point(plant: LoadedPlant) -> None:
    """R-454C at 20 °C: anywhere from dew to bubble pressure, nothing outside."""
    from commission.properties import refrigerant

    fluid = refrigerant("R-454C")
    low, high = fluid.dew(293.15).p / 1e5, fluid.bubble(293.15).p / 1e5
    assert [at_rest(plant, "freezer-room", bar, 20.0) for bar in (low, (low + high) / 2, high)] == [True] * 3
    assert [at_rest(plant, "freezer-room", bar, 20.0) for bar in (low - 0.6, high + 0.6)] == [False] * 2


def test_the_words_say_what_it_is(plant: LoadedPlant) -> None:
    """The list shows saturation at three temperatures; the judged answer says what a deviation means."""
    shown = item(plant, "cold-room", P)
    assert shown.must_read is not None
    assert shown.must_read.text.startswith("saturation: 5.39 bar g at 10 °C, 7.39 bar g at 20 °C")
    found = target_with(shown, {P: 9.2e5, T: 293.15}, plant, "cold-room")
    assert found is not None
    assert "at 20.0 °C; too high: air or nitrogen in the circuit" in found.text


def test_the_end_of_the_hold_is_held_to_its_start(plant: LoadedPlant) -> None:
    """Within the error of the gauge that the plant names (0.5 % of 30 bar, 0.17 bar at 95 %); less is a leak."""
    end = item(plant, "cold-room", END)
    bound = target_with(end, {START: 18.0e5, END: 17.9e5}, plant, "cold-room")
    assert bound is not None
    assert bound.low == pytest.approx(18.0e5 - 0.175e5, abs=0.01e5)
    assert bound.high == pytest.approx(18.0e5 + 0.175e5, abs=0.01e5)


@pytest.mark.parametrize("answers", [{}, {T: 293.15}, {P: 8e5}, {"charging.weigh": 0.45}])
def test_without_both_answers_nothing_is_judged(plant: LoadedPlant, answers: dict[str, float]) -> None:
    """One alone says nothing of the other."""
    assert target_with(item(plant, "cold-room", P), answers, plant, "cold-room") is None
    assert target_with(item(plant, "cold-room", "charging.weigh"), answers, plant, "cold-room") is None


def test_an_item_that_is_no_value_cannot_decide_another() -> None:
    """A slip in an id is found when the file is read, with its line and the nearest id."""
    text = """stage: charging
items:
  - id: charging.again
    do: Read it again.
    source: ours
    answer: value
    unit: bar g
    must_read: {rest_at: charging.rest-temperatur}
"""
    with pytest.raises(ChecklistError) as caught:
        merge(library(), [("ours.yaml", text)])
    (problem,) = caught.value.problems
    assert (problem.file, problem.line, problem.nearest) == ("ours.yaml", 3, T)
