"""Outside its range a property is refused with the value and the limit, never extrapolated."""

from __future__ import annotations

import math

import pytest

from commission.errors import NotCalculatedError
from commission.properties import PropertyRangeError, Refrigerant, refrigerant


@pytest.fixture
def r290() -> Refrigerant:
    """A pure fluid."""
    return refrigerant("R-290")


@pytest.fixture
def r454b() -> Refrigerant:
    """A blend with glide."""
    return refrigerant("R-454B")


def test_saturation_is_refused_above_the_line(r290: Refrigerant) -> None:
    """The message names refrigerant, value, both limits and the critical temperature."""
    with pytest.raises(PropertyRangeError) as caught:
        r290.dew(373.15)
    assert caught.value.substance == "R-290"
    assert str(caught.value) == (
        "R-290: no saturation at 100.0 °C; it is known from -88.2 °C to 96.6 °C (critical temperature 96.7 °C)"
    )
    assert isinstance(caught.value, NotCalculatedError)


@pytest.mark.parametrize("T", [100.0, 400.0, math.nan, math.inf, -1.0])
def test_no_temperature_slips_through(r290: Refrigerant, T: float) -> None:
    """Too cold, too hot, not a number, infinite, below zero."""
    for ask in (r290.dew, r290.bubble, r290.dew_slopes, r290.bubble_slopes):
        with pytest.raises(PropertyRangeError):
            ask(T)
    with pytest.raises(PropertyRangeError):
        r290.liquid(T, 30e5)
    if T != 400.0:
        with pytest.raises(PropertyRangeError):
            r290.vapour(T, 1e5)


@pytest.mark.parametrize("p", [0.0, -1e5, math.nan, math.inf, 1e9, 1.0])
def test_no_pressure_slips_through(r454b: Refrigerant, p: float) -> None:
    """Zero, negative, not a number, infinite, far above critical, below the line."""
    suction = r454b.vapour(280.0, 5e5)
    for ask in (
        lambda: r454b.dew_temperature(p),
        lambda: r454b.bubble_temperature(p),
        lambda: r454b.throttled(p, 250e3),
        lambda: r454b.vapour_from_enthalpy(p, 450e3),
        lambda: r454b.isentropic_end(suction, p),
        lambda: r454b.mean_evaporating_temperature(p, 250e3),
    ):
        with pytest.raises(PropertyRangeError):
            ask()
    if p != 1.0:  # 1 Pa is a lawful, very thin vapour
        with pytest.raises(PropertyRangeError):
            r454b.vapour(280.0, p)


def test_carbon_dioxide_has_no_boiling_point_at_atmospheric_pressure() -> None:
    """Below the triple point (5.18 bar) there is no liquid: the answer -88 °C of a bare flash is refused."""
    r = refrigerant("R-744")
    with pytest.raises(PropertyRangeError, match=r"no saturation at 1\.01 bar absolute; it is known from 5\.18"):
        r.bubble_temperature(101325.0)
    with pytest.raises(PropertyRangeError, match=r"no saturation at -60\.0 °C"):
        r.dew(213.15)


def test_hotter_than_the_equation_holds_is_refused() -> None:
    """R-1234yf ends at 136.9 °C, R-32 at 161.9 °C, R-454B at 157.6 °C, R-1234ze(E) at 146.9 °C."""
    for name, limit in (("R-1234yf", 136.9), ("R-32", 161.9), ("R-454B", 157.6), ("R-1234ze(E)", 146.9)):
        r = refrigerant(name)
        assert r.T_max - 273.15 == pytest.approx(limit, abs=0.1)
        with pytest.raises(PropertyRangeError, match=f"to {limit} °C, where the equation of state holds"):
            r.vapour(r.T_max + 1, 5e5)
    r = refrigerant("R-32")
    with pytest.raises(PropertyRangeError, match="where the equation of state holds"):
        r.isentropic_end(r.vapour(290.0, r.dew(240.0).p), r.dew(335.0).p)


