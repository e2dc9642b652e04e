"""A window or whole cycles of a log as the draft of a record: a person adds who was there, reads it over, files it."""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping
from typing import Any

from commission.quantities import NOMENCLATURE, Reference, find_unit
from commission.records.logger.clock import zone_of
from commission.records.logger.cycles import Cycles
from commission.records.logger.mapping import LoggedColumn
from commission.records.logger.rows import Log
from commission.records.logger.windows import Window
from commission.records.readings import CONDITION_KEYS
from commission.records.text import dump

_DIGITS = 6


def draft_of(
    log: Log, read: Window | Cycles, *, system: str, stage: str, mode: str, people: Mapping[str, Mapping[str, str]],
    zone: dt.tzinfo | None = None, more: Mapping[str, Any] | None = None,
) -> str:  # fmt: skip
    """The text of a record in the units of the logger: the samples are the means of a window's parts, or of each cycle.

    `zone` is that in which times are written, the logger's own where None; `more` are further keys of the record
    (`since_start`, `sheet`, ...).
    """
    parts = read.parts if isinstance(read, Window) else read.means
    ends = (read.start, read.end) if isinstance(read, Window) else (read.edges[0], read.edges[-1])
    zone = zone or zone_of(log.mapping.time.zone) or dt.UTC
    head: dict[str, Any] = {
        "title": f"from {log.mapping.logger}",
        "system": system,
        "stage": stage,
        "mode": mode,
        "started": log.moment(ends[0]).astimezone(zone).isoformat(),
        "ended": log.moment(ends[1]).astimezone(zone).isoformat(),
        "people": {role: dict(person) for role, person in people.items()},
    }
    by_key = {column.quantity: column for column in log.mapping.columns.values()}
    sections: dict[str, dict[str, Any]] = {"conditions": {}, "readings": {}}
    for key, values in parts.items():
        section = "conditions" if key in CONDITION_KEYS else "readings"
        column = by_key[key]
        sections[section][key] = {
            "samples": [_written(log, key, column, value) for value in values],
            "instrument": column.instrument,
            "where": column.where,
        }
    of_what = f"means of {len(next(iter(parts.values())))} parts"
    if isinstance(read, Cycles):
        head["cycles"] = {"count": read.count, "by": read.by}
        sections["readings"] = {**_counted(read), **sections["readings"]}
        of_what = f"means of {read.count} whole cycles"
    remarks = f"{log.name}: {log.report.rows} rows; samples are {of_what}"
    return dump({**head, **sections, "remarks": remarks, **(more or {})})


def _counted(cycles: Cycles) -> dict[str, dict[str, str]]:
    """What the cycles themselves tell: how long and how often it ran, or how long it defrosted."""
    if cycles.by == "defrost":
        return {"defrost_time": {"value": f"{cycles.share * cycles.seconds / cycles.count / 60.0:.1f} min"}}
    return {
        "running_share": {"value": f"{100.0 * cycles.share:.1f} %"},
        "starts_per_hour": {"value": f"{3600.0 * cycles.count / cycles.seconds:.2f}"},
    }


def _written(log: Log, key: str, column: LoggedColumn, value: float) -> str:
    unit = find_unit(column.unit, NOMENCLATURE[key].kind)
    assert unit is not None
    zero = unit.offset + (log.barometric_pressure if unit.reference is Reference.GAUGE else 0.0)
    number = f"{(value - zero) / unit.factor:.{_DIGITS}g}"
    return f"{number} {column.unit}" if column.unit else number
