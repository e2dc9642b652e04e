"""Where each key and value of a description stands: the map that turns a key path into file, line and column."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field

from commission.errors import InputError, Problem

KeyPath = tuple[str | int, ...]
"""A key path in parts, such as `("systems", "cold-room", "guarantee", 0, "value")`."""


class DescriptionError(InputError):
    """A description (or another file read in the same way) cannot be used; `problems` holds all that were found."""


@dataclass(frozen=True, slots=True)
class Position:
    """A place in a file; line and column count from 1."""

    file: str
    line: int
    column: int

    def __str__(self) -> str:
        return f"{self.file}:{self.line}:{self.column}"


@dataclass(frozen=True, slots=True)
class Mark:
    """Where a key stands, where its value stands, and the value as written (None for lists and mappings)."""

    key: Position
    value: Position
    text: str | None


def dotted(path: KeyPath) -> str:
    """A key path as people write it: `systems.cold-room.guarantee.0.value`."""
    return ".".join(str(part) for part in path)


@dataclass(slots=True)
class Positions:
    """Key paths to marks. A path that is not written is answered by the nearest part above it that is."""

    marks: dict[KeyPath, Mark] = field(default_factory=dict)

    def __iter__(self) -> Iterator[KeyPath]:
        return iter(self.marks)

    def __contains__(self, path: KeyPath) -> bool:
        return path in self.marks

    def mark(self, path: KeyPath) -> Mark:
        """The mark of `path`, or of the nearest part above it.

        Raises:
            KeyError: nothing at all was read.
        """
        for length in range(len(path), -1, -1):
            found = self.marks.get(path[:length])
            if found is not None:
                return found
        raise KeyError(dotted(path))

    def text(self, path: KeyPath) -> str | None:
        """The value at `path` as written; None where nothing, a list or a mapping is written."""
        found = self.marks.get(path)
        return found.text if found else None

    def by_text(self) -> Mapping[str, Position]:
        """Every written path in its dotted form with the position of its value."""
        return {dotted(path): mark.value for path, mark in self.marks.items()}

    def problem(
        self,
        path: KeyPath,
        message: str,
        *,
        allowed: str | None = None,
        nearest: str | None = None,
        at_key: bool = False,
        value: str | None = None,
    ) -> Problem:
        """A problem at `path`: at its key or its value, with the value as written."""
        mark = self.mark(path)
        place = mark.key if at_key or path not in self.marks else mark.value
        written = value if value is not None else self.text(path)
        return Problem(message, place.file, place.line, place.column, dotted(path), written, allowed, nearest)
