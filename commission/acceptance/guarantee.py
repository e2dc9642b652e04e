"""What the contract says, and what that means on the day: the guaranteed value carried to the measured condition."""

from __future__ import annotations

import math
from collections.abc import Collection, Mapping, Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Literal

from commission.acceptance.budget import Budget, Component, Measured, combine
from commission.acceptance.conditions import STAGE, another_stage, day_condition, known_to, plain_in_model, with_air
from commission.acceptance.decision import Rule
from commission.acceptance.expectation import model_component
from commission.acceptance.grid import Axis, interpolate, points
from commission.errors import NotCalculatedError
from commission.quantities import NOMENCLATURE, Explained, Input, Kind

if TYPE_CHECKING:
    from commission.description.model import Conditions, Guarantee, RatedPoint
    from commission.prediction import Prediction, SystemModel

CarriedBy = Literal["design model", "supplier's table", "as stated"]
_NEAR: Mapping[Kind, float] = {Kind.TEMPERATURE: 0.5, Kind.RATIO: 0.05}
_NEAR_SHARE = 0.05


@dataclass(frozen=True, slots=True)
class Terms:
    """A guarantee in SI. `below`, `above` and `largest` (uncertainty) are shares of the value, None where the contract
    is silent."""

    quantity: str
    value: float
    at: Mapping[str, float]
    below: float | None = None
    above: float | None = None
    rule: Rule = "simple"
    carried_by: CarriedBy = "design model"
    route: str | None = None
    source: str | None = None
    includes: tuple[str, ...] | None = None
    largest: float | None = None

    def limits(self, value: float) -> tuple[float | None, float | None]:
        """Lower and upper limit of the measured value where `value` is the guaranteed one of the day.

        A power input is bounded from above, everything else from below; the other side only where the contract says so.
        EN and AHRI tolerances already contain the uncertainty of the test: no guard is added here.
        """
        if self.quantity == "power_input":
            lower = None if self.below is None else value * (1.0 - self.below)
            return lower, value * (1.0 + (self.above or 0.0))
        upper = None if self.above is None else value * (1.0 + self.above)
        return value * (1.0 - (self.below or 0.0)), upper

    def largest_expanded_uncertainty(self, value: float) -> float | None:
        """The expanded uncertainty up to which a test may decide by the simple rule, None where nothing is agreed.

        The tool adds no such condition of its own: nearly all contracts accept the measured value as it is.
        """
        return None if self.largest is None else self.largest * value

    def coarser_than_tolerance(self, expanded: float, value: float) -> bool:
        """Whether a test with this expanded uncertainty is coarser than the tolerance that is meant to hold it."""
        return self.tightest > 0.0 and expanded > self.tightest * value

    @property
    def tightest(self) -> float:
        """The smaller of the stated tolerances as a share of the value; 0 where none is stated."""
        return min((t for t in (self.below, self.above) if t), default=0.0)


@dataclass(frozen=True, slots=True)
class Carried:
    """A guaranteed value at the condition of the day, with its budget and how it got there."""

    value: float
    budget: Budget
    explained: Explained


def terms_of(guarantee: Guarantee) -> Terms:
    """A guarantee of the description in SI."""
    return Terms(
        guarantee.quantity,
        guarantee.value_si,
        stated_conditions(guarantee.at),
        guarantee.tolerance.below,
        guarantee.tolerance.above,
        guarantee.decision,
        guarantee.carried_by,
        guarantee.route,
        guarantee.source,
        guarantee.includes,
        guarantee.largest_uncertainty,
    )


def boundary_differs(terms: Terms, boundary: tuple[str, ...] | None) -> str | None:
    """Why a measured power or COP is not the one of this guarantee: another boundary is counted; None where it is.

    `boundary` is what the design's power input counts, and with it the meter's; None where nobody says.
    """
    if terms.includes is None or terms.quantity not in ("power_input", "cooling_cop", "heating_cop"):
        return None
    if boundary is None:
        return "the contract says what the power counts, and the design does not: state `includes` at the rated points"
    if set(terms.includes) == set(boundary):
        return None
    counted, designed = (", ".join(sorted(x)) for x in (terms.includes, boundary))
    return f"the contract counts the power of {counted}, the design that of {designed}: these are two boundaries"


def stated_conditions(conditions: Conditions) -> dict[str, float]:
    """The conditions that are stated, by nomenclature key."""
    from commission.description.model import Conditions as Keys

    values = ((key, getattr(conditions, key)) for key in Keys.model_fields)
    return {key: value for key, value in values if value is not None}


