"""A visit judged: deviations always, verdicts on guarantees in a test only."""

from __future__ import annotations

import datetime as dt
from collections.abc import Callable, Collection, Iterable, Mapping
from dataclasses import dataclass
from functools import partial
from typing import TYPE_CHECKING, Any, Literal

from commission.acceptance.budget import Budget, Measured, combine
from commission.acceptance.changes import with_advice
from commission.acceptance.closure import Closure
from commission.acceptance.decision import Decision, Outcome, decide, sure_text
from commission.acceptance.derived import Derived
from commission.acceptance.evaluation import Evaluation, evaluate
from commission.acceptance.expectation import Deviation, Expectation
from commission.acceptance.guarantee import Carried, Terms, boundary_differs, carry, terms_of
from commission.acceptance.impossible import Impossible
from commission.acceptance.instruments import Reading
from commission.acceptance.routes import Refusal, RouteResult
from commission.acceptance.steadiness import Steadiness, WholeCycles, steadiness
from commission.errors import NotCalculatedError
from commission.quantities import NOMENCLATURE, Display, Explained, Quantity

if TYPE_CHECKING:
    from commission.acceptance.sheet import TestSheet
    from commission.description import LoadedPlant
    from commission.prediction import SystemModel

Mode = Literal["trim", "test"]
NO_SHEET = "no frozen test sheet: the guarantees are judged by the description as it stands today"
"""Warning of a test that nobody prepared with a sheet."""


@dataclass(frozen=True, slots=True)
class GuaranteeVerdict:
    """One guarantee judged. `guaranteed` is the value on the day, None where it could not be carried there.

    `budget` is that of measured value minus limit, shared causes kept. `withheld` says why there is no verdict although
    a test was made: readings that cannot be, a plant that did not stand still, a route that was refused.
    """

    terms: Terms
    guaranteed: Explained | None
    measured: Measured | None
    route: str | None
    budget: Budget | None
    decision: Decision | None
    withheld: str | None
    frozen: bool

    @property
    def outcome(self) -> Outcome:
        """The verdict: the decision, or undecided where it is withheld."""
        return self.decision.outcome if self.decision is not None and self.withheld is None else "undecided"

    @property
    def what_would_decide(self) -> str | None:
        """What would turn undecided into a decision."""
        if self.withheld is not None:
            return f"a repeated test in which this is put right: {self.withheld}"
        return self.decision.what_would_decide if self.decision else None


@dataclass(frozen=True)
class Judgement:
    """Everything that a record and a page show of one visit. Mappings by nomenclature key, values SI."""

    system: str
    mode: Mode
    conditions: Mapping[str, Measured]
    measured: Mapping[str, Measured]
    derived: Mapping[str, Derived]
    expectations: Mapping[str, Expectation]
    deviations: tuple[Deviation, ...]
    routes: tuple[RouteResult, ...]
    refusals: tuple[Refusal, ...]
    closures: tuple[Closure, ...]
    guarantees: tuple[GuaranteeVerdict, ...]
    steadiness: tuple[Steadiness, ...]
    impossible: tuple[Impossible, ...]
    not_judged: Mapping[str, str]
    warnings: tuple[str, ...]
    sheet_digest: str | None = None

    @property
    def outcome(self) -> Outcome | None:
        """The verdict over all guarantees: the worst of them; None where nothing was judged (trim, or no contract)."""
        found = {g.outcome for g in self.guarantees}
        for outcome in ("not conforming", "undecided", "conforming"):
            if outcome in found:
                return outcome
        return None

    def as_data(self) -> dict[str, Any]:
        """The judgement as plain data for a filed record and `--json`: °C, Pa absolute, SI otherwise."""
        from commission.acceptance.judgement_data import data_of

        return data_of(self)


def judge(
    loaded: LoadedPlant,
    model: SystemModel,
    conditions: Iterable[Reading],
    readings: Iterable[Reading],
    mode: Mode,
    sheet: TestSheet | None = None,
    *,
    on: dt.date | None = None,
    since_start: float | None = None,
    since_defrost: float | None = None,
    limits: str = "site",
    upsets: Collection[str] = (),
    cycles: WholeCycles | None = None,
) -> Judgement:
    """Judge the readings of one visit.

    In *trim* there are deviations only. In a *test* each guarantee gets one verdict: from the frozen sheet where there
    is one, otherwise from the description as it stands. Times in s; `limits` names a set of steadiness limits; `on` is
    the day, for the calibrations. `cycles`: the readings are means over whole cycles, one sample for each. Readings:
    SI, pressures absolute.

    Raises:
        InputError: a condition that this system does not have.
    """
    asked, read = list(conditions), list(readings)
    system = loaded.system(model.system_id)
    through_defrosts = cycles is not None and cycles.by == "defrost"
    if through_defrosts:
        upsets = (*upsets, "defrost in the means")
    found = evaluate(loaded, model, asked, read, on=on, sheet=sheet, upsets=upsets)
    liquid = frozenset(
        side for side, m in (("source", system.heat_source), ("sink", system.heat_sink)) if m.medium != "air"
    )
    chosen = sheet.steadiness if sheet is not None else limits
    still = steadiness(
        [*asked, *read], since_start, since_defrost, limits=chosen, liquid_sides=liquid,
        defrosts=system.evaporator.defrost is not None, cycles=cycles,
        names=model.facts.shown.quantities,
    )  # fmt: skip
    verdicts: list[GuaranteeVerdict] = []
    if mode == "test":
        verdicts = _verdicts(loaded, model, found, sheet, withheld_by(found.impossible, still))
    warnings = list(found.warnings)
    if through_defrosts and not any(p.frost_included for p in system.rated_points):
        warnings.append(
            "powers and capacities are means with defrosts in them, and no rated point is said to count its defrosts "
            "(frost_included): what is expected holds between defrosts and is more"
        )
    if sheet is not None and sheet.system != model.system_id:
        warnings.append(f"the test sheet is one of {sheet.system}, not of {model.system_id}")
    if mode == "test" and verdicts and sheet is None:
        warnings.append(NO_SHEET)
    warnings += [text for text in (coarse(v, model.facts.shown) for v in verdicts) if text]
    return Judgement(
        model.system_id, mode, found.conditions, found.measured, found.derived, found.expectations, found.deviations,
        found.routes, found.refusals, found.closures, tuple(verdicts), still, found.impossible, found.not_judged,
        tuple(warnings), sheet.digest if sheet is not None else None,
    )  # fmt: skip


