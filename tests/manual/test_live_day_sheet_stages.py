"""The live day sheet of a plant with capacity stages: a table for each, chosen by what stands at the controller."""

from __future__ import annotations

import json
from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING

import pytest
from click.testing import CliRunner

from commission.cli.compare import command as compare
from commission.description import LoadedPlant, load_plant
from tests.acceptance.conftest import STAGED
from tests.manual.live_sheets import heard, outcomes, plant_of, record_text, type_in, write_sheet

if TYPE_CHECKING:
    from playwright.sync_api import BrowserContext

STAGE = "compressor_stage"
DAY = {
    "started": "2026-05-14T10:20", "operator": "A. Reader", "since-start": "45",
    "v-heat_source_inlet_temperature": "12.6", "v-heat_sink_inlet_temperature": "28.4",
    "v-heat_source_flow": "6.5", "v-heat_sink_flow": "8.0",
}  # fmt: skip


@pytest.fixture(scope="module")
def staged(tmp_path_factory: pytest.TempPathFactory) -> LoadedPlant:
    """A chiller with three compressors."""
    folder = tmp_path_factory.mktemp("staged")
    (folder / "plant.yaml").write_text(STAGED, encoding="utf-8")
    return load_plant(folder)


def test_page_follows_the_stage(look: Callable[..., BrowserContext], staged: LoadedPlant, tmp_path: Path) -> None:
    """Two of three machines, typed as 66 %: what fits is inside, as `compare` says of the exported record; with all
    three on the same power is outside; a half is no stage, and a stage nobody knows is left to the filing."""
    opened = look().new_page()
    complaints = heard(opened)
    opened.goto(write_sheet(plant_of(staged, "chiller"), tmp_path).as_uri())
    model = plant_of(staged, "chiller").systems[0].model
    assert model is not None
    day = {"heat_source_inlet_temperature": 285.75, "heat_sink_inlet_temperature": 301.55}
    power = model.predict({**day, STAGE: 2 / 3}).expected["power_input"].value
    type_in(opened, {**DAY, "v-power_input": f"{power / 1e3:.2f}", f"v-{STAGE}": "66"})
    assert outcomes(opened)["power_input"] == "inside"
    record = tmp_path / "visit.yaml"
    record.write_text(record_text(opened), encoding="utf-8")
    result = CliRunner().invoke(compare, [str(staged.folder), str(record), "--json"])
    assert result.exit_code in (0, 1), result.output
    (found,) = (d for d in json.loads(result.stdout)["deviations"] if d["quantity"] == "power_input")
    assert not found["significant"]
    type_in(opened, {f"v-{STAGE}": "100"})
    assert outcomes(opened)["power_input"] == "outside"
    type_in(opened, {f"v-{STAGE}": "50"})
    assert "power_input" not in outcomes(opened)
    assert "There is no such compressor stage: its steps are 33 %, 67 %, 100 %" in opened.inner_text("body")
    type_in(opened, {f"v-{STAGE}": ""})
    opened.check(f"[data-field='unknown-{STAGE}']")
    assert "inferred from the power" in opened.inner_text("body")
    assert complaints == []
