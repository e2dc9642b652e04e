"""A first description: skeletons that are valid as written, with every line that can be added valid too."""

import re
from pathlib import Path

import pytest

from commission.description import DUTIES, load_plant, new_plant
from commission.errors import InputError


@pytest.mark.parametrize("duty", DUTIES)
def test_a_skeleton_is_valid_as_written(tmp_path: Path, duty: str) -> None:
    """Each duty loads, starts with the editor's hint, and has its schema beside it."""
    written = new_plant(tmp_path / "plant", duty)
    assert {p.name for p in written} == {"plant.yaml", "plant.schema.json"}
    text = (tmp_path / "plant/plant.yaml").read_text(encoding="utf-8")
    assert text.startswith("# yaml-language-server: $schema=./plant.schema.json\n")
    loaded = load_plant(tmp_path / "plant")
    (system,) = loaded.plant.systems.values()
    assert system.duty == duty
    assert system.rated_points


@pytest.mark.parametrize("duty", DUTIES)
def test_every_line_that_may_be_added_is_valid(tmp_path: Path, duty: str) -> None:
    """With the # of each key taken away the skeleton still loads, and describes more."""
    new_plant(tmp_path, duty)
    path = tmp_path / "plant.yaml"
    text = path.read_text(encoding="utf-8")
    full, count = re.subn(r"^( *)#(?=[\w-])", r"\1", text, flags=re.MULTILINE)
    assert count > 10
    path.write_text(full, encoding="utf-8")
    (system,) = load_plant(tmp_path).plant.systems.values()
    assert system.charge
    assert system.guarantee


def test_nothing_is_ever_overwritten(tmp_path: Path) -> None:
    """A file that is there already stops everything, and each is named."""
    (tmp_path / "plant.schema.json").write_text("mine", encoding="utf-8")
    with pytest.raises(InputError) as caught:
        new_plant(tmp_path, "cold_storage")
    assert [Path(p.file or "").name for p in caught.value.problems] == ["plant.schema.json"]
    assert (tmp_path / "plant.schema.json").read_text(encoding="utf-8") == "mine"
    assert not (tmp_path / "plant.yaml").exists()


def test_faults_of_asking(tmp_path: Path) -> None:
    """An unknown duty names the nearest; a file in the place of the folder says so."""
    with pytest.raises(InputError) as caught:
        new_plant(tmp_path / "a", "cold storage")
    assert caught.value.problems[0].nearest == "cold_storage"
    assert not (tmp_path / "a").exists()
    (tmp_path / "file").write_text("x", encoding="utf-8")
    with pytest.raises(InputError) as caught:
        new_plant(tmp_path / "file", "cold_storage")
    assert "cannot be written" in caught.value.problems[0].message
