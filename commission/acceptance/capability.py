"""Before the visit: on the forecast day, with these instruments, what can be decided, and what would have to change."""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from commission.acceptance.budget import Budget, Measured
from commission.acceptance.changes import Change, smallest_change
from commission.acceptance.choosing import cannot_be_read, choose_instrument
from commission.acceptance.conditions import HUMIDITY, WET, with_air
from commission.acceptance.decision import Decision
from commission.acceptance.evaluation import Evaluation, evaluate
from commission.acceptance.expectation import Deviation
from commission.acceptance.guarantee import Terms, carry, terms_of
from commission.acceptance.instruments import COUNTED, Reading
from commission.acceptance.judgement import GuaranteeVerdict, coarse, verdict
from commission.acceptance.routes import Refusal, RouteResult
from commission.quantities import NOMENCLATURE, Explained, Kind

if TYPE_CHECKING:
    from commission.description import LoadedPlant
    from commission.prediction import Prediction, SystemModel

NEVER_READ = ("carnot_cop", "refrigerant_flow", "net_cooling_capacity", "fan_power")
"""Expected values that nobody reads on site with ordinary instruments."""
NO_INSTRUMENT = "no instrument of the plant reads it"


@dataclass(frozen=True, slots=True)
class ReadingCapability:
    """One quantity that will be read: what is expected, with which instrument, and which deviation would be seen.

    `budget` is that of reading minus expectation; a deviation larger than `detectable` (its expanded uncertainty, 95 %)
    is significant. `of_reading` is the standard uncertainty of the reading alone, `of_expectation` that of what it is
    compared with: model, properties, and the condition that is read too. `alone` is the expanded uncertainty of the
    reading by itself.
    """

    key: str
    expected: Explained
    instrument: str | None
    budget: Budget
    detectable: float
    of_reading: float
    of_expectation: float
    alone: float

    @property
    def good_enough(self) -> bool:
        """Whether the instrument is no coarser than what its reading is compared with: a better one would show little.

        At equality a perfect instrument would make the smallest deviation seen smaller by 29 % (1 - 1/sqrt 2).
        """
        return self.of_reading <= self.of_expectation

    @property
    def partly_cancels(self) -> bool:
        """Whether the reading alone is more uncertain than its deviation: what moves both alike falls out of it."""
        return self.alone > self.detectable


@dataclass(frozen=True, slots=True)
class GuaranteeCapability:
    """One guarantee: could it be decided if the plant read as expected, and if not, what would decide it.

    `decided` is about a plant that reads exactly what the design model expects. By the simple rule any reading decides,
    unless the contract states a largest uncertainty that the test exceeds; `coarse` then says where the test is coarser
    than the tolerance it is meant to hold. `change` is the smallest change of the test that would decide it, None where
    none is needed or none would do.
    """

    terms: Terms
    verdict: GuaranteeVerdict
    decided: bool
    change: Change | None
    coarse: str | None = None

    @property
    def decision(self) -> Decision | None:
        """The decision that such a reading would get."""
        return self.verdict.decision


@dataclass(frozen=True)
class Capability:
    """What the instruments of the plant can prove on a forecast day. `filled` names conditions that were not given and
    are taken as rated; `not_read` gives for each quantity that nobody will read the reason."""

    conditions: Mapping[str, Measured]
    readings: tuple[ReadingCapability, ...]
    guarantees: tuple[GuaranteeCapability, ...]
    refusals: tuple[Refusal, ...]
    not_read: Mapping[str, str]
    warnings: tuple[str, ...]
    filled: tuple[str, ...] = ()


