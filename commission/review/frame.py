"""Run every rule over a plant: the order is stable, and what fails for one system or rule stops no other."""

from __future__ import annotations

import datetime as dt
from collections.abc import Callable, Iterable, Iterator, Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.description import LoadedPlant, Position
from commission.errors import CommissionError
from commission.review.facts import PlantFacts, SystemFacts, gather, reason_of
from commission.review.finding import SEVERITIES, Finding, Remark

if TYPE_CHECKING:
    from commission.prediction import SystemModel


@dataclass(frozen=True, slots=True)
class Rule:
    """One rule: `id` is stable and short, `name` says in words what it looks for, `source` and `mark` why.

    Exactly one of `of_plant` and `of_system` is set: the plain function that yields the remarks.
    """

    id: str
    name: str
    source: str
    mark: str
    of_system: Callable[[SystemFacts], Iterable[Remark]] | None = None
    of_plant: Callable[[PlantFacts], Iterable[Remark]] | None = None


def review(
    loaded: LoadedPlant, *, visit: dt.date | None = None, models: Mapping[str, SystemModel] | None = None
) -> tuple[Finding, ...]:
    """Everything that a good colleague would say about this plant, errors first, then in the order of plant and rules.

    `visit` is the day for which calibrations and dates are judged; without it they are judged only against the dates
    of the records. There is no clock: the same input gives the same findings. `models` are systems already fitted, by
    id, which saves fitting them again.

    Raises:
        ReviewFileError: the plant's own `review.yaml` cannot be used.
    """
    from commission.review.table import RULES

    plant, systems = gather(loaded, visit, models or {})
    found = [finding for rule in RULES if rule.of_plant for finding in _run_on_plant(rule, plant)]
    for facts in systems:
        found += [finding for rule in RULES if rule.of_system for finding in _run_on_system(rule, facts)]
    return tuple(sorted(found, key=lambda finding: SEVERITIES.index(finding.severity)))


def _run_on_plant(rule: Rule, plant: PlantFacts) -> Iterator[Finding]:
    assert rule.of_plant is not None
    try:
        for remark in rule.of_plant(plant):
            yield _finding(rule, remark, plant.loaded, None)
    except CommissionError as error:
        yield _finding(rule, _not_judged(rule, "plant", error), plant.loaded, None)


def _run_on_system(rule: Rule, facts: SystemFacts) -> Iterator[Finding]:
    assert rule.of_system is not None
    try:
        for remark in rule.of_system(facts):
            yield _finding(rule, remark, facts.plant.loaded, facts.id)
    except CommissionError as error:
        yield _finding(rule, _not_judged(rule, facts.path(), error), facts.plant.loaded, facts.id)


def _not_judged(rule: Rule, path: str, error: CommissionError) -> Remark:
    return Remark(
        "note",
        path,
        f"Not judged: {rule.name}: because {reason_of(error)}",
        (),
        "Judge this by hand, or write the facts that are missing.",
    )


def _finding(rule: Rule, remark: Remark, loaded: LoadedPlant, system: str | None) -> Finding:
    return Finding(
        rule=rule.id,
        severity=remark.severity,
        place=position(loaded, remark.path),
        path=remark.path,
        system=system,
        title=remark.title,
        figures=remark.figures,
        source=remark.source or rule.source,
        mark=remark.mark or rule.mark,
        what_to_do=remark.what_to_do,
    )


def position(loaded: LoadedPlant, path: str) -> Position | None:
    """Where `path`, or the nearest part above it, is written; a record is its file. None where nothing of it is."""
    if path.startswith("records/"):
        return Position(path, 1, 1)
    try:
        return loaded.where(path)
    except KeyError:
        return None
