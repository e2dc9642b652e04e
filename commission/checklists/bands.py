"""How far a reading of the test may lie from what is expected: calculation, rated figures behind it, meter.

A fit that meets its rated points exactly knows the figures of the supplier, not the machine: those are good to a few
per cent, and whoever reads them has a meter with an error of its own.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from types import MappingProxyType
from typing import TYPE_CHECKING

from commission.errors import NotCalculatedError

if TYPE_CHECKING:
    from commission.acceptance import Budget
    from commission.checklists.words import Facts

AS_READ = "band as read"
"""The `within` of an item that is read in the test."""
RATED: Mapping[str, str] = MappingProxyType(
    {
        "power_input": "ahri-540-power",
        "cooling_capacity": "ahri-540-capacity",
        "heat_source_temperature_change": "ahri-540-capacity",
        "heat_sink_temperature_change": "ahri-540-capacity",
        "heat_sink_flow": "ahri-540-capacity",
    }
)
"""The tolerance, in the library of tolerances, of the rated figure that a quantity follows in proportion."""
_ROOT_3 = math.sqrt(3.0)


def as_read(facts: Facts, key: str, value: float, calculated: float) -> tuple[float, str]:
    """The margin of a reading on both sides of its expected value (k = 2, as all bands), in SI, and what is in it.

    `calculated` is the standard uncertainty of the expected value. Tolerances of rated figures are rectangular, as
    largest permissible errors are (JCGM 100, 4.3.7).
    """
    from commission.acceptance import Budget, Component, combine, tolerances

    budgets, words = [Budget((Component("calculation", calculated),))], ["calculation"]
    if key in RATED:
        tolerance = tolerances()[RATED[key]]
        share = tolerance.value or 0.0
        half = share * abs(value)
        budgets.append(Budget((Component(tolerance.title, half / _ROOT_3, "rectangular", source=tolerance.source),)))
        words.append(f"rated figures ({100 * share:g} %)")
    meter = _meter(facts, key, value)
    if meter is not None:
        budgets.append(meter[0])
        words.append(meter[1])
    return 2.0 * combine(*budgets).standard, f"with the errors of {', '.join(words[:-1])} and {words[-1]}"


def _meter(facts: Facts, key: str, value: float) -> tuple[Budget, str] | None:
    """The budget of the reading alone, and the name of its instrument; None where nothing usual is known."""
    if key == "cooling_capacity":
        return _of_capacity(facts, value)
    if key.endswith("_temperature_change") and key not in facts.system.measured_with:
        return _of_change(facts, key, value)
    return _single(facts, key, value)


def _single(facts: Facts, key: str, value: float) -> tuple[Budget, str] | None:
    from commission.acceptance import Reading, measure

    named = facts.system.measured_with.get(key)
    instruments = facts.loaded.plant.instruments
    try:
        found = measure(Reading(key, value, named), instruments, facts.loaded.barometric_pressure)
    except NotCalculatedError:
        return None
    return found.budget, named if named in instruments and named else "a usual instrument"


def _of_change(facts: Facts, key: str, value: float) -> tuple[Budget, str] | None:
    """Two probes, in and out: what a matched pair shares falls out of the difference."""
    from commission.acceptance import combine

    side = key.removesuffix("_temperature_change")
    inlet, outlet = f"{side}_inlet_temperature", f"{side}_outlet_temperature"
    prediction = facts.predictions.get("expected")
    start = None if prediction is None else prediction.conditions.get(inlet)
    if start is None or not {inlet, outlet} <= set(facts.system.measured_with):
        return _single(facts, key, value)
    end = start - value if side == "heat_source" else start + value
    first, last = _single(facts, inlet, start), _single(facts, outlet, end)
    if first is None or last is None:
        return None
    return combine(last[0], first[0].scaled(-1.0)), " and ".join(dict.fromkeys((last[1], first[1])))


def _of_capacity(facts: Facts, value: float) -> tuple[Budget, str] | None:
    """Flow times temperature change of the liquid that heat is taken from: relative errors add in quadrature."""
    from commission.acceptance import combine

    prediction = facts.predictions.get("expected")
    flow = facts.system.heat_source.flow
    change = None if prediction is None else prediction.expected.get("heat_source_temperature_change")
    if flow is None or change is None or not change.value:
        return None
    parts = (
        (_single(facts, "heat_source_flow", flow), flow),
        (_meter(facts, "heat_source_temperature_change", change.value), change.value),
    )
    if any(found is None for found, _ in parts):
        return None
    budgets = [found[0].scaled(value / of) for found, of in parts if found is not None]
    return combine(*budgets), " and ".join(dict.fromkeys(found[1] for found, _ in parts if found is not None))
