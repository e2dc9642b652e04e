"""The frame: every rule has its place, order is stable, one broken system stops no other."""

from __future__ import annotations

import re
import subprocess
import sys
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from types import SimpleNamespace
from typing import Any

import pytest

from commission.description import Assumption, LoadedPlant
from commission.errors import NotCalculatedError
from commission.quantities import Kind, methods
from commission.review import SEVERITIES, ReviewFileError, Rule, review, rules, thresholds
from commission.review import table as rule_table
from commission.review.facts import Outlook, SystemFacts
from commission.review.finding import Finding, Remark
from commission.review.rules import calculated, files, missing

Plants = Callable[..., LoadedPlant]
Facts = Callable[..., SystemFacts]
LOGIC = Path(rule_table.__file__).parent


def test_every_rule_is_complete_and_unique() -> None:
    """Ids are unique, each rule has name, source, mark and one function, whose docstring says the source."""
    ids = [rule.id for rule in rules()]
    assert len(ids) == len(set(ids))
    for rule in rules():
        assert re.fullmatch(r"[a-z]+\.[a-z-]+", rule.id)
        assert rule.name
        assert rule.source
        assert rule.mark
        assert (rule.of_plant is None) != (rule.of_system is None)
        function = rule.of_plant or rule.of_system
        assert function is not None
        assert "Source:" in (function.__doc__ or "")


def test_every_rule_has_a_test() -> None:
    """Each rule is called by name in a test of this folder, where it must fire once and stay silent once."""
    written = "".join(path.read_text(encoding="utf-8") for path in Path(__file__).parent.glob("test_*.py"))
    for rule in rules():
        function = rule.of_plant or rule.of_system
        assert function is not None
        assert f"{function.__module__.rpartition('.')[2]}.{function.__name__}(" in written


def test_every_threshold_is_used_and_sourced() -> None:
    """A threshold that no rule reads is dead, and one without source or mark is no knowledge."""
    code = "".join(path.read_text(encoding="utf-8") for path in LOGIC.rglob("*.py"))
    for key, threshold in thresholds().items():
        stem = re.sub(r"_(high|low)$", "", key)
        assert f'"{key}"' in code or (f'"{stem}"' in code and key.rsplit("_", 1)[1] in code)
        assert threshold.source
        assert threshold.mark


OWN = """
thresholds:
  high_pressure_margin: {value: 40 %, source: agreed with the owner}
"""


def test_a_plant_may_have_its_own_thresholds(make_plant: Plants) -> None:
    """A margin of 40 % makes a finding of what 10 % lets pass, and the finding says who wants it so."""
    loaded = make_plant()
    assert "pressure.limiter-and-day" not in {f.rule for f in review(loaded)}
    (loaded.folder / "review.yaml").write_text(OWN, encoding="utf-8")
    (finding,) = [f for f in review(loaded) if f.rule == "pressure.limiter-and-day"]
    assert finding.severity == "warning"
    assert (finding.source, finding.mark) == ("agreed with the owner", "stated by the plant")


def test_own_thresholds_that_cannot_be_used(make_plant: Plants) -> None:
    """An unknown name and a value of another kind are both reported, with line and nearest name."""
    loaded = make_plant()
    text = "thresholds:\n  high_pressure_margn: {value: 5 %, source: me}\n  freezing_margin: {value: 5 %, source: me}\n"
    (loaded.folder / "review.yaml").write_text(text, encoding="utf-8")
    with pytest.raises(ReviewFileError) as caught:
        review(loaded)
    first, second = caught.value.problems
    assert (first.file, first.line, first.nearest) == ("review.yaml", 2, "high_pressure_margin")
    assert (second.file, second.line, second.path) == ("review.yaml", 3, "thresholds.freezing_margin.value")


def test_methods_named_by_the_rules_are_written_down() -> None:
    """Every method that the room names in an explained figure stands in methods.yaml."""
    named = {"carnot_cooling", "carnot_heating", "implied_isentropic_efficiency", "implied_volumetric_efficiency"}
    code = "".join(path.read_text(encoding="utf-8") for path in LOGIC.rglob("*.py"))
    assert named <= set(methods())
    assert all(f'"{name}"' in code for name in named)


def test_a_sound_plant_has_no_errors(make_plant: Plants) -> None:
    """The base plant of these tests is sound: notes at most, no error, no warning."""
    found = review(make_plant())
    assert [str(f) for f in found if f.severity != "note"] == []


