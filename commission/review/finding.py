"""What a review finds: one sentence, its figures, where it stands, the source of the rule and what to do."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from commission.description import Position
from commission.quantities import Explained, Kind

Severity = Literal["error", "warning", "note"]
SEVERITIES: tuple[Severity, ...] = ("error", "warning", "note")
"""`error`: cannot be, or can hurt somebody. `warning`: likely wrong. `note`: advice."""


@dataclass(frozen=True, slots=True)
class Figure:
    """One number of a finding.

    `text` is the value as a person reads it, with unit. `value` is the same in SI (pressures absolute, Pa) and `kind`
    what it measures, None where the figure is words or a date. `explained` carries method and inputs of a calculated
    figure, where one was made by the room that calculated it.
    """

    label: str
    text: str
    value: float | None = None
    kind: Kind | None = None
    explained: Explained | None = None


@dataclass(frozen=True, slots=True)
class Remark:
    """What a rule says before the frame adds its name and place: `path` is a key path of the description.

    `source` and `mark` are given only where they differ from those of the rule.
    """

    severity: Severity
    path: str
    title: str
    figures: tuple[Figure, ...]
    what_to_do: str
    source: str | None = None
    mark: str | None = None


@dataclass(frozen=True, slots=True)
class Finding:
    """One finding of one rule at one place.

    `rule` is the id of the rule; `place` is file, line and column, None where the finding belongs to no written line;
    `path` is the key path; `system` the id of the system, None for the plant as a whole; `title` one plain sentence;
    `source` and `mark` say what the rule rests on and how sure that is.
    """

    rule: str
    severity: Severity
    place: Position | None
    path: str
    system: str | None
    title: str
    figures: tuple[Figure, ...]
    source: str
    mark: str
    what_to_do: str

    def __str__(self) -> str:
        where = f"{self.place.file}:{self.place.line}:{self.place.column}: " if self.place else ""
        lines = [f"{where}{self.severity}: {self.title} [{self.rule}]"]
        lines += [f"    {figure.label}: {figure.text}" for figure in self.figures]
        lines += [f"    what to do: {self.what_to_do}", f"    rests on: {self.source} ({self.mark})"]
        return "\n".join(lines)
