"""One operating point: against `PropsSI` with `fsolve`, and against the bare calls that it makes."""

from __future__ import annotations

import time
from collections.abc import Callable

from commission.machine import OperatingPoint
from commission.properties import Refrigerant, refrigerant
from tests.benchmarks.machines import REFRIGERANTS, machine, media
from tests.benchmarks.plain import Answer, Plain, name_for
from tests.benchmarks.timing import Row, interleaved, spent

PURE, BLEND, BARE = 15.0, 3000.0, 2.5
SOURCE, SINK = 2.0, 28.0


Call = tuple[float, float, bool]
FEW, ALL = ("p", "slope"), ("p", "slope", "h", "s", "slope", "cv")


def calls_of(fluid: Refrigerant, work: Callable[[], object]) -> list[Call]:
    """Every call of the equation of state that `work` makes, in order: density, temperature, and whether all values
    were read there, or only the pressure and its slope as on the way to a density.

    Raises:
        AssertionError: something else was read, so that `bare` would not do the same.
    """
    tools, places, reads = fluid._equation._local.tools, list[tuple[float, float]](), list[list[str]]()
    own = {name: getattr(tools, name) for name in ("update", *ALL)}

    def update(inputs: int, rho: float, T: float) -> None:
        places.append((rho, T))
        reads.append([])
        own["update"](inputs, rho, T)

    def reader(name: str) -> Callable[..., float]:
        def read(*by: int) -> float:
            reads[-1].append(name)
            value: float = own[name](*by)
            return value

        return read

    try:
        for name in own:
            setattr(tools, name, update if name == "update" else reader(name))
        work()
    finally:
        for name, original in own.items():
            setattr(tools, name, original)
    assert all(tuple(r) in (FEW, ALL) for r in reads), f"other values are read: {reads}"
    return [(rho, T, tuple(r) == ALL) for (rho, T), r in zip(places, reads, strict=True)]


def bare(fluid: Refrigerant, calls: list[Call]) -> None:
    """The same updates with the same values read, p, h, s, cv and two derivatives at most, and nothing else."""
    tools = fluid._equation._local.tools
    update, inputs, by_rho, by_T = tools.update, tools.inputs, tools.by_rho, tools.by_T
    p, h, s, cv, slope = tools.p, tools.h, tools.s, tools.cv, tools.slope
    for rho, T, everything in calls:
        update(inputs, rho, T)
        p()
        slope(*by_rho)
        if everything:
            h()
            s()
            slope(*by_T)
            cv()


def agree(ours: OperatingPoint, other: Answer, name: str) -> None:
    """Raises AssertionError where the two answers differ by more than 0.05 K or 0.5 %."""
    balance = ours.balance
    for what, a, b, allowed in (
        ("temperature that drives the evaporator", balance.source_drive, other.source_drive, 0.05),
        ("temperature that drives the condenser", balance.sink_drive, other.sink_drive, 0.05),
        ("discharge temperature", ours.discharge_temperature, other.discharge_temperature, 0.25),
        ("heat", balance.heat_from_source, other.heat, 0.005 * other.heat),
        ("power", balance.compression.power, other.power, 0.005 * other.power),
    ):
        assert abs(a - b) <= allowed, f"{name}: {what} {a} here, {b} by PropsSI"


def against_plain(name: str, repetitions: int) -> Row:
    """Our operating point from a cold start against that of PropsSI and fsolve, whose answers must agree."""
    fluid = refrigerant(name)
    ours, at = machine(fluid), media(SOURCE, SINK)
    plain = Plain(ours, at, name_for(fluid))
    point = ours.operate(at)
    slow = plain.glides
    if slow:  # seconds for each point: once, with ours around it
        before = interleaved({"ours": (lambda: ours.operate(at), 20)}, max(1, repetitions // 2))["ours"]
        start = time.process_time()
        other = plain.answer()
        theirs = time.process_time() - start
        after = interleaved({"ours": (lambda: ours.operate(at), 20)}, max(1, repetitions // 2))["ours"]
        mine = 0.5 * (before + after)
    else:
        other = plain.answer()
        times = interleaved({"ours": (lambda: ours.operate(at), 10), "plain": (plain.answer, 1)}, repetitions)
        mine, theirs = times["ours"], times["plain"]
    agree(point, other, name)
    least = BLEND if slow else PURE
    ratio = theirs / mine
    how = "mixture" if slow else ("pseudo-pure" if "&" not in plain.name and fluid.is_blend else "pure")
    return Row(
        f"operating point of {name}, PropsSI ({how}) + fsolve over ours",
        f"{ratio:,.0f} ({spent(theirs)} : {spent(mine)})",
        f"at least {least:,.0f}",
        ratio >= least,
    )


def against_bare(name: str, repetitions: int) -> Row:
    """Our operating point against the bare calls of the equation of state that it makes."""
    fluid = refrigerant(name)
    ours, at = machine(fluid), media(SOURCE, SINK)
    ours.operate(at)
    before = fluid.calls
    calls = calls_of(fluid, lambda: ours.operate(at))
    assert len(calls) == fluid.calls - before
    times = interleaved({"ours": (lambda: ours.operate(at), 10), "bare": (lambda: bare(fluid, calls), 10)}, repetitions)
    ratio = times["ours"] / times["bare"]
    return Row(
        f"operating point of {name} over its {len(calls)} bare calls",
        f"{ratio:.1f} ({spent(times['ours'])} : {spent(times['bare'])})",
        f"at most {BARE}",
        ratio <= BARE,
    )


def run(repetitions: int = 15, names: tuple[str, ...] = REFRIGERANTS) -> list[Row]:
    """All rows about single points."""
    return [against_plain(n, repetitions) for n in names] + [against_bare(n, repetitions) for n in names]
