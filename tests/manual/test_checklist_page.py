"""The page of a checklist: what commissioning asks is counted, what comes again is not."""

from __future__ import annotations

from pathlib import Path

from commission.checklists import stages
from commission.description import load_plant
from tests.manual.pages import read_page


def test_only_what_commissioning_asks_is_counted(site: Path, plant: Path) -> None:
    """Upkeep visits stand on the page and are counted apart: nobody is asked for them before the handover."""
    path = site / "systems" / "cold-room" / "checklist.html"
    found = stages(load_plant(plant), "cold-room")
    once = [stage for stage in found if stage.id != "upkeep"]
    again = sum(len(stage.items) for stage in found) - sum(len(stage.items) for stage in once)
    text = " ".join(path.read_text(encoding="utf-8").split())
    asked = sum(len(stage.items) for stage in once)
    assert again > 5
    assert f"{asked} items in {len(once)} stages, and {again} that come again in upkeep." in text
    rows = [i for i in read_page(path).ids if i.startswith("item-")]
    assert len(rows) == asked + again
