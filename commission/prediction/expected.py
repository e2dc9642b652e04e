"""From an operating point to the quantities of the nomenclature that a person reads or calculates on site. SI units."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass

from commission.errors import NotCalculatedError
from commission.machine import (
    Balance,
    Media,
    OperatingPoint,
    Transcritical,
    carnot_cooling,
    entropic_mean,
    leaving_air,
)
from commission.prediction.facts import Facts
from commission.prediction.frost import no_frost_counted, with_defrosts
from commission.prediction.plan import Plan
from commission.properties import moist_air

ABOVE_CRITICAL = "above the critical point there is no condensing temperature"

NEAR = 3.0
"""Kelvin between the media below which a Carnot COP has no weight: it is past 90, and a kelvin moves it by a third."""
TOO_NEAR = "the two media are within a few kelvin of each other"


@dataclass(frozen=True, slots=True)
class Found:
    """Values by key of the nomenclature, and reasons for the keys that have none."""

    values: dict[str, float]
    reasons: dict[str, str]


def expected_values(facts: Facts, plan: Plan, media: Media, point: OperatingPoint) -> Found:
    """All quantities at one operating point."""
    balance = point.balance
    fans = plan.fans_at(media)
    power = balance.compression.power + fans.counted(balance.sink_fan_share)
    fan = fans.source if facts.source_liquid is None else 0.0
    values = {
        "evaporating_temperature": balance.evaporating_temperature,
        "suction_pressure": point.suction_pressure,
        "discharge_pressure": point.discharge_pressure,
        "suction_temperature": point.suction_temperature,
        "discharge_temperature": point.discharge_temperature,
        "liquid_temperature": point.liquid_temperature,
        "superheat": point.superheat,
        "compressor_superheat": point.compressor_superheat,
        "evaporator_temperature_difference": balance.source_inlet_temperature - balance.evaporating_temperature,
        "pressure_ratio": balance.compression.pressure_ratio,
        "refrigerant_flow": balance.compression.flow,
        "cooling_capacity": balance.heat_from_source,
        "net_cooling_capacity": balance.heat_from_source - fan,
        "heating_capacity": balance.heat_to_sink,
        "compressor_power": balance.compression.power,
        "fan_power": fans.counted(balance.sink_fan_share),
        "power_input": power,
    }
    if heats(facts):
        values["heating_cop"] = balance.heat_to_sink / power
    else:
        values["cooling_cop"] = balance.heat_from_source / power
    found = Found(values, {})
    _high_side(plan, point, found)
    _add(found, "current", lambda: _current(facts, plan, power))
    if facts.system.compressor.count > 1:
        each = plan.stage.each * balance.compression.power
        _add(found, "compressor_current", lambda: _current(facts, plan, each))
    _media(facts, plan, media, balance, found)
    if facts.heats_from_air:
        _frost(facts, plan, media, point, found)
    if facts.source_liquid is not None or heats(facts):
        del values["net_cooling_capacity"]  # nothing is deducted, or nobody asks what a heat pump cools
    return found


def _high_side(plan: Plan, point: OperatingPoint, found: Found) -> None:
    """What a condenser has, and what a gas cooler has; above the critical point nothing condenses."""
    condensing, inlet = point.balance.condensing_temperature, point.balance.sink_inlet_temperature
    subcooling = point.subcooling
    if isinstance(plan.machine, Transcritical):
        found.values["gas_cooler_outlet_temperature"] = point.liquid_temperature
        found.values["gas_cooler_approach"] = point.liquid_temperature - inlet
        if condensing is not None:
            subcooling = condensing - point.liquid_temperature
    if condensing is None or subcooling is None:
        for key in ("condensing_temperature", "condenser_temperature_difference", "subcooling"):
            found.reasons[key] = ABOVE_CRITICAL
        return
    found.values["condensing_temperature"] = condensing
    found.values["condenser_temperature_difference"] = condensing - inlet
    found.values["subcooling"] = subcooling


def _add(found: Found, key: str, calculate: Callable[[], float]) -> None:
    try:
        found.values[key] = calculate()
    except NotCalculatedError as error:
        found.reasons[key] = str(error)


def _current(facts: Facts, plan: Plan, power: float) -> float:
    plate = facts.system.nameplate
    if plate.voltage is None or plate.phases is None:
        raise NotCalculatedError("the nameplate's voltage and number of phases are not stated")
    lines = math.sqrt(3.0) if plate.phases == "3" else 1.0
    return power / (lines * plate.voltage * plan.power_factor)


def _media(facts: Facts, plan: Plan, media: Media, balance: Balance, found: Found) -> None:
    source = media.source
    source_in, sink_in, sink_out = (
        balance.source_inlet_temperature,
        balance.sink_inlet_temperature,
        balance.sink_outlet_temperature,
    )
    if source.air is not None:
        coil = plan.machine.evaporator
        conductance = (1 - balance.dry_share) * coil.conductance_at(source.volume_flow)
        left = leaving_air(source, balance.heat_from_source, balance.source_drive, conductance, coil.air_share or 1.0)
        source_out = left.temperature
        found.values["sensible_heat_ratio"] = left.sensible_share
    else:
        source_out = source.outlet(-balance.heat_from_source)
    found.values["heat_source_inlet_temperature"] = source_in
    found.values["heat_sink_inlet_temperature"] = sink_in
    found.values["heat_sink_outlet_temperature"] = sink_out
    found.values["heat_sink_temperature_change"] = sink_out - sink_in
    found.values["heat_source_outlet_temperature"] = source_out
    if source.air is not None and facts.system.duty == "comfort_cooling":
        air = moist_air(source_out, source.air.p, humidity_ratio=left.humidity_ratio)
        found.values["heat_source_outlet_wet_bulb"] = air.wet_bulb
    found.values["heat_source_temperature_change"] = source_in - source_out
    _approaches(facts, plan, source_out, sink_out, found)
    for key in ("heat_source", "heat_sink"):
        known = "outlet" if (media.source if key == "heat_source" else media.sink).by_outlet else "inlet"
        del found.values[f"{key}_{known}_temperature"]
    if media.sink.outlet_wanted is not None:
        del found.values["heat_sink_outlet_temperature"]
        found.values["heat_sink_flow"] = media.sink.settled(balance.heat_to_sink).volume_flow
    means = entropic_mean(source_in, source_out), entropic_mean(sink_in, sink_out)
    _add(found, "carnot_cop", lambda: _carnot(*means) + (1.0 if heats(facts) else 0.0))


def _approaches(facts: Facts, plan: Plan, source_out: float, sink_out: float, found: Found) -> None:
    """How near saturation comes to a liquid that leaves: what the trade judges a liquid's exchanger by."""
    if facts.source_liquid is not None:
        found.values["evaporator_approach"] = source_out - found.values["evaporating_temperature"]
    if facts.sink_liquid is not None and not isinstance(plan.machine, Transcritical):
        found.values["condenser_approach"] = found.values["condensing_temperature"] - sink_out


