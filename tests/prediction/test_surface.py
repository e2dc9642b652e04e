"""A surface over two conditions against predictions at its points."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from commission.description import LoadedPlant, load_plant
from commission.errors import InputError, NotCalculatedError
from commission.prediction import fit, operating_surface

SOURCE, SINK = "heat_source_inlet_temperature", "heat_sink_inlet_temperature"


@pytest.fixture(scope="module")
def example() -> LoadedPlant:
    """The example plant."""
    return load_plant(Path(__file__).parents[2] / "example_plant")


def test_a_surface_gives_what_is_predicted(example: LoadedPlant) -> None:
    """Dew points, capacity and compressor power at the corners and in the middle are those of `predict`."""
    model = fit(example, "cold-room")
    rooms, outdoors = np.linspace(271.15, 281.15, 5), np.linspace(263.15, 311.15, 9)
    found = operating_surface(model, (SOURCE, rooms.tolist()), (SINK, outdoors.tolist()))
    for i, j in ((0, 0), (0, 8), (2, 4), (4, 0), (4, 8)):
        one = model.predict({SOURCE: float(rooms[i]), SINK: float(outdoors[j])})
        assert found.regimes[i][j] == one.regime
        for key, value in (
            ("evaporating_temperature", found.evaporating_temperature),
            ("condensing_temperature", found.condensing_temperature),
            ("cooling_capacity", found.heat_from_source),
            ("compressor_power", found.power),
        ):
            assert value[i, j] == pytest.approx(one.expected[key].value, rel=1e-6)


def test_a_surface_refuses_conditions_of_the_wrong_side(example: LoadedPlant) -> None:
    """A key of the sink given for the source, and one that is no condition at all, are named."""
    model = fit(example, "cold-room")
    with pytest.raises(InputError) as caught:
        operating_surface(model, (SINK, [280.0]), (SINK, [300.0]))
    assert caught.value.problems[0].value == SINK
    with pytest.raises(InputError) as caught:
        operating_surface(model, (SOURCE, [280.0]), (SINK, [300.0]), {"weather": 1.0})
    assert caught.value.problems[0].value == "weather"


def test_a_surface_of_carbon_dioxide_is_refused(example: LoadedPlant) -> None:
    """A gas cooler has no condensing temperature to chart: the reason is given."""
    model = fit(example, "shower-water")
    sink = next(key for key in model.condition_axes if key.startswith("heat_sink_"))
    with pytest.raises(NotCalculatedError, match="one stage"):
        operating_surface(model, (SOURCE, [280.0]), (sink, [300.0]))
