"""Records from a logger's file: dates, decimals, summer time, disorder, steady windows, a draft that reads."""

from __future__ import annotations

import datetime as dt
import random
import resource
import sys
import time
from collections.abc import Callable
from pathlib import Path
from zoneinfo import ZoneInfo

import pytest

from commission.description import LoadedPlant
from commission.records import read_record
from commission.records.logger import (
    Log,
    LogError,
    MappingError,
    draft_of,
    quietest,
    read_log,
    read_mapping,
    steady_windows,
)
from commission.records.logger.clock import FormError, compile_form

MAPPING = """\
logger: plant room logger
delimiter: semicolon
decimal: comma
unit_rows: 1
time: {date_column: Datum, time_column: Zeit, form: DD.MM.YYYY hh:mm:ss, zone: Europe/Berlin}
missing: ['---']
columns:
  Saugdruck: {quantity: suction_pressure, unit: bar g, instrument: low gauge}
  Raum: {quantity: heat_source_inlet_temperature, unit: °C, instrument: air probe}
  Leistung: {quantity: power_input, unit: kW, instrument: power meter}
"""
HEADER = "Datum;Zeit;Raum;Leistung;Saugdruck\n;;°C;kW;bar\n"
AIR = 97_700.0
LogOf = Callable[..., Log]


@pytest.fixture
def log_of(tmp_path: Path) -> LogOf:
    """Read rows (text, or header and rows) with the mapping, changed by pairs of old and new text."""

    def make(rows: str, *changes: tuple[str, str], header: str = HEADER, encoding: str = "utf-8") -> Log:
        text = MAPPING
        for old, new in changes:
            assert old in text
            text = text.replace(old, new)
        (tmp_path / "mapping.yaml").write_text(text, encoding="utf-8")
        (tmp_path / "log.csv").write_bytes((header + rows).encode(encoding))
        return read_log(tmp_path / "log.csv", read_mapping(tmp_path / "mapping.yaml"), AIR)

    return make


def rows(start: dt.datetime, count: int, step: int = 10, off: float = 0.0) -> str:
    """Rows of a plant that stands still but for the last digit, every `step` seconds of local time."""
    chance = random.Random(3)
    lines = []
    for n in range(count):
        when = start + dt.timedelta(seconds=step * n)
        room, power = 2.4 + chance.uniform(-0.1, 0.1) + off, 1.60 + chance.uniform(-0.01, 0.01)
        pressure = 2.85 + chance.uniform(-0.01, 0.01)
        line = f"{when:%d.%m.%Y;%H:%M:%S};{room:.2f};{power:.3f};{pressure:.2f}\n"
        lines.append(line[:19] + line[19:].replace(".", ","))
    return "".join(lines)


def test_decimal_commas_unit_rows_and_gauge_pressures(log_of: LogOf) -> None:
    """A row in the logger's own writing becomes SI values at a moment in UTC."""
    log = log_of("14.05.2026;12:20:00;2,40;1,612;2,85\n")
    assert log.moment(log.times[0]) == dt.datetime(2026, 5, 14, 10, 20, tzinfo=dt.UTC)
    assert log.values["suction_pressure"][0] == pytest.approx(2.85e5 + AIR)
    assert log.values["heat_source_inlet_temperature"][0] == pytest.approx(275.55)
    assert log.values["power_input"][0] == pytest.approx(1612.0)


def test_disorder_is_put_right_and_said(log_of: LogOf) -> None:
    """Rows are sorted, the first of two equal moments counts; words for nothing and rubbish are told apart."""
    log = log_of(
        "14.05.2026;12:20:00;2,4;1,6;2,85\n"
        "14.05.2026;12:20:20;2,6;1,6;2,85\n"
        "14.05.2026;12:20:10;2,5;---;2.85\n"
        "14.05.2026;12:20:20;9,9;9,9;9,9\n"
        "\n"
        "32.05.2026;12:20:30;2,4;1,6;2,85\n"
    )
    assert list(log.times - log.times[0]) == [0.0, 10.0, 20.0]
    assert log.values["heat_source_inlet_temperature"][2] == pytest.approx(275.75)
    report = log.report
    assert (report.rows, report.unordered, report.repeated) == (5, 1, 1)
    assert (report.missing, report.unreadable, report.bad_times) == (1, 1, 1)
    assert [(p.line, p.value) for p in report.problems] == [(5, "2.85"), (8, "32.05.2026 12:20:30")]


