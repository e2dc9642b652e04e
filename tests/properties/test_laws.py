"""The laws of thermodynamics on every state: random plausible cycles, and identities that need no reference."""

from __future__ import annotations

import math
from itertools import pairwise

import numpy as np
import pytest

from commission.properties import PropertyRangeError, refrigerant
from commission.properties.models import blends, modelled
from tests.properties.plausible import check_cycle, cycles

TRANSCRITICAL = "R-744"


@pytest.mark.parametrize("name", modelled())
def test_fifty_random_cycles_keep_the_laws(name: str) -> None:
    """Every state of 50 seeded plausible cycles exists and keeps the laws."""
    r = refrigerant(name)
    for point in cycles(r, 50, seed=4):
        check_cycle(r, point)


@pytest.mark.long
@pytest.mark.parametrize("name", modelled())
def test_two_thousand_random_cycles_keep_the_laws(name: str) -> None:
    """Every state of 2,000 seeded plausible cycles exists and keeps the laws."""
    r = refrigerant(name)
    for point in cycles(r, 2000, seed=7):
        check_cycle(r, point)


@pytest.mark.parametrize("name", [n for n in modelled() if n not in blends()])
def test_clausius_and_clapeyron_hold_on_the_line_of_a_pure_fluid(name: str) -> None:
    """dp/dT = latent heat / (T dv), and latent heat = T ds, from the series alone."""
    r = refrigerant(name)
    for T in np.linspace(r.T_low + 2, 0.99 * r.T_critical, 12):
        dew, bubble = r.dew(float(T)), r.bubble(float(T))
        slope = dew.p * r.dew_slopes(float(T)).ln_p
        assert slope == pytest.approx((dew.h - bubble.h) / (T * (1 / dew.rho - 1 / bubble.rho)), rel=2e-6)
        assert dew.h - bubble.h == pytest.approx(T * (dew.s - bubble.s), rel=1e-7)


@pytest.mark.parametrize("name", ["R-454B", "R-455A", "R-448A", "R-410A", "R-471A"])
def test_a_wet_isobar_obeys_heat_is_temperature_times_entropy(name: str) -> None:
    """dh = T ds along an isobar of a blend through the wet region, and temperature rises towards the dew point."""
    r = refrigerant(name)
    p = r.dew(265.0).p
    bubble, dew = r.bubble(r.bubble_temperature(p)), r.dew(r.dew_temperature(p))
    heats = np.linspace(bubble.h, dew.h, 41)
    states = [r.throttled(p, float(h)) for h in heats]
    for a, b in pairwise(states):
        assert b.h - a.h == pytest.approx((b.s - a.s) * (a.T + b.T) / 2, rel=3e-4)
        assert b.T > a.T - 1e-6
        assert b.rho < a.rho
        assert b.quality is not None
        assert a.quality is not None
        assert b.quality > a.quality


@pytest.mark.parametrize("name", ["R-290", "R-717", "R-454B", "R-407C"])
def test_slopes_are_those_of_the_states(name: str) -> None:
    """Analytic derivatives against differences of neighbouring states, vapour and liquid, and along both lines."""
    r = refrigerant(name)
    low, high = r.dew(270.0), r.dew(310.0)
    for make, T, p in ((r.vapour, 285.0, low.p), (r.vapour, 330.0, high.p), (r.liquid, 290.0, 1.2 * high.p)):
        s = r.slopes(make(T, p))
        hot, cold = make(T + 0.05, p), make(T - 0.05, p)
        dense, thin = make(T, p * 1.001), make(T, p * 0.999)
        assert s.cp == pytest.approx((hot.h - cold.h) / 0.1, rel=1e-5)
        assert s.ds_dt == pytest.approx((hot.s - cold.s) / 0.1, rel=1e-5)
        assert s.drho_dt == pytest.approx((hot.rho - cold.rho) / 0.1, rel=1e-5)
        assert s.dh_dp == pytest.approx((dense.h - thin.h) / (0.002 * p), rel=1e-4, abs=1e-9)
        assert s.ds_dp == pytest.approx((dense.s - thin.s) / (0.002 * p), rel=1e-4)
        assert s.drho_dp == pytest.approx((dense.rho - thin.rho) / (0.002 * p), rel=1e-4)
    for line, slopes in ((r.dew, r.dew_slopes), (r.bubble, r.bubble_slopes)):
        a, b, s2 = line(299.95), line(300.05), slopes(300.0)
        assert s2.ln_p == pytest.approx(math.log(b.p / a.p) / 0.1, rel=1e-5)
        assert s2.h == pytest.approx((b.h - a.h) / 0.1, rel=1e-4)
        assert s2.s == pytest.approx((b.s - a.s) / 0.1, rel=1e-4)
        assert s2.ln_rho == pytest.approx(math.log(b.rho / a.rho) / 0.1, rel=1e-4)


@pytest.mark.parametrize("name", ["R-600a", "R-1234yf", "R-1234ze(E)", "R-1233zd(E)", "R-515B", "R-471A"])
def test_compression_into_the_wet_region_is_told(name: str) -> None:
    """Saturated suction of a fluid with an overhanging dew line ends wet: a warning, and the same entropy."""
    r = refrigerant(name)
    suction = r.dew(273.15 if name != "R-1233zd(E)" else 300.0)
    end = r.isentropic_end(suction, r.dew(suction.T + 50).p)
    assert end.quality is not None
    assert 0.9 < end.quality < 1
    assert end.s == pytest.approx(suction.s, abs=1e-6)
    assert f"{100 * (1 - end.quality):.1f} % liquid by mass" in end.warnings[0]
    # the work is continuous across the dew line: a little superheat ends dry
    dry = r.isentropic_end(r.vapour(suction.T + 25, suction.p), end.p)
    assert dry.quality is None
    assert not dry.warnings


