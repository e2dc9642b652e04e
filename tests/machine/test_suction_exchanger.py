"""The exchanger between suction gas and liquid: a textbook cycle, the first law, and its known effects."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import pytest

from commission.machine import Media, SingleStage

Make = Callable[..., SingleStage]
Conditions = Callable[[float, float], Media]


def test_textbook_cycle_with_and_without_exchanger(ideal: Make, idle_media: Media) -> None:
    """Stoecker & Jones, Refrigeration and Air Conditioning, 2nd ed. 1982, problem 10-4 (from memory): R-22 between -10
    and 30 °C, isentropic; saturated vapour warmed to 5 °C by the liquid. COP 5.46 without and 5.37 with, to 1 %."""
    plain = ideal("R-22")
    fluid = plain.refrigerant
    compression, source, _ = plain.cycle(263.15, 303.15, idle_media)
    assert source / compression.power == pytest.approx(5.46, rel=0.01)
    dew = fluid.dew(263.15)
    share = (fluid.vapour(278.15, dew.p).h - dew.h) / (fluid.vapour(303.15, dew.p).h - dew.h)
    compression, source, _ = replace(plain, exchanger=share).cycle(263.15, 303.15, idle_media)
    assert source / compression.power == pytest.approx(5.37, rel=0.01)


@pytest.mark.parametrize("name", ["R-290", "R-134a", "R-454C"])
def test_first_law_and_what_the_liquid_gives(real: Make, cold_room_media: Conditions, name: str) -> None:
    """The circuit closes, the liquid loses what the gas gains, and neither crosses the other's inlet."""
    machine = real(name, exchanger=0.6)
    point = machine.operate(cold_room_media(2, 32))
    balance, compression = point.balance, point.balance.compression
    given = balance.heat_from_source + point.line_gain + compression.power - compression.shell_loss
    assert balance.heat_to_sink == pytest.approx(given, rel=1e-6)
    states = {s.label: s for s in point.states}
    assert point.liquid_temperature > states["6"].T
    assert states["6"].T > states["1"].T
    assert point.liquid_temperature > states["2"].T
    taken = compression.flow * (states["1"].h - states["6"].h)
    assert balance.heat_from_source == pytest.approx(taken, rel=1e-6)


def test_it_helps_propane_and_harms_ammonia(ideal: Make, idle_media: Media) -> None:
    """Domanski, Didion & Doyle, International Journal of Refrigeration 17 (1994) 434-442 (from memory): an exchanger
    gains with fluids of large heat capacity and loses with ammonia, for a cycle without other losses."""
    for name, sign in (("R-290", 1), ("R-134a", 1), ("R-717", -1)):
        plain = ideal(name)
        cops = []
        for share in (0.0, 0.7):
            compression, source, _ = replace(plain, exchanger=share).cycle(263.15, 313.15, idle_media)
            cops.append(source / compression.power)
        assert sign * (cops[1] - cops[0]) > 0


def test_gas_is_hotter_at_both_ends_of_the_compressor(real: Make, cold_room_media: Conditions) -> None:
    """Trend (common practice, no source): suction and discharge run hotter, and more so the better the exchanger."""
    found = [real(exchanger=share).operate(cold_room_media(2, 32)) for share in (0.0, 0.3, 0.6)]
    suctions = [p.suction_temperature for p in found]
    discharges = [p.discharge_temperature for p in found]
    assert suctions == sorted(suctions)
    assert discharges == sorted(discharges)
    assert suctions[-1] - suctions[0] > 10
