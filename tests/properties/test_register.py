"""The register: every figure with source and mark, and what a plant says instead."""

from __future__ import annotations

import pytest

from commission.errors import InputError
from commission.properties import Figure, RegisterEntry, refrigerant, register
from commission.properties.models import modelled
from commission.properties.register import GWP_BASES, KINDS, MARKS

FIGURES = [k for k in KINDS if not k.startswith("gwp_")]


def figures_of(entry: RegisterEntry) -> list[Figure]:
    """All figures of an entry that are known."""
    return [f for f in (*(getattr(entry, k) for k in FIGURES), *entry.gwp.values()) if f is not None]


def test_every_refrigerant_stands_in_the_register() -> None:
    """Register and models name the same refrigerants, in the same order."""
    assert tuple(register()) == tuple(n for n in register() if n in modelled())
    assert set(register()) == set(modelled())


@pytest.mark.parametrize("name", modelled())
def test_every_figure_has_source_and_mark(name: str) -> None:
    """No figure without where it comes from and how sure it is; composition adds up to one."""
    entry = register()[name]
    assert sum(entry.composition.values()) == pytest.approx(1.0, abs=1e-9)
    for figure in (*figures_of(entry), entry.composition_figure):
        assert len(figure.source) > 3
        assert figure.mark in MARKS
    for basis in entry.gwp:
        assert basis in GWP_BASES
    for needed in ("safety_class", "molar_mass", "critical_temperature", "odp", "oils", "charge_as_liquid_only"):
        assert getattr(entry, needed) is not None


@pytest.mark.parametrize("name", modelled())
def test_figures_agree_among_themselves(name: str) -> None:
    """Molar mass with the model, flammable class with a flammability limit, RCL in both units, zeotropes as liquid."""
    entry, r = register()[name], refrigerant(name)
    assert entry.molar_mass is not None
    assert r.molar_mass * 1e3 == pytest.approx(entry.molar_mass.number, abs=0.02)
    assert entry.is_flammable == (entry.lfl is not None)
    if entry.rcl is not None:
        assert entry.rcl_volume is not None
        assert entry.rcl.number is not None
        per_cent = entry.rcl_volume.number
        # 24.465 m3/kmol at 25 °C and 101.325 kPa; printed pairs are rounded to two digits
        assert per_cent == pytest.approx(entry.rcl.number * 24.465 / (r.molar_mass * 1e3), rel=0.07)
    assert entry.charge_as_liquid_only is not None
    if entry.charge_as_liquid_only.value is True:
        assert r.is_blend


def test_a_blends_warming_potential_is_that_of_its_components() -> None:
    """Weighted by mass from component figures of Regulation (EU) 2024/573 (annex I): R-410A 2087.5, R-407C 1773.9."""
    gwp = {"R-32": 675.0, "R-125": 3500.0, "R-134a": 1430.0, "R-143a": 4470.0}
    for name in ("R-410A", "R-407C", "R-404A", "R-507A", "R-407A", "R-407F"):
        entry = register()[name]
        weighted = sum(gwp[c] * x for c, x in entry.composition.items())
        assert entry.gwp["eu573"].number == pytest.approx(weighted, abs=0.6)


@pytest.mark.parametrize(
    ("name", "ar4", "ar5", "ar6"),
    [("R-134a", 1430, 1300, 1530), ("R-32", 675, 677, 771), ("R-22", 1810, 1760, 1960), ("R-23", 14800, 12400, 14600)],
)
def test_warming_potentials_of_the_ipcc_reports(name: str, ar4: int, ar5: int, ar6: int) -> None:
    """IPCC AR4 table 2.14, AR5 table 8.A.1 (no carbon feedback), AR6 table 7.SM.7; 100 years; from memory."""
    gwp = register()[name].gwp
    assert [gwp[k].number for k in ("ar4", "ar5", "ar6")] == [ar4, ar5, ar6]


def test_figures_published_in_a_legal_text() -> None:
    """Spain, RSIF IF-02 and IF-04: practical limits of R-410A 0.44, R-290 0.008; LFL of R-717 0.116, R-32 0.307
    kg/m3."""
    book = register()
    assert book["R-410A"].practical_limit == Figure(
        0.44, KINDS["practical_limit"], "RSIF text (follows EN 378-1)", "V1", "", "0.44 kg/m3"
    )
    for name, key, value in (("R-290", "practical_limit", 0.008), ("R-717", "lfl", 0.116), ("R-32", "lfl", 0.307)):
        figure = getattr(book[name], key)
        assert (figure.number, figure.mark) == (value, "V1")


