"""The typed plant: what a description may say, each field documented where it is declared. SI inside."""

from __future__ import annotations

from typing import Literal

from pydantic import BaseModel, ConfigDict, Field

from commission.description.fields import (
    Area,
    Conductance,
    Current,
    Date,
    Duration,
    GaugeOrAbsolute,
    Length,
    Mass,
    Power,
    Ratio,
    Speed,
    Temperature,
    TemperatureDifference,
    Voltage,
    Volume,
    VolumeFlow,
    YesNo,
)
from commission.description.instruments import MEASURED, ResolvedInstrument, read_end
from commission.quantities import NOMENCLATURE, parse

Duty = Literal["cold_storage", "comfort_cooling", "liquid_cooling", "space_heating", "water_heating"]
MediumName = Literal["air", "water", "propylene glycol", "ethylene glycol"]
Included = Literal[
    "compressor", "evaporator fan", "condenser fan", "source pump", "sink pump", "controls", "defrost",
    "crankcase heater",
]  # fmt: skip
DecisionRule = Literal["simple", "guarded"]


class Part(BaseModel):
    """A part of the description: unknown keys are errors, and nothing changes after reading."""

    model_config = ConfigDict(frozen=True, extra="forbid")


class Climate(Part):
    """Design weather of the site."""

    summer_dry_bulb: Temperature | None = Field(None, description="hottest air to design for")
    summer_wet_bulb: Temperature | None = Field(None, description="wet bulb that goes with it")
    winter_dry_bulb: Temperature | None = Field(None, description="coldest air to design for")


class Rules(Part):
    """The law and the safety standard that the owner and the authority have agreed on."""

    refrigerant_law: Literal["EU 2024/573", "US 40 CFR 82 and 84", "none stated"] = Field("none stated")
    safety: Literal["EN 378", "ISO 5149", "ASHRAE 15", "none stated"] = Field("none stated")


class Person(Part):
    """A role at this plant and who fills it."""

    name: str = Field(description="name of the person")
    firm: str | None = Field(None, description="employer")
    phone: str | None = Field(None, description="number for an emergency, where there is one")
    certificate: str | None = Field(None, description="certificate number where the law asks for one")


class Site(Part):
    """The plant as a whole."""

    name: str = Field(description="name of the plant as the owner says it")
    altitude: Length = Field(0.0, description="height above sea level; sets the barometric pressure (ISO 2533)")
    address: str | None = Field(None, description="where the plant stands")
    climate: Climate = Field(default_factory=Climate)
    units: Literal["metric", "us_customary"] = Field("metric", description="how the manual prints numbers")
    rules: Rules = Field(default_factory=Rules)
    people: dict[str, Person] = Field(default_factory=dict, description="roles (owner, contractor, ...) and people")


class Space(Part):
    """A room or outdoor place that refrigerant can reach if it leaks."""

    name: str | None = Field(None, description="name on the door")
    floor_area: Area | None = Field(None)
    height: Length | None = Field(None)
    occupancy: Literal["general public", "supervised", "authorised persons only"] | None = Field(None)
    below_ground: YesNo = Field(False)
    outdoors: YesNo = Field(False)


class Accuracy(Part):
    """Largest permissible error of an instrument; parts given together are added (worst case)."""

    of_span: Ratio | None = Field(None, description="share of the measuring span (to minus from)")
    of_reading: Ratio | None = Field(None, description="share of the reading")
    absolute: str | None = Field(None, description="fixed part, with a unit of what the instrument measures")


