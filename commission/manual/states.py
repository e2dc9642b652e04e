"""Where each system stands: described, reviewed, tested, accepted, and what to do next."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

Outcome = Literal["conforming", "not conforming", "undecided", "none"]


@dataclass(frozen=True, slots=True)
class Visit:
    """What the front page needs of one filed record.

    `outcome` is the verdict of a test, `none` where nothing was decided; `mode` is `trim` or `test`.
    """

    title: str
    date: str
    mode: str
    outcome: Outcome
    page: str


@dataclass(frozen=True, slots=True)
class Step:
    """One station on the way of a system: `done`, its state in a few words, and what it leaves undone."""

    stage: str
    state: str
    done: bool
    left: str | None = None


@dataclass(frozen=True, slots=True)
class Next:
    """What to do next: one sentence, why, and the page to do it with."""

    do: str
    why: str
    page: str
    page_title: str


@dataclass(frozen=True, slots=True)
class Standing:
    """What is known of a system's way so far; `unanswered` counts items of the checklist behind an accepted test."""

    because: str | None
    errors: int
    warnings: int
    visits: tuple[Visit, ...]
    promised: bool
    open_items: int
    unanswered: int = 0

    @property
    def tests(self) -> tuple[Visit, ...]:
        """The tests among the visits, in order of date."""
        return tuple(v for v in self.visits if v.mode == "test")

    @property
    def accepted(self) -> bool:
        """Whether the last test that decided something conformed."""
        decided = [v for v in self.tests if v.outcome in ("conforming", "not conforming")]
        return bool(decided) and decided[-1].outcome == "conforming"


def plural(n: int, one: str, many: str | None = None) -> str:
    """`1 error`, `2 errors`, `no errors`."""
    words = one if n == 1 else (many or f"{one}s")
    return f"{n or 'no'} {words}"


def where_they_stand(standings: Sequence[Standing]) -> str:
    """How far the systems of a plant are, in half a sentence; each system counts once."""
    counts = {
        "cannot be calculated": sum(s.because is not None for s in standings),
        "accepted": sum(s.because is None and s.accepted for s in standings),
        "to be accepted": sum(s.because is None and s.promised and not s.accepted for s in standings),
        "with nothing promised": sum(s.because is None and not s.promised and not s.accepted for s in standings),
    }
    return ", ".join(f"{n} {words}" for words, n in counts.items() if n)


def steps(s: Standing) -> tuple[Step, ...]:
    """The four stations."""
    described = Step("Described", "yes" if s.because is None else "cannot be calculated", s.because is None)
    if s.errors:
        reviewed = Step("Reviewed", f"{plural(s.errors, 'error')} to resolve", False)
    else:
        reviewed = Step("Reviewed", f"no errors, {plural(s.warnings, 'warning')}" if s.warnings else "no errors", True)
    if s.tests:
        last = s.tests[-1]
        words = "nothing decided" if last.outcome == "none" else last.outcome
        tested = Step("Tested", f"{last.date}: {words}", True)
    else:
        runs = len(s.visits)
        tested = Step("Tested", f"not yet; {plural(runs, 'visit')} filed" if runs else "not yet", False)
    if s.accepted:
        when = next(v.date for v in reversed(s.tests) if v.outcome == "conforming")
        left = f"{plural(s.unanswered, 'item')} of the checklist without an answer" if s.unanswered else None
        accepted = Step("Accepted", when, True, left)
    else:
        accepted = Step("Accepted", "not yet" if s.promised else "nothing was promised", False)
    return described, reviewed, tested, accepted


def next_step(s: Standing, pages: dict[str, str]) -> Next:
    """What to do next with this system; `pages` gives page ids: what, findings, checklist, day_sheet, test, open,
    records."""
    if s.because is not None:
        return Next(f"Complete the description: {s.because}.", "Until then nothing can be compared.", pages["what"],
                    "What it is")  # fmt: skip
    if s.errors:
        return Next(
            f"Resolve {plural(s.errors, 'error')} that the review found.",
            "The expected readings rest on the description.",
            pages["findings"],
            "Findings",
        )
    if not s.visits:
        return Next(
            "Work through the checklist and start the plant.",
            "Nothing has been filed yet. The stages stand in an order that hurts nobody and no compressor.",
            pages["checklist"],
            "Checklist",
        )
    if s.tests and s.tests[-1].outcome == "not conforming":
        return Next(
            "Find and remove the cause, then test again.",
            f"The test of {s.tests[-1].date} did not conform.",
            pages["open"],
            "Open items",
        )
    if s.tests and s.tests[-1].outcome == "undecided":
        return Next(
            "Test again with what would decide it.",
            f"The test of {s.tests[-1].date} was undecided: its page names the change that would decide.",
            s.tests[-1].page,
            "The test",
        )
    if not s.tests and s.promised:
        return Next(
            "Agree and sign the test sheet, then test.",
            "A start-up is filed. The contract promises a value that has not been tested.",
            pages["test"],
            "Test sheet",
        )
    if s.open_items:
        return Next(f"Close {plural(s.open_items, 'open item')}.", "", pages["open"], "Open items")
    if s.unanswered:
        return Next(
            f"Answer {plural(s.unanswered, 'item')} of the checklist that no record answers.",
            "What was promised is accepted; the checklist is still open.",
            pages["records"],
            "Records",
        )
    return Next(
        "Compare the next visit with what is expected on that day.",
        "Nothing is outstanding.",
        pages["day_sheet"],
        "Day sheet",
    )


def _rank(s: Standing) -> int:
    """How urgent a system is: what cannot be calculated, errors, a failed test, then the rest."""
    failed = bool(s.tests) and s.tests[-1].outcome == "not conforming"
    ranks = (s.because is not None, s.errors > 0, failed, not s.visits, not s.accepted and s.promised)
    return next((n for n, hit in enumerate(ranks) if hit), len(ranks))


_FAULTS = 3
"""Ranks below this one are faults: they come before anything that is only due by a date."""


def most_urgent(steps_next: Sequence[tuple[str, Next, Standing]]) -> tuple[str, Next] | None:
    """The system that should be looked at first."""
    if not steps_next:
        return None
    name, step, _ = min(steps_next, key=lambda item: _rank(item[2]))
    return name, step


def has_faults(standings: Sequence[Standing]) -> bool:
    """Whether a system cannot be calculated, has errors, or failed its last test."""
    return any(_rank(s) < _FAULTS for s in standings)
