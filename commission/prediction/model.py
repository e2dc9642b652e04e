"""The fitted model of one system: expected readings at any condition, with what their uncertainty comes from."""

from __future__ import annotations

import math
from collections.abc import Collection, Mapping, Sequence
from dataclasses import dataclass, field, fields, replace

from commission.description import Assumption, LoadedPlant
from commission.errors import CommissionError, InputError, NotCalculatedError, Problem
from commission.machine import OperatingPoint, StatePoint, solve
from commission.prediction.conditions import ConditionAxis, axes_of, complete, followers, with_weather_curve
from commission.prediction.expected import Found, beats_carnot, expected_values, frost_warning
from commission.prediction.explaining import add_part, drop_vague_carnot, explain
from commission.prediction.facts import Facts, facts_of, left_out
from commission.prediction.fitting import SCATTER, Fit, doubts, fit_system, frost_notes, inputs_found
from commission.prediction.guard import in_words
from commission.prediction.limits import beyond_limits
from commission.prediction.operation import told_of_operation
from commission.prediction.plan import STAGE, Plan
from commission.prediction.rated import reference
from commission.prediction.refusals import cannot_be, fitted, walk
from commission.prediction.settings import HeldOff, held_off
from commission.prediction.streams import at_a_stage, media
from commission.properties import Refrigerant
from commission.quantities import Explained, Input

PROPERTY = "property source"
RATED_FIGURES = (
    "cooling_capacity", "net_cooling_capacity", "heating_capacity", "heating_capacity_with_defrosts",
    "compressor_power", "power_input",
)  # fmt: skip
"""Quantities that carry the scatter of rated points about the fit themselves."""


@dataclass(frozen=True, slots=True)
class Prediction:
    """What one system should read at one condition. All values SI, pressures absolute.

    `filled` lists the conditions that were not given and taken from the rated one; a flow temperature that was taken
    from the weather curve is not among them but in a sentence of `warnings`. `as_stated` lists the conditions that
    nobody read and that a plant may miss: their assumed departure is in the uncertainties. `parts` holds, for each
    expected key, the signed change by one standard uncertainty of each cause; `Explained.uncertainty` is their root
    sum of squares. `not_calculated` gives the reason for each quantity that has no value. `sink_flow_share` is the
    mean flow of the heat sink that the head-pressure control leaves, over that of the conditions. `held_off` are the
    settings that are calculated at another value than the stated one.
    """

    system: str
    conditions: Mapping[str, float]
    filled: tuple[str, ...]
    regime: str
    expected: Mapping[str, Explained]
    not_calculated: Mapping[str, str]
    states: tuple[StatePoint, ...]
    warnings: tuple[str, ...]
    parts: Mapping[str, Mapping[str, float]]
    sink_flow_share: float = 1.0
    held_off: tuple[HeldOff, ...] = ()
    as_stated: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Nominal:
    """Expected values (SI, by nomenclature key) and regime at one condition, without uncertainty."""

    values: Mapping[str, float]
    regime: str


@dataclass
class _Starts:
    """Operating points of the last prediction, to start the next; they change the speed, not the result."""

    nominal: OperatingPoint | None = None
    variants: dict[int, OperatingPoint] = field(default_factory=dict)


