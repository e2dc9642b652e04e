"""Values filled in: what an item must read, from plant, safety figures and predictions."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from commission.checklists import Item, Stage, stages
from commission.checklists.library import library
from commission.checklists.marks import FROM_MEMORY, figure_marks, used_names
from commission.checklists.rendering import show
from commission.checklists.stages import facts_of
from commission.description import LoadedPlant, load_plant
from commission.prediction import fit
from commission.quantities import Display, Kind
from commission.safety import safety_figures
from commission.safety.facts import weaker

SYSTEMS = ("freezer", "split", "heat-pump", "chiller", "water-heater", "tower-chiller")


def items(found: tuple[Stage, ...]) -> dict[str, Item]:
    """Items by id."""
    return {item.id: item for stage in found for item in stage.items}


def test_test_pressure_and_its_steps(cold_room: tuple[Stage, ...]) -> None:
    """EN 378-2: 1.1 x 17 bar g = 18.7 bar g from the lowest stamp, in steps, with the explained number behind it."""
    item = items(cold_room)["strength.hold"]
    assert item.must_read is not None
    assert item.must_read.text.startswith("18.70 bar g")
    assert "1.5, 9.4" in item.do
    assert "18.7 bar g" in item.do
    assert any(figure.method == "test_pressure" for figure in item.figures)


def test_a_margin_never_passes_what_the_nameplate_allows(example_copy: Path) -> None:
    """EN 378-2: the limit device may be set to 0.9 x 28 = 25.2 bar g; a margin of 3 % round 25 bar g is cut there."""
    path = example_copy / "plant.yaml"
    text = path.read_text(encoding="utf-8").replace("high_pressure_limit: 22 bar g", "high_pressure_limit: 25 bar g")
    path.write_text(text, encoding="utf-8")
    loaded = load_plant(example_copy)
    found = items(stages(loaded, "cold-room"))["safety.high-pressure"].must_read
    assert found is not None
    assert found.high is not None
    assert found.high - loaded.barometric_pressure == pytest.approx(25.2e5)
    assert found.text.startswith("25.00 bar g")


def test_vacuum_is_shown_absolute_with_its_criterion(cold_room: tuple[Stage, ...]) -> None:
    """A vacuum is never a gauge pressure, and the list says which criterion applies."""
    item = items(cold_room)["evacuation.level"]
    assert item.must_read is not None
    assert "67 Pa absolute (500 micron)" in item.must_read.text
    assert "270 Pa absolute" in item.must_read.text
    assert item.unit == "Pa a"


def test_expected_readings_carry_their_band_and_condition(example_folder: Path) -> None:
    """The band is twice the standard uncertainty of the prediction, at the condition that is named."""
    loaded = load_plant(example_folder)
    model = fit(loaded, "cold-room")
    item = items(stages(loaded, "cold-room", model))["trim.compressor-superheat"]
    explained = model.predict().expected["compressor_superheat"]
    assert item.must_read is not None
    assert explained.uncertainty is not None
    assert item.must_read.value == pytest.approx(explained.value)
    assert item.must_read.high == pytest.approx(explained.value + 2 * explained.uncertainty)
    assert item.must_read.low == pytest.approx(explained.value - 2 * explained.uncertainty)
    assert "outdoor air" in item.must_read.text


def test_another_day_gives_other_readings(example_folder: Path) -> None:
    """At a cooler condition the expected discharge pressure is lower and the text names that condition."""
    loaded = load_plant(example_folder)
    model = fit(loaded, "cold-room")
    rated = items(stages(loaded, "cold-room", model))["performance.discharge-pressure"].must_read
    mild = items(stages(loaded, "cold-room", model, {"heat_sink_inlet_temperature": 293.15}))
    found = mild["performance.discharge-pressure"].must_read
    assert rated is not None
    assert found is not None
    assert found.value is not None
    assert rated.value is not None
    assert found.value < rated.value
    assert "outdoor air 20.0 °C" in found.text


def test_one_prediction_is_enough_for_its_own_condition(example_folder: Path) -> None:
    """A prediction in place of the model fills in its condition and says that other days were not calculated."""
    loaded = load_plant(example_folder)
    prediction = fit(loaded, "cold-room").predict()
    found = items(stages(loaded, "cold-room", prediction))
    target = found["performance.discharge-pressure"].must_read
    assert target is not None
    assert target.value == pytest.approx(prediction.expected["discharge_pressure"].value)


def test_without_a_model_the_reason_is_shown(yard_stages: Callable[[str], tuple[Stage, ...]]) -> None:
    """Expected readings of a system that could not be calculated say so; nothing is put in their place."""
    item = items(yard_stages("freezer"))["performance.discharge-pressure"]
    assert item.must_read is not None
    assert item.must_read.value is None
    assert item.must_read.text.startswith("not calculated:")


def test_a_setting_that_is_not_stated_is_named(example_copy: Path) -> None:
    """The key to write stands where the value would stand."""
    path = example_copy / "plant.yaml"
    text = path.read_text(encoding="utf-8")
    assert ", rated_current: 5.2 A" in text
    path.write_text(text.replace(", rated_current: 5.2 A", ""), encoding="utf-8")
    item = items(stages(load_plant(example_copy), "cold-room"))["electrical.protection"]
    assert item.must_read is not None
    assert item.must_read.text == "not stated: nameplate.rated_current"
    assert item.must_read.value is None


def test_every_answer_has_a_unit_when_it_is_a_value(yard_stages: Callable[[str], tuple[Stage, ...]]) -> None:
    """A value without a unit means nothing; other answers have none."""
    for system_id in ("freezer", "split", "heat-pump", "chiller", "water-heater", "tower-chiller"):
        for item in items(yard_stages(system_id)).values():
            assert (item.unit is not None) is (item.answer == "value"), item.id


def test_us_units_change_the_text_and_the_unit(example_copy: Path) -> None:
    """A plant that prints US units reads psig, and its answers are asked for in psig; vacuum in micron."""
    path = example_copy / "plant.yaml"
    path.write_text(path.read_text(encoding="utf-8").replace("units: metric", "units: us_customary"), encoding="utf-8")
    found = items(stages(load_plant(example_copy), "cold-room"))
    assert found["strength.hold"].unit == "psig"
    assert found["evacuation.level"].unit == "micron"
    assert "psig" in (found["strength.hold"].must_read or pytest.fail("no target")).text


def test_a_fact_that_is_not_known_shows_the_item_with_a_note(example_copy: Path) -> None:
    """A question too many hurts nobody: an unknown condition shows the item and says what is not known."""
    path = example_copy / "plant.yaml"
    text = path.read_text(encoding="utf-8").replace("type: reciprocating, ", "")
    path.write_text(text, encoding="utf-8")
    found = items(stages(load_plant(example_copy), "cold-room"))
    note = found["electrical.rotation"].note
    assert note is not None
    assert "not known" in note


@pytest.mark.parametrize(
    ("value", "kind", "text"),
    [
        (66.6612, Kind.PRESSURE, "67 Pa absolute (500 micron)"),
        (1.8e6, Kind.PRESSURE, "17.00 bar g"),
        (86400.0, Kind.DURATION, "24 h"),
        (1800.0, Kind.DURATION, "30 min"),
        (10.0, Kind.DURATION, "10 s"),
        (12 * 86400.0, Kind.DURATION, "12 days"),
        (6400.0, Kind.PRESSURE_DIFFERENCE, "0.06 bar"),
        (0.0095, Kind.DENSITY, "9.5 g/m³"),
        (12.0, Kind.NUMBER, "12"),
    ],
)
def test_values_are_shown_as_people_read_them(value: float, kind: Kind, text: str) -> None:
    """Vacuum absolute, long times in hours, small densities in grams."""
    assert show(value, kind, Display("metric", 1e5)) == text


def test_the_library_holds_no_unfilled_braces(cold_room: tuple[Stage, ...], yard: LoadedPlant) -> None:
    """Every text is filled in before a person sees it."""
    for item in [*items(cold_room).values(), *items(stages(yard, "chiller")).values()]:
        for text in (item.do, item.how, item.if_not, item.hazard, item.caution, item.must_read and item.must_read.text):
            assert not text or not any(sign in text for sign in ("{", "}", "[[", "]]"))


def test_a_figure_from_memory_keeps_its_mark_in_the_item(yard: LoadedPlant) -> None:
    """An item is no surer than the least sure figure that it shows, whatever its own source was read in."""
    for system_id in SYSTEMS:
        facts = facts_of(yard, system_id, None, None)
        found = items(stages(yard, system_id))
        for checked in (item for stage in library() for item in stage.items if item.entry.id in found):
            for name in used_names(checked, facts):
                for mark in figure_marks(name, facts):
                    shown = found[checked.entry.id].mark
                    assert mark not in FROM_MEMORY or weaker(mark, shown) == shown, (checked.entry.id, name)


def test_a_figure_from_memory_weakens_an_item_that_was_read(example_copy: Path) -> None:
    """The ratio of 0.9 is from memory (EN 378-2): an item that quotes it says so though its source was read."""
    (example_copy / "checklists").mkdir(exist_ok=True)
    text = """stage: safety
