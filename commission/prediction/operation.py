"""What a person who stands at the machine would wonder at: a fan that is slowed, a coil that ices up."""

from __future__ import annotations

from collections.abc import Iterator, Mapping

from commission.machine import OperatingPoint
from commission.prediction.facts import Facts

FULL = 0.995
"""Share of the full flow from which a fan counts as running at full speed."""
_ACTS = {
    "fan speed": "is that of the fan at full speed; the control slows it",
    "fan cycling": "is that of all fans; the control stops and starts them",
    "water valve": "is that of the open valve; the control throttles it",
}


def told_of_operation(facts: Facts, conditions: Mapping[str, float], point: OperatingPoint) -> tuple[str, ...]:
    """A sentence for each such thing at one operating point; `conditions` in SI."""
    return (*_slowed(facts, conditions, point), *_ices(facts, point))


def flow_left(by: str, share: float) -> str:
    """What the head-pressure control makes of the stated flow, with the mean share (0-1) that it leaves."""
    return f"{_ACTS[by]}, to {100 * share:.0f} % of it on the mean"


def _slowed(facts: Facts, conditions: Mapping[str, float], point: OperatingPoint) -> Iterator[str]:
    control, share = facts.system.controls.head_pressure, point.balance.sink_flow_share
    flow = conditions.get("heat_sink_flow")
    if control is not None and control.by in _ACTS and flow is not None and share < FULL:
        stated, left = (facts.shown.of("heat_sink_flow", x) for x in (flow, share * flow))
        yield f"the {facts.shown.words('heat_sink_flow')} of {stated} {flow_left(control.by, share)}: about {left}"


def _ices(facts: Facts, point: OperatingPoint) -> Iterator[str]:
    """A coil that cools air below freezing and has no defrost."""
    if facts.source_liquid is not None or facts.heats_from_air or facts.system.evaporator.defrost is not None:
        return
    if point.balance.source_drive < 273.15:
        shown = facts.shown.of("evaporating_temperature", point.balance.evaporating_temperature)
        yield (
            f"the coil is below freezing ({shown} evaporating) and no defrost is stated: it ices up, and the values "
            "hold for a clean coil only"
        )
