"""A filed record keeps its verdict whatever changes later; a recomputation stands beside it."""

from __future__ import annotations

import random
from pathlib import Path
from typing import Any

import pytest

from commission.description import LoadedPlant, load_plant
from commission.errors import Problem
from commission.prediction import SystemModel
from commission.records import (
    ExistsError,
    FiledRecord,
    FiledRecordError,
    RecordError,
    check_files,
    file_record,
    file_sheet,
    history,
    judge_record,
    open_items,
    read_filed,
    read_folder,
    read_record,
    recompute,
    records_folder,
)

from .conftest import TRIM, Write, as_expected


@pytest.fixture
def filed_test(loaded: LoadedPlant, write: Write, test_text: str, model: SystemModel) -> FiledRecord:
    """A conforming test, filed."""
    return read_filed(file_record(loaded, write(text=test_text), model=model))


def test_the_filed_file_holds_every_letter_that_was_written(
    loaded: LoadedPlant, write: Write, model: SystemModel
) -> None:
    """What a person wrote, comments included, stands unchanged above the block."""
    path = file_record(loaded, write(), model=model)
    assert path.name == "2026-04-21-1020-store-visit.yaml"
    assert path.read_text(encoding="utf-8").startswith(TRIM)


def test_what_was_judged_is_what_is_read_back(
    loaded: LoadedPlant, write: Write, test_text: str, model: SystemModel, filed_test: FiledRecord
) -> None:
    """Readings, deviations and the guarantee of the block are those of the judgement, to eight digits."""
    judgement = judge_record(loaded, read_record(write(text=test_text), loaded), model)
    block = filed_test.filed
    assert (block.verdict, judgement.outcome) == ("conforming", "conforming")
    for deviation in judgement.deviations:
        frozen = block.deviations[deviation.key]
        assert frozen.deviation == pytest.approx(deviation.deviation, rel=1e-7, abs=1e-9)
        assert frozen.uncertainty == pytest.approx(deviation.budget.standard, rel=1e-7)
        parts = sum(v * v for v in frozen.model_parts.values()) + frozen.other_part**2
        assert parts**0.5 == pytest.approx(frozen.uncertainty, rel=1e-7)
    verdict = judgement.guarantees[0]
    assert verdict.measured is not None
    assert block.guarantees[0].measured == pytest.approx(verdict.measured.value, rel=1e-7)
    assert block.instruments["low gauge"]["serial"] == "L-1"
    assert block.digests.description == loaded.digest


def test_trim_gives_deviations_and_no_verdict(loaded: LoadedPlant, write: Write, model: SystemModel) -> None:
    """A trim is filed without a verdict, with the reasons why nothing more is known."""
    block = read_filed(file_record(loaded, write(), model=model)).filed
    assert (block.verdict, block.guarantees) == ("none", ())
    assert "suction_pressure" in block.deviations
    assert block.judged_by.by == "nothing: no verdict was asked for"


def test_a_changed_description_does_not_touch_the_verdict(
    folder: Path, filed_test: FiledRecord, model: SystemModel
) -> None:
    """Twice the guarantee afterwards: the filed verdict stands, the recomputation says otherwise beside it."""
    before = filed_test.path.read_bytes()
    plant = folder / "plant.yaml"
    plant.write_text(plant.read_text(encoding="utf-8").replace("value: 3.0 kW", "value: 6.0 kW"), encoding="utf-8")
    changed = load_plant(folder)
    (again,) = history(changed)
    assert again.verdict == "conforming"
    second = recompute(changed, again, model)
    assert second.outcome == "not conforming"
    assert "the filed verdict stands: conforming" in second.label
    assert second.changed[0] == "the description has been changed since this record was filed"
    assert "the verdict would be not conforming instead of conforming" in second.changed
    assert filed_test.path.read_bytes() == before


def test_a_changed_assumption_does_not_touch_the_verdict(folder: Path, filed_test: FiledRecord) -> None:
    """Another share of shell heat loss: measured capacity and uncertainty move, the filed verdict does not."""
    plant = folder / "plant.yaml"
    own = (
        "    assumptions:\n      shell_heat_loss_share: {value: 40 %, low: 10 %, high: 70 %, source: a guess}\n"
        "    design:"
    )
    plant.write_text(plant.read_text(encoding="utf-8").replace("    design:", own), encoding="utf-8")
    changed = load_plant(folder)
    (again,) = history(changed)
    assert again.filed == filed_test.filed
    second = recompute(changed, again)
    frozen, now = again.filed.guarantees[0], second.judgement.guarantees[0]
    assert now.measured is not None
    assert frozen.measured is not None
    assert abs(now.measured.value - frozen.measured) > 100.0
    assert second.outcome == "not conforming"
    assert again.verdict == "conforming"


