"""What the model says at a rated point: the whole system, the condensing unit, or the compressor alone."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from commission.errors import NotCalculatedError
from commission.machine import Balance, Compression
from commission.prediction.facts import Facts
from commission.prediction.frost import with_defrosts
from commission.prediction.plan import Plan
from commission.prediction.rated import Case
from commission.prediction.streams import media


@dataclass(frozen=True, slots=True)
class Seen:
    """The model at a rated point. `balance` is None for a compressor alone, whose dew points are given.

    `heat_share` and `power_share` turn what a clean coil gives into the average over frost and defrosts.
    """

    compression: Compression
    heat_from_source: float
    heat_to_sink: float
    fans: float
    balance: Balance | None
    heat_share: float = 1.0
    power_share: float = 1.0


def simulate(facts: Facts, a: Mapping[str, float], plan: Plan, case: Case, start: Seen | None) -> Seen:
    """The model at a rated point.

    Raises:
        NotCalculatedError: it has no balance there.
    """
    near = start.balance if start is not None else None
    conditions = {"heat_source_inlet_temperature": plan.rated.source_temperature, **case.conditions}
    if "heat_source_outlet_temperature" in case.conditions:
        conditions.pop("heat_source_inlet_temperature")
    if case.unit is None:
        plan = plan.at(conditions)
        around = media(facts, plan, conditions)
        balance = plan.machine.balance(around, near)
        fans = plan.fans_at(around).counted(balance.sink_fan_share)
        heat, power = with_defrosts(plan.frost_share, around) if case.defrosts else (1.0, 1.0)
        return Seen(
            balance.compression, balance.heat_from_source, balance.heat_to_sink, fans, balance, heat, power
        )  # fmt: skip
    rating = case.unit
    superheat = rating.superheat if rating.superheat is not None else a["rating_superheat"]
    subcooling = rating.subcooling if rating.subcooling is not None else a["rating_subcooling"]
    if rating.condensing is not None:
        around = media(facts, plan, {**conditions, "heat_sink_inlet_temperature": plan.rated.sink_temperature})
        compression, source = plan.machine.compressor_alone(
            rating.evaporating, rating.condensing, superheat, subcooling, around
        )
        return Seen(compression, source, source + compression.power, 0.0, None)
    balance = plan.machine.condensing_unit(
        rating.evaporating, superheat, subcooling, media(facts, plan, conditions), near
    )
    share = a["fans_in_rated_power"] if rating.counts_fan is None else float(rating.counts_fan)
    fans = share * plan.fans.sink * balance.sink_fan_share
    return Seen(balance.compression, balance.heat_from_source, balance.heat_to_sink, fans, balance)


def observed(seen: Seen, of: str) -> float:
    """What the model calculates for one datum, in SI.

    Raises:
        NotCalculatedError: a volumetric efficiency is stated, but no displacement that it could belong to.
    """
    if of in ("cooling_capacity", "heating_capacity"):
        return seen.heat_from_source if of == "cooling_capacity" else seen.heat_share * seen.heat_to_sink
    if of == "power_input":
        return seen.power_share * (seen.compression.power + seen.fans)
    if of in ("compressor_power", "refrigerant_flow"):
        return seen.compression.power if of == "compressor_power" else seen.compression.flow
    if of == "isentropic_efficiency":
        return seen.compression.isentropic_efficiency
    if of == "volumetric_efficiency":
        if seen.compression.volumetric_efficiency is None:
            raise NotCalculatedError("a volumetric efficiency needs the displacement of the compressor")
        return seen.compression.volumetric_efficiency
    balance = seen.balance
    if balance is None:
        raise KeyError(of)
    if of == "evaporating_temperature":
        return balance.evaporating_temperature
    if of == "condensing_temperature":
        if balance.condensing_temperature is None:
            raise NotCalculatedError(
                "a condensing temperature is stated, but the high side is above the critical point"
            )
        return balance.condensing_temperature
    if of == "source_minus_evaporating":
        return balance.source_inlet_temperature - balance.source_drive
    if of == "condensing_minus_sink_inlet":
        return balance.sink_drive - balance.sink_inlet_temperature
    if of == "condensing_minus_sink_outlet":
        return balance.sink_drive - balance.sink_outlet_temperature
    raise KeyError(of)
