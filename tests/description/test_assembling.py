"""A description split over files, suppliers' tables as CSV, and systems that take over from each other."""

from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest

from commission.description import DescriptionError, LoadedPlant, Position, load_plant
from commission.description.assembling import MAX_FILES
from commission.description.reading import MAX_PARTS
from commission.description.taking_over import MAX_TAKEN_OVER
from commission.errors import Problem

Load = Callable[..., LoadedPlant]
Problems = Callable[..., tuple[Problem, ...]]
PART = """\
systems:
  two: {duty: liquid_cooling, refrigerant: R-290, heat_source: {medium: water}, heat_sink: {medium: air}}
spaces: {attic: {}}
documents: [{title: Second drawing}]
"""


def one(data: dict[str, Any]) -> dict[str, Any]:
    """The one system of the small plant."""
    system: dict[str, Any] = data["systems"]["one"]
    return system


def includes(*names: str) -> Callable[[dict[str, Any]], object]:
    """A change that includes files."""
    return lambda d: d.update(include=list(names))


def test_included_files_add_to_the_plant(load: Load, folder: Path) -> None:
    """Systems, spaces and documents of an included file join those of the plant, each with its own place."""
    (folder / "systems").mkdir()
    (folder / "systems/two.yaml").write_text(PART, encoding="utf-8")
    loaded = load(includes("systems/two.yaml"), lambda d: d.update(documents=[{"title": "First drawing"}]))
    assert list(loaded.plant.systems) == ["one", "two"]
    assert list(loaded.plant.spaces) == ["room", "attic"]
    assert [d.title for d in loaded.plant.documents] == ["First drawing", "Second drawing"]
    assert loaded.where("systems.two.refrigerant") == Position("systems/two.yaml", 2, 44)
    assert loaded.where("documents.1.title").file == "systems/two.yaml"
    assert loaded.files == ("plant.yaml", "systems/two.yaml")
    first = loaded.digest
    (folder / "systems/two.yaml").write_text(PART + "# more\n", encoding="utf-8")
    assert load_plant(folder).digest != first


def test_a_plant_may_consist_of_included_systems_only(load: Load, folder: Path) -> None:
    """`plant.yaml` may hold the site alone."""
    (folder / "two.yaml").write_text(PART, encoding="utf-8")
    assert list(load(includes("two.yaml"), lambda d: d.pop("systems")).plant.systems) == ["two"]


@pytest.mark.parametrize(
    ("text", "message", "line"),
    [
        ("systems: {one: {}}\n", "this stands in plant.yaml", 1),
        ("spaces: {attic: {}}\nplant: {name: x}\n", "this stands in plant.yaml", 2),
        ("include: [plant.yaml]\n", "only plant.yaml includes", 1),
        ("systems: {two: {dty: x}}\n", "not known here", 1),
        ("spaces: {attic: {}, attic: {}}\n", "written twice", 1),
        ("- a\n", "keys with values", 1),
        ("systems: [1\n", "this is not YAML", 2),
        ("sistems: {}\n", "not known here", 1),
    ],
)
def test_faults_of_included_files(problems: Problems, folder: Path, text: str, message: str, line: int) -> None:
    """Each fault is named with the included file and its line."""
    (folder / "more.yaml").write_text(text, encoding="utf-8")
    found = [p for p in problems(includes("more.yaml")) if message in p.message]
    assert [(p.file, p.line) for p in found] == [("more.yaml", line)]


@pytest.mark.parametrize(
    ("name", "message"),
    [
        ("../plant.yaml", "cannot be the place"),
        ("/etc/passwd", "cannot be the place"),
        ("C:\\x.yaml", "cannot be the place"),
        ("gone.yaml", "no such file"),
        ("plant.yaml", "part of the plant already"),
        ("", "cannot be the place"),
    ],
)
def test_faults_of_names(problems: Problems, name: str, message: str) -> None:
    """A name that leads out of the folder, or to nothing, is named where it is written."""
    (problem,) = problems(includes(name))
    assert message in problem.message
    assert (problem.file, problem.path) == ("plant.yaml", "include.0")


def test_several_unreadable_files_are_named_in_one_run(problems: Problems, folder: Path) -> None:
    """One problem of syntax for each file that has one."""
    (folder / "a.yaml").write_text("a: [\n", encoding="utf-8")
    (folder / "b.yaml").write_text("b: &x 1\n", encoding="utf-8")
    assert [p.file for p in problems(includes("a.yaml", "b.yaml", "c.yaml"))] == ["a.yaml", "b.yaml", "plant.yaml"]


