"""From facts, assumption values and fitted levels to the machine of a system."""

from __future__ import annotations

import math
from collections.abc import Mapping

from commission.errors import NotCalculatedError
from commission.machine import (
    Exchanger,
    GasCoolerPressure,
    HeadPressure,
    PressureBy,
    SingleStage,
    SuctionLine,
    Transcritical,
    stage_of,
    within_reach,
)
from commission.prediction.compressors import compressor_of
from commission.prediction.facts import Facts
from commission.prediction.fans import fans_of
from commission.prediction.plan import Levels, Machine, Plan, Rated
from commission.prediction.streams import SINK_HUMIDITY, lifts, stream
from commission.quantities import Pressure


def build(facts: Facts, a: Mapping[str, float], levels: Levels, rated: Rated) -> Plan:
    """The machine for one set of assumption values and levels.

    Raises:
        NotCalculatedError: a stated rating cannot be, for example more heat than its air flow carries.
    """
    system = facts.system
    superheat = superheat_setting(facts, a)
    line, surroundings = suction_line(facts, a)
    compressor = compressor_of(facts, a, levels.swept_flow, levels.isentropic, rated.speed)
    exponent = a["air_side_exponent"]
    gas_share, superheat_share = a["dry_surface_share"], a["greatest_superheat_share"]
    evaporator = Exchanger(levels.evaporator, rated.source_flow, exponent, air_share(facts, a), gas_share)
    condenser = Exchanger(levels.condenser, rated.sink_flow, exponent)
    regulator, greatest = suction_limits(facts, a)
    part = system.suction_exchanger
    exchanger = part.effectiveness or 0.0 if part is not None else 0.0
    machine: Machine
    if facts.transcritical:
        pressure = gas_cooler_pressure(facts, a)
        machine = Transcritical(
            facts.fluid, compressor, evaporator, condenser, superheat, 0.0, line, 0.0, regulator, pressure=pressure,
            superheat_share=superheat_share, exchanger=exchanger,
        )  # fmt: skip
    else:
        machine = SingleStage(
            refrigerant=facts.fluid,
            compressor=compressor,
            evaporator=evaporator,
            condenser=condenser,
            superheat=superheat,
            subcooling=a["liquid_subcooling"] if system.receiver is not None else math.inf,
            subcooling_share=subcooling_share(facts, a, condenser, rated),
            suction_line=line,
            discharge_line_loss=a["discharge_line_loss"],
            suction_regulator=regulator,
            superheat_share=superheat_share,
            exchanger=exchanger,
            head_pressure=head_pressure(facts, a),
            greatest_evaporating=greatest,
        )
    cos_phi = system.compressor.power_factor
    return Plan(
        machine=machine,
        fans=fans_of(facts, a, rated.source_heat, rated.sink_heat),
        rated=rated,
        source_humidity=rated.source_humidity,
        surroundings=surroundings,
        power_factor=cos_phi if cos_phi is not None else a["power_factor"],
        frost_share=a["frost_share"] if facts.heats_from_air else 0.0,
        machines=system.compressor.count,
        stage=stage_of(1.0, system.compressor.count, 0.0),
        unloading_loss=a["compressor_unloading_loss"] if unloads(facts) else 0.0,
    )


def superheat_setting(facts: Facts, a: Mapping[str, float]) -> float:
    """Superheat in K that the valve is set to, as it may really be held."""
    stated = facts.system.expansion.superheat if facts.system.expansion else None
    return a["evaporator_superheat"] if stated is None else stated + a["superheat_departure"]


def unloads(facts: Facts) -> bool:
    """Whether a stage leaves one of the compressors partly loaded; else each of them runs whole or stands still."""
    compressor = facts.system.compressor
    machines = [step * compressor.count for step in compressor.steps]
    return any(abs(m - round(m)) > 1e-9 for m in machines)


MOST_COOLED = 0.85
"""Greatest subcooling over the difference between bubble point and entering medium (common practice, no source)."""


def subcooling_share(facts: Facts, a: Mapping[str, float], condenser: Exchanger, rated: Rated) -> float:
    """Greatest subcooling over the difference between bubble point and entering medium.

    Without a receiver this share is what it is at the rated point, at the difference with which this condenser gives
    the rated heat: the liquid fills the same part of the condenser at any load.
    """
    if facts.system.receiver is not None:
        return MOST_COOLED
    medium = stream(rated.sink_temperature, rated.sink_flow, facts.sink_liquid, SINK_HUMIDITY, facts.pressure)
    mean = rated.sink_heat / condenser.heat_per_kelvin(medium)
    difference = mean - 0.5 * facts.glide(rated.sink_temperature + mean)
    return max(within_reach(a["liquid_subcooling"], difference, MOST_COOLED) / difference, 0.0)


