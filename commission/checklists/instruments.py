"""Which instruments the work of a system needs: those described for it, by serial, and those that must be brought."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING

from commission.quantities import Kind, Reference

if TYPE_CHECKING:
    from commission.checklists.words import Facts
    from commission.description.model import Instrument

GAUGE_REACH = 1.25
"""A test gauge reads to at least this many times the test pressure (common practice, no source)."""
TEST_PRESSURES = {
    "strength_test_pressure": "for the strength test",
    "strength_test_pressure_high_side": "for the strength test of the high side",
}
"""Figures of the tests with nitrogen, and what each gauge is for."""
SITE_WORK = {"vacuum": "an electronic vacuum gauge", "mass": "a scale for the charge"}
"""What evacuating and charging on site is measured with, by what an instrument measures."""


def strength_gauge(figure: str) -> Callable[[Facts, str], str | None]:
    """Which gauge of the plant is good for a test pressure, in words; None where there is no such test."""

    def find(facts: Facts, _: str) -> str | None:
        needed = _reach(facts, figure)
        if needed is None:
            return None
        key = _gauge(facts, needed)
        if key is not None:
            return f"Of this plant's gauges take {_named(facts, key)}; shut off every one that ends lower."
        wanted = _shown(facts, needed)
        return (
            f"No gauge of this plant reaches far enough: bring one that reads to {wanted} or more, and shut off theirs."
        )

    return find


def described(facts: Facts) -> str:
    """The instruments that readings, pressure tests, vacuum and charge of the system are measured with."""
    listed = facts.loaded.plant.instruments
    named = set(facts.system.measured_with.values())
    wanted = {key for key in listed if key in named} or set(listed)
    wanted |= {key for key, item in listed.items() if _on_site(facts) and item.measures in SITE_WORK}
    wanted |= {key for figure in _tests(facts) if (key := _gauge(facts, _reach(facts, figure))) is not None}
    texts = [_with_calibration(key, item) for key, item in listed.items() if key in wanted]
    return "; ".join(texts) or "none; without serial and calibration a report is void"


def to_bring(facts: Facts) -> str | None:
    """What the plant does not describe and the work needs; None where nothing is missing."""
    listed = facts.loaded.plant.instruments
    missing = []
    for figure in _tests(facts):
        needed = _reach(facts, figure)
        if needed is not None and _gauge(facts, needed) is None:
            missing.append(f"a gauge that reads to {_shown(facts, needed)} or more, {TEST_PRESSURES[figure]}")
    if _on_site(facts):
        measured = {item.measures for item in listed.values()}
        missing += [words for measures, words in SITE_WORK.items() if measures not in measured]
    return "; ".join(missing) or None


def _on_site(facts: Facts) -> bool:
    return not facts.system.sealed


def _tests(facts: Facts) -> tuple[str, ...]:
    """The pressure tests of a circuit that is joined on site."""
    return tuple(TEST_PRESSURES) if _on_site(facts) else ()


def _reach(facts: Facts, figure: str) -> float | None:
    """Pa gauge that the scale must reach for a test pressure."""
    pressure = facts.figures.get(figure)
    return None if pressure is None else (pressure.value - facts.loaded.barometric_pressure) * GAUGE_REACH


def _gauge(facts: Facts, needed: float | None) -> str | None:
    """The gauge with the smallest scale that reaches far enough."""
    if needed is None:
        return None
    scales = []
    for key, instrument in facts.loaded.plant.instruments.items():
        scale = instrument.resolved
        if instrument.measures != "pressure" or scale.range_high is None:
            continue
        zero = 0.0 if scale.reference is Reference.GAUGE else facts.loaded.barometric_pressure
        if scale.range_high - zero >= needed:
            scales.append((scale.range_high - zero, key))
    return min(scales)[1] if scales else None


def _shown(facts: Facts, gauge: float) -> str:
    return facts.display.text(gauge + facts.loaded.barometric_pressure, Kind.PRESSURE, 0)


def _named(facts: Facts, key: str) -> str:
    return f"{key} ({facts.loaded.plant.instruments[key].serial or 'no serial stated'})"


def _with_calibration(key: str, item: Instrument) -> str:
    until = (
        f"calibrated until {item.calibrated_until.isoformat()}" if item.calibrated_until else "no calibration stated"
    )
    return f"{key} ({item.serial or 'no serial stated'}, {until})"