@dataclass(frozen=True)
class SystemModel:
    """One system fitted to what its supplier states."""

    system_id: str
    name: str
    refrigerant: Refrigerant
    condition_axes: Mapping[str, ConditionAxis]
    assumptions: Mapping[str, Assumption]
    design_sources: tuple[str, ...]
    fitted: Mapping[str, Input]
    fit: Fit
    facts: Facts
    left_out: tuple[str, ...] = ()

    @property
    def rated_condition(self) -> dict[str, float]:
        """The rated value of each condition, SI."""
        return {key: axis.rated for key, axis in self.condition_axes.items()}

    def rated_at(self, key: str, value: float) -> SystemModel:
        """The same model with another rated value of one condition (SI), such as one of its capacity stages."""
        axis = replace(self.condition_axes[key], rated=value)
        rest = {f.name: getattr(self, f.name) for f in fields(self)}
        return SystemModel(**{**rest, "condition_axes": {**self.condition_axes, key: axis}})

    def along(self, key: str) -> dict[str, float]:
        """What stays as rated while the condition `key` varies, SI: all others, but for what the controls set by it
        (the flow temperature of a weather curve), which is to be left to them."""
        led = followers(self.facts, self.condition_axes, key)
        return {k: v for k, v in self.rated_condition.items() if k != key and k not in led}

    @property
    def may_differ(self) -> tuple[str, ...]:
        """The conditions of which an assumption says how far the plant may lie from what is stated: flows, humidity."""
        own = self.fit.plan.own_conditions
        moved = {k for v in self.fit.variants for k, x in v.plan.own_conditions.items() if x != own[k]}
        return tuple(k for k in self.condition_axes if k in moved and own[k] > 0)

    def predict(self, conditions: Mapping[str, float] | None = None, *, as_stated: Collection[str] = ()) -> Prediction:
        """Expected values at a condition (keys of the nomenclature, SI); None means the rated condition.

        What is given counts as read on the day, and so as known. What is not given is as stated, and so are those of
        the given ones that `as_stated` names: how far the plant may lie from that (`may_differ`) is in the
        uncertainties.

        Raises:
            InputError: a key that is no condition of this system.
            NotCalculatedError: the machine has no balance there; the message says why.
        """
        return self._predict(conditions, _Starts(), as_stated)

    def grid(
        self, key: str, values: Sequence[float], others: Mapping[str, float] | None = None
    ) -> tuple[Prediction | NotCalculatedError, ...]:
        """Predictions along one condition, each started from its neighbour; where there is none, the reason."""
        starts = _Starts()
        found: list[Prediction | NotCalculatedError] = []
        for value in values:
            try:
                found.append(self._predict({**(others or {}), key: value}, starts))
            except NotCalculatedError as error:
                found.append(error)
        return tuple(found)

    def nominal(self, conditions: Sequence[Mapping[str, float]]) -> tuple[Nominal | NotCalculatedError, ...]:
        """Expected values alone, without uncertainty, at many conditions, each started from the one before (SI), or
        else reached by way of the rated condition.

        Where there is no balance, the reason. Many times quicker than as many predictions.

        Raises:
            InputError: a key that is no condition of this system.
        """
        found: list[Nominal | NotCalculatedError] = []
        start: OperatingPoint | None = None
        for given in conditions:
            try:
                one, start = self._nominal(given, start)
            except NotCalculatedError as error:
                found.append(error)
            else:
                found.append(one)
        return tuple(found)

    @in_words
    def _nominal(self, given: Mapping[str, float], start: OperatingPoint | None) -> tuple[Nominal, OperatingPoint]:
        whole, _, _ = self._complete(given)
        found, point = self._solved(whole, start)
        return Nominal(found.values, point.balance.regime), point

    @in_words
    def sensitivities(self, conditions: Mapping[str, float] | None = None) -> dict[str, dict[str, float]]:
        """Change of each expected quantity per unit of each condition, SI, by central differences.

        At the edge of a regime (head pressure just held) the two sides differ; the mean of both is given. At the edge
        of what can be calculated the difference to the one side that can be is given. A capacity stage has no slope.

        Raises:
            InputError, NotCalculatedError: as `predict`.
        """
        whole, _, _ = self._complete(conditions)
        at, start = self._solved(whole)
        table: dict[str, dict[str, float]] = {}
        for key in whole:
            if key == STAGE:
                continue
            step = 0.1 if NOMINAL_STEP.get(key, 0.0) == 0.0 else NOMINAL_STEP[key] * whole[key]
            low, below = self._beside(whole, key, -step, at, start)
            high, above = self._beside(whole, key, step, at, start)
            if below == above:
                raise NotCalculatedError("this condition stands alone: on neither side of it there is a balance")
            for name in low.values.keys() & high.values.keys():
                table.setdefault(name, {})[key] = (high.values[name] - low.values[name]) / (above - below)
        return table

    def _beside(
        self, whole: Mapping[str, float], key: str, step: float, at: Found, start: OperatingPoint
    ) -> tuple[Found, float]:
        """Values one step of a condition away, and that step; those of the condition itself where there are none."""
        try:
            return self._values(self.fit.plan, {**whole, key: whole[key] + step}, start)[0], step
        except NotCalculatedError:
            return at, 0.0

    @in_words
    def assumption_effects(self, conditions: Mapping[str, float] | None = None) -> dict[str, dict[str, float]]:
        """Change of each expected quantity per +1 standard uncertainty of each assumption in use, refit included.

        Raises:
            InputError, NotCalculatedError: as `predict`.
        """
        whole, filled, _ = self._complete(conditions)
        nominal, start = self._solved(whole)
        effects: dict[str, dict[str, float]] = {}
        for cause, change, _ in self._changes(whole, self._unread(filled), nominal, start, _Starts()):
            if cause != SCATTER:
                effects[cause] = change
        return effects

    @in_words
    def infer(self, condition: str, key: str, reading: float, conditions: Mapping[str, float] | None = None) -> float:
        """The condition (such as a speed nobody can read) at which the expected value of `key` is `reading`, SI.

        The reading is spent on it: it cannot be judged as well.

        Raises:
            InputError: a condition or a quantity that this system does not have.
            NotCalculatedError: no value within the range of the condition explains the reading.
        """
        if condition not in self.condition_axes:
            raise InputError(Problem("this is no condition of this system", value=condition))
        axis = self.condition_axes[condition]

        def gap(x: Sequence[float]) -> Sequence[float]:
            whole, _, _ = self._complete({**(conditions or {}), condition: x[0] * axis.rated})
            found, _ = self._values(self.fit.plan, whole, None)
            if key not in found.values:
                raise InputError(Problem("this quantity is not expected of this system", value=key))
            return (found.values[key] / reading - 1,)

        none = f"no {self.facts.shown.words(condition)} within its range explains this reading"
        try:
            x = solve(gap, (1.0,), difference=1e-3, largest_step=0.3, tolerance=1e-7).x[0] * axis.rated
        except NotCalculatedError as error:
            raise NotCalculatedError(none) from error
        if not axis.low * (1 - 1e-6) <= x <= axis.high * (1 + 1e-6):
            raise NotCalculatedError(none)
        return x

    def _complete(
        self, conditions: Mapping[str, float] | None
    ) -> tuple[dict[str, float], tuple[str, ...], tuple[str, ...]]:
        given, note = with_weather_curve(self.facts, self.condition_axes, conditions or {})
        asked, filled, outside = complete(self.condition_axes, given, self.facts.pressure, self.facts.shown.quantities)
        whole = at_a_stage(self.facts, asked)
        why = cannot_be(self.facts, whole)
        if why is not None:
            raise NotCalculatedError(why)
        return whole, filled, (*note, *outside)

    def _solved(
        self, whole: Mapping[str, float], start: OperatingPoint | None = None, plan: Plan | None = None
    ) -> tuple[Found, OperatingPoint]:
        """As `_values`, by way of the rated condition where it is not found at once; the reason is then in words."""
        plan = plan or self.fit.plan
        try:
            return self._values(plan, whole, start)
        except NotCalculatedError:
            return walk(self.facts, self.rated_condition, whole, lambda at, near: self._values(plan, at, near))

    @in_words
    def _values(
        self, plan: Plan, whole: Mapping[str, float], start: OperatingPoint | None
    ) -> tuple[Found, OperatingPoint]:
        plan = plan.at(whole)
        around = media(self.facts, plan, whole)
        point = plan.machine.operate(around, start.balance if start is not None else None)
        return expected_values(self.facts, plan, around, point), point

    def _unread(self, keys: Collection[str]) -> tuple[str, ...]:
        """Those of the conditions nobody read that the plant may miss."""
        return tuple(k for k in self.may_differ if k in keys)

    def _changes(
        self, whole: Mapping[str, float], unread: Sequence[str], nominal: Found, start: OperatingPoint, starts: _Starts
    ) -> list[tuple[str, dict[str, float], OperatingPoint]]:
        """Change of every value by each cause. What nobody read follows each variant's own."""
        changes = []
        own = {k: self.fit.plan.own_conditions[k] for k in unread}
        for n, variant in enumerate(self.fit.variants):
            asked = {**whole, **{k: whole[k] * variant.plan.own_conditions[k] / v for k, v in own.items()}}
            try:
                found, point = self._solved(asked, starts.variants.get(n, start), variant.plan)
            except NotCalculatedError as error:
                raise NotCalculatedError(
                    "this condition lies at the edge of what the machine can do. Within the range of "
                    f"{self._title(variant.cause)} {error}"
                ) from error
            starts.variants[n] = point
            change = {k: variant.sign * (found.values[k] - v) for k, v in nominal.values.items() if k in found.values}
            changes.append((variant.cause, change, point))
        return changes

    def _title(self, cause: str) -> str:
        return f"the assumption '{self.assumptions[cause].title}'" if cause in self.assumptions else f"the {cause}"

    @in_words
    def _predict(
        self, conditions: Mapping[str, float] | None, starts: _Starts, as_stated: Collection[str] = ()
    ) -> Prediction:
        whole, filled, outside = self._complete(conditions)
        unread = self._unread({*filled, *as_stated})
        nominal, point = self._solved(whole, starts.nominal)
        starts.nominal = point
        parts: dict[str, dict[str, float]] = {key: {} for key in nominal.values}
        for cause, change, _ in self._changes(whole, unread, nominal, point, starts):
            for key, amount in change.items():
                if abs(amount) > ROUNDING * abs(nominal.values[key]):
                    add_part(parts[key], cause, amount)
        self._own_parts(nominal, parts)
        drop_vague_carnot(nominal, parts)
        expected = explain(self.facts, self.fit, whole, point, nominal, parts)
        warnings = [*outside, *point.warnings, *self.refrigerant.warnings, *self.left_out]
        frost = frost_warning(self.facts, self.fit.plan, point, nominal.values)
        if frost is not None:
            warnings.append(frost)
        warnings += told_of_operation(self.facts, whole, point)
        warnings += beyond_limits(self.facts, nominal.values, whole)
        if beats_carnot(self.facts, nominal.values):
            warnings.append("the predicted COP lies above Carnot: what is stated of this system cannot be")
        return Prediction(
            self.system_id,
            whole,
            filled,
            point.balance.regime,
            expected,
            nominal.reasons,
            point.states,
            tuple(dict.fromkeys(warnings)),
            parts,
            point.balance.sink_flow_share,
            held_off(self.facts, self.fit),
            unread,
        )

    def _own_parts(self, nominal: Found, parts: dict[str, dict[str, float]]) -> None:
        """What a value carries by itself: the property source for pressures, the scatter for rated figures."""
        u = self.refrigerant.pressure_relative_uncertainty
        for key in ("suction_pressure", "discharge_pressure"):
            parts[key][PROPERTY] = u * nominal.values[key]
        if self.fit.scatter > 0:
            for key in RATED_FIGURES:
                if key in nominal.values:
                    add_part(parts[key], SCATTER, self.fit.scatter * nominal.values[key])
            for key in ("cooling_cop", "heating_cop", "heating_cop_with_defrosts"):
                if key in nominal.values:
                    add_part(parts[key], SCATTER, math.sqrt(2) * self.fit.scatter * nominal.values[key])


