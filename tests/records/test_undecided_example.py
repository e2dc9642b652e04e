"""The example's undecided test: the change that it names, made on the plant itself, decides it."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from commission.acceptance import Decision, GuaranteeVerdict, apply_change, smallest_change
from commission.description import LoadedPlant, load_plant
from commission.prediction import SystemModel, fit
from commission.records import FiledRecord, read_folder, read_record, records_folder
from commission.records.judge import judged_by, sheet_of


@pytest.fixture(scope="module")
def example(example_folder: Path) -> LoadedPlant:
    """The example plant."""
    return load_plant(example_folder)


@pytest.fixture(scope="module")
def undecided(example: LoadedPlant) -> FiledRecord:
    """Its filed test that stayed undecided."""
    (found,) = (r for r in read_folder(records_folder(example)).records if r.verdict == "undecided")
    return found


@pytest.fixture(scope="module")
def model(example: LoadedPlant, undecided: FiledRecord) -> SystemModel:
    """The fitted model of its system."""
    return fit(example, undecided.system)


def again(
    example: LoadedPlant, model: SystemModel, filed: FiledRecord, tmp_path: Path, old: str = "", new: str = ""
) -> tuple[GuaranteeVerdict, ...]:
    """The verdicts on what was written, by the same frozen sheet, with one instrument in place of another."""
    written = filed.path.read_text(encoding="utf-8").partition("\nfiled:\n")[0]
    written = re.sub(r"\nitem_updates:\n(?:[ -].*\n)*", "\n", written)
    if old:
        assert old in written
        written = written.replace(f"instrument: {old}", f"instrument: {new}")
    path = tmp_path / "again.yaml"
    path.write_text(written, encoding="utf-8")
    record = read_record(path, example)
    sheet = sheet_of(example, record)
    assert sheet is not None
    return judged_by(example, record, sheet.sheet, model).guarantees


def _decision(verdict: GuaranteeVerdict) -> Decision:
    assert verdict.withheld is None
    assert verdict.decision is not None
    return verdict.decision


def test_the_instruments_are_what_is_too_coarse(
    example: LoadedPlant, model: SystemModel, undecided: FiledRecord, tmp_path: Path
) -> None:
    """Each verdict names its probes and two probes compared in one bath; so much less doubt would decide."""
    for verdict in again(example, model, undecided, tmp_path):
        assert verdict.outcome == "undecided"
        assert verdict.what_would_decide is not None
        assert "two probes compared in one bath" in verdict.what_would_decide
        needed = _decision(verdict).uncertainty_needed
        assert needed is not None
        assert verdict.budget is not None
        change = smallest_change(verdict.budget, needed)
        assert change is not None
        assert apply_change(verdict.budget, change).one_sided() <= needed * (1.0 + 1e-9)
        assert all("spare probes" in name for name in change.names)


def test_the_named_change_made_on_the_plant_decides(
    example: LoadedPlant, model: SystemModel, undecided: FiledRecord, tmp_path: Path
) -> None:
    """The very same readings, had they come from the matched pair of the plant, are decided by the same sheet."""
    verdicts = again(example, model, undecided, tmp_path, "spare probes", "water probes")
    assert example.plant.instruments["water probes"].matched_pair
    assert [v.outcome for v in verdicts] == ["conforming"] * len(verdicts)
    assert all(v.frozen for v in verdicts)
