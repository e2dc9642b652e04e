"""`predict --before-visit`: the page for a forecast day, alone and with the frozen sheet that both sides sign."""

from __future__ import annotations

import re
from html import unescape
from pathlib import Path

import pytest

from commission.acceptance import read_sheet
from tests.conftest import Run

DAY = ("--system", "cold-room", "--at", "heat_sink_inlet_temperature=24 °C")


def _text(page: Path) -> str:
    body = page.read_text(encoding="utf-8").partition("<main")[2].partition("</main>")[0]
    return re.sub(r"\s+", " ", re.sub(r"<[^>]+>", " ", body))


def test_the_page_of_the_day(commission: Run, example_folder: Path, tmp_path: Path) -> None:
    """One file that fetches nothing: forecast, what was left out, verdict that could be had, readings with instrument
    and smallest deviation, expired calibrations, and the grid of every 5 K around the forecast with empty columns."""
    out = tmp_path / "before.html"
    done = commission("predict", example_folder, *DAY, "--visit", "2035-04-20", "--before-visit", out)
    assert done.returncode == 0, done.stderr
    assert done.stdout.strip() == str(out)
    html, text = unescape(out.read_text(encoding="utf-8")), _text(out)
    assert "default-src 'none'" in html
    assert not re.search(r'(?:src|href)="(?!#)', html.partition("<body")[2])
    assert "Before the visit of 2035-04-20" in text
    assert "24.0 °C in" in text
    assert "Taken as rated, not given" in text
    assert re.search(r"Cooling capacity: would (be decided|stay undecided)", text)
    assert re.search(r"low-side gauge .{0,90}2\.\d\d bar g", text)
    assert "before the reading of 2035-04-20" in text
    assert all(f" {t} °C " in text for t in (15, 20, 25, 30))
    assert html.count('<td class="write"></td>') >= 3 * 10
    assert "Nothing is frozen" in text


def test_page_and_frozen_sheet_share_one_grid(commission: Run, example_copy: Path, tmp_path: Path) -> None:
    """With --freeze the grid of the page is the frozen one, and the page prints the digest that both sides sign."""
    out = tmp_path / "before.html"
    span = ("--over", "heat_sink_inlet_temperature=18 °C..28 °C")
    done = commission("predict", example_copy, *DAY, *span, "--freeze", "april", "--before-visit", out)
    assert done.returncode == 0, done.stderr
    path, page = map(Path, done.stdout.split())
    assert page == out
    sheet = read_sheet(path)
    assert [round(v - 273.15, 6) for v in sheet.axes[0].values] == [18.0, 23.0, 28.0]
    text = _text(out)
    assert sheet.digest in text
    assert all(f" {t} °C " in text for t in (18, 23, 28))


def test_the_day_moves_what_is_expected(commission: Run, example_folder: Path, tmp_path: Path) -> None:
    """The forecast, not the rated condition, is what the readings are expected at: a warmer day, a higher pressure."""
    seen = []
    for sink in (15, 35):
        out = tmp_path / f"{sink}.html"
        at = ("--system", "cold-room", "--at", f"heat_sink_inlet_temperature={sink} °C")
        assert commission("predict", example_folder, *at, "--before-visit", out).returncode == 0
        found = re.search(
            r"Discharge pressure .{0,60}? ([\d.]+) bar g", _text(out).partition("each reading can show")[2]
        )
        assert found is not None
        seen.append(float(found.group(1)))
    assert seen[1] > seen[0] + 2.0


def test_another_file_is_not_written_over(commission: Run, example_folder: Path, tmp_path: Path) -> None:
    """A page of before is replaced; any other file stays as it is."""
    out = tmp_path / "before.html"
    assert commission("predict", example_folder, *DAY, "--before-visit", out).returncode == 0
    assert commission("predict", example_folder, *DAY, "--before-visit", out).returncode == 0
    out.write_text("my own notes", encoding="utf-8")
    done = commission("predict", example_folder, *DAY, "--before-visit", out)
    assert done.returncode == 2
    assert "another file is there" in done.stderr
    assert out.read_text(encoding="utf-8") == "my own notes"


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (["--before-visit", "x.html"], "--before-visit needs --system"),
        (["--system", "cold-room", "--before-visit", "x.html"], "--before-visit needs the forecast"),
        (["--system", "cold-room", "--visit", "2026-05-01"], "--visit belongs to"),
        ([*DAY[:3], "heat_sink_inlet_temperature=240 °C", "--before-visit", "x.html"], "outside the range"),
        ([*DAY[:3], "superheat=5 K", "--before-visit", "x.html"], "no condition of this system"),
    ],
)
def test_wrong_use(commission: Run, example_folder: Path, arguments: list[str], words: str) -> None:
    """Wrong use of the options leaves with 2, says what to write, and writes nothing."""
    done = commission("predict", example_folder, *arguments)
    assert done.returncode == 2
    assert words in done.stderr
    assert not Path("x.html").exists()
