"""Vapour-compression cycles of textbooks and handbooks, each with its source and the tolerance that follows."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from commission.machine import Media, SingleStage, carnot_cooling
from commission.properties import refrigerant

Make = Callable[..., SingleStage]


def _ideal(machine: SingleStage, media: Media, evaporating: float, condensing: float) -> tuple[float, float, float]:
    """Refrigerating effect and work in J/kg, and COP."""
    compression, source, _ = machine.cycle(evaporating, condensing, media)
    return source / compression.flow, compression.power / compression.flow, source / compression.power


def test_cengel_ideal_cycle(ideal: Make, idle_media: Media) -> None:
    """Cengel & Boles, Thermodynamics, 6th-7th ed., example 11-1: R-134a, 0.14/0.8 MPa, 0.05 kg/s; 0.5 %."""
    fluid = refrigerant("R-134a")
    effect, work, cop = _ideal(ideal("R-134a"), idle_media, fluid.dew_temperature(0.14e6), fluid.dew_temperature(0.8e6))
    assert 0.05 * effect == pytest.approx(7180, rel=5e-3)
    assert 0.05 * work == pytest.approx(1810, rel=5e-3)
    assert 0.05 * (effect + work) == pytest.approx(8990, rel=5e-3)
    assert cop == pytest.approx(3.97, rel=5e-3)


def test_cengel_actual_cycle() -> None:
    """Cengel & Boles, example 11-2: suction 0.14 MPa -10 °C, discharge 0.8 MPa 50 °C, liquid 0.72 MPa 26 °C; 0.5 %."""
    fluid = refrigerant("R-134a")
    suction = fluid.vapour(263.15, 0.14e6)
    discharge = fluid.vapour(323.15, 0.8e6)
    liquid = fluid.liquid(299.15, 0.72e6)
    end = fluid.isentropic_end(suction, 0.8e6)
    assert 0.05 * (suction.h - liquid.h) == pytest.approx(7930, rel=5e-3)
    assert 0.05 * (discharge.h - suction.h) == pytest.approx(2020, rel=5e-3)
    assert (end.h - suction.h) / (discharge.h - suction.h) == pytest.approx(0.939, rel=5e-3)
    assert (suction.h - liquid.h) / (discharge.h - suction.h) == pytest.approx(3.93, rel=5e-3)


def test_moran_shapiro_carnot_like(ideal: Make, idle_media: Media) -> None:
    """Moran & Shapiro, example 10.1: R-134a between 0 and 26 °C, 0.08 kg/s; other tables, 1 %."""
    effect, work, cop = _ideal(ideal("R-134a"), idle_media, 273.15, 299.15)
    assert 0.08 * work == pytest.approx(1400, rel=1e-2)
    assert 0.08 * effect == pytest.approx(3.67 * 211e3 / 60, rel=1e-2)
    assert cop == pytest.approx(9.24, rel=1e-2)
    assert carnot_cooling(273.15, 299.15) == pytest.approx(10.5, rel=1e-2)


def test_moran_shapiro_nine_bar(ideal: Make, idle_media: Media) -> None:
    """Moran & Shapiro, example 10.2: R-134a from -10 °C saturated vapour to 9 bar, 0.08 kg/s; other tables, 1 %."""
    condensing = refrigerant("R-134a").dew_temperature(9e5)
    effect, work, cop = _ideal(ideal("R-134a"), idle_media, 263.15, condensing)
    assert 0.08 * work == pytest.approx(2480, rel=1e-2)
    assert 0.08 * effect == pytest.approx(3.23 * 211e3 / 60, rel=1e-2)
    assert cop == pytest.approx(4.57, rel=1e-2)


def test_borgnakke_sonntag_ideal(ideal: Make, idle_media: Media) -> None:
    """Borgnakke & Sonntag, ideal cycle example: R-134a -20/40 °C, 0.03 kg/s; 0.5 %."""
    effect, work, cop = _ideal(ideal("R-134a"), idle_media, 253.15, 313.15)
    assert work == pytest.approx(42.3e3, rel=5e-3)
    assert effect == pytest.approx(129.6e3, rel=5e-3)
    assert cop == pytest.approx(3.06, rel=5e-3)
    assert 0.03 * effect == pytest.approx(3890, rel=5e-3)


@pytest.mark.parametrize(("name", "cop"), [("R-717", 4.76), ("R-290", 4.55), ("R-134a", 4.60), ("R-22", 4.66)])
def test_ashrae_comparative_performance(ideal: Make, idle_media: Media, name: str, cop: float) -> None:
    """ASHRAE Handbook Fundamentals, comparative refrigerant performance at -15/30 °C (figures from memory): 2 %."""
    assert _ideal(ideal(name), idle_media, 258.15, 303.15)[2] == pytest.approx(cop, rel=0.02)


def test_cengel_reversed_carnot_heat_pump() -> None:
    """Cengel, reversed Carnot heat pump: 21 °C indoors, -5 °C outdoors, 135 000 kJ/h: COP 11.3, 3.32 kW."""
    heating = carnot_cooling(268.15, 294.15) + 1
    assert heating == pytest.approx(11.3, rel=2e-3)
    assert 135e6 / 3600 / heating == pytest.approx(3320, rel=5e-3)


def test_heating_is_cooling_plus_one_without_loss(ideal: Make, idle_media: Media) -> None:
    """Heating COP = cooling COP + 1 on a circuit that loses nothing (first law)."""
    compression, source, sink = ideal("R-290").cycle(263.15, 313.15, idle_media)
    assert sink / compression.power == pytest.approx(source / compression.power + 1, rel=1e-12)
