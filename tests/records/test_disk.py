"""Files written once and whole, the list of digests, the seal."""

from __future__ import annotations

import errno
import hashlib
import os
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from commission.records import ExistsError, FolderError, SumsError
from commission.records.disk import LOCK_NAME, copy_new, digest_of_file, lock, replace, sweep, write_new
from commission.records.sums import SUMS_NAME, add_sums, compare_sums, read_sums, sums_text
from commission.records.text import plain, seal_holds, with_filed_block

NAMES = st.text(st.characters(blacklist_categories=("Cs",), blacklist_characters="\0/"), min_size=1, max_size=20)


def without_links(*_: object) -> None:
    """As on a memory stick: the file system knows no hard links."""
    raise OSError(errno.EPERM, "Operation not permitted")


@pytest.mark.parametrize("links", [True, False])
def test_a_file_is_never_overwritten(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, links: bool) -> None:
    """The second writer of a name is refused and the first content stays, with hard links or without."""
    if not links:
        monkeypatch.setattr(os, "link", without_links)
    path = tmp_path / "records" / "one.yaml"
    write_new(path, b"first")
    source = tmp_path / "source"
    source.write_bytes(b"second")
    with pytest.raises(ExistsError) as caught:
        write_new(path, b"second")
    assert caught.value.problems[0].file == str(path)
    with pytest.raises(ExistsError):
        copy_new(source, path)
    assert path.read_bytes() == b"first"
    assert [p.name for p in path.parent.iterdir()] == ["one.yaml"]


def test_replacing_leaves_no_part_behind(tmp_path: Path) -> None:
    """New content takes the place of the old in one step, and nothing else stays in the folder."""
    path = tmp_path / "list"
    replace(path, b"one")
    replace(path, b"two")
    assert (path.read_bytes(), list(tmp_path.iterdir())) == (b"two", [path])


def test_only_parts_of_a_killed_run_are_swept(tmp_path: Path) -> None:
    """Hidden part files go; records and other hidden files stay."""
    for name in (".one.yaml.17.part", "one.yaml", ".hidden"):
        (tmp_path / name).write_bytes(b"x")
    assert sweep(tmp_path) == (".one.yaml.17.part",)
    assert sorted(p.name for p in tmp_path.iterdir()) == [".hidden", "one.yaml"]


def test_the_lock_keeps_a_second_one_out_until_it_is_free(tmp_path: Path) -> None:
    """While it is held, a second holder is refused after its patience; afterwards it gets it at once."""
    with lock(tmp_path), pytest.raises(FolderError, match="somebody else"), lock(tmp_path, patience=0.05):
        pass
    with lock(tmp_path, patience=0.05):
        assert (tmp_path / LOCK_NAME).exists()


def test_a_folder_that_cannot_be_written_says_so(tmp_path: Path) -> None:
    """A file in the place of the folder is an error with its name, not a traceback."""
    (tmp_path / "records").write_bytes(b"in the way")
    with pytest.raises(FolderError) as caught:
        write_new(tmp_path / "records" / "one.yaml", b"x")
    assert "cannot be written" in caught.value.problems[0].message


@given(st.dictionaries(NAMES, st.binary(max_size=4).map(lambda b: hashlib.sha256(b).hexdigest()), max_size=5))
def test_the_list_is_read_back_as_it_was_written(
    tmp_path_factory: pytest.TempPathFactory, sums: dict[str, str]
) -> None:
    """Any name, with backslashes and line ends too, survives the escaping of the list."""
    folder = tmp_path_factory.mktemp("sums")
    (folder / SUMS_NAME).write_bytes(sums_text(sums).encode())
    assert read_sums(folder) == sums


def test_every_broken_line_of_the_list_is_named(tmp_path: Path) -> None:
    """All lines that cannot be read are reported, with their numbers."""
    good = "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad  abc\n"
    (tmp_path / SUMS_NAME).write_text(f"short  abc\n{good}{good[:64]} abc\n", encoding="utf-8")
    with pytest.raises(SumsError) as caught:
        read_sums(tmp_path)
    assert [p.line for p in caught.value.problems] == [1, 3]


def test_a_listed_digest_is_never_changed(tmp_path: Path) -> None:
    """Adding another digest for a listed name is an error, not a correction."""
    add_sums(tmp_path, {"one": "0" * 64})
    with pytest.raises(SumsError, match="another digest"):
        add_sums(tmp_path, {"one": "1" * 64})
    assert read_sums(tmp_path) == {"one": "0" * 64}


def test_altered_missing_and_unlisted_are_told_apart(tmp_path: Path) -> None:
    """Each of the three states is found, and a file that is as listed is not mentioned."""
    for name in ("same", "altered", "new"):
        (tmp_path / name).write_bytes(name.encode())
    same = digest_of_file(tmp_path / "same")
    add_sums(tmp_path, {"same": same, "altered": "0" * 64, "gone": "1" * 64})
    assert [(f.name, f.state) for f in compare_sums(tmp_path)] == [
        ("altered", "altered"), ("gone", "missing"), ("new", "not listed"),
    ]  # fmt: skip
    assert all(f.name in f.sentence for f in compare_sums(tmp_path))


@pytest.mark.parametrize("written", ["a: b\n", "a: b", "a: b\r\n# end\r\n", "{a: b}\n", "a: b\n...\n", "---\na: b\n"])
def test_the_seal_fits_until_a_byte_changes(written: str) -> None:
    """Whatever way the record was written, the filed text is sealed, and any changed byte above the seal breaks it."""
    text = with_filed_block(written, {"a": "b"}, {"form": "1"}).encode()
    assert seal_holds(text) is True
    for at in (0, text.index(b"form"), text.index(b"seal"), len(text) - 9):
        broken = bytearray(text)
        broken[at] ^= 1
        assert seal_holds(bytes(broken)) is False
    assert seal_holds(written.encode()) is None


def test_a_number_that_is_none_is_not_filed() -> None:
    """Infinity and NaN never reach a record."""
    with pytest.raises(ValueError, match="cannot be filed"):
        plain({"value": float("nan")})