def test_another_property_library_does_not_touch_the_verdict(
    loaded: LoadedPlant, filed_test: FiledRecord, model: SystemModel, monkeypatch: pytest.MonkeyPatch
) -> None:
    """A library of another version with other enthalpies: named in the recomputation, the filed verdict stands."""
    from commission.properties import Refrigerant

    original = Refrigerant.vapour

    def other(self: Refrigerant, T: float, p: float) -> Any:
        state = original(self, T, p)
        return state._replace(h=state.h * 1.01)

    monkeypatch.setattr(Refrigerant, "vapour", other)
    monkeypatch.setattr("commission.records.recomputation.versions", lambda: {"commission": "9.9", "CoolProp": "99.0"})
    (again,) = history(loaded)
    second = recompute(loaded, again, model)
    assert "CoolProp 99.0" in second.label
    assert any(c.startswith("CoolProp was ") and c.endswith("is 99.0 now") for c in second.changed)
    measured, frozen = second.judgement.guarantees[0].measured, again.filed.guarantees[0].measured
    assert measured is not None
    assert measured.value != pytest.approx(frozen, rel=0.01)
    assert (again.verdict, again.filed) == ("conforming", filed_test.filed)


def test_a_changed_checklist_does_not_keep_a_record_from_being_recomputed(
    folder: Path, loaded: LoadedPlant, write: Write, model: SystemModel
) -> None:
    """Stage and items of old records may be gone from today's checklist; their readings are judged all the same."""
    filed = read_filed(file_record(loaded, write(), model=model))
    (folder / "checklists" / "own.yaml").unlink()
    second = recompute(load_plant(folder), filed, model)
    assert {d.key for d in second.judgement.deviations} >= {"suction_pressure", "discharge_pressure"}


def test_a_test_is_judged_by_the_sheet_that_was_frozen_before(
    folder: Path, loaded: LoadedPlant, write: Write, test_text: str, model: SystemModel
) -> None:
    """The sheet decides even where the description promises something else by the day of the test."""
    from commission.acceptance.freezing import make_sheet

    ranges = {
        "heat_source_inlet_temperature": [273.15, 277.15],
        "heat_sink_inlet_temperature": [293.15, 298.15, 303.15],
    }
    name = file_sheet(loaded, make_sheet(loaded, model, ranges, title="Store"), "Store, May").name
    plant = folder / "plant.yaml"
    plant.write_text(plant.read_text(encoding="utf-8").replace("value: 3.0 kW", "value: 6.0 kW"), encoding="utf-8")
    changed = load_plant(folder)
    path = write(("mode: test", f"mode: test\nsheet: sheets/{name}"), text=test_text)
    block = read_filed(file_record(changed, path, model=model)).filed
    assert (block.verdict, block.judged_by.sheet) == ("conforming", f"sheets/{name}")
    assert block.guarantees[0].frozen_before
    assert set(block.model_deviations) >= {"suction_pressure", "discharge_temperature"}
    assert check_files(changed) == ()


def test_a_sheet_that_is_not_there_or_was_changed_is_refused(
    loaded: LoadedPlant, write: Write, test_text: str, model: SystemModel
) -> None:
    """A test cannot be judged by a sheet that nobody froze, nor by one that was changed afterwards."""
    from commission.acceptance.freezing import make_sheet

    ranges = {"heat_sink_inlet_temperature": [293.15, 303.15]}
    sheet = file_sheet(loaded, make_sheet(loaded, model, ranges), "may")
    path = write(("mode: test", "mode: test\nsheet: sheets/mai.yaml"), text=test_text)
    with pytest.raises(RecordError) as missing:
        file_record(loaded, path, model=model)
    assert missing.value.problems[0].nearest == "sheets/may.yaml"
    assert missing.value.problems[0].line == 4
    sheet.write_text(sheet.read_text(encoding="utf-8").replace("title: ''", "title: other"), encoding="utf-8")
    path = write(("mode: test", "mode: test\nsheet: sheets/may.yaml"), text=test_text)
    with pytest.raises(RecordError, match="changed after it was frozen"):
        file_record(loaded, path, model=model)


