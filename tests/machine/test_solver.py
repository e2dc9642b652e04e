"""The solver of small systems."""

from __future__ import annotations

import math
from collections.abc import Sequence

import pytest

from commission.errors import NotCalculatedError
from commission.machine import NoSolutionError, solve


def test_finds_the_root_of_two_curves() -> None:
    """x^2 + y^2 = 4 and x y = 1: checked by putting the answer back."""

    def curves(x: Sequence[float]) -> Sequence[float]:
        return x[0] ** 2 + x[1] ** 2 - 4, x[0] * x[1] - 1

    found = solve(curves, (2.0, 0.3), difference=1e-4, largest_step=1.0)
    assert found.x[0] ** 2 + found.x[1] ** 2 == pytest.approx(4, abs=1e-8)
    assert found.x[0] * found.x[1] == pytest.approx(1, abs=1e-8)


def test_steps_back_from_where_nothing_can_be_evaluated() -> None:
    """A residual that refuses part of its range does not stop the search."""

    def logarithm(x: Sequence[float]) -> Sequence[float]:
        if x[0] <= 0:
            raise NotCalculatedError("no logarithm")
        return (math.log(x[0]),)

    assert solve(logarithm, (6.0,), difference=1e-4).x[0] == pytest.approx(1.0)


def test_no_root_is_an_error_with_the_miss() -> None:
    """x^2 + 1 has no root: the error says so in words, without a figure that nobody can read."""
    with pytest.raises(NoSolutionError, match=r"do not come together"):
        solve(lambda x: (x[0] ** 2 + 1,), (3.0,))