def test_holes_are_named(log_of: LogOf) -> None:
    """A stretch of more than three usual intervals without rows is a gap."""
    start = dt.datetime(2026, 5, 14, 12, 0)
    log = log_of(rows(start, 30) + rows(start + dt.timedelta(seconds=400), 30))
    assert log.report.interval == 10.0
    assert [g.end - g.start for g in log.report.gaps] == [110.0]


@pytest.mark.parametrize("encoding", ["utf-8-sig", "utf-16", "windows-1252"])
def test_encodings_and_byte_order_marks(log_of: LogOf, encoding: str) -> None:
    """A byte-order mark is no part of the first column's name; other encodings are read as the mapping says."""
    word = "utf-8" if encoding == "utf-8-sig" else encoding
    log = log_of(
        "14.05.2026;12:20:00;2,4;1,6;2,85\n", ("decimal: comma", f"decimal: comma\nencoding: {word}"), encoding=encoding
    )
    assert len(log.times) == 1


def test_the_hour_that_comes_twice_is_told_apart_by_order(log_of: LogOf) -> None:
    """Berlin, 25 October 2026: 02:30 comes twice; ten-minute rows through it are ten minutes apart in UTC."""
    local = ["01:50", "02:00", "02:10", "02:20", "02:30", "02:40", "02:50", "02:00", "02:10", "02:20", "02:30", "02:40",
             "02:50", "03:00"]  # fmt: skip
    log = log_of("".join(f"25.10.2026;{t}:00;2,4;1,6;2,85\n" for t in local))
    assert set(log.times[1:] - log.times[:-1]) == {600.0}
    assert (log.report.unordered, log.report.repeated, log.report.repeated_hour) == (0, 0, 12)


def test_the_hour_that_is_left_out_has_no_rows(log_of: LogOf) -> None:
    """Berlin, 29 March 2026: there is no 02:30, so a row of that time is a bad one."""
    log = log_of(
        "29.03.2026;01:59:50;2,4;1,6;2,85\n29.03.2026;02:30:00;2,4;1,6;2,85\n29.03.2026;03:00:00;2,4;1,6;2,85\n"
    )
    assert log.times[1] - log.times[0] == 10.0
    assert log.report.bad_times == 1


@pytest.mark.parametrize("zone", ["Europe/Berlin", "America/New_York", "Australia/Lord_Howe", "UTC", "+05:30"])
def test_the_clock_agrees_with_the_standard_library(zone: str) -> None:
    """Ten thousand moments round the year: written in local time and read back, but for the hour that comes twice."""
    clock = compile_form("YYYY-MM-DDThh:mm:ss", zone)
    there = dt.timezone(dt.timedelta(hours=5, minutes=30)) if zone == "+05:30" else ZoneInfo(zone)
    chance = random.Random(5)
    for _ in range(10_000):
        moment = dt.datetime(2026, 1, 1, tzinfo=dt.UTC) + dt.timedelta(seconds=chance.randrange(365 * 86400))
        local = moment.astimezone(there)
        if local.replace(fold=0).timestamp() == local.replace(fold=1).timestamp():
            assert clock.read(f"{local:%Y-%m-%dT%H:%M:%S}") == moment.timestamp()


def test_an_offset_in_the_time_needs_no_zone() -> None:
    """`zz` reads Z and offsets with and without colon."""
    clock = compile_form("YYYY-MM-DD hh:mm:sszz", None)
    texts = ("2026-05-14 12:20:00+02:00", "2026-05-14 10:20:00Z", "2026-05-14 05:20:00-0500")
    assert {clock.read(t) for t in texts} == {dt.datetime(2026, 5, 14, 10, 20, tzinfo=dt.UTC).timestamp()}


@pytest.mark.parametrize(
    ("form", "zone", "path"),
    [("DD.MM. hh:mm", "UTC", "form"), ("YYYY-MM-DD hh:mm:ss", None, "zone"), ("YYYY-MM-DD hh:mm:sszz", "UTC", "zone"),
     ("YYYY-MM-DD hh:mm", "Middle/Earth", "zone"), ("YYYY-MM-DD hh:mm mm", "UTC", "form")],
)  # fmt: skip
def test_a_form_that_leaves_something_open_is_refused(form: str, zone: str | None, path: str) -> None:
    """No year, no zone, two zones, an unknown zone, a part twice: each is refused before a row is read."""
    with pytest.raises(FormError) as caught:
        compile_form(form, zone)
    assert caught.value.problems[0].path == path


