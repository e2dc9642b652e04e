"""From facts, assumption values and fitted levels to the plain dataclasses of the machine."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, replace

from commission.errors import NotCalculatedError
from commission.machine import (
    Exchanger,
    GasCoolerPressure,
    HeadPressure,
    Media,
    PressureBy,
    SingleStage,
    Stream,
    SuctionLine,
    Transcritical,
    air_stream,
    liquid_stream,
    within_reach,
)
from commission.prediction.compressors import compressor_of
from commission.prediction.facts import CONDENSER_FAN, EVAPORATOR_FAN, Facts
from commission.properties import Liquid
from commission.quantities import Pressure

KELVIN = 273.15
Machine = SingleStage | Transcritical


@dataclass(frozen=True, slots=True)
class Levels:
    """What is fitted: swept flow times volumetric level (m3/s), isentropic level, conductances (W/K)."""

    swept_flow: float
    isentropic: float
    condenser: float
    evaporator: float

    def logs(self) -> tuple[float, ...]:
        """Natural logarithms, the unknowns of the fit."""
        return tuple(math.log(v) for v in (self.swept_flow, self.isentropic, self.condenser, self.evaporator))

    @classmethod
    def from_logs(cls, logs: tuple[float, ...]) -> Levels:
        """Inverse of `logs`."""
        return cls(*(math.exp(v) for v in logs))


@dataclass(frozen=True, slots=True)
class Fans:
    """Electric power in W of fans and pumps, and which of them the stated boundary counts (0-1 each).

    Where stages are stated, the power follows the flow of that side by its exponent: a lower flow is a lower stage. It
    stays where the exponent is 0: a lower flow is then taken for a dirty filter or a throttled valve.
    """

    source: float
    sink: float
    source_counted: float
    sink_counted: float
    source_exponent: float = 0.0
    sink_exponent: float = 0.0

    def counted(self, sink_share: float) -> float:
        """Power inside the boundary at a share of the sink's fan power."""
        return self.source_counted * self.source + self.sink_counted * self.sink * sink_share

    def at(self, source_flow: float, sink_flow: float) -> Fans:
        """The powers at shares of the rated flows."""
        return replace(
            self,
            source=self.source * source_flow**self.source_exponent,
            sink=self.sink * sink_flow**self.sink_exponent,
        )


@dataclass(frozen=True, slots=True)
class Rated:
    """The condition that levels belong to: media temperatures (K), expected heat (W), flows (m3/s), humidity,
    speed (1/s), and what the source enters above the dew point (K), None where that is not known beforehand."""

    source_temperature: float
    sink_temperature: float
    source_heat: float
    sink_heat: float
    source_flow: float
    sink_flow: float
    source_humidity: float
    speed: float | None = None
    source_difference: float | None = None


@dataclass(frozen=True, slots=True)
class Plan:
    """All of one system that a prediction needs, for one set of assumption values and levels."""

    machine: Machine
    fans: Fans
    rated: Rated
    source_humidity: float
    surroundings: float | None
    power_factor: float
    frost_share: float = 0.0
    """Share of the heat that frost and defrosts take at 2 °C in damp air."""

    @property
    def own_conditions(self) -> dict[str, float]:
        """Humidity and flows where a condition does not give them: stated or assumed, and so uncertain."""
        return {
            "heat_source_relative_humidity": self.source_humidity,
            "heat_source_flow": self.rated.source_flow,
            "heat_sink_flow": self.rated.sink_flow,
        }

    def fans_at(self, media: Media) -> Fans:
        """Fans and pumps at the flows of a condition; a flow that follows from an outlet temperature is no stage."""
        sink = 1.0 if media.sink.outlet_wanted is not None else media.sink.volume_flow / self.rated.sink_flow
        return self.fans.at(media.source.volume_flow / self.rated.source_flow, sink)


def humidity(facts: Facts, a: Mapping[str, float]) -> float:
    """Relative humidity of source air; a liquid has none, 0 then."""
    if facts.source_liquid is not None:
        return 0.0
    stated = facts.system.heat_source.relative_humidity
    return stated if stated is not None else a["source_humidity"]


def stream(
    temperature: float,
    flow: float,
    medium: Liquid | None,
    relative_humidity: float,
    pressure: float,
    by_outlet: bool = False,
) -> Stream:
    """Medium of one side at its exchanger.

    Raises:
        NotCalculatedError: air is known by its outlet, which its humidity there would have to go with.
    """
    if medium is not None:
        return liquid_stream(temperature, flow, medium, by_outlet)
    if by_outlet:
        raise NotCalculatedError("a condition of air is its inlet temperature; the outlet follows")
    return air_stream(temperature, flow, relative_humidity, pressure)


SINK_HUMIDITY = 0.5
"""Humidity of sink air: it changes the capacity rate by less than 1 % and nothing else, so it is not asked for."""


