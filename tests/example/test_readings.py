"""What a practitioner reads and tests on each kind of system stands in the records, and agrees with itself."""

from __future__ import annotations

import csv
import datetime as dt
from collections.abc import Iterator
from itertools import pairwise
from pathlib import Path

import pytest

from commission.checklists import stages
from commission.description import LoadedPlant
from commission.records import FiledRecord, history

WATER = ("floor-heating", "shower-water")
ROOMS = ("cold-room", "freezer-room")
STARTED_UP = (
    "readiness", "installation", "strength", "evacuation", "charging", "electrical", "safety", "first-start",
    "live-trips", "controls", "trim", "performance", "handover",
)  # fmt: skip
IN_THE_COLD = "controls.head-pressure"
"""Of the cold room's items the one that has to wait for cold weather, wherever it stands in the list."""


@pytest.fixture(scope="module")
def filed(plant: LoadedPlant) -> tuple[FiledRecord, ...]:
    """All filed records in the order of their visits."""
    return history(plant)


def of(filed: tuple[FiledRecord, ...], system: str) -> Iterator[FiledRecord]:
    """The records of one system, in order."""
    return (r for r in filed if r.system == system)


def answers(plant: LoadedPlant, filed: tuple[FiledRecord, ...], system: str) -> set[str]:
    """Items of a system that some visit answered, by hand or by a reading of its stage."""
    listed = {stage.id: {i.id for i in stage.items} for stage in stages(plant, system)}
    found = set[str]()
    for record in of(filed, system):
        found |= set(record.file.answers) | (listed.get(record.file.stage, set()) - set(record.filed.unanswered))
    return found


def log_of(plant: LoadedPlant, filed: tuple[FiledRecord, ...], system: str) -> tuple[FiledRecord, list[dict[str, str]]]:
    """The record of a room's test and the rows of the 48 h log that is filed with it."""
    for record in of(filed, system):
        for attached in record.filed.attachments:
            if "-log-" in attached.path:
                path = plant.folder / "records" / attached.path
                return record, list(csv.DictReader(path.read_text(encoding="utf-8").splitlines(), delimiter=";"))
    pytest.fail(f"no log of {system}")


def test_each_system_was_read_phase_by_phase(filed: tuple[FiledRecord, ...], plant: LoadedPlant) -> None:
    """Currents and voltages stand by phase, unbalanced by no more than 2 % in voltage and 10 % in current (common
    practice, no source)."""
    for system in plant.plant.systems:
        found = [r for r in of(filed, system) if {"current", "voltage"} <= set(r.file.readings)]
        assert found, system
        for record in found:
            for key, most in (("current", 0.10), ("voltage", 0.02)):
                phases = [float(p.split()[0]) for p in record.file.readings[key].phases]
                mean = sum(phases) / 3
                assert len(phases) == 3
                assert max(abs(p - mean) for p in phases) <= most * mean, (record.id, key)


def test_trip_points_were_read(filed: tuple[FiledRecord, ...], plant: LoadedPlant) -> None:
    """Every machine that is opened on site was tripped by pressure, first standing and then running."""
    for system, described in plant.plant.systems.items():
        asked = (
            {"safety.high-pressure", "live-trips.high-pressure"} if not described.sealed else {"first-start.current"}
        )
        assert asked <= answers(plant, filed, system), system
    for system in ROOMS:
        assert "live-trips.pump-down" in answers(plant, filed, system)


@pytest.mark.parametrize("system", WATER)
def test_water_was_proved_first(filed: tuple[FiledRecord, ...], system: str) -> None:
    """The first record of a machine that heats water proves the water, and no earlier one can have started it."""
    first = next(of(filed, system))
    assert any(item.startswith("flows.") for item in first.file.answers)
    assert "heat_sink_flow" in first.file.conditions


