"""Whole cycles of a log, and how a record that was read over them is judged."""

from __future__ import annotations

import datetime as dt
import itertools
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest

from commission.acceptance import Steadiness
from commission.acceptance.steadiness import CYCLES
from commission.description import LoadedPlant
from commission.errors import NotCalculatedError
from commission.prediction import SystemModel
from commission.records import RecordError, file_record, judge_record, read_filed, read_record
from commission.records.logger import Log, best_cycles, draft_of, read_log, read_mapping, whole_cycles
from commission.records.logger.cycles import SETTLE

from .conftest import Write, as_expected

MAPPING = """\
logger: plant room logger
delimiter: comma
decimal: point
time: {column: time, form: 'YYYY-MM-DD hh:mm:ss', zone: Europe/London}
columns:
  room: {quantity: heat_source_inlet_temperature, unit: °C, instrument: air probe}
  outdoors: {quantity: heat_sink_inlet_temperature, unit: °C, instrument: air probe}
  low: {quantity: suction_pressure, unit: bar g, instrument: low gauge}
  power: {quantity: power_input, unit: kW, instrument: power meter}
"""
AIR = 97_700.0
START = dt.datetime(2026, 5, 14, 12, 0)
Rows = Iterator[tuple[float, float, float, float, float]]
LogOf = Callable[..., Log]


@pytest.fixture
def log_of(tmp_path: Path) -> LogOf:
    """A log of rows (room, outdoors, low side, power, flag), one each ten seconds."""

    def make(rows: Rows, more: str = "", hole: tuple[int, int] = (0, 0)) -> Log:
        (tmp_path / "mapping.yaml").write_text(MAPPING + more, encoding="utf-8")
        lines = ["time,room,outdoors,low,power,flag"]
        for n, row in enumerate(rows):
            if not hole[0] <= n < hole[1]:
                lines.append(f"{START + dt.timedelta(seconds=10 * n)},{','.join(f'{x:.4f}' for x in row)}")
        (tmp_path / "log.csv").write_text("\n".join(lines), encoding="utf-8")
        return read_log(tmp_path / "log.csv", read_mapping(tmp_path / "mapping.yaml"), AIR)

    return make


def cycling(cycles: float, on: int = 1200, off: int = 600) -> Rows:
    """Standstill first, then runs of `on` s and standstills of `off` s; the low side settles within two minutes."""
    for n in range(int(cycles * (on + off) / 10) + 30):
        into = (10 * n - 300) % (on + off)
        runs = 10 * n >= 300 and into < on
        low = (2.90 + max(0.0, 1.0 - into / 120.0)) if runs else 5.0
        yield 2.4, 24.0, low, 1.5 if runs else 0.04, 0.0


def test_cycles_run_from_start_to_start(log_of: LogOf) -> None:
    """Twenty minutes on, ten off: each whole cycle is half an hour, with a running share of two thirds."""
    (found,) = whole_cycles(log_of(cycling(4.5)))
    assert (found.by, found.count) == ("start", 4)
    assert {b - a for a, b in itertools.pairwise(found.edges)} == {1800.0}
    assert found.share == pytest.approx(2 / 3, abs=1e-3)


def test_means_are_of_the_settled_running_time(log_of: LogOf) -> None:
    """Neither standstill nor the first minutes count: what is read is what the plant shows while it runs."""
    assert SETTLE > 120.0
    (found,) = whole_cycles(log_of(cycling(3.2)))
    assert found.means["power_input"] == pytest.approx((1500.0,) * 3)
    assert found.means["suction_pressure"] == pytest.approx((2.9e5 + AIR,) * 3)


def test_a_defrost_is_part_of_its_cycle(log_of: LogOf) -> None:
    """By a column that shows defrosts: powers and media with them, refrigerant without; the means by hand."""

    def defrosting() -> Rows:
        for n in range(1500):
            defrosts = n % 360 < 36  # six minutes in the hour, from 12:00 on
            yield 2.4, 24.0 + (3.0 if defrosts else 0.0), 6.0 if defrosts else 2.9, 0.8 if defrosts else 1.5, defrosts

    (found,) = whole_cycles(log_of(defrosting(), "cycle: {column: flag, level: 0.5, by: defrost}\n"))
    assert (found.by, found.count) == ("defrost", 3)
    assert found.share == pytest.approx(0.1, abs=1e-3)
    assert found.means["power_input"] == pytest.approx((0.9 * 1500 + 0.1 * 800,) * 3, rel=1e-6)
    assert found.means["heat_sink_inlet_temperature"] == pytest.approx((297.45,) * 3, abs=1e-6)
    assert found.means["suction_pressure"] == pytest.approx((2.9e5 + AIR,) * 3)


def test_less_than_one_cycle_is_refused(log_of: LogOf) -> None:
    """A start without the next, a plant that never stops, and a log without any sign of running give nothing."""
    with pytest.raises(NotCalculatedError, match="less than one whole cycle"):
        whole_cycles(log_of(cycling(0.9)))
    with pytest.raises(NotCalculatedError, match="does not cycle"):
        whole_cycles(log_of(iter([(2.4, 24.0, 2.9, 1.5, 0.0)] * 400)))
    with pytest.raises(NotCalculatedError, match="in which everything was read"):
        whole_cycles(log_of(cycling(2.2, on=150)))  # over before anything has settled


def test_a_hole_ends_a_stretch(log_of: LogOf) -> None:
    """The cycle with the hole is none, and those to both sides are not counted as neighbours."""
    found = whole_cycles(log_of(cycling(6.2), hole=(450, 480)))
    assert [s.count for s in found] == [2, 3]


