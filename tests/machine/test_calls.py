"""How much work an operating point takes: equation-of-state calls are counted, never timed."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import pytest

from commission.machine import Compressor, Media, SingleStage

COLD, WARM = 95, 60


@pytest.mark.parametrize("name", ["R-290", "R-134a", "R-410A", "R-717", "R-454B", "R-448A"])
def test_equation_of_state_calls_are_few(
    real: Callable[..., SingleStage], cold_room_media: Callable[[float, float], Media], name: str
) -> None:
    """A point of a 3.5 kW machine takes at most 95 calls from nothing and 60 from its neighbour one kelvin away."""
    plain = real(name)
    fluid = plain.refrigerant
    effect = fluid.dew(265.15).rho * (fluid.dew(265.15).h - fluid.bubble(315.15).h)
    assert isinstance(plain.compressor, Compressor)
    machine = replace(plain, compressor=replace(plain.compressor, displacement=4500.0 / effect))
    machine.operate(cold_room_media(2, 30))
    before = fluid.calls
    point = machine.operate(cold_room_media(2, 31))
    cold = fluid.calls - before
    before = fluid.calls
    machine.operate(cold_room_media(2, 32), point.balance)
    warm = fluid.calls - before
    assert cold <= COLD
    assert warm <= WARM
