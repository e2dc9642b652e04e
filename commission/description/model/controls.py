"""Settings of controls and limit devices."""

from __future__ import annotations

from typing import Literal

from pydantic import Field

from commission.description.fields import (
    Count,
    Duration,
    GaugeOrAbsolute,
    Speed,
    Temperature,
    TemperatureDifference,
    YesNo,
)
from commission.description.model.base import Part


class HeadPressure(Part):
    """How the condensing pressure is kept up in cold weather."""

    by: Literal["fan speed", "fan cycling", "condenser flooding", "water valve"] = Field(description="what acts")
    hold: Temperature = Field(description="condensing temperature (dew) that is held")


class GasCoolerPressure(Part):
    """How the high pressure of a transcritical circuit is set."""

    by: Literal["fixed set point", "follows the gas-cooler outlet", "charge alone"] = Field(description="what sets it")
    set_point: GaugeOrAbsolute | None = Field(None, description="the fixed set point")
    lowest: GaugeOrAbsolute | None = Field(None, description="lowest pressure that the control allows")
    highest: GaugeOrAbsolute | None = Field(None, description="highest pressure that the control allows")


class CurvePoint(Part):
    """One point of a weather curve."""

    outdoor: Temperature = Field(description="outdoor temperature")
    flow: Temperature = Field(description="flow temperature that belongs to it")


class WeatherCurve(Part):
    """Flow temperature by outdoor temperature; straight between its points."""

    points: tuple[CurvePoint, ...] = Field(min_length=2, description="at least two points")
    highest_flow: Temperature | None = Field(None, description="flow temperature that is never passed")
    lowest_flow: Temperature | None = Field(None, description="flow temperature that is always kept")
    heating_limit: Temperature | None = Field(None, description="outdoor temperature above which heating stops")


class Controls(Part):
    """Settings of controls and limit devices."""

    room_temperature: Temperature | None = Field(None, description="set point of the room thermostat")
    room_differential: TemperatureDifference | None = Field(None, description="switching differential")
    liquid_outlet_temperature: Temperature | None = Field(None, description="set point of the liquid that leaves")
    liquid_differential: TemperatureDifference | None = Field(None, description="switching differential of the liquid")
    weather_curve: WeatherCurve | None = Field(None, description="flow temperature by outdoor temperature")
    head_pressure: HeadPressure | None = Field(None, description="how the condensing pressure is kept up")
    gas_cooler_pressure: GasCoolerPressure | None = Field(None, description="high pressure of a transcritical circuit")
    crankcase_pressure_regulator: GaugeOrAbsolute | None = Field(
        None, description="suction pressure that the regulator lets through at most"
    )
    evaporator_pressure_regulator: GaugeOrAbsolute | None = Field(
        None, description="pressure below which the evaporator is not let fall"
    )
    high_pressure_limit: GaugeOrAbsolute | None = Field(None, description="high-pressure limit device opens")
    high_pressure_reset: Literal["automatic", "by hand", "by hand with tool"] | None = Field(
        None, description="how the high-pressure limit device is reset"
    )
    low_pressure_cut_out: GaugeOrAbsolute | None = Field(None, description="low-pressure control stops the machine")
    low_pressure_cut_in: GaugeOrAbsolute | None = Field(None, description="low-pressure control starts it again")
    discharge_temperature_limit: Temperature | None = Field(None, description="discharge thermostat opens")
    freeze_protection: Temperature | None = Field(None, description="liquid temperature at which the machine stops")
    oil_pressure_delay: Duration | None = Field(None, description="time that low oil pressure is borne")
    lowest_speed: Speed | None = Field(None, description="lowest compressor speed that the controller asks for")
    highest_speed: Speed | None = Field(None, description="highest compressor speed that the controller asks for")
    pump_down: YesNo = Field(False, description="stops by pump-down of the low side")
    starts_per_hour: Count | None = Field(None, description="most starts in an hour that are allowed")
    least_running_time: Duration | None = Field(None, description="shortest run that the controller allows")
    least_rest: Duration | None = Field(None, description="shortest stop that the controller allows")
