"""What the checks of meaning look at, and how they read a text or follow a reference."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from dataclasses import dataclass
from typing import TypeVar

from commission.description.model import Plant
from commission.description.positions import KeyPath, Positions
from commission.errors import Problem, nearest, shorten
from commission.quantities import QuantityError

T = TypeVar("T")


@dataclass(frozen=True, slots=True)
class Looked:
    """What the checks look at: the plant, where its parts stand, and the barometric pressure of the site in Pa."""

    plant: Plant
    positions: Positions
    barometric_pressure: float

    def quantity(self, path: KeyPath, read: Callable[[], T]) -> tuple[T | None, list[Problem]]:
        """A value read, or the problem of reading it at its place."""
        try:
            return read(), []
        except QuantityError as error:
            first = error.problems[0]
            return None, [self.positions.problem(path, first.message, allowed=first.allowed, nearest=first.nearest)]

    def reference(self, path: KeyPath, word: str | None, known: Iterable[str], what: str) -> Iterator[Problem]:
        """A reference to something that must be described elsewhere in the plant."""
        words = tuple(known)
        if word is not None and word not in words:
            allowed = shorten(", ".join(words), 400) or f"no {what} is described yet"
            yield self.positions.problem(path, f"no {what} has this id", allowed=allowed, nearest=nearest(word, words))
