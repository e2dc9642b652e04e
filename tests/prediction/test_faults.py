"""Faults move the readings the way the trade knows (common practice, no source), and keep the laws."""

from __future__ import annotations

import pytest

from commission.description import LoadedPlant
from commission.errors import InputError, NotCalculatedError
from commission.prediction import FAULTS, SystemModel, fit, with_fault

SIGNS = {
    "condenser_fouling": {"discharge_pressure": 1, "condenser_temperature_difference": 1, "cooling_capacity": -1},
    "evaporator_fouling": {"suction_pressure": -1, "evaporator_temperature_difference": 1, "cooling_capacity": -1},
    "valve_leakage": {"suction_pressure": 1, "discharge_temperature": 1, "cooling_capacity": -1},
    "foreign_gas": {"discharge_pressure": 1, "discharge_temperature": 1, "cooling_capacity": -1},
    "feed_restriction": {"suction_pressure": -1, "superheat": 1, "cooling_capacity": -1, "discharge_temperature": 1},
    "flash_gas": {"suction_pressure": -1, "superheat": 1, "cooling_capacity": -1, "subcooling": -1},
    "undercharge": {"suction_pressure": -1, "superheat": 1, "cooling_capacity": -1, "subcooling": -1},
    "overcharge": {"discharge_pressure": 1, "condenser_temperature_difference": 1, "cooling_capacity": -1},
}
SIZES = {"condenser_fouling": 0.4, "evaporator_fouling": 0.4, "valve_leakage": 0.15, "foreign_gas": 1e5,
         "feed_restriction": 0.45, "flash_gas": 0.15, "undercharge": 0.37, "overcharge": 0.5}  # fmt: skip


@pytest.fixture(scope="module")
def shower(example: LoadedPlant) -> SystemModel:
    """The carbon-dioxide water heater of the example, fitted."""
    return fit(example, "shower-water")


def test_every_fault_is_tried() -> None:
    """The tables of these tests name every fault that the model carries."""
    assert set(SIGNS) == set(SIZES) == set(FAULTS)


@pytest.mark.parametrize("fault", SIGNS)
def test_readings_move_as_the_trade_knows(cold_room: SystemModel, fault: str) -> None:
    """Each fault moves the readings of the cold room in its known direction, and by more the larger it is."""
    healthy = cold_room.predict().expected
    less = 0.94 if fault == "undercharge" else 0.8  # below 0.3 the receiver hides it
    small = with_fault(cold_room, fault, less * SIZES[fault]).predict().expected
    large = with_fault(cold_room, fault, SIZES[fault]).predict().expected
    for key, sign in SIGNS[fault].items():
        assert sign * (small[key].value - healthy[key].value) > 0, key
        assert sign * (large[key].value - small[key].value) >= 0, key


@pytest.mark.parametrize("fault", SIGNS)
def test_a_sick_machine_keeps_the_first_law(cold_room: SystemModel, fault: str) -> None:
    """Heat given off is heat taken up, line gain and power less the heat of the shell; source and refrigerant agree."""
    found = with_fault(cold_room, fault, SIZES[fault]).predict()
    value, states = {k: e.value for k, e in found.expected.items()}, {s.name: s for s in found.states}
    flow = value["refrigerant_flow"]
    gain = flow * (states["compressor suction"].h - states["evaporator outlet"].h)
    assert value["heating_capacity"] <= value["cooling_capacity"] + gain + value["compressor_power"]
    taken = flow * (states["evaporator outlet"].h - states["before the valve"].h)
    assert value["cooling_capacity"] == pytest.approx(taken, rel=1e-6)


@pytest.mark.parametrize("fault", SIGNS)
def test_no_fault_changes_nothing(cold_room: SystemModel, fault: str) -> None:
    """A size of nothing is the healthy machine; a tiny one is next to it, so that nothing jumps."""
    assert with_fault(cold_room, fault, 0.0) is cold_room
    healthy = cold_room.predict().expected["cooling_capacity"].value
    tiny = with_fault(cold_room, fault, 1e-4 * SIZES[fault]).predict().expected["cooling_capacity"].value
    assert tiny == pytest.approx(healthy, rel=0.01)


def test_a_wide_valve_makes_up_for_a_small_restriction(cold_room: SystemModel) -> None:
    """A restriction within the valve's reserve is not seen; a greater one leaves the evaporator short of liquid."""
    assert with_fault(cold_room, "feed_restriction", 0.1).predict().regime == cold_room.predict().regime
    assert with_fault(cold_room, "feed_restriction", 0.45).predict().regime == "valve at its limit"


@pytest.mark.parametrize(
    ("fault", "size"), [("condenser_fowling", 0.1), ("condenser_fouling", 1.5), ("flash_gas", -0.1)]
)
def test_senseless_faults_are_refused(cold_room: SystemModel, fault: str, size: float) -> None:
    """An unknown fault or a size that cannot be is refused, with what is allowed or meant."""
    with pytest.raises(InputError) as caught:
        with_fault(cold_room, fault, size)
    problem = caught.value.problems[0]
    assert problem.allowed or problem.nearest == "condenser_fouling"


@pytest.mark.parametrize("fault", ["foreign_gas", "feed_restriction", "flash_gas", "undercharge"])
def test_what_is_not_carried_is_said(shower: SystemModel, fault: str) -> None:
    """Faults that need a condenser are refused for a circuit with a gas cooler, with the reason."""
    with pytest.raises(NotCalculatedError, match="gas cooler"):
        with_fault(shower, fault, 0.1)


def test_a_receiver_hides_a_loss_until_it_is_empty(cold_room: SystemModel) -> None:
    """With a receiver a loss of a fifth shows nowhere; when it is empty gas reaches the valve, not less subcooling."""
    healthy = cold_room.predict().expected
    hidden = with_fault(cold_room, "undercharge", 0.2).predict().expected
    assert hidden["subcooling"].value == healthy["subcooling"].value
    assert hidden["cooling_capacity"].value == healthy["cooling_capacity"].value
    assert with_fault(cold_room, "undercharge", 0.37).predict().expected["subcooling"].value == 0.0


def test_without_a_receiver_subcooling_goes_with_the_charge(example: LoadedPlant) -> None:
    """Without a receiver less charge means less subcooling down to none, more charge more subcooling and pressure."""
    hall = fit(example, "dining-hall")
    found = {0.0: hall.predict().expected}
    for change in (-0.25, -0.15, -0.05, 0.1, 0.2):
        fault = "undercharge" if change < 0 else "overcharge"
        found[change] = with_fault(hall, fault, abs(change)).predict().expected
    order = [found[change]["subcooling"].value for change in sorted(found)]
    assert order == sorted(order)
    assert order[0] == 0.0 < order[1]
    assert found[0.2]["discharge_pressure"].value > found[0.0]["discharge_pressure"].value
    assert found[0.1]["cooling_capacity"].value == pytest.approx(found[0.0]["cooling_capacity"].value, rel=0.05)


def test_an_empty_circuit_is_not_calculated(cold_room: SystemModel) -> None:
    """With half its charge gone the cold room's valve would get vapour alone: refused with that reason."""
    with pytest.raises(NotCalculatedError, match="vapour alone"):
        with_fault(cold_room, "undercharge", 0.5).predict()
