"""What a pencil works out of the readings, and how: a gauge reads at the compressor, exchangers lie beyond a line."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from contextlib import suppress
from typing import TYPE_CHECKING

from commission.acceptance.choosing import PRESSURES
from commission.errors import NotCalculatedError
from commission.manual.showing import size_text
from commission.quantities import Display, Explained, Kind

if TYPE_CHECKING:
    from commission.prediction import Prediction
    from commission.properties import Refrigerant

WORKED_OUT = (
    "evaporator_temperature_difference", "superheat", "compressor_superheat", "condenser_temperature_difference",
    "evaporator_approach", "condenser_approach", "subcooling", "gas_cooler_approach",
    "heat_source_temperature_change", "heat_sink_temperature_change",
)  # fmt: skip
"""What follows from the readings: differences, which a pencil can do."""
EVAPORATOR_OUTLET = "Evaporator outlet pipe temperature"
"""What the superheat at the evaporator is worked out from; it has no key of its own: a record takes the superheat."""
_SHOWN = 0.05
"""Line loss in K from which it is told: what a sheet can show."""


def how(key: str, refrigerant: Refrigerant | None, predictions: Sequence[Prediction], display: Display) -> str:
    """How a quantity of `WORKED_OUT` follows from the readings, with the line loss where the expected value lies
    beyond one; without predictions, at the gauge."""
    low, high, boiling = "low-side", "high-side", "saturation"
    dew = "dew point" if refrigerant is not None and refrigerant.is_blend else boiling
    bubble = "bubble point" if refrigerant is not None and refrigerant.is_blend else boiling
    loss = _losses(key, refrigerant, predictions)
    evaporating = f"{dew} at the {low} gauge{_moved(loss, 'in the evaporator', display)}"
    condensing = f"{dew} at the {high} gauge{_moved(loss, 'in the condenser', display)}"
    before_valve = f"{bubble} at the {high} gauge{_moved(loss, 'before the valve', display)}"
    words: Mapping[str, str] = {
        "evaporator_temperature_difference": f"evaporating is {evaporating}",
        "superheat": f"evaporator outlet minus evaporating: {evaporating}",
        "compressor_superheat": f"suction line minus {dew} at the {low} gauge",
        "condenser_temperature_difference": f"condensing is {condensing}",
        "evaporator_approach": f"evaporating is {evaporating}",
        "condenser_approach": f"condensing is {condensing}",
        "subcooling": f"{before_valve}, minus liquid line",
        "gas_cooler_approach": display.words("gas_cooler_approach"),
        "heat_source_temperature_change": "inlet minus outlet",
        "heat_sink_temperature_change": "outlet minus inlet",
    }
    return words[key]


def _moved(losses: Sequence[float], where: str, display: Display) -> str:
    """The loss between gauge and exchanger in words; its range where it changes over the sheet."""
    if not losses or max(map(abs, losses)) < _SHOWN:
        return ""
    word = "plus" if sum(losses) > 0 else "less"
    ends = sorted(size_text(display, Kind.TEMPERATURE_DIFFERENCE, abs(x)) for x in (min(losses), max(losses)))
    span = ends[0] if ends[0] == ends[1] else f"{ends[0].split()[0]} to {ends[1]}"
    return f" {word} the line loss of {span}, as it is {where}"


def _losses(key: str, refrigerant: Refrigerant | None, predictions: Sequence[Prediction]) -> list[float]:
    """Saturation at the exchanger less saturation at the gauge, K, at each prediction that has both."""
    if refrigerant is None:
        return []
    found = []
    for prediction in predictions:
        with suppress(NotCalculatedError):  # a gauge above the critical point has no saturation
            found += _loss(key, refrigerant, {k: e.value for k, e in prediction.expected.items()})
    return found


def _loss(key: str, refrigerant: Refrigerant, value: Mapping[str, float]) -> list[float]:
    if not set(PRESSURES) <= set(value):
        return []
    if key in ("evaporator_temperature_difference", "evaporator_approach", "superheat"):
        return [value["evaporating_temperature"] - refrigerant.dew_temperature(value["suction_pressure"])]
    if key in ("condenser_temperature_difference", "condenser_approach") and "condensing_temperature" in value:
        return [value["condensing_temperature"] - refrigerant.dew_temperature(value["discharge_pressure"])]
    if key == "subcooling" and "subcooling" in value:
        bubble = refrigerant.bubble_temperature(value["discharge_pressure"])
        return [value["liquid_temperature"] + value["subcooling"] - bubble]
    return []


def evaporator_outlet(prediction: Prediction) -> Explained | None:
    """Temperature at the evaporator outlet in K: evaporating plus superheat, their common causes kept."""
    keys = ("evaporating_temperature", "superheat")
    if not {*keys, *PRESSURES} <= set(prediction.expected):
        return None
    one, other = (prediction.parts.get(k, {}) for k in keys)
    square = sum((one.get(c, 0.0) + other.get(c, 0.0)) ** 2 for c in {*one, *other})
    value = sum(prediction.expected[k].value for k in keys)
    return Explained("evaporating_temperature", value, math.sqrt(square), "component_balance", ())
