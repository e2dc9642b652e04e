"""The saturation table beside the gauges."""

from __future__ import annotations

import pytest

from commission.prediction import saturation_table
from commission.properties import refrigerant


def test_gauge_pressures_follow_the_barometer() -> None:
    """Propane at 0 °C has 474.46 kPa absolute (handbook value); gauge is that less the site's barometer."""
    (row,) = saturation_table(refrigerant("R-290"), 97650.0, [273.15])
    assert row.p_dew == pytest.approx(474_460, rel=1e-3)
    assert row.p_dew_gauge == pytest.approx(row.p_dew - 97650.0)
    assert row.p_bubble == pytest.approx(row.p_dew, rel=1e-6)


def test_rows_beyond_the_range_are_left_out() -> None:
    """A temperature above the critical point has no row."""
    rows = saturation_table(refrigerant("R-744"), 101325.0, [263.15, 320.0])
    assert [r.T for r in rows] == [263.15]