class Instrument(Part):
    """A gauge, probe or meter with serial number and calibration; without them a report is void."""

    measures: Literal[
        "temperature", "temperature difference", "pressure", "vacuum", "electric power", "current", "voltage",
        "relative humidity", "volume flow", "mass", "rotational speed", "duration", "sound level",
    ]  # fmt: skip
    from_: str | None = Field(None, alias="from", description="lower end of the scale, with unit")
    to: str | None = Field(None, description="upper end of the scale, with unit")
    accuracy: Accuracy | None = Field(None)
    class_: str | None = Field(None, alias="class", description="such as IEC 60751 A or EN 837-1 class 1.0")
    resolution: str | None = Field(None, description="smallest step that can be read, with unit")
    clamped_on: YesNo = Field(False, description="clamped on a pipe rather than in a pocket")
    matched_pair: YesNo = Field(False, description="two probes compared in one bath")
    serial: str | None = Field(None)
    calibrated_on: Date | None = Field(None)
    calibrated_until: Date | None = Field(None)
    certificate: str | None = Field(None, description="file under documents/")

    @property
    def resolved(self) -> ResolvedInstrument:
        """The instrument in SI; its texts were checked when the description was read."""
        kind, difference = MEASURED[self.measures]
        low = read_end(self.from_, kind) if self.from_ is not None else None
        high = read_end(self.to, kind) if self.to is not None else None
        accuracy = self.accuracy or Accuracy()
        return ResolvedInstrument(
            measures=self.measures,
            kind=kind,
            difference_kind=difference,
            range_low=low[0] if low else None,
            range_high=high[0] if high else None,
            reference=(low or high or (0.0, None))[1],
            accuracy_of_span=accuracy.of_span,
            accuracy_of_reading=accuracy.of_reading,
            accuracy_absolute=parse(accuracy.absolute, difference) if accuracy.absolute is not None else None,
            resolution=parse(self.resolution, difference) if self.resolution is not None else None,
        )


class Nameplate(Part):
    """What is stamped on the unit."""

    maker_type: str | None = Field(None, description="type as stamped")
    serial: str | None = Field(None)
    year: str | None = Field(None)
    allowable_pressure_low: GaugeOrAbsolute | None = Field(None, description="PS of the low side")
    allowable_pressure_high: GaugeOrAbsolute | None = Field(None, description="PS of the high side")
    voltage: Voltage | None = Field(None)
    phases: Literal["1", "3"] | None = Field(None)
    rated_current: Current | None = Field(None, description="largest current on the nameplate")


class Medium(Part):
    """Where heat is taken from or goes to."""

    medium: MediumName = Field(description="air or a liquid")
    mass_fraction: Ratio | None = Field(None, description="glycol mass fraction")
    space: str | None = Field(None, description="id of the space the air is drawn from")
    flow: VolumeFlow | None = Field(None, description="volume flow at the inlet state")
    relative_humidity: Ratio | None = Field(None)


class Compressor(Part):
    """What is known of the compressor; what is not is fitted to the rated points or assumed."""

    type: Literal["reciprocating", "scroll", "rotary", "screw"] | None = Field(None)
    drive: Literal["fixed speed", "variable speed"] = Field("fixed speed")
    displacement: VolumeFlow | None = Field(None, description="swept volume flow at nominal speed")
    nominal_speed: Speed | None = Field(None)
    minimum_speed: Speed | None = Field(None)
    maximum_speed: Speed | None = Field(None)
    volumetric_efficiency: Ratio | None = Field(None, description="at the rated condition")
    isentropic_efficiency: Ratio | None = Field(None, description="overall, electric, at the rated condition")
    power_factor: Ratio | None = Field(None, description="cosine phi at the rated condition")


class CoolerRating(Part):
    """Catalogue rating of an air cooler or a condenser: heat at a difference of air on and saturation (EN 328)."""

    air_on: Temperature | None = Field(None, description="air-on temperature of the rating")
    temperature_difference: TemperatureDifference = Field(
        description="air on minus evaporating, or condensing minus air on"
    )
    capacity: Power = Field(description="heat transferred at that difference")
    source: str | None = Field(None, description="document it is read from")


class Defrost(Part):
    """How ice is removed from the evaporator."""

    method: Literal["off cycle", "electric", "hot gas", "reverse cycle"] = Field()
    power: Power | None = Field(None, description="of the electric heaters")
    interval: Duration | None = Field(None)
    longest: Duration | None = Field(None, description="time limit of one defrost")
    end_temperature: Temperature | None = Field(None)


