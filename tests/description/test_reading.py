"""YAML becomes plain data whose scalars all stay text, and what could surprise is refused with its place."""

import random
import time
from pathlib import Path

import pytest
import yaml

from commission.description import DescriptionError, Position, read_yaml, reading
from commission.description.reading import MAX_BYTES, MAX_DEPTH
from commission.errors import Problem


def problems_of(source: Path | str) -> tuple[Problem, ...]:
    """The problems of a file or text; none where it can be read. Any other exception fails the test."""
    try:
        return read_yaml(source).problems
    except DescriptionError as error:
        return error.problems


def test_all_scalars_stay_text() -> None:
    """What YAML 1.1 would turn into booleans, numbers, times and nulls arrives as it was written."""
    text = "a: no\nb: 1:30\nc: 010\nd: 0x1f\ne: 1e3\nf: ~\ng:\nh: 2027-03-31\ni: '5'\nj: [yes, .inf]\n"
    assert read_yaml(text).data == {
        "a": "no", "b": "1:30", "c": "010", "d": "0x1f", "e": "1e3", "f": "~", "g": "", "h": "2027-03-31", "i": "5",
        "j": ["yes", ".inf"],
    }  # fmt: skip


def test_each_key_and_value_has_its_place() -> None:
    """Line and column count from 1, for block and flow style alike."""
    read = read_yaml("a:\n  b: {c: x,\n      d: [y, z]}\n", "f.yaml")
    mark = read.positions.mark(("a", "b", "d", 1))
    assert mark.value == Position("f.yaml", 3, 14)
    assert mark.text == "z"
    assert read.positions.mark(("a", "b", "c")).key == Position("f.yaml", 2, 7)
    assert read.positions.mark(("a", "b", "c")).value == Position("f.yaml", 2, 10)
    assert read.positions.mark(("a", "b", "nowhere", "at", "all")).key == Position("f.yaml", 2, 3)


def test_duplicate_keys_are_kept_as_problems() -> None:
    """Every second writing of a key is named with the line of the first; reading goes on with the first."""
    read = read_yaml("a: 1\nb: {c: 1, c: 2}\na: {d: 3}\ne: 5\n", "f.yaml")
    assert [(p.line, p.column, p.path) for p in read.problems] == [(2, 11, "b.c"), (3, 1, "a")]
    assert "line 1" in read.problems[1].message
    assert read.data == {"a": "1", "b": {"c": "1"}, "e": "5"}


def test_a_thousands_comma_between_braces_is_told_once() -> None:
    """`{flow: 1,200 m3/h}` is two entries to YAML; one problem says so at the comma, and the number is read whole."""
    read = read_yaml("a: {flow: 1,200 m3/h, medium: air}\nb: {count: 2, name: x}\n", "f.yaml")
    (problem,) = read.problems
    assert (problem.line, problem.column, problem.path, problem.value) == (1, 13, "a.flow", "1,200 m3/h")
    assert "comma ends the value" in problem.message
    assert problem.allowed is not None
    assert problem.allowed.endswith("1200 m3/h")
    assert read.data == {"a": {"flow": "1200 m3/h", "medium": "air"}, "b": {"count": "2", "name": "x"}}


@pytest.mark.parametrize("text", ["a: {1: 100 m3/h, 200 m3/h: x}\n", "a: {b: 12, 34: c}\n", "a: {b: x1, 200: c}\n"])
def test_other_commas_are_no_thousands(text: str) -> None:
    """A key that starts with digits is left alone where no bare number of one to three digits stands before it."""
    assert not read_yaml(text).problems


@pytest.mark.parametrize(
    ("text", "message", "line", "column"),
    [
        ("a: &x 1\n", "an anchor (&x)", 1, 4),
        ("a: 1\nb: *x\n", "an alias (*x)", 2, 4),
        ("a: !!str 1\n", "a tag", 1, 4),
        ("a: !!python/object/apply:os.system [ls]\n", "a tag", 1, 4),
        ("a: ! x\n", "a tag", 1, 4),
        ("a: 1\n---\nb: 2\n", "a second one starts here", 2, 1),
        ("? [a]\n: 1\n", "a key must be a plain word", 1, 3),
        ("? {a: b}\n: 1\n", "a key must be a plain word", 1, 3),
        ("a: [1\nb: 2\n", "this is not YAML", 2, None),
        ("a: b: c\n", "this is not YAML", 1, 5),
        ("a:\n\t- 1\n", "this is not YAML", 2, 1),
        ("a: 'x\n", "this is not YAML", None, None),
        ("", "the file is empty", 1, 1),
        ("# only a comment\n", "the file is empty", 1, 1),
        ("a: x\x00y\n", "cannot stand in this file", 1, 5),
        ("a: 1\nb: \x1b[31m\n", "cannot stand in this file", 2, 4),
    ],
)
def test_refused_with_its_place(text: str, message: str, line: int | None, column: int | None) -> None:
    """Tags, anchors, aliases, second documents, odd keys, broken YAML and control characters are refused."""
    with pytest.raises(DescriptionError) as caught:
        read_yaml(text, "f.yaml")
    problem = caught.value.problems[-1]
    assert message in problem.message
    assert problem.file == "f.yaml"
    assert problem.line is not None
    assert line in (None, problem.line)
    assert column in (None, problem.column)


def test_text_with_an_ampersand_or_exclamation_mark_can_be_quoted() -> None:
    """What looks like an anchor or a tag is text in quotes."""
    assert read_yaml("a: '&x'\nb: \"!y\"\nc: Smith & Sons!\n").data == {"a": "&x", "b": "!y", "c": "Smith & Sons!"}


