"""`compare`, `record`, `predict --freeze` and `build`: a visit from blank form to filed verdict and manual."""

from __future__ import annotations

import hashlib
import json
import re
import shutil
from pathlib import Path

import pytest

from commission.description import read_yaml
from tests.conftest import Run

TESTED = "2026-05-14-1320-cold-room-performance.yaml"


def _unfiled(record: Path) -> str:
    """What a person wrote of a filed record."""
    return record.read_text(encoding="utf-8").partition("\nfiled:\n")[0] + "\n"


def test_a_filed_test_shows_its_frozen_verdict_first(commission: Run, example_folder: Path) -> None:
    """A filed test that conforms leaves with 0; the recomputation stands beside it, labelled."""
    done = commission("compare", example_folder, example_folder / "records" / TESTED)
    assert done.returncode == 0, done.stderr
    first, _, rest = done.stdout.partition("recomputed with the description as it stands today")
    assert "verdict, frozen: Cooling capacity: conforming" in first
    assert "its seal holds" in first
    assert "the filed verdict stands: conforming" in rest


def test_json_of_a_filed_test_says_which_verdict(commission: Run, example_folder: Path) -> None:
    """The outcome in JSON is the frozen one, with what it was judged by."""
    done = commission("compare", example_folder, example_folder / "records" / TESTED, "--json")
    data = json.loads(done.stdout)
    assert data["outcome"] == "conforming"
    assert data["filed"]["judged_by"]["by"] == "frozen test sheet"
    assert data["recomputed"]["judgement"]["outcome"] in {"conforming", "undecided", "not conforming"}


def test_a_plant_that_misses_its_guarantee_leaves_with_one(commission: Run, example_copy: Path, tmp_path: Path) -> None:
    """By the compressor heat balance capacity goes with power: a quarter less power misses the limit by far."""
    text = re.sub(
        r"power_input: \{samples: \[[^\]]*\]",
        "power_input: {samples: [1.10 kW, 1.11 kW, 1.10 kW, 1.10 kW, 1.11 kW]",
        _unfiled(example_copy / "records" / TESTED),
    )
    visit = tmp_path / "poor.yaml"
    visit.write_text(text.replace("2026-05-14T", "2026-05-15T"), encoding="utf-8")
    for evidence in (example_copy / "records" / "attachments" / TESTED.removesuffix(".yaml")).iterdir():
        shutil.copy(evidence, tmp_path)
    done = commission("compare", example_copy, visit)
    assert done.returncode == 1, done.stdout + done.stderr
    assert "not conforming" in done.stdout
    assert commission("compare", example_copy, visit, "--json").returncode == 1


def test_a_blank_form_lists_every_reading_and_item(commission: Run, example_folder: Path) -> None:
    """The form names the instrument of each reading, and says in which unit."""
    done = commission("record", example_folder, "--form", "performance", "--system", "cold-room")
    assert done.returncode == 0, done.stderr
    assert "suction_pressure: {value: , instrument: low-side gauge" in done.stdout
    assert "# bar g" in done.stdout
    assert "performance.power" in done.stdout


def test_filing_writes_once_and_lists_the_digest(commission: Run, example_copy: Path, tmp_path: Path) -> None:
    """A filed visit is printed, listed in the form that sha256sum reads, and review finds nothing changed."""
    text = _unfiled(example_copy / "records" / TESTED).replace("2026-05-14T", "2026-06-02T")
    text = re.sub(r"\nitem_updates:.*?(?=\n\w)", "", text, flags=re.DOTALL)
    visit = tmp_path / "june.yaml"
    visit.write_text(text, encoding="utf-8")
    for evidence in (example_copy / "records" / "attachments" / TESTED.removesuffix(".yaml")).iterdir():
        shutil.copy(evidence, tmp_path)
    done = commission("record", example_copy, visit)
    assert done.returncode == 0, done.stderr
    filed = Path(done.stdout.strip())
    listed = (example_copy / "records" / "SHA256SUMS").read_text(encoding="utf-8")
    assert f"{hashlib.sha256(filed.read_bytes()).hexdigest()}  {filed.name}" in listed
    again = commission("record", example_copy, visit)
    assert again.stdout == done.stdout
    assert "records.changed" not in commission("review", example_copy).stdout


def test_review_finds_an_altered_record(commission: Run, example_copy: Path) -> None:
    """One changed character in a filed record is an error that names the file."""
    record = example_copy / "records" / TESTED
    record.write_text(record.read_text(encoding="utf-8").replace("trim", "trym", 1) + "\n# changed\n", encoding="utf-8")
    done = commission("review", example_copy)
    assert done.returncode == 1
    assert TESTED in done.stdout


def test_review_names_what_is_missing_and_what_was_never_filed(commission: Run, example_copy: Path) -> None:
    """A filed record that is gone is an error and leaves with 1; a file that nobody filed is named and does not."""
    folder = example_copy / "records"
    (folder / "stray.yaml").write_text("system: cold-room\n", encoding="utf-8")
    before = commission("review", example_copy)
    assert "stray.yaml" in before.stdout
    (folder / TESTED).unlink()
    after = commission("review", example_copy)
    assert after.returncode == 1
    assert TESTED in after.stdout
    assert "missing" in after.stdout
    errors = [int(m.group(1)) if (m := re.search(r"(\d+) error", d.stdout)) else 0 for d in (before, after)]
    assert errors[1] == errors[0] + 1


