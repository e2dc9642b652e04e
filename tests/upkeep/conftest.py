"""Plants that are small, and filed records as they stand on disk, sealed like any other."""

from __future__ import annotations

import datetime as dt
import shutil
from collections.abc import Callable, Mapping
from pathlib import Path
from typing import Any

import pytest

from commission.description import LoadedPlant, load_plant, read_yaml
from commission.records.text import dump, with_filed_block
from commission.upkeep import Duty, due

YARD = Path(__file__).parent.parent / "checklists" / "plants" / "yard"
Duties = Callable[[], Mapping[str, Duty]]

STORE = """\
plant: {name: "Store, yard; and \\"more\\"", rules: {refrigerant_law: LAW, safety: EN 378}}
spaces:
  room: {floor_area: 24 m2, height: 2.8 m, occupancy: authorised persons only}
  yard: {outdoors: yes}
systems:
  store:
    name: Store
    duty: cold_storage
    refrigerant: REFRIGERANT
    CHARGE
    sealed: SEALED
    spaces: {evaporator: room, condensing_unit: yard}
    heat_source: {medium: air, space: room}
    heat_sink: {medium: air, space: yard}
    rated_points: [{heat_source_inlet_temperature: 2 °C, heat_sink_inlet_temperature: 32 °C, cooling_capacity: 3 kW,
                    power_input: 1.5 kW}]
"""


class Site:
    """A plant folder that a test may fill: description, upkeep.yaml and filed records."""

    def __init__(self, folder: Path) -> None:
        self.folder = folder

    @property
    def loaded(self) -> LoadedPlant:
        """The plant as it stands on disk now."""
        return load_plant(self.folder)

    def duties(self) -> dict[str, Duty]:
        """What is due, by key."""
        return {duty.key: duty for duty in due(self.loaded)}

    def own(self, text: str) -> None:
        """Write upkeep.yaml."""
        (self.folder / "upkeep.yaml").write_text(text, encoding="utf-8")

    def change(self, before: str, after: str) -> None:
        """Change one place of the description."""
        path = self.folder / "plant.yaml"
        text = path.read_text(encoding="utf-8")
        assert text.count(before) == 1
        path.write_text(text.replace(before, after), encoding="utf-8")

    def file(
        self,
        started: str,
        stage: str = "upkeep",
        *,
        system: str = "store",
        mode: str = "trim",
        verdict: str = "none",
        answers: Mapping[str, Any] | None = None,
        raised: tuple[str, ...] = (),
        readings: Mapping[str, str] | None = None,
        corrects: str | None = None,
    ) -> str:
        """Put a filed record on disk; `started` is a day or a moment. Returns its id."""
        moment = dt.datetime.fromisoformat(started if "T" in started else f"{started}T10:00:00+01:00")
        identity = f"{moment:%Y-%m-%d-%H%M}-{system}-{stage}"
        written: dict[str, Any] = {"system": system, "stage": stage, "mode": mode, "started": moment}
        written |= {"people": {"operator": {"name": "a fitter"}}, "answers": answers, "readings": readings}
        if corrects:
            written |= {"corrects": corrects, "why_corrected": "a slip of the pen"}
        text = dump(written)
        items = [
            {"number": n + 1, "what": f"{line} failed", "raised_by": "answer", "line": line}
            for n, line in enumerate(raised)
        ]
        block = {
            "form": "1",
            "id": identity,
            "verdict": verdict,
            "sentence": "as filed",
            "judged_by": {"by": "nothing: no verdict was asked for"},
            "barometric_pressure": 101325.0,
            "barometer_measured": False,
            "open_items": items,
            "digests": {"handed_in": "0" * 64, "description": "0" * 64},
            "tool": {"commission": "0"},
        }
        path = self.folder / "records" / f"{identity}.yaml"
        path.parent.mkdir(exist_ok=True)
        path.write_text(with_filed_block(text, read_yaml(text, "draft").data, block), encoding="utf-8")
        return identity


@pytest.fixture
def site(tmp_path: Path) -> Site:
    """A cold store with 6.5 kg of R-448A under European law."""
    return _store(tmp_path / "plant", "R-448A", "6.5 kg")


@pytest.fixture
def store(tmp_path: Path) -> Callable[..., Site]:
    """Makes a cold store of another refrigerant, charge, seal or law."""

    def make(refrigerant: str, charge: str | None, sealed: bool = False, law: str = "EU 2024/573") -> Site:
        shutil.rmtree(tmp_path / "plant", ignore_errors=True)
        return _store(tmp_path / "plant", refrigerant, charge, sealed, law)

    return make


@pytest.fixture
def yard(tmp_path: Path) -> Site:
    """A copy of the yard of many plants: freezer, split unit, heat pumps, ammonia chiller, tower chiller."""
    shutil.copytree(YARD, tmp_path / "yard")
    return Site(tmp_path / "yard")


def _store(folder: Path, refrigerant: str, charge: str | None, sealed: bool = False, law: str = "EU 2024/573") -> Site:
    folder.mkdir(parents=True)
    text = STORE.replace("REFRIGERANT", refrigerant).replace("LAW", law).replace("SEALED", "yes" if sealed else "no")
    text = text.replace("    CHARGE\n", f"    charge: {charge}\n" if charge else "")
    (folder / "plant.yaml").write_text(text, encoding="utf-8")
    return Site(folder)