def flow_for(
    heat: float, change: float, temperature: float, medium: Liquid | None, wet: float, pressure: float
) -> float:
    """Volume flow in m3/s that changes by `change` K when it takes or gives `heat` in W."""
    unit = stream(temperature, 1.0, medium, wet, pressure)
    return heat / (change * unit.capacity_rate)


def fans_of(facts: Facts, a: Mapping[str, float], source_heat: float, sink_heat: float) -> Fans:
    """Fans and pumps with the boundary that the supplier states."""
    system = facts.system
    includes = boundary(facts)
    source_air, sink_air = facts.source_liquid is None, facts.sink_liquid is None

    def counted(word: str) -> float:
        return a["fans_in_rated_power"] if includes is None else float(word in includes)

    source = sink = 0.0
    source_counted = counted(EVAPORATOR_FAN if source_air else "source pump")
    sink_counted = counted(CONDENSER_FAN if sink_air else "sink pump")
    if source_air:
        stated = system.evaporator.fan_power
        source = stated if stated is not None else a["evaporator_fan_share"] * source_heat
    elif includes is not None and source_counted:
        pump = system.heat_source.pump_power
        source = pump if pump is not None else a["pump_share"] * source_heat
    if sink_air:
        stated = system.condenser.fan_power
        sink = stated if stated is not None else a["condenser_fan_share"] * sink_heat
    elif includes is not None and sink_counted:
        pump = system.heat_sink.pump_power
        sink = pump if pump is not None else a["pump_share"] * sink_heat
    exponents = [a["fan_power_exponent"] if m.flow_stages else 0.0 for m in (system.heat_source, system.heat_sink)]
    return Fans(source, sink, source_counted, sink_counted, *exponents)


def boundary(facts: Facts) -> tuple[str, ...] | None:
    """What the power input counts as the supplier states it, or None where nobody says."""
    for point in facts.system.rated_points:
        if point.includes is not None:
            return point.includes
    unit = facts.system.condensing_unit
    return unit.includes if unit is not None and not facts.system.rated_points else None


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
    )


def superheat_setting(facts: Facts, a: Mapping[str, float]) -> float:
    """Superheat in K that the valve is set to, as it may really be held."""
    stated = facts.system.expansion.superheat if facts.system.expansion else None
    return a["evaporator_superheat"] if stated is None else stated + a["superheat_departure"]


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


SINK_ENDS = ("heat_sink_inlet_temperature", "heat_sink_outlet_temperature")
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


def media(facts: Facts, plan: Plan, conditions: Mapping[str, float]) -> Media:
    """The media at a condition (keys of the nomenclature, SI)."""
    wet = conditions.get("heat_source_relative_humidity", plan.source_humidity)
    source = _side(conditions, "heat_source", plan.rated.source_flow, facts.source_liquid, wet, facts.pressure)
    sink = _side(conditions, "heat_sink", plan.rated.sink_flow, facts.sink_liquid, SINK_HUMIDITY, facts.pressure)
    around = sink.temperature if plan.surroundings is None else plan.surroundings
    speed = plan.rated.speed
    share = conditions["compressor_speed"] / speed if speed and "compressor_speed" in conditions else 1.0
    return Media(source, sink, around, share)


ONCE_THROUGH = 12.0
"""Temperature change in K from which a water heater is taken to set its flow for the outlet temperature."""


def lifts(facts: Facts) -> bool:
    """Whether the rated points are those of a machine that heats hot water in one pass."""
    temperatures = [
        {k: getattr(point, k) for k in SINK_ENDS if getattr(point, k) is not None}
        for point in facts.system.rated_points
    ]
    return bool(temperatures) and all(once_through(facts, t) for t in temperatures)


def once_through(facts: Facts, conditions: Mapping[str, float]) -> bool:
    """Whether the flow of the sink follows from its inlet and outlet: hot water heated in one pass."""
    inlet = conditions.get("heat_sink_inlet_temperature")
    outlet = conditions.get("heat_sink_outlet_temperature")
    if facts.system.duty != "water_heating" or facts.sink_liquid is None or inlet is None or outlet is None:
        return False
    return outlet - inlet >= ONCE_THROUGH


def _side(
    conditions: Mapping[str, float], side: str, flow: float, medium: Liquid | None, wet: float, pressure: float
) -> Stream:
    by_outlet = f"{side}_inlet_temperature" not in conditions
    temperature = conditions[f"{side}_{'outlet' if by_outlet else 'inlet'}_temperature"]
    one = stream(temperature, conditions.get(f"{side}_flow", flow), medium, wet, pressure, by_outlet)
    outlet = conditions.get(f"{side}_outlet_temperature")
    if by_outlet or outlet is None or medium is None:
        return one
    if outlet <= temperature:
        raise NotCalculatedError("the medium would have to leave colder than it came")
    return replace(one, outlet_wanted=outlet)


def air_share(facts: Facts, a: Mapping[str, float]) -> float | None:
    """Share of the air side in the resistance of an air coil that takes heat; None for a liquid."""
    return a["coil_air_share"] if facts.source_liquid is None else None
