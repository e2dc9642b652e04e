"""The emergency card: the right words for the hazard, and the plant's own text."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from commission.description import LoadedPlant, load_plant
from commission.errors import InputError
from commission.properties import refrigerant
from commission.quantities import Display
from commission.safety import EmergencyCard, emergency_card, hazards, substance_of

Plants = Callable[..., LoadedPlant]


def card(loaded: LoadedPlant) -> EmergencyCard:
    """The card of the one system."""
    substance = substance_of(refrigerant(loaded.system("one").refrigerant))
    return emergency_card(loaded, "one", substance, Display("metric", loaded.barometric_pressure))


def text(found: EmergencyCard) -> str:
    """All lines of a card."""
    return "\n".join(line for section in found.sections for line in section.lines)


def test_propane_card_warns_of_sparks(plant: Plants) -> None:
    """A flammable refrigerant: no switch, no flame; a walk-in room: open from outside."""
    found = text(card(plant()))
    assert "0.45 kg" in found
    assert "Touch no switch" in found
    assert "cold room" in found
    assert "112" in found
    assert "Ammonia" not in found


def test_a_unit_outdoors_keeps_the_gas_out_of_the_buildings(example_folder: Path) -> None:
    """Outdoors doors and windows beside the leak are shut, in a room they are opened from outside (common practice)."""
    loaded = load_plant(example_folder)
    display = Display("metric", loaded.barometric_pressure)

    def words(system: str) -> str:
        return text(
            emergency_card(loaded, system, substance_of(refrigerant(loaded.system(system).refrigerant)), display)
        )

    assert "shut the doors, windows and air intakes" in words("floor-heating")
    assert "Open doors and windows" not in words("floor-heating")
    assert "Open doors and windows from outside" in words("cold-room")
    assert "shut the doors" not in words("cold-room")
    assert "01632 960147" in words("cold-room")


def test_ammonia_card_carries_the_levels_of_people(plant: Plants) -> None:
    """300 ppm is immediately dangerous (NIOSH); the 30 000 ppm of equipment protects no one and is not on the door."""
    found = text(card(plant(refrigerant="R-717", charge="40 kg")))
    assert "300 ppm" in found
    assert "30 000 ppm" not in found
    assert "At a quarter of that" not in found
    assert "kills far below that" in found
    assert "poisonous" in found


def test_carbon_dioxide_card_says_that_it_has_no_smell(plant: Plants) -> None:
    """Carbon dioxide: 40 000 ppm immediately dangerous, and nothing to smell."""
    found = text(card(plant(refrigerant="R-744", charge="8 kg")))
    assert "40 000 ppm" in found
    assert "no smell" in found
    assert "Touch no switch" not in found


def test_both_limits_of_a_quarter_of_an_hour_are_explained(plant: Plants) -> None:
    """EH40/2005: 15 000 ppm for 15 minutes; NIOSH: 30 000 ppm. The lower one leads, as on the personal alarm."""
    found = text(card(plant(refrigerant="R-744", charge="8 kg")))
    assert "15 000 ppm: fifteen minutes at work, in the United Kingdom (EH40), 30 000 ppm in the United States" in found


def test_the_caller_can_say_where_and_meet_the_fire_brigade(plant: Plants) -> None:
    """Address and meeting point stand on the card; what the description does not say leaves room to write."""
    loaded = plant()
    assert "Say where: Test yard, ____" in text(card(loaded))
    path = loaded.folder / "plant.yaml"
    stated = "  name: Test yard\n  address: 1 Far Lane\n  meeting_point: the gate by the road"
    path.write_text(path.read_text(encoding="utf-8").replace("  name: Test yard", stated), encoding="utf-8")
    found = text(card(load_plant(loaded.folder)))
    assert "Say where: Test yard, 1 Far Lane." in found
    assert "Gather at: the gate by the road." in found


@pytest.mark.parametrize(
    ("name", "percent"), [("R-290", "2.1 %"), ("R-32", "14.4 %"), ("R-717", "16.7 %"), ("R-600a", "1.8 %")]
)
def test_the_level_at_which_it_burns(plant: Plants, name: str, percent: str) -> None:
    """ISO 817 gives the limit in both units: R-290 2.1 %, R-32 14.4 %, R-717 16.7 %, R-600a 1.8 %."""
    assert f"It can burn from {percent}" in text(card(plant(refrigerant=name, charge="0.1 kg")))


@pytest.mark.parametrize("name", ["R-290", "R-454C", "R-134a", "R-744", "R-717"])
def test_first_aid_for_eyes_skin_frost_and_breath(plant: Plants, name: str) -> None:
    """Every card says what to do for each, and what not to do (safety data sheets; common practice in first aid)."""
    (aid,) = [s for s in card(plant(refrigerant=name, charge="0.4 kg")).sections if s.title == "If someone is hurt"]
    words = "\n".join(aid.lines)
    for part in ("Breathed it in", "Not breathing", "Eyes", "Frozen skin", "do not rub"):
        assert words.count(part) >= 1
    assert words.count("Breathed it in") == words.count("Not breathing") == 1
    assert ("on skin: rinse" in words) is (name == "R-717")


def test_every_refrigerant_says_what_it_does_to_people() -> None:
    """No refrigerant of the register comes without an effect on people."""
    from commission.properties.register import register

    for name in register():
        substance = substance_of(refrigerant(name))
        assert len(hazards(substance).effects) >= 3


def test_the_plant_can_bring_its_own_language(plant: Plants) -> None:
    """emergency_card.yaml in the plant folder replaces the text whole, with the same words filled in."""
    loaded = plant()
    own = """title: Wenn Gas austritt