def capability(
    loaded: LoadedPlant,
    model: SystemModel,
    forecast: Mapping[str, float] | None = None,
    *,
    on: dt.date | None = None,
) -> Capability:
    """Work through a visit whose readings are exactly what is expected at the forecast condition (keys, SI).

    The instruments are those of `measured_with`, or else the best of the plant for each quantity. What no instrument
    of the plant can read is left out and listed.

    Raises:
        InputError: a condition that this system does not have.
        NotCalculatedError: the model has no solution at the forecast.
    """
    prediction = model.predict(forecast)
    conditions, lacking = _readings(loaded, model, prediction.conditions)
    expected = {k: e.value for k, e in prediction.expected.items() if k not in NEVER_READ}
    direct, unread = _readings(loaded, model, expected)
    found = evaluate(loaded, model, _with_inlets(conditions, prediction.conditions, model), direct, on=on)
    instruments = {r.key: r.instrument for r in (*conditions, *direct)}
    rows = tuple(_row(d, instruments.get(d.key)) for d in found.deviations)
    seen = {r.key for r in rows}
    not_read = {k: why for k, why in {**lacking, **unread}.items() if k not in seen}
    proved = _as_expected(found, prediction)
    guarantees = tuple(_guarantee(loaded, model, terms_of(g), proved) for g in loaded.system(model.system_id).guarantee)
    warnings = (*found.warnings, *(g.coarse for g in guarantees if g.coarse))
    return Capability(found.conditions, rows, guarantees, found.refusals, not_read, warnings, prediction.filled)


def _row(d: Deviation, instrument: str | None) -> ReadingCapability:
    apart = d.reading.budget.standard, d.expected.budget.standard, d.reading.budget.expanded()
    return ReadingCapability(d.key, d.expected.explained, instrument, d.budget, d.budget.expanded(), *apart)


def _as_expected(found: Evaluation, prediction: Prediction) -> Evaluation:
    """The evaluation of a plant that delivers what is expected, whatever little its routes read beside that.

    A route takes shell loss and the warming of pipes as means, so that it gives some tenths of a percent more or less
    than the model that made the readings; its uncertainty holds that.
    """

    def settled(result: RouteResult) -> RouteResult:
        expected = prediction.expected.get(result.measured.key)
        if expected is None:
            return result
        measured = replace(result.measured, value=expected.value)
        return replace(result, derived=replace(result.derived, measured=measured))

    return replace(found, routes=tuple(map(settled, found.routes)))


def _readings(
    loaded: LoadedPlant, model: SystemModel, values: Mapping[str, float]
) -> tuple[list[Reading], dict[str, str]]:
    """A reading for each value that an instrument of the plant can take, and the rest."""
    system = loaded.system(model.system_id)
    found, lacking = [], {}
    values = _as_read(loaded, model, values)
    for key, value in values.items():
        closed = cannot_be_read(key, system)
        if closed is not None:
            lacking[key] = closed
            continue
        name = choose_instrument(key, value, loaded, system)
        if name is None and key not in COUNTED:
            lacking[key] = NO_INSTRUMENT
        else:
            found.append(Reading(key, value, name))
    return found, lacking


def _as_read(loaded: LoadedPlant, model: SystemModel, values: Mapping[str, float]) -> Mapping[str, float]:
    """The condition with the wet bulb in place of the humidity, where `measured_with` names only that."""
    named = loaded.system(model.system_id).measured_with
    if WET not in named or HUMIDITY in named or HUMIDITY not in values:
        return values
    air = with_air({k: Measured(k, v) for k, v in values.items()}, (WET,), loaded.barometric_pressure)
    return {k: m.value for k, m in air.items() if k != HUMIDITY or WET not in air}


def _with_inlets(readings: list[Reading], conditions: Mapping[str, float], model: SystemModel) -> list[Reading]:
    """Temperatures of the media are always read: where no instrument fits, with an assumed one, which is warned of."""
    have = {r.key for r in readings}
    more = [k for k in model.condition_axes if NOMENCLATURE[k].kind is Kind.TEMPERATURE and k not in have]
    return [*readings, *(Reading(k, conditions[k]) for k in more)]


def _guarantee(loaded: LoadedPlant, model: SystemModel, terms: Terms, found: Evaluation) -> GuaranteeCapability:
    points, shown = loaded.system(model.system_id).rated_points, model.facts.shown
    judged = verdict(terms, found, lambda: carry(terms, found.all_read, model, points), names=shown.quantities)
    decided = judged.outcome != "undecided"
    change = None
    if not decided and judged.decision is not None and judged.budget is not None:
        needed = judged.decision.uncertainty_needed
        change = smallest_change(judged.budget, needed, judged.decision.confidence) if needed else None
    return GuaranteeCapability(terms, judged, decided, change, coarse(judged, shown))
