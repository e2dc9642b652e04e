"""The shipped series: provenance, agreement with the equations at hand, and what happens where they do not agree."""

from __future__ import annotations

import dataclasses
import json
from importlib.resources import files
from pathlib import Path

import numpy as np
import pytest

from commission.errors import NotCalculatedError
from commission.properties import PropertyRangeError, generate_lines, lines, refrigerant
from commission.properties.coolprop import version
from commission.properties.generate_lines import build, critical_point
from commission.properties.models import model_of, modelled
from commission.properties.refrigerant import _make


def test_every_modelled_refrigerant_has_its_file_with_provenance() -> None:
    """One file per refrigerant, no other, each says how it was made."""
    folder = files("commission.properties") / "lines"
    assert {p.name for p in folder.iterdir()} == {lines.file_name(n) for n in modelled()}
    for name in modelled():
        plain = json.loads((folder / lines.file_name(name)).read_text(encoding="utf-8"))
        assert "commission.properties.generate_lines" in plain["about"]
        assert plain["property_source"].startswith("CoolProp ")


@pytest.mark.parametrize("name", ["R-290", "R-744", "R-454B"])
def test_the_files_are_what_the_generator_makes(name: str, tmp_path: Path) -> None:
    """Made anew, the data agree to the last digits that rounding leaves."""
    generate_lines.main(tmp_path, (name,))
    shipped, new = lines.read(name), json.loads((tmp_path / lines.file_name(name)).read_text(encoding="utf-8"))
    assert shipped is not None
    again = lines.FluidData.from_json(new)
    for line in ("dew", "bubble"):
        a, b = getattr(shipped, line).coefficients, getattr(again, line).coefficients
        assert a == pytest.approx(b, rel=1e-6, abs=1e-3)
    assert again.T_critical == shipped.T_critical
    assert again.mole_fractions == pytest.approx(shipped.mole_fractions, abs=1e-12)


@pytest.mark.parametrize("name", modelled())
def test_the_series_follow_the_equation_between_their_nodes(name: str) -> None:
    """At 25 temperatures: pressure of the equation at the density of the line to 2e-7, enthalpy to 0.2 J/kg."""
    r = refrigerant(name)
    for T in np.linspace(r.T_low, 0.99 * r.T_critical, 25):
        dew = r.dew(float(T))
        point = r._equation.at(dew.rho, float(T))
        assert point.p == pytest.approx(dew.p, rel=2e-7)
        assert point.h == pytest.approx(dew.h, abs=0.2)
        assert point.s == pytest.approx(dew.s, abs=1e-3)
        bubble = r.bubble(float(T))
        point = r._equation.at(bubble.rho, float(T))
        assert point.h == pytest.approx(bubble.h, abs=0.2)
        # a liquid's pressure is steep in density: compare in density
        assert (point.p - bubble.p) / point.p_rho == pytest.approx(0.0, abs=2e-7 * bubble.rho)


@pytest.mark.parametrize("name", modelled())
def test_temperature_and_pressure_of_a_line_are_inverse(name: str) -> None:
    """Pressure to temperature and back, to 3e-7 K, on both lines from end to end."""
    r = refrigerant(name)
    for T in np.linspace(r.T_low, r.T_high, 40):
        assert r.dew_temperature(r.dew(float(T)).p) == pytest.approx(float(T), abs=3e-7)
        assert r.bubble_temperature(r.bubble(float(T)).p) == pytest.approx(float(T), abs=3e-7)


def test_vectorised_rows_are_the_single_ones() -> None:
    """The array form of a line gives the same four values."""
    line = refrigerant("R-454B")._dew
    T = np.linspace(230.0, 330.0, 7)
    many = line.rows(T)
    for k, t in enumerate(T):
        assert many[:, k] == pytest.approx(line.row(float(t)), rel=1e-12)