class Evaporator(Part):
    """The exchanger that takes heat from the source."""

    conductance: Conductance | None = Field(None)
    rating: CoolerRating | None = Field(None)
    fan_power: Power | None = Field(None)
    defrost: Defrost | None = Field(None)


class Condenser(Part):
    """The exchanger that gives heat to the sink."""

    conductance: Conductance | None = Field(None)
    rating: CoolerRating | None = Field(None)
    fan_power: Power | None = Field(None)


class Receiver(Part):
    """The liquid receiver."""

    volume: Volume | None = Field(None)
    relief_valve: GaugeOrAbsolute | None = Field(None, description="set pressure of the relief valve")


class Expansion(Part):
    """The expansion device."""

    device: Literal["thermostatic valve", "electronic valve", "capillary", "orifice"] = Field()
    superheat: TemperatureDifference | None = Field(None, description="superheat held at the evaporator outlet")


class HeadPressure(Part):
    """How the condensing pressure is kept up in cold weather."""

    by: Literal["fan speed", "fan cycling", "condenser flooding", "water valve"] = Field()
    hold: Temperature = Field(description="condensing temperature (dew) that is held")


class Controls(Part):
    """Settings of controls and limit devices."""

    room_temperature: Temperature | None = Field(None, description="set point of the room thermostat")
    room_differential: TemperatureDifference | None = Field(None, description="switching differential")
    head_pressure: HeadPressure | None = Field(None)
    high_pressure_limit: GaugeOrAbsolute | None = Field(None, description="high-pressure limit device opens")
    low_pressure_cut_out: GaugeOrAbsolute | None = Field(None)
    low_pressure_cut_in: GaugeOrAbsolute | None = Field(None)
    discharge_temperature_limit: Temperature | None = Field(None)
    pump_down: YesNo = Field(False, description="stops by pump-down of the low side")
    starts_per_hour: int | None = Field(None, description="most starts in an hour that are allowed")


class Conditions(Part):
    """A condition of operation; keys are those of the nomenclature."""

    heat_source_inlet_temperature: Temperature | None = Field(None)
    heat_source_outlet_temperature: Temperature | None = Field(None)
    heat_source_wet_bulb: Temperature | None = Field(None)
    heat_source_relative_humidity: Ratio | None = Field(None)
    heat_source_flow: VolumeFlow | None = Field(None)
    heat_sink_inlet_temperature: Temperature | None = Field(None)
    heat_sink_outlet_temperature: Temperature | None = Field(None)
    heat_sink_wet_bulb: Temperature | None = Field(None)
    heat_sink_relative_humidity: Ratio | None = Field(None)
    heat_sink_flow: VolumeFlow | None = Field(None)
    compressor_speed: Speed | None = Field(None)


class RatedPoint(Conditions):
    """What the supplier states of the whole system at one condition."""

    cooling_capacity: Power | None = Field(None)
    heating_capacity: Power | None = Field(None)
    power_input: Power | None = Field(None)
    evaporating_temperature: Temperature | None = Field(None)
    condensing_temperature: Temperature | None = Field(None)
    includes: tuple[Included, ...] | None = Field(None, description="what the power input counts")
    source: str | None = Field(None, description="document it is read from")


class CondensingUnitPoint(Part):
    """One point of a condensing unit's table: evaporating temperature and ambient air give capacity and power."""

    evaporating_temperature: Temperature = Field(description="dew point at the suction")
    heat_sink_inlet_temperature: Temperature = Field(description="air on the condenser")
    cooling_capacity: Power = Field()
    power_input: Power = Field()


class CondensingUnit(Part):
    """A condensing unit rated apart from its cooler (EN 13215 style)."""

    rated_points: tuple[CondensingUnitPoint, ...] = Field(min_length=1)
    suction_temperature: Temperature | None = Field(None, description="return gas temperature of the rating")
    suction_superheat: TemperatureDifference | None = Field(None, description="or superheat of the rating")
    liquid_subcooling: TemperatureDifference | None = Field(None, description="subcooling of the rating")
    includes: tuple[Included, ...] | None = Field(None, description="what the power input counts")
    source: str | None = Field(None, description="document it is read from")


