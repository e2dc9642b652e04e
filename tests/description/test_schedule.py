"""An equipment schedule becomes a first description, in US or metric units; its faults are named by row and column."""

from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from commission.description import DescriptionError, from_schedule, load_plant
from commission.description.reading import read_yaml
from commission.description.schedule_headings import columns_by_heading
from commission.description.schedule_text import scalar
from commission.errors import InputError

SCHEDULES = Path(__file__).parent / "schedules"


def test_a_us_schedule(tmp_path: Path) -> None:
    """°F, cfm, MBH and tons arrive as what they are; the manual will print US units; unknown columns are kept."""
    from_schedule(SCHEDULES / "us.csv", tmp_path / "lodge")
    loaded = load_plant(tmp_path / "lodge")
    assert loaded.plant.plant.name == "lodge"
    assert loaded.plant.plant.units == "us_customary"
    assert [s.duty for s in loaded.plant.systems.values()] == [
        "comfort_cooling", "cold_storage", "liquid_cooling", "comfort_cooling",
    ]  # fmt: skip
    split, walk_in, chiller, _ = loaded.plant.systems.values()
    assert split.name == "Dining hall, split system"
    assert split.charge == pytest.approx(6.5 * 0.45359237)
    assert split.rated_points[0].heat_source_inlet_temperature == pytest.approx(299.8167, abs=1e-3)
    assert split.rated_points[0].heat_source_wet_bulb == pytest.approx(292.5944, abs=1e-3)
    assert split.rated_points[0].cooling_capacity == pytest.approx(48.2e3 * 0.29307107, abs=0.1)
    assert split.rated_points[0].sensible_heat_ratio == pytest.approx(0.74)
    assert split.nameplate.rated_current == 18.0
    assert walk_in.heat_source.flow == pytest.approx(1900 * 0.3048**3 / 60)
    assert chiller.rated_points[0].cooling_capacity == pytest.approx(25 * 3516.8528, abs=0.1)
    assert chiller.spaces.condensing_unit == "Yard"
    assert loaded.plant.spaces["Roof"].outdoors
    text = (tmp_path / "lodge/plant.yaml").read_text(encoding="utf-8")
    assert text.startswith("# yaml-language-server: $schema=./plant.schema.json\n")
    assert "# MCA: 22 A" in text
    assert "# line 4 of the schedule" in text
    assert "psig" in text
    assert "bar g" not in text


def test_a_metric_schedule(tmp_path: Path) -> None:
    """Semicolons, decimal commas, a byte-order mark, a row of units, umlauts and a colon in a name."""
    from_schedule(SCHEDULES / "metric.csv", tmp_path / "haus")
    loaded = load_plant(tmp_path / "haus")
    room, floor, chiller, showers = loaded.plant.systems.values()
    assert loaded.plant.plant.units == "metric"
    assert room.name == "Kühlraum: Küche"
    assert room.spaces.evaporator == "Kühlraum"
    assert room.rated_points[0].cooling_capacity == pytest.approx(3400.0)
    assert room.heat_source.flow == pytest.approx(2100 / 3600)
    assert floor.heat_sink.medium == "water"
    assert floor.heat_source.medium == "air"
    assert chiller.heat_source.medium == "propylene glycol"
    assert chiller.heat_source.mass_fraction == pytest.approx(0.3)
    assert showers.duty == "water_heating"
    assert showers.rated_points[0].heating_capacity == pytest.approx(5000.0)
    assert "# Wartung: jährlich" in (tmp_path / "haus/plant.yaml").read_text(encoding="utf-8")


def test_the_example_lines_can_be_added(tmp_path: Path) -> None:
    """The lines that the description offers are valid once their # is taken away."""
    import re

    for name in ("us", "metric"):
        from_schedule(SCHEDULES / f"{name}.csv", tmp_path / name)
        path = tmp_path / name / "plant.yaml"
        text = re.sub(r"^( *)#(?=[\w-])", r"\1", path.read_text(encoding="utf-8"), flags=re.MULTILINE)
        path.write_text(text, encoding="utf-8")
        for system in load_plant(path.parent).plant.systems.values():
            assert system.controls.high_pressure_limit


GOOD = (
    "Tag,Duty,Refrigerant,Source inlet,Sink inlet,Cooling capacity,Power input\n"
    "A,cold room,R-290,2 °C,32 °C,3 kW,1.5 kW\n"
)


