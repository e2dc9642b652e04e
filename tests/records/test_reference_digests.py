"""Digests and their list against outside sources: FIPS 180-4 and GNU coreutils."""

from __future__ import annotations

import shutil
import subprocess
from pathlib import Path

import pytest

from commission.records.disk import digest_of_file
from commission.records.sums import sums_text


def test_digest_is_sha256(tmp_path: Path) -> None:
    """FIPS 180-4 example: the digest of "abc"."""
    (tmp_path / "abc").write_bytes(b"abc")
    expected = "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
    assert digest_of_file(tmp_path / "abc") == expected


@pytest.mark.parametrize("name", ["plain.txt", "two words.txt", "back\\slash.txt", "line\nend.txt", "ünï.txt"])
def test_sha256sum_writes_the_same_line(tmp_path: Path, name: str) -> None:
    """GNU coreutils as the outside check: its own line for a file is ours, escaping included."""
    tool = shutil.which("sha256sum")
    if tool is None:
        pytest.skip("this system has no sha256sum")
    (tmp_path / name).write_bytes(b"abc")
    found = subprocess.run([tool, name], cwd=tmp_path, capture_output=True, check=True).stdout.decode()
    assert found == sums_text({name: digest_of_file(tmp_path / name)})
