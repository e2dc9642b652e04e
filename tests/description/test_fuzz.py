"""Whatever stands in the file, the answer is a plant or problems that name file and line; quickly, in little memory."""

import resource
import shutil
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
import yaml
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from commission.description import DUTIES, DescriptionError, KeyRow, from_schedule, key_reference, load_plant
from commission.description.starting import skeleton
from commission.errors import InputError, Problem

SCHEDULES = Path(__file__).parent / "schedules"
ROWS = {row.path: row for row in key_reference()}
HOSTILE = (
    "", "-", ":", "{", "}", "[", "]", "&a", "*a", "!x", "|", ">", "%", "@", "`", "'", '"', "#", "? ", "---", "...",
    "<<: *a", "~", "null", "nan", "inf", "-inf", "1e999", "0x10", "1:30", "yes", "no", "°C", "−8 °C", "8", "-300 °C",
    "24 bar", "1,200 W", "9" * 400, "x" * 3000, "\t", "\x00", "\x1b", "\ufeff", "\u2028", "\ud7ff", "🧊",
    "../../etc/passwd", "{a: {a: {a: {a: b}}}}", "[" * 30, "like: one", "include: [plant.yaml]", "{file: plant.yaml}",
    "<script>alert(1)</script>", "{{x}}", "$(x)",
)  # fmt: skip
"""Pieces that have broken readers of such files before."""

WORDS = st.one_of(
    st.sampled_from(HOSTILE),
    st.sampled_from(sorted({word for row in ROWS.values() for word in row.allowed})),
    st.sampled_from(
        ["3.4 kW", "2 °C", "6 K", "24 bar g", "85 %", "1200 m3/h", "2027-03-31", "R-290", "air", "water", "3"]
    ),
    st.text(max_size=12),
)


def problems_of(folder: Path) -> tuple[Problem, ...]:
    """The problems of a plant; none where it loads. Any other exception fails the test."""
    try:
        load_plant(folder)
    except DescriptionError as error:
        return error.problems
    return ()


def check(folder: Path, text: str | bytes) -> tuple[Problem, ...]:
    """Write and load; every problem names file and line, and says something short."""
    content = text if isinstance(text, bytes) else text.encode("utf-8", "replace")
    (folder / "plant.yaml").write_bytes(content)
    found = problems_of(folder)
    for problem in found:
        assert problem.file
        assert problem.line is not None, str(problem)
        assert problem.message
        assert len(str(problem)) < 3000
    return found


@st.composite
def mutations(draw: st.DrawFn, text: str) -> str:
    """One to six changes of a text such as a slip of the hand, a bad merge or an attack would make."""
    lines = text.splitlines(keepends=True)
    for _ in range(draw(st.integers(1, 6))):
        at = draw(st.integers(0, len(lines) - 1))
        line = lines[at]
        cut = draw(st.integers(0, len(line)))
        how = draw(st.integers(0, 8))
        if how == 0:
            lines[at] = ""
        elif how == 1:
            lines[at] = line + line
        elif how == 2:
            lines[at] = line[:cut] + draw(WORDS) + line[cut:]
        elif how == 3:
            lines[at] = line[:cut] + line[cut + 1 :]
        elif how == 4:
            key, colon, _ = line.partition(":")
            lines[at] = f"{key}{colon} {draw(WORDS)}\n"
        elif how == 5:
            lines[at] = draw(st.sampled_from([" ", "  ", "\t"])) + line
        elif how == 6:
            lines[at] = line.lstrip()
        elif how == 7:
            other = draw(st.integers(0, len(lines) - 1))
            lines[at], lines[other] = lines[other], line
        else:
            lines = lines[: at + 1]
    return "".join(lines)


def _value(draw: st.DrawFn, row: KeyRow, depth: int) -> Any:
    """A value for a key, mostly of its form, sometimes of another."""
    if depth > 6 or draw(st.integers(0, 7)) == 0:
        return draw(
            st.one_of(WORDS, st.lists(WORDS, max_size=2), st.dictionaries(st.text(max_size=5), WORDS, max_size=2))
        )
    if row.form == "keys, see below":
        return _mapping(draw, f"{row.path}.", depth + 1)
    if row.form.startswith("a list of: keys"):
        return [_mapping(draw, f"{row.path}[].", depth + 1) for _ in range(draw(st.integers(0, 2)))]
    if row.form.startswith("names that you choose") and "keys" in row.form:
        names = draw(st.lists(st.sampled_from(["one", "two", "a b", "", "x/y", "ü"]), max_size=2, unique=True))
        return {name: _mapping(draw, f"{row.path}.<id>.", depth + 1) for name in names}
    return draw(st.sampled_from(row.allowed)) if row.allowed and draw(st.booleans()) else draw(WORDS)


