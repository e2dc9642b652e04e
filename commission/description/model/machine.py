"""The refrigerating circuit: compressor, exchangers, receiver, expansion, lines."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field

from commission.description.fields import (
    Capacity,
    Conductance,
    Count,
    Current,
    Duration,
    Fraction,
    GaugeOrAbsolute,
    Length,
    MassFlow,
    Number,
    Power,
    PowerInput,
    Ratio,
    Speed,
    Temperature,
    TemperatureDifference,
    Volume,
    VolumeFlow,
    YesNo,
)
from commission.description.model.base import Part

TenCoefficients = Annotated[tuple[Number, ...], Field(min_length=10, max_length=10)]


class Polynomial(Part):
    """Ten-coefficient polynomials of a compressor (EN 12900, AHRI 540).

    X = C1 + C2 S + C3 D + C4 S² + C5 S D + C6 D² + C7 S³ + C8 D S² + C9 S D² + C10 D³, with S the evaporating and D the
    condensing dew point in `temperature_unit`.
    """

    mass_flow: TenCoefficients | None = Field(None, description="C1 to C10 of the refrigerant flow")
    cooling_capacity: TenCoefficients | None = Field(None, description="C1 to C10 of the cooling capacity")
    power: TenCoefficients = Field(description="C1 to C10 of the electric power")
    current: TenCoefficients | None = Field(None, description="C1 to C10 of the current, in ampere")
    temperature_unit: Literal["°C", "°F"] = Field(description="unit of S and D")
    mass_flow_unit: Literal["kg/s", "g/s", "kg/h", "lb/h"] = Field("kg/h", description="unit of the refrigerant flow")
    capacity_unit: Literal["W", "kW", "Btu/h"] = Field("W", description="unit of the cooling capacity")
    power_unit: Literal["W", "kW"] = Field("W", description="unit of the electric power")
    suction_superheat: TemperatureDifference | None = Field(None, description="superheat of the rating")
    suction_temperature: Temperature | None = Field(None, description="or return gas temperature of the rating")
    liquid_subcooling: TemperatureDifference | None = Field(None, description="subcooling of the capacity rating")
    speed: Speed | None = Field(None, description="shaft speed of the rating")
    lowest_evaporating: Temperature | None = Field(None, description="lower end of the range of validity")
    highest_evaporating: Temperature | None = Field(None, description="upper end of the range of validity")
    lowest_condensing: Temperature | None = Field(None, description="lower end of the range of validity")
    highest_condensing: Temperature | None = Field(None, description="upper end of the range of validity")
    source: str | None = Field(None, description="document they are read from")


class CompressorPoint(Part):
    """One point of a compressor's table."""

    evaporating_temperature: Temperature = Field(description="dew point at the suction")
    condensing_temperature: Temperature = Field(description="dew point at the discharge")
    compressor_power: PowerInput = Field(description="electric power")
    cooling_capacity: Capacity | None = Field(None, description="cooling capacity at the rating's superheat")
    refrigerant_flow: MassFlow | None = Field(None, description="or refrigerant flow")
    current: Current | None = Field(None, description="current in each phase")


class CompressorTable(Part):
    """A supplier's table of the compressor alone."""

    points: tuple[CompressorPoint, ...] = Field(min_length=1, description="a list, or {file: tables/unit.csv}")
    suction_superheat: TemperatureDifference | None = Field(None, description="superheat of the rating")
    suction_temperature: Temperature | None = Field(None, description="or return gas temperature of the rating")
    liquid_subcooling: TemperatureDifference | None = Field(None, description="subcooling of the rating")
    speed: Speed | None = Field(None, description="shaft speed of the rating")
    source: str | None = Field(None, description="document it is read from")


class EnvelopeCorner(Part):
    """A corner of the application envelope."""

    evaporating_temperature: Temperature = Field(description="dew point at the suction")
    condensing_temperature: Temperature = Field(description="dew point at the discharge")


NEAR_A_STAGE = 0.02
"""How far a rounded figure may lie from a stage: 66 % for two of three machines."""


class Compressor(Part):
    """What is known of the compressor; what is not is fitted to the rated points or assumed."""

    type: Literal["reciprocating", "scroll", "rotary", "screw"] | None = Field(None, description="kind of machine")
    build: Literal["hermetic", "semi-hermetic", "open"] | None = Field(None, description="how the motor is housed")
    count: Count = Field(1, description="equal compressors that work side by side on one circuit")
    stages: tuple[Ratio, ...] = Field(
        (),
        description="capacity stages of the whole set as shares of its displacement, the last 100 %: [50 %, 75 %, "
        "100 %] for one machine that unloads, [33 %, 67 %, 100 %] for three; machines are switched on one after the "
        "other, and only the last of them is unloaded",
    )
    drive: Literal["fixed speed", "variable speed"] = Field("fixed speed", description="how the motor is fed")
    displacement: VolumeFlow | None = Field(None, description="swept volume flow of one machine at nominal speed")
    nominal_speed: Speed | None = Field(
        None, description="shaft speed (for a motor with p pole pairs: supply frequency over p, less slip)"
    )
    minimum_speed: Speed | None = Field(None, description="lowest shaft speed of the drive")
    maximum_speed: Speed | None = Field(None, description="highest shaft speed of the drive")
    volumetric_efficiency: Fraction | None = Field(None, description="at the rated condition")
    isentropic_efficiency: Fraction | None = Field(None, description="overall, electric, at the rated condition")
    polynomial: Polynomial | None = Field(None, description="ten-coefficient polynomials (EN 12900, AHRI 540)")
    table: CompressorTable | None = Field(None, description="supplier's table of the compressor alone")
    envelope: tuple[EnvelopeCorner, ...] = Field((), description="corners of the application envelope, in order")
    power_factor: Fraction | None = Field(None, description="cosine phi at the rated condition")
    crankcase_heater: Power | None = Field(None, description="electric power of the crankcase heater")
    oil: str | None = Field(None, description="oil and viscosity")
    oil_charge: Volume | None = Field(None, description="oil charge")

    @property
    def steps(self) -> tuple[float, ...]:
        """The stages as shares of the displacement; one that is written of whole machines is just that: 33 % of three
        is a third."""
        found = []
        for stage in self.stages:
            whole = round(stage * self.count) / self.count
            found.append(whole if whole and abs(stage - whole) <= NEAR_A_STAGE else stage)
        return tuple(found)

    def step_near(self, share: float) -> float | None:
        """The stage that a rounded share of the displacement means; None where there is none so near."""
        found = min(self.steps, key=lambda step: abs(step - share), default=None)
        return found if found is not None and abs(found - share) <= NEAR_A_STAGE else None


