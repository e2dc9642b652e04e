"""A map balanced all at once against the same points operated one by one."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from commission.errors import NotCalculatedError
from commission.machine import HeadPressure, OperatingMap, SingleStage, Stream, air_stream, operating_map
from commission.machine.maps import Array
from commission.machine.wet_air import coil_heat, coil_heats
from commission.properties import refrigerant
from tests.benchmarks.machines import machine, media

SOURCES, SINKS = np.linspace(-8.0, 12.0, 6), np.linspace(10.0, 38.0, 7)


def _streams(around: float | None) -> tuple[list[Stream], list[Stream], list[float]]:
    conditions = [[media(a, b, around) for b in SINKS] for a in SOURCES]
    sinks = [m.sink for m in conditions[0]]
    return [row[0].source for row in conditions], sinks, [m.surroundings for m in conditions[0]]


def _compare(one: SingleStage, found: OperatingMap, around: float | None) -> None:
    """Every point of the map within 1e-5 K (1e-4 K at the discharge) and 1e-6 of its own balance."""
    for i, source in enumerate(SOURCES):
        for j, sink in enumerate(SINKS):
            at = media(source, sink, around)
            try:
                point = one.operate(at)
            except NotCalculatedError:
                assert np.isnan(found.heat_from_source[i, j])
                assert found.because[i, j]
                continue
            balance = point.balance
            assert found.regimes[i][j] == balance.regime
            assert found.evaporating_temperature[i, j] == pytest.approx(balance.evaporating_temperature, abs=1e-5)
            assert found.condensing_temperature[i, j] == pytest.approx(balance.condensing_temperature, abs=1e-5)
            assert found.discharge_temperature[i, j] == pytest.approx(point.discharge_temperature, abs=1e-4)
            assert found.heat_from_source[i, j] == pytest.approx(balance.heat_from_source, rel=1e-6)
            assert found.heat_to_sink[i, j] == pytest.approx(balance.heat_to_sink, rel=1e-6)
            assert found.power[i, j] == pytest.approx(balance.compression.power, rel=1e-6)
            assert found.flow[i, j] == pytest.approx(balance.compression.flow, rel=1e-6)


@pytest.mark.parametrize(
    ("name", "air_share", "heating_share", "around"),
    [("R-290", None, 0.0, 20.0), ("R-290", 0.75, 0.1, None), ("R-454B", 0.75, 0.0, 20.0), ("R-717", None, 0.05, None)],
)
def test_a_map_gives_the_points_one_by_one(
    name: str, air_share: float | None, heating_share: float, around: float | None
) -> None:
    """Dry and wet coils, a suction line warmed by the air of the sink, pure and blend: the same to 1e-5 K."""
    one = machine(refrigerant(name), air_share, heating_share)
    found = operating_map(one, *_streams(around))
    assert found.charted.all()
    _compare(one, found, around)


def test_points_of_another_regime_are_operated_themselves() -> None:
    """Where head pressure is held the map leaves its chart, and regime and values are those of the machine."""
    one = replace(machine(refrigerant("R-290")), head_pressure=HeadPressure("fan speed", 303.15))
    found = operating_map(one, *_streams(20.0))
    assert found.charted.any()
    assert not found.charted.all()
    _compare(one, found, 20.0)


def test_a_limit_of_suction_pressure_is_kept() -> None:
    """Above the limit of the valve the evaporating temperature stands at it, on the map as in the machine."""
    one = replace(machine(refrigerant("R-290")), greatest_evaporating=270.0)
    found = operating_map(one, *_streams(20.0))
    assert float(found.evaporating_temperature.max()) == pytest.approx(270.0, abs=1e-6)
    assert found.charted.any()
    _compare(one, found, 20.0)


def test_a_place_without_a_balance_says_why() -> None:
    """A sink far above the critical point has no balance: the reason stands in the map, the other points do too."""
    one = machine(refrigerant("R-290"))
    sources, sinks, around = _streams(20.0)
    found = operating_map(one, sources, [*sinks, air_stream(390.0, 0.8, 0.0, 101325.0)], [*around, 293.15])
    assert set(found.because) == {(i, len(sinks)) for i in range(len(sources))}
    assert all(found.because.values())
    assert np.isfinite(found.heat_from_source[:, :-1]).all()
    assert np.isnan(found.heat_from_source[:, -1]).all()


def test_a_map_needs_surroundings_for_every_sink() -> None:
    """One temperature too few is refused, since it would be anybody's guess which sink it belongs to."""
    sources, sinks, around = _streams(20.0)
    with pytest.raises(ValueError, match="temperature around the pipes"):
        operating_map(machine(refrigerant("R-290")), sources, sinks, around[1:])


def test_many_coils_are_the_same_as_each() -> None:
    """Heat of wet, frosted and dry coils in one array equals that of each coil alone, to rounding."""
    streams = [
        air_stream(273.15 + t, 0.6, h, 98000.0) for t, h in ((12.0, 0.9), (2.0, 0.85), (-15.0, 0.7), (27.0, 0.3))
    ]
    drives: Array = np.linspace(245.0, 292.0, 40)[None, :] * np.ones((4, 1))
    for share in (0.5, 0.75, 1.0):
        found = coil_heats(streams, drives, np.array([[900.0], [500.0], [700.0], [300.0]]), share)
        for i, (stream, conductance) in enumerate(zip(streams, (900.0, 500.0, 700.0, 300.0), strict=True)):
            each = [coil_heat(stream, float(t), conductance, share) for t in drives[i]]
            assert found[i] == pytest.approx(each, rel=1e-9, abs=1e-6)
