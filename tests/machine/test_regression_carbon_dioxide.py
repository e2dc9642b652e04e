"""Best pressure of carbon dioxide as this project calculates it, kept to notice a change."""

from __future__ import annotations

import pytest

from commission.machine import best_pressure
from commission.machine.gas_cooler import outlet_state
from commission.properties import Refrigerant, refrigerant


def _best(fluid: Refrigerant, outlet: float, superheat: float) -> float:
    suction = fluid.vapour(263.15 + superheat, fluid.dew(263.15).p)

    def cop(p: float) -> float:
        return (suction.h - outlet_state(fluid, outlet + 273.15, p).h) / (
            fluid.isentropic_end(suction, p).h - suction.h
        )

    return best_pressure(cop, 7.4e6, 1.4e7)


def test_best_pressure() -> None:
    """At -10 °C evaporating, 10 K superheat and isentropic compression, to 0.1 bar. An earlier calculation of this
    project gave 75.0, 88.4, 102.1 and 116.2 bar with another superheat and compressor: within 2 %."""
    fluid = refrigerant("R-744")
    found = [_best(fluid, t, 10.0) / 1e5 for t in (30.0, 35.0, 40.0, 45.0)]
    assert found == pytest.approx([75.01, 88.81, 103.17, 118.29], abs=0.1)
    assert found == pytest.approx([75.0, 88.4, 102.1, 116.2], rel=0.02)