def test_wet_is_not_vapour_and_boiling_is_not_liquid(r454b: Refrigerant) -> None:
    """Below the dew line and above the bubble line the single-phase calls refuse."""
    p = r454b.dew(300.0).p
    with pytest.raises(PropertyRangeError, match=r"is below the dew point 26\.9 °C"):
        r454b.vapour(299.0, p)
    with pytest.raises(PropertyRangeError, match="vapour forms"):
        r454b.liquid(300.0, p)
    with pytest.raises(PropertyRangeError, match="is below the dew line"):
        r454b.vapour_from_enthalpy(p, r454b.dew(300.0).h - 1e3)
    with pytest.raises(PropertyRangeError, match="nothing evaporates"):
        r454b.mean_evaporating_temperature(p, r454b.dew(300.0).h + 1e3)
    with pytest.raises(PropertyRangeError, match="entropy below the bubble line"):
        r454b.isentropic_end(r454b.bubble(250.0), p)


def test_on_the_line_is_inside(r454b: Refrigerant) -> None:
    """A state on the dew or bubble line, as a solver makes it by rounding, is accepted on both sides."""
    for T in (235.0, 270.0, 320.0):
        dew, bubble = r454b.dew(T), r454b.bubble(T)
        assert r454b.vapour(r454b.dew_temperature(dew.p), dew.p).h == pytest.approx(dew.h, abs=0.05)
        assert r454b.liquid(r454b.bubble_temperature(bubble.p), bubble.p).h == pytest.approx(bubble.h, abs=0.05)


def test_a_blend_has_no_supercritical_states_here(r454b: Refrigerant) -> None:
    """Above the end of its dew line a blend is refused; a pure fluid is not, but below critical it is."""
    with pytest.raises(PropertyRangeError, match="where the known dew line ends"):
        r454b.vapour(400.0, 60e5)
    with pytest.raises(PropertyRangeError, match="where the known dew line ends"):
        r454b.supercritical(400.0, 60e5)
    with pytest.raises(PropertyRangeError, match="is not above the critical pressure"):
        refrigerant("R-744").supercritical(320.0, 70e5)
    assert refrigerant("R-744").supercritical(320.0, 90e5).rho > 100


def test_nearness_to_critical_is_a_warning() -> None:
    """Within 3 % of the critical temperature a saturation state carries a warning, below it none."""
    r = refrigerant("R-410A")
    assert r.dew(330.0).warnings == ()
    (warning,) = r.dew(337.0).warnings
    assert "R-410A at 63.9 °C is within 3 % of its critical temperature (71.3 °C)" in warning


@pytest.mark.parametrize("h", [math.nan, math.inf, -math.inf])
def test_an_enthalpy_that_is_no_number_is_refused(r454b: Refrigerant, h: float) -> None:
    """No state of not-a-number is handed on."""
    p = r454b.dew(280.0).p
    for ask in (r454b.throttled, r454b.vapour_from_enthalpy, r454b.mean_evaporating_temperature):
        with pytest.raises(PropertyRangeError, match="cannot be"):
            ask(p, h)


def test_the_equation_alone_never_leaks_the_librarys_error() -> None:
    """A density that is no number is refused in this room's own words."""
    with pytest.raises(PropertyRangeError, match="gives no number at nan"):
        refrigerant("R-290")._equation.at(math.nan, 300.0)


def test_wet_suction_past_the_critical_pressure_is_dried_on_the_way() -> None:
    """Carbon dioxide drawn in with 5 % liquid ends as gas with the same entropy."""
    r = refrigerant("R-744")
    dew, bubble = r.dew(263.15), r.bubble(263.15)
    wet = r.throttled(dew.p, dew.h - 0.05 * (dew.h - bubble.h))
    end = r.isentropic_end(wet, 95e5)
    assert end.s == pytest.approx(wet.s, abs=1e-5)
    assert end.quality is None
    assert end.T > 320
    with pytest.raises(PropertyRangeError, match=r"kJ/\(kg K\) is below the dew line"):
        r.isentropic_end(r.throttled(dew.p, bubble.h + 10e3), 95e5)


def test_throttled_states_reach_into_liquid_and_vapour(r290: Refrigerant) -> None:
    """Expansion that ends subcooled or superheated is given as such; colder than the line is refused."""
    p = r290.dew(280.0).p
    liquid = r290.throttled(p, r290.bubble(270.0).h)
    assert liquid.quality is None
    assert pytest.approx(270.0, abs=0.1) == liquid.T
    vapour = r290.throttled(p, r290.dew(280.0).h + 20e3)
    assert vapour.quality is None
    assert vapour.T > 285
    with pytest.raises(PropertyRangeError):
        r290.throttled(p, -400e3)
    assert refrigerant("R-744").throttled(90e5, 300e3).quality is None
