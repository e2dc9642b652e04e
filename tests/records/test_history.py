"""Visits compared: change of a deviation, its uncertainty, drift, and what it looks like."""

from __future__ import annotations

import re

import pytest

from commission.description import LoadedPlant
from commission.prediction import SystemModel
from commission.records import (
    drifts,
    families,
    file_record,
    find_drifts,
    history,
    open_items,
    recomputed_series,
    series,
)
from commission.records.history import change, coverage

from .conftest import Write, as_expected
from .making import METRIC, frozen, one_series


def test_what_both_visits_share_falls_out_of_a_change() -> None:
    """At the same condition the model's shares are the same: only what is of each visit alone is left."""
    moved, standard = change(frozen(0.2, 0.3, valve=1.5, rating=-0.8), frozen(1.0, 0.4, valve=1.5, rating=-0.8))
    assert (moved, standard) == (pytest.approx(0.8), pytest.approx(0.5))


def test_few_samples_in_either_visit_widen_the_change() -> None:
    """The larger coverage factor of the two visits counts; 1.96 where neither has an uncertainty."""
    few = frozen(0.0, 0.5).model_copy(update={"expanded": 0.5 * 2.78})
    assert coverage(frozen(0.0, 0.5), few) == pytest.approx(2.78)
    assert coverage(frozen(0.0, 0.0), frozen(0.0, 0.0)) == 1.96


def test_a_change_that_comes_again_is_a_finding() -> None:
    """Two visits in a row, significant the same way, are a drift; once back, or the other way, is none."""

    def found(*changes: tuple[float, float]) -> list[bool]:
        other = one_series("suction_temperature", *((0.0, 1.0) for _ in changes))
        return [d.repeated for d in find_drifts([one_series("liquid_temperature", *changes), other], METRIC)]

    assert found((1.05, 1.0)) == []
    assert found((1.05, 1.0), (1.05, 1.0)) == [True]
    assert found((1.05, 1.0), (-1.05, 1.0)) == []
    assert found((1.05, 1.0), (0.5, 1.0)) == []


def test_nothing_moved_means_no_family() -> None:
    """Without significant changes no cause is named."""
    assert families([one_series("condensing_temperature", (0.2, 1.0))], valve=True, receiver=True) == ()


def test_a_winter_and_a_summer_visit_stand_on_one_chart(loaded: LoadedPlant, write: Write, model: SystemModel) -> None:
    """The same healthy plant at 12 and 30 °C outdoors: readings far apart, deviations the same, no drift."""
    for started, sink in (("2026-05-14T10:20:00+01:00", 30.0), ("2026-11-20T10:20:00+00:00", 14.0)):
        file_record(loaded, write(text=as_expected(model, "test", started, 2.4, sink)), model=model)
    rows = {s.quantity: s for s in series(history(loaded), "store")}
    base, later = rows["discharge_pressure"].points
    assert (rows["discharge_pressure"].baseline_is, base.change) == ("first accepted test", None)
    first, second = (r.filed.readings["discharge_pressure"].value for r in history(loaded))
    assert first - second > 3e5
    assert later.change == pytest.approx(0.0, abs=5000.0)  # resolution of the gauge, 0.01 bar as written
    assert not later.change_significant
    assert drifts(loaded) == ()


def test_a_slow_change_is_found_and_recomputed_alike(loaded: LoadedPlant, write: Write, model: SystemModel) -> None:
    """Discharge pressure 1.5 bar above what is expected half a year later: a drift with its size and record."""
    accepted = as_expected(model, "test", "2026-05-14T10:20:00+01:00", 2.4, 24.0)
    later = as_expected(
        model, "trim", "2026-11-10T10:20:00+00:00", 2.4, 20.0, discharge_pressure=1.5e5, discharge_temperature=6.0
    )
    for text in (accepted, later):
        file_record(loaded, write(text=text), model=model)
    found = {d.quantity: d for d in drifts(loaded)}
    pressure = found["discharge_pressure"]
    assert pressure.change == pytest.approx(1.5e5, abs=5000.0)
    assert (pressure.baseline, pressure.latest) == ("2026-05-14-1020-store-visit", "2026-11-10-1020-store-visit")
    assert pressure.days == 180
    assert pressure.per_year == pytest.approx(1.5e5 * 365.25 / 180, rel=0.05)
    assert re.search(r"has risen by 1\.(49|50|51) ± ", pressure.sentence)  # gauges are written to 0.01 bar
    again = {s.quantity: s for s in recomputed_series(loaded, history(loaded), "store", model)}
    frozen_rows = {s.quantity: s for s in series(history(loaded), "store")}
    for quantity, row in frozen_rows.items():
        for then, now in zip(row.points, again[quantity].points, strict=True):
            assert now.deviation == pytest.approx(then.deviation, rel=1e-5, abs=1e-5)
    assert open_items(loaded) == ()
