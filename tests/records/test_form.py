"""The form of a record: what a person fills in is a record."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from commission.description import LoadedPlant, load_plant, new_plant, read_yaml
from commission.errors import InputError
from commission.prediction import SystemModel, fit
from commission.quantities import NOMENCLATURE, Kind
from commission.records import RecordError, read_record, record_form

FILLED = {
    Kind.TEMPERATURE: "5 °C", Kind.PRESSURE: "9 bar g", Kind.POWER: "1.6 kW", Kind.TEMPERATURE_DIFFERENCE: "6 K",
    Kind.RATIO: "85 %", Kind.VOLUME_FLOW: "2100 m3/h",
}  # fmt: skip


def test_a_form_filled_in_is_a_record(tmp_path: Path, loaded: LoadedPlant, model: SystemModel) -> None:
    """Every open place filled, and the form reads as a record with an instrument for every reading."""
    text = record_form(loaded, "store", "visit", model)

    def fill(match: re.Match[str]) -> str:
        return f"{match[1]}: {{value: {FILLED[NOMENCLATURE[match[1]].kind]}"

    text = re.sub(r"(\w+): \{value: ", fill, text)
    text = text.replace("started: ", "started: 2026-05-14T10:20+01:00 ").replace(
        "since_start: ", "since_start: 45 min "
    )
    text = text.replace("since_defrost: ", "since_defrost: 90 min ").replace("name: ", "name: somebody")
    text = re.sub(r"  visit.*\n", "", text).replace("answers:", "answers: {visit.clean: yes}")
    path = tmp_path / "form.yaml"
    path.write_text(text, encoding="utf-8")
    record = read_record(path, loaded)
    assert set(record.readings) >= {
        "suction_pressure", "discharge_pressure", "suction_temperature", "discharge_temperature", "power_input",
    }  # fmt: skip
    assert record.readings["suction_pressure"].instrument == "low gauge"
    assert record.readings["discharge_pressure"].instrument == "high gauge"
    assert record.conditions["heat_sink_inlet_temperature"].instrument == "air probe"


def test_a_form_left_open_names_every_open_place(tmp_path: Path, loaded: LoadedPlant, model: SystemModel) -> None:
    """An empty form is refused with a problem at each place, so that nothing unread is filed as read."""
    path = tmp_path / "form.yaml"
    path.write_text(record_form(loaded, "store", "visit", model), encoding="utf-8")
    with pytest.raises(RecordError) as caught:
        read_record(path, loaded)
    assert {"started", "people.operator.name"} <= {p.path for p in caught.value.problems}


def test_every_item_of_the_stage_stands_in_the_form(loaded: LoadedPlant) -> None:
    """Items come with the sort of answer that they ask for; without a model only named instruments are listed."""
    text = record_form(loaded, "store", "visit")
    assert "visit.clean: {answer: , reason: }  # yes, no or not applicable; See that it is clean." in text
    assert "visit.setting: {answer: , reason: }  # bar g" in text
    assert "discharge_pressure: {value: , instrument: high gauge" in text


@pytest.mark.parametrize(("system", "stage"), [("stor", "visit"), ("store", "vist")])
def test_an_unknown_system_or_stage_names_the_nearest(loaded: LoadedPlant, system: str, stage: str) -> None:
    """A slip is met with the word that is known."""
    with pytest.raises(InputError) as caught:
        record_form(loaded, system, stage)
    assert caught.value.problems[0].nearest in ("store", "visit")


def test_a_plant_without_instruments_still_asks_for_readings(tmp_path: Path) -> None:
    """Who has named no instruments yet gets every reading of one gauge, probe or meter, and none is empty YAML."""
    folder = new_plant(tmp_path / "plant", "space_heating")[0].parent
    loaded = load_plant(folder)
    (system,) = loaded.plant.systems
    text = record_form(loaded, system, "performance", fit(loaded, system))
    assert read_yaml(text).data["readings"].keys() >= {"suction_pressure", "discharge_pressure", "power_input"}
    assert read_yaml(record_form(loaded, system, "performance")).data["readings"] == {}


def test_what_is_left_open_is_said_plainly(tmp_path: Path, loaded: LoadedPlant, model: SystemModel) -> None:
    """A blank form names what is not filled in, in the words of a person and without an empty echo."""
    path = tmp_path / "blank.yaml"
    path.write_text(record_form(loaded, "store", "visit", model), encoding="utf-8")
    with pytest.raises(RecordError) as caught:
        read_record(path, loaded)
    name = next(p for p in caught.value.problems if p.path == "people.operator.name")
    assert name.message == "nothing is written here"
    assert "written:" not in str(name)


def test_what_is_read_is_asked_once(loaded: LoadedPlant, model: SystemModel) -> None:
    """An item that asks for a reading of the form is not asked again below, and the reading says which it answers."""
    text = record_form(loaded, "store", "visit", model)
    assert "visit.suction: {" not in text
    assert re.search(r"  suction_pressure: .*; answers visit\.suction\n", text)
    assert "visit.setting: {answer: " in text


def test_currents_and_voltages_are_asked_by_phase(folder: Path) -> None:
    """Both are asked together, for each phase unless the nameplate says that there is only one."""
    plant = folder / "plant.yaml"
    text = plant.read_text(encoding="utf-8")
    text = text.replace("measured_with: {", "measured_with: {current: clamp meter, ")
    text = text.replace("systems:\n", "  clamp meter: {measures: current, accuracy: {of_reading: 2 %}}\nsystems:\n")
    plant.write_text(text, encoding="utf-8")
    loaded = load_plant(folder)
    form = record_form(loaded, "store", "visit")
    assert "current: {phases: [], instrument: clamp meter" in form
    assert "voltage: {phases: []" in form
    data = read_yaml(form).data["readings"]
    assert data["current"]["phases"] == data["voltage"]["phases"] == []
    single = text.replace("nameplate: {", "nameplate: {phases: 1, ")
    plant.write_text(single, encoding="utf-8")
    loaded = load_plant(folder)
    assert "current: {value: , instrument: clamp meter" in record_form(loaded, "store", "visit")
