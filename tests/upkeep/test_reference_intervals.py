"""Intervals against sources outside the project: the law's table, national rules, and another library's calendar."""

from __future__ import annotations

import datetime as dt
from collections.abc import Callable
from typing import TYPE_CHECKING, Literal

import pytest
from dateutil.relativedelta import relativedelta  # type: ignore[import-untyped]  # ships no types
from hypothesis import given
from hypothesis import strategies as st

from commission.safety import fact
from commission.upkeep import Interval, read_interval, shipped

if TYPE_CHECKING:
    from tests.upkeep.conftest import Site

Store = Callable[..., "Site"]
START = dt.date(2024, 2, 29)
"""A leap day, so that an interval counted in days where months are meant is seen."""

LAST_DAYS = {
    # Regulation (EU) 2024/573, article 5: "at least every 12 months"; law's rows are tested below
    "leaks": ("2025-02-28", "EN 378-4:2016 (yearly), from memory"),
    "casing-gas": ("2025-02-28", "common practice, no source"),
    "zone": ("2025-02-28", "common practice, no source"),
    "gas-vent": ("2025-02-28", "common practice, no source"),
    "detectors": ("2025-02-28", "Regulation (EU) 2024/573, article 6 (every 12 months), from memory"),
    "high-pressure": ("2025-02-28", "EN 378-4:2016 (yearly), from memory"),
    "low-pressure": ("2025-02-28", "EN 378-4:2016 (yearly), from memory"),
    "discharge-limit": ("2025-02-28", "EN 378-4:2016 (yearly), from memory"),
    "flow-switches": ("2025-02-28", "EN 378-4:2016 (yearly), from memory"),
    "interlock-sink": ("2025-02-28", "EN 378-4:2016 (yearly), from memory"),
    "frost-protection": ("2025-02-28", "EN 378-4:2016 (yearly), from memory"),
    "frost-outdoors": ("2025-02-28", "common practice, no source"),
    "element-cut-out": ("2025-02-28", "common practice, no source"),
    "defrost-cut-out": ("2025-02-28", "common practice, no source"),
    "floor-limit": ("2025-02-28", "common practice, no source"),
    "level": ("2025-02-28", "EN 378-4:2016 (yearly), from memory"),
    "oil-pressure": ("2025-02-28", "EN 378-4:2016 (yearly), from memory"),
    "stop-buttons": ("2025-02-28", "EN 378-4:2016 (yearly), from memory"),
    "horn": ("2025-02-28", "EN 378-4:2016 (yearly), from memory"),
    "leak-into-liquid": ("2025-02-28", "EN 378-4:2016 (yearly), from memory"),
    "back-up-power": ("2025-02-28", "EN 50172 (yearly), from memory"),
    "factory-devices": ("2025-02-28", "EN 378-4:2016 (yearly), from memory"),
    "relief-look": ("2025-02-28", "EN 378-4:2016 (yearly), from memory"),
    "relief-renewal": ("2029-02-28", "Real Decreto 552/2019, IF-08: 5 years, read"),
    "heating-relief": ("2025-02-28", "common practice, no source"),
    "building-inspection": ("2029-02-28", "Directive (EU) 2024/1275, article 23: 5 years, from memory"),
    "building-inspection-large": ("2027-02-28", "the same, above 290 kW: 3 years, from memory"),
    "pressure-inspection": (None, "national rules"),
    "air-filters": ("2024-05-29", "common practice, no source"),
    "cooler-coil": ("2025-02-28", "common practice, no source"),
    "condenser-coil": ("2024-08-29", "common practice, no source"),
    "drain": ("2024-08-29", "common practice, no source"),
    "strainers": ("2025-02-28", "common practice, no source"),
    "antifreeze": ("2025-02-28", "common practice, no source"),
    "circuit-water": ("2025-02-28", "VDI 2035 (yearly), from memory"),
    "tower-water": ("2024-03-07", "HSG274 part 1 (weekly), from memory"),
    "tower-legionella": ("2024-05-29", "HSG274 part 1 (quarterly), from memory"),
    "tower-cleaning": ("2024-08-29", "HSG274 part 1 (twice a year), from memory"),
    "hot-water": ("2024-03-29", "HSG274 part 2 (monthly), from memory"),
    "hygiene-heating": ("2024-03-29", "HSG274 part 2 (monthly), from memory"),
    "store-relief": ("2025-02-28", "common practice, no source"),
    "store-inside": ("2025-02-28", "HSG274 part 2 (yearly), from memory"),
    "mixing": ("2025-02-28", "HSG274 part 2 (yearly), from memory"),
    "legionella": ("2025-02-28", "DVGW W 551 (yearly), from memory and not sure"),
    "release": ("2024-03-29", "common practice, no source"),
    "freezer-frame": ("2024-05-29", "common practice, no source"),
    "alarm": ("2024-08-29", "common practice, no source"),
    "electrical": ("2025-02-28", "common practice, no source"),
    "ventilation": ("2024-05-29", "common practice, no source"),
    "shower": ("2024-03-07", "ANSI/ISEA Z358.1 (weekly), from memory"),
    "breathing": ("2024-03-29", "EN 529 (monthly), from memory"),
    "drill": ("2025-02-28", "common practice, no source"),
    "pipes": ("2025-02-28", "common practice, no source"),
    "oil": ("2025-02-28", "common practice, no source"),
    "vibration": ("2025-02-28", "common practice, no source"),
    "back-up": ("2025-02-28", "common practice, no source"),
    "readings": ("2024-08-29", "common practice, no source"),
    "card": ("2025-02-28", "common practice, no source"),
    "other-season": ("2024-08-29", "common practice, no source"),
    "ten-months": ("2024-12-29", "common practice, no source"),
    "calibration": ("2025-02-28", "common practice, no source"),
}
"""For each duty counted from 29 February 2024: the last day on which it is in time, worked out by hand, and why."""


