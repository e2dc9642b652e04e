"""The condition of the day in the keys of the model: a wet bulb becomes a humidity, either end of a medium will do.

A contract says "2/1 °C", dry and wet bulb, and a psychrometer reads just that; the model asks for a relative humidity.
Both readings move the humidity that follows, so that their budgets go into it with their causes, and a coil that is
predicted from dry bulb and humidity keeps the correlation between the two.
"""

from __future__ import annotations

from collections.abc import Callable, Collection, Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from commission.acceptance.budget import Budget, Measured, combine
from commission.description.model import NEAR_A_STAGE
from commission.errors import NotCalculatedError
from commission.quantities import NOMENCLATURE, Explained, Input, Kind

if TYPE_CHECKING:
    from commission.prediction import SystemModel

DRY, WET, HUMIDITY = "heat_source_inlet_temperature", "heat_source_wet_bulb", "heat_source_relative_humidity"
BAROMETER, STAGE = "barometric_pressure", "compressor_stage"
_STEP: Mapping[str, float] = {DRY: 1e-3, WET: 1e-3, HUMIDITY: 1e-3, BAROMETER: 10.0}
"""Steps of the slopes, SI; small, for at 0.01 °C the wick turns to ice and the humidity jumps by a percent or so."""


@dataclass(frozen=True)
class DayCondition:
    """`used` are the conditions at which the model is asked, `derived` those of them that were calculated; `spent` the
    readings that went into a derived one, `unused` those that did not, with the reason, and `warnings`."""

    used: Mapping[str, Measured]
    derived: Mapping[str, Explained] = field(default_factory=dict)
    spent: frozenset[str] = frozenset()
    unused: Mapping[str, str] = field(default_factory=dict)
    warnings: tuple[str, ...] = ()


def other_end(key: str) -> str:
    """The outlet temperature for an inlet temperature and the other way round; other keys as they are."""
    for one, other in (("_inlet_temperature", "_outlet_temperature"), ("_outlet_temperature", "_inlet_temperature")):
        if key.endswith(one):
            return key.removesuffix(one) + other
    return key


def known_to(model: SystemModel, key: str) -> bool:
    """Whether the model can be asked at a value of `key`: one of its conditions, the wet bulb in place of a humidity,
    or the other end of a medium."""
    axes = model.condition_axes
    return key in axes or other_end(key) in axes or (key == WET and HUMIDITY in axes)


def day_condition(model: SystemModel, measured: Mapping[str, Measured]) -> DayCondition:
    """What of the readings sets the condition of this model.

    Where the end of a medium by which the system is rated was not read, the other end stands for it, and that is said;
    not so the outlet of air, which no single probe reads mixed. A humidity that was read goes before a wet bulb.
    """
    used, said, words = {}, [], model.facts.shown.words
    for key in model.condition_axes:
        if key in measured:
            used[key] = measured[key]
        elif _stands_for(model, key) and other_end(key) in measured:
            used[other_end(key)] = measured[other_end(key)]
            said.append(f"{words(key)} was not read: the condition is taken from {words(other_end(key))}")
    if WET not in measured or HUMIDITY not in model.condition_axes:
        return DayCondition(used, warnings=tuple(said))
    if HUMIDITY in measured:
        reason = "the relative humidity was read too, and the condition is taken from it"
        return DayCondition(used, unused={WET: reason}, warnings=tuple(said))
    try:
        found, made, warning = _humidity_of(measured, model.facts.pressure)
    except NotCalculatedError as error:
        return DayCondition(used, {}, frozenset(), {WET: f"no relative humidity follows from it: {error}"}, tuple(said))
    return DayCondition({**used, HUMIDITY: found}, {HUMIDITY: made}, frozenset({WET}), {}, (*said, *warning))


def _stands_for(model: SystemModel, key: str) -> bool:
    """Whether the other end of the medium may stand for this condition when only that was read."""
    other = other_end(key)
    if other == key or other in model.condition_axes:
        return False
    liquid = model.facts.source_liquid if key.startswith("heat_source") else model.facts.sink_liquid
    return other.endswith("_inlet_temperature") or liquid is not None


def with_air(measured: Mapping[str, Measured], wanted: Collection[str], pressure: float) -> Mapping[str, Measured]:
    """The condition with the wet bulb or the humidity that is wanted and not there, from the other and the dry bulb.

    `pressure` is barometric, in Pa, where none was read. What cannot be calculated is left out.
    """
    from commission.properties import moist_air

    if WET in wanted and WET not in measured and {DRY, HUMIDITY} <= set(measured):

        def wet(**at: float) -> float:
            return moist_air(at[DRY], at[BAROMETER], relative_humidity=at[HUMIDITY]).wet_bulb

        inputs = _inputs(measured, (DRY, HUMIDITY), pressure)
        try:
            return {**measured, WET: _propagated(WET, wet, inputs)}
        except NotCalculatedError:
            return measured
    if HUMIDITY in wanted and HUMIDITY not in measured and {DRY, WET} <= set(measured):
        try:
            return {**measured, HUMIDITY: _humidity_of(measured, pressure)[0]}
        except NotCalculatedError:
            return measured
    return measured


