"""Faults of a fitted machine, each as another value of one of its parameters, to expect readings of a sick plant.

What follows from the condition needs no fault: a dirty filter, a slow fan or a throttled pump is another
`heat_source_flow` or `heat_sink_flow` of `SystemModel.predict`; a wrong sensor is an offset of a reading.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace

from commission.errors import InputError, NotCalculatedError, Problem, nearest
from commission.machine import Compressor, SingleStage, Transcritical
from commission.prediction.charge import with_charge
from commission.prediction.guard import in_words
from commission.prediction.model import SystemModel
from commission.prediction.plan import Machine, Plan
from commission.prediction.streams import media


@dataclass(frozen=True, slots=True)
class Fault:
    """A fault that the model carries: what its size means, and how a size from 0 (healthy) up changes the machine.

    `highest` is the largest size that makes sense.
    """

    key: str
    title: str
    size: str
    highest: float
    apply: Callable[[Machine, float, float], Machine]


def _single(machine: Machine, fault: str) -> SingleStage:
    if isinstance(machine, Transcritical):
        raise NotCalculatedError(f"the fault '{fault}' is not carried for a circuit with a gas cooler")
    return machine


def _condenser(machine: Machine, size: float, _: float) -> Machine:
    part = machine.condenser
    return replace(machine, condenser=replace(part, conductance=(1 - size) * part.conductance))


def _evaporator(machine: Machine, size: float, _: float) -> Machine:
    part = machine.evaporator
    return replace(machine, evaporator=replace(part, conductance=(1 - size) * part.conductance))


def _leak(machine: Machine, size: float, _: float) -> Machine:
    if not isinstance(machine.compressor, Compressor):
        raise NotCalculatedError("worn valves are not carried for a compressor that is known by its polynomials")
    return replace(machine, compressor=replace(machine.compressor, leak=size))


def _gas(machine: Machine, size: float, _: float) -> Machine:
    return replace(_single(machine, "gas that does not condense"), gas_pressure=size)


def _feed(machine: Machine, size: float, area: float) -> Machine:
    one = _single(machine, "liquid line restricted")
    if one.restriction is not None:
        return replace(one, restriction=(1 - size) * one.restriction)
    return replace(one, greatest_feed=(1 - size) * area)


def _flash(machine: Machine, size: float, area: float) -> Machine:
    one = _single(machine, "vapour before the valve")
    feed = one.greatest_feed if one.restriction is not None else area
    return replace(one, flash=size, subcooling=0.0, greatest_feed=feed)


def _undercharge(machine: Machine, size: float, area: float) -> Machine:
    return with_charge(_single(machine, "charge too small"), -size, area)


def _overcharge(machine: Machine, size: float, area: float) -> Machine:
    return with_charge(_single(machine, "charge too large"), size, area)


_ALL = (
    Fault("condenser_fouling", "Condenser fouled", "share of its conductance that is lost", 0.9, _condenser),
    Fault("evaporator_fouling", "Evaporator fouled or iced", "share of its conductance that is lost", 0.9, _evaporator),
    Fault("valve_leakage", "Compressor valves leak", "share of the gas that flows back", 0.9, _leak),
    Fault("foreign_gas", "Gas that does not condense", "pressure in Pa that it adds on the high side", 1e6, _gas),
    Fault(
        "feed_restriction", "Valve, drier or liquid line restricted", "share of the full feed that is lost", 0.9, _feed
    ),
    Fault("flash_gas", "Vapour before the valve", "share of vapour before the valve", 0.5, _flash),
    Fault("undercharge", "Charge too small", "share of the charge that is lost", 0.5, _undercharge),
    Fault("overcharge", "Charge too large", "share of the charge that is too much", 0.5, _overcharge),
)
FAULTS: Mapping[str, Fault] = {fault.key: fault for fault in _ALL}
VALVE_RESERVE = 1.3
"""Feed of a fully open valve over that at the rated condition (common practice, no source: valves are chosen 20 to 40 %
larger)."""


@in_words
def with_fault(model: SystemModel, key: str, size: float) -> SystemModel:
    """The same system with one fault of `size`; its expectations are those of a plant that has it.

    A valve is taken to be fully open at 1.3 times the feed of the rated condition.

    Raises:
        InputError: no such fault, or a size outside what makes sense.
        NotCalculatedError: the fault is not carried for this kind of machine.
    """
    if key not in FAULTS:
        raise InputError(Problem("this is no fault that the model carries", value=key, nearest=nearest(key, FAULTS)))
    fault = FAULTS[key]
    if not 0 <= size <= fault.highest:
        raise InputError(
            Problem(
                f"the size of '{fault.title}' is a {fault.size}", value=f"{size:.4g}", allowed=f"0 to {fault.highest:g}"
            )
        )
    if size == 0:
        return model

    def sick(plan: Plan) -> Plan:
        area = (
            VALVE_RESERVE * _rated_feed(model, plan) if key in ("feed_restriction", "flash_gas", "undercharge") else 0.0
        )
        return replace(plan, machine=fault.apply(plan.machine, size, area))

    variants = tuple(replace(v, plan=sick(v.plan)) for v in model.fit.variants)
    return replace(model, fit=replace(model.fit, plan=sick(model.fit.plan), variants=variants))


def _rated_feed(model: SystemModel, plan: Plan) -> float:
    """Effective area in m2 that the valve has open at the rated condition."""
    machine = plan.at(model.rated_condition).machine
    if not isinstance(machine, SingleStage):
        return 0.0
    return machine.restriction_for(media(model.facts, plan, model.rated_condition))