def test_the_latest_enough_cycles_are_taken(log_of: LogOf) -> None:
    """Three cycles, or fewer that last three hours; where there are not enough all that there are."""
    log = log_of(cycling(6.2))
    best = best_cycles(log, 3, 10800.0)
    (whole,) = whole_cycles(log)
    assert (best.count, best.edges) == (3, whole.edges[-4:])
    assert best_cycles(log, 20, 5400.0).count == 3
    assert best_cycles(log, 20, 10800.0 * 9).count == 6


def draft(log: Log, tmp_path: Path, model: SystemModel, mode: str = "test") -> Path:
    """The draft of a log's best cycles as a person completes it, with the readings that the logger does not take."""
    read = best_cycles(log, 3, 10800.0)
    people = {"operator": {"name": "A fitter"}, "witness": {"name": "The owner"}}
    text = draft_of(log, read, system="store", stage="visit", mode=mode, people=people)
    whole = as_expected(model, mode, "2026-05-14T12:10+01:00", 2.4, 24.0)
    for key in ("discharge_pressure", "suction_temperature", "discharge_temperature", "liquid_temperature"):
        line = next(x for x in whole.splitlines() if x.startswith(f"  {key}:"))
        text = text.replace("readings:\n", f"readings:\n{line}\n")
    path = tmp_path / "draft.yaml"
    path.write_text(text, encoding="utf-8")
    return path


def _check(found: tuple[Steadiness, ...]) -> Steadiness:
    return next(s for s in found if s.key == CYCLES)


def test_a_draft_of_cycles_is_judged_over_them(
    log_of: LogOf, loaded: LoadedPlant, model: SystemModel, tmp_path: Path
) -> None:
    """One sample for each cycle, the share and the starts counted, no time since a start asked for, and said so."""
    record = read_record(draft(log_of(cycling(4.5)), tmp_path, model), loaded)
    assert record.file.cycles is not None
    assert record.file.started.utcoffset() == dt.timedelta(hours=1)
    assert len(record.readings["power_input"].samples) == 3
    assert record.readings["running_share"].value == pytest.approx(2 / 3, abs=1e-3)
    assert record.readings["starts_per_hour"].value == pytest.approx(2.0, abs=1e-6)
    judged = judge_record(loaded, record, model)
    assert {s.key for s in judged.steadiness} & {"since_start", "since_defrost"} == set()
    check = _check(judged.steadiness)
    assert check.steady is True
    assert "means over 3 whole cycles (90 min), from start to start, while it ran" in check.text
    assert all(g.withheld is None for g in judged.guarantees)
    power = next(d for d in judged.deviations if d.key == "power_input")
    assert power.reading.value == pytest.approx(1500.0)


def test_too_few_cycles_withhold_the_verdict(
    log_of: LogOf, loaded: LoadedPlant, model: SystemModel, tmp_path: Path
) -> None:
    """Two cycles of an hour together are no test: undecided, with the reason, and it is frozen so."""
    path = draft(log_of(cycling(2.5)), tmp_path, model)
    filed = read_filed(file_record(loaded, path, model=model))
    assert filed.verdict == "undecided"
    assert filed.filed.guarantees[0].withheld is not None
    assert "too short: as means over 2 whole cycles" in filed.filed.guarantees[0].withheld
    assert any("too short" in s.text and s.steady is False for s in filed.filed.steadiness)


def test_cycles_that_are_not_alike_withhold_the_verdict(
    log_of: LogOf, loaded: LoadedPlant, model: SystemModel, tmp_path: Path
) -> None:
    """Three cycles with the outdoor air warming by 2 K from each to the next did not stand still as a whole."""

    def warming() -> Rows:
        for n, row in enumerate(cycling(3.5)):
            yield row[0], row[1] + 2.0 * (n // 180), *row[2:]

    judged = judge_record(loaded, read_record(draft(log_of(warming()), tmp_path, model), loaded), model)
    moved = next(s for s in judged.steadiness if s.key == "heat_sink_inlet_temperature")
    assert moved.steady is False
    assert all(g.withheld is not None for g in judged.guarantees)


def test_defrosts_in_the_means_refuse_the_heat_balance(loaded: LoadedPlant, model: SystemModel, write: Write) -> None:
    """Means through defrosts are no states of one moment: the route is refused, and what is expected is more."""
    text = as_expected(model, "test", "2026-05-14T10:20:00+01:00", 2.4, 24.0)
    cycles = "ended: 2026-05-14T13:30:00+01:00\ncycles: {count: 3, by: defrost}\n"
    record = read_record(write(text=text.replace("people:", f"{cycles}people:")), loaded)
    judged = judge_record(loaded, record, model)
    refused = [r.reason for r in judged.refusals if r.route == "compressor heat balance"]
    assert refused
    assert all("means with defrosts in them" in r for r in refused)
    assert any("frost_included" in w for w in judged.warnings)
    assert all(g.outcome == "undecided" for g in judged.guarantees)


def test_cycles_say_when_they_ended(loaded: LoadedPlant, write: Write) -> None:
    """Without an end nobody knows how long the cycles lasted: refused at its place."""
    with pytest.raises(RecordError, match="say when the last of them ended") as caught:
        read_record(write(("people:", "cycles: {count: 3, by: start}\npeople:")), loaded)
    assert caught.value.problems[0].path == "cycles"


def test_a_short_run_hears_of_cycles(loaded: LoadedPlant, model: SystemModel, write: Write) -> None:
    """Read eight minutes after a start: too early, and what to do where it never runs longer."""
    record = read_record(write(("since_start: 40 min", "since_start: 8 min")), loaded)
    text = next(s.text for s in judge_record(loaded, record, model).steadiness if s.key == "since_start")
    assert "read too early: 8 min" in text
    assert "means over whole cycles" in text