def _mapping(draw: st.DrawFn, above: str, depth: int) -> dict[str, Any]:
    keys = [p for p in ROWS if p.startswith(above) and not set(".[") & set(p[len(above) :])]
    some = draw(st.lists(st.sampled_from(keys), max_size=6, unique=True)) if keys else []
    needed = [k for k in keys if ROWS[k].required]
    data = {ROWS[k].path[len(above) :]: _value(draw, ROWS[k], depth) for k in dict.fromkeys([*needed, *some])}
    if draw(st.integers(0, 5)) == 0:
        data[draw(st.text(max_size=8))] = draw(WORDS)
    return data


@st.composite
def structures(draw: st.DrawFn) -> str:
    """A plant of the keys that the models know, with values that fit and values that do not."""
    return yaml.dump(_mapping(draw, "", 0), Dumper=yaml.SafeDumper, allow_unicode=True, sort_keys=False)


ORDINARY = settings(max_examples=120, suppress_health_check=list(HealthCheck))
LONG = settings(max_examples=3000, suppress_health_check=list(HealthCheck))


@pytest.fixture(scope="module")
def folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """One folder for all examples of this file: each writes its own `plant.yaml`."""
    return tmp_path_factory.mktemp("plant")


@pytest.fixture(scope="module")
def texts(example_folder: Path) -> tuple[str, ...]:
    """Good descriptions to spoil: the example and the skeletons."""
    return ((example_folder / "plant.yaml").read_text(encoding="utf-8"), *(skeleton(duty) for duty in DUTIES))


@ORDINARY
@given(data=st.data())
def test_mutations(folder: Path, texts: tuple[str, ...], data: st.DataObject) -> None:
    """Spoilt descriptions load or are refused with file and line."""
    check(folder, data.draw(mutations(data.draw(st.sampled_from(texts)))))


