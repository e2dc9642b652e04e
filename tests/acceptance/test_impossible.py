"""Readings that cannot be are called out; healthy ones, even badly measured, are not."""

from __future__ import annotations

import random

import pytest

from commission.acceptance import Budget, Component, Measured, derive, evaluate, impossible
from commission.description import LoadedPlant
from commission.prediction import SystemModel
from commission.properties import refrigerant
from tests.acceptance.visits import measured, visit


def rules(cold_room: LoadedPlant, model: SystemModel, **changes: float | None) -> set[str]:
    """Rules that call out a visit with these readings changed."""
    return {i.rule for i in evaluate(cold_room, model, *visit(cold_room, model, **changes)).impossible}


@pytest.mark.parametrize(
    ("changes", "rule"),
    [
        ({"suction_temperature": 262.0}, "superheat"),
        ({"liquid_temperature": 323.0}, "subcooling"),
        ({"suction_pressure": 15.5e5, "discharge_pressure": 3.8e5}, "pressures"),
        ({"heat_source_outlet_temperature": 277.0}, "source cools"),
        ({"heat_source_outlet_temperature": 264.0}, "source outlet above evaporating"),
        ({"heat_sink_outlet_temperature": 300.0}, "sink warms"),
        ({"heat_sink_outlet_temperature": 360.0}, "discharge above sink outlet"),
        ({"suction_pressure": 5.6e5}, "source above evaporating"),
        ({"discharge_pressure": 9e5}, "condensing above sink"),
        ({"discharge_temperature": 270.0}, "discharge above suction"),
        ({"discharge_temperature": 322.0}, "entropy of compression"),
        ({"liquid_temperature": 255.0}, "liquid above evaporating"),
        ({"power_input": -1600.0}, "power"),
    ],
)
def test_each_contradiction_is_called(
    cold_room: LoadedPlant, cold_room_model: SystemModel, changes: dict[str, float], rule: str
) -> None:
    """One impossible reading among expected ones is called out under its rule."""
    assert rule in rules(cold_room, cold_room_model, **changes)


def test_healthy_readings_are_not_called(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """Expected readings with errors as large as their instruments allow are never called impossible (200 visits)."""
    random.seed(5)
    asked, read = visit(cold_room, cold_room_model)
    exact = measured(cold_room, [*asked, *read])
    fluid = cold_room_model.refrigerant
    for _ in range(200):
        moved = {
            k: Measured(k, m.value + m.budget.standard * random.uniform(-1.7, 1.7), m.budget) for k, m in exact.items()
        }
        derived = {k: d.measured for k, d in derive(fluid, moved).items()}
        assert impossible(fluid, {**moved, **derived}) == ()


def test_carnot_and_first_law() -> None:
    """A COP above Carnot, and two routes that do not close, are called with their figures."""
    doubt = Budget((Component("meter", 0.1),))
    readings = {
        "cooling_cop": Measured("cooling_cop", 14.0, doubt),
        "heat_source_inlet_temperature": Measured("heat_source_inlet_temperature", 280.0),
        "heat_sink_inlet_temperature": Measured("heat_sink_inlet_temperature", 303.0),
    }
    fluid = refrigerant("R-134a")
    (found,) = impossible(fluid, readings)
    assert found.rule == "Carnot"
    assert [f.name for f in found.figures] == list(found.keys)
    assert impossible(fluid, {**readings, "cooling_cop": Measured("cooling_cop", 12.0, doubt)}) == ()
    power = {k: Measured(k, v, Budget((Component(k, 300.0),))) for k, v in (
        ("cooling_capacity", 30e3), ("heating_capacity", 45e3), ("compressor_power", 9e3))}  # fmt: skip
    (broken,) = impossible(fluid, power)
    assert broken.rule == "first law"
    assert broken.excess > broken.expanded
    closed = {**power, "heating_capacity": Measured("heating_capacity", 38.6e3, Budget((Component("x", 300.0),)))}
    assert impossible(fluid, closed) == ()


def test_a_poor_instrument_calls_nothing() -> None:
    """The same negative superheat is a contradiction with a good gauge and nothing with a poor one."""
    fluid = refrigerant("R-290")

    def superheat(u: float) -> tuple[object, ...]:
        return impossible(
            fluid, {"compressor_superheat": Measured("compressor_superheat", -2.0, Budget((Component("g", u),)))}
        )

    assert len(superheat(0.5)) == 1
    assert superheat(1.0) == ()
