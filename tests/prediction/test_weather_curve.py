"""The flow temperature of a weather-compensated heat pump where only the outdoor temperature is given."""

from __future__ import annotations

import pytest

from commission.description import LoadedPlant
from commission.prediction import SystemModel, fit

KELVIN = 273.15
FLOW, OUTDOOR = "heat_sink_outlet_temperature", "heat_source_inlet_temperature"


@pytest.fixture(scope="module")
def heating(example: LoadedPlant) -> SystemModel:
    """The floor heating of the example, whose curve runs through -9/38, 2/34 and 15/27 °C."""
    return fit(example, "floor-heating")


@pytest.mark.parametrize(("outdoor", "flow"), [(-9, 38), (2, 34), (-3.5, 36), (8.5, 30.5), (-15, 38), (20, 27)])
def test_the_curve_gives_the_flow_temperature(heating: SystemModel, outdoor: float, flow: float) -> None:
    """On its points, half-way between them, and level beyond its ends; a sentence says where it comes from."""
    found = heating.predict({OUTDOOR: outdoor + KELVIN})
    assert found.conditions[FLOW] == pytest.approx(flow + KELVIN)
    assert FLOW not in found.filled
    assert any("weather curve" in w for w in found.warnings)


def test_a_flow_temperature_that_is_given_counts(heating: SystemModel) -> None:
    """What was read goes before the curve; without any condition the rated one stands."""
    given = heating.predict({OUTDOOR: KELVIN - 9, FLOW: KELVIN + 35})
    assert given.conditions[FLOW] == KELVIN + 35
    assert not any("weather curve" in w for w in (*given.warnings, *heating.predict().warnings))


def test_higher_flow_costs_condensing_pressure(heating: SystemModel) -> None:
    """At -9 °C the curve asks for 38 °C in place of the rated 34 °C: condensing is 4 K warmer, give or take 1 K."""
    curve = heating.predict({OUTDOOR: KELVIN - 9}).expected["condensing_temperature"].value
    rated = heating.predict({OUTDOOR: KELVIN - 9, FLOW: KELVIN + 34}).expected["condensing_temperature"].value
    assert curve - rated == pytest.approx(4, abs=1)


def test_tables_over_outdoor_air_follow_the_curve(heating: SystemModel) -> None:
    """What stays while outdoor air varies leaves the flow temperature to the curve: a table meets its points."""
    stays = heating.along(OUTDOOR)
    assert set(heating.rated_condition) - set(stays) == {OUTDOOR, FLOW}
    found = heating.grid(OUTDOOR, [KELVIN - 9, KELVIN + 2, KELVIN + 15], stays)
    assert [p.conditions[FLOW] for p in found] == pytest.approx([KELVIN + 38, KELVIN + 34, KELVIN + 27])


def test_other_tables_keep_the_flow_temperature(heating: SystemModel, cold_room: SystemModel) -> None:
    """Over another condition the rated flow temperature stays, and without a curve all but the varied one does."""
    assert FLOW in heating.along("compressor_speed")
    key = "heat_sink_inlet_temperature"
    assert set(cold_room.rated_condition) - set(cold_room.along(key)) == {key}