def test_filing_the_same_file_again_gives_the_same_record(
    loaded: LoadedPlant, write: Write, model: SystemModel, tmp_path: Path
) -> None:
    """Twice the same is one record; the same with other attached files is refused rather than dropped."""
    draft = write()
    first = file_record(loaded, draft, model=model)
    assert file_record(loaded, draft, model=model) == first
    (tmp_path / "more").mkdir()
    (tmp_path / "more" / "late.txt").write_text("late", encoding="utf-8")
    with pytest.raises(ExistsError) as caught:
        file_record(loaded, draft, tmp_path / "more", model=model)
    assert caught.value.problems[0].file == first.name
    assert len(history(loaded)) == 1


def test_attached_files_are_copied_with_their_digest(
    loaded: LoadedPlant, write: Write, model: SystemModel, tmp_path: Path
) -> None:
    """A named file is filed with the record; one that is not there is an error at its line."""
    (tmp_path / "photo.jpg").write_bytes(b"not really")
    draft = write(("mode: trim", "mode: trim\nattachments: [photo.jpg]"))
    block = read_filed(file_record(loaded, draft, model=model)).filed
    copy = records_folder(loaded) / block.attachments[0].path
    assert copy.read_bytes() == b"not really"
    draft = write(("mode: trim", "mode: trim\nattachments: [foto.jpg]"))
    with pytest.raises(RecordError) as caught:
        file_record(loaded, draft, model=model)
    assert isinstance(caught.value.problems[0], Problem)
    assert caught.value.problems[0].line == 5


def test_a_record_in_braces_is_filed_too(loaded: LoadedPlant, write: Write, model: SystemModel) -> None:
    """JSON, as an export from another device gives it, is written anew in lines and filed."""
    text = (
        '{"system": "store", "stage": "visit", "started": "2026-04-21T10:20:00+01:00",'
        ' "people": {"operator": {"name": "A fitter"}}, "answers": {"visit.clean": "yes"}}'
    )
    found = read_filed(file_record(loaded, write(text=text), model=model))
    assert (found.file.answers["visit.clean"].answer, found.seal_holds) == ("yes", True)


def test_an_altered_record_is_found_even_when_the_list_is_made_anew(
    loaded: LoadedPlant, filed_test: FiledRecord
) -> None:
    """A changed verdict breaks the seal inside the record, which a new list of digests does not mend."""
    from commission.records import digest_of_file
    from commission.records.sums import SUMS_NAME, sums_text

    path = filed_test.path
    path.write_text(path.read_text(encoding="utf-8").replace("75 min", "85 min"), encoding="utf-8")
    assert [(f.state, f.name) for f in check_files(loaded)] == [("altered", path.name)]
    (path.parent / SUMS_NAME).write_text(sums_text({path.name: digest_of_file(path)}), encoding="utf-8")
    assert [(f.state, f.name) for f in check_files(loaded)] == [("altered", path.name)]
    assert not history(loaded)[0].seal_holds


def test_an_exchanged_attachment_is_found_even_when_the_list_is_made_anew(
    loaded: LoadedPlant, write: Write, model: SystemModel, tmp_path: Path
) -> None:
    """The record itself holds the digest of what was attached to it."""
    from commission.records import digest_of_file
    from commission.records.sums import SUMS_NAME, read_sums, sums_text

    (tmp_path / "photo.jpg").write_bytes(b"as it was")
    path = file_record(loaded, write(("mode: trim", "mode: trim\nattachments: [photo.jpg]")), model=model)
    name = read_filed(path).filed.attachments[0].path
    folder = records_folder(loaded)
    (folder / name).write_bytes(b"as it should have been")
    sums = {**read_sums(folder), name: digest_of_file(folder / name)}
    (folder / SUMS_NAME).write_text(sums_text(sums), encoding="utf-8")
    assert [(f.state, f.name) for f in check_files(loaded)] == [("altered", name)]


@pytest.mark.parametrize("path", ["/etc/hostname", "../../plant.yaml", "a\\\\b", "C:x"])
def test_a_record_cannot_point_outside_its_folder(filed_test: FiledRecord, path: str) -> None:
    """A path that leaves `records/` in a record from elsewhere is refused, so that nothing else is ever copied."""
    text = filed_test.path.read_text(encoding="utf-8")
    entry = f'  attachments:\n  - {{file: a, path: "{path}", sha256: "0", size: 1}}\n  digests:'
    filed_test.path.write_text(text.replace("  digests:", entry), encoding="utf-8")
    with pytest.raises(FiledRecordError, match="below records"):
        read_filed(filed_test.path)