items:
  - {id: safety.plain, do: Read it., source: ours, mark: V1}
  - {id: safety.quoted, do: 'Read that it is below {figure.high_pressure_limit_highest}.', source: ours, mark: V1}
"""
    (example_copy / "checklists" / "ours.yaml").write_text(text, encoding="utf-8")
    found = items(stages(load_plant(example_copy), "cold-room"))
    assert found["safety.plain"].mark == "V1"
    assert found["safety.quoted"].mark == "M"
    assert found["safety.quoted"].sureness == "from memory, check the edition in force"


def test_the_plants_own_register_figures_are_used(example_copy: Path) -> None:
    """A flammability limit that the plant states replaces the register's in figures and items, with its source."""
    path = example_copy / "plant.yaml"
    before = safety_figures(load_plant(example_copy), "cold-room").found["flammable_alarm_level"]
    assert "no setting" in before.note
    assert "might never alarm" in before.note, "0.45 kg in 67 m³ is 6.7 g/m³, below a quarter of what can burn"
    own = "\nrefrigerants: {R-290: {lfl: {value: 0.030 kg/m3, source: a later edition}}}\n"
    path.write_text(path.read_text(encoding="utf-8") + own, encoding="utf-8")
    loaded = load_plant(example_copy)
    after = safety_figures(loaded, "cold-room").found["flammable_alarm_level"]
    assert before.value == pytest.approx(0.25 * 0.038)
    assert after.value == pytest.approx(0.25 * 0.030)
    assert any("a later edition" in given.origin for given in after.explained.inputs)
    assert facts_of(loaded, "cold-room", None, None).lookup("fluid.lfl").content == pytest.approx(0.030)


