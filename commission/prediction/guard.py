"""No description, however odd its figures, may end in an error that a person cannot read."""

from __future__ import annotations

from collections.abc import Callable
from functools import wraps
from typing import ParamSpec, TypeVar

from commission.errors import NotCalculatedError

P = ParamSpec("P")
R = TypeVar("R")


def in_words(calculate: Callable[P, R]) -> Callable[P, R]:
    """The same function; where its arithmetic fails (division by zero, overflow, the logarithm of a negative number, a
    singular matrix) it raises NotCalculatedError.

    Such a failure means that one of the stated figures is far from anything that can be built. What is known to fail is
    refused before, where the reason is known; this stands behind all of it.
    """

    @wraps(calculate)
    def guarded(*args: P.args, **kwargs: P.kwargs) -> R:
        try:
            return calculate(*args, **kwargs)
        except (ArithmeticError, ValueError) as error:
            raise NotCalculatedError(
                "what is stated of this system leads to figures that no machine has, such as a flow of nothing or a "
                "size without end: check the rated points, flows and ratings for a slipped unit or decimal"
            ) from error

    return guarded
