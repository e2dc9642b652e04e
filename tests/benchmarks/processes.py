"""What whole processes take: the command line's help, one prediction, and a logger's file of a million rows."""

from __future__ import annotations

import datetime as dt
import random
import statistics
import subprocess
import sys
import tempfile
from collections.abc import Sequence
from pathlib import Path

from tests.benchmarks.timing import Row

ROOT = Path(__file__).parents[2]
MEGABYTE = 1e6
TO_BYTES = 1 if sys.platform == "darwin" else 1024  # of ru_maxrss
HELP, PREDICT_SECONDS, PREDICT_MEMORY, ROWS_SECONDS, ROWS_MEMORY = 4.0, 1.2, 150.0, 10.0, 500.0
MAPPING = """\
logger: plant room logger
delimiter: semicolon
decimal: comma
unit_rows: 1
time: {date_column: Date, time_column: Time, form: DD.MM.YYYY hh:mm:ss, zone: Europe/Berlin}
columns:
  Suction: {quantity: suction_pressure, unit: bar g}
  Room: {quantity: heat_source_inlet_temperature, unit: °C}
  Power: {quantity: power_input, unit: kW}
"""
MEASURE = """\
import os, subprocess, sys
process = subprocess.Popen(sys.argv[1:], stdout=subprocess.DEVNULL)
_, status, used = os.wait4(process.pid, 0)
process.returncode = os.waitstatus_to_exitcode(status)
print(used.ru_utime + used.ru_stime, used.ru_maxrss, process.returncode)
"""
READ = """\
import sys
from pathlib import Path
from commission.records.logger import read_log, read_mapping
log = read_log(Path(sys.argv[1]), read_mapping(Path(sys.argv[2])), 97700.0)
assert len(log.times) == int(sys.argv[3])
"""


def child(arguments: Sequence[str]) -> tuple[float, float]:
    """CPU seconds and greatest memory (MB) of a Python process, which must succeed.

    It is started by a small process: the system counts the memory of whoever starts a process as its own.
    """
    command = [sys.executable, "-c", MEASURE, sys.executable, *arguments]
    done = subprocess.run(command, cwd=ROOT, capture_output=True, encoding="utf-8", check=True)
    seconds, memory, code = done.stdout.split()
    assert code == "0", f"python {' '.join(arguments)} left with {code}: {done.stderr}"
    return float(seconds), int(memory) * TO_BYTES / MEGABYTE


def help_over_nothing(repetitions: int) -> Row:
    """`--help` over a Python that does nothing."""
    turns = [(child(["-m", "commission", "--help"])[0], child(["-c", "pass"])[0]) for _ in range(repetitions)]
    shown, bare = (statistics.median(column) for column in zip(*turns, strict=True))
    ratio = shown / bare
    measured = f"{ratio:.1f} ({shown * 1e3:.0f} ms : {bare * 1e3:.0f} ms)"
    return Row("`commission --help` over `python -c pass`", measured, f"under {HELP:.0f}", ratio < HELP)


def predict_one(repetitions: int) -> Row:
    """`predict` on one system of the example plant."""
    arguments = ["-m", "commission", "predict", "example_plant", "--system", "cold-room"]
    seconds, memory = (statistics.median(c) for c in zip(*(child(arguments) for _ in range(repetitions)), strict=True))
    return Row(
        "`commission predict` on one system",
        f"{seconds:.2f} s CPU, {memory:.0f} MB",
        f"under {PREDICT_SECONDS} s and {PREDICT_MEMORY:.0f} MB",
        seconds < PREDICT_SECONDS and memory < PREDICT_MEMORY,
    )


def logger_rows(count: int, repetitions: int) -> Row:
    """A logger's file of so many rows read in a process of its own."""
    with tempfile.TemporaryDirectory() as folder:
        log, mapping = Path(folder) / "log.csv", Path(folder) / "mapping.yaml"
        mapping.write_text(MAPPING, encoding="utf-8")
        _write(log, count)
        arguments = ["-c", READ, str(log), str(mapping), str(count)]
        used = [child(arguments) for _ in range(repetitions)]
    seconds, memory = (statistics.median(column) for column in zip(*used, strict=True))
    return Row(
        f"a logger's file of {count:,} rows",
        f"{seconds:.1f} s CPU, {memory:.0f} MB",
        f"under {ROWS_SECONDS:.0f} s and {ROWS_MEMORY:.0f} MB",
        seconds < ROWS_SECONDS and memory < ROWS_MEMORY,
    )


def _write(path: Path, count: int) -> None:
    chance, start = random.Random(7), dt.datetime(2026, 5, 1)
    with path.open("w", encoding="utf-8") as out:
        out.write("Date;Time;Suction;Room;Power\n;;bar;°C;kW\n")
        for n in range(count):
            figures = f"{2.85 + chance.uniform(-0.01, 0.01):.2f};{2.4 + chance.uniform(-0.1, 0.1):.2f};1.6"
            out.write(f"{start + dt.timedelta(seconds=n):%d.%m.%Y;%H:%M:%S};{figures.replace('.', ',')}\n")


def run(repetitions: int = 7, rows: int = 1_000_000) -> list[Row]:
    """All rows about processes."""
    return [help_over_nothing(repetitions), predict_one(min(repetitions, 5)), logger_rows(rows, min(repetitions, 2))]