def test_the_strength_test_never_reads_below_its_ratio(cold_room: tuple[Stage, ...]) -> None:
    """EN 378-2, table 3: at least 1.1 times the allowable pressure; the margin is upwards only."""
    found = items(cold_room)["strength.hold"].must_read
    assert found is not None
    assert found.low == pytest.approx(found.value)
    assert found.high is not None
    assert found.value is not None
    assert found.high > found.value


def test_joints_are_looked_at_where_people_are(yard_stages: Callable[[str], tuple[Stage, ...]]) -> None:
    """Indoors, by the name on the door; an ammonia plant in its machinery room has flanges."""
    assert "Plant cellar" in items(yard_stages("water-heater"))["installation.joints"].do
    assert "Dining hall" in items(yard_stages("split"))["installation.joints"].do
    assert "installation.joints" not in items(yard_stages("chiller"))


def test_the_store_is_full_before_its_relief_is_tried(yard_stages: Callable[[str], tuple[Stage, ...]]) -> None:
    """A lever that is lifted on an empty store proves nothing."""
    order = [item.id for stage in yard_stages("water-heater") for item in stage.items]
    assert order.index("flows.store-filled") < order.index("installation.unvented")
    assert order.index("installation.unvented") < order.index("controls.hygiene")
    assert "flows.water-pressure" not in order


def test_no_act_is_asked_for_twice_with_water(yard_stages: Callable[[str], tuple[Stage, ...]]) -> None:
    """Stopping the water is the way to raise the pressure; it is one live trip, not two."""
    found = items(yard_stages("chiller"))
    assert "live-trips.high-pressure" in found
    assert "live-trips.tower" not in found
    assert "first-start.sight-glass" not in found
