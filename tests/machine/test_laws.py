"""Every operating point is held to the first and second law, over seeded random conditions and refrigerants."""

from __future__ import annotations

import random
from collections.abc import Callable
from dataclasses import replace
from itertools import pairwise

import pytest

from commission.errors import NotCalculatedError
from commission.machine import HELD, HeadPressure, Media, SingleStage, carnot_cooling, entropic_mean
from commission.machine.head_pressure import By, heat_per_kelvin
from commission.properties import refrigerant

Make = Callable[..., SingleStage]
Conditions = Callable[[float, float], Media]
FLUIDS = ("R-290", "R-134a", "R-717", "R-454B", "R-407C")


@pytest.mark.parametrize("name", FLUIDS)
def test_first_law_on_the_circuit(real: Make, cold_room_media: Conditions, name: str) -> None:
    """Heat to the sink = heat from the source + line gain + work - shell loss, to 1e-6, exchangers and states alike."""
    rng = random.Random(f"first law {name}")
    for _ in range(12):
        media = cold_room_media(rng.uniform(-5, 15), rng.uniform(5, 40))
        machine = real(name)
        point = machine.operate(media)
        balance, compression = point.balance, point.balance.compression
        given = balance.heat_from_source + point.line_gain + compression.power - compression.shell_loss
        assert balance.heat_to_sink == pytest.approx(given, rel=1e-6)
        outlet = machine.refrigerant.vapour(balance.evaporating_temperature + balance.superheat, point.states[0].p)
        gas = compression.flow * (outlet.h - machine.refrigerant.dew(balance.evaporating_temperature).h)
        entering = media.source.temperature - gas / media.source.capacity_rate
        wetted = machine.evaporator.heat_per_kelvin(media.source, surface_share=1 - balance.dry_share)
        by_source = wetted * (entering - balance.source_drive) + gas
        by_sink = heat_per_kelvin(None, 1.0, machine.condenser, media.sink) * (
            balance.sink_drive - media.sink.temperature
        )
        assert by_source == pytest.approx(balance.heat_from_source, rel=1e-6)
        assert by_sink == pytest.approx(balance.heat_to_sink, rel=1e-6)


@pytest.mark.parametrize("name", FLUIDS)
def test_second_law(real: Make, cold_room_media: Conditions, name: str) -> None:
    """COP below Carnot between the media; entropy rises in compressor and valve; states run in the right direction."""
    rng = random.Random(f"second law {name}")
    for _ in range(12):
        media = cold_room_media(rng.uniform(-5, 15), rng.uniform(20, 40))
        point = real(name).operate(media)
        balance = point.balance
        source = entropic_mean(media.source.temperature, media.source.outlet(-balance.heat_from_source))
        sink = entropic_mean(media.sink.temperature, balance.sink_outlet_temperature)
        assert balance.heat_from_source / balance.compression.power < carnot_cooling(source, sink)
        states = {s.label: s for s in point.states}
        assert states["7"].s > states["6"].s
        assert states["3"].s > states["2"].s
        assert states["7"].h == pytest.approx(states["6"].h, rel=1e-6)
        assert states["3"].p > states["4"].p
        assert states["2"].p < states["1"].p
        assert balance.compression.flow > 0


def test_warmer_outdoors_means_more_work_and_less_cooling(real: Make, cold_room_media: Conditions) -> None:
    """Trend (common practice, no source): with outdoor temperature condensing rises, capacity and COP fall."""
    points = [real().operate(cold_room_media(2, t)).balance for t in range(5, 45, 5)]
    for cool, warm in pairwise(points):
        assert warm.condensing_temperature > cool.condensing_temperature
        assert warm.heat_from_source < cool.heat_from_source
        assert warm.heat_from_source / warm.compression.power < cool.heat_from_source / cool.compression.power


def test_start_changes_the_work_not_the_answer(real: Make, cold_room_media: Conditions) -> None:
    """A warm start gives the same balance to 1e-6 K with fewer evaluations."""
    machine = real()
    near = machine.balance(cold_room_media(2, 32))
    cold = machine.balance(cold_room_media(3, 34))
    warm = machine.balance(cold_room_media(3, 34), near)
    assert warm.evaporating_temperature == pytest.approx(cold.evaporating_temperature, abs=1e-6)
    assert warm.condensing_temperature == pytest.approx(cold.condensing_temperature, abs=1e-6)
    assert warm.evaluations < cold.evaluations


@pytest.mark.parametrize("by", ["fan speed", "fan cycling", "condenser flooding", "water valve"])
def test_head_pressure_takes_over_without_a_jump(real: Make, cold_room_media: Conditions, by: By) -> None:
    """Where head pressure begins to be held all is continuous, and below it the setting is kept."""
    machine = real(head_pressure=HeadPressure(by, 301.15))
    low, high = 0.0, 40.0
    for _ in range(50):
        middle = 0.5 * (low + high)
        held = machine.balance(cold_room_media(2, middle)).regime == HELD
        low, high = (middle, high) if held else (low, middle)
    below = machine.balance(cold_room_media(2, low - 1e-6))
    above = machine.balance(cold_room_media(2, high + 1e-6))
    assert below.regime == HELD
    assert above.regime != HELD
    assert below.condensing_temperature == pytest.approx(above.condensing_temperature, abs=1e-4)
    assert below.heat_from_source == pytest.approx(above.heat_from_source, rel=1e-5)
    assert below.sink_fan_share == pytest.approx(above.sink_fan_share, abs=1e-3)
    cold = machine.balance(cold_room_media(2, low - 12))
    assert cold.condensing_temperature == pytest.approx(301.15)
    assert cold.share < below.share


