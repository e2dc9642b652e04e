"""Why a machine does not run at a condition, in words for who asked for it, with the nearest at which it does."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import TypeVar

from commission.errors import NotCalculatedError
from commission.machine import OperatingPoint
from commission.machine.solver import NoSolutionError
from commission.prediction.expected import Found
from commission.prediction.facts import Facts
from commission.prediction.plan import STAGE
from commission.properties import Liquid
from commission.properties.errors import PropertyRangeError

R = TypeVar("R")
Values = Mapping[str, float]
Solved = tuple[Found, OperatingPoint]
HALVINGS = 12
"""Halvings of the steps from the rated condition: the edge is then known to 1/8192 of the way."""
AIR = 173.15, 373.15
"""Coldest and hottest air (K) that a condition may name: colder is no weather, hotter no room."""


def cannot_be(facts: Facts, conditions: Values) -> str | None:
    """Why a condition is none that media could have: a flow of nothing, humidity above saturation, ice."""
    for key, value in conditions.items():
        label, shown = facts.shown.words(key), facts.shown.of(key, value)
        if key.endswith(("_flow", "_speed")) and value <= 0:
            return f"{label} of {shown} cannot be: it must be above zero"
        steps = facts.system.compressor.steps
        if key == STAGE and value not in steps:
            known = ", ".join(facts.shown.of(key, step) for step in steps)
            near = facts.shown.of(key, min(steps, key=lambda step: abs(step - value)))
            return f"{label} of {shown} cannot be: the stages are {known}, and the nearest is {near}"
        if key.endswith("_humidity") and not 0 <= value <= 1:
            return f"{label} of {shown} cannot be: it lies between 0 and 100 %"
        if key.endswith("_temperature"):
            medium = facts.source_liquid if key.startswith("heat_source") else facts.sink_liquid
            low, high, name = _range(medium)
            if not low <= value <= high:
                where = f"from {facts.shown.of(key, low)} to {facts.shown.of(key, high)}"
                return f"{label} of {shown} cannot be: {name} is calculated {where}"
    for side, medium in (("heat_source", facts.source_liquid), ("heat_sink", facts.sink_liquid)):
        if medium is None and f"{side}_inlet_temperature" not in conditions:
            return "a condition of air is its inlet temperature; its outlet temperature follows"
    inlet, outlet = conditions.get("heat_sink_inlet_temperature"), conditions.get("heat_sink_outlet_temperature")
    if inlet is not None and outlet is not None and outlet <= inlet:
        shown = facts.shown.of("heat_sink_outlet_temperature", outlet)
        return f"heat goes into the sink, so that it cannot leave at {shown}, no warmer than it came"
    return None


def _range(medium: Liquid | None) -> tuple[float, float, str]:
    if medium is None:
        return (*AIR, "air")
    return medium.freezing_temperature, medium.highest_temperature, f"liquid {medium}"


def walk(
    facts: Facts, rated: Values, whole: Values, solve: Callable[[Values, OperatingPoint | None], Solved]
) -> Solved:
    """The balance at `whole`, found by walking there from the rated condition in steps, each started from the last.

    `solve` gives the balance at a condition, started from a neighbouring one, or raises NotCalculatedError.

    Raises:
        NotCalculatedError: there is none; why, and the nearest condition on the way that has one.
    """
    try:
        last = solve(rated, None)
    except NotCalculatedError as error:
        raise NotCalculatedError(
            "already at the rated condition no steady operation is found: check the design condition against the rated "
            "points"
        ) from error
    start = {k: v if k == STAGE else rated.get(k, last[0].values.get(k, v)) for k, v in whole.items()}
    done, step, refused = 0.0, 0.5, 0
    while done < 1.0:
        tried = min(done + step, 1.0)
        try:
            last = solve(_between(start, whole, tried), last[1])
            done = tried
        except NotCalculatedError:
            step *= 0.5
            refused += 1
            if refused > HALVINGS:
                break
    if done == 1.0:
        return last
    edge = _between(start, whole, done)
    near = ", ".join(
        f"{facts.shown.words(k)} {facts.shown.of(k, edge[k])}"
        for k in whole
        if abs(whole[k] - start[k]) > 1e-9 * abs(start[k])
    )
    raise NotCalculatedError(
        f"{_reason(facts, last[0].values)}; coming from the rated condition it still runs at {near}"
    )


def _between(start: Values, end: Values, share: float) -> dict[str, float]:
    return {k: start[k] + share * (v - start[k]) for k, v in end.items()}


def _reason(facts: Facts, at: Values) -> str:
    """What comes to its end at the last condition that has a balance."""
    fluid, shown = facts.fluid, facts.shown
    critical = f"the critical point of {fluid.name} ({shown.of('condensing_temperature', fluid.T_critical)})"
    if at["evaporating_temperature"] > fluid.T_critical - 4.0:
        return f"the source is so warm that evaporation would come to {critical}"
    if at.get("condensing_temperature", 0.0) > fluid.T_critical - 4.0:
        return f"the sink takes up so little heat that condensing would come to {critical}"
    if at["discharge_temperature"] > fluid.T_max - 8.0:
        hottest = shown.of("discharge_temperature", fluid.T_max)
        return f"the compressed gas would be hotter than {hottest}, where the known properties of {fluid.name} end"
    if at["pressure_ratio"] < 1.2:
        return "the sink is so cold beside the source that the compressor would have nothing to compress"
    if at["compressor_superheat"] < 0.5:
        return "the suction gas would condense in its line, which stands in air colder than the evaporator"
    if at["evaporating_temperature"] < fluid.T_low + 8.0:
        coldest = shown.of("evaporating_temperature", fluid.T_low)
        return f"evaporation would fall to {coldest}, where the known properties of {fluid.name} end"
    if at["pressure_ratio"] > 10.0:
        return (
            f"the lift is so high that the compressor delivers no more gas (pressure ratio {at['pressure_ratio']:.0f})"
        )
    return "heat and refrigerant flow do not come to a balance"


def fitted(calculate: Callable[[], R]) -> R:
    """The result of a fit; where the machine it looks for leaves what is known, a sentence on the description.

    Raises:
        NotCalculatedError: in words.
    """
    try:
        return calculate()
    except PropertyRangeError as error:
        raise NotCalculatedError(
            f"the machine that what is stated asks for would leave the range in which {error.substance} is known: "
            "check temperatures, flows and ratings for a slip"
        ) from error
    except NoSolutionError as error:
        raise NotCalculatedError(
            "no machine is found that runs steadily at all rated points: check temperatures, flows and ratings for a "
            "slip"
        ) from error