def carry(
    terms: Terms,
    conditions: Mapping[str, Measured],
    model: SystemModel,
    rated_points: Sequence[RatedPoint] = (),
    there: Prediction | None = None,
    unread: Collection[str] = (),
) -> Carried:
    """The guaranteed value at the measured condition, by the way that the contract states.

    `there` is the prediction at the condition of the guarantee, for a caller that already has it. `unread` names
    those of the conditions that nobody reads.

    Raises:
        NotCalculatedError: the model has no solution there, the table does not reach, or the day is not the stated
            condition.
    """
    if terms.carried_by == "design model":
        return by_model(terms, conditions, model, there, unread)
    table = terms.carried_by == "supplier's table"
    axis = model.condition_axes.get(STAGE)
    stage = terms.at.get(STAGE, axis.rated if axis is not None else 1.0)
    in_it = table and len({p.compressor_stage for p in rated_points}) > 1
    if not in_it and another_stage(conditions, stage):
        raise NotCalculatedError(
            f"the guarantee holds for a compressor stage of {100 * stage:.0f} %, and the day ran at "
            f"{100 * conditions[STAGE].value:.0f} %"
        )
    if table:
        return by_table(terms, conditions, rated_points, model.facts.pressure)
    return as_stated(terms, conditions, model)


def by_model(
    terms: Terms,
    conditions: Mapping[str, Measured],
    model: SystemModel,
    there: Prediction | None = None,
    unread: Collection[str] = (),
) -> Carried:
    """The guaranteed value times the ratio of the design model at the day's and at the guarantee's condition.

    Each part of the model uncertainty counts with the difference of its relative effects at the two conditions: what
    moves both alike moves the ratio not at all.
    """
    used = dict(day_condition(model, conditions).used)
    day_values = {k: m.value for k, m in used.items()}
    key = terms.quantity
    for condition in terms.at:
        if not known_to(model, condition):
            label = model.facts.shown.words(condition)
            raise NotCalculatedError(f"the design model does not depend on {label}, which the guarantee states")
    there = there or model.predict(dict(terms.at))
    day = model.predict(day_values, as_stated=unread)
    for prediction in (there, day):
        if key not in prediction.expected:
            raise NotCalculatedError(prediction.not_calculated.get(key, f"the model does not calculate {key}"))
    base, now = there.expected[key].value, day.expected[key].value
    value = terms.value * now / base
    parts = []
    for cause in sorted(set(there.parts.get(key, {})) | set(day.parts.get(key, {}))):
        change = day.parts.get(key, {}).get(cause, 0.0) / now - there.parts.get(key, {}).get(cause, 0.0) / base
        if change:
            part = model_component(model, cause, value * change, key)
            parts.append(replace(part, remedy="test nearer to the condition of the guarantee"))
    sure = not any(m.budget.components for m in used.values())
    slopes = {} if sure else model.sensitivities(day_values).get(key, {})
    through = [m.budget.scaled(terms.value / base * slopes[k]) for k, m in used.items() if slopes.get(k)]
    budget = combine(Budget(tuple(parts)), *through)
    return _carried(terms, value, budget, "guarantee_by_model", used, Input("design model, ratio", now / base,
                    Kind.NUMBER, "calculated"))  # fmt: skip


def by_table(
    terms: Terms, conditions: Mapping[str, Measured], rated_points: Sequence[RatedPoint], pressure: float = 101325.0
) -> Carried:
    """The guaranteed value times the ratio of the supplier's table at the day's and at the guarantee's condition.

    The table is that of the rated points which state the quantity; it must be a full grid over the conditions that vary
    in it and is read linearly along each. What lies between its points is the supplier's own: no uncertainty is added.
    A table by wet bulb is read by the humidity of the day and the other way round, at barometric `pressure` (Pa).
    """
    axes, values = supplier_grid(terms.quantity, rated_points)
    keys = [a.key for a in axes]
    stated = with_air({k: Measured(k, v) for k, v in terms.at.items()}, keys, pressure)
    conditions = with_air(conditions, keys, pressure)
    base, _ = interpolate(axes, values, {k: m.value for k, m in stated.items()})
    now, slopes = interpolate(axes, values, {k: m.value for k, m in conditions.items()})
    value = terms.value * now / base
    used = {a.key: conditions[a.key] for a in axes}
    through = [used[k].budget.scaled(terms.value / base * slope) for k, slope in slopes.items() if slope]
    ratio = Input("supplier's table, ratio", now / base, Kind.NUMBER, "calculated")
    return _carried(terms, value, combine(*through), "guarantee_by_table", used, ratio)