TABLE = (
    "evaporating_temperature [°C];heat_sink_inlet_temperature [°C];cooling_capacity [kW];power_input\r\n"
    "-10;32;3,45;1,55 kW\r\n\r\n-5;32;4,1;1600 W\r\n"
)


def with_table(name: Any = "tables/unit.csv") -> Callable[[dict[str, Any]], object]:
    """A change that takes the condensing unit's points from a file."""
    return lambda d: one(d).update(condensing_unit={"rated_points": {"file": name}})


def test_a_table_stands_for_a_list_of_points(load: Load, folder: Path) -> None:
    """Semicolons, decimal commas, a byte-order mark, units in headings or cells; each cell keeps its place."""
    (folder / "tables").mkdir()
    (folder / "tables/unit.csv").write_bytes(b"\xef\xbb\xbf" + TABLE.encode())
    loaded = load(with_table())
    unit = loaded.system("one").condensing_unit
    assert unit is not None
    assert [p.cooling_capacity for p in unit.rated_points] == [3450.0, pytest.approx(4100.0)]
    assert [p.power_input for p in unit.rated_points] == [1550.0, 1600.0]
    place = loaded.where("systems.one.condensing_unit.rated_points.1.cooling_capacity")
    assert place == Position("tables/unit.csv", 4, 7)
    assert "tables/unit.csv" in loaded.files


@pytest.mark.parametrize(
    ("content", "message", "line", "column"),
    [
        (TABLE.replace("4,1;", "4,1 K;"), "unit of temperature difference", 4, 7),
        (TABLE.replace("cooling_capacity", "coling_capacity"), "not known here", 2, 8),
        (TABLE.replace("32;4,1", ";4,1"), "is missing in entry 2", 4, 1),
        (TABLE.replace("1600 W", "1600 W;9"), "no heading above", 4, 18),
        (TABLE.replace("power_input", "cooling_capacity"), "stands twice", 1, 85),
        ("", "the file is empty", 1, 1),
        ('a;"b\n', "not CSV", 1, 1),
        ("a\x00b\n", "cannot stand in this file", 1, 2),
        (TABLE.splitlines()[0], "at least one entry", None, None),
    ],
)
def test_faults_of_tables(
    problems: Problems, folder: Path, content: str, message: str, line: int | None, column: int | None
) -> None:
    """A fault in a table is named by row and column of the CSV."""
    (folder / "unit.csv").write_bytes(content.encode())
    found = [p for p in problems(with_table("unit.csv")) if message in p.message]
    assert found
    assert found[0].file == ("unit.csv" if line else "plant.yaml")
    assert line in (None, found[0].line)
    assert column in (None, found[0].column)


@pytest.mark.parametrize(
    ("asked", "message"),
    [
        ({"file": "gone.csv"}, "no such file"),
        ({"file": "../x.csv"}, "a list of points"),
        ({"fil": "x.csv"}, "a list of points"),
        ({"file": ["x"]}, "a list of points"),
        ({}, "a list of points"),
    ],
)
def test_faults_of_asking_for_a_table(problems: Problems, asked: dict[str, Any], message: str) -> None:
    """What is no list and no file inside the folder says what may stand there."""
    (problem,) = problems(lambda d: one(d).update(rated_points=asked))
    assert message in problem.message
    assert problem.file == "plant.yaml"


def test_a_system_takes_over_what_it_does_not_say(load: Load) -> None:
    """Mappings are filled key by key, lists are kept whole, and what belongs to one machine stays with it."""

    def more(data: dict[str, Any]) -> None:
        one(data).update(
            name="First",
            charge="0.4 kg",
            nameplate={"serial": "1", "voltage": "400 V"},
            controls={"room_temperature": "2 °C", "pump_down": "yes"},
            receiver={"volume": "1 L"},
            spaces={"evaporator": "room"},
            guarantee=[{"quantity": "power_input", "at": {"heat_sink_inlet_temperature": "32 °C"}, "value": "2 kW"}],
        )
        data["systems"]["two"] = {"like": "three", "charge": "0.5 kg"}
        data["systems"]["three"] = {"like": "one", "without": ["receiver"], "controls": {"room_temperature": "4 °C"}}

    loaded = load(more)
    first, second, third = (loaded.system(i) for i in ("one", "two", "three"))
    assert (second.charge, third.charge) == (0.5, 0.4)
    assert second.name is None
    assert second.receiver is None
    assert first.receiver is not None
    assert second.controls.room_temperature == pytest.approx(277.15)
    assert second.controls.pump_down
    assert second.nameplate.voltage == 400.0
    assert second.nameplate.serial is None
    assert second.spaces.evaporator is None
    assert second.guarantee == ()
    assert second.rated_points == first.rated_points
    assert loaded.where("systems.two.rated_points.0.power_input") == loaded.where(
        "systems.one.rated_points.0.power_input"
    )


