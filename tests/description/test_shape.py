"""Every fault of shape is a problem at its place, with what is allowed and the nearest word; all in one run."""

from collections.abc import Callable
from typing import Any

import pytest
from pydantic import Field

from commission.description import DescriptionError, Part, read_yaml, validate
from commission.errors import InputError, Problem

Problems = Callable[..., tuple[Problem, ...]]


def one(data: dict[str, Any]) -> dict[str, Any]:
    """The one system of the small plant."""
    system: dict[str, Any] = data["systems"]["one"]
    return system


def only(problems: tuple[Problem, ...]) -> Problem:
    """The one problem that is expected."""
    (problem,) = problems
    assert problem.file == "plant.yaml"
    assert problem.line
    assert problem.column
    return problem


def test_unknown_key(problems: Problems) -> None:
    """A slip of spelling names the nearest key and all that are known there."""
    problem = only(problems(lambda d: one(d).update(chrge="0.4 kg")))
    assert problem.path == "systems.one.chrge"
    assert problem.nearest == "charge"
    assert "refrigerant" in (problem.allowed or "")
    assert problem.value == "0.4 kg"


def test_missing_key_takes_the_place_of_what_lacks_it(problems: Problems) -> None:
    """The place is that of the system, the meaning of the key is told, and its words are listed."""
    problem = only(problems(lambda d: one(d).pop("duty")))
    assert problem.path == "systems.one.duty"
    assert "what the system is for" in problem.message
    assert "liquid_cooling" in (problem.allowed or "")
    entry = only(
        problems(
            lambda d: (
                d["plant"].update(documents=1) or d.update(documents=[{"file": "a.pdf"}]) or d["plant"].pop("documents")
            )
        )
    )
    assert "in entry 1 of documents" in entry.message


@pytest.mark.parametrize(
    ("change", "message", "nearest"),
    [
        ({"charge": "0.4"}, "bare number", None),
        ({"charge": "0.4 kW"}, "unit of power", None),
        ({"charge": "-1 kg"}, "more than nothing", None),
        ({"charge": ["0.4 kg"]}, "a mass is wanted", None),
        ({"charge": ""}, "nothing is written", None),
        ({"duty": "cold_strage"}, "not known", "cold_storage"),
        ({"sealed": "on"}, "yes or no", None),
        ({"installed_on": "2026-02-30"}, "no such day", None),
        ({"installed_on": "30.2.2026"}, "a date is wanted", None),
        ({"controls": "none"}, "keys with values", None),
        ({"controls": ""}, "nothing is written here", None),
        ({"controls": []}, "keys with values", None),
        ({"controls": {"starts_per_hour": "8.5"}}, "a whole number", None),
        ({"controls": {"starts_per_hour": "0"}}, "a whole number", None),
        ({"controls": {"high_pressure_limit": "24 bar"}}, "say gauge or absolute", None),
        ({"controls": {"high_pressure_limit": "2400 bar g"}}, "outside what can be", None),
        ({"controls": {"room_temperature": "600 °C"}}, "outside what can be", None),
        ({"controls": {"room_differential": "2 °C"}}, "write 2 K", None),
        ({"controls": {"weather_curve": {"points": [{"outdoor": "0 °C", "flow": "40 °C"}]}}}, "at least 2", None),
        ({"compressor": {"volumetric_efficiency": "120 %"}}, "outside what can be", None),
        ({"compressor": {"power_factor": "85"}}, "outside what can be", None),
        ({"compressor": {"power_factor": "0.85 kW"}}, "unit of power", None),
        ({"compressor": {"polynomial": {"temperature_unit": "°C", "power": ["1"] * 9}}}, "at least 10", None),
        ({"rated_points": "none"}, "a list is wanted", None),
        ({"rated_points": ["x"]}, "keys with values", None),
        ({"name": {"a": "b"}}, "text is wanted", None),
        ({"documents": [{"title": "x", "file": "../secret"}]}, "cannot be the place of a file", None),
        ({"documents": [{"title": "x", "file": "/etc/passwd"}]}, "cannot be the place of a file", None),
        ({"condensing_unit": {"rated_points": []}}, "at least one entry", None),
    ],
)
def test_wrong_value(problems: Problems, change: dict[str, Any], message: str, nearest: str | None) -> None:
    """Type, unit, range and choice of words are checked, each at its own place."""
    problem = only(problems(lambda d: one(d).update(change)))
    assert message in problem.message
    assert problem.nearest == nearest
    assert problem.path.startswith(f"systems.one.{next(iter(change))}")


