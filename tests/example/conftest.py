"""The systems of the example plant, each fitted once."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path

import pytest

from commission.description import LoadedPlant, load_plant
from commission.prediction import Prediction, SystemModel, fit
from tests.example.conditions import CONDITIONS, Predicted


@pytest.fixture(scope="session")
def plant(example_folder: Path) -> LoadedPlant:
    """The example plant."""
    return load_plant(example_folder)


@pytest.fixture(scope="session")
def models(plant: LoadedPlant) -> Mapping[str, SystemModel]:
    """All systems of the example plant, fitted."""
    return {system: fit(plant, system) for system in CONDITIONS}


@pytest.fixture(scope="session")
def predicted(models: Mapping[str, SystemModel]) -> Predicted:
    """The prediction of a system at one of its `CONDITIONS`, by number."""
    known: dict[tuple[str, int], Prediction] = {}

    def at(system: str, number: int) -> Prediction:
        if (system, number) not in known:
            known[system, number] = models[system].predict(CONDITIONS[system][number])
        return known[system, number]

    return at
