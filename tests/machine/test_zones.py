"""The dry zone of the evaporator and the subcooled zone of the condenser: what surfaces can give, and no more."""

from __future__ import annotations

import itertools
import math
import random
from collections.abc import Callable
from dataclasses import replace

import pytest

from commission.errors import NotCalculatedError
from commission.machine import (
    Compressor,
    Exchanger,
    Media,
    SingleStage,
    SuctionLine,
    air_stream,
    between,
    liquid_stream,
    within_reach,
)
from commission.properties import liquid, refrigerant
from tests.machine.conftest import RECIPROCATING

Make = Callable[..., SingleStage]
Conditions = Callable[[float, float], Media]


def test_a_setting_is_held_where_there_is_room_and_gives_way_smoothly() -> None:
    """6 K of a possible 10 K stay 6 K to the bit, 6 K of a possible 3 K become the share, without a step or a bend."""
    assert within_reach(6.0, 10.0, 0.85) == 6.0
    assert within_reach(6.0, 3.0, 0.85) == pytest.approx(2.55)
    assert within_reach(math.inf, 10.0, 0.4) == pytest.approx(4.0)
    steps = [within_reach(6.0, 0.01 * n, 0.85) for n in range(200, 1200)]
    slopes = [b - a for a, b in itertools.pairwise(steps)]
    assert all(s >= 0 for s in slopes)
    assert max(abs(b - a) for a, b in itertools.pairwise(slopes)) < 1e-4


@pytest.mark.parametrize(("ratio", "within"), [(1.0, 1e-12), (1.5, 0.01), (3.0, 0.05), (5.0, 0.11)])
def test_geometric_mean_difference_is_near_the_logarithmic_one(ratio: float, within: float) -> None:
    """Incropera & DeWitt, 6th ed., eq. 11.15: the logarithmic mean; the geometric one lies below it by 5 % at a ratio
    of 3 and 11 % at 5 (series of both in ln ratio), so that a little more surface is asked for."""
    log_mean = 4.0 * (ratio - 1) / math.log(ratio) if ratio > 1 else 4.0
    assert between(4.0, 4.0 * ratio) <= log_mean * (1 + 1e-12)
    assert between(4.0, 4.0 * ratio) == pytest.approx(log_mean, rel=within)


def test_heat_of_both_zones_is_that_of_the_refrigerant(real: Make, cold_room_media: Conditions) -> None:
    """The dry share transfers the heat of superheating over the geometric mean difference, by the definition of UA."""
    machine, media = real(), cold_room_media(2, 32)
    point = machine.operate(media)
    balance, fluid = point.balance, machine.refrigerant
    gas = balance.compression.flow * (point.states[0].h - fluid.dew(balance.evaporating_temperature).h)
    difference = 275.15 - balance.evaporating_temperature
    mean = math.sqrt(difference * (difference - balance.superheat))
    conductance = machine.evaporator.gas_share * balance.dry_share * machine.evaporator.conductance
    assert conductance * mean == pytest.approx(gas, rel=1e-6)


def test_more_superheat_costs_evaporating_temperature(real: Make, cold_room_media: Conditions) -> None:
    """Trend (common practice, no source): more superheat means colder evaporation and less capacity."""
    found = [real(superheat=v).operate(cold_room_media(2, 32)).balance for v in (2.0, 4.0, 6.0)]
    for less, more in itertools.pairwise(found):
        assert more.dry_share > less.dry_share
        assert more.evaporating_temperature < less.evaporating_temperature
        assert more.heat_from_source < less.heat_from_source


def test_a_medium_known_by_its_outlet_gives_the_same_point(real: Make) -> None:
    """Brine stated by the outlet temperature that it has at a point stated by its inlet leads to that point again."""
    brine = liquid("propylene glycol", 0.3)
    sink = air_stream(305.15, 2600 / 3600, 0.5, 101325.0)
    by_inlet = Media(liquid_stream(278.15, 0.9 / 3600, brine), sink, 305.15)
    machine = real(evaporator=Exchanger(900.0, 0.9 / 3600, 0.5))
    one = machine.operate(by_inlet)
    outlet = by_inlet.source.outlet(-one.balance.heat_from_source)
    stream = replace(by_inlet.source, temperature=outlet, by_outlet=True)
    other = machine.operate(replace(by_inlet, source=stream))
    assert other.balance.source_inlet_temperature == pytest.approx(278.15, abs=1e-6)
    assert other.balance.evaporating_temperature == pytest.approx(one.balance.evaporating_temperature, abs=1e-6)
    assert other.superheat == pytest.approx(one.superheat, abs=1e-6)


def test_subcooling_follows_the_difference_to_the_sink(real: Make, cold_room_media: Conditions) -> None:
    """Without a receiver the liquid keeps its share of the way from bubble point to entering air, at any load."""
    machine = real(subcooling=math.inf, subcooling_share=0.4)
    for outdoors in (10.0, 35.0):
        point = machine.operate(cold_room_media(2, outdoors))
        bubble = point.liquid_temperature + (point.subcooling or 0.0)
        assert point.subcooling == pytest.approx(0.4 * (bubble - outdoors - 273.15), rel=1e-9)


@pytest.mark.parametrize("name", ["R-290", "R-717", "R-407C", "R-454C"])
def test_any_size_of_exchanger_keeps_the_second_law(name: str) -> None:
    """Compressors from a tenth to one and a half of their coils, superheats of 2 to 10 K, seeded: gas leaves colder
    than the air comes, liquid warmer than the air that cools it, and every one of them has a balance."""
    fluid, rng = refrigerant(name), random.Random(f"zones {name}")
    for _ in range(40):
        source = rng.uniform(253.15, 290.15)
        sink = min(source + rng.uniform(15.0, 45.0), 328.15)
        effect = fluid.dew(source - 8).h - fluid.bubble(sink + 12).h
        swept = 5000.0 / (fluid.dew(source - 8).rho * effect * 0.8) * rng.choice([0.1, 0.2, 0.4, 1.0, 1.5])
        machine = SingleStage(
            fluid, Compressor(swept, 0.95, 0.9, RECIPROCATING, 0.05),
            Exchanger(700 * rng.uniform(0.5, 4), 0.6, 0.5, rng.choice([None, 0.75]), rng.choice([0.1, 0.25, 0.5])),
            Exchanger(600 * rng.uniform(0.8, 3), 0.8, 0.5), rng.uniform(2, 10), math.inf, SuctionLine(1.0, warming=2.0),
            0.4, subcooling_share=rng.uniform(0.1, 0.85),
        )  # fmt: skip
        media = Media(air_stream(source, 0.6, 0.8, 101325.0), air_stream(sink, 0.8, 0.4, 101325.0), 293.15)
        point = machine.operate(media)
        assert point.balance.evaporating_temperature + point.superheat < source
        assert point.liquid_temperature > sink
        assert 0 < point.balance.dry_share < 1


def test_a_starved_evaporator_never_heats_gas_to_the_air(real: Make, cold_room_media: Conditions) -> None:
    """However far the valve limits suction in a warm room, superheat stays below the whole difference, and rises."""
    machine, before = real(greatest_evaporating=263.15), 0.0
    for room in (2.0, 10.0, 20.0):
        try:
            point = machine.operate(cold_room_media(room, 32))
        except NotCalculatedError:
            pytest.fail(f"no balance in a room of {room} °C")
        assert before < point.superheat < room + 273.15 - 263.15
        before = point.superheat