@pytest.mark.parametrize("identity", ["a/b", "", " a", "../x", "<script>", "a\nb", "x" * 61, "a:b"])
def test_ids_are_plain_words(problems: Problems, identity: str) -> None:
    """An id becomes part of file names and pages, so it is letters, digits and a few signs."""
    problem = only(problems(lambda d: d["systems"].update({identity: d["systems"].pop("one")})))
    assert "cannot be an id" in problem.message
    assert problem.value == identity


def test_ids_in_other_scripts_are_welcome(load: Callable[..., Any]) -> None:
    """Names of rooms and machines are written in the plant's own language."""
    assert load(lambda d: d["systems"].update({"Kühlraum 1.2": d["systems"].pop("one")})).system("Kühlraum 1.2")


def test_shares_of_the_trade_are_plain_numbers_or_per_cent(load: Callable[..., Any]) -> None:
    """A power factor is written 0.85 and an efficiency 62 %; both are shares."""
    change = {"power_factor": "0.85", "volumetric_efficiency": "0,8", "isentropic_efficiency": "62 %"}
    compressor = load(lambda d: one(d).update(compressor=change)).system("one").compressor
    assert compressor.power_factor == pytest.approx(0.85)
    assert compressor.volumetric_efficiency == pytest.approx(0.8)
    assert compressor.isentropic_efficiency == pytest.approx(0.62)


def test_all_faults_in_one_run_in_the_order_of_the_file(problems: Problems) -> None:
    """A file with many faults is put right in one go."""

    def many(data: dict[str, Any]) -> None:
        data["plant"]["altitude"] = "310"
        data["plant"]["nme"] = "x"
        data["instruments"]["low gauge"]["measures"] = "presure"
        one(data)["charge"] = "nan kg"
        one(data)["heat_sink"] = {}

    found = problems(many)
    assert [p.path for p in found] == [
        "plant.altitude", "plant.nme", "instruments.low gauge.measures", "systems.one.heat_sink.medium",
        "systems.one.charge",
    ]  # fmt: skip
    assert [p.line for p in found] == sorted(p.line or 0 for p in found)


def test_duplicates_and_shape_are_reported_together(folder: Any) -> None:
    """A key written twice does not hide the other faults."""
    from commission.description import load_plant

    (folder / "plant.yaml").write_text("plant: {name: a, name: b, altitude: 3}\nsystems: {}\n", encoding="utf-8")
    with pytest.raises(DescriptionError) as caught:
        load_plant(folder)
    assert [p.path for p in caught.value.problems] == ["plant.name", "plant.altitude", "systems"]


def test_many_faults_are_counted_not_listed(problems: Problems) -> None:
    """Thousands of unknown keys end in a bounded message."""
    found = problems(lambda d: one(d).update({f"k{n}": "x" for n in range(3000)}))
    assert len(found) <= 102
    assert "more problems" in found[0].message or "more problems" in found[-1].message


class Visit(Part):
    """A model of another room that reads its own files in the same way."""

    who: str = Field(description="name")


def test_other_rooms_can_use_their_own_error_and_place() -> None:
    """`validate` takes a part of a file, the problems found before, and the error class to raise."""

    class VisitError(InputError):
        """What the other room raises."""

    read = read_yaml("visits:\n  - {wo: A}\n", "visit.yaml")
    with pytest.raises(VisitError) as caught:
        validate(
            Visit, read.data["visits"][0], read.positions, at=("visits", 0), also=[Problem("before")], error=VisitError
        )
    assert [p.path for p in caught.value.problems] == ["", "visits.0.who", "visits.0.wo"]
    assert caught.value.problems[2].nearest == "who"
    assert validate(Visit, {"who": "B"}, read.positions).who == "B"
