"""A folder becomes a loaded plant that knows its places, its digest and its air pressure."""

import hashlib
from collections.abc import Callable
from pathlib import Path

import pytest

from commission.description import DescriptionError, LoadedPlant, Position, load_plant
from commission.errors import InputError
from commission.quantities import Kind, Pressure, Reference

Load = Callable[..., LoadedPlant]


def test_the_example_loads(example_folder: Path) -> None:
    """The example plant is read without fault, and its places are those of the file."""
    loaded = load_plant(example_folder)
    text = (example_folder / "plant.yaml").read_text(encoding="utf-8").splitlines()
    for identity, system in loaded.plant.systems.items():
        place = loaded.where(f"systems.{identity}.refrigerant")
        assert text[place.line - 1][place.column - 1 :].startswith(system.refrigerant) or place.file != "plant.yaml"
        assert loaded.assumptions(identity)


def test_where_answers_for_what_is_not_written(load: Load) -> None:
    """A key that is left out is answered by what holds it; nothing at all by the file."""
    loaded = load()
    assert loaded.where("systems.one.charge") == loaded.where("systems.one")
    assert loaded.where(("systems", "one", "duty")) == loaded.where("systems.one.duty")
    assert loaded.where("nowhere.at.all") == Position("plant.yaml", 1, 1)
    assert str(loaded.where("systems.one.rated_points.0.power_input")).startswith("plant.yaml:")


def test_system_and_its_nearest(load: Load) -> None:
    """An unknown id names the nearest and all there are."""
    loaded = load()
    assert loaded.system("one").duty == "cold_storage"
    with pytest.raises(InputError) as caught:
        loaded.system("On")
    assert caught.value.problems[0].nearest == "one"
    assert caught.value.problems[0].allowed == "one"


def test_gauge_at_the_altitude_of_the_site(load: Load) -> None:
    """At 1,000 m the air has 89,874.6 Pa (ISO 2533:1975, table 5), and gauge pressures count from there."""
    loaded = load(lambda d: d["plant"].update(altitude="1000 m"))
    assert loaded.barometric_pressure == pytest.approx(89_874.6, abs=1.0)
    assert loaded.absolute(Pressure(2e5, Reference.GAUGE)) == pytest.approx(289_874.6, abs=1.0)
    assert loaded.absolute(Pressure(2e5, Reference.ABSOLUTE)) == 2e5


def test_the_digest_changes_with_any_byte(load: Load, folder: Path) -> None:
    """The digest is that of names and bytes, the same again for the same folder."""
    first = load().digest
    assert first == load_plant(folder).digest
    assert len(first) == len(hashlib.sha256().hexdigest())
    (folder / "plant.yaml").write_bytes((folder / "plant.yaml").read_bytes() + b"# looked at\n")
    assert load_plant(folder).digest != first


@pytest.mark.parametrize("name", ["missing", "file"])
def test_a_folder_is_wanted(tmp_path: Path, name: str) -> None:
    """A missing folder, or a file in its place, says so."""
    (tmp_path / "file").write_text("x", encoding="utf-8")
    with pytest.raises(DescriptionError) as caught:
        load_plant(tmp_path / name)
    assert {"missing": "no such folder", "file": "this is a file"}[name] in caught.value.problems[0].message


def test_a_folder_without_description(tmp_path: Path) -> None:
    """An empty folder names the file that is missing."""
    with pytest.raises(DescriptionError) as caught:
        load_plant(tmp_path)
    assert (caught.value.problems[0].file, caught.value.problems[0].message) == ("plant.yaml", "there is no such file")
    (tmp_path / "plant.yml").write_text("plant: {}", encoding="utf-8")
    with pytest.raises(DescriptionError) as caught:
        load_plant(tmp_path)
    assert caught.value.problems[0].nearest == "plant.yml"


def test_instruments_in_si(load: Load) -> None:
    """Scale, span, errors and resolution of an instrument arrive in SI, with the reference of a pressure."""

    def more(data: dict[str, dict[str, object]]) -> None:
        data["instruments"]["probe"] = {
            "measures": "temperature", "from": "-40 °C", "to": "80 °C", "resolution": "0.2 °F difference",
            "accuracy": {"absolute": "0.3 K", "of_reading": "0.1 %"}, "drift_per_year": "0.05 K",
        }  # fmt: skip

    instruments = load(more).plant.instruments
    gauge, probe = instruments["low gauge"].resolved, instruments["probe"].resolved
    assert (gauge.kind, gauge.difference_kind, gauge.reference) == (
        Kind.PRESSURE,
        Kind.PRESSURE_DIFFERENCE,
        Reference.GAUGE,
    )
    assert (gauge.range_low, gauge.range_high, gauge.span) == (-1e5, 1e6, 1.1e6)
    assert gauge.accuracy_of_span == pytest.approx(0.01)
    assert gauge.resolution is None
    assert probe.span == pytest.approx(120.0)
    assert probe.accuracy_absolute == pytest.approx(0.3)
    assert probe.accuracy_of_reading == pytest.approx(0.001)
    assert probe.resolution == pytest.approx(1 / 9)
    assert probe.drift_per_year == pytest.approx(0.05)
    assert (
        load(lambda d: d["instruments"].update(x={"measures": "current"})).plant.instruments["x"].resolved.span is None
    )


def test_the_file_given_for_its_folder(example_folder: Path) -> None:
    """Who names plant.yaml instead of its folder is told which folder to name."""
    with pytest.raises(DescriptionError) as caught:
        load_plant(example_folder / "plant.yaml")
    problem = caught.value.problems[0]
    assert "this is a file" in problem.message
    assert str(example_folder) in (problem.allowed or "")
