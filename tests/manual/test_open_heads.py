"""Open items are named so that a reader of the front page knows what is wrong."""

from __future__ import annotations

import datetime as dt
from types import SimpleNamespace
from typing import Literal

import pytest

from commission.manual.archive import Archive, open_lines
from commission.quantities import Display
from commission.records import OpenItem, RecordsFolder

LONG = "which goes on for so long that no line of a front page would hold all of its many words at once"


@pytest.mark.parametrize(
    ("raised_by", "what", "head"),
    [
        ("hand", "clear the leaves off the condenser", "clear the leaves off the condenser"),
        ("guarantee", f"Cooling capacity: undecided, 3.73 kW measured, {LONG}", "Cooling capacity: undecided"),
        ("guarantee", f"COP of heating: undecided; {LONG}", "COP of heating: undecided"),
        ("hand", f"clear the leaves, {LONG}", "Condensing temperature"),
    ],
)
def test_a_long_item_is_named_by_its_verdict_or_its_line(
    raised_by: Literal["hand", "guarantee", "answer"], what: str, head: str
) -> None:
    """A short text stands as it is; a long one gives way to its verdict, or to the reading that showed it."""
    item = OpenItem(
        1, "store", what, raised_by, "2026-05-14-store-visit", dt.date(2026, 5, 14), line="condensing_temperature"
    )
    archive = Archive(RecordsFolder((), (), ()), (item,), {}, {}, (), {})
    plant = SimpleNamespace(systems=(), display=Display("metric", 1e5))
    (line,) = open_lines(plant, archive)  # type: ignore[arg-type]  # only its systems and its display are asked
    assert line.what == head