@pytest.mark.parametrize("opening", ["[", "{a: ", "- "])
def test_depth_is_bounded(opening: str) -> None:
    """Deeper than the limit is refused at once, however deep it goes."""
    with pytest.raises(DescriptionError) as caught:
        read_yaml(opening * 50_000 if opening != "- " else "- " * 5_000 + "x")
    assert f"more than {MAX_DEPTH} levels" in caught.value.problems[0].message


def test_depth_within_the_limit_is_read() -> None:
    """Twenty levels are enough for anything sensible, and are read."""
    assert read_yaml("[" * MAX_DEPTH + "x" + "]" * MAX_DEPTH).data


def test_files_that_cannot_be_read(tmp_path: Path) -> None:
    """Missing, a folder, too large, not UTF-8: each says so, with the line where there is one."""
    cases = {"missing.yaml": "no such file", "dir.yaml": "is a folder", "large.yaml": "larger than"}
    (tmp_path / "dir.yaml").mkdir()
    (tmp_path / "large.yaml").write_bytes(b"a: 1\n" * (MAX_BYTES // 4))
    for name, message in cases.items():
        with pytest.raises(DescriptionError) as caught:
            read_yaml(tmp_path / name)
        assert message in caught.value.problems[0].message
        assert caught.value.problems[0].file == name
    (tmp_path / "latin.yaml").write_bytes("a: 1\nb: 5 °C\n".encode("latin-1"))
    with pytest.raises(DescriptionError) as caught:
        read_yaml(tmp_path / "latin.yaml")
    assert (caught.value.problems[0].line, caught.value.problems[0].column) == (2, 6)
    (tmp_path / "bom.yaml").write_bytes(b"\xef\xbb\xbfa: 1\r\nb: 2\r\n")
    assert read_yaml(tmp_path / "bom.yaml").data == {"a": "1", "b": "2"}


def test_the_largest_files_take_no_longer_than_a_breath() -> None:
    """Files at the limit of size, of several hostile shapes, are read or refused within seconds of this process."""
    shapes = [
        "k: " + "x" * (MAX_BYTES - 10),
        "".join(f"k{n}: v\n" for n in range(40_000)),
        "[" + "a," * (MAX_BYTES // 3) + "]",
        "a: 1\n" * (MAX_BYTES // 6),
        "a: '" + "''" * (MAX_BYTES // 3) + "'",
        "a: |\n" + "  b\n" * (MAX_BYTES // 5),
    ]
    started = time.process_time()
    for text in shapes:
        assert all(p.line for p in problems_of(text))
    assert time.process_time() - started < 2.0 * len(shapes)


def test_the_slow_parser_reads_the_same(example_folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """Where PyYAML has no compiled parser its own one gives the same data, places and refusals."""
    good = (example_folder / "plant.yaml").read_text(encoding="utf-8")
    fast = read_yaml(good)
    refused = [problems_of(text)[-1].place for text in ("a: &x 1\n", "a: 1\na: !y 2\n", "a: {b: [*x]}\n")]
    monkeypatch.setattr(reading, "Loader", yaml.SafeLoader)
    assert read_yaml(good).data == fast.data
    assert read_yaml(good).positions == fast.positions
    assert [problems_of(text)[-1].place for text in ("a: &x 1\n", "a: 1\na: !y 2\n", "a: {b: [*x]}\n")] == refused


def test_random_bytes_are_read_or_refused(tmp_path: Path) -> None:
    """Random bytes never end in anything but data or a problem with a file."""
    source = random.Random(1)
    path = tmp_path / "f.yaml"
    for _ in range(200):
        path.write_bytes(source.randbytes(source.randrange(1, 60)))
        assert all(p.file == "f.yaml" for p in problems_of(path))


@pytest.mark.parametrize(
    ("text", "message", "place", "allowed"),
    [
        ("plant:\n\tname: x\n", "a tabulator stands here", (2, 1), "spaces"),
        ("a:\n  b: c\n\td: e\n", "a tabulator stands here", (3, 1), "spaces"),
        ("a:\n  name: x: y\n", "a second colon", (2, 10), "in quotes"),
        ('a: "x\nb: c\n', "quotation mark that opens here", (1, 4), "closing quotation mark"),
        ("a: {b: c\nd: e\n", "bracket that opens in line 1", (2, 2), "} at the end"),
        ("a: [b, c\nd: e\n", "bracket that opens in line 1", (2, 2), "] at the end"),
        ("a:\n  b: c\n   d: e\n", "the line above has a value already", (3, 5), "spaces in front"),
        ("a:\n  b: c\n d: e\n", "does not line up", (3, 2), "spaces in front"),
        ("a:\n - b\n c: d\n", "does not line up", (3, 2), "spaces in front"),
        ("a: @x\n", "cannot start with @", (1, 4), "quotes"),
        ("a: 'x' y\n", "does not belong to the value", (1, 8), "in quotes"),
        ("a:b\nc: d\n", "no colon with a space", (2, 2), "spaces in front"),
        ('a: "\\d"\n', "unknown escape character", (1, 5), "quotes"),
    ],
)
def test_slips_of_yaml_in_plain_words(text: str, message: str, place: tuple[int, int], allowed: str) -> None:
    """The usual slips are named as what they are, at the place where a person mends them, with what to write."""
    with pytest.raises(DescriptionError) as caught:
        read_yaml(text, "f.yaml")
    problem = caught.value.problems[-1]
    assert problem.message.startswith("this is not YAML: ")
    assert message in problem.message
    assert (problem.line, problem.column) == place
    assert allowed in (problem.allowed or "")
