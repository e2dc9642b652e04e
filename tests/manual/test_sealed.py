"""A factory-sealed unit on paper."""

from __future__ import annotations

from pathlib import Path
from types import SimpleNamespace
from typing import Any

from commission.acceptance.choosing import FROM_PRESSURES, PRESSURES
from commission.description import load_plant
from commission.manual.day_sheet import READ, WORKED_OUT, _readable


def test_the_day_sheet_of_a_sealed_unit_has_no_line_for_a_gauge(example_folder: Path) -> None:
    """Pressures and what is worked out from them stay off the sheet of a unit without ports, and only off that."""
    loaded = load_plant(example_folder)
    sealed: Any = SimpleNamespace(system=loaded.system("floor-heating"))
    assert not {*_readable(sealed, READ), *_readable(sealed, WORKED_OUT)} & {*PRESSURES, *FROM_PRESSURES}
    assert "discharge_temperature" in _readable(sealed, READ)
    ported: Any = SimpleNamespace(system=loaded.system("cold-room"))
    assert (_readable(ported, READ), _readable(ported, WORKED_OUT)) == (READ, WORKED_OUT)