@pytest.mark.parametrize("system", ROOMS)
def test_two_days_of_the_room_agree_with_what_was_read_from_them(
    plant: LoadedPlant, filed: tuple[FiledRecord, ...], system: str
) -> None:
    """Running share, starts, defrosts and mean of the log are those of the record, and a practitioner believes them:
    a room between its thermostat's ends but for doors and defrosts, running a quarter to three quarters of the time,
    defrosted as its description says (common practice, no source)."""
    record, rows = log_of(plant, filed, system)
    times = [dt.datetime.fromisoformat(r["time"]) for r in rows]
    assert times[-1] - times[0] == dt.timedelta(hours=48)
    assert {b - a for a, b in pairwise(times)} == {dt.timedelta(minutes=5)}
    air = [float(r["room air °C"]) for r in rows]
    runs = [float(r["compressor kW"]) > 0.2 for r in rows]
    defrosts = sum(b["state"] == "defrost" != a["state"] for a, b in pairwise(rows))
    read = record.filed.readings
    controls, coil = plant.system(system).controls, plant.system(system).evaporator
    assert controls.room_temperature is not None
    assert controls.starts_per_hour is not None
    assert controls.room_differential is not None
    assert coil.defrost is not None
    assert coil.defrost.interval is not None
    assert coil.defrost.longest is not None
    assert read["room_temperature"].value - 273.15 == pytest.approx(sum(air) / len(air), abs=0.15)
    assert read["running_share"].value == pytest.approx(sum(runs) / len(runs), abs=0.04)
    assert 0.25 < read["running_share"].value < 0.75
    assert read["starts_per_hour"].value <= controls.starts_per_hour
    assert read["defrost_time"].value < coil.defrost.longest
    assert defrosts == 48 * 3600 / coil.defrost.interval
    low = controls.room_temperature - 273.15
    assert min(air) > low - 0.5
    assert max(air) < low + controls.room_differential + 4.0


def test_the_store_was_heated_by_what_the_machine_gave(plant: LoadedPlant, filed: tuple[FiledRecord, ...]) -> None:
    """Time times heat is the heat that a litre of water takes (4.18 kJ/(kg K), textbook), times the litres, within 5 %;
    time times power is the energy; and the layers stand in order, the bottom cold."""
    record = next(r for r in of(filed, "shower-water") if "heat_up_time" in r.filed.readings)
    read, log = {k: v.value for k, v in record.filed.readings.items()}, record.filed.attachments[0]
    rows = list(
        csv.DictReader((plant.folder / "records" / log.path).read_text(encoding="utf-8").splitlines(), delimiter=";")
    )
    start, end = (float(rows[n]["bottom T3 °C"]) for n in (0, -1))
    stored = 1000.0 * 4180.0 * (end - start)
    (heat,) = [r.value for r in record.filed.routes if r.route == "liquid side" and r.quantity == "heating_capacity"]
    assert heat * read["heat_up_time"] == pytest.approx(stored, rel=0.05)
    assert read["power_input"] * read["heat_up_time"] == pytest.approx(read["heat_up_energy"], rel=0.02)
    assert read["store_top_temperature"] >= read["store_middle_temperature"] >= read["store_bottom_temperature"]


def test_the_weather_curve_was_read_at_three_points(plant: LoadedPlant, filed: tuple[FiledRecord, ...]) -> None:
    """Cold, middle and mild, as the description gives them."""
    assert {"controls.curve", "controls.curve-middle", "controls.curve-mild"} <= answers(plant, filed, "floor-heating")


def test_the_cold_room_was_started_up_line_by_line(plant: LoadedPlant, filed: tuple[FiledRecord, ...]) -> None:
    """Every item of every stage up to the hand-over has its answer in a record; what failed was done again."""
    asked = {i.id for s in stages(plant, "cold-room") if s.id in STARTED_UP for i in s.items} - {IN_THE_COLD}
    assert asked <= answers(plant, filed, "cold-room")
    failed = [i for r in of(filed, "cold-room") for i, a in r.file.answers.items() if a.answer == "no"]
    again = [i for r in of(filed, "cold-room") for i, a in r.file.answers.items() if a.answer == "yes"]
    assert failed
    assert set(failed) <= set(again)


def test_every_log_is_small(plant: LoadedPlant) -> None:
    """What is filed as evidence loads on a tablet: no file above 60 kB."""
    for path in Path(plant.folder, "records", "attachments").rglob("*.*"):
        assert path.stat().st_size < 60_000, path
