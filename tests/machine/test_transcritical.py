"""Transcritical carbon dioxide: best pressure, continuity through the critical point, the laws."""

from __future__ import annotations

from itertools import pairwise

import pytest

from commission.machine import (
    Compressor,
    EfficiencyShape,
    Exchanger,
    GasCoolerPressure,
    Media,
    SuctionLine,
    Transcritical,
    air_stream,
    best_pressure,
    carnot_cooling,
    entropic_mean,
    liao_best_pressure,
    liquid_stream,
)
from commission.machine.gas_cooler import needed_conductance, outlet_state, subcritical_pressure
from commission.properties import liquid, refrigerant

SHAPE = EfficiencyShape(0.03, 1.1, 0.006, 0.15, 0.06)


def _machine(pressure: GasCoolerPressure | None = None) -> Transcritical:
    return Transcritical(
        refrigerant("R-744"),
        Compressor(3.3e-4, 0.95, 0.9, SHAPE, 0.05),
        Exchanger(500.0, 0.6, 0.5),
        Exchanger(500.0, 3e-5, 0.3),
        5.0,
        0.0,
        SuctionLine(0.5, warming=2.0),
        pressure=pressure or GasCoolerPressure("follows the gas-cooler outlet"),
    )


def _media(water: float) -> Media:
    source = air_stream(280.15, 0.6, 0.8, 101325.0)
    return Media(source, liquid_stream(water, 5e-5, liquid("water", 0.0)), 288.15)


@pytest.mark.parametrize("outlet", [30.0, 35.0, 40.0, 45.0])
def test_reference_best_pressure(outlet: float) -> None:
    """Pressure of best COP at -10 °C evaporating against Liao, Zhao & Jakobsen, Applied Thermal Engineering 20 (2000)
    831-841, made for outlets of 30 to 60 °C and evaporation at -10 to 20 °C: within 1.5 %."""
    fluid = refrigerant("R-744")
    suction = fluid.vapour(268.15, fluid.dew(263.15).p)

    def cop(p: float) -> float:
        work = fluid.isentropic_end(suction, p).h - suction.h
        return (suction.h - outlet_state(fluid, outlet + 273.15, p).h) / work

    assert best_pressure(cop, 7.4e6, 1.4e7) == pytest.approx(liao_best_pressure(outlet + 273.15, 263.15), rel=0.015)


def test_nothing_fails_or_jumps_through_the_critical_point() -> None:
    """Water from 5 to 45 °C in steps of 0.5 K: always a balance, high pressure and COP without a jump."""
    machine, last, found = _machine(), None, []
    for n in range(81):
        last = machine.balance(_media(278.15 + 0.5 * n), last)
        pressure = last.compression.pressure_ratio
        found.append((pressure, last.heat_to_sink / last.compression.power))
    assert found[0][0] < found[-1][0]
    for (p_cold, cop_cold), (p_warm, cop_warm) in pairwise(found):
        assert 0 < p_warm - p_cold < 0.06
        assert 0 < cop_cold - cop_warm < 0.08
    steps = [a - b for (_, a), (_, b) in pairwise(found)]
    assert all(abs(b - a) < 0.02 for a, b in pairwise(steps))


def test_laws_hold() -> None:
    """First law to 1e-6, COP below Carnot between entropic means, entropy rises, water never hotter than the gas."""
    for water in (281.15, 293.15, 308.15):
        media = _media(water)
        point = _machine().operate(media)
        balance, compression = point.balance, point.balance.compression
        given = balance.heat_from_source + point.line_gain + compression.power - compression.shell_loss
        assert balance.heat_to_sink == pytest.approx(given, rel=1e-6)
        source = entropic_mean(media.source.temperature, media.source.outlet(-balance.heat_from_source))
        sink = entropic_mean(water, balance.sink_outlet_temperature)
        assert balance.heat_from_source / compression.power < carnot_cooling(source, sink)
        assert water < point.liquid_temperature
        assert balance.sink_outlet_temperature < point.discharge_temperature
        states = {s.label: s for s in point.states}
        assert states["7"].s > states["6"].s
        assert states["3"].s > states["2"].s


def test_a_fixed_set_point_is_kept_while_it_is_transcritical() -> None:
    """A fixed high pressure of 95 bar is held to the width of the change-over; nothing condenses then."""
    point = _machine(GasCoolerPressure("fixed set point", 95e5)).operate(_media(293.15))
    assert point.discharge_pressure == pytest.approx(95e5, rel=0.02)
    assert point.balance.condensing_temperature is None
    assert point.subcooling is None


def test_a_crossing_needs_an_endless_gas_cooler() -> None:
    """The conductance grows without bound as the gas is to leave at, then below, the temperature of the water."""
    fluid = refrigerant("R-744")
    sink = _media(293.15).sink
    inlet = fluid.vapour(363.15, 95e5).h if fluid.p_critical > 95e5 else fluid.supercritical(363.15, 95e5).h
    needed = [
        needed_conductance(fluid, 0.01, inlet, outlet_state(fluid, t, 95e5), sink) for t in (303.15, 295.15, 291.15)
    ]
    assert needed[0] < needed[1] < needed[2]
    assert needed[2] > 6 * needed[0]


def test_continued_saturation_is_smooth() -> None:
    """The saturation pressure continued above the critical point has no jump in value or slope."""
    fluid = refrigerant("R-744")
    top = fluid.T_critical - 4.0
    step = 0.05
    values = [subcritical_pressure(fluid, top + n * step) for n in (-2, -1, 0, 1, 2)]
    slopes = [b - a for a, b in pairwise(values)]
    assert max(slopes) == pytest.approx(min(slopes), rel=0.02)


def test_once_through_water_sets_its_flow() -> None:
    """With inlet and outlet of the water known the flow follows from the heat (first law on the water)."""
    water = liquid("water", 0.0)
    sink = liquid_stream(290.15, 5e-5, water)
    wanted = type(sink)(sink.temperature, sink.volume_flow, sink.mass_flow, sink.capacity_rate, outlet_wanted=338.15)
    balance = _machine(GasCoolerPressure("fixed set point", 95e5)).balance(Media(_media(290.0).source, wanted, 288.15))
    assert balance.sink_outlet_temperature == pytest.approx(338.15)
    settled = wanted.settled(balance.heat_to_sink)
    assert settled.capacity_rate * 48.0 == pytest.approx(balance.heat_to_sink)
