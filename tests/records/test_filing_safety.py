"""Filing under hard conditions: killed at any moment, several people at once."""

from __future__ import annotations

import json
import random
import shutil
import subprocess
import sys
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import pytest

from commission.description import LoadedPlant
from commission.records import check_files, open_items, read_filed, read_folder, records_folder
from commission.records.disk import PART
from commission.records.sums import SUMS_NAME, read_sums
from commission.records.text import seal_holds

from .conftest import Write

pytestmark = pytest.mark.skipif(sys.platform == "win32", reason="needs fork and SIGKILL")

NOTHING_READ = """\
system: store
stage: visit
started: 2026-04-21T10:20:00+01:00
people: {operator: {name: A fitter}}
answers: {visit.clean: yes}
open_items: [{what: sweep the yard}]
remarks: visit %s
"""

Ask = Callable[..., list[int]]


@pytest.fixture(scope="module")
def filing_process(plant_template: Path) -> Iterator[subprocess.Popen[str]]:
    """A filing process that has read the checklist library and is ready."""
    command = [sys.executable, str(Path(__file__).with_name("filing_process.py")), str(plant_template)]
    root = Path(__file__).parents[2]
    with subprocess.Popen(command, cwd=root, stdin=subprocess.PIPE, stdout=subprocess.PIPE, text=True) as process:
        assert process.stdin is not None
        assert process.stdout is not None
        assert process.stdout.readline() == "ready\n"
        yield process
        process.stdin.close()


@pytest.fixture
def ask(folder: Path, filing_process: subprocess.Popen[str]) -> Ask:
    """Send a request about the test plant to the filing process and return the exit codes of its children."""

    def request(*drafts: Path, **more: Any) -> list[int]:
        assert filing_process.stdin is not None
        assert filing_process.stdout is not None
        asked = {"plant": str(folder), "drafts": [str(d) for d in drafts], **more}
        filing_process.stdin.write(json.dumps(asked) + "\n")
        filing_process.stdin.flush()
        codes: list[int] = json.loads(filing_process.stdout.readline())
        return codes

    return request


@pytest.fixture
def evidence(tmp_path: Path) -> Path:
    """A folder with two files to attach, one in a folder of its own and longer than one block of the disk."""
    room = tmp_path / "evidence"
    (room / "photos").mkdir(parents=True)
    (room / "note.txt").write_text("seen\n", encoding="utf-8")
    (room / "photos" / "coil.bin").write_bytes(random.Random(1).randbytes(300_000))
    return room


def nothing_is_halved(folder: Path, evidence: Path, before: dict[str, bytes]) -> None:
    """Every visible file is whole, everything that was filed before is untouched, and the list tells no lies."""
    for path in folder.glob("*.yaml"):
        assert seal_holds(path.read_bytes()) is True, path
    for path in (p for p in (folder / "attachments").rglob("*") if p.is_file() and not p.name.endswith(PART)):
        name = path.relative_to(folder / "attachments").as_posix().split("/", 1)[1]
        assert path.read_bytes() == (evidence / name).read_bytes()
    for name, content in before.items():
        assert (folder / name).read_bytes() == content
    for name in read_sums(folder):
        assert (folder / name).is_file(), name


def filed(folder: Path) -> dict[str, bytes]:
    """The records as they lie in the folder."""
    return {p.name: p.read_bytes() for p in folder.glob("*.yaml")}


def killed_and_filed_again(loaded: LoadedPlant, ask: Ask, draft: Path, evidence: Path, **how: Any) -> list[int]:
    """Kill one filing, look at the folder, file again, look again; returns the exit code of the first."""
    folder = records_folder(loaded)
    before = filed(folder)
    codes = ask(draft, attach=str(evidence), **how)
    nothing_is_halved(folder, evidence, before)
    assert ask(draft, attach=str(evidence)) == [0]
    nothing_is_halved(folder, evidence, before)
    new = set(filed(folder)) - set(before)
    assert len(new) == 1
    assert (
        read_filed(folder / new.pop()).file.remarks == draft.read_text(encoding="utf-8").split("remarks: ")[1].strip()
    )
    assert not [f for f in check_files(loaded) if f.state != "not listed"]
    assert not list(folder.rglob(f".*{PART}"))
    return codes


@pytest.mark.parametrize("stride", [2, pytest.param(1, marks=pytest.mark.long)])
def test_killed_at_each_step_on_the_disk(
    loaded: LoadedPlant, ask: Ask, write: Write, evidence: Path, tmp_path: Path, stride: int
) -> None:
    """Whichever step of the filing the kill hits, nothing is half there, and filing again puts everything right."""
    folder, spare = records_folder(loaded), tmp_path / "spare"
    assert ask(write(text=NOTHING_READ % 0)) == [0]
    shutil.copytree(folder, spare)
    draft = write(text=NOTHING_READ % 1)
    codes: list[int] = []
    while not codes or codes[-1] != 0:
        shutil.rmtree(folder)
        shutil.copytree(spare, folder)
        codes += killed_and_filed_again(loaded, ask, draft, evidence, kill_at=1 + stride * len(codes))
        assert len(read_sums(folder)) == 4
    assert codes[:-1] == [-9] * (len(codes) - 1)
    assert stride * len(codes) > 20


@pytest.mark.long
def test_killed_two_hundred_times_at_any_moment(loaded: LoadedPlant, ask: Ask, write: Write, evidence: Path) -> None:
    """Two hundred kills spread over the time that a filing takes: no loss, no half file, each record once."""
    chance = random.Random(20260421)
    killed = tries = 0
    while killed < 200:
        tries += 1
        assert tries < 2000
        draft = write(text=NOTHING_READ % tries, name="draft.yaml")
        killed += killed_and_filed_again(loaded, ask, draft, evidence, delay=chance.uniform(0.0, 0.25)) == [-9]
        if tries % 10 == 0:
            shutil.rmtree(records_folder(loaded))


def test_several_people_file_at_once(loaded: LoadedPlant, ask: Ask, write: Write) -> None:
    """Six people file visits of the same minute: all land, under their own names, with numbers of their own."""
    drafts = [write(text=NOTHING_READ % n, name=f"draft-{n}.yaml") for n in range(6)]
    assert ask(*drafts) == [0] * 6
    found = read_folder(records_folder(loaded))
    assert sorted(r.file.remarks or "" for r in found.records) == [f"visit {n}" for n in range(6)]
    assert [item.number for item in open_items(loaded)] == [1, 2, 3, 4, 5, 6]
    assert check_files(loaded) == ()


def test_the_list_is_one_that_sha256sum_reads(loaded: LoadedPlant, ask: Ask, write: Write, evidence: Path) -> None:
    """`sha256sum -c SHA256SUMS` in the records folder says that every file is right, and finds a changed one."""
    tool = shutil.which("sha256sum")
    if tool is None:
        pytest.skip("this system has no sha256sum")
    assert ask(write(text=NOTHING_READ % 1), attach=str(evidence)) == [0]
    folder = records_folder(loaded)
    check = [tool, "--strict", "-c", SUMS_NAME]
    assert subprocess.run(check, cwd=folder, capture_output=True, check=False).returncode == 0
    with next(iter(folder.glob("*.yaml"))).open("a", encoding="utf-8") as file:
        file.write("# a word more\n")
    assert subprocess.run(check, cwd=folder, capture_output=True, check=False).returncode == 1
