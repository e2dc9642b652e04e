"""Exchanger examples of Incropera & DeWitt, Fundamentals of Heat and Mass Transfer, 6th ed., and limits."""

from __future__ import annotations

import math

import pytest

from commission.errors import NotCalculatedError
from commission.machine import conductance_for, effectiveness
from commission.machine.exchanger import Flow


def test_incropera_cross_flow() -> None:
    """Example 11.3: gas 300 to 100 °C, water 1 kg/s 35 to 125 °C: effectiveness 0.755, NTU about 2.1 (chart), 4 %."""
    water = 1.0 * 4197.0
    gas = water * (125 - 35) / (300 - 100)
    wanted = gas * (300 - 100) / (gas * (300 - 35))
    assert gas == pytest.approx(1889, rel=1e-3)
    assert wanted == pytest.approx(0.755, rel=1e-3)
    assert effectiveness(2.1, gas / water, "crossflow unmixed") == pytest.approx(wanted, rel=0.02)
    assert effectiveness(2.024, gas / water, "crossflow unmixed") == pytest.approx(wanted, rel=1e-3)


def test_incropera_counterflow() -> None:
    """Example 11.1: oil 0.1 kg/s 100 to 60 °C, water 0.2 kg/s from 30 °C: 8524 W, 40.2 °C, by two routes."""
    oil, water = 0.1 * 2131, 0.2 * 4178
    heat = oil * 40
    assert heat == pytest.approx(8524, rel=1e-4)
    assert 30 + heat / water == pytest.approx(40.2, abs=0.01)
    lmtd = ((100 - 40.2) - (60 - 30)) / math.log((100 - 40.2) / (60 - 30))
    assert lmtd == pytest.approx(43.2, abs=0.05)
    conductance = heat / lmtd
    assert oil * 70 * effectiveness(conductance / oil, oil / water) == pytest.approx(heat, rel=1e-3)


@pytest.mark.parametrize("flow", ["counterflow", "parallel", "crossflow unmixed"])
def test_all_flows_agree_when_one_side_changes_phase(flow: Flow) -> None:
    """Limit: with capacity ratio zero every arrangement gives 1 - exp(-NTU) (Incropera eq. 11.35a)."""
    assert effectiveness(1.3, 1e-9, flow) == pytest.approx(1 - math.exp(-1.3), rel=1e-6)


def test_balanced_counterflow_limit() -> None:
    """Limit: capacity ratio one in counterflow gives NTU/(1+NTU) (Incropera eq. 11.29a)."""
    assert effectiveness(2.0, 1.0) == pytest.approx(2 / 3)
    assert effectiveness(2.0, 0.9999999) == pytest.approx(2 / 3, rel=1e-5)


def test_conductance_is_the_inverse_of_effectiveness() -> None:
    """Inverse route: the conductance found for a heat transfers that heat."""
    conductance = conductance_for(3600.0, 8.0, 735.0)
    assert 735.0 * 8.0 * effectiveness(conductance / 735.0) == pytest.approx(3600.0, rel=1e-12)


def test_more_heat_than_the_flow_carries_is_refused() -> None:
    """A rating beyond the heat its air flow can carry is refused with both figures (second law)."""
    with pytest.raises(NotCalculatedError) as caught:
        conductance_for(6000.0, 8.0, 735.0)
    assert "6.00 kW" in str(caught.value)
    assert "5.88 kW" in str(caught.value)
