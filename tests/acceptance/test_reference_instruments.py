"""Instrument classes, and what a gauge does to a superheat, against published figures."""

from __future__ import annotations

import math

import pytest

from commission.acceptance.instruments import Statement, instrument_class
from commission.acceptance.tolerances import ahri_550_tolerance
from commission.properties import refrigerant


@pytest.mark.parametrize(("name", "limit"), [("AA", 0.185), ("A", 0.25), ("B", 0.55), ("C", 1.1)])
def test_iec_60751_at_50_degrees(name: str, limit: float) -> None:
    """IEC 60751:2022 tolerance classes at 50 °C, in K (formulas from memory, sure)."""
    entry = instrument_class(f"IEC 60751 {name}", "temperature")
    found = Statement(absolute=entry["absolute"], of_reading=entry["of_reading"])
    assert found.limit(50.0) == pytest.approx(limit)
    assert found.limit(-50.0) == pytest.approx(limit)


def test_thermocouple_class_has_a_floor() -> None:
    """IEC 60584-1 type T class 1: the larger of 0.5 K and 0.004 |t| (from memory)."""
    entry = instrument_class("IEC 60584-1 T class 1", "temperature")
    found = Statement(of_reading=entry["of_reading"], at_least=entry["at_least"])
    assert found.limit(50.0) == pytest.approx(0.5)
    assert found.limit(200.0) == pytest.approx(0.8)


def test_en_1434_flow_class_2() -> None:
    """EN 1434 class 2: 2 + 0.02 qp/q per cent, never more than 5 % (from memory)."""
    entry = instrument_class("EN 1434 class 2", "volume flow")
    numbers = {k: v for k, v in entry.items() if isinstance(v, float)}
    found = Statement(**numbers, end=10.0)
    assert found.limit(10.0) / 10.0 == pytest.approx(0.0202)
    assert found.limit(1.0) == pytest.approx(0.022)
    assert found.limit(0.05) / 0.05 == pytest.approx(0.05)


def test_a_manifold_gauge_is_the_largest_part_of_a_superheat() -> None:
    """0.5 % of 34 bar is 0.17 bar: at R-134a, -10 °C, 2.1 K of superheat (slope 0.079 bar/K, common knowledge)."""
    fluid = refrigerant("R-134a")
    pressure = fluid.dew(263.15).p
    slope = (fluid.dew_temperature(pressure + 500.0) - fluid.dew_temperature(pressure - 500.0)) / 1000.0
    assert 1e-5 / slope == pytest.approx(0.079, abs=0.001)
    limit = Statement(of_span=0.005, span=34e5).limit(1e5)
    assert limit * slope == pytest.approx(2.1, abs=0.1)


def test_ahri_550_tolerance_table() -> None:
    """ANSI/AHRI 550/590-2011: 5.00, 7.25, 10.0, 14.75 % at 100, 75, 50, 25 % load and 10 °F range."""
    found = [ahri_550_tolerance(load, 10 / 1.8) for load in (1.0, 0.75, 0.5, 0.25)]
    assert found == [pytest.approx(x) for x in (0.05, 0.0725, 0.10, 0.1475)]
    with pytest.raises(ValueError, match="positive"):
        ahri_550_tolerance(0.0, 5.0)


def test_rectangular_limits_become_standard_uncertainties() -> None:
    """JCGM 100, 4.3.7: a largest permissible error a gives the standard uncertainty a / sqrt(3)."""
    from commission.acceptance.instruments import instrument_budget
    from commission.description.model import Instrument

    probe = Instrument.model_validate(
        {"measures": "temperature", "class": "IEC 60751 A", "calibrated_until": "2027-01-01"}
    )
    budget = instrument_budget(probe, "liquid_temperature", 323.15, 101325.0)
    assert budget.standard == pytest.approx(0.25 / math.sqrt(3.0))
