"""One refrigerating system, and the plant that holds them."""

from __future__ import annotations

from typing import Literal

from pydantic import Field

from commission.description.fields import (
    Current,
    Date,
    FileName,
    GaugeOrAbsolute,
    Identity,
    Mass,
    PartOfMass,
    Voltage,
    Volume,
    YesNo,
)
from commission.description.model.base import Document, Duty, Part
from commission.description.model.controls import Controls
from commission.description.model.instruments import Instrument
from commission.description.model.machine import (
    Compressor,
    Condenser,
    Evaporator,
    Expansion,
    Lines,
    Receiver,
    SuctionExchanger,
)
from commission.description.model.media import BackUp, Medium, Store
from commission.description.model.promises import CondensingUnit, Conditions, Guarantee, RatedPoint
from commission.description.model.site import Site, Space


class Nameplate(Part):
    """What is stamped on the unit."""

    maker_type: str | None = Field(None, description="type as stamped")
    serial: str | None = Field(None, description="serial number as stamped")
    year: str | None = Field(None, description="year of manufacture")
    allowable_pressure_low: GaugeOrAbsolute | None = Field(None, description="PS of the low side")
    allowable_pressure_high: GaugeOrAbsolute | None = Field(None, description="PS of the high side")
    voltage: Voltage | None = Field(None, description="rated voltage, between phases where there are three")
    phases: Literal["1", "3"] | None = Field(None, description="phases of the supply")
    rated_current: Current | None = Field(None, description="largest current on the nameplate")


class SystemSpaces(Part):
    """Which space holds which part."""

    evaporator: str | None = Field(None, description="id of the space of the evaporator")
    evaporator_mounting: Literal["floor", "window", "wall", "ceiling"] | None = Field(
        None, description="where in the room the evaporator unit hangs or stands"
    )
    condensing_unit: str | None = Field(None, description="id of the space of the condensing unit or outdoor unit")
    pipework: tuple[str, ...] = Field((), description="ids of the spaces that refrigerant lines pass")


class AssumptionOverride(Part):
    """A better value for one entry of the assumption list; without low and high it counts as a known fact."""

    value: str = Field(description="value with unit")
    low: str | None = Field(None, description="lower end of the range it may have")
    high: str | None = Field(None, description="upper end of the range it may have")
    source: str = Field(description="where the value comes from")


class FigureOverride(Part):
    """A figure that replaces the register's for one refrigerant."""

    value: str = Field(description="value as the register writes it, with its unit")
    source: str = Field(description="document and edition it is read from")
    note: str | None = Field(None, description="what to know about it")


class System(Part):
    """One refrigerating system."""

    like: str | None = Field(
        None,
        description="id of a system whose description this one takes over, key by key; name, spaces, serial number, "
        "year, day of installation, guarantee and documents are never taken over",
    )
    without: tuple[str, ...] = Field((), description="keys that are not taken over from the system named by like")
    name: str | None = Field(None, description="name as people on site say it")
    duty: Duty = Field(description="what the system is for")
    serves: str | None = Field(None, description="what it serves, in plain words")
    refrigerant: str = Field(description="designation such as R-290")
    charge: Mass | None = Field(None, description="refrigerant charge")
    sealed: YesNo = Field(False, description="yes where the circuit is factory sealed, without service ports")
    factory_charge: PartOfMass | None = Field(
        None,
        description="what a unit that is joined on site brings behind its shut service valves, 0 kg where it comes "
        "empty; where nothing is written an air conditioner brings a charge, any other unit comes empty",
    )
    installed_on: Date | None = Field(None, description="day the system was put on the site")
    spaces: SystemSpaces = Field(default_factory=SystemSpaces, description="which space holds which part")
    nameplate: Nameplate = Field(default_factory=Nameplate, description="what is stamped on the unit")
    heat_source: Medium = Field(description="where heat is taken from")
    heat_sink: Medium = Field(description="where heat goes")
    compressor: Compressor = Field(default_factory=Compressor, description="what is known of the compressor")
    evaporator: Evaporator = Field(default_factory=Evaporator, description="what is known of the evaporator")
    condenser: Condenser = Field(default_factory=Condenser, description="what is known of the condenser or gas cooler")
    receiver: Receiver | None = Field(None, description="liquid receiver; without one subcooling follows the charge")
    relief_valves: dict[str, GaugeOrAbsolute] = Field(
        default_factory=dict, description="set pressure of each relief valve beside the receiver's, by where it sits"
    )
    suction_accumulator: Volume | None = Field(None, description="volume of the suction accumulator")
    suction_exchanger: SuctionExchanger | None = Field(None, description="exchanger between suction gas and liquid")
    expansion: Expansion | None = Field(None, description="the expansion device")
    lines: Lines = Field(default_factory=Lines, description="refrigerant lines laid on site")
    controls: Controls = Field(default_factory=Controls, description="settings of controls and limit devices")
    store: Store | None = Field(None, description="store of hot water or heating water")
    back_up: BackUp | None = Field(None, description="element or boiler that helps or replaces the machine")
    condensing_unit: CondensingUnit | None = Field(None, description="condensing unit rated apart from its cooler")
    rated_points: tuple[RatedPoint, ...] = Field(
        (), description="what the supplier states: a list of points, or {file: tables/unit.csv}"
    )
    design: Conditions | None = Field(None, description="condition the system is designed for")
    guarantee: tuple[Guarantee, ...] = Field((), description="what the contract says, if it says anything")
    measured_with: dict[str, str] = Field(default_factory=dict, description="instrument id for each quantity")
    documents: tuple[Document, ...] = Field((), description="data sheets, drawings and certificates of the system")
    assumptions: dict[str, AssumptionOverride] = Field(
        default_factory=dict, description="what is known better here than the assumption list says"
    )


class Plant(Part):
    """A whole description as read from one folder."""

    include: tuple[FileName, ...] = Field((), description="further files, such as systems/chiller.yaml")
    plant: Site = Field(description="the plant as a whole")
    spaces: dict[Identity, Space] = Field(
        default_factory=dict, description="every room that leaking refrigerant can reach"
    )
    instruments: dict[Identity, Instrument] = Field(default_factory=dict, description="gauges, probes and meters")
    systems: dict[Identity, System] = Field(min_length=1, description="the refrigerating systems by id")
    documents: tuple[Document, ...] = Field((), description="documents of the plant as a whole")
    refrigerants: dict[str, dict[str, FigureOverride]] = Field(
        default_factory=dict, description="figures that replace those of the refrigerant register, by designation"
    )
