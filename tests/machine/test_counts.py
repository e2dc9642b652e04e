"""How often one operating point calls the equation of state: a count, so that no busy machine can upset it."""

from __future__ import annotations

import pytest

from commission.properties import refrigerant
from tests.benchmarks.machines import REFRIGERANTS, machine, media

COLD, WARM = 95, 60


@pytest.mark.parametrize("name", REFRIGERANTS)
def test_few_calls_from_a_cold_start(name: str) -> None:
    """At most 95 calls of the equation of state for a point with all its states, over conditions far apart."""
    fluid = refrigerant(name)
    one = machine(fluid)
    for source, sink in ((2.0, 28.0), (-10.0, 15.0), (7.0, 35.0), (12.0, 20.0)):
        before = fluid.calls
        one.operate(media(source, sink))
        assert 0 < fluid.calls - before <= COLD


@pytest.mark.parametrize("name", REFRIGERANTS)
def test_fewer_calls_from_a_neighbour(name: str) -> None:
    """At most 60 calls where a balance 1 to 2 K away is known."""
    fluid = refrigerant(name)
    one = machine(fluid)
    near = one.operate(media(2.0, 28.0))
    for source, sink in ((3.0, 29.0), (1.0, 30.0), (4.0, 28.0), (2.0, 26.0)):
        before = fluid.calls
        one.operate(media(source, sink), near.balance)
        assert 0 < fluid.calls - before <= WARM