@pytest.mark.parametrize(
    ("text", "message", "line", "column", "path"),
    [
        (GOOD.replace("2 °C,32", "2,32"), "bare number", 2, 19, "column Source inlet"),
        (GOOD.replace("32 °C", "32 K"), "a temperature difference", 2, 24, "column Sink inlet"),
        (GOOD.replace("3 kW,1.5 kW", '"3,400 W",1500 W'), "three digits", 2, 30, "column Cooling capacity"),
        (GOOD.replace("R-290", "R-29O"), "not in the register", 2, 13, "column Refrigerant"),
        (GOOD.replace("cold room", "warm room"), "not known here", 2, 3, "column Duty"),
        (GOOD.replace("Refrigerant", "Refrigerent"), "heading is not known", 1, 10, ""),
        (
            GOOD.replace("Sink inlet", "Entering air"),
            "says the same as the column 'Source inlet'",
            2,
            24,
            "column Entering air",
        ),
        (GOOD.replace("\nA,", "\n,"), "names no system", 2, 1, ""),
        (GOOD + GOOD.splitlines()[1] + "\n", "stands in line 2 already", 3, 1, ""),
        (GOOD.replace("Tag", "Colour"), "no column that names the systems", 1, 1, ""),
        (GOOD.splitlines()[0] + "\n", "no system below", 1, 1, ""),
        (GOOD.replace("\nA,", "\nA/1,"), "cannot be an id", 2, 1, None),
        (GOOD.replace("A,cold room,", "A,,"), "is missing in A", 2, 1, "systems.A.duty"),
        (GOOD.replace("3 kW,1.5 kW", ",", 1), "needs a result", 2, 1, None),
        (GOOD.replace("1.5 kW", "1.5 kW,9"), "no heading above", 2, 42, ""),
        ("", "empty", 1, 1, ""),
        ("x" * 300_000 + "," + GOOD, "not CSV", 1, 1, ""),
        (GOOD.replace("R-290", "R" * 300_000), "not CSV", 2, 1, ""),
        (GOOD.replace("R-290", "R" * 3000), "not in the register", 2, 13, "column Refrigerant"),
    ],
)
def test_faults_of_a_schedule(
    tmp_path: Path, text: str, message: str, line: int, column: int, path: str | None
) -> None:
    """Each fault is named by line, column and heading; nothing is written."""
    schedule = tmp_path / "s.csv"
    schedule.write_text(text, encoding="utf-8")
    with pytest.raises(DescriptionError) as caught:
        from_schedule(schedule, tmp_path / "out")
    found = [p for p in caught.value.problems if message in p.message]
    assert [(p.file, p.line, p.column) for p in found] == [("s.csv", line, column)]
    assert path in (None, found[0].path)
    assert not (tmp_path / "out").exists()


def test_all_faults_of_a_schedule_in_one_run(tmp_path: Path) -> None:
    """Headings, rows and cells are all looked at before anything is said."""
    text = GOOD.replace("2 °C", "2").replace("Power input", "Powr input") + ",x,R-290\nB,chiller,R-0,2 °C,3,1 kW,1 kW\n"
    schedule = tmp_path / "s.csv"
    schedule.write_text(text, encoding="utf-8")
    with pytest.raises(DescriptionError) as caught:
        from_schedule(schedule, tmp_path / "out")
    assert [(p.line, p.column) for p in caught.value.problems] == [(1, 63), (2, 19), (2, 21), (3, 1), (4, 20)]


def test_files_as_spreadsheets_save_them(tmp_path: Path) -> None:
    """UTF-16 with its mark and tabulators are read; a missing file and another encoding are named."""
    schedule = tmp_path / "s.csv"
    schedule.write_bytes(GOOD.replace(",", "\t").encode("utf-16"))
    from_schedule(schedule, tmp_path / "a")
    assert load_plant(tmp_path / "a").system("A").rated_points
    schedule.write_bytes(GOOD.replace("A,", "A\x81,").encode("latin-1"))
    with pytest.raises(DescriptionError) as caught:
        from_schedule(schedule, tmp_path / "b")
    assert "UTF-8" in (caught.value.problems[0].allowed or "")
    with pytest.raises(DescriptionError) as caught:
        from_schedule(tmp_path / "gone.csv", tmp_path / "b")
    assert "no such file" in caught.value.problems[0].message
    with pytest.raises(InputError) as again:
        from_schedule(SCHEDULES / "us.csv", tmp_path / "a")
    assert "there already" in again.value.problems[0].message


def test_titles_above_the_headings_are_kept_as_comments(tmp_path: Path) -> None:
    """Spreadsheets begin with the name of the project; places still count from the top of the file."""
    schedule = tmp_path / "s.csv"
    schedule.write_text(f'"Schedule of machines; rev. 2, draft"\nProject,Lodge\n\n{GOOD}', encoding="utf-8")
    from_schedule(schedule, tmp_path / "out")
    text = (tmp_path / "out/plant.yaml").read_text(encoding="utf-8")
    assert "# Schedule of machines; rev. 2, draft\n# Project Lodge\n" in text
    assert "# line 5 of the schedule" in text
    schedule.write_text(f"Title\n{GOOD.replace('32 °C', '32')}", encoding="utf-8")
    with pytest.raises(DescriptionError) as caught:
        from_schedule(schedule, tmp_path / "more")
    assert (caught.value.problems[0].line, caught.value.problems[0].path) == (3, "column Sink inlet")


def test_known_headings_are_many_and_mean_one_thing() -> None:
    """The list of headings is read, and no heading has been lost to another meaning unnoticed."""
    known = columns_by_heading()
    assert len(known) > 120
    assert known["source inlet"] == "point.heat_source_inlet_temperature"
    assert known["heat sink inlet"] == "point.heat_sink_inlet_temperature"
    assert known["entering air dry bulb"] == "point.entering_air"
    assert known["tag"] == "id"


HOSTILE = (
    "a", "a: b", "#x", "- y", "-8 °C", "a #b", "[x]", "it's", '"q"', "&x", "!t", "", " a ", "85 %", "%x", "a\nb",
    "C:\\d", "no", "*", "\u2028", "x: {y}", "@a", "|", "\x7f", "- 1", "-1", "? a", "=", "~", "<<",
)  # fmt: skip


@pytest.mark.parametrize("text", HOSTILE)
def test_any_text_reads_back_from_what_is_written(text: str) -> None:
    """A cell of the schedule arrives in the description as it was, whatever it holds."""
    assert read_yaml(f"{{a: {scalar(text)}, b: [{scalar(text)}]}}").data == {"a": text, "b": [text]}
    assert read_yaml(f"a: {scalar(text)}").data == {"a": text}


@given(st.text(max_size=30))
def test_all_text_reads_back(text: str) -> None:
    """No text breaks out of the line on which it is written."""
    assert read_yaml(f"{{a: {scalar(text)}, b: [{scalar(text)}]}}").data == {"a": text, "b": [text]}