def test_findings_come_with_place_source_and_advice(make_plant: Plants) -> None:
    """A doubled error is found where it is written, and the severest findings come first."""
    loaded = make_plant({"heat_sink": {"space": "store"}, "receiver": {"relief_valve": "30 bar g"}})
    found = review(loaded)
    assert {f.rule for f in found if f.severity == "error"} == {"law.heat-into-cooled-space", "pressure.relief"}
    assert [SEVERITIES.index(f.severity) for f in found] == sorted(SEVERITIES.index(f.severity) for f in found)
    first = next(f for f in found if f.rule == "law.heat-into-cooled-space")
    lines = (loaded.folder / "plant.yaml").read_text(encoding="utf-8").splitlines()
    assert first.place is not None
    assert first.place.file == "plant.yaml"
    assert lines[first.place.line - 1].strip() == "space: store"
    assert first.system == "one"
    assert all(f.source and f.mark and f.what_to_do and f.title.endswith(".") for f in found)


def test_the_same_plant_gives_the_same_findings(make_plant: Plants) -> None:
    """No clock and no chance: two runs are equal, text and all."""
    loaded = make_plant({"charge": None, "heat_sink": {"space": "store"}})
    assert [str(f) for f in review(loaded)] == [str(f) for f in review(loaded)]


def test_a_fitted_model_may_be_handed_in(make_plant: Plants) -> None:
    """The manual has fitted the systems already; the findings are the same."""
    from commission.prediction import fit

    loaded = make_plant({"charge": None})
    assert review(loaded, models={"one": fit(loaded, "one")}) == review(loaded)


def test_a_system_that_cannot_be_calculated_stops_no_other(make_plant: Plants) -> None:
    """The second system states nothing to fit; it says so, and the first is reviewed as before."""
    alone = make_plant({"charge": None})
    expected = [str(f) for f in review(alone) if f.system == "one"]
    text = (alone.folder / "plant.yaml").read_text(encoding="utf-8")
    two = "  two: {duty: cold_storage, refrigerant: R-290, heat_source: {medium: air}, heat_sink: {medium: air}}\n"
    (alone.folder / "plant.yaml").write_text(text + two, encoding="utf-8")
    from commission.description import load_plant

    found = review(load_plant(alone.folder))
    assert [str(f) for f in found if f.system == "one"] == expected
    (finding,) = [f for f in found if f.rule == "system.not-calculated"]
    assert finding.system == "two"
    assert finding.title.startswith("two: not calculated: because ")


def test_a_rule_that_cannot_judge_says_why(make_plant: Plants, monkeypatch: pytest.MonkeyPatch) -> None:
    """The reason of a rule that fails becomes a note, and the rules after it still run."""

    def fails(facts: SystemFacts) -> list[Remark]:
        raise NotCalculatedError(f"no value for {facts.id}")

    def speaks(facts: SystemFacts) -> list[Remark]:
        return [Remark("note", facts.path(), "After it.", (), "Nothing.")]

    table = (Rule("a.fails", "a rule that fails", "test", "test", of_system=fails),
             Rule("a.speaks", "a rule that speaks", "test", "test", of_system=speaks))  # fmt: skip
    monkeypatch.setattr(rule_table, "RULES", table)
    found: tuple[Finding, ...] = review(make_plant())
    assert [f.rule for f in found] == ["a.fails", "a.speaks"]
    assert found[0].title == "Not judged: a rule that fails: because no value for one"


def test_a_finding_as_text(make_plant: Plants) -> None:
    """File, line and column first, then figures, what to do and what it rests on."""
    (finding,) = [f for f in review(make_plant({"receiver": {"relief_valve": None}})) if f.rule == "pressure.no-relief"]
    text = str(finding)
    assert re.match(r"plant\.yaml:\d+:\d+: note: No relief valve is written for the receiver of Chiller one\.", text)
    assert "what to do: Find out" in text
    assert "rests on: RSIF IF-08 3.2.2" in text


def test_what_was_not_calculated_on_a_hot_day(facts: Facts) -> None:
    """An outlook without a prediction gives its reason; one with a prediction says nothing."""
    here = facts(expected={"design": {}})
    model: Any = SimpleNamespace()
    failed = Outlook("on the hottest day of the site", None, "the condenser has no balance there")
    here = replace(here, model=model, outlooks={**here.outlooks, "hottest": failed})
    assert not list(calculated.not_calculated(replace(facts(expected={"design": {}}), model=model)))
    (remark,) = calculated.not_calculated(here)
    assert remark.title == (
        "Chiller one on the hottest day of the site: not calculated: because the condenser has no balance there"
    )


def test_warnings_of_the_prediction_are_passed_on_once(facts: Facts) -> None:
    """The same warning on two days is said once."""
    here = facts(expected={"design": {}, "hottest": {}})
    for outlook in here.outlooks.values():
        vars(outlook.prediction)["warnings"] = ("outside the range of the rated points",)
    (remark,) = calculated.warned(here)
    assert remark.title.endswith("outside the range of the rated points")
    assert not list(calculated.warned(facts(expected={"design": {}})))


def assumption(key: str, title: str) -> Assumption:
    """An assumption of 4 K between 1 and 9 K."""
    kind, moves = Kind.TEMPERATURE_DIFFERENCE, ("superheat",)
    return Assumption(key, title, 4.0, 1.0, 9.0, kind, "test", "test", moves, "a reading", "library")