class Tolerance(Part):
    """How far a guaranteed value may be missed."""

    below: Ratio | None = Field(None)
    above: Ratio | None = Field(None)


class Guarantee(Part):
    """What the contract says: value, condition, tolerance, decision rule, and how it is carried to the day."""

    quantity: Literal["cooling_capacity", "heating_capacity", "power_input", "cooling_cop", "heating_cop"] = Field()
    at: Conditions = Field(description="condition of the guarantee")
    value: str = Field(description="guaranteed value with unit")
    tolerance: Tolerance = Field(default_factory=Tolerance)
    decision: DecisionRule = Field("simple")
    carried_by: Literal["design model", "supplier's table", "as stated"] = Field(
        "design model",
        description="how the value is carried to the day's condition: in the ratio of the agreed design model, along "
        "the supplier's table, or only at the stated condition",
    )
    route: Literal["liquid side", "air side", "compressor heat balance", "electric meter"] | None = Field(
        None, description="how the quantity is measured"
    )
    source: str | None = Field(None, description="clause of the contract")

    @property
    def value_si(self) -> float:
        """The guaranteed value in SI (W, or 1 for a COP); its text was checked when the description was read."""
        return parse(self.value, NOMENCLATURE[self.quantity].kind)


class SystemSpaces(Part):
    """Which space holds which part."""

    evaporator: str | None = Field(None)
    condensing_unit: str | None = Field(None)
    pipework: tuple[str, ...] = Field(())


class Document(Part):
    """A file or reference that belongs to a system or the plant."""

    title: str = Field()
    file: str | None = Field(None, description="path under documents/")
    reference: str | None = Field(None, description="number or clause")


class AssumptionOverride(Part):
    """A better value for one entry of the assumption list; without low and high it counts as a known fact."""

    value: str = Field(description="value with unit")
    low: str | None = Field(None, description="lower end of the range it may have")
    high: str | None = Field(None, description="upper end of the range it may have")
    source: str = Field(description="where the value comes from")


class System(Part):
    """One refrigerating system."""

    name: str | None = Field(None, description="name as people on site say it")
    duty: Duty = Field()
    refrigerant: str = Field(description="designation such as R-290")
    charge: Mass | None = Field(None)
    sealed: YesNo = Field(False, description="factory sealed")
    spaces: SystemSpaces = Field(default_factory=SystemSpaces)
    nameplate: Nameplate = Field(default_factory=Nameplate)
    heat_source: Medium = Field()
    heat_sink: Medium = Field()
    compressor: Compressor = Field(default_factory=Compressor)
    evaporator: Evaporator = Field(default_factory=Evaporator)
    condenser: Condenser = Field(default_factory=Condenser)
    receiver: Receiver | None = Field(None)
    expansion: Expansion | None = Field(None)
    controls: Controls = Field(default_factory=Controls)
    condensing_unit: CondensingUnit | None = Field(None)
    rated_points: tuple[RatedPoint, ...] = Field(())
    design: Conditions | None = Field(None, description="condition the system is designed for")
    guarantee: tuple[Guarantee, ...] = Field(())
    measured_with: dict[str, str] = Field(default_factory=dict, description="instrument id for each quantity")
    documents: tuple[Document, ...] = Field(())
    assumptions: dict[str, AssumptionOverride] = Field(
        default_factory=dict, description="what is known better here than the assumption list says"
    )


class Plant(Part):
    """A whole description as read from one folder."""

    plant: Site = Field()
    spaces: dict[str, Space] = Field(default_factory=dict)
    instruments: dict[str, Instrument] = Field(default_factory=dict)
    systems: dict[str, System] = Field(min_length=1)
    documents: tuple[Document, ...] = Field(())
