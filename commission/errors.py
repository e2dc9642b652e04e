"""What went wrong, as data for a person: every error of the package carries the place and what is allowed there."""

from __future__ import annotations

import difflib
from collections.abc import Iterable, Iterator
from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Problem:
    """One thing wrong at one place.

    `message` is a sentence that a person can act on. `path` is the key path in the file, such as
    `systems.cold-room.charge`; `value` is what stands there, as written; `allowed` says what may stand there;
    `nearest` is the nearest known word where a spelling slip is likely.
    """

    message: str
    file: str | None = None
    line: int | None = None
    column: int | None = None
    path: str = ""
    value: str | None = None
    allowed: str | None = None
    nearest: str | None = None

    @property
    def place(self) -> str:
        """`file:line:column`, as far as it is known."""
        parts = [self.file or "", *(str(n) for n in (self.line, self.column) if n is not None)]
        return ":".join(p for p in parts if p)

    def __str__(self) -> str:
        head = ": ".join(p for p in (self.place, shorten(self.path)) if p)
        text = f"{head}: {self.message}" if head else self.message
        if self.value:
            text += f"\n    written: {shorten(self.value)}"
        if self.allowed is not None:
            text += f"\n    allowed: {shorten(self.allowed, 600)}"
        if self.nearest is not None:
            text += f"\n    did you mean: {self.nearest}"
        return text


class CommissionError(Exception):
    """Base of every error that a person may see; holds all problems found in one run."""

    exit_code = 2

    def __init__(self, *problems: Problem | str) -> None:
        self.problems: tuple[Problem, ...] = tuple(p if isinstance(p, Problem) else Problem(p) for p in problems)
        super().__init__("\n".join(str(p) for p in self.problems))


class InputError(CommissionError):
    """A file or option that a person wrote cannot be used: exit code 2."""


class NotCalculatedError(CommissionError):
    """A value cannot be calculated; the message is the reason shown as "not calculated: because ..."."""


def shorten(text: str, limit: int = 120) -> str:
    """`text` on one line and at most `limit` characters, so that a hostile value cannot flood a message."""
    flat = " ".join(text[: 20 * limit].split())
    whole = len(flat) <= limit and len(text) <= 20 * limit
    return flat if whole else flat[: limit - 1] + "…"


def nearest(word: str, known: Iterable[str], cutoff: float = 0.6) -> str | None:
    """The known word most like `word`, or None where none is alike; capitals and spaces count least.

    Only the first 40 characters of `word` and the first 4,000 characters of known words are looked at, so that a
    hostile file cannot make this slow.
    """
    plain = {_plain(one[:40]): one for one in reversed(list(_first(known, 4_000)))}
    start = _plain(word[:40])
    if start in plain:
        return plain[start]
    found = difflib.get_close_matches(start, plain, n=1, cutoff=cutoff)
    return plain[found[0]] if found else None


def _first(words: Iterable[str], characters: int) -> Iterator[str]:
    """Words from the start, until they hold so many characters."""
    for word in words:
        characters -= len(word)
        if characters < 0:
            return
        yield word


def _plain(word: str) -> str:
    """A word without capitals, spaces, hyphens and underscores."""
    return "".join(c for c in word.casefold() if c not in " -_\t")
