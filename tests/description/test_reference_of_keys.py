"""The models document themselves: every key has a meaning, the schema is valid and agrees with the reader."""

import copy
import json
from pathlib import Path
from typing import Any

import jsonschema
import pytest
import yaml

from commission.description import Part, json_schema, key_reference
from commission.description import model as models
from commission.description.starting import DUTIES, skeleton

CHECKER = jsonschema.Draft202012Validator(json_schema())


def as_an_editor_reads(text: str) -> Any:
    """Plain data as YAML 1.2 editors see it: numbers are numbers, yes and no are words, dates are text."""

    class Editor(yaml.SafeLoader):
        """YAML 1.2's core schema as far as it matters here."""

    Editor.yaml_implicit_resolvers = {
        first: [(tag, pattern) for tag, pattern in found if tag.rpartition(":")[2] in ("int", "float", "null")]
        for first, found in yaml.SafeLoader.yaml_implicit_resolvers.items()
    }
    return yaml.load(text, Loader=Editor)


def all_parts() -> list[type[Part]]:
    """Every model of the description."""
    return [m for m in vars(models).values() if isinstance(m, type) and issubclass(m, Part) and m is not Part]


@pytest.mark.parametrize("part", all_parts(), ids=lambda p: p.__name__)
def test_every_field_has_a_description(part: type[Part]) -> None:
    """Each field is documented where it is declared, and each part says what it is."""
    assert part.__doc__
    for name, info in part.model_fields.items():
        assert info.description, name
        assert info.description[0] != " "
        assert not info.description.endswith(".")


def test_the_reference_has_every_key_once() -> None:
    """Rows have a path, a meaning and a form; paths are unique; keys that YAML spells otherwise keep their spelling."""
    rows = key_reference()
    paths = [row.path for row in rows]
    assert len(paths) == len(set(paths))
    assert len(rows) > 250
    assert all(row.meaning and row.form for row in rows)
    by_path = {row.path: row for row in rows}
    assert by_path["systems.<id>.duty"].required
    assert by_path["systems.<id>.duty"].allowed == DUTIES
    assert by_path["instruments.<id>.from"].form == "text"
    assert by_path["plant.units"].default == "metric"
    assert by_path["spaces.<id>.outdoors"].default == "no"
    assert by_path["systems.<id>.rated_points[].cooling_capacity"].form.startswith("a heat flow rate")
    assert "systems.<id>.controls.weather_curve.points[].outdoor" in by_path


def test_the_schema_is_valid_and_in_words_of_a_person() -> None:
    """A valid JSON Schema without nulls, and without defaults in SI that an editor would insert."""
    jsonschema.Draft202012Validator.check_schema(json_schema())
    jsonschema.Draft202012Validator.check_schema(json_schema(part=True))
    text = json.dumps(json_schema())
    assert '"null"' not in text
    assert '"default"' not in text


def test_the_schema_accepts_the_example_and_the_skeletons(example_folder: Path) -> None:
    """What the reader accepts the editor does not mark."""
    texts = [(example_folder / "plant.yaml").read_text(encoding="utf-8"), *(skeleton(duty) for duty in DUTIES)]
    for text in texts:
        assert [e.message for e in CHECKER.iter_errors(as_an_editor_reads(text))] == []


@pytest.mark.parametrize(
    ("path", "value"),
    [
        (("plant", "altitude"), 310),
        (("plant", "altitude"), "high"),
        (("plant", "nme"), "x"),
        (("systems", "cold-room", "duty"), "cold_strage"),
        (("systems", "cold-room", "charge"), 0.45),
        (("systems", "cold-room", "rated_points"), "none"),
        (("systems", "cold-room", "sealed"), "perhaps"),
        (("systems", "cold-room", "nameplate"), {"phases": 2}),
    ],
)
def test_the_schema_marks_what_the_reader_refuses(path: tuple[str, ...], value: Any) -> None:
    """An editor shows slips while they are typed."""
    data = as_an_editor_reads(skeleton("cold_storage"))
    holder = copy.deepcopy(data)
    inner = holder
    for key in path[:-1]:
        inner = inner[key]
    inner[path[-1]] = value
    assert list(CHECKER.iter_errors(holder))
    assert not list(CHECKER.iter_errors(data))


def test_the_schema_knows_tables_reuse_and_parts() -> None:
    """A table in a file, a system like another, and a plant of included files are no faults in an editor."""
    data = as_an_editor_reads(skeleton("cold_storage"))
    data["systems"]["cold-room"]["rated_points"] = {"file": "tables/unit.csv"}
    data["systems"]["second"] = {"like": "cold-room"}
    assert not list(CHECKER.iter_errors(data))
    assert list(CHECKER.iter_errors({"plant": {"name": "x"}}))
    assert not list(CHECKER.iter_errors({"plant": {"name": "x"}, "include": ["a.yaml"]}))
    assert not list(jsonschema.Draft202012Validator(json_schema(part=True)).iter_errors({"systems": data["systems"]}))
