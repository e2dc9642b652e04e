"""At small loads superheat and subcooling are what the surfaces can give: lawful, and without a jump."""

from __future__ import annotations

import itertools
from collections.abc import Callable
from itertools import pairwise

import pytest

from commission.description import LoadedPlant
from commission.errors import NotCalculatedError
from commission.prediction import SystemModel, fit

KELVIN = 273.15
SYSTEMS = ("cold-room", "freezer-room", "dining-hall", "floor-heating", "shower-water")


@pytest.fixture(scope="module")
def models(example: LoadedPlant) -> dict[str, SystemModel]:
    """All systems of the example, fitted once."""
    return {name: fit(example, name) for name in SYSTEMS}


def _condition_box(model: SystemModel) -> list[dict[str, float]]:
    """The corners of the condition box over temperatures and speed, and the middles of its edges and sides."""
    axes = {k: a for k, a in model.condition_axes.items() if k.endswith("_temperature") or k == "compressor_speed"}
    levels = [(a.low, 0.5 * (a.low + a.high), a.high) for a in axes.values()]
    return [dict(zip(axes, at, strict=True)) for at in itertools.product(*levels)]


@pytest.mark.parametrize("name", SYSTEMS)
def test_second_law_at_both_exchangers_over_the_condition_box(models: dict[str, SystemModel], name: str) -> None:
    """Gas leaves the evaporator colder than its medium comes, liquid leaves the condenser warmer than its medium comes,
    and most of the box can be calculated."""
    model, calculated = models[name], 0
    box = _condition_box(model)
    for at in box:
        try:
            found, point = model._values(model.fit.plan, {**model.rated_condition, **at}, None)
        except NotCalculatedError:
            continue
        calculated += 1
        value, balance = found.values, point.balance
        gas = value["evaporating_temperature"] + value["superheat"]
        assert gas < balance.source_inlet_temperature
        assert value["liquid_temperature"] > balance.sink_inlet_temperature
        assert value["superheat"] > 0
    assert calculated > 0.6 * len(box)


def test_superheat_gives_way_at_a_small_load_without_a_jump(models: dict[str, SystemModel]) -> None:
    """The heat pump at its lowest speed in mild air holds less superheat than its valve is set to, and the way there
    has no step larger than half of the whole."""
    model = models["floor-heating"]
    mild = {"heat_source_inlet_temperature": 12 + KELVIN, "heat_sink_outlet_temperature": 28 + KELVIN}
    speeds = [25.0 + 2.5 * n for n in range(27)]
    found = [
        model._values(model.fit.plan, {**model.rated_condition, **mild, "compressor_speed": v}, None) for v in speeds
    ]
    superheats = [values.values["superheat"] for values, _ in found]
    assert superheats[0] < 0.95 * superheats[-1]
    assert all(b >= a - 1e-9 for a, b in pairwise(superheats))
    assert max(b - a for a, b in pairwise(superheats)) < 0.5 * (superheats[-1] - superheats[0])


def test_subcooling_without_a_receiver_shrinks_with_the_load(models: dict[str, SystemModel]) -> None:
    """The air conditioner keeps its share of the difference between bubble point and outdoor air: its subcooling
    falls with its speed. Behind the cold room's receiver it stays."""
    hall, room = models["dining-hall"], models["cold-room"]
    slow, fast = (hall.predict({"compressor_speed": v}).expected["subcooling"].value for v in (20.0, 80.0))
    assert 0 < slow < 0.6 * fast
    mild, hot = (
        room.predict({"heat_sink_inlet_temperature": t + KELVIN}).expected["subcooling"].value for t in (15, 36)
    )
    assert mild == pytest.approx(hot, abs=0.05)


def test_a_stated_exchanger_between_gas_and_liquid_is_in_the_model(written: Callable[[str], LoadedPlant]) -> None:
    """With its effectiveness stated the suction gas is warmer by half of the way to the liquid; without it a note says
    that it is not in the model."""
    text = """
duty: cold_storage
refrigerant: R-134a
heat_source: {medium: air}
heat_sink: {medium: air}
suction_exchanger: {EFFECT}
rated_points:
  - {heat_source_inlet_temperature: 2 °C, heat_sink_inlet_temperature: 32 °C, cooling_capacity: 4 kW,
     power_input: 1.6 kW}
"""
    plain, with_one = (fit(written(text.replace("EFFECT", e)), "it") for e in ("", "effectiveness: 50 %"))
    assert any("not in the model" in w for w in plain.predict().warnings)
    found = with_one.predict()
    assert not any("not in the model" in w for w in found.warnings)
    warmer = found.expected["suction_temperature"].value - plain.predict().expected["suction_temperature"].value
    assert 12 < warmer < 22
