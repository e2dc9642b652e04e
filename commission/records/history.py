"""Twenty years of visits on one chart: each reading against the expectation at its own condition, and what changed.

A winter and a summer visit cannot be compared by their readings, but by their deviations: what the model expects at
each condition is taken off first. The first accepted record is the baseline. The model's own errors are much the
same in both visits and fall out of a change as far as they are; what belongs to one visit alone does not.
"""

from __future__ import annotations

import datetime as dt
import math
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

from commission.description import LoadedPlant
from commission.quantities import NOMENCLATURE
from commission.records.filed import FiledRecord, FrozenDeviation, read_folder
from commission.records.read import records_folder

if TYPE_CHECKING:
    from commission.errors import Problem
    from commission.prediction import SystemModel

Baseline = Literal["first accepted test", "first test", "first record"]
NOT_INDEPENDENT = (
    "pressure_ratio", "evaporator_temperature_difference", "condenser_temperature_difference",
    "evaporator_approach", "condenser_approach",
    "heat_source_temperature_change", "heat_sink_temperature_change", "heating_capacity", "heating_cop", "carnot_cop",
)  # fmt: skip
"""Quantities that say again what others say; they have a series, but make no finding of their own."""


@dataclass(frozen=True, slots=True)
class Point:
    """One visit in a series: SI, `expanded` and `change_expanded` are 95 % uncertainties.

    `change` is the deviation less that of the baseline; None at the baseline itself and where it did not read this.
    """

    record: str
    started: dt.datetime
    deviation: float
    expanded: float
    significant: bool
    change: float | None = None
    change_expanded: float | None = None
    change_significant: bool = False


@dataclass(frozen=True, slots=True)
class Series:
    """The deviations of one quantity of one system over the visits, in their order."""

    system: str
    quantity: str
    unit: str
    baseline: str
    baseline_is: Baseline
    points: tuple[Point, ...]


def history(loaded: LoadedPlant) -> tuple[FiledRecord, ...]:
    """All filed records of the plant in the order of their visits, corrected ones included."""
    return read_folder(records_folder(loaded)).records


def damaged(loaded: LoadedPlant) -> tuple[Problem, ...]:
    """Why some files among the filed records cannot be read; empty where all can."""
    return read_folder(records_folder(loaded)).damaged


def in_force(records: Iterable[FiledRecord]) -> tuple[FiledRecord, ...]:
    """The records that no other one corrects."""
    kept = tuple(records)
    corrected = {r.file.corrects for r in kept if r.file.corrects}
    return tuple(r for r in kept if r.id not in corrected)


def baseline_of(records: Sequence[FiledRecord]) -> tuple[FiledRecord, Baseline] | None:
    """The record that others are compared with: the first accepted test, else the first test, else the first of all."""
    read = [r for r in records if _deviations(r)]
    for record in read:
        if record.file.mode == "test" and record.verdict == "conforming":
            return record, "first accepted test"
    for record in read:
        if record.file.mode == "test":
            return record, "first test"
    return (read[0], "first record") if read else None


def series(records: Iterable[FiledRecord], system: str) -> tuple[Series, ...]:
    """One series for each quantity that was read and expected, as it was frozen, in the order of the nomenclature."""
    kept = [r for r in in_force(records) if r.system == system]
    chosen = baseline_of(kept)
    if chosen is None:
        return ()
    return _series(system, kept, chosen, {r.id: _deviations(r) for r in kept})


def recomputed_series(
    loaded: LoadedPlant, records: Iterable[FiledRecord], system: str, model: SystemModel | None = None
) -> tuple[Series, ...]:
    """The same series with the deviations that today's description gives: for records filed under different ones.

    It stands beside the frozen series, labelled so, and never in its place.

    Raises:
        RecordError, NotCalculatedError: as `recompute`.
    """
    from commission.prediction import fit
    from commission.records.freeze import frozen_deviations
    from commission.records.recomputation import recompute

    kept = [r for r in in_force(records) if r.system == system]
    chosen = baseline_of(kept)
    if chosen is None:
        return ()
    fitted = fit(loaded, system) if model is None else model
    found = {r.id: frozen_deviations(recompute(loaded, r, fitted).judgement) for r in kept if _deviations(r)}
    return _series(system, kept, chosen, found)


def change(first: FrozenDeviation, later: FrozenDeviation) -> tuple[float, float]:
    """Change of a deviation and its standard uncertainty.

    Shares of the model with the same cause are fully correlated between two visits (JCGM 100, 5.2.2): only their
    difference counts. All else is taken as independent; where one instrument read both, its lasting error falls out
    too, so the uncertainty is then rather too large.
    """
    causes = set(first.model_parts) | set(later.model_parts)
    shares = (later.model_parts.get(c, 0.0) - first.model_parts.get(c, 0.0) for c in causes)
    return later.deviation - first.deviation, math.hypot(*shares, first.other_part, later.other_part)


def coverage(first: FrozenDeviation, later: FrozenDeviation) -> float:
    """Coverage factor (95 %) of a change: the larger one of the two, since few samples in either widen both."""
    factors = [d.expanded / d.uncertainty for d in (first, later) if d.uncertainty > 0.0]
    return max(factors, default=1.96)


def _deviations(record: FiledRecord) -> Mapping[str, FrozenDeviation]:
    return record.filed.model_deviations or record.filed.deviations


def _series(
    system: str,
    records: Sequence[FiledRecord],
    chosen: tuple[FiledRecord, Baseline],
    deviations: Mapping[str, Mapping[str, FrozenDeviation]],
) -> tuple[Series, ...]:
    base, kind = chosen
    found = []
    for key in NOMENCLATURE:
        rows = [(r, deviations[r.id][key]) for r in records if key in deviations.get(r.id, {})]
        if not rows:
            continue
        first = deviations.get(base.id, {}).get(key)
        points = tuple(_point(r, d, first if r.id != base.id else None) for r, d in rows)
        found.append(Series(system, key, rows[0][1].unit, base.id, kind, points))
    return tuple(found)


def _point(record: FiledRecord, deviation: FrozenDeviation, first: FrozenDeviation | None) -> Point:
    plain = (record.id, record.started, deviation.deviation, deviation.expanded, deviation.significant)
    if first is None:
        return Point(*plain)
    moved, standard = change(first, deviation)
    expanded = coverage(first, deviation) * standard
    return Point(*plain, moved, expanded, abs(moved) > expanded)
