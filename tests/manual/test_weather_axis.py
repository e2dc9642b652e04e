"""The condition over which a manual shows the weather, and what it is called."""

from pathlib import Path

import pytest

from commission.description import load_plant, new_plant
from commission.manual.grid import outdoor_axis


@pytest.mark.parametrize(
    ("outdoors", "key", "title"),
    [
        ("yes", "heat_source_inlet_temperature", "Outdoor air"),
        ("no", "heat_source_inlet_temperature", "Air of Place of the heat pump inlet"),
    ],
)
def test_headings_add_the_word_temperature_once(tmp_path: Path, outdoors: str, key: str, title: str) -> None:
    """Every heading writes `over ... temperature`, so the name of the axis leaves that word out."""
    path = new_plant(tmp_path / "plant", "space_heating")[0]
    path.write_text(
        path.read_text(encoding="utf-8").replace("outdoors: yes", f"outdoors: {outdoors}"), encoding="utf-8"
    )
    loaded = load_plant(path.parent)
    assert outdoor_axis(loaded, loaded.system("heat-pump")) == key
    assert loaded.display("heat-pump").short(key) == title