def test_a_frozen_sheet_is_written_once(commission: Run, example_copy: Path) -> None:
    """A sheet frozen over a range starts with its digest; the same name with another range is refused."""
    options = ("--system", "cold-room", "--freeze", "august")
    done = commission("predict", example_copy, *options, "--over", "heat_sink_inlet_temperature=20 °C..30 °C")
    assert done.returncode == 0, done.stderr
    sheet = Path(done.stdout.strip())
    assert sheet.read_text(encoding="utf-8").startswith("digest: ")
    other = commission("predict", example_copy, *options, "--over", "heat_sink_inlet_temperature=20 °C..35 °C")
    assert other.returncode == 2


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (["--freeze", "x"], "--freeze needs --system"),
        (["--system", "cold-room", "--freeze", "x"], "needs the range of the day"),
        (["--system", "cold-room", "--over", "heat_sink_inlet_temperature=1 °C..2 °C"], "--over belongs to --freeze"),
        (["--system", "cold-room", "--freeze", "x", "--over", "heat_sink_inlet_temperature=1 °C"], "LOW..HIGH"),
        (["--system", "cold-room", "--freeze", "x", "--over", "superheat=1 K..2 K"], "not a condition"),
        (["--system", "cold-room", "--freeze", "x", "--over", "heat_sink_inlet_temperature=9 °C..2 °C"], "must rise"),
    ],
)
def test_freezing_says_what_it_needs(commission: Run, example_copy: Path, arguments: list[str], words: str) -> None:
    """Wrong use of the freezing options leaves with 2 and says what to write."""
    done = commission("predict", example_copy, *arguments)
    assert done.returncode == 2
    assert words in done.stderr


def test_record_needs_a_file_or_a_form(commission: Run, example_folder: Path) -> None:
    """Neither or both is wrong use."""
    assert commission("record", example_folder).returncode == 2
    misspelt = commission("record", example_folder, "--form", "perfrmance", "--system", "cold-room")
    assert misspelt.returncode == 2
    assert "performance" in misspelt.stderr


SMALL_PLANT = """\
plant: {name: One room}
systems:
  room:
    duty: cold_storage
    refrigerant: R-290
    charge: 0.45 kg
    heat_source: {medium: air}
    heat_sink: {medium: air}
    rated_points:
      - {heat_source_inlet_temperature: 2 °C, heat_sink_inlet_temperature: 32 °C, cooling_capacity: 3.4 kW,
         power_input: 1.6 kW, includes: [compressor, condenser fan]}
"""


def test_build_prints_the_first_page_and_keeps_the_last_good_manual(commission: Run, tmp_path: Path) -> None:
    """The first page is printed; a description that cannot be read leaves with 2 and the manual as it was."""
    plant = tmp_path / "plant.yaml"
    plant.write_text(SMALL_PLANT, encoding="utf-8")
    done = commission("build", tmp_path, "--no-cache")
    assert done.returncode == 0, done.stderr
    first = Path(done.stdout.strip().splitlines()[-1])
    before = first.read_bytes()
    plant.write_text(SMALL_PLANT.replace("charge: 0.45 kg", "charge: 0.45"), encoding="utf-8")
    broken = commission("build", tmp_path, "--no-cache")
    assert broken.returncode == 2
    assert re.search(r"plant\.yaml:\d+:\d+: systems\.room\.charge", broken.stderr)
    assert first.read_bytes() == before


def test_values_that_answer_items_but_are_no_readings_are_named(commission: Run, tmp_path: Path) -> None:
    """Who fills in only the checklist's answers is told that nothing compares them, and where they belong."""
    assert commission("new", tmp_path / "plant", "--duty", "space_heating").returncode == 0
    record = tmp_path / "visit.yaml"
    visit = (
        "system: heat-pump\nstage: performance\nmode: trim\nstarted: 2026-05-14T10:20+01:00\n"
        "people:\n  operator: {name: A. Reader}\n"
        "conditions:\n  heat_source_inlet_temperature: {value: 7 °C}\n"
        "readings:\n  power_input: {value: 1.9 kW}\n"
        "answers:\n  performance.suction-pressure: {answer: 3.6 bar g}\n  performance.power: {answer: 1.9 kW}\n"
    )
    record.write_text(visit, encoding="utf-8")
    done = commission("compare", tmp_path / "plant", record)
    assert done.returncode == 0, done.stderr
    told = [line for line in done.stderr.splitlines() if "is not compared" in line]
    assert told == [
        "mind: the answer to performance.suction-pressure is not compared; "
        "write it under readings as suction_pressure, once"
    ]


LOGGER = """\
logger: test logger
delimiter: comma
decimal: point
time: {column: time, form: 'YYYY-MM-DD hh:mm:ss', zone: Europe/London}
columns: {power: {quantity: power_input, unit: kW, instrument: power meter}}
"""


def test_whole_cycles_come_from_a_log(commission: Run, example_folder: Path, tmp_path: Path) -> None:
    """With --cycles the blank record holds the means over the latest three whole cycles; less than one is refused."""
    (tmp_path / "mapping.yaml").write_text(LOGGER, encoding="utf-8")
    rows = [
        f"2026-05-14 {12 + n // 60:02d}:{n % 60:02d}:00,{1.5 if n >= 5 and (n - 5) % 30 < 20 else 0.04}"
        for n in range(140)
    ]
    form = ("--form", "performance", "--system", "cold-room", "--mapping", tmp_path / "mapping.yaml", "--cycles")
    log = tmp_path / "log.csv"
    log.write_text("time,power\n" + "\n".join(rows), encoding="utf-8")
    done = commission("record", example_folder, *form, "--log", log)
    assert done.returncode == 0, done.stderr
    assert read_yaml(done.stdout).data["cycles"] == {"count": "3", "by": "start"}
    assert "66.7 %" in done.stdout
    assert done.stdout.count("1.5 kW") == 3
    log.write_text("time,power\n" + "\n".join(rows[:30]), encoding="utf-8")
    done = commission("record", example_folder, *form, "--log", log)
    assert done.returncode == 2
    assert "less than one whole cycle" in done.stderr
