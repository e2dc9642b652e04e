"""What the supplier states and what the contract says: conditions, rated points, guarantees."""

from __future__ import annotations

from typing import Literal

from pydantic import Field

from commission.description.fields import (
    Capacity,
    Current,
    Fraction,
    PositiveNumber,
    PowerInput,
    Ratio,
    Speed,
    Temperature,
    TemperatureDifference,
    VolumeFlow,
    YesNo,
)
from commission.description.model.base import DecisionRule, Included, Part
from commission.quantities import NOMENCLATURE, parse


def _means(key: str) -> str:
    return NOMENCLATURE[key].definition


class Conditions(Part):
    """A condition of operation; keys are those of the nomenclature."""

    heat_source_inlet_temperature: Temperature | None = Field(None, description=_means("heat_source_inlet_temperature"))
    heat_source_outlet_temperature: Temperature | None = Field(
        None, description=_means("heat_source_outlet_temperature")
    )
    heat_source_wet_bulb: Temperature | None = Field(None, description=_means("heat_source_wet_bulb"))
    heat_source_relative_humidity: Ratio | None = Field(None, description=_means("heat_source_relative_humidity"))
    heat_source_flow: VolumeFlow | None = Field(None, description=_means("heat_source_flow"))
    heat_sink_inlet_temperature: Temperature | None = Field(None, description=_means("heat_sink_inlet_temperature"))
    heat_sink_outlet_temperature: Temperature | None = Field(None, description=_means("heat_sink_outlet_temperature"))
    heat_sink_wet_bulb: Temperature | None = Field(None, description=_means("heat_sink_wet_bulb"))
    heat_sink_relative_humidity: Ratio | None = Field(None, description=_means("heat_sink_relative_humidity"))
    heat_sink_flow: VolumeFlow | None = Field(None, description=_means("heat_sink_flow"))
    compressor_speed: Speed | None = Field(None, description=_means("compressor_speed"))
    compressor_stage: Fraction | None = Field(None, description=_means("compressor_stage"))


class RatedPoint(Conditions):
    """What the supplier states of the whole system at one condition."""

    cooling_capacity: Capacity | None = Field(None, description="cooling capacity (see capacity_is)")
    heating_capacity: Capacity | None = Field(None, description=_means("heating_capacity"))
    power_input: PowerInput | None = Field(None, description=_means("power_input"))
    cooling_cop: PositiveNumber | None = Field(None, description="COP of cooling, where the power is not stated")
    heating_cop: PositiveNumber | None = Field(None, description="COP of heating, where the power is not stated")
    sensible_heat_ratio: Fraction | None = Field(None, description=_means("sensible_heat_ratio"))
    evaporating_temperature: Temperature | None = Field(None, description=_means("evaporating_temperature"))
    condensing_temperature: Temperature | None = Field(None, description=_means("condensing_temperature"))
    current: Current | None = Field(None, description=_means("current"))
    capacity_is: Literal["net", "gross"] | None = Field(
        None, description="net: the heat of the evaporator fan is deducted from the cooling capacity; gross: it is not"
    )
    frost_included: YesNo | None = Field(
        None,
        description="yes where heat and power are averages over frost and defrost: the point then tells the share of "
        "heat lost to them, beside the size of the machine",
    )
    includes: tuple[Included, ...] | None = Field(None, description="what the power input counts")
    source: str | None = Field(None, description="document it is read from")


class CondensingUnitPoint(Part):
    """One point of a condensing unit's table: evaporating temperature and ambient air give capacity and power."""

    evaporating_temperature: Temperature = Field(description="dew point at the suction")
    heat_sink_inlet_temperature: Temperature = Field(description="air on the condenser")
    cooling_capacity: Capacity = Field(description="cooling capacity at the rating's suction state")
    power_input: PowerInput = Field(description="electric power of all that `includes` names")


class CondensingUnit(Part):
    """A condensing unit rated apart from its cooler (EN 13215 style)."""

    rated_points: tuple[CondensingUnitPoint, ...] = Field(
        min_length=1, description="a list of points, or {file: tables/unit.csv}"
    )
    suction_temperature: Temperature | None = Field(None, description="return gas temperature of the rating")
    suction_superheat: TemperatureDifference | None = Field(None, description="or superheat of the rating")
    liquid_subcooling: TemperatureDifference | None = Field(None, description="subcooling of the rating")
    includes: tuple[Included, ...] | None = Field(None, description="what the power input counts")
    source: str | None = Field(None, description="document it is read from")


class Tolerance(Part):
    """How far a guaranteed value may be missed."""

    below: Ratio | None = Field(None, description="share by which it may fall short")
    above: Ratio | None = Field(None, description="share by which it may be exceeded")


class Guarantee(Part):
    """What the contract says: value, condition, tolerance, decision rule, and how it is carried to the day."""

    quantity: Literal[
        "cooling_capacity", "net_cooling_capacity", "heating_capacity", "power_input", "cooling_cop", "heating_cop"
    ] = Field(description="what is guaranteed")
    at: Conditions = Field(description="condition of the guarantee")
    value: str = Field(description="guaranteed value with unit; a COP is a plain number")
    tolerance: Tolerance = Field(default_factory=Tolerance, description="how far it may be missed")
    decision: DecisionRule = Field(
        "simple", description="simple: measured value against the limit; guarded: uncertainty is deducted (JCGM 106)"
    )
    largest_uncertainty: Ratio | None = Field(
        None,
        description="expanded uncertainty (95 %), as a share of the guaranteed value, up to which a test may decide by "
        "the simple rule; where the contract says nothing, the measured value alone decides",
    )
    carried_by: Literal["design model", "supplier's table", "as stated"] = Field(
        "design model",
        description="how the value is carried to the day's condition: in the ratio of the agreed design model, along "
        "the supplier's table, or only at the stated condition",
    )
    route: Literal["liquid side", "air side", "compressor heat balance", "electric meter"] | None = Field(
        None, description="how the quantity is measured"
    )
    includes: tuple[Included, ...] | None = Field(None, description="what the power counts, for a power or a COP")
    source: str | None = Field(None, description="clause of the contract")

    @property
    def value_si(self) -> float:
        """The guaranteed value in SI (W, or 1 for a COP); its text was checked when the description was read."""
        return parse(self.value, NOMENCLATURE[self.quantity].kind)
