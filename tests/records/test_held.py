"""Readings of the hot water that no model predicts: the checklist holds them to figures of hygiene."""

from __future__ import annotations

from pathlib import Path

import pytest

from commission.description import load_plant
from commission.records import judge_record, read_record

TOP, RETURN = "store_top_temperature", "circulation_return_temperature"
VISIT = """\
system: shower-water
stage: season
mode: trim
started: 2026-11-10T10:05:00+01:00
people: {{operator: {{name: A fitter}}}}
conditions: {{heat_source_inlet_temperature: 7.0 °C, heat_sink_inlet_temperature: 10.0 °C,
  heat_sink_outlet_temperature: 60.0 °C}}
readings:
  store_top_temperature: {top} °C
  circulation_return_temperature: {back} °C
answers: {{upkeep.hot-water: yes}}
"""


@pytest.mark.parametrize(("top", "back", "kept"), [(60.2, 52.0, (True, True)), (58.8, 49.5, (False, False))])
def test_hot_water_is_held_to_sixty_and_fifty_degrees(
    tmp_path: Path, example_folder: Path, top: float, back: float, kept: tuple[bool, bool]
) -> None:
    """Flow at least 60 °C, circulation return at least 50 °C (HSG274 part 2): said of each reading, and a yes that a
    reading of the same record contradicts is said to be one."""
    loaded = load_plant(example_folder)
    path = tmp_path / "visit.yaml"
    path.write_text(VISIT.format(top=top, back=back), encoding="utf-8")
    record = read_record(path, loaded)
    judgement = judge_record(loaded, record)
    for key, least, ok in zip((TOP, RETURN), ("60.0 °C", "50.0 °C"), kept, strict=True):
        assert f"held to at least {least}" in judgement.not_judged[key]
        assert judgement.not_judged[key].endswith(": kept" if ok else ": below it")
    against = [w for w in record.warnings if "is answered 'yes', but" in w]
    assert len(against) == kept.count(False)