def test_the_fact_most_worth_knowing(facts: Facts) -> None:
    """The cause with the largest share of the variance is named, with what it moves."""
    here = facts(expected={"design": {"suction_pressure": (4e5, 1e4), "power_input": (1500.0, 50.0)}})
    parts = {"suction_pressure": {"b": -8e3, "a": 2e3}, "power_input": {"a": 30.0, "b": 40.0, "property source": 60.0}}
    vars(here.outlooks["design"].prediction)["parts"] = parts
    listed = {"a": assumption("a", "First"), "b": assumption("b", "Second")}
    model: Any = SimpleNamespace(assumptions=listed, fit=SimpleNamespace(values={"b": 4.0}))
    (remark,) = missing.most_worth_knowing(replace(here, model=model))
    assert remark.title == "The fact most worth finding out about Chiller one: second."
    assert [f.text for f in remark.figures] == ["4.0 K (range 1.0 to 9.0 K)", "± 0.08 bar", "± 0.04 kW"]
    model.fit.values["b"] = 3.2
    (remark,) = missing.most_worth_knowing(replace(here, model=model))
    assert remark.figures[0].text == "3.2 K (moved by the rated points from 4.0 K; range 1.0 to 9.0 K)"
    assert not list(missing.most_worth_knowing(here))


def test_missing_facts_of_system_and_plant(facts: Facts) -> None:
    """What other pages need is listed with its use; the base plant misses nothing."""
    here = facts({"charge": None, "nameplate": None}, plant={"climate": None, "rules": {"safety": None}})
    (of_system,) = missing.of_the_system(here)
    assert [f.label for f in of_system.figures] == [
        "charge", "nameplate.allowable_pressure_low", "nameplate.allowable_pressure_high",
    ]  # fmt: skip
    (of_plant,) = missing.of_the_plant(here.plant)
    assert [f.label for f in of_plant.figures] == [
        "climate.summer_dry_bulb", "climate.winter_dry_bulb", "rules.safety",
    ]  # fmt: skip
    assert of_system.title == "Not all is written of Chiller one that other pages need: 3 facts are missing."
    sealed = facts({"nameplate": None, "sealed": "yes"})
    assert not list(missing.of_the_system(sealed))
    sound = facts()
    assert not list(missing.of_the_system(sound))
    assert not list(missing.of_the_plant(sound.plant))


def test_record_files_that_are_not_as_filed(facts: Facts) -> None:
    """An altered record is an error, a stray file a note, and an untouched list says nothing."""
    from commission.records import digest_of_file

    here = facts()
    folder = here.plant.loaded.folder / "records"
    assert not list(files.changed_records(here.plant))
    folder.mkdir()
    (folder / "first.yaml").write_text("a", encoding="utf-8")
    (folder / "SHA256SUMS").write_text(f"{digest_of_file(folder / 'first.yaml')}  first.yaml\n", encoding="utf-8")
    assert not list(files.changed_records(here.plant))
    (folder / "first.yaml").write_text("b", encoding="utf-8")
    (folder / "stray.yaml").write_text("c", encoding="utf-8")
    found = list(files.changed_records(here.plant))
    assert [(remark.severity, remark.path) for remark in found] == [
        ("error", "records/first.yaml"), ("note", "records/stray.yaml"),
    ]  # fmt: skip
    assert [len(f.text) for f in found[0].figures] == [64, 64]


def test_records_that_cannot_be_read(facts: Facts, monkeypatch: pytest.MonkeyPatch) -> None:
    """A damaged file and a broken seal are errors; a record in order is none."""
    import datetime as dt

    from commission.errors import Problem

    def record(holds: bool) -> SimpleNamespace:
        started = dt.datetime(2027, 4, 1, tzinfo=dt.UTC)
        return SimpleNamespace(path=Path("visit.yaml"), started=started, seal_holds=holds)

    plant = facts().plant
    monkeypatch.setattr("commission.records.damaged", lambda _: ())
    monkeypatch.setattr("commission.records.history", lambda _: (record(True),))
    assert not list(files.unreadable_records(plant))
    monkeypatch.setattr("commission.records.damaged", lambda _: (Problem("half of it is gone", file="old.yaml"),))
    monkeypatch.setattr("commission.records.history", lambda _: (record(False),))
    found = list(files.unreadable_records(plant))
    assert [(remark.severity, remark.path) for remark in found] == [
        ("error", "records/old.yaml"), ("error", "records/visit.yaml"),
    ]  # fmt: skip
    assert "half of it is gone" in found[0].title


def test_importing_the_room_is_light() -> None:
    """The room loads no property library, figures or solver before it is asked to review."""
    code = (
        "import sys, commission.review; print(sorted({'CoolProp', 'matplotlib', 'scipy', 'pint'} & set(sys.modules)))"
    )
    out = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert out.stdout.strip() == "[]"
