"""Where heat is taken from and where it goes: air, water or brine, a hot-water store."""

from __future__ import annotations

from typing import Literal

from pydantic import Field

from commission.description.fields import (
    Duration,
    HeatFlow,
    LiquidFlow,
    Power,
    PressureDifference,
    Ratio,
    Temperature,
    TemperatureDifference,
    Volume,
    VolumeFlow,
    YesNo,
)
from commission.description.model.base import MediumName, Part


class Medium(Part):
    """Where heat is taken from or goes to."""

    medium: MediumName = Field(description="air or a liquid")
    mass_fraction: Ratio | None = Field(None, description="glycol mass fraction")
    space: str | None = Field(None, description="id of the space the air is drawn from")
    cooled_by: Literal["cooling tower", "dry cooler", "well, river or sea", "use of the heat"] | None = Field(
        None, description="where the heat of a heat-sink liquid goes in the end"
    )
    flow: VolumeFlow | None = Field(None, description="volume flow at the inlet state, at the design condition")
    flow_stages: dict[str, VolumeFlow] = Field(
        default_factory=dict, description="volume flow of each fan or pump stage, by its name on the controller"
    )
    least_flow: VolumeFlow | None = Field(None, description="flow at which the flow switch stops the machine")
    relative_humidity: Ratio | None = Field(None, description="relative humidity of the air, at the design condition")
    external_pressure: PressureDifference | None = Field(
        None, description="pressure that the fan gives to ducts, or the pump to the pipes, outside the unit"
    )
    exchanger_pressure_loss: PressureDifference | None = Field(
        None, description="pressure loss of the liquid through the exchanger at the design flow"
    )
    pump_power: Power | None = Field(None, description="electric power of the pump of this side, where there is one")


class StoreSensor(Part):
    """A temperature sensor of the store."""

    height: Ratio = Field(description="height in the store: 0 % at the bottom, 100 % at the top")
    used_for: Literal["start", "stop", "start and stop", "back-up", "display"] = Field(
        "display", description="what the controller does with it"
    )


class Circulation(Part):
    """A circulation loop that keeps the hot-water pipes warm."""

    return_temperature: Temperature | None = Field(None, description="temperature at which the water comes back")
    flow: LiquidFlow | None = Field(None, description="flow of the loop")
    heat_loss: HeatFlow | None = Field(None, description="heat that the loop loses while it runs")
    hours_per_day: Duration | None = Field(None, description="running time in a day")
    enters_at: Ratio | None = Field(None, description="height at which it enters the store: 0 % bottom, 100 % top")


class HygieneHeating(Part):
    """Heating of the whole store against legionella."""

    temperature: Temperature = Field(description="temperature that the whole store reaches")
    interval: Duration = Field(description="time from one to the next")
    hold: Duration | None = Field(None, description="time for which the temperature is held")


class Store(Part):
    """A store of hot water or of heating water."""

    volume: Volume = Field(description="volume of water")
    set_point: Temperature | None = Field(None, description="temperature at which heating stops")
    differential: TemperatureDifference | None = Field(None, description="fall below the set point that starts heating")
    cold_water: Temperature | None = Field(None, description="temperature of the cold water that enters")
    standing_loss: HeatFlow | None = Field(None, description="heat loss at rest, at the set point")
    sensors: dict[str, StoreSensor] = Field(default_factory=dict, description="sensors by the name on the controller")
    stratified: YesNo = Field(True, description="yes where hot water stays above cold water while it is heated")
    circulation: Circulation | None = Field(None, description="circulation loop of the hot water")
    hygiene_heating: HygieneHeating | None = Field(None, description="heating of the whole store against legionella")
    unvented: YesNo | None = Field(None, description="yes for a closed store under mains pressure")


class BackUp(Part):
    """An electric element or boiler that helps or replaces the machine."""

    by: Literal["electric element", "boiler"] = Field("electric element", description="what it is")
    power: HeatFlow | None = Field(None, description="heat that it gives")
    where: Literal["flow pipe", "store top", "store middle", "store bottom", "separate"] | None = Field(
        None, description="where it heats"
    )
    mode: Literal["helps", "replaces"] = Field("helps", description="helps the machine, or replaces it")
    starts_below: Temperature | None = Field(None, description="outdoor temperature below which it may start")
    locked_out_above: Temperature | None = Field(None, description="outdoor temperature above which it is locked out")
    delay: Duration | None = Field(None, description="time that the set point must be missed before it starts")
