"""The stage of the day: read as it stands at the controller, inferred from the power, or another than was frozen."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import pytest

from commission.acceptance import judge, make_sheet
from commission.acceptance.capability import capability
from commission.acceptance.evaluation import evaluate
from commission.acceptance.guarantee import carry, terms_of
from commission.description import LoadedPlant
from commission.errors import InputError, NotCalculatedError
from commission.prediction import SystemModel, fit
from tests.acceptance.conftest import STAGED, write_plant
from tests.acceptance.visits import sure, visit

STAGE = "compressor_stage"
SOURCE = "heat_source_inlet_temperature"


def test_stage_that_was_read(staged_plant: LoadedPlant, staged_model: SystemModel) -> None:
    """Two of three machines, written as 66 %: readings as the model expects them there do not deviate."""
    asked, read = visit(staged_plant, staged_model, {STAGE: 2 / 3}, compressor_stage=0.66)
    found = evaluate(staged_plant, staged_model, asked, read)
    assert found.conditions[STAGE].budget.standard == 0.0
    assert found.deviations
    assert [d.key for d in found.deviations if d.ratio > 0.05] == []
    assert "power_input" in {d.key for d in found.deviations}


def test_stage_is_inferred_from_the_power(staged_plant: LoadedPlant, staged_model: SystemModel) -> None:
    """A stage that nobody read is the one that explains the power, which is spent on it; no other guess is made."""
    for stage in staged_model.condition_axes[STAGE].steps:
        found = evaluate(staged_plant, staged_model, *visit(staged_plant, staged_model, {STAGE: stage}))
        assert found.conditions[STAGE].value == stage
        assert "spent on the compressor stage" in found.not_judged["power_input"]
        assert "compressor stage was not read: inferred from power input" in found.warnings
        assert [d.key for d in found.deviations if d.ratio > 0.05] == []


def test_no_stage_explains_the_power(staged_plant: LoadedPlant, staged_model: SystemModel) -> None:
    """A power between two stages, or none at all, leaves nothing expected, with the reason."""
    powers = [staged_model.predict({STAGE: s}).expected["power_input"].value for s in (1 / 3, 2 / 3)]
    asked, read = visit(staged_plant, staged_model, power_input=0.5 * sum(powers))
    found = evaluate(staged_plant, staged_model, asked, read)
    assert found.deviations == ()
    assert "none of them explains the power input" in found.not_judged["suction_pressure"]
    without = evaluate(staged_plant, staged_model, *visit(staged_plant, staged_model, power_input=None))
    assert "neither power nor current" in without.not_judged["suction_pressure"]


def test_stage_that_is_none(staged_plant: LoadedPlant, staged_model: SystemModel) -> None:
    """A stage that the machine does not have is no condition, and the nearest is named."""
    asked, read = visit(staged_plant, staged_model, compressor_stage=0.5)
    found = evaluate(staged_plant, staged_model, asked, read)
    assert "the nearest is" in found.not_judged["suction_pressure"]


def test_guarantee_at_another_stage(staged_plant: LoadedPlant, staged_model: SystemModel) -> None:
    """At one of three machines a guarantee of the whole set is carried by the design model; a supplier's table that
    knows no stages does not carry it, and neither does a value that holds as stated."""
    conditions = sure(**{**staged_model.rated_condition, STAGE: 1 / 3})
    guarantees = [terms_of(g) for g in staged_plant.system("chiller").guarantee]
    points = staged_plant.system("chiller").rated_points
    for terms in guarantees:
        with pytest.raises(NotCalculatedError, match="compressor stage of 100 %, and the day ran at 33 %"):
            carry(terms, conditions, staged_model, points)
    carried = carry(replace(guarantees[0], carried_by="design model"), conditions, staged_model)
    full, part = (staged_model.predict({**guarantees[0].at, STAGE: s}).expected["cooling_capacity"] for s in (1, 1 / 3))
    assert carried.value / guarantees[0].value == pytest.approx(part.value / full.value, rel=0.02)
    asked, read = visit(staged_plant, staged_model, {STAGE: 1 / 3}, compressor_stage=1 / 3)
    found = judge(staged_plant, staged_model, asked, read, "test", since_start=3600.0)
    assert {g.outcome for g in found.guarantees} == {"undecided"}


def test_sheet_holds_for_its_stage(tmp_path: Path) -> None:
    """A sheet frozen for two machines judges no day with three, and says so; none is frozen across stages."""
    text = STAGED.replace("supplier's table", "design model").replace("as stated", "design model")
    plant = write_plant(tmp_path, text)
    model = fit(plant, "chiller")
    sheet = make_sheet(plant, model, {SOURCE: (285.15, 287.15)}, held={STAGE: 0.67}, keys=("suction_pressure",))
    same = evaluate(plant, model, *visit(plant, model, {STAGE: 2 / 3}, compressor_stage=0.66), sheet=sheet)
    assert [d.key for d in same.deviations if d.key == "suction_pressure" and not d.significant]
    other = evaluate(plant, model, *visit(plant, model, compressor_stage=1.0), sheet=sheet)
    assert other.deviations == ()
    assert "frozen for a compressor stage of 67 %" in other.not_judged["suction_pressure"]
    with pytest.raises(InputError, match="no values between its steps"):
        make_sheet(plant, model, {STAGE: (0.33, 1.0)})


def test_stage_needs_no_instrument(staged_plant: LoadedPlant, staged_model: SystemModel) -> None:
    """Before a visit the stage counts as read, as it stands at the controller, and the power is not spent on it."""
    found = capability(staged_plant, staged_model, {STAGE: 0.66})
    assert STAGE not in found.not_read
    assert "power_input" in {r.key for r in found.readings}
    assert not any("inferred" in w for w in found.warnings)
