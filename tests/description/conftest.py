"""A small plant as plain data that a test may change before it is written and loaded."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
import yaml

from commission.description import DescriptionError, LoadedPlant, load_plant
from commission.errors import Problem


class Plain(yaml.SafeDumper):
    """Writes equal parts out again, since a description holds no aliases."""

    def ignore_aliases(self, data: object) -> bool:
        """Always."""
        return True


Change = Callable[[dict[str, Any]], object]


def small_plant() -> dict[str, Any]:
    """The least that is a plant, with one instrument and one space."""
    return {
        "plant": {"name": "Test plant", "altitude": "310 m"},
        "spaces": {"room": {"name": "Room"}},
        "instruments": {
            "low gauge": {"measures": "pressure", "from": "-1 bar g", "to": "10 bar g", "accuracy": {"of_span": "1 %"}}
        },
        "systems": {
            "one": {
                "duty": "cold_storage",
                "refrigerant": "R-290",
                "heat_source": {"medium": "air"},
                "heat_sink": {"medium": "air"},
                "rated_points": [
                    {
                        "heat_source_inlet_temperature": "2 °C",
                        "heat_sink_inlet_temperature": "32 °C",
                        "cooling_capacity": "3.4 kW",
                        "power_input": "1.7 kW",
                    }
                ],
            }
        },
    }


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    """An empty plant folder."""
    target = tmp_path / "plant"
    target.mkdir()
    return target


@pytest.fixture
def load(folder: Path) -> Callable[..., LoadedPlant]:
    """Writes the small plant with the changes given, and loads it."""

    def run(*changes: Change) -> LoadedPlant:
        data = small_plant()
        for change in changes:
            change(data)
        text = yaml.dump(data, Dumper=Plain, allow_unicode=True, sort_keys=False)
        (folder / "plant.yaml").write_text(text, encoding="utf-8")
        return load_plant(folder)

    return run


@pytest.fixture
def problems(load: Callable[..., LoadedPlant]) -> Callable[..., tuple[Problem, ...]]:
    """The problems that the changed plant has; none is a failure of the test."""

    def run(*changes: Change) -> tuple[Problem, ...]:
        with pytest.raises(DescriptionError) as caught:
            load(*changes)
        return caught.value.problems

    return run