def plain_in_model(model: SystemModel, at: Mapping[str, float]) -> Mapping[str, float]:
    """A stated condition with its wet bulb turned into the humidity that the model asks for.

    Raises:
        NotCalculatedError: dry and wet bulb cannot be those of any air, or the dry bulb is not stated.
    """
    if WET not in at or HUMIDITY not in model.condition_axes:
        return at
    found, _, _ = _humidity_of({k: Measured(k, v) for k, v in at.items()}, model.facts.pressure)
    return {**{k: v for k, v in at.items() if k != WET}, HUMIDITY: found.value}


def _humidity_of(measured: Mapping[str, Measured], pressure: float) -> tuple[Measured, Explained, tuple[str, ...]]:
    """Relative humidity of the source air from its dry and wet bulb.

    Two probes in saturated air may read the wet one above the dry one: within their expanded uncertainty the air is
    then taken as saturated, and that is said.

    Raises:
        NotCalculatedError: no dry bulb, or no air can have these two.
    """
    from commission.properties import moist_air

    if DRY not in measured:
        raise NotCalculatedError("it needs a reading of the dry bulb where the air enters")
    inputs = _inputs(measured, (DRY, WET), pressure)
    above = inputs[WET].value - inputs[DRY].value
    warning: tuple[str, ...] = ()
    if above > 0.0:
        if above > combine(inputs[WET].budget, inputs[DRY].budget.scaled(-1.0)).expanded():
            raise NotCalculatedError(f"the wet bulb reads {above:.1f} K above the dry bulb, which no air can")
        warning = (f"the wet bulb reads {above:.1f} K above the dry bulb, within their doubt: the air is taken as "
                   "saturated",)  # fmt: skip

    def humidity(**at: float) -> float:
        wet = at[WET] - max(0.0, above)
        return moist_air(at[DRY], at[BAROMETER], wet_bulb=wet).relative_humidity

    found = _propagated(HUMIDITY, humidity, inputs)
    origin = {k: "reading" if k in measured else "plant.yaml" for k in inputs}
    shown = tuple(Input(k, m.value, NOMENCLATURE[k].kind, origin[k]) for k, m in inputs.items())
    return found, Explained(HUMIDITY, found.value, found.budget.standard, "humidity_of_bulbs", shown), warning


def _inputs(measured: Mapping[str, Measured], keys: tuple[str, ...], pressure: float) -> dict[str, Measured]:
    air = measured.get(BAROMETER, Measured(BAROMETER, pressure))
    return {**{k: measured[k] for k in keys}, BAROMETER: air}


def _propagated(key: str, function: Callable[..., float], inputs: Mapping[str, Measured]) -> Measured:
    """Value and budget by slopes over small steps (JCGM 100, 5.1.3), one-sided at saturation and at dry air."""
    values = {k: m.value for k, m in inputs.items()}
    budgets: list[Budget] = []
    for name, measured in inputs.items():
        if measured.budget.components:
            budgets.append(measured.budget.scaled(_slope(function, values, name)))
    return Measured(key, function(**values), combine(*budgets))


def _slope(function: Callable[..., float], values: Mapping[str, float], name: str) -> float:
    step = _STEP[name]
    for below, above in ((step, step), (step, 0.0), (0.0, step)):
        try:
            high = function(**{**values, name: values[name] + above})
            low = function(**{**values, name: values[name] - below})
        except NotCalculatedError:
            continue
        return (high - low) / (above + below)
    raise NotCalculatedError(f"no air is near this one in {NOMENCLATURE[name].kind.value}")


def another_stage(conditions: Mapping[str, Measured], wanted: float) -> bool:
    """Whether the machine ran at another capacity stage than the wanted one."""
    return STAGE in conditions and abs(conditions[STAGE].value - wanted) > NEAR_A_STAGE


def missing_temperature(model: SystemModel, used: Collection[str]) -> str | None:
    """The first temperature of the condition that was read at neither end, None where all were."""
    for key in model.condition_axes:
        read = key in used or (_stands_for(model, key) and other_end(key) in used)
        if NOMENCLATURE[key].kind is Kind.TEMPERATURE and not read:
            return key
    return None
