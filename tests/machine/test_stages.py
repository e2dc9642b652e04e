"""Capacity stages: machines that stand still cost nothing, machines that unload lose some, and the laws hold."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import pytest

from commission.machine import Compressor, Media, PolynomialCompressor, SingleStage, stage_of, staged

Make = Callable[..., SingleStage]
Conditions = Callable[[float, float], Media]
POLYNOMIAL = PolynomialCompressor(
    flow=(0.0128, 0.00046, -6e-5, 6e-6, -1e-6, 0.0, 0.0, 0.0, 0.0, 0.0),
    capacity=None,
    power=(620.0, 4.0, 21.0, 0.0, 0.1, 0.05, 0.0, 0.0, 0.0, 0.0),
)


def test_whole_machines_run_or_stand_still() -> None:
    """k of n machines have k/n of displacement and of power, whatever unloading costs, and share the power alike."""
    for count in range(1, 7):
        for running in range(1, count + 1):
            stage = stage_of(running / count, count, 0.3)
            assert stage.displacement == pytest.approx(running / count, rel=1e-12)
            assert stage.power == pytest.approx(running / count, rel=1e-12)
            assert stage.each == pytest.approx(1 / running, rel=1e-12)


def test_last_machine_unloads() -> None:
    """Three quarters of two machines: one whole, one at half that takes 0.5 + 0.3 of the other half of its power."""
    stage = stage_of(0.75, 2, 0.3)
    assert stage.displacement == 0.75
    assert stage.power == pytest.approx((1 + 0.5 + 0.3 * 0.5) / 2)
    assert stage.each * stage.power == pytest.approx(0.5)  # the whole one takes what it always does
    assert stage_of(0.25, 2, 0.3).each == 1.0


@pytest.mark.parametrize(("share", "count"), [(0.0, 1), (1.2, 1), (-0.5, 2), (0.5, 0)])
def test_what_is_no_stage(share: float, count: int) -> None:
    """Nothing, more than all, or a share of no machine is refused."""
    with pytest.raises(ValueError, match="no stage"):
        stage_of(share, count, 0.1)


@pytest.mark.parametrize("kind", ["displacement", "polynomials"])
def test_full_load_is_the_machine_itself(real: Make, cold_room_media: Conditions, kind: str) -> None:
    """The machine at its full stage balances where it does without stages, bit for bit."""
    machine = real() if kind == "displacement" else real(compressor=POLYNOMIAL)
    media = cold_room_media(2, 30)
    assert staged(machine, stage_of(1.0, 3, 0.2)).operate(media) == machine.operate(media)


@pytest.mark.parametrize("kind", ["displacement", "polynomials"])
def test_one_of_two_is_a_single_machine_of_half_the_size(real: Make, cold_room_media: Conditions, kind: str) -> None:
    """One of two machines on their common coils is a plant with one machine of half the size and the same coils."""
    media = cold_room_media(2, 30)
    machine = real() if kind == "displacement" else real(compressor=POLYNOMIAL)
    if kind == "displacement":
        assert isinstance(machine.compressor, Compressor)
        single = replace(machine, compressor=replace(machine.compressor, displacement=4.0 / 3600))
    else:
        assert POLYNOMIAL.flow is not None
        flow, power = (tuple(0.5 * c for c in given) for given in (POLYNOMIAL.flow, POLYNOMIAL.power))
        single = replace(machine, compressor=replace(POLYNOMIAL, flow=flow, power=power))
    one, alone = staged(machine, stage_of(0.5, 2, 0.3)).operate(media).balance, single.operate(media).balance
    for name in ("evaporating_temperature", "condensing_temperature", "heat_from_source", "heat_to_sink"):
        assert getattr(one, name) == pytest.approx(getattr(alone, name), rel=1e-9)
    assert one.compression.power == pytest.approx(alone.compression.power, rel=1e-9)


@pytest.mark.parametrize("name", ["R-290", "R-717", "R-454B"])
@pytest.mark.parametrize(("share", "count"), [(0.5, 1), (0.25, 1), (0.5, 2), (0.75, 2), (1 / 3, 3)])
def test_laws_hold_at_part_stage(real: Make, cold_room_media: Conditions, name: str, share: float, count: int) -> None:
    """First law on the circuit to 1e-6, entropy rises in the compressor, and evaporation is above that of full load,
    condensation below, the capacity below, but more than the share of it (component balance: Stoecker & Jones, 2nd ed.
    1982, ch. 14)."""
    media, machine = cold_room_media(2, 30), real(name)
    full, point = machine.operate(media), staged(machine, stage_of(share, count, 0.2)).operate(media)
    balance, compression = point.balance, point.balance.compression
    given = balance.heat_from_source + point.line_gain + compression.power - compression.shell_loss
    assert balance.heat_to_sink == pytest.approx(given, rel=1e-6)
    suction, discharge = (next(s for s in point.states if s.label == label) for label in ("2", "3"))
    assert discharge.s > suction.s
    assert balance.evaporating_temperature > full.balance.evaporating_temperature
    assert balance.condensing_temperature is not None
    assert full.balance.condensing_temperature is not None
    assert balance.condensing_temperature < full.balance.condensing_temperature
    assert share < balance.heat_from_source / full.balance.heat_from_source < 1


def test_unloading_heats_the_gas(real: Make, cold_room_media: Conditions) -> None:
    """Between like pressures the loss of an unloaded machine leaves with the gas: it is hotter than from a machine of
    that size, and all of the further power is found in the heat of the condenser."""
    machine, media = real(), cold_room_media(2, 30)
    whole, _, given = staged(machine, stage_of(0.5, 2, 0.2)).cycle(265.15, 313.15, media)
    unloaded, _, hotter = staged(machine, stage_of(0.5, 1, 0.2)).cycle(265.15, 313.15, media)
    assert unloaded.flow == pytest.approx(whole.flow, rel=1e-12)
    assert unloaded.power / whole.power == pytest.approx(0.6 / 0.5, rel=1e-12)
    assert unloaded.discharge_enthalpy > whole.discharge_enthalpy
    assert hotter - given == pytest.approx(0.95 * (unloaded.power - whole.power), rel=1e-9)  # 5 % leave by the shell


def test_shape_of_the_part_load_standard() -> None:
    """EN 14825 (from memory): COP at part load over that at full load is CR / (Cc CR + 1 - Cc); with Cc = 0.9 a machine
    that unloads with a loss of 0.1 has just that between the same pressures."""
    for share in (0.25, 0.5, 0.75):
        stage = stage_of(share, 1, 0.1)
        assert stage.displacement / stage.power == pytest.approx(share / (0.9 * share + 0.1), rel=1e-12)