def test_arrays_of_saturation_states() -> None:
    """Both lines as arrays agree with single states; one temperature outside refuses the whole."""
    r = refrigerant("R-455A")
    T = np.array([[230.0, 260.0], [290.0, 320.0]])
    for rows, line in ((r.dew_rows, r.dew), (r.bubble_rows, r.bubble)):
        p, h, s, rho = rows(T)
        one = line(290.0)
        assert (p[1, 0], h[1, 0], s[1, 0], rho[1, 0]) == pytest.approx((one.p, one.h, one.s, one.rho), rel=1e-9)
        for wrong in (100.0, 400.0, np.nan):
            with pytest.raises(PropertyRangeError):
                rows(np.array([280.0, wrong]))


@pytest.mark.parametrize("name", ["R-290", "R-454C"])
def test_critical_points_of_the_models_are_the_librarys(name: str) -> None:
    """The data file holds what the generator's own search finds."""
    fluids, fractions, stated = model_of(name)
    assert critical_point(fluids, fractions) == pytest.approx(stated, rel=1e-6)


def test_data_of_another_edition_are_made_anew(monkeypatch: pytest.MonkeyPatch) -> None:
    """Where the shipped data do not belong to the equation at hand, new ones are made and say which edition."""
    shipped = lines.read("R-290")
    assert shipped is not None
    other = dataclasses.replace(
        shipped,
        property_source="CoolProp 0.0.0",
        dew=dataclasses.replace(shipped.dew, coefficients=shipped.dew.coefficients * (1 + 1e-5)),
    )
    monkeypatch.setattr(lines, "read", lambda _name: other)
    made = _make("R-290")
    assert made.property_source == f"CoolProp {version()}"
    assert made.dew(280.0).p == pytest.approx(refrigerant("R-290").dew(280.0).p, rel=1e-9)


def test_a_false_solution_is_refused_by_the_generator() -> None:
    """A critical point that is not that of the fluid breaks a law and is refused."""
    fluids, fractions, (T, p) = model_of("R-454B")
    with pytest.raises((NotCalculatedError, np.linalg.LinAlgError)):
        build("R-454B", fluids, fractions, (T + 12.0, p))


def test_a_fluid_without_a_file_is_made_in_memory(monkeypatch: pytest.MonkeyPatch) -> None:
    """A new refrigerant works before its file is generated."""
    monkeypatch.setattr(lines, "read", lambda _name: None)
    made = _make("R-600a")
    assert made.dew(280.0).p == pytest.approx(refrigerant("R-600a").dew(280.0).p, rel=1e-9)


@pytest.mark.parametrize("name", ["R-290", "R-717", "R-454B"])
def test_states_beside_a_line_are_those_at_temperature_and_pressure(name: str) -> None:
    """Superheated from a dew point and subcooled from a bubble point are vapour and liquid there; nothing inside."""
    r = refrigerant(name)
    dew, bubble = r.dew(263.0), r.bubble(311.0)
    for kelvin in (0.0, 4.0, 60.0):
        gas, liquid = r.superheated(dew, kelvin), r.subcooled(bubble, kelvin)
        assert gas[:5] == pytest.approx(r.vapour(dew.T + kelvin, dew.p)[:5], rel=1e-9)
        assert liquid[:5] == pytest.approx(r.liquid(bubble.T - kelvin, bubble.p)[:5], rel=1e-7)
    for inside in (-0.1, float("nan")):
        with pytest.raises(PropertyRangeError):
            r.superheated(dew, inside)
        with pytest.raises(PropertyRangeError):
            r.subcooled(bubble, inside)


def test_a_neighbour_in_the_vapour_does_not_hide_that_compression_ends_wet() -> None:
    """Steep compression of R-600a from its dew point ends wet, with its warning, whatever state it is started from."""
    r = refrigerant("R-600a")
    suction, p = r.dew(253.15), r.dew_pressure(318.15)
    wet = r.isentropic_end(suction, p)
    near = r.superheated(r.dew(318.15), 1.0)
    assert wet.quality is not None
    assert r.isentropic_end(suction, p, near) == wet
