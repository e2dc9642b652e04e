"""Charge limits of a described plant: the documents side by side."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from commission.description import LoadedPlant, load_plant
from commission.properties import refrigerant
from commission.safety import SpaceCharge, charge_limits, substance_of

Plants = Callable[..., LoadedPlant]
VOLUME = 24 * 2.8


def of(loaded: LoadedPlant) -> dict[str, SpaceCharge]:
    """Limits by space."""
    substance = substance_of(refrigerant(loaded.system("one").refrigerant))
    return {space.space_id: space for space in charge_limits(loaded, "one", substance)}


def limits(space: SpaceCharge) -> dict[str, float]:
    """Kilograms by document and first words of the rule."""
    return {f"{x.document}: {x.rule}": x.value.value for x in space.limits if x.value is not None}


def test_propane_cold_room_by_each_document(plant: Plants) -> None:
    """0.038 x 20 % x 67.2 m³ = 0.511 kg, 0.008 x 67.2 = 0.538 kg, RCL 0.0095 x 67.2 = 0.638 kg; lowest advised."""
    room = of(plant())["room"]
    values = sorted(limits(room).values())
    assert values == pytest.approx([0.2 * 0.038 * VOLUME, 0.008 * VOLUME, 0.0095 * VOLUME])
    assert room.lowest is not None
    assert room.lowest.value is not None
    assert room.lowest.value.value == pytest.approx(0.5107, abs=1e-4)
    assert room.over is False
    assert "authority" in room.advice


def test_a_charge_over_the_lowest_limit_is_over(plant: Plants) -> None:
    """0.52 kg is more than a fifth of the flammability limit allows in this room."""
    assert of(plant(charge="0.52 kg"))["room"].over is True


def large(loaded: LoadedPlant) -> LoadedPlant:
    """The same plant with a room of 300 m²."""
    path = loaded.folder / "plant.yaml"
    path.write_text(path.read_text(encoding="utf-8").replace("24 m2", "300 m2"), encoding="utf-8")
    return load_plant(loaded.folder)


def test_below_ground_propane_is_capped_at_one_kilogram(plant: Plants) -> None:
    """EN 378-1 table C.2 (from memory): class 3 below ground at most 1 kg, and the mark says it is not sure."""
    room = of(large(plant(below="yes")))["room"]
    capped = next(x for x in room.limits if x.value is not None and x.value.value == 1.0)
    assert "C.2" in capped.edition
    assert capped.mark == "M-low"


def test_the_cap_shows_its_conflict(plant: Plants) -> None:
    """A general-public room large enough reaches the 1.5 kg cap of the law's example (RSIF IF-04 appendix 5)."""
    room = of(large(plant(occupancy="supervised", charge="1 kg")))["room"]
    values = limits(room)
    assert any(value == 1.5 for value in values.values())
    assert any(value == 2.5 for value in values.values())
    marks = {x.mark for x in room.limits if x.value is not None and x.value.value == 2.5}
    assert marks == {"M-low"}


def test_outdoors_has_words_instead_of_kilograms(plant: Plants) -> None:
    """A flammable refrigerant outdoors asks for a protective zone."""
    yard = of(plant())["yard"]
    assert yard.limits == ()
    assert any("protective zone" in note for note in yard.notes)
    assert not any("protective zone" in note for note in of(plant(refrigerant="R-134a"))["yard"].notes)


def test_r134a_in_an_authorised_room_has_no_limit_by_size(plant: Plants) -> None:
    """EN 378-1 table C.1 (from memory): class A1 above ground without public access has no toxicity limit."""
    room = of(plant(refrigerant="R-134a", charge="5 kg"))["room"]
    reasons = [x.reason for x in room.limits if x.document.startswith("EN 378-1")]
    assert any(reason and "toxicity" in reason for reason in reasons)
    assert any(reason and "does not burn" in reason for reason in reasons)
    assert [x.value.value for x in room.alternatives if x.value] == pytest.approx([0.28 * VOLUME, 0.58 * VOLUME])


def test_a_sealed_cabinet_gets_the_limit_of_commercial_appliances(plant: Plants) -> None:
    """IEC 60335-2-89:2019: 13 x LFL = 494 g of R-290 (trade reports: 'about 500 g')."""
    room = of(plant(sealed="yes"))["room"]
    found = [x.value.value for x in room.limits if x.document == "IEC 60335-2-89" and x.value]
    assert found == pytest.approx([0.494])


def test_comfort_cooling_uses_the_mounting_height(plant: Plants) -> None:
    """m = 2.5 LFL^(5/4) h0 √A: without a stated mounting the floor height 0.6 m, the strictest, is taken and said."""
    room = of(plant(duty="comfort_cooling", refrigerant="R-32", charge="2 kg"))["room"]
    rule = next(x for x in room.limits if x.document.startswith("EN 378-1") and "comfort" in x.rule)
    assert rule.value is not None
    assert rule.value.value == pytest.approx(max(1.5 * 4 * 0.307, 2.5 * 0.307**1.25 * 0.6 * 24**0.5))
    assert "not stated" in rule.rule


def test_unknown_room_size_says_what_to_write(plant: Plants) -> None:
    """Without floor area a limit by room is not calculated and the space says so."""
    loaded = plant()
    path = loaded.folder / "plant.yaml"
    path.write_text(path.read_text(encoding="utf-8").replace("floor_area: 24 m2, ", ""), encoding="utf-8")
    room = of(load_plant(loaded.folder))["room"]
    assert room.volume is None
    assert any("floor area" in note for note in room.notes)
    assert all(x.reason for x in room.limits if x.value is None)


def test_every_limit_shows_its_inputs_and_mark(plant: Plants) -> None:
    """Documents side by side are only worth reading with inputs and marks."""
    for limit in of(plant())["room"].limits:
        assert limit.mark
        assert limit.value is None or limit.value.inputs