def test_work_is_continuous_where_compression_turns_wet() -> None:
    """Entropy just below and just above that of the dew point at discharge pressure: no jump in enthalpy."""
    r = refrigerant("R-471A")
    p = r.dew(320.0).p
    at_dew = r.dew(320.0)
    suction = r.dew(275.0)
    near = [r.vapour_from_enthalpy(suction.p, suction.h + d) for d in np.linspace(0, 30e3, 121)]
    ends = [r.isentropic_end(s, p) for s in near]
    assert any(e.quality is not None for e in ends)
    assert any(e.quality is None for e in ends)
    for a, b in pairwise(ends):
        assert b.h - a.h == pytest.approx((b.s - a.s) * (a.T + b.T) / 2, rel=2e-3)
    assert min(e.T for e in ends) > at_dew.T - 1


def test_mean_evaporating_temperature_lies_between_inlet_and_dew() -> None:
    """The facts of glide: with dew at -8 °C and quality near 0.3, R-455A enters near -16, R-454C -14, R-448A -13 °C."""
    for name, inlet in (("R-455A", -16), ("R-454C", -14), ("R-448A", -13)):
        r = refrigerant(name)
        dew = r.dew(265.15)
        bubble = r.bubble(r.bubble_temperature(dew.p))
        state = r.throttled(dew.p, bubble.h + 0.3 * (dew.h - bubble.h))
        assert pytest.approx(inlet, abs=0.8) == state.T - 273.15
        mean = r.mean_evaporating_temperature(dew.p, state.h)
        assert state.T < mean < dew.T
        assert mean == pytest.approx((state.T + dew.T) / 2, abs=1.0)


def test_gas_above_the_critical_pressure_keeps_the_laws() -> None:
    """Carbon dioxide through its critical region: isentropes, enthalpies and temperatures lead back to each other."""
    r = refrigerant(TRANSCRITICAL)
    rng = np.random.default_rng(11)
    for _ in range(200):
        suction = r.vapour(float(rng.uniform(245, 290)) + 12, r.dew(float(rng.uniform(233, 240))).p)
        end = r.isentropic_end(suction, float(rng.uniform(74e5, 140e5)))
        assert end.s == pytest.approx(suction.s, abs=1e-6)
        assert (end.p - suction.p) / end.rho < end.h - suction.h < (end.p - suction.p) / suction.rho
        cooled = r.supercritical(float(rng.uniform(285, 330)), end.p)
        assert pytest.approx(cooled.T, abs=1e-6) == r.vapour_from_enthalpy(end.p, cooled.h).T
        assert cooled.h < end.h


def test_the_line_is_continued_smoothly_past_the_critical_point() -> None:
    """The bridge for solvers meets the line in value and slope, and rises."""
    r = refrigerant(TRANSCRITICAL)
    below, above = (r.continued_bubble_pressure(r.T_high + d) for d in (-1e-3, 1e-3))
    assert above > below
    assert (above - below) / 2e-3 == pytest.approx(r.bubble(r.T_high).p * r.bubble_slopes(r.T_high).ln_p, rel=1e-3)
    assert r.continued_bubble_pressure(313.15) > r.p_critical


@pytest.mark.parametrize("name", ["R-744", "R-23", "R-32"])
def test_nothing_jumps_between_the_end_of_the_line_and_the_critical_pressure(name: str) -> None:
    """Pressure swept from wet states through the critical point at constant enthalpy: temperature moves under 20 mK."""
    r = refrigerant(name)
    dew, bubble = r.dew(r.T_high), r.bubble(r.T_high)
    pressures = np.linspace(0.98 * r.p_dew_high, 1.02 * r.p_critical, 801)
    warned = 0
    for h in np.linspace(bubble.h - 30e3, dew.h + 60e3, 10):
        states = [r.throttled(float(p), float(h)) for p in pressures]
        assert max(abs(b.T - a.T) for a, b in pairwise(states)) < 0.02
        assert all(a.p == pytest.approx(p, rel=1e-9) for a, p in zip(states, pressures, strict=True))
        warned += sum("two alike phases" in w for s in states for w in s.warnings)
    assert warned > 0


@pytest.mark.parametrize("name", ["R-744", "R-1234yf"])
def test_next_to_the_critical_point_a_state_is_vapour_or_liquid_not_both(name: str) -> None:
    """Between the end of the lines and the critical pressure exactly one of the two calls answers below Tc."""
    r = refrigerant(name)
    for p in np.linspace(r.p_dew_high * 1.0001, r.p_critical * 0.9999, 8):
        for T in np.linspace(r.T_high - 2, r.T_critical - 0.01, 20):
            is_vapour = p < r.continued_bubble_pressure(float(T))
            answers, refuses = (r.vapour, r.liquid) if is_vapour else (r.liquid, r.vapour)
            assert answers(float(T), float(p)).rho > 0
            with pytest.raises(PropertyRangeError, match=r"vapour forms|not vapour alone"):
                refuses(float(T), float(p))
