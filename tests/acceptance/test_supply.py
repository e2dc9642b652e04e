"""The electric supply held to its band."""

from __future__ import annotations

from pathlib import Path

import pytest

from commission.acceptance.supply import supply
from commission.description import load_plant


@pytest.mark.parametrize(
    ("key", "value", "words"),
    [
        ("voltage", 360.0, "held to 360 to 440 V, 400 V ± 10 % (IEC 60038, EN 50160): within"),
        ("voltage", 440.0, ": within"),
        ("voltage", 359.0, ": outside; put the supply right"),
        ("voltage_unbalance", 0.02, "held to at most 2 % (common practice): within"),
        ("voltage_unbalance", 0.021, ": above"),
        ("current_unbalance", 0.08, "held to at most 10 % (common practice): within"),
    ],
)
def test_a_supply_is_held_to_its_band(example_folder: Path, key: str, value: float, words: str) -> None:
    """IEC 60038 and EN 50160: nominal voltage within 10 %; unbalance by common practice, no source."""
    found = supply(key, value, load_plant(example_folder).system("cold-room"))
    assert found is not None
    assert words in found


def test_other_quantities_are_left_to_the_model(example_folder: Path) -> None:
    """A power is no matter of the supply, and a nameplate without voltage holds nothing."""
    system = load_plant(example_folder).system("cold-room")
    assert supply("power_input", 1500.0, system) is None
    bare = system.model_copy(update={"nameplate": system.nameplate.model_copy(update={"voltage": None})})
    assert supply("voltage", 400.0, bare) is None