def test_every_shipped_duty_stands_in_the_table() -> None:
    """An interval that nobody held to a source would pass unseen."""
    assert set(LAST_DAYS) == {entry.id for entry, _ in shipped()}


@pytest.mark.parametrize("identity", LAST_DAYS)
def test_the_last_day_of_every_interval(identity: str) -> None:
    """The interval of each duty as its source says it, to the day; the mark says where it is from memory only."""
    entry = next(e for e, _ in shipped() if e.id == identity)
    every = entry.otherwise.every if entry.otherwise else entry.every or entry.once
    day, source = LAST_DAYS[identity]
    if day is None:
        assert every is None
        assert entry.unknown
        return
    assert isinstance(every, Interval)
    assert every.after(START) == dt.date.fromisoformat(day)
    mark = entry.otherwise.mark if entry.otherwise else entry.mark
    if "not sure" in source:
        assert mark == "M-low"
    elif "from memory" in source:
        assert mark == "M"
    else:
        assert mark == ("V1" if "read" in source else "practice")


def test_relief_valves_agree_with_the_figure_of_the_safety_room() -> None:
    """RSIF IF-08 as the safety room holds it (1826 days) and five years by the calendar are the same."""
    days = (read_interval("5 years").after(dt.date(2026, 4, 1)) - dt.date(2026, 4, 1)).days
    assert days == fact("relief_renewal").value / 86400


# GWP of R-134a is 1430 in annex I of Regulation (EU) 2024/573: 5 t are 3.4965 kg, 50 t 34.965 kg, 500 t 349.65 kg.
# GWP of R-404A is 3921.6 by its composition: 5 t are 1.275 kg. Boundaries belong to the stricter row (article 5(6)).
EU_ROWS = [
    ("R-134a", "3.496 kg", False, None),
    ("R-134a", "3.497 kg", False, 12),
    ("R-134a", "34.96 kg", False, 12),
    ("R-134a", "34.97 kg", False, 6),
    ("R-134a", "349.6 kg", False, 6),
    ("R-134a", "349.7 kg", False, 3),
    ("R-134a", "6.99 kg", True, None),
    ("R-134a", "7 kg", True, 12),
    ("R-404A", "1.27 kg", False, None),
    ("R-404A", "1.28 kg", False, 12),
    ("R-1234ze(E)", "0.99 kg", False, None),
    ("R-1234ze(E)", "1 kg", False, 12),
    ("R-1234ze(E)", "9.99 kg", False, 12),
    ("R-1234ze(E)", "10 kg", False, 6),
    ("R-1234ze(E)", "99.9 kg", False, 6),
    ("R-1234ze(E)", "100 kg", False, 3),
    ("R-1234ze(E)", "1.99 kg", True, None),
    ("R-1234ze(E)", "2 kg", True, 12),
    ("R-290", "200 kg", False, None),
]


@pytest.mark.parametrize(("refrigerant", "charge", "sealed", "months"), EU_ROWS)
def test_leak_checks_by_the_european_table(
    store: Store, refrigerant: str, charge: str, sealed: bool, months: int | None
) -> None:
    """Regulation (EU) 2024/573, article 5(1) and 5(6), on both sides of each boundary, from the first start."""
    site = store(refrigerant, charge, sealed)
    site.file("2026-08-31", "first-start")
    duty = site.duties().get("store.leaks")
    if months is None and sealed:
        assert duty is None
        return
    assert duty is not None
    last = {3: dt.date(2026, 11, 30), 6: dt.date(2027, 2, 28), 12: dt.date(2027, 8, 31)}
    assert duty.next == last[months or 12]
    by_law = duty.source.startswith("Regulation (EU) 2024/573")
    assert by_law is (months is not None)
    assert duty.mark == ("V1" if by_law else "M")
    # article 6: from 500 t or 100 kg a leakage detection system is a duty (from memory)
    assert ("a leakage detection system is a duty" in (duty.note or "")) is (months == 3)


def test_a_found_leak_is_looked_at_again_within_a_month(store: Store) -> None:
    """Regulation (EU) 2024/573, article 4: within one month after the repair; the last of February after 31 January."""
    site = store("R-134a", "40 kg")
    site.file("2027-01-31", answers={"upkeep.leaks": {"answer": "no", "reason": "flare nut"}}, raised=("upkeep.leaks",))
    duty = site.duties()["store.leaks"]
    assert duty.next == dt.date(2027, 2, 28)
    assert "article 4" in duty.counted


@given(
    st.dates(dt.date(1900, 1, 1), dt.date(2200, 1, 1)),
    st.integers(1, 500),
    st.sampled_from(("day", "week", "month", "year")),
)
def test_intervals_agree_with_another_calendar(
    day: dt.date, count: int, unit: Literal["day", "week", "month", "year"]
) -> None:
    """Each interval ends on the day that python-dateutil's relativedelta gives."""
    assert Interval(count, unit).after(day) == day + relativedelta(**{f"{unit}s": count})