def test_missing_and_unlisted_files_are_named(loaded: LoadedPlant, filed_test: FiledRecord) -> None:
    """A record that went missing and a file that was never filed are both named."""
    filed_test.path.rename(filed_test.path.with_name("stray.yaml"))
    assert [(f.state, f.name) for f in check_files(loaded)] == [
        ("missing", "2026-05-14-1020-store-visit.yaml"),
        ("not listed", "stray.yaml"),
    ]


def test_a_record_of_a_later_form_says_so(tmp_path: Path, filed_test: FiledRecord) -> None:
    """A record that a later version filed is not half understood but refused, with its place."""
    text = filed_test.path.read_text(encoding="utf-8").replace("form: '1'", "form: '2'")
    path = tmp_path / "later.yaml"
    path.write_text(text, encoding="utf-8")
    with pytest.raises(FiledRecordError, match="later version") as caught:
        read_filed(path)
    assert caught.value.problems[0].line == text.split("form: '2'")[0].count("\n") + 1


def test_a_record_of_a_plant_that_cannot_be_calculated_is_filed_with_the_reason(folder: Path, write: Write) -> None:
    """What was read is kept even where nothing can be expected; the block says why."""
    plant = folder / "plant.yaml"
    head, rest = plant.read_text(encoding="utf-8").split("    condensing_unit:\n", 1)
    plant.write_text(head + "    design:" + rest.split("    design:", 1)[1], encoding="utf-8")
    block = read_filed(file_record(load_plant(folder), write())).filed
    assert block.verdict == "none"
    assert block.readings["suction_pressure"].written == "2.90 bar g"
    assert block.deviations == {}
    assert block.not_judged["readings"]


def test_a_failed_test_raises_an_item(folder: Path, write: Write, test_text: str, model: SystemModel) -> None:
    """A guarantee that is not met leaves an open item with the figures."""
    plant = folder / "plant.yaml"
    plant.write_text(plant.read_text(encoding="utf-8").replace("value: 3.0 kW", "value: 6.0 kW"), encoding="utf-8")
    loaded = load_plant(folder)
    assert read_filed(file_record(loaded, write(text=test_text), model=model)).verdict == "not conforming"
    (item,) = open_items(loaded)
    assert (item.number, item.raised_by, item.line, item.who) == (1, "guarantee", "cooling_capacity", None)
    assert "kW" in item.what


def test_a_later_record_of_the_same_minute_gets_its_own_name(
    loaded: LoadedPlant, write: Write, test_text: str, model: SystemModel
) -> None:
    """Nothing is overwritten: a second record of the same minute, system and stage is numbered."""
    first = file_record(loaded, write(text=test_text), model=model)
    other = as_expected(model, "test", "2026-05-14T10:20:00+01:00", 2.5, 24.0)
    second = file_record(loaded, write(text=other), model=model)
    assert (first.stem, second.stem) == ("2026-05-14-1020-store-visit", "2026-05-14-1020-store-visit-2")


def test_a_damaged_record_never_breaks_the_folder(filed_test: FiledRecord) -> None:
    """Sixty records damaged at random places: each is read with a broken seal or named, and none ends in a fault."""
    chance = random.Random(17)
    text = filed_test.path.read_text(encoding="utf-8")
    pieces = ("nan", "1e999", "-", "{}", "[]", "'", ": ", "\n", "#", "!!x", "&a", "null")
    for _ in range(60):
        at = chance.randrange(len(text))
        damaged = text[:at] + chance.choice(pieces) + text[at + chance.randrange(20) :]
        filed_test.path.write_text(damaged, encoding="utf-8")
        found = read_folder(filed_test.path.parent)
        assert not found.drafts
        if found.records:
            assert not found.records[0].seal_holds
        else:
            assert all(p.file == filed_test.path.name for p in found.damaged)
            assert found.damaged


def test_an_upset_takes_the_heat_balance_away(
    loaded: LoadedPlant, write: Write, test_text: str, model: SystemModel
) -> None:
    """With hot gas bypassed the heat balance is refused and frozen as refused; the guarantee stays undecided."""
    draft = write(("mode: test", "mode: test\nupsets: [hot gas bypass]"), text=test_text)
    block = read_filed(file_record(loaded, draft, model=model)).filed
    assert block.verdict == "undecided"
    assert any(r.route == "compressor heat balance" and r.refused and "bypass" in r.refused for r in block.routes)
    (item,) = open_items(loaded)
    assert item.raised_by == "guarantee"
