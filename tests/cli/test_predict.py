"""`predict`: the promised JSON shape, conditions by name, and answers to wrong use."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest

from tests.conftest import Run


@pytest.fixture(scope="module")
def rated(commission: Run, example_folder: Path) -> dict[str, Any]:
    """The answer at the rated condition."""
    done = commission("predict", example_folder, "--system", "cold-room", "--json")
    assert done.returncode == 0, done.stderr
    answer: dict[str, Any] = json.loads(done.stdout)
    return answer


def test_json_has_the_promised_shape_and_units(rated: dict[str, Any]) -> None:
    """Conditions, expected values with uncertainty, and what is not calculated, in °C, K, Pa absolute, W and kg/s."""
    system = rated["systems"]["cold-room"]
    assert set(system) == {"conditions", "expected", "not_calculated"}
    assert system["conditions"]["heat_sink_inlet_temperature"] == {"value": pytest.approx(32.0), "unit": "°C"}
    units = {key: entry["unit"] for key, entry in system["expected"].items()}
    wanted = {
        "evaporating_temperature": "°C",
        "superheat": "K",
        "suction_pressure": "Pa",
        "discharge_pressure": "Pa",
        "cooling_capacity": "W",
        "power_input": "W",
        "refrigerant_flow": "kg/s",
        "cooling_cop": "1",
    }
    assert {key: units[key] for key in wanted} == wanted
    for entry in system["expected"].values():
        assert set(entry) == {"value", "unit", "uncertainty"}
        assert entry["uncertainty"] is None or entry["uncertainty"] >= 0


def test_a_warmer_day_moves_the_readings_as_the_trade_knows(
    commission: Run, example_folder: Path, rated: dict[str, Any]
) -> None:
    """Warmer air on the condenser: higher discharge pressure and power, less capacity (common practice, no source)."""
    done = commission(
        "predict", example_folder, "--system", "cold-room", "--at", "heat_sink_inlet_temperature=38 °C", "--json"
    )
    assert done.returncode == 0, done.stderr
    warm = json.loads(done.stdout)["systems"]["cold-room"]["expected"]
    cool = rated["systems"]["cold-room"]["expected"]
    assert warm["discharge_pressure"]["value"] > cool["discharge_pressure"]["value"]
    assert warm["power_input"]["value"] > cool["power_input"]["value"]
    assert warm["cooling_capacity"]["value"] < cool["cooling_capacity"]["value"]


def test_the_same_temperature_in_fahrenheit_gives_the_same_answer(
    commission: Run, example_folder: Path, rated: dict[str, Any]
) -> None:
    """89.6 °F is 32 °C, so nothing changes."""
    done = commission(
        "predict", example_folder, "--system", "cold-room", "--at", "heat_sink_inlet_temperature=89.6 °F", "--json"
    )
    again = json.loads(done.stdout)["systems"]["cold-room"]["expected"]
    for key, entry in rated["systems"]["cold-room"]["expected"].items():
        assert again[key]["value"] == pytest.approx(entry["value"], rel=1e-6, abs=1e-6)


def test_text_says_gauge_and_states_the_coverage(commission: Run, example_folder: Path) -> None:
    """What a person reads says bar g, and what the uncertainty means."""
    done = commission("predict", example_folder)
    assert done.returncode == 0
    assert "bar g" in done.stdout
    assert "k = 2" in done.stdout


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (["--at", "heat_sink_inlet_temperature=31 °C"], "--at needs --system"),
        (["--system", "cold-rom"], "did you mean: cold-room"),
        (["--system", "cold-room", "--at", "heat_sink_inlet_temprature=31 °C"], "heat_sink_inlet_temperature"),
        (["--system", "cold-room", "--at", "heat_sink_inlet_temperature=31"], "write its unit"),
        (["--system", "cold-room", "--at", "heat_sink_inlet_temperature=nan °C"], "a number is wanted"),
        (["--system", "cold-room", "--at", "heat_sink_inlet_temperature"], "write KEY=VALUE"),
        (["--system", "cold-room", "--at", "superheat=5 K"], "no condition of this system"),
    ],
)
def test_wrong_use_leaves_with_two_and_says_what_to_write(
    commission: Run, example_folder: Path, arguments: list[str], words: str
) -> None:
    """Each slip is answered with the place and what may stand there."""
    done = commission("predict", example_folder, *arguments)
    assert done.returncode == 2
    assert words in done.stderr
    assert done.stdout == ""


def test_a_wet_bulb_and_the_other_end_of_a_medium_are_conditions_too(commission: Run, example_folder: Path) -> None:
    """What contracts state, outdoor wet bulb and entering water, is taken where the system is rated otherwise."""
    done = commission(
        "predict", example_folder, "--system", "floor-heating", "--json",
        "--at", "heat_source_inlet_temperature=2 °C", "--at", "heat_source_wet_bulb=1 °C",
        "--at", "heat_sink_inlet_temperature=29 °C",
    )  # fmt: skip
    assert done.returncode == 0, done.stderr
    conditions = json.loads(done.stdout)["systems"]["floor-heating"]["conditions"]
    assert conditions["heat_sink_inlet_temperature"] == {"value": pytest.approx(29.0), "unit": "°C"}
    assert 0.8 < conditions["heat_source_relative_humidity"]["value"] < 0.9  # psychrometric chart, about 84 %


def test_all_wrong_conditions_are_told_in_one_run(commission: Run, example_folder: Path) -> None:
    """Two slips give two messages."""
    done = commission(
        "predict",
        example_folder,
        "--system",
        "cold-room",
        "--at",
        "heat_sink_inlet_temperature=31",
        "--at",
        "nonsense=1 K",
    )
    assert "write its unit" in done.stderr
    assert "nonsense" in done.stderr
    assert "2 problems" in done.stderr


def test_an_unknown_condition_names_those_of_the_system(commission: Run, example_folder: Path) -> None:
    """Who guesses the name of a condition is shown the conditions that this system has."""
    done = commission("predict", example_folder, "--system", "cold-room", "--at", "outdoor=7 °C")
    assert done.returncode == 2
    assert "allowed: heat_source_inlet_temperature, heat_sink_inlet_temperature" in done.stderr