class CoolerRating(Part):
    """Catalogue rating of an air cooler or a condenser: heat at a difference of air on and saturation (EN 328)."""

    air_on: Temperature | None = Field(None, description="air-on temperature of the rating")
    temperature_difference: TemperatureDifference = Field(
        description="air on minus evaporating, or condensing minus air on"
    )
    at: Literal["dew", "mean"] | None = Field(
        None,
        description="of blends: whether that difference counts to the dew point, or to the mean of the glide (between "
        "inlet and dew point of an evaporator, between dew and bubble point of a condenser)",
    )
    capacity: Capacity = Field(description="heat transferred at that difference")
    surface: Literal["dry", "wet", "frosted"] | None = Field(None, description="state of the surface in the rating")
    source: str | None = Field(None, description="document it is read from")


class Defrost(Part):
    """How ice is removed from the evaporator."""

    method: Literal["off cycle", "electric", "hot gas", "reverse cycle"] = Field(description="what melts the ice")
    start: Literal["by time", "on demand"] | None = Field(None, description="what starts a defrost")
    power: Power | None = Field(None, description="of the electric heaters")
    interval: Duration | None = Field(None, description="time from one defrost to the next")
    longest: Duration | None = Field(None, description="time limit of one defrost")
    end_temperature: Temperature | None = Field(None, description="coil temperature that ends the defrost")
    drip_time: Duration | None = Field(None, description="wait for water to drain before cooling again")
    fan_start_temperature: Temperature | None = Field(None, description="coil temperature that lets the fan start")


class Evaporator(Part):
    """The exchanger that takes heat from the source."""

    type: Literal["air coil", "plate", "shell and tube", "coaxial"] | None = Field(None, description="how it is built")
    conductance: Conductance | None = Field(
        None, description="UA at the rated condition with all its surface wetted; what superheats gas counts apart"
    )
    rating: CoolerRating | None = Field(None, description="catalogue rating of an air cooler")
    fan_power: Power | None = Field(None, description="electric power of its fans")
    internal_volume: Volume | None = Field(None, description="refrigerant side")
    defrost: Defrost | None = Field(None, description="how ice is removed")


class Condenser(Part):
    """The exchanger that gives heat to the sink."""

    type: Literal["air coil", "plate", "shell and tube", "coaxial", "evaporative", "gas cooler"] | None = Field(
        None, description="how it is built"
    )
    conductance: Conductance | None = Field(None, description="UA at the rated condition")
    rating: CoolerRating | None = Field(None, description="catalogue rating of an air-cooled condenser")
    fan_power: Power | None = Field(None, description="electric power of its fans")
    internal_volume: Volume | None = Field(None, description="refrigerant side")


class Receiver(Part):
    """The liquid receiver."""

    volume: Volume | None = Field(None, description="internal volume")
    relief_valve: GaugeOrAbsolute | None = Field(None, description="set pressure of the relief valve")


class Expansion(Part):
    """The expansion device."""

    device: Literal["thermostatic valve", "electronic valve", "capillary", "orifice"] = Field(description="what it is")
    superheat: TemperatureDifference | None = Field(None, description="superheat held at the evaporator outlet")
    maximum_operating_pressure: GaugeOrAbsolute | None = Field(
        None, description="suction pressure above which the valve closes (MOP)"
    )
    rated_capacity: Capacity | None = Field(None, description="cooling capacity of the valve at its rating")


class Line(Part):
    """One refrigerant line."""

    outside_diameter: Length | None = Field(None, description="of the pipe")
    length: Length | None = Field(None, description="one way")
    rise: Length | None = Field(None, description="height that the refrigerant climbs")
    insulated: YesNo | None = Field(None, description="yes where it is insulated")


class Lines(Part):
    """The refrigerant lines laid on site."""

    suction: Line | None = Field(None, description="from evaporator to compressor")
    discharge: Line | None = Field(None, description="from compressor to condenser")
    liquid: Line | None = Field(None, description="from condenser or receiver to expansion device")


class SuctionExchanger(Part):
    """An exchanger between suction gas and liquid."""

    effectiveness: Fraction | None = Field(
        None, description="rise of the suction gas over what would bring it to the temperature of the liquid"
    )