language: de
sections:
  - title: Zuerst
    lines:
      - 'Alle hinaus: {charge} {refrigerant}'
"""
    (loaded.folder / "emergency_card.yaml").write_text(own, encoding="utf-8")
    found = card(loaded)
    assert found.replaced
    assert found.language == "de"
    assert text(found) == "Alle hinaus: 0.45 kg R-290 (safety class A3)"


def test_a_card_in_another_language_needs_no_english_word(plant: Plants) -> None:
    """The words that are names and figures bring none; what is not stated is a line to write on."""
    loaded = plant()
    names = ("designation", "safety_class", "charge", "lfl", "address", "meeting_point", "rooms", "owner")
    lines = "\n".join(f"      - '{{{word}}}'" for word in (*names, "contractor", "emergency_number", "system"))
    own = f"title: Karte\nlanguage: de\nsections:\n  - title: Alles\n    lines:\n{lines}\n"
    (loaded.folder / "emergency_card.yaml").write_text(own, encoding="utf-8")
    found = text(card(loaded)).splitlines()
    assert found[:4] == ["R-290", "A3", "0.45 kg", "2.1 % (38 g/m³)"]
    assert found[4] == "Test yard, ________________"
    assert set(found[5:]) == {"________________", "Cold room, Yard", "112", "one"}


@pytest.mark.parametrize(
    ("line", "words"),
    [
        ("'{chargge}'", "chargge"),
        ("'{charge.__class__}'", "charge.__class__"),
        ("{text: hello, for: [flamable]}", "flamable"),
        ("'{unclosed'", "unclosed"),
    ],
)
def test_a_wrong_word_in_the_own_card_is_an_error_with_its_line(plant: Plants, line: str, words: str) -> None:
    """Unknown words and classes are refused with file, line and what is allowed; no text reaches into an object."""
    loaded = plant()
    own = f"title: Own\nsections:\n  - title: First\n    lines:\n      - {line}\n"
    (loaded.folder / "emergency_card.yaml").write_text(own, encoding="utf-8")
    with pytest.raises(InputError) as caught:
        card(loaded)
    problem = caught.value.problems[0]
    assert (problem.file, problem.line) == ("emergency_card.yaml", 5)
    assert words in problem.message
    assert problem.allowed


def test_what_lights_the_gas_fits_its_class(plant: Plants) -> None:
    """A2L needs a flame or a strong spark (EN 378-1: burning velocity below 0.1 m/s); A3 is lit by a small one."""
    mild, strong = text(card(plant(refrigerant="R-32"))), text(card(plant()))
    assert "a flame or a strong spark" in mild
    assert "small spark" not in mild
    assert "small spark" in strong
    assert "It can burn from 2." in strong
    assert "in the air. At a quarter" in strong
