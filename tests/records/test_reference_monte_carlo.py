"""JCGM 101:2008 on the example plant: the distributions themselves, drawn and propagated, against the budgets.

Each cause of each reading of a filed test is drawn once for a trial (a rectangular one as such, all else normal) and
moves every reading that it touches; the readings then go through the same route and frozen sheet as the verdict did. So
the shared condition, which moves measured value and limit alike, is in it without any formula for correlation.
"""

from __future__ import annotations

import math
import random
import statistics
from collections.abc import Mapping
from pathlib import Path

import pytest

from commission.acceptance import Budget, Component, GuaranteeVerdict, Measured, TestSheet, compressor_heat_balance
from commission.acceptance.derived import ratio
from commission.acceptance.route_inputs import from_sheet
from commission.acceptance.routes import Side, compressor_power, liquid_side
from commission.description import LoadedPlant, load_plant, read_yaml
from commission.prediction import SystemModel, fit
from commission.records import read_folder, records_folder
from commission.records.judge import judged_by, sheet_of
from commission.records.read import check_record
from commission.records.text import FILED_KEY

TRIALS = 2500
"""The standard deviation of so many trials is known to 1.4 %, 1/sqrt(2 n), a share of a half to 1 %, 1/sqrt(4 n)."""
ROOT_3 = math.sqrt(3.0)
Readings = Mapping[str, Measured]


@pytest.fixture(scope="module")
def example(example_folder: Path) -> LoadedPlant:
    """The example plant."""
    return load_plant(example_folder)


class Trial:
    """One draw: each cause has one value, whatever it touches."""

    def __init__(self, chance: random.Random) -> None:
        self._chance = chance
        self._drawn: dict[str, float] = {}

    def unit(self, part: Component) -> float:
        """How far a cause is from zero, in its standard uncertainties."""
        name = part.cause or f"{part.of}: {part.name}"
        if name not in self._drawn:
            rectangular = part.distribution == "rectangular"
            draw = self._chance.uniform(-ROOT_3, ROOT_3) if rectangular else self._chance.gauss(0.0, 1.0)
            self._drawn[name] = draw
        return self._drawn[name]

    def moved(self, measured: Measured) -> Measured:
        """The value as it would have been, without a budget of its own."""
        return Measured(measured.key, measured.value + math.fsum(p.value * self.unit(p) for p in _parts(measured)))


def _parts(measured: Measured) -> tuple[Component, ...]:
    return measured.budget.components


def judged_again(
    loaded: LoadedPlant, model: SystemModel
) -> tuple[tuple[GuaranteeVerdict, ...], Readings, Readings, TestSheet]:
    """The latest accepted test of a system, judged by its sheet: verdicts, all that was read, conditions, the sheet."""
    records = read_folder(records_folder(loaded)).records
    filed = [r for r in records if r.system == model.system_id and r.verdict == "conforming"][-1]
    path, read = filed.path, read_yaml(filed.path, filed.path.name)
    data = {k: v for k, v in read.data.items() if k != FILED_KEY}
    record = check_record(path, loaded, filed.file, read.content, data, read.positions, by_checklist=False)
    named = sheet_of(loaded, record)
    assert named is not None
    judged = judged_by(loaded, record, named.sheet, model)
    evaporating = {k: d.measured for k, d in judged.derived.items() if k == "evaporating_temperature"}
    return judged.guarantees, {**judged.measured, **evaporating}, judged.conditions, named.sheet


def limit_of(verdict: GuaranteeVerdict, sheet: TestSheet, conditions: Readings, trial: Trial) -> float:
    """The limit on the day as this trial's readings of the condition would have given it."""
    (target,) = (t for t in sheet.targets_for("guarantee") if t.key == verdict.terms.quantity)
    value, budget = sheet.value_at(target, {k: trial.moved(m) for k, m in conditions.items()})
    own = Measured(target.key, value, Budget(tuple(p for p in budget.components)))
    lower, upper = verdict.terms.limits(trial.moved(own).value)
    limit = lower if lower is not None else upper
    assert limit is not None
    return limit


def method_of(verdict: GuaranteeVerdict, trial: Trial) -> float:
    """What the route itself carries beside its readings, in this trial."""
    assert verdict.measured is not None
    own = [p for p in _parts(verdict.measured) if p.name == "limits of the compressor heat balance"]
    assert own
    return math.fsum(p.value * trial.unit(p) for p in own)


def compared(verdict: GuaranteeVerdict, differences: list[float]) -> None:
    """Spread, middle and share above zero of the trials against budget, figures and probability of the verdict."""
    assert verdict.measured is not None
    assert verdict.budget is not None
    assert verdict.decision is not None
    limit = verdict.decision.limit_low
    assert limit is not None
    standard = verdict.budget.standard
    assert statistics.stdev(differences) == pytest.approx(standard, rel=0.04)
    assert statistics.fmean(differences) == pytest.approx(verdict.measured.value - limit, abs=0.1 * standard)
    share = sum(d >= 0.0 for d in differences) / len(differences)
    assert share == pytest.approx(verdict.decision.probability_of_conformity, abs=0.02)


def test_a_capacity_by_the_heat_balance(example: LoadedPlant) -> None:
    """Cold room in July: gauges, clamped-on probes, power meter, shell loss, method; held against the frozen sheet."""
    model = fit(example, "cold-room")
    (verdict,), read, conditions, sheet = judged_again(example, model)
    inputs = from_sheet(sheet, conditions)
    chance, differences = random.Random(101), []
    for _ in range(TRIALS):
        trial = Trial(chance)
        states = {k: trial.moved(m) for k, m in read.items()}
        fans = trial.moved(inputs.fans) if inputs.fans else None
        power = compressor_power(states, fans)
        assert power is not None
        found = compressor_heat_balance(
            model.refrigerant, {**states, "compressor_power": power}, shell=trial.moved(inputs.shell),
            line_gain=trial.moved(inputs.gain) if inputs.gain else None,
            compressor=example.system("cold-room").compressor.type,
        )  # fmt: skip
        value = found.measured.value + method_of(verdict, trial)
        differences.append(value - limit_of(verdict, sheet, conditions, trial))
    compared(verdict, differences)


@pytest.mark.parametrize("system", ["shower-water", "floor-heating"])
def test_capacity_and_cop_by_the_liquid_side(example: LoadedPlant, system: str) -> None:
    """Flow meter, two probes (matched or not) and power meter: the range of the water is where their doubts cancel."""
    model = fit(example, system)
    verdicts, read, conditions, sheet = judged_again(example, model)
    medium, side = example.system(system).heat_sink, _sink()
    for verdict in verdicts:
        chance, differences = random.Random(101), []
        for _ in range(TRIALS):
            trial = Trial(chance)
            states = {k: trial.moved(m) for k, m in {**read, **conditions}.items()}
            capacity = liquid_side(medium, side, states).measured
            of = _as_asked(verdict, capacity, states)
            differences.append(of - limit_of(verdict, sheet, conditions, trial))
        compared(verdict, differences)


def _sink() -> Side:
    return "sink"


def _as_asked(verdict: GuaranteeVerdict, capacity: Measured, states: Readings) -> float:
    if verdict.terms.quantity.endswith("cop"):
        return ratio(verdict.terms.quantity, capacity, states["power_input"]).measured.value
    return capacity.value
