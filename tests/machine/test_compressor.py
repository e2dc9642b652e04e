"""Efficiency shapes: peak and decline to both sides, limits, refusals."""

from __future__ import annotations

import pytest

from commission.errors import NotCalculatedError
from commission.machine import Compressor, EfficiencyShape
from commission.properties import refrigerant
from tests.machine.conftest import RECIPROCATING

SCROLL = EfficiencyShape(0.0, 1.1, 0.025, 0.10, 0.08, 2.7)


def _efficiencies(shape: EfficiencyShape, ratios: list[float]) -> list[float]:
    fluid = refrigerant("R-134a")
    suction = fluid.vapour(275.15, fluid.dew(265.15).p)
    compressor = Compressor(1e-3, 1.0, 1.0, shape)
    return [compressor.compress(fluid, suction, suction.p * r).isentropic_efficiency for r in ratios]


@pytest.mark.parametrize("shape", [RECIPROCATING, SCROLL])
def test_isentropic_efficiency_peaks_between_two_and_six(shape: EfficiencyShape) -> None:
    """Isentropic efficiency peaks between pressure ratios 2 and 6, falls to both sides (common practice, no source)."""
    ratios = [1.2 + 0.2 * n for n in range(45)]
    values = _efficiencies(shape, ratios)
    best = values.index(max(values))
    assert 2 < ratios[best] < 6
    assert values[0] < 0.8 * max(values)
    assert values[-1] < 0.93 * max(values)
    assert max(values) < 1


def test_clearance_limits_the_pressure_ratio() -> None:
    """Volumetric efficiency falls by re-expansion: 1 - 0.04 (8^(1/1.1) - 1) at ratio 8 (Gosney 1982, ch. 4)."""
    shape = EfficiencyShape(0.04, 1.1, 0.0, 0.0, 0.0)
    assert shape.volumetric(8.0) == pytest.approx(1 - 0.04 * (8 ** (1 / 1.1) - 1))
    assert shape.volumetric(1.0) == 1.0


def test_built_in_ratio_costs_nothing_where_it_fits() -> None:
    """A built-in volume ratio that meets the pressure ratio exactly adds no work; off it work is lost on both sides."""
    shape = EfficiencyShape(0.0, 1.1, 0.0, 0.0, 0.0, 2.5)
    k = 1.15
    assert shape.isentropic(2.5**k, 1.0, k) == pytest.approx(1.0)
    assert shape.isentropic(2.0, 1.0, k) < 1.0
    assert shape.isentropic(5.0, 1.0, k) < 1.0


def test_compression_keeps_the_first_law() -> None:
    """Electric power leaves with the gas or through the shell, nothing else."""
    fluid = refrigerant("R-290")
    suction = fluid.vapour(275.15, fluid.dew(265.15).p)
    done = Compressor(2e-3, 0.9, 0.8, RECIPROCATING, 0.1).compress(fluid, suction, 15e5)
    assert done.power == pytest.approx(done.flow * (done.discharge_enthalpy - suction.h) + done.shell_loss)
    assert done.shell_loss == pytest.approx(0.1 * done.power)


def test_impossible_ratios_are_refused() -> None:
    """Expansion in a compressor and a cylinder full of clearance gas are refused with the ratio."""
    fluid = refrigerant("R-290")
    suction = fluid.vapour(275.15, fluid.dew(265.15).p)
    with pytest.raises(NotCalculatedError, match=r"pressure ratio of 0\.50"):
        Compressor(2e-3, 0.9, 0.8, RECIPROCATING).compress(fluid, suction, 0.5 * suction.p)
    tight = EfficiencyShape(0.4, 1.1, 0.0, 0.1, 0.1)
    with pytest.raises(NotCalculatedError, match="delivers no gas"):
        Compressor(2e-3, 0.9, 0.8, tight).compress(fluid, suction, 5 * suction.p)