@pytest.fixture(scope="module")
def whole(example_folder: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The example's description with its included files and tables, to spoil one file at a time."""
    target = tmp_path_factory.mktemp("whole")
    shutil.copy(example_folder / "plant.yaml", target)
    for part in ("systems", "tables"):
        shutil.copytree(example_folder / part, target / part)
    return target


def check_included(folder: Path, name: str, text: str) -> None:
    """Spoil one included file, load, and put it right again; problems name file and line."""
    path = folder / "systems" / name
    good = path.read_bytes()
    path.write_bytes(text.encode("utf-8", "replace"))
    try:
        found = problems_of(folder)
    finally:
        path.write_bytes(good)
    for problem in found:
        assert problem.file
        assert problem.line is not None, str(problem)
        assert len(str(problem)) < 3000


def spoilt(folder: Path, data: st.DataObject) -> tuple[str, str]:
    """Name and spoilt text of one of the included files."""
    path = data.draw(st.sampled_from(sorted((folder / "systems").iterdir())))
    return path.name, data.draw(mutations(path.read_text(encoding="utf-8")))


@settings(ORDINARY, max_examples=40)
@given(data=st.data())
def test_mutations_of_included_files(whole: Path, data: st.DataObject) -> None:
    """A plant with one spoilt file of its systems loads or is refused with file and line."""
    check_included(whole, *spoilt(whole, data))


@ORDINARY
@given(text=structures())
def test_structures(folder: Path, text: str) -> None:
    """Invented descriptions of the right shape load or are refused with file and line."""
    check(folder, text)


@ORDINARY
@given(content=st.binary(max_size=200))
def test_bytes(folder: Path, content: bytes) -> None:
    """Bytes of any kind are refused with file and line."""
    assert check(folder, content)


@ORDINARY
@given(data=st.data())
def test_schedules(tmp_path_factory: pytest.TempPathFactory, data: st.DataObject) -> None:
    """Spoilt equipment schedules become a description that loads, or are refused with file and line."""
    target = tmp_path_factory.mktemp("schedule")
    name = data.draw(st.sampled_from(["us.csv", "metric.csv"]))
    text = data.draw(mutations((SCHEDULES / name).read_text(encoding="utf-8-sig")))
    (target / "s.csv").write_bytes(text.encode("utf-8", "replace"))
    found: tuple[Problem, ...] = ()
    try:
        from_schedule(target / "s.csv", target / "out")
    except InputError as error:
        found = error.problems
    assert all(p.file == "s.csv" and p.line is not None for p in found)
    assert found or load_plant(target / "out").plant.systems


def measured(run: Callable[[], object]) -> float:
    """Processor time of one example, in seconds."""
    started = time.process_time()
    run()
    return time.process_time() - started


@pytest.mark.long
@LONG
@given(data=st.data())
def test_mutations_long(folder: Path, texts: tuple[str, ...], data: st.DataObject) -> None:
    """Thousands of spoilt descriptions: nothing over 2 s, and the process grows by less than 300 MB."""
    text = data.draw(mutations(data.draw(st.sampled_from(texts))))
    assert measured(lambda: check(folder, text)) < 2.0
    assert resource.getrusage(resource.RUSAGE_SELF).ru_maxrss < BEGAN + 300_000


@pytest.mark.long
@settings(LONG, max_examples=1000)
@given(data=st.data())
def test_mutations_of_included_files_long(whole: Path, data: st.DataObject) -> None:
    """A thousand plants with one spoilt file of their systems, within the same bounds."""
    name, text = spoilt(whole, data)
    assert measured(lambda: check_included(whole, name, text)) < 2.0
    assert resource.getrusage(resource.RUSAGE_SELF).ru_maxrss < BEGAN + 300_000


@pytest.mark.long
@LONG
@given(text=structures())
def test_structures_long(folder: Path, text: str) -> None:
    """Thousands of invented descriptions, within the same bounds."""
    assert measured(lambda: check(folder, text)) < 2.0
    assert resource.getrusage(resource.RUSAGE_SELF).ru_maxrss < BEGAN + 300_000


BEGAN = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
"""Largest resident size in kB before the first example."""

LARGE: dict[str, Callable[[], str]] = {
    "unknown keys": lambda: (
        "plant: {name: x}\nsystems: {a: {duty: cold_storage}}\n" + "".join(f"k{n}: v\n" for n in range(40_000))
    ),
    "long unknown key": lambda: "k" * 400_000 + ": v\n",
    "long value": lambda: f"plant: {{name: x, altitude: {'9' * 400_000}}}\n",
    "long id": lambda: f"plant: {{name: x}}\nsystems: {{{'x' * 1000}: {{duty: cold_storage}}}}\n",
    "many systems": lambda: (
        "plant: {name: x}\nsystems:\n" + "".join(f"  s{n}: {{duty: cold_storage}}\n" for n in range(15_000))
    ),
    "many like": lambda: skeleton("cold_storage") + "".join(f"  s{n}: {{like: cold-room}}\n" for n in range(15_000)),
    "chain of like": lambda: (
        skeleton("cold_storage")
        + "  s0: {like: cold-room}\n"
        + "".join(f"  s{n + 1}: {{like: s{n}}}\n" for n in range(15_000))
    ),
    "like backwards": lambda: (
        skeleton("cold_storage")
        + "".join(f"  s{n}: {{like: s{n + 1}}}\n" for n in range(15_000))
        + "  s15000: {like: cold-room}\n"
    ),
    "circle": lambda: skeleton("cold_storage") + "".join(f"  s{n}: {{like: s{(n + 1) % 9000}}}\n" for n in range(9000)),
    "unknown like": lambda: skeleton("cold_storage") + "".join(f"  s{n}: {{like: x{n}}}\n" for n in range(15_000)),
    "many includes": lambda: (
        "include: [" + ",".join(f"f{n}.yaml" for n in range(40_000)) + "]\n" + skeleton("cold_storage")
    ),
    "unknown references": lambda: (
        skeleton("cold_storage") + "    measured_with:\n" + "".join(f"      k{n}: x\n" for n in range(25_000))
    ),
    "duplicates": lambda: "plant: {name: x}\n" * 25_000,
    "long list": lambda: skeleton("cold_storage") + "documents: [" + "x," * 200_000 + "]\n",
    "many points": lambda: skeleton("cold_storage") + "      - {}\n" * 40_000,
}


@pytest.mark.long
@pytest.mark.parametrize("name", LARGE)
def test_large_hostile_files(folder: Path, name: str) -> None:
    """Files near the limit of size, each of another hostile shape: refused or read within 2 s and 300 MB."""
    text = LARGE[name]()
    assert measured(lambda: check(folder, text)) < 2.0
    assert resource.getrusage(resource.RUSAGE_SELF).ru_maxrss < BEGAN + 300_000