def coarse(verdict: GuaranteeVerdict, shown: Display) -> str | None:
    """What to say where the contract's rule decides although the test is coarser than the tolerance."""
    decision, budget, carried = verdict.decision, verdict.budget, verdict.guaranteed
    if decision is None or budget is None or carried is None or verdict.outcome == "undecided":
        return None
    if decision.rule != "simple" or not verdict.terms.coarser_than_tolerance(budget.expanded(), carried.value):
        return None
    test, tolerance = apart(budget.expanded() / carried.value, verdict.terms.tightest)
    return (
        f"{shown.label(verdict.terms.quantity)}: the test (± {test} %) is coarser than the tolerance ({tolerance} %). "
        "The contract's simple rule decides all the same; the plant conforms with a probability of "
        f"{sure_text(decision.probability_of_conformity)}"
    )


def apart(one: float, other: float) -> tuple[str, str]:
    """Two unlike shares as per cent, with the digits that it takes to tell them apart."""
    texts = [(f"{100 * one:.{digits}f}", f"{100 * other:.{digits}f}") for digits in range(7)]
    return next((pair for pair in texts if pair[0] != pair[1]), texts[-1])


def withheld_by(contradictions: Iterable[Impossible], still: Iterable[Steadiness]) -> str | None:
    """Why no verdict can be given on these readings at all, None where nothing stands against one."""
    reasons = [f"readings that cannot be: {c.text}" for c in contradictions]
    reasons += [s.text for s in still if s.steady is False]
    return "; ".join(reasons) or None


def _verdicts(
    loaded: LoadedPlant, model: SystemModel, found: Evaluation, sheet: TestSheet | None, withheld: str | None
) -> list[GuaranteeVerdict]:
    from commission.prediction import boundary

    names = model.facts.shown.quantities
    if sheet is not None:
        return [
            verdict(
                t.terms, found, partial(sheet.carried, t, found.conditions, names), withheld, frozen=True, names=names
            )
            for t in sheet.targets_for("guarantee")
            if t.terms is not None
        ]
    system = loaded.system(model.system_id)
    counted = boundary(model.facts)
    return [
        verdict(
            terms, found, partial(carry, terms, found.all_read, model, system.rated_points),
            withheld or boundary_differs(terms, counted), names=names,
        )
        for terms in map(terms_of, system.guarantee)
    ]  # fmt: skip


def verdict(
    terms: Terms,
    found: Evaluation,
    carried_by: Callable[[], Carried],
    withheld: str | None = None,
    frozen: bool = False,
    names: Mapping[str, Quantity] = NOMENCLATURE,
) -> GuaranteeVerdict:
    """One guarantee judged by the evaluated readings; `carried_by()` gives the guaranteed value of the day, `names` is
    the nomenclature of the system."""
    try:
        measured, route = found.quantity(terms.quantity, terms.route)
    except NotCalculatedError as error:
        reason = f"{names[terms.quantity].words} could not be measured: {error}"
        return GuaranteeVerdict(terms, None, None, terms.route, None, None, withheld or reason, frozen)
    try:
        carried = carried_by()
    except NotCalculatedError as error:
        return GuaranteeVerdict(terms, None, measured, route, None, None, withheld or str(error), frozen)
    decision, budget = decide_guarantee(terms, measured, carried)
    decision = with_advice(decision, budget, _other_routes(terms, found, carried, route), names)
    return GuaranteeVerdict(terms, carried.explained, measured, route, budget, decision, withheld, frozen)


def decide_guarantee(terms: Terms, measured: Measured, carried: Carried) -> tuple[Decision, Budget]:
    """The decision on a measured value and a carried guarantee, and the budget it was made with.

    The carried limit is uncertain too (condition, model); what measured value and limit share cancels.
    """
    lower, upper = terms.limits(carried.value)
    binding = lower if upper is None or (lower is not None and measured.value < 0.5 * (lower + upper)) else upper
    assert binding is not None
    budget = combine(measured.budget, carried.budget.scaled(-binding / carried.value))
    largest = terms.largest_expanded_uncertainty(carried.value)
    decision = decide(measured.value, budget, lower, upper, terms.rule, largest_expanded_uncertainty=largest)
    return decision, budget


def _other_routes(terms: Terms, found: Evaluation, carried: Carried, route: str) -> tuple[str, ...]:
    """Other routes of the same visit that would decide, as sentences."""
    ways = []
    for result in found.routes:
        if result.measured.key == terms.quantity and result.route != route:
            decision, _ = decide_guarantee(terms, result.measured, carried)
            if decision.outcome != "undecided":
                ways.append(f"the {result.route} would decide it, if both sides agree on that route")
    return tuple(ways)
