"""Every refrigerant over seeded random plausible machines and conditions: no failure, no law broken."""

from __future__ import annotations

import random

import pytest

from commission.errors import NotCalculatedError
from commission.machine import (
    Compressor,
    Exchanger,
    Media,
    OperatingPoint,
    SingleStage,
    SuctionLine,
    Transcritical,
    air_stream,
)
from commission.properties import PropertyRangeError, Refrigerant, refrigerant, register
from tests.machine.conftest import RECIPROCATING


def _names() -> list[str]:
    known = []
    for name in register():
        try:
            refrigerant(name)
        except NotCalculatedError:
            continue
        known.append(name)
    return known


def _random_point(fluid: Refrigerant, rng: random.Random) -> OperatingPoint | None:
    """A machine sized for 5 kW within 40 %, air -30 to 20 °C against air 12 to 45 K warmer and below the
    critical point; None where its compression ends hotter than the equation of state is made for."""
    source = rng.uniform(243.15, 293.15)
    highest = 318.15 if fluid.name == "R-744" else min(0.93 * fluid.T_critical - 12.0, 333.15)
    sink = min(source + rng.uniform(12.0, 45.0), highest)
    if sink < source + 8.0:
        return None
    cold = max(source - 8.0, fluid.T_triple + 5.0)
    effect = fluid.dew(cold).h - fluid.bubble(min(sink + 12.0, 0.9 * fluid.T_critical)).h
    swept = 5000.0 / (fluid.dew(cold).rho * effect * 0.8) * rng.uniform(0.6, 1.3)
    compressor = Compressor(swept, 0.95, 0.9, RECIPROCATING, 0.05)
    evaporator = Exchanger(700.0 * rng.uniform(0.5, 2.0), 0.6, 0.5, 0.75)
    condenser = Exchanger(600.0 * rng.uniform(0.8, 2.0), 0.8, 0.5)
    line = SuctionLine(1.0, warming=3.0)
    machine: SingleStage | Transcritical
    if fluid.name == "R-744":
        machine = Transcritical(fluid, compressor, evaporator, condenser, 6.0, 0.0, line)
    else:
        machine = SingleStage(fluid, compressor, evaporator, condenser, 6.0, 2.0, line, 0.4)
    media = Media(air_stream(source, 0.6, 0.8, 101325.0), air_stream(sink, 0.8, 0.4, 101325.0), 293.15)
    try:
        return machine.operate(media)
    except PropertyRangeError as error:
        if "where the equation of state holds" in str(error):
            return None
        raise


def _check(name: str, count: int) -> None:
    fluid, rng = refrigerant(name), random.Random(f"robust {name}")
    done = 0
    for _ in range(6 * count):
        point = _random_point(fluid, rng) if done < count else None
        if point is None:
            continue
        done += 1
        balance, compression = point.balance, point.balance.compression
        given = balance.heat_from_source + point.line_gain + compression.power - compression.shell_loss
        assert balance.heat_to_sink == pytest.approx(given, rel=1e-6)
        assert compression.flow > 0
        assert balance.source_drive < balance.source_inlet_temperature
        assert balance.sink_drive > balance.sink_inlet_temperature
        assert fluid.T_triple < balance.evaporating_temperature
    assert done == count


@pytest.mark.parametrize("name", _names())
def test_a_few_random_machines(name: str) -> None:
    """Six seeded random machines of each refrigerant balance and keep the first law, flows positive, heat downhill."""
    _check(name, 6)


def test_a_lift_at_which_the_cylinder_only_just_fills() -> None:
    """At -29.5 °C against 14 °C the gas of R-1336mzz(Z) left in the clearance fills the cylinder at the usual first
    guess; nearer to the media there is a balance, with little flow."""
    fluid = refrigerant("R-1336mzz(Z)")
    compressor = Compressor(0.4, 0.95, 0.9, RECIPROCATING, 0.05)
    machine = SingleStage(fluid, compressor, Exchanger(700.0, 0.6, 0.5, 0.75), Exchanger(600.0, 0.8, 0.5), 6.0, 2.0,
                          SuctionLine(1.0, warming=3.0), 0.4)  # fmt: skip
    media = Media(air_stream(243.6, 0.6, 0.8, 101325.0), air_stream(287.2, 0.8, 0.4, 101325.0), 293.15)
    balance = machine.operate(media).balance
    assert balance.compression.flow > 0
    assert 243.6 - 8.0 < balance.evaporating_temperature < 243.6


@pytest.mark.long
@pytest.mark.parametrize("name", _names())
def test_many_random_machines(name: str) -> None:
    """Two thousand seeded random machines of each refrigerant: no failure, no law broken."""
    _check(name, 2000)
