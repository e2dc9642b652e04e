"""Catalogue ratings with a blend: the difference counts to the dew point, or to the mean of the glide."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from commission.description import LoadedPlant
from commission.prediction import SystemModel, fit
from commission.prediction.ratings import MEAN_BELOW_DEW

Written = Callable[[str], LoadedPlant]
ROOM = """
duty: cold_storage
refrigerant: {fluid}
heat_source: {{medium: air, flow: 3400 m3/h, relative_humidity: 90 %}}
heat_sink: {{medium: air, flow: 4100 m3/h}}
evaporator: {{rating: {{air_on: -20 °C, temperature_difference: 8 K, capacity: 3.1 kW{at}}}}}
rated_points:
  - {{heat_source_inlet_temperature: -20 °C, heat_sink_inlet_temperature: 32 °C, cooling_capacity: 3.1 kW,
     power_input: 2.3 kW, includes: [compressor]}}
"""


@pytest.fixture
def room(written: Written) -> Callable[[str, str], SystemModel]:
    """A freezer whose cooler is rated with 8 K, counted as the second word says."""
    return lambda fluid, at: fit(written(ROOM.format(fluid=fluid, at=at and f", at: {at}")), "it")


def test_the_dew_point_lies_above_the_mean(room: Callable[[str, str], SystemModel]) -> None:
    """With R-454C the same 8 K, counted to the mean, is a coil that evaporates warmer (dew) by up to a third of its
    glide; the surface that superheats the gas takes some of it."""
    dew, mean = (room("R-454C", at) for at in ("dew", "mean"))
    ends = [m.predict().expected["evaporating_temperature"].value for m in (dew, mean)]
    glide = mean.facts.glide(ends[0])
    assert glide > 5
    assert 0.6 < (ends[1] - ends[0]) / (MEAN_BELOW_DEW * glide) < 1.0
    assert not {"rating_to_the_mean"} & {*dew.assumptions, *mean.assumptions}


def test_what_is_not_said_is_assumed_and_shown(room: Callable[[str, str], SystemModel]) -> None:
    """Without a word the mean is taken, and the range down to the dew point stands in the uncertainty."""
    silent, mean = room("R-454C", ""), room("R-454C", "mean")
    one, other = silent.predict(), mean.predict()
    key = "evaporating_temperature"
    assert one.expected[key].value == pytest.approx(other.expected[key].value, abs=1e-3)
    assert abs(one.parts[key]["rating_to_the_mean"]) > 0.3
    assert "rating_to_the_mean" in silent.assumptions


def test_pure_fluids_have_one_temperature(room: Callable[[str, str], SystemModel]) -> None:
    """R-290 boils at one temperature: nothing is assumed, and the word changes nothing."""
    found = [room("R-290", at) for at in ("", "dew", "mean")]
    values = [m.predict().expected["evaporating_temperature"].value for m in found]
    assert max(values) - min(values) < 1e-4
    assert all("rating_to_the_mean" not in m.assumptions for m in found)