@pytest.mark.parametrize(
    ("systems", "message", "path"),
    [
        ({"two": {"like": "on"}}, "no system has this id", "systems.two.like"),
        ({"two": {"like": "two"}}, "in a circle", "systems.two.like"),
        ({"two": {"like": "three"}, "three": {"like": "two"}}, "in a circle", "systems.three.like"),
        ({"two": {"like": "one", "without": ["recever"]}}, "has no such key", "systems.two.without.0"),
        ({"two": {"like": "one", "chrge": "1 kg"}}, "not known here", "systems.two.chrge"),
    ],
)
def test_faults_of_taking_over(problems: Problems, systems: dict[str, Any], message: str, path: str) -> None:
    """An unknown system, a circle, a key that is not there, a slip: each at its place."""
    found = problems(lambda d: d["systems"].update(systems))
    assert [p.path for p in found if message in p.message] == [path]


def test_a_fault_that_is_taken_over_is_reported_once(problems: Problems) -> None:
    """Ten systems like one with a fault do not repeat the fault."""

    def more(data: dict[str, Any]) -> None:
        one(data)["charge"] = "0.4"
        data["systems"].update({f"s{n}": {"like": "one"} for n in range(10)})

    (problem,) = problems(more)
    assert problem.path == "systems.one.charge"


def test_taking_over_is_bounded(problems: Problems) -> None:
    """A short file cannot become a huge plant."""

    def more(data: dict[str, Any]) -> None:
        one(data)["measured_with"] = {f"k{n}": "low gauge" for n in range(500)}
        data["systems"].update({f"s{n}": {"like": "one"} for n in range(MAX_TAKEN_OVER // 400)})

    assert any("too much" in p.message for p in problems(more))


def test_a_description_cannot_reach_out_of_its_folder_by_a_link(
    problems: Problems, folder: Path, tmp_path: Path
) -> None:
    """A symbolic link that leads elsewhere is refused like a path that does."""
    (tmp_path / "secret.yaml").write_text(PART, encoding="utf-8")
    (folder / "link.yaml").symlink_to(tmp_path / "secret.yaml")
    (problem,) = problems(includes("link.yaml"))
    assert "outside the folder" in problem.message


def test_the_files_of_a_plant_are_bounded_together(problems: Problems, folder: Path) -> None:
    """Many files near the limit do not add up to more than one file may hold."""
    text = "spaces: {" + ",".join(f"r{{0}}n{n}: {{}}" for n in range(MAX_PARTS // 4)) + "}\n"
    names = [f"r{n}.yaml" for n in range(6)]
    for name in names:
        (folder / name).write_text(text.replace("{0}", name[1]), encoding="utf-8")
    assert any("keys and values with this file" in p.message for p in problems(includes(*names)))


def test_the_number_of_files_is_bounded(problems: Problems, folder: Path) -> None:
    """A plant has a few files, not hundreds."""
    names = [f"r{n}.yaml" for n in range(MAX_FILES + 5)]
    for name in names:
        (folder / name).write_text("spaces: {}\n", encoding="utf-8")
    assert [p.message for p in problems(includes(*names))] == [f"more than {MAX_FILES} files"]


def test_problems_of_two_files_are_in_the_order_of_the_files(folder: Path, load: Load) -> None:
    """Problems are sorted by file, then line."""
    (folder / "a.yaml").write_text("spaces: {attic: {hight: 3 m}}\n", encoding="utf-8")
    with pytest.raises(DescriptionError) as caught:
        load(includes("a.yaml"), lambda d: one(d).update(chrge="1 kg"))
    assert [p.file for p in caught.value.problems] == ["a.yaml", "plant.yaml"]