@pytest.mark.parametrize(
    ("old", "new", "words", "near"),
    [
        ("quantity: suction_pressure", "quantity: suction_presure", "nomenclature", "suction_pressure"),
        ("unit: bar g", "unit: bar", "pressure difference", None),
        ("delimiter: semicolon", "delimiter: comma", "cannot be decimal mark", None),
        ("quantity: power_input", "quantity: suction_pressure", "already", None),
        ("zone: Europe/Berlin", "zone: Europe/Berlim", "no zone", None),
        ("instrument: low gauge", "instrument: low gage", "no instrument", "low gauge"),
        ("date_column: Datum", "column: Datum", "either", None),
    ],
)
def test_slips_of_a_mapping_have_their_place(
    tmp_path: Path, loaded: LoadedPlant, old: str, new: str, words: str, near: str | None
) -> None:
    """Each slip in a mapping is named with its line, and with the nearest word where there is one."""
    path = tmp_path / "mapping.yaml"
    path.write_text(MAPPING.replace(old, new), encoding="utf-8")
    with pytest.raises(MappingError) as caught:
        read_mapping(path, loaded)
    found = [p for p in caught.value.problems if words in p.message]
    assert found
    assert found[0].line is not None
    assert near is None or found[0].nearest == near


def test_a_column_that_is_not_there_names_the_nearest(log_of: LogOf) -> None:
    """A renamed column stops the reading, with the name that is in the file."""
    with pytest.raises(LogError) as caught:
        log_of("14.05.2026;12:20:00;2,4;1,6;2,85\n", header=HEADER.replace("Saugdruck", "Saugdruk"))
    assert (caught.value.problems[0].value, caught.value.problems[0].nearest) == ("Saugdruck", "Saugdruk")


def test_steady_windows_by_the_chosen_limits(log_of: LogOf) -> None:
    """Site limits allow 1 K in the room: a jump of 3 K spoils every window that holds it, and the others stay."""
    start = dt.datetime(2026, 5, 14, 12, 0)
    log = log_of(rows(start, 180) + rows(start + dt.timedelta(seconds=1800), 180, off=3.0))
    found = [(w.start - log.times[0], w.score) for w in steady_windows(log)]
    assert [s for s, _ in found] == [0.0, 300.0, 600.0, 1800.0, 2100.0]
    best = quietest(log)
    assert best is not None
    assert best.score == min(score for _, score in found if score is not None)


def test_a_window_with_a_hole_is_none(log_of: LogOf) -> None:
    """Ten minutes without rows in the middle of forty: nothing is steady for twenty minutes."""
    start = dt.datetime(2026, 5, 14, 12, 0)
    log = log_of(rows(start, 91) + rows(start + dt.timedelta(seconds=1500), 91))
    assert steady_windows(log) == ()


def test_a_draft_from_a_window_is_a_record(log_of: LogOf, loaded: LoadedPlant, tmp_path: Path) -> None:
    """The draft is read like any record: five samples for each quantity, whose mean is that of the window."""
    log = log_of(rows(dt.datetime(2026, 5, 14, 12, 0), 200))
    window = quietest(log)
    assert window is not None
    text = draft_of(
        log, window, system="store", stage="visit", mode="trim", people={"operator": {"name": "A fitter"}},
        zone=ZoneInfo("Europe/Berlin"), more={"since_start": "40 min"},
    )  # fmt: skip
    path = tmp_path / "draft.yaml"
    path.write_text(text, encoding="utf-8")
    record = read_record(path, loaded)
    assert record.started == log.moment(window.start)
    assert len(record.readings["suction_pressure"].samples) == 5
    gauge = record.readings["suction_pressure"].value - loaded.barometric_pressure
    assert gauge == pytest.approx(window.means["suction_pressure"] - AIR, rel=1e-4)
    assert record.conditions["heat_source_inlet_temperature"].instrument == "air probe"


@pytest.mark.long
@pytest.mark.skipif(sys.platform == "win32", reason="counts memory as Unix does")
def test_a_million_rows_in_ten_seconds_and_half_a_gigabyte(log_of: LogOf) -> None:
    """Eleven and a half days at one row a second, read and searched, within the promised time and memory."""
    body = rows(dt.datetime(2026, 5, 1), 1_000_000, step=1)
    before = time.process_time()
    log = log_of(body)
    assert len(log.times) == 1_000_000
    assert len(steady_windows(log)) > 3000
    assert time.process_time() - before < 10.0
    assert resource.getrusage(resource.RUSAGE_SELF).ru_maxrss < 500 * 1024 + len(body) // 1024