ROUNDING = 1e-9
"""Relative change of a value below which a cause does not move it: solver and properties agree to that."""


NOMINAL_STEP = {
    "heat_source_relative_humidity": 0.005,
    "heat_source_flow": 0.005,
    "heat_sink_flow": 0.005,
    "compressor_speed": 0.005,
}
"""Relative step of the central differences; temperatures take 0.1 K."""


@in_words
def fit(loaded: LoadedPlant, system_id: str) -> SystemModel:
    """Fit one system of a plant to what its supplier states.

    Raises:
        InputError: no such system, or a refrigerant that is not known.
        NotCalculatedError: too little is stated, or what is stated cannot be; the message says which.
    """
    facts = facts_of(loaded, system_id)
    notes = left_out(facts)
    found = fitted(lambda: fit_system(facts))
    case = found.cases[reference(found.cases)]
    plan = found.plan
    axes = axes_of(facts, plan, case)
    return SystemModel(
        system_id=system_id,
        name=facts.system.name or system_id,
        refrigerant=facts.fluid,
        condition_axes=axes,
        assumptions=found.used,
        design_sources=tuple(c.origin for c in found.cases),
        fitted=inputs_found(facts, found),
        fit=found,
        facts=facts,
        left_out=(*notes, *frost_notes(found), *doubts(found)),
    )


__all__ = ["CommissionError", "Prediction", "SystemModel", "fit"]
