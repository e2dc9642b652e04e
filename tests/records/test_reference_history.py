"""Changes and drift against outside sources: a package, a table, a count, published signs."""

from __future__ import annotations

import random

import pytest

from commission.records import families, find_drifts
from commission.records.history import change

from .making import METRIC, frozen, one_series


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
