"""The plant as a whole: it reviews without errors, keeps its documents, and answers in the promised form."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from commission.checklists import stages
from commission.description import LoadedPlant
from commission.review import review
from tests.conftest import Run
from tests.example.conditions import CONDITIONS, Predicted

DUTIES = {"cold_storage", "comfort_cooling", "space_heating", "water_heating"}


def test_review_finds_no_error_and_no_other_warning(plant: LoadedPlant) -> None:
    """A plant that is shown as an example has nothing that a colleague would stop it for."""
    stopped = [f for f in review(plant) if f.severity in ("error", "warning")]
    assert not stopped, "\n".join(str(f) for f in stopped)


def test_every_system_stands_in_the_tables_of_these_tests(plant: LoadedPlant) -> None:
    """No system of the example is left unlooked at, and every kind of duty is there."""
    assert set(plant.plant.systems) == set(CONDITIONS)
    assert {system.duty for system in plant.plant.systems.values()} >= DUTIES


def test_instruments_reach_what_they_must_read(plant: LoadedPlant, predicted: Predicted) -> None:
    """Every instrument of a system spans the values expected of it, at every condition looked at."""
    for system, conditions in CONDITIONS.items():
        for number in range(len(conditions)):
            expected = predicted(system, number).expected
            for key, identity in plant.system(system).measured_with.items():
                span = plant.plant.instruments[identity].resolved
                if key not in expected or span.range_low is None or span.range_high is None:
                    continue
                value = expected[key].value - (plant.barometric_pressure if key.endswith("pressure") else 0.0)
                assert span.range_low <= value <= span.range_high, (system, number, key)


def test_documents_are_there_and_invented(plant: LoadedPlant, example_folder: Path) -> None:
    """Each document of a system is a file of the folder that says it is invented."""
    for system in plant.plant.systems.values():
        assert system.documents
        for document in system.documents:
            assert document.file is not None
            assert "Invented for this example." in (example_folder / document.file).read_text(encoding="utf-8")


@pytest.mark.parametrize("system", CONDITIONS)
def test_data_sheets_agree_with_the_description(plant: LoadedPlant, example_folder: Path, system: str) -> None:
    """Every capacity and power of the rated points stands in the system's documents as it is printed there."""
    one = plant.system(system)
    text = "".join((example_folder / d.file).read_text(encoding="utf-8") for d in one.documents if d.file)
    points = one.rated_points or (one.condensing_unit.rated_points if one.condensing_unit else ())
    assert points
    for point in points:
        for key in ("cooling_capacity", "heating_capacity", "power_input"):
            value = getattr(point, key, None)
            assert value is None or f"{value / 1e3:.2f} kW" in text, (key, value)


@pytest.mark.parametrize("system", CONDITIONS)
def test_every_system_has_its_checklists(plant: LoadedPlant, predicted: Predicted, system: str) -> None:
    """Each item that must read a value has one at the design condition, with few left open for lack of a fact."""
    found = stages(plant, system, predicted(system, 0))
    assert {"readiness", "first-start", "performance", "handover", "season"} <= {stage.id for stage in found}
    assert sum(len(stage.items) for stage in found) >= 25


def test_predict_answers_for_all_systems_in_the_promised_form(commission: Run, example_folder: Path) -> None:
    """`predict --json` gives every system conditions and expected values, each with unit and expanded uncertainty."""
    done = commission("predict", example_folder, "--json")
    assert done.returncode == 0, done.stderr
    answer = json.loads(done.stdout)["systems"]
    assert set(answer) == set(CONDITIONS)
    for system, found in answer.items():
        assert found["expected"], system
        assert all("critical point" in reason for reason in found["not_calculated"].values()), system
        for key, entry in found["expected"].items():
            assert set(entry) == {"value", "unit", "uncertainty"}, key
            assert entry["uncertainty"] is None or entry["uncertainty"] >= 0


@pytest.mark.parametrize(
    ("system", "at", "key", "low", "high"),
    [
        ("cold-room", "heat_source_inlet_temperature=5 °C,heat_sink_inlet_temperature=36 °C", "pressure_ratio", 3, 5),
        ("freezer-room", "heat_source_inlet_temperature=-22 °C,heat_sink_inlet_temperature=36 °C",
         "pressure_ratio", 8, 11),
        ("dining-hall", "heat_source_inlet_temperature=30 °C,heat_source_wet_bulb=21 °C,"
         "heat_sink_inlet_temperature=36 °C,compressor_speed=4500 rpm", "cooling_cop", 2.5, 3.5),
        ("floor-heating", "heat_source_inlet_temperature=-12 °C,heat_source_relative_humidity=80 %,"
         "heat_sink_outlet_temperature=40 °C,compressor_speed=5400 rpm", "heating_cop", 2.1, 3.0),
        ("shower-water", "heat_source_inlet_temperature=-10 °C,heat_sink_inlet_temperature=14 °C,"
         "heat_sink_outlet_temperature=65 °C", "heating_cop", 2.2, 3.2),
    ],
)  # fmt: skip
def test_predict_at_answers_beyond_the_rated_points(
    commission: Run, example_folder: Path, system: str, at: str, key: str, low: float, high: float
) -> None:
    """Each kind of system is predicted by the conditions that matter to it, beyond what its supplier states, and gives
    what a practitioner expects there (common practice, no source)."""
    conditions = [word for one in at.split(",") for word in ("--at", one)]
    done = commission("predict", example_folder, "--system", system, *conditions, "--json")
    assert done.returncode == 0, done.stderr
    found = json.loads(done.stdout)["systems"][system]
    assert low < found["expected"][key]["value"] < high
