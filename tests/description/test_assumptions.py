"""The assumption list: complete, in order, adapted to the system, and replaced by what the plant knows."""

import math
from collections.abc import Callable
from typing import Any

import pytest

from commission.description import LoadedPlant
from commission.description.assumptions import Entry, in_si, library
from commission.quantities import NOMENCLATURE, Kind, QuantityError

Load = Callable[..., LoadedPlant]


def test_every_entry_of_the_library_is_sound() -> None:
    """Ranges hold their values, marks are of the list, moved quantities exist, sources are named."""
    assert len(library()) >= 7
    for key, entry in library().items():
        assert isinstance(entry, Entry)
        assert key.replace("_", "").isalnum()
        assert len(entry.source) > 5
        assert set(entry.moves) <= set(NOMENCLATURE)
        assert entry.replaced_by


def test_an_assumption_in_si_with_its_uncertainty(load: Load) -> None:
    """Low, value and high are in SI and in order; the standard uncertainty is that of a rectangle (JCGM 100, 4.3.7)."""
    for assumption in load().assumptions("one").values():
        assert assumption.low <= assumption.value <= assumption.high
        assert assumption.standard_uncertainty == pytest.approx((assumption.high - assumption.low) / math.sqrt(12))
        assert assumption.origin == "library"


def test_cases_follow_the_system(load: Load) -> None:
    """Liquid leaves a receiver close to saturation, so the assumption differs with and without one."""
    without = load().assumptions("one")["liquid_subcooling"]
    with_one = load(lambda d: d["systems"]["one"].update(receiver={"volume": "1 L"})).assumptions("one")[
        "liquid_subcooling"
    ]
    assert with_one.high < without.high
    assert with_one.source != without.source


def test_pressures_of_the_list_are_absolute() -> None:
    """The list knows no site, so a gauge pressure has no meaning in it."""
    assert in_si("90 bar a", Kind.PRESSURE) == 9e6
    assert in_si("6 K", Kind.TEMPERATURE_DIFFERENCE) == 6.0
    with pytest.raises(QuantityError) as caught:
        in_si("90 bar g", Kind.PRESSURE)
    assert "absolute" in caught.value.problems[0].message


def test_own_values_replace_the_library(load: Load) -> None:
    """An own value carries its place and source; without a range it counts as a fact."""

    def more(data: dict[str, Any]) -> None:
        data["systems"]["one"]["assumptions"] = {
            "evaporator_superheat": {"value": "5 K", "low": "4 K", "high": "7 K", "source": "valve setting sheet"},
            "suction_line_superheat": {"value": "9 °F difference", "source": "measured"},
        }

    loaded = load(more)
    own = loaded.assumptions("one")
    assert (own["evaporator_superheat"].low, own["evaporator_superheat"].value, own["evaporator_superheat"].high) == (
        4,
        5,
        7,
    )
    assert own["evaporator_superheat"].source == "valve setting sheet"
    line = loaded.where("systems.one.assumptions.evaporator_superheat").line
    assert own["evaporator_superheat"].origin == f"plant.yaml:{line - 1}"
    assert own["suction_line_superheat"].value == pytest.approx(5.0)
    assert own["suction_line_superheat"].standard_uncertainty == 0.0
    assert own["suction_line_loss"].origin == "library"
