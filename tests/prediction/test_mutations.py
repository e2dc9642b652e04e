"""The systems of the example with seeded mutations of their figures: an answer that keeps the laws, or a sentence."""

from __future__ import annotations

import math
import random
import re
import shutil
from collections.abc import Iterator
from pathlib import Path

import pytest

from commission.description import LoadedPlant, load_plant
from commission.errors import CommissionError, InputError
from commission.prediction import Prediction, fit
from tests.prediction.conftest import EXAMPLE

FILES = {
    "cold-room": "plant.yaml",
    "freezer-room": "systems/freezer-room.yaml",
    "dining-hall": "systems/dining-hall.yaml",
    "floor-heating": "systems/floor-heating.yaml",
    "shower-water": "systems/shower-water.yaml",
}
UNITS = "°C|K|bar g|kW|W|kg|m3/h|L|%|m2|mm|m|rpm|A|V"
NUMBER = re.compile(rf"(?<=[ :\[,])-?\d+(?:\.\d+)?(?= (?:{UNITS})\b)")
OTHERS = ("R-290", "R-744", "R-717", "R-32", "R-410A", "R-454B", "R-1234ze(E)", "R-600a", "R-134a", "R-22")
UNREADABLE = ("math domain", "division by zero", "Singular", "not supported", "range error", "nan", "inf ", "e+0")


@pytest.fixture(scope="module")
def folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """One folder for each system of the example, that reads its description alone."""
    target = tmp_path_factory.mktemp("mutated")
    whole = (EXAMPLE / "plant.yaml").read_text(encoding="utf-8")
    include, plant = whole.split("\n\n", 1)
    assert include.startswith("include:")
    for system, file in FILES.items():
        for part in ("systems", "tables"):
            shutil.copytree(EXAMPLE / part, target / system / part)
        text = plant if file == "plant.yaml" else f"include: [{file}]\n\n{plant.partition('systems:')[0]}"
        (target / system / "plant.yaml").write_text(text, encoding="utf-8")
    return target


def _number(value: float, rng: random.Random) -> float:
    """A slip of a factor, an offset, a nought, or a sign."""
    kind = rng.random()
    if kind < 0.5:
        return value * 10 ** rng.uniform(-0.5, 0.5)
    if kind < 0.8:
        return value + rng.uniform(-20.0, 20.0)
    return 0.0 if kind < 0.9 else -value


def _mutated(text: str, rng: random.Random) -> str:
    """One to three figures changed, now and then another refrigerant or a lost line."""
    head, systems, body = text.partition("systems:\n")
    for match in sorted(rng.sample(list(NUMBER.finditer(body)), rng.randint(1, 3)), key=lambda m: -m.start()):
        body = f"{body[: match.start()]}{_number(float(match.group()), rng):.3f}{body[match.end() :]}"
    if rng.random() < 0.3:
        body = re.sub(r"refrigerant: \S+?(?=[,\n])", f"refrigerant: {rng.choice(OTHERS)}", body)
    if rng.random() < 0.2:
        lines = body.split("\n")
        del lines[rng.randrange(len(lines))]
        body = "\n".join(lines)
    return head + systems + body


def _plants(folder: Path, count: int, seed: str) -> Iterator[tuple[str, LoadedPlant]]:
    """So many mutated plants that load, with the system that was changed."""
    rng, found = random.Random(seed), 0
    while found < count:
        system = rng.choice(list(FILES))
        path = folder / system / FILES[system]
        original = path.read_text(encoding="utf-8")
        path.write_text(_mutated(original, rng), encoding="utf-8")
        try:
            loaded = load_plant(folder / system)
        except InputError:
            continue
        finally:
            path.write_text(original, encoding="utf-8")
        if system in loaded.plant.systems:
            found += 1
            yield system, loaded


def _keeps_the_laws(found: Prediction) -> None:
    """First law about the circuit, heat downhill, entropy not destroyed by the compressor; finite figures."""
    value = {key: e.value for key, e in found.expected.items()}
    assert all(math.isfinite(v) for v in value.values())
    assert all(math.isfinite(e.uncertainty or 0.0) for e in found.expected.values())
    flow, states = value["refrigerant_flow"], {s.name: s for s in found.states}
    outlet, suction = states["evaporator outlet"], states["compressor suction"]
    discharge, liquid = states["compressor discharge"], states["before the valve"]
    assert value["cooling_capacity"] == pytest.approx(flow * (outlet.h - liquid.h), rel=1e-6)
    assert value["heating_capacity"] == pytest.approx(flow * (discharge.h - liquid.h), rel=1e-6)
    assert flow * (discharge.h - suction.h) <= value["compressor_power"] * (1 + 1e-9)
    assert value["cooling_capacity"] > 0
    assert value["evaporator_temperature_difference"] > 0
    assert (
        value["heating_capacity"]
        <= value["cooling_capacity"]
        + value["compressor_power"]
        + flow * (suction.h - outlet.h)
        + 1e-6 * value["heating_capacity"]
    )
    heat = "heating_capacity" if "heating_cop" in value else "cooling_capacity"
    if "carnot_cop" in value and value[heat] > value["compressor_power"] * value["carnot_cop"]:
        assert any("Carnot" in warning for warning in found.warnings)


def _try(folder: Path, count: int, seed: str, *, thorough: bool = True) -> tuple[int, int]:
    """Numbers of answers and of refusals; slopes and the ends of the range are tried too, if not `thorough` of every
    fourth."""
    answers = refusals = 0
    for system, loaded in _plants(folder, count, seed):
        try:
            model = fit(loaded, system)
            found = model.predict()
            _keeps_the_laws(found)
            answers += 1
            if not thorough and answers % 4:
                continue
            sides = model.sensitivities()
            assert all(math.isfinite(v) for row in sides.values() for v in row.values())
            key = next(iter(model.condition_axes))
            axis = model.condition_axes[key]
            for one in model.grid(key, (axis.low, axis.high)):
                if isinstance(one, Prediction):
                    _keeps_the_laws(one)
                else:
                    _is_readable(one)
        except CommissionError as error:
            _is_readable(error)
            refusals += 1
    return answers, refusals


def _is_readable(error: CommissionError) -> None:
    text = str(error)
    assert len(text) > 20
    assert not any(word in text for word in UNREADABLE), text


def test_thirty_mutated_systems(folder: Path) -> None:
    """Thirty seeded mutations that load: most are answered within the laws, the others refused in a sentence."""
    answers, refusals = _try(folder, 30, "thirty slips of the pen", thorough=False)
    assert answers > 12
    assert refusals > 1


@pytest.mark.long
def test_two_thousand_mutated_systems(folder: Path) -> None:
    """Two thousand seeded mutations that load: an answer within the laws, or a sentence."""
    answers, refusals = _try(folder, 2000, "two thousand slips of the pen")
    assert answers > 800
    assert refusals > 100