def test_a_disagreement_is_shown_not_hidden() -> None:
    """R-454B's flammability limit says that editions differ; R-123's EU figure is left open with both values."""
    lfl = register()["R-454B"].lfl
    assert lfl is not None
    assert "0.296 to 0.353" in lfl.note
    open_figure = register()["R-123"].gwp["eu573"]
    assert open_figure.value is None
    assert "79 and 90" in open_figure.note


def test_an_override_replaces_one_figure_and_names_its_source() -> None:
    """The plant's figure stands in the new register, the book is untouched."""
    said = {"value": "0.296 kg/m3", "source": "ISO 817:2014, the edition agreed with the owner"}
    changed = register({"R454B": {"lfl": said, "gwp_eu573": {"value": "465", "source": "label of the unit"}}})
    entry = changed["R-454B"]
    assert entry.lfl is not None
    assert (entry.lfl.number, entry.lfl.mark, entry.lfl.source) == (0.296, "stated", said["source"])
    assert entry.gwp["eu573"].number == 465.0
    assert register()["R-454B"].lfl is not entry.lfl
    plain = refrigerant("R-454B")
    stated = plain.with_register(entry)
    assert stated.register is entry
    assert plain.register is register()["R-454B"]
    assert stated.dew(280.0) == plain.dew(280.0)


def test_an_override_of_a_boiling_point_moves_the_pressure_uncertainty() -> None:
    """A published boiling point nearer to the property source makes the expected pressure surer."""
    plain = refrigerant("R-454B")
    figure = {"value": f"{plain.dew_temperature(101325) - 273.15:.2f} °C", "source": "standard in force"}
    bubble = {"value": f"{plain.bubble_temperature(101325) - 273.15:.2f} °C", "source": "standard in force"}
    entry = register({"R-454B": {"boiling_dew": figure, "boiling_bubble": bubble}})["R-454B"]
    assert plain.with_register(entry).pressure_relative_uncertainty < 0.5 * plain.pressure_relative_uncertainty


def test_all_problems_of_overrides_are_told_at_once() -> None:
    """Unknown refrigerant, unknown figure, no source, wrong unit: four problems in one error, with the nearest
    words."""
    with pytest.raises(InputError) as caught:
        register(
            {
                "R-454D": {"lfl": {"value": "1 kg/m3", "source": "x"}},
                "R-32": {
                    "lfI": {"value": "0.3 kg/m3", "source": "x"},
                    "lfl": {"value": "0.3 kg/m3"},
                    "autoignition": {"value": "648 kPa", "source": "x"},
                },
            }
        )
    problems = caught.value.problems
    assert [p.path for p in problems] == ["", "R-32.lfI", "R-32.lfl", "R-32.autoignition"]
    assert problems[1].nearest == "lfl"
    assert "needs its source" in problems[2].message
    assert "temperature" in (problems[3].allowed or "")


def test_pressure_uncertainty_carries_the_distance_to_published_boiling_points() -> None:
    """Pure fluids about 0.1 %, HFC blends 0.6 %, blends with olefins 0.7 to 1.8 %, the largest those of the facts."""
    u = {name: refrigerant(name).pressure_relative_uncertainty for name in modelled()}
    for name in ("R-290", "R-32", "R-134a", "R-744", "R-717"):
        assert 5e-4 < u[name] < 1.2e-3
    assert 0.004 < u["R-410A"] < 0.008
    assert max(u, key=lambda n: u[n]) == "R-454C"
    assert 0.015 < u["R-454C"] < 0.02
    # twice the standard uncertainty covers the published boiling point, in pressure
    for name, value in u.items():
        r = refrigerant(name)
        entry = r.register
        for figure, slopes, line in (
            (entry.boiling_bubble, r.bubble_slopes, r.bubble_temperature),
            (entry.boiling_dew, r.dew_slopes, r.dew_temperature),
        ):
            if figure is not None and figure.number is not None:
                miss = abs(line(101325.0) - figure.number) * slopes(line(101325.0)).ln_p
                assert miss < 2 * value


def test_an_estimated_mixture_warns() -> None:
    """R-466A alone: the critical temperature of the source lies 5.8 K below the published one, and the text says so."""
    assert [name for name in modelled() if refrigerant(name).warnings] == ["R-466A"]
    (warning,) = refrigerant("R-466A").warnings
    assert "at 78.0 °C, published is 83.8 °C" in warning
