"""Names of refrigerants as people write them."""

from __future__ import annotations

import pytest

from commission.errors import InputError, NotCalculatedError
from commission.properties import refrigerant
from commission.properties.models import blends, designation, model_of, modelled


@pytest.mark.parametrize(
    ("written", "meant"),
    [
        ("R-454B", "R-454B"),
        ("R454B", "R-454B"),
        ("r 454b", "R-454B"),
        ("r-454b", "R-454B"),
        ("propane", "R-290"),
        ("Ammonia", "R-717"),
        ("NH3", "R-717"),
        ("CO2", "R-744"),
        ("carbon dioxide", "R-744"),
        ("isobutane", "R-600a"),
        ("R600a", "R-600a"),
        ("R1234ze(E)", "R-1234ze(E)"),
        ("R-1234zeE", "R-1234ze(E)"),
        ("R-1336mzz(Z)", "R-1336mzz(Z)"),
    ],
)
def test_ordinary_names_are_understood(written: str, meant: str) -> None:
    """Dashes, spaces, case and everyday names do not matter."""
    assert designation(written) == meant
    assert refrigerant(written).name == meant


@pytest.mark.parametrize(
    ("written", "near"),
    [("R-454D", "R-454A"), ("propan", "R-290"), ("amonia", "R-717"), ("R-1234ze", "R-1234ze(E)")],
)
def test_a_slip_names_the_nearest(written: str, near: str) -> None:
    """An unknown name is refused with the nearest known one; a short name for an isomer is not guessed."""
    with pytest.raises(InputError) as caught:
        refrigerant(written)
    (problem,) = caught.value.problems
    assert problem.value == written
    assert problem.nearest is not None
    assert problem.nearest[:5] == near[:5]
    assert "R-290" in (problem.allowed or "")


@pytest.mark.parametrize("hostile", ["", "x" * 10_000, "R-32\n\x00", "../../etc/passwd", "R-32&R-125"])
def test_hostile_names_are_refused(hostile: str) -> None:
    """Nothing odd reaches the property library or the file system."""
    with pytest.raises(InputError):
        refrigerant(hostile)


def test_one_object_per_refrigerant() -> None:
    """Every spelling leads to the same object."""
    assert refrigerant("R454B") is refrigerant("R-454B")
    assert refrigerant("propane") is refrigerant("R290")


def test_every_refrigerant_of_the_register_can_be_made() -> None:
    """All 35 have lines, a critical point, and an honest repr; fifteen are pure."""
    assert len(modelled()) == 35
    for name in modelled():
        r = refrigerant(name)
        assert repr(r) == f"Refrigerant({name!r})"
        assert r.is_blend == (name in blends())
        assert r.T_triple <= r.T_low < r.T_high < r.T_critical < r.T_max


def test_a_refrigerant_without_a_model_says_so() -> None:
    """A designation that has no equation of state is refused by name, not by a key error."""
    with pytest.raises(NotCalculatedError, match="R-9999 has no equation of state here"):
        model_of("R-9999")