def test_control_at_its_lowest_lets_the_pressure_fall(real: Make, cold_room_media: Conditions) -> None:
    """When even the lowest share gives too much heat away, the condensing temperature falls and the regime says so."""
    machine = real(head_pressure=HeadPressure("fan speed", 308.15, least_share=0.5))
    point = machine.balance(cold_room_media(2, -15))
    assert point.condensing_temperature < 308.15
    assert point.regime == "head pressure below its setting, control at its lowest"
    assert point.share == 0.5


def test_no_balance_says_why(real: Make, cold_room_media: Conditions) -> None:
    """A condition far outside any plant is refused with a reason, not answered."""
    with pytest.raises(NotCalculatedError) as caught:
        real("R-744").operate(cold_room_media(2, 40))
    assert str(caught.value)


def test_regulator_limits_the_suction_pressure(real: Make, cold_room_media: Conditions) -> None:
    """A crankcase pressure regulator holds the suction pressure in a warm room and does nothing in a cold one."""
    limit = refrigerant("R-290").dew(270.15).p
    free, regulated = real(), real(suction_regulator=limit)
    warm, plain = regulated.operate(cold_room_media(20, 32)), free.operate(cold_room_media(20, 32))
    assert warm.suction_pressure == pytest.approx(limit)
    assert plain.suction_pressure > limit
    assert warm.balance.compression.power < plain.balance.compression.power
    assert warm.balance.evaporating_temperature > plain.balance.evaporating_temperature
    assert warm.balance.regime.startswith("suction pressure regulated")
    cold = cold_room_media(0, 32)
    assert regulated.balance(cold).evaporating_temperature == pytest.approx(free.balance(cold).evaporating_temperature)


def test_valve_limit_holds_the_evaporating_temperature_without_a_jump(real: Make, cold_room_media: Conditions) -> None:
    """Above its maximum operating pressure the valve starves the evaporator: superheat rises, nothing jumps."""
    machine = real(greatest_evaporating=270.15)
    low, high = 0.0, 20.0
    for _ in range(40):
        middle = 0.5 * (low + high)
        limited = machine.balance(cold_room_media(middle, 32)).regime.startswith("suction pressure limited")
        low, high = (low, middle) if limited else (middle, high)
    below, above = machine.balance(cold_room_media(low, 32)), machine.balance(cold_room_media(high, 32))
    assert below.evaporating_temperature == pytest.approx(above.evaporating_temperature, abs=1e-4)
    assert below.heat_from_source == pytest.approx(above.heat_from_source, rel=1e-4)
    assert above.superheat == pytest.approx(6.0, abs=0.01)
    warm = machine.operate(cold_room_media(high + 8, 32))
    assert warm.balance.evaporating_temperature == pytest.approx(270.15)
    assert warm.superheat > 8.0
    assert warm.superheat < high + 8 + 273.15 - 270.15
    given = warm.balance.heat_from_source + warm.line_gain + warm.balance.compression.power
    assert warm.balance.heat_to_sink == pytest.approx(given - warm.balance.compression.shell_loss, rel=1e-6)


@pytest.mark.parametrize(
    ("fault", "signs"),
    [
        ("leak", {"evaporating": 1, "condensing": -1, "capacity": -1}),
        ("gas", {"discharge": 1, "capacity": -1}),
        ("condenser", {"condensing": 1, "discharge": 1, "capacity": -1}),
        ("evaporator", {"evaporating": -1, "capacity": -1}),
    ],
)
def test_faults_are_parameters_with_the_published_signs(
    real: Make, cold_room_media: Conditions, fault: str, signs: dict[str, int]
) -> None:
    """Leaking valves, gas that does not condense, fouled condenser and evaporator move what Rossi & Braun 1997 (as
    repeated by Li 2004) and Chen & Braun 2001 say they move, for a machine with held superheat."""
    healthy = real()
    changes: dict[str, dict[str, object]] = {
        "leak": {"compressor": replace(healthy.compressor, leak=0.2)},  # type: ignore[call-arg]  # a displacement machine
        "gas": {"gas_pressure": 1.5e5},
        "condenser": {"condenser": replace(healthy.condenser, conductance=0.6 * healthy.condenser.conductance)},
        "evaporator": {"evaporator": replace(healthy.evaporator, conductance=0.6 * healthy.evaporator.conductance)},
    }
    media = cold_room_media(2, 32)
    plain, ill = healthy.operate(media), real(**changes[fault]).operate(media)
    found = {
        "evaporating": ill.balance.evaporating_temperature - plain.balance.evaporating_temperature,
        "condensing": ill.balance.sink_drive - plain.balance.sink_drive,
        "discharge": ill.discharge_pressure - plain.discharge_pressure,
        "capacity": ill.balance.heat_from_source - plain.balance.heat_from_source,
    }
    for key, sign in signs.items():
        assert found[key] * sign > 0
