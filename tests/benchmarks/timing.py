"""Interleaved timing in process CPU time: medians, and the ratio of medians."""

from __future__ import annotations

import statistics
import time
from collections.abc import Callable, Mapping
from dataclasses import dataclass


@dataclass(frozen=True)
class Row:
    """One line of the table: what, the figure measured, the figure wanted, and whether it is met."""

    what: str
    measured: str
    wanted: str
    met: bool

    def __str__(self) -> str:
        return f"| {self.what} | {self.measured} | {self.wanted} | {'yes' if self.met else 'NO'} |"


HEAD = "| what | measured | wanted | met |\n| --- | --- | --- | --- |"


def interleaved(pieces: Mapping[str, tuple[Callable[[], object], int]], repetitions: int) -> dict[str, float]:
    """Median CPU seconds of one call of each piece; the pieces take turns, so that a busy machine slows all alike.

    Each piece comes with how often it is called in one turn.
    """
    turns: dict[str, list[float]] = {name: [] for name in pieces}
    for _ in range(repetitions):
        for name, (piece, calls) in pieces.items():
            start = time.process_time()
            for _ in range(calls):
                piece()
            turns[name].append((time.process_time() - start) / calls)
    return {name: statistics.median(seconds) for name, seconds in turns.items()}


def spent(seconds: float) -> str:
    """A time as a person reads it."""
    if seconds < 1e-3:
        return f"{seconds * 1e6:.0f} µs"
    return f"{seconds * 1e3:.3g} ms" if seconds < 1.0 else f"{seconds:.2f} s"
