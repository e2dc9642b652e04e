"""Reading between grid points, the limits of steadiness, the library of tolerances."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from commission.acceptance import Reading, deciding_tolerance, grid_of, steadiness, tolerances
from commission.acceptance.grid import Axis, interpolate, middles, points
from commission.acceptance.steadiness import library
from commission.errors import InputError, NotCalculatedError

SINK, SOURCE = "heat_sink_inlet_temperature", "heat_source_inlet_temperature"
AXES = (Axis(SINK, (280.0, 285.0, 300.0)), Axis(SOURCE, (270.0, 272.0)))


@given(st.floats(280.0, 300.0), st.floats(270.0, 272.0), st.floats(-5, 5), st.floats(-5, 5), st.floats(-1, 1))
def test_bilinear_functions_are_exact(x: float, y: float, a: float, b: float, c: float) -> None:
    """What is linear along each axis is read exactly between the points, value and slopes."""

    def f(x: float, y: float) -> float:
        return 3.0 + a * (x - 290) + b * (y - 271) + c * (x - 290) * (y - 271)

    values = [f(p[SINK], p[SOURCE]) for p in points(AXES)]
    value, slopes = interpolate(AXES, values, {SINK: x, SOURCE: y})
    assert value == pytest.approx(f(x, y), abs=1e-9)
    assert slopes[SINK] == pytest.approx(a + c * (y - 271), abs=1e-9)
    assert slopes[SOURCE] == pytest.approx(b + c * (x - 290), abs=1e-9)


def test_outside_and_missing_are_refused() -> None:
    """A grid is never read outside its range, nor without one of its conditions."""
    values = [1.0] * 6
    with pytest.raises(NotCalculatedError, match="heat sink inlet temperature lies outside the range"):
        interpolate(AXES, values, {SINK: 301.0, SOURCE: 271.0})
    with pytest.raises(NotCalculatedError, match="needs a reading of heat source inlet temperature"):
        interpolate(AXES, values, {SINK: 290.0})


def test_single_value_axis_and_middles() -> None:
    """An axis of one value holds it; the middles are the middles of the cells."""
    assert interpolate((Axis(SINK, (280.0,)),), (4.0,), {SINK: 280.0}) == (4.0, {SINK: 0.0})
    assert [p[SINK] for p in middles(AXES)] == [282.5, 292.5]
    assert grid_of(278.15, 308.15, 5.0) == pytest.approx((278.15, 283.15, 288.15, 293.15, 298.15, 303.15, 308.15))
    assert grid_of(0.0, 1.0, 0.4) == pytest.approx((0.0, 1 / 3, 2 / 3, 1.0))


def reading(key: str, *samples: float) -> Reading:
    """A reading with samples."""
    return Reading(key, sum(samples) / len(samples), None, "", samples)


def test_steady_and_unsteady() -> None:
    """A sample further from the mean than the limit makes the reading unsteady; fewer than three show nothing."""
    found = {
        s.key: s.steady
        for s in steadiness(
            [
                reading(SOURCE, 275.0, 275.9, 275.1),
                reading(SINK, 300.0, 303.0, 300.0),
                reading("suction_pressure", 4.0e5, 4.05e5, 4.0e5),
                reading("power_input", 1500.0, 1500.0),
            ],
            1800.0,
            None,
        )
    }
    assert found == {
        "since_start": True, SOURCE: True, SINK: False, "suction_pressure": True, "power_input": None,
    }  # fmt: skip


def test_time_since_start_and_defrost() -> None:
    """Too early after start or defrost is not steady; unknown is neither; a plant without defrost is not asked."""
    early = {s.key: s.steady for s in steadiness([], 600.0, 300.0, defrosts=True)}
    assert early == {"since_start": False, "since_defrost": False}
    unknown = {s.key: s.steady for s in steadiness([], None, None, defrosts=True)}
    assert unknown == {"since_start": None, "since_defrost": None}
    assert [s.key for s in steadiness([], 1200.0, None)] == ["since_start"]


def test_laboratory_limits_are_there_to_choose() -> None:
    """EN 14511-3 limits on liquids are tighter than the site limits, and only where the side is a liquid."""
    readings = [reading(SINK, 300.0, 300.7, 300.0, 299.3)]
    assert [s.steady for s in steadiness(readings, 7200.0, None)][1] is True
    lab = steadiness(readings, 7200.0, None, limits="EN 14511-3", liquid_sides=frozenset({"sink"}))
    assert [s.steady for s in lab][1] is False
    assert all(entry["source"] and entry["mark"] for entry in library().values())


def test_only_a_contract_default_can_decide() -> None:
    """Manufacturing tolerances, market surveillance and rules of thumb decide nothing, and say what they are."""
    assert deciding_tolerance("ahri-550-capacity").contains_test_uncertainty
    kinds = set()
    for key, entry in tolerances().items():
        kinds.add(entry.kind)
        if entry.kind != "contract default":
            with pytest.raises(NotCalculatedError, match=f"is a {entry.kind}: only a contract default can decide"):
                deciding_tolerance(key)
    assert kinds == {
        "contract default", "manufacturing", "market surveillance", "laboratory deviation", "rule of thumb",
    }  # fmt: skip
    with pytest.raises(InputError, match="no such tolerance") as caught:
        deciding_tolerance("en-328-capacitie")
    assert caught.value.problems[0].nearest == "en-328-capacity"


def test_tolerances_have_sources_and_marks() -> None:
    """Each entry has a number, a formula or a band, a source and one of the known marks."""
    marks = {"published", "standard", "common practice, no source", "from memory"}
    for key, entry in tolerances().items():
        assert entry.source, key
        assert entry.mark in marks, key
        assert entry.value is not None or entry.formula or entry.figures, key