def suction_limits(facts: Facts, a: Mapping[str, float]) -> tuple[float | None, float | None]:
    """Pressure (Pa) of a crankcase pressure regulator, and dew point (K) at which the valve's own limit closes it, each
    as it may really be held."""
    stated, valve = facts.system.controls.crankcase_pressure_regulator, None
    if facts.system.expansion is not None:
        valve = facts.system.expansion.maximum_operating_pressure
    regulator = greatest = None
    if stated is not None:
        regulator = facts.loaded.absolute(stated)
        departure = a["suction_limit_departure"]
        if departure:
            regulator = facts.fluid.dew_pressure(facts.fluid.dew_temperature(regulator) + departure)
    if valve is not None:
        greatest = facts.fluid.dew_temperature(facts.loaded.absolute(valve)) + a["suction_limit_departure"]
    return regulator, greatest


def head_pressure(facts: Facts, a: Mapping[str, float]) -> HeadPressure | None:
    """The head-pressure control with its setting as it may really be held."""
    control = facts.system.controls.head_pressure
    if control is None:
        return None
    hold = control.hold + a["head_pressure_departure"]
    return HeadPressure(control.by, hold, a["least_fan_share"], a["fan_power_exponent"])


def gas_cooler_pressure(facts: Facts, a: Mapping[str, float]) -> GasCoolerPressure:
    """How the high pressure of a carbon-dioxide circuit is set; where nobody says, it follows the outlet.

    Raises:
        NotCalculatedError: the pressure is left to the charge alone, or a fixed set point is not stated.
    """
    control = facts.system.controls.gas_cooler_pressure
    least = facts.system.duty == "water_heating" and facts.sink_liquid is not None and not lifts(facts)
    if control is not None and (control.lowest is not None or control.set_point is not None):
        least = False
    hot_water = a["hot_water_pressure"] * facts.fluid.p_critical if least else 0.0
    follows: PressureBy = "follows the gas-cooler outlet"
    if control is None:
        return GasCoolerPressure(follows, factor=1 + a["gas_cooler_pressure_departure"], hot_water=hot_water)
    if control.by == "charge alone":
        raise NotCalculatedError(
            "the high pressure is left to the charge alone, which this model does not carry for carbon dioxide: state "
            "under controls.gas_cooler_pressure a set point or that it follows the gas-cooler outlet"
        )
    if control.by == "fixed set point" and control.set_point is None:
        raise NotCalculatedError("controls.gas_cooler_pressure is a fixed set point, but does not say which")

    def kept(stated: Pressure | None, otherwise: float) -> float:
        return facts.loaded.absolute(stated) + a["high_pressure_departure"] if stated is not None else otherwise

    return GasCoolerPressure(
        control.by,
        kept(control.set_point, 0.0) or None,
        factor=1 + a["gas_cooler_pressure_departure"] if control.set_point is None else 1.0,
        lowest=kept(control.lowest, 0.0),
        highest=kept(control.highest, HIGHEST),
        hot_water=hot_water,
    )


HIGHEST = 1.4e7
"""Highest pressure in Pa of a transcritical circuit where none is stated: that of the components in use."""


def outdoors_is_sink(facts: Facts) -> bool:
    """Whether the pipes stand in the air that the sink exchanger draws: cooling with an air-cooled condenser."""
    return facts.sink_liquid is None and facts.system.duty in ("cold_storage", "comfort_cooling", "liquid_cooling")


LINE_DIFFERENCE = 35.0
"""Difference in K between air and gas to which the assumed superheat of a suction line belongs."""


def suction_line(facts: Facts, a: Mapping[str, float]) -> tuple[SuctionLine, float | None]:
    """The suction line, and the temperature (K) around it where that is not the sink's air.

    Where the pipe runs through the air of the sink its heat follows the difference between that air and the gas, as of
    any insulated pipe: the gas of a freezer picks up more than that of a cold room. In a packaged unit it is constant.
    """
    pick_up = a["suction_line_superheat"]
    if outdoors_is_sink(facts):
        return SuctionLine(a["suction_line_loss"], heating_share=pick_up / LINE_DIFFERENCE), None
    return SuctionLine(a["suction_line_loss"], warming=pick_up), a["surroundings_temperature"]


def air_share(facts: Facts, a: Mapping[str, float]) -> float | None:
    """Share of the air side in the resistance of an air coil that takes heat; None for a liquid."""
    return a["coil_air_share"] if facts.source_liquid is None else None
