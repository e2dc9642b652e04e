"""Stated flows stay what is stated, and the power of a fan with stages follows its flow."""

from __future__ import annotations

import math

import pytest

from commission.description import LoadedPlant
from commission.prediction import SystemModel, fit

HOUR = 3600.0


@pytest.fixture(scope="module")
def models(example: LoadedPlant) -> dict[str, SystemModel]:
    """All systems of the example, fitted to tables with more points than unknowns."""
    return {name: fit(example, name) for name in example.plant.systems}


def test_rated_flows_are_the_stated_ones(models: dict[str, SystemModel]) -> None:
    """Whatever the rated points say, a stated flow is shown as stated: the fit leaves flow departures alone."""
    counted = 0
    for model in models.values():
        system = model.facts.system
        for key, medium in (("heat_source_flow", system.heat_source), ("heat_sink_flow", system.heat_sink)):
            if medium.flow is not None and key in model.rated_condition:
                assert model.rated_condition[key] == pytest.approx(medium.flow, rel=1e-12)
                counted += 1
    assert counted >= 8


def test_flow_departures_still_count(models: dict[str, SystemModel]) -> None:
    """The uncertain flow of the air moves the outlet temperature of a fitted table as far as the first law says."""
    found = models["dining-hall"].predict()
    part = found.parts["heat_sink_temperature_change"]["sink_flow_departure"]
    u = models["dining-hall"].assumptions["sink_flow_departure"].standard_uncertainty
    change = found.expected["heat_sink_temperature_change"].value
    assert part / change == pytest.approx(-u / (1 + u), rel=0.1)


def test_fan_power_of_a_stage(models: dict[str, SystemModel]) -> None:
    """130 W at 1680 m3/h become 130 (1080/1680)^2.7 W at the low stage (fan laws, exponent assumed)."""
    model = models["dining-hall"]
    exponent = model.fit.values["fan_power_exponent"]
    rated, low = model.predict(), model.predict({"heat_source_flow": 1080 / HOUR})
    wanted = 130 * (1080 / 1680) ** exponent
    assert rated.expected["fan_power"].value == pytest.approx(130 + 150)
    assert low.expected["fan_power"].value == pytest.approx(wanted + 150)
    fan = low.expected["cooling_capacity"].value - low.expected["net_cooling_capacity"].value
    assert fan == pytest.approx(wanted)
    slope = wanted * math.log(1080 / 1680) * model.assumptions["fan_power_exponent"].standard_uncertainty
    assert low.parts["fan_power"]["fan_power_exponent"] == pytest.approx(slope, rel=0.2)


def test_fan_power_without_stages(models: dict[str, SystemModel]) -> None:
    """Without stated stages less air is a dirty filter: the fan power stays."""
    model = models["freezer-room"]
    less = model.predict({"heat_source_flow": 0.7 * model.rated_condition["heat_source_flow"]})
    assert less.expected["fan_power"].value == pytest.approx(model.predict().expected["fan_power"].value)
