"""A window of a log as the draft of a record: a person adds who was there, reads it over, and files it."""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping
from typing import Any

from commission.quantities import NOMENCLATURE, Reference, find_unit
from commission.records.logger.mapping import LoggedColumn
from commission.records.logger.rows import Log
from commission.records.logger.windows import Window
from commission.records.readings import CONDITION_KEYS
from commission.records.text import dump

_DIGITS = 6


def draft_of(
    log: Log, window: Window, *, system: str, stage: str, mode: str, people: Mapping[str, Mapping[str, str]],
    zone: dt.tzinfo = dt.UTC, more: Mapping[str, Any] | None = None,
) -> str:  # fmt: skip
    """The text of a record with the means of the window's parts as samples, in the units of the logger.

    `zone` is that in which the start is written; `more` are further keys of the record (`since_start`, `sheet`, ...).
    """
    head: dict[str, Any] = {
        "title": f"from {log.mapping.logger}",
        "system": system,
        "stage": stage,
        "mode": mode,
        "started": log.moment(window.start).astimezone(zone).isoformat(),
        "ended": log.moment(window.end).astimezone(zone).isoformat(),
        "people": {role: dict(person) for role, person in people.items()},
    }
    by_key = {column.quantity: column for column in log.mapping.columns.values()}
    sections: dict[str, dict[str, Any]] = {"conditions": {}, "readings": {}}
    for key, parts in window.parts.items():
        section = "conditions" if key in CONDITION_KEYS else "readings"
        column = by_key[key]
        sections[section][key] = {
            "samples": [_written(log, key, column, value) for value in parts],
            "instrument": column.instrument,
            "where": column.where,
        }
    remarks = f"{log.name}: {log.report.rows} rows; samples are means of {len(next(iter(window.parts.values())))} parts"
    return dump({**head, **sections, "remarks": remarks, **(more or {})})


def _written(log: Log, key: str, column: LoggedColumn, value: float) -> str:
    unit = find_unit(column.unit, NOMENCLATURE[key].kind)
    assert unit is not None
    zero = unit.offset + (log.barometric_pressure if unit.reference is Reference.GAUGE else 0.0)
    number = f"{(value - zero) / unit.factor:.{_DIGITS}g}"
    return f"{number} {column.unit}" if column.unit else number
