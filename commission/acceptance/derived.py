"""Readings as engineers think them: superheat, subcooling, temperature differences, with budgets through the slopes.

A gauge and a probe together make a superheat; the slope of the dew line at the gauge turns the error of the gauge into
kelvin. Shared causes stay shared: the same gauge in two derived readings moves both.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.acceptance.budget import Budget, Component, Measured, combine, propagate
from commission.acceptance.expectation import PROPERTY_SOURCE, model_cause, model_component
from commission.quantities import NOMENCLATURE, Explained, Input, Kind

if TYPE_CHECKING:
    from commission.prediction import Prediction, SystemModel
    from commission.properties import Refrigerant


@dataclass(frozen=True, slots=True)
class Derived:
    """A reading calculated from readings, with its budget and how it was calculated."""

    measured: Measured
    explained: Explained


def explained(measured: Measured, method: str, inputs: Mapping[str, Measured], **more: Input) -> Derived:
    """A derived value with the readings that it was made from."""
    listed = tuple(
        Input(m.key, m.value, NOMENCLATURE[m.key].kind, "reading") for m in inputs.values() if m.key in NOMENCLATURE
    )
    value = Explained(measured.key, measured.value, measured.budget.standard, method, (*listed, *more.values()))
    return Derived(measured, value)


def property_part(refrigerant: Refrigerant) -> Measured:
    """Relative deviation of true from calculated saturation pressures: zero, with its standard uncertainty."""
    standard = refrigerant.pressure_relative_uncertainty
    component = Component(
        PROPERTY_SOURCE, standard, source="distance of the property source from published boiling points",
        cause=model_cause(PROPERTY_SOURCE), of="property source",
    )  # fmt: skip
    return Measured(PROPERTY_SOURCE, 0.0, Budget((component,) if standard else ()))


@dataclass(frozen=True, slots=True)
class LineLoss:
    """What lies between the place of a reading and the place that a quantity is defined at, in K of saturation."""

    value: float
    budget: Budget

    @property
    def measured(self) -> Measured:
        """The loss as an input of a calculation."""
        return Measured("line loss", self.value, self.budget)


def line_loss(
    model: SystemModel,
    prediction: Prediction,
    signs: Mapping[str, float],
    pressure: str,
    slope: float,
    saturation: float,
) -> LineLoss:
    """Expected difference between a sum of expected temperatures and the saturation at an expected pressure.

    `signs` gives the temperatures that are added; `slope` is dT/dp of the saturation line at the expected pressure,
    `saturation` its temperature there. The property source is left out: it moves both ends alike.
    """
    value = sum(s * prediction.expected[k].value for k, s in signs.items()) - saturation
    parts: dict[str, float] = {}
    for key, sign in (*signs.items(), (pressure, -slope)):
        for cause, size in prediction.parts.get(key, {}).items():
            if cause != PROPERTY_SOURCE:
                parts[cause] = parts.get(cause, 0.0) + sign * size
    budget = Budget(tuple(model_component(model, c, v, "line loss") for c, v in parts.items() if v))
    return LineLoss(value, budget)


def slope_of(function: Callable[[float], float], at: float) -> float:
    """Central difference over plus and minus 0.1 %."""
    step = 1e-3 * at
    return (function(at + step) - function(at - step)) / (2.0 * step)


def derive(
    refrigerant: Refrigerant,
    measured: Mapping[str, Measured],
    model: SystemModel | None = None,
    prediction: Prediction | None = None,
) -> Mapping[str, Derived]:
    """All readings that can be calculated from `measured` and are not among them, by nomenclature key.

    Evaporating and condensing temperature are defined at the exchangers and read at the compressor; the line loss
    between is the one that the model expects, with its uncertainty, or none where there is no prediction.

    Raises:
        PropertyRangeError: a pressure lies outside the saturation line.
    """
    found: dict[str, Derived] = {}
    have = dict(measured)

    def keep(derived: Derived) -> None:
        if derived.measured.key not in have:
            found[derived.measured.key] = derived
            have[derived.measured.key] = derived.measured

    for rule in (_superheat, _evaporating, _condensing, _subcooling):
        one = rule(refrigerant, have, model, prediction)
        if one is not None:
            keep(one)
    for key, plus, minus in _DIFFERENCES:
        if key in _OF_LIQUIDS and (prediction is None or key not in prediction.expected):
            continue
        if plus in have and minus in have:
            inputs = {"plus": have[plus], "minus": have[minus]}
            keep(explained(propagate(key, lambda plus, minus: plus - minus, inputs), "difference_of_readings", inputs))
    if "suction_pressure" in have and "discharge_pressure" in have:
        inputs = {"high": have["discharge_pressure"], "low": have["suction_pressure"]}
        keep(explained(propagate("pressure_ratio", lambda high, low: high / low, inputs), "ratio_of_readings", inputs))
    return found


_DIFFERENCES = (
    ("evaporator_temperature_difference", "heat_source_inlet_temperature", "evaporating_temperature"),
    ("condenser_temperature_difference", "condensing_temperature", "heat_sink_inlet_temperature"),
    ("evaporator_approach", "heat_source_outlet_temperature", "evaporating_temperature"),
    ("condenser_approach", "condensing_temperature", "heat_sink_outlet_temperature"),
    ("heat_source_temperature_change", "heat_source_inlet_temperature", "heat_source_outlet_temperature"),
    ("heat_sink_temperature_change", "heat_sink_outlet_temperature", "heat_sink_inlet_temperature"),
)


_OF_LIQUIDS = frozenset({"evaporator_approach", "condenser_approach"})
"""Differences to a leaving medium that say something of liquids only."""


def _superheat(
    refrigerant: Refrigerant, have: Mapping[str, Measured], _model: SystemModel | None, _prediction: Prediction | None
) -> Derived | None:
    if not {"suction_pressure", "suction_temperature"} <= set(have):
        return None
    inputs = {
        "pressure": have["suction_pressure"],
        "temperature": have["suction_temperature"],
        "off": property_part(refrigerant),
    }

    def superheat(pressure: float, temperature: float, off: float) -> float:
        return temperature - refrigerant.dew_temperature(pressure / (1.0 + off))

    return explained(propagate("compressor_superheat", superheat, inputs), "superheat_of_readings", inputs)


def _at_exchanger(
    refrigerant: Refrigerant,
    have: Mapping[str, Measured],
    model: SystemModel | None,
    prediction: Prediction | None,
    pressure: str,
    key: str,
) -> Derived | None:
    """Dew point at a pressure read at the compressor, moved to the exchanger by the expected line loss."""
    if pressure not in have:
        return None
    loss = LineLoss(0.0, Budget())
    if model is not None and prediction is not None and {key, pressure} <= set(prediction.expected):
        expected = prediction.expected[pressure].value
        slope = slope_of(refrigerant.dew_temperature, expected)
        loss = line_loss(model, prediction, {key: 1.0}, pressure, slope, refrigerant.dew_temperature(expected))
    inputs = {"pressure": have[pressure], "loss": loss.measured, "off": property_part(refrigerant)}

    def saturation(pressure: float, loss: float = 0.0, off: float = 0.0) -> float:
        return refrigerant.dew_temperature(pressure / (1.0 + off)) + loss

    more = {"loss": Input("line loss", loss.value, Kind.TEMPERATURE_DIFFERENCE, "calculated")}
    return explained(propagate(key, saturation, inputs), "saturation_of_reading", inputs, **more)


def _evaporating(
    refrigerant: Refrigerant, have: Mapping[str, Measured], model: SystemModel | None, prediction: Prediction | None
) -> Derived | None:
    return _at_exchanger(refrigerant, have, model, prediction, "suction_pressure", "evaporating_temperature")


def _condensing(
    refrigerant: Refrigerant, have: Mapping[str, Measured], model: SystemModel | None, prediction: Prediction | None
) -> Derived | None:
    if "discharge_pressure" in have and have["discharge_pressure"].value >= 0.98 * refrigerant.p_critical:
        return None  # above the critical point there is no condensing temperature to read
    return _at_exchanger(refrigerant, have, model, prediction, "discharge_pressure", "condensing_temperature")


def _subcooling(
    refrigerant: Refrigerant, have: Mapping[str, Measured], model: SystemModel | None, prediction: Prediction | None
) -> Derived | None:
    if not {"discharge_pressure", "liquid_temperature"} <= set(have):
        return None
    if have["discharge_pressure"].value >= 0.98 * refrigerant.p_critical:
        return None
    loss = LineLoss(0.0, Budget())
    needed = {"liquid_temperature", "subcooling", "discharge_pressure"}
    if model is not None and prediction is not None and needed <= set(prediction.expected):
        expected = prediction.expected["discharge_pressure"].value
        slope = slope_of(refrigerant.bubble_temperature, expected)
        signs = {"liquid_temperature": 1.0, "subcooling": 1.0}
        saturation = refrigerant.bubble_temperature(expected)
        loss = line_loss(model, prediction, signs, "discharge_pressure", slope, saturation)
    inputs = {
        "pressure": have["discharge_pressure"],
        "temperature": have["liquid_temperature"],
        "loss": loss.measured,
        "off": property_part(refrigerant),
    }

    def subcooling(pressure: float, temperature: float, loss: float, off: float) -> float:
        return refrigerant.bubble_temperature(pressure / (1.0 + off)) + loss - temperature

    more = {"loss": Input("line loss", loss.value, Kind.TEMPERATURE_DIFFERENCE, "calculated")}
    return explained(propagate("subcooling", subcooling, inputs), "subcooling_of_readings", inputs, **more)


def unbalance(reading: Measured, phases: Sequence[float], step: float) -> Derived:
    """Largest deviation of a phase from the mean of all, over that mean.

    One meter reads all phases, so that its error scales them alike and leaves the ratio; its resolution `step` (SI)
    does not: sqrt(1 + 1/n) of it, rectangular.

    Raises:
        ValueError: fewer than two phases, or a mean of zero.
    """
    n = len(phases)
    mean = math.fsum(phases) / n if n else 0.0
    if n < 2 or mean == 0.0:
        raise ValueError("an unbalance needs at least two phases and a mean that is not zero")
    key = f"{reading.key}_unbalance"
    standard = step / math.sqrt(12.0) * math.sqrt(1.0 + 1.0 / n) / abs(mean)
    component = Component(
        "resolution of the meter", standard, "rectangular", source="JCGM 100:2008, F.2.2.1", mark="standard",
        cause=f"{key}: resolution", of=key,
    )  # fmt: skip
    value = max(abs(x - mean) for x in phases) / abs(mean)
    measured = Measured(key, value, Budget((component,) if standard else ()))
    kind = NOMENCLATURE[reading.key].kind
    inputs = tuple(Input(f"{reading.key}, phase {i}", x, kind, "reading") for i, x in enumerate(phases, 1))
    return Derived(measured, Explained(key, value, measured.budget.standard, "unbalance_of_phases", inputs))


def ratio(key: str, above: Measured, below: Measured) -> Derived:
    """One measured value over another, shared causes kept (a COP, say)."""
    inputs = {"above": above, "below": below}
    return explained(propagate(key, lambda above, below: above / below, inputs), "ratio_of_readings", inputs)


def less(key: str, whole: Measured, part: Measured) -> Measured:
    """One measured value less another, shared causes kept."""
    return Measured(key, whole.value - part.value, combine(whole.budget, part.budget.scaled(-1.0)))
