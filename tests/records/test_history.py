"""Visits compared: change of a deviation, its uncertainty, drift, and what it looks like."""

from __future__ import annotations

import datetime as dt
import math
import random

import pytest

from commission.description import LoadedPlant
from commission.prediction import SystemModel
from commission.quantities import Display
from commission.records import (
    Point,
    Series,
    drifts,
    families,
    file_record,
    find_drifts,
    history,
    open_items,
    recomputed_series,
    series,
)
from commission.records.filed import FrozenDeviation
from commission.records.history import change, coverage

from .conftest import Write, as_expected

METRIC = Display("metric", 97_700.0)
START = dt.datetime(2026, 5, 14, 10, 20, tzinfo=dt.UTC)


def frozen(deviation: float, other: float, **parts: float) -> FrozenDeviation:
    """A deviation with its shares, at the usual 95 % coverage."""
    standard = math.hypot(other, *parts.values())
    return FrozenDeviation.model_construct(
        reading=deviation, expected=0.0, deviation=deviation, unit="K", uncertainty=standard, expanded=1.96 * standard,
        significant=False, model_parts=parts, other_part=other,
    )  # fmt: skip


def one_series(quantity: str, *changes: tuple[float, float]) -> Series:
    """A baseline and later visits half a year apart, each with a change and its expanded uncertainty."""
    points = [Point("base", START, 0.0, 1.0, False)]
    for n, (size, expanded) in enumerate(changes, 1):
        when = START + dt.timedelta(days=180 * n)
        points.append(Point(f"visit-{n}", when, size, 1.0, False, size, expanded, abs(size) > expanded))
    return Series("store", quantity, "K", "base", "first accepted test", tuple(points))


def test_what_both_visits_share_falls_out_of_a_change() -> None:
    """At the same condition the model's shares are the same: only what is of each visit alone is left."""
    moved, standard = change(frozen(0.2, 0.3, valve=1.5, rating=-0.8), frozen(1.0, 0.4, valve=1.5, rating=-0.8))
    assert (moved, standard) == (pytest.approx(0.8), pytest.approx(0.5))


def test_change_agrees_with_an_independent_calculation() -> None:
    """Correlated shares by the uncertainties package (linear propagation with shared variables), to 1e-12."""
    from uncertainties import ufloat

    chance = random.Random(7)
    for _ in range(20):
        causes = {name: (chance.gauss(0, 1), chance.gauss(0, 1)) for name in ("a", "b", "c")}
        others = (abs(chance.gauss(0, 1)), abs(chance.gauss(0, 1)))
        shared = {name: ufloat(0.0, 1.0) for name in causes}
        first, later = (
            sum((shared[n] * pair[i] for n, pair in causes.items()), ufloat(0.0, others[i])) for i in (0, 1)
        )
        _, standard = change(
            frozen(0.0, others[0], **{n: p[0] for n, p in causes.items()}),
            frozen(0.0, others[1], **{n: p[1] for n, p in causes.items()}),
        )
        assert standard == pytest.approx((later - first).std_dev, rel=1e-12)


def test_few_samples_in_either_visit_widen_the_change() -> None:
    """The larger coverage factor of the two visits counts; 1.96 where neither has an uncertainty."""
    few = frozen(0.0, 0.5).model_copy(update={"expanded": 0.5 * 2.78})
    assert coverage(frozen(0.0, 0.5), few) == pytest.approx(2.78)
    assert coverage(frozen(0.0, 0.0), frozen(0.0, 0.0)) == 1.96


def test_one_change_among_many_must_be_larger_to_be_a_finding() -> None:
    """Ten quantities at one visit: 2.807 instead of 1.960 standard deviations (normal table, 1 - 0.05/20)."""
    names = (
        "evaporating_temperature", "condensing_temperature", "suction_temperature", "discharge_temperature",
        "liquid_temperature", "compressor_superheat", "subcooling", "suction_pressure", "discharge_pressure", "current",
    )  # fmt: skip
    wider = 2.807 / 1.960
    just_in = [one_series(n, (0.999 * wider if n == "current" else 0.0, 1.0)) for n in names]
    just_out = [one_series(n, (1.001 * wider if n == "current" else 0.0, 1.0)) for n in names]
    assert find_drifts(just_in, METRIC) == ()
    assert [d.quantity for d in find_drifts(just_out, METRIC)] == ["current"]


def test_a_change_that_comes_again_is_a_finding() -> None:
    """Two visits in a row, significant the same way, are a drift; once back, or the other way, is none."""

    def found(*changes: tuple[float, float]) -> list[bool]:
        other = one_series("suction_temperature", *((0.0, 1.0) for _ in changes))
        return [d.repeated for d in find_drifts([one_series("liquid_temperature", *changes), other], METRIC)]

    assert found((1.05, 1.0)) == []
    assert found((1.05, 1.0), (1.05, 1.0)) == [True]
    assert found((1.05, 1.0), (-1.05, 1.0)) == []
    assert found((1.05, 1.0), (0.5, 1.0)) == []


def test_healthy_plants_are_seldom_called_drifting() -> None:
    """Two thousand plants that did not change, eight independent quantities: at most 5 % get a finding, and some do."""
    chance = random.Random(11)
    names = ("evaporating_temperature", "condensing_temperature", "suction_temperature", "discharge_temperature",
             "liquid_temperature", "compressor_superheat", "subcooling", "current")  # fmt: skip
    alarms = sum(
        bool(find_drifts([one_series(n, (chance.gauss(0, 1), 1.96)) for n in names], METRIC)) for _ in range(2000)
    )
    assert 0.03 < alarms / 2000 < 0.062  # 5 % within two and a half standard deviations of the count


def test_the_pattern_of_a_dirty_condenser_is_named() -> None:
    """Condensing and discharge up, superheat still: published signs of a valve system (Chen and Braun 2001, memory)."""
    moved = [one_series("condensing_temperature", (4.0, 1.0)), one_series("discharge_temperature", (6.0, 2.0)),
             one_series("compressor_superheat", (0.1, 2.0)), one_series("subcooling", (-0.2, 1.5)),
             one_series("cooling_capacity", (-300.0, 250.0))]  # fmt: skip
    assert families(moved, valve=True, receiver=True)[0].name == "less flow or dirt at the heat sink"


def test_the_pattern_of_a_lost_charge_is_named_without_the_subcooling_of_a_receiver() -> None:
    """Rossi and Braun 1997, fixed orifice: all down but superheat and hot gas; a receiver takes subcooling out."""
    moved = [one_series("condensing_temperature", (-2.0, 1.0)), one_series("evaporating_temperature", (-3.0, 1.0)),
             one_series("compressor_superheat", (6.0, 2.0)), one_series("discharge_temperature", (5.0, 2.0)),
             one_series("subcooling", (-4.0, 1.0)), one_series("cooling_capacity", (-400.0, 250.0))]  # fmt: skip
    assert families(moved, valve=False, receiver=False)[0].name == "less refrigerant than designed"
    with_receiver = {f.name: f for f in families(moved, valve=True, receiver=True)}
    assert "subcooling" not in with_receiver["less refrigerant than designed"].agree


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
    assert "has risen by 1.50 ± " in pressure.sentence
    again = {s.quantity: s for s in recomputed_series(loaded, history(loaded), "store", model)}
    frozen_rows = {s.quantity: s for s in series(history(loaded), "store")}
    for quantity, row in frozen_rows.items():
        for then, now in zip(row.points, again[quantity].points, strict=True):
            assert now.deviation == pytest.approx(then.deviation, rel=1e-5, abs=1e-5)
    assert open_items(loaded) == ()
