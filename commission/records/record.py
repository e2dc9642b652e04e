"""A record as the package works with it: SI inside, pressures absolute, each reading with its instrument and place."""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path

from commission.description import Positions
from commission.quantities import NOMENCLATURE, Kind
from commission.records.model import Mode, RecordFile


@dataclass(frozen=True, slots=True)
class SiteReading:
    """One quantity read on site. `value`, `samples` and `phases` in SI, pressures in Pa absolute.

    `as_written` is what the person wrote; `instrument` is an id of the description, None where none was named.
    """

    key: str
    value: float
    as_written: str
    instrument: str | None
    where: str | None
    samples: tuple[float, ...] = ()
    phases: tuple[float, ...] = ()
    remark: str | None = None

    @property
    def kind(self) -> Kind:
        """What sort of quantity it is."""
        return NOMENCLATURE[self.key].kind


@dataclass(frozen=True, slots=True)
class CheckedAnswer:
    """An answer that fits its checklist item. `value` in SI where the item asks for a quantity, else None.

    `outcome` is what it means for the plant: `done`, `failed`, or `not applicable`.
    """

    item: str
    answer: str
    outcome: str
    value: float | None = None
    reason: str | None = None
    remark: str | None = None
    by: str | None = None


@dataclass(frozen=True)
class Record:
    """A record that was read and checked against the description.

    `path` is the file it came from, `text` its text and `digest` the SHA-256 of its bytes. `barometric_pressure` in Pa
    is the measured one where the record has it, else the site's. `unanswered` are items of the stage that have no
    answer. `warnings` are sentences on what is not wrong but weakens the record.
    """

    path: Path
    file: RecordFile
    text: str
    digest: str
    data: Mapping[str, object]
    positions: Positions
    barometric_pressure: float
    barometer_measured: bool
    conditions: Mapping[str, SiteReading]
    readings: Mapping[str, SiteReading]
    answers: Mapping[str, CheckedAnswer] = field(default_factory=dict)
    unanswered: tuple[str, ...] = ()
    warnings: tuple[str, ...] = ()

    @property
    def system(self) -> str:
        """Id of the system."""
        return self.file.system

    @property
    def stage(self) -> str:
        """Id of the checklist's stage."""
        return self.file.stage

    @property
    def mode(self) -> Mode:
        """Trim or test."""
        return self.file.mode

    @property
    def started(self) -> dt.datetime:
        """When reading began, with zone."""
        return self.file.started