def supplier_grid(quantity: str, rated_points: Sequence[RatedPoint]) -> tuple[tuple[Axis, ...], tuple[float, ...]]:
    """The rated points as a grid over the conditions that vary in them.

    Raises:
        NotCalculatedError: fewer than two points state the quantity, or they form no full grid.
    """
    rows = [(stated_conditions(p), v) for p in rated_points if (v := _rated_value(quantity, p)) is not None]
    keys = sorted({k for at, _ in rows for k in at})
    varying = [k for k in keys if len({at.get(k) for at, _ in rows}) > 1]
    label = NOMENCLATURE[quantity].words
    if len(rows) < 2 or not varying:
        raise NotCalculatedError(f"the supplier's table needs at least two rated points that state {label}")
    if any(k not in at for at, _ in rows for k in varying):
        raise NotCalculatedError("a rated point of the supplier's table leaves out a condition that others state")
    axes = tuple(Axis(k, tuple(sorted({at[k] for at, _ in rows}))) for k in varying)
    table = {tuple(at[k] for k in varying): v for at, v in rows}
    wanted = points(axes)
    if len(table) != len(rows) or len(wanted) != len(table):
        raise NotCalculatedError(
            "the rated points form no full table: every combination of conditions must be there once"
        )
    return axes, tuple(table[tuple(at[k] for k in varying)] for at in wanted)


def _rated_value(quantity: str, point: RatedPoint) -> float | None:
    if quantity in ("cooling_cop", "heating_cop"):
        stated: float | None = getattr(point, quantity)
        capacity = point.cooling_capacity if quantity == "cooling_cop" else point.heating_capacity
        if stated is not None or capacity is None or point.power_input is None:
            return stated
        return capacity / point.power_input
    if quantity == "net_cooling_capacity":
        return point.cooling_capacity if point.capacity_is == "net" else None
    if quantity == "cooling_capacity" and point.capacity_is == "net":
        return None
    value: float | None = getattr(point, quantity)
    return value


def as_stated(terms: Terms, conditions: Mapping[str, Measured], model: SystemModel) -> Carried:
    """The guaranteed value itself, where the day is the stated condition.

    That is: within 0.5 K (5 % of flows and speeds), or within the expanded uncertainty of the reading. What the rest
    of the difference may do comes into the budget through the sensitivities of the model.
    """
    used = {}
    conditions = with_air(conditions, terms.at, model.facts.pressure)
    for key, wanted in terms.at.items():
        label = model.facts.shown.words(key)
        if key not in conditions:
            raise NotCalculatedError(f"it needs a reading of {label}")
        kind = NOMENCLATURE[key].kind
        near = max(_NEAR.get(kind, _NEAR_SHARE * abs(wanted)), conditions[key].budget.expanded())
        if abs(conditions[key].value - wanted) > near:
            raise NotCalculatedError(f"the guarantee holds only as stated, and the {label} of the day is another one")
        used[key] = conditions[key]
    asked, wanted_there = day_condition(model, used).used, plain_in_model(model, terms.at)
    slopes = model.sensitivities({k: m.value for k, m in asked.items()}).get(terms.quantity, {})
    through = []
    for key, measured in asked.items():
        slope = slopes.get(key, 0.0)
        if slope:
            off = Component(
                f"{model.facts.shown.words(key)} not quite as stated",
                slope * (measured.value - wanted_there[key]) / math.sqrt(3.0), "rectangular",
                source="difference of the day from the stated condition times the sensitivity of the model", of=key,
                remedy="test nearer to the condition of the guarantee",
            )  # fmt: skip
            through += [measured.budget.scaled(slope), Budget((off,) if off.value else ())]
    return _carried(terms, terms.value, combine(*through), "guarantee_as_stated", used)


def _carried(
    terms: Terms, value: float, budget: Budget, method: str, used: Mapping[str, Measured], *more: Input
) -> Carried:
    stated = Input(f"guaranteed {terms.quantity}", terms.value, NOMENCLATURE[terms.quantity].kind, "contract")
    inputs = (stated, *more, *(Input(k, m.value, NOMENCLATURE[k].kind, "reading") for k, m in used.items()))
    return Carried(value, budget, Explained(terms.quantity, value, budget.standard, method, inputs))