def _carnot(source: float, sink: float) -> float:
    """Carnot COP of cooling between the mean temperatures (K) of the media.

    Raises:
        NotCalculatedError: they are so near each other that the COP says nothing, or the sink is the colder one.
    """
    if 0.0 < sink - source < NEAR:
        raise NotCalculatedError(TOO_NEAR)
    return carnot_cooling(source, sink)


def heats(facts: Facts) -> bool:
    """Whether the system is there to heat: its COP is then that of heating, and so is its Carnot limit."""
    return facts.system.duty in ("space_heating", "water_heating")


def beats_carnot(facts: Facts, values: Mapping[str, float]) -> bool:
    """Whether the heat that counts, over compressor power alone, lies above the Carnot COP of the media."""
    limit = values.get("carnot_cop")
    heat = values["heating_capacity" if heats(facts) else "cooling_capacity"]
    return limit is not None and heat / values["compressor_power"] > limit


def frosts(facts: Facts, point: OperatingPoint) -> bool:
    """Whether an outdoor coil may frost: its refrigerant is below freezing. In a cold room that is daily work."""
    return facts.heats_from_air and point.balance.source_drive < FREEZING


FREEZING = 273.15


def frost_warning(facts: Facts, plan: Plan, point: OperatingPoint, values: Mapping[str, float]) -> str | None:
    """What to say of frost on an outdoor coil, by the mean temperature of its fins; None where it is above freezing.

    The fins lie between air and refrigerant by the share of the air side in the resistance to heat. Condensing water
    warms them, so that they are a little warmer than this.
    """
    if not frosts(facts, point):
        return None
    outlet, inlet = values["heat_source_outlet_temperature"], point.balance.source_inlet_temperature
    air, share = 0.5 * (inlet + outlet), plan.machine.evaporator.air_share or 1.0
    if air - share * (air - point.balance.source_drive) < FREEZING:
        return "the coil is below freezing and collects frost: the values hold for a clean coil, between defrosts"
    return (
        "the refrigerant in the coil is below freezing, its fins on the mean are not: dew runs off, and frost may form "
        "where they are coldest; the values hold for a clean coil"
    )


def _frost(facts: Facts, plan: Plan, media: Media, point: OperatingPoint, found: Found) -> None:
    """Averages over whole cycles of frost and defrost, where the coil is below freezing."""
    why = "the coil is above freezing: it stays clean and is not defrosted"
    if frosts(facts, point):
        why = no_frost_counted(media.source.temperature) or ""
    if why:
        found.reasons.update(dict.fromkeys(("heating_capacity_with_defrosts", "heating_cop_with_defrosts"), why))
        return
    heat, power = with_defrosts(plan.frost_share, media)
    found.values["heating_capacity_with_defrosts"] = heat * found.values["heating_capacity"]
    found.values["heating_cop_with_defrosts"] = heat / power * found.values["heating_cop"]


def in_celsius(temperature: float) -> str:
    """A temperature (K) in a sentence, with a true minus sign."""
    return f"{temperature - 273.15:.1f} °C".replace("-", "−")
