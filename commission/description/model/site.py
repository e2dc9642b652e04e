"""The plant as a whole: site, people, rooms."""

from __future__ import annotations

from typing import Literal

from pydantic import Field

from commission.description.fields import (
    Altitude,
    Area,
    GaugeOrAbsolute,
    Length,
    SoundLevel,
    Temperature,
    VolumeFlow,
    YesNo,
)
from commission.description.model.base import Part


class Climate(Part):
    """Design weather of the site."""

    summer_dry_bulb: Temperature | None = Field(None, description="hottest air to design for")
    summer_wet_bulb: Temperature | None = Field(None, description="wet bulb that goes with it")
    winter_dry_bulb: Temperature | None = Field(None, description="coldest air to design for")


class Rules(Part):
    """The law and the safety standard that the owner and the authority have agreed on."""

    refrigerant_law: Literal["EU 2024/573", "US 40 CFR 82 and 84", "none stated"] = Field(
        "none stated", description="law on refrigerants that the plant falls under"
    )
    safety: Literal["EN 378", "ISO 5149", "ASHRAE 15", "none stated"] = Field(
        "none stated", description="safety standard agreed with the authority"
    )


class Person(Part):
    """A role at this plant and who fills it."""

    name: str = Field(description="name of the person")
    firm: str | None = Field(None, description="employer")
    phone: str | None = Field(None, description="number for an emergency, where there is one")
    certificate: str | None = Field(None, description="certificate number where the law asks for one")


class NoiseLimits(Part):
    """Sound pressure levels agreed for the boundary of the site."""

    boundary_by_day: SoundLevel | None = Field(None, description="highest level at the boundary by day")
    boundary_by_night: SoundLevel | None = Field(None, description="highest level at the boundary by night")
    where: str | None = Field(None, description="where it is measured")


class Site(Part):
    """The plant as a whole."""

    name: str = Field(description="name of the plant as the owner says it")
    altitude: Altitude = Field(0.0, description="height above sea level; sets the barometric pressure (ISO 2533)")
    barometric_pressure: GaugeOrAbsolute | None = Field(
        None, description="usual air pressure of the site, absolute, where it is known better than from the altitude"
    )
    address: str | None = Field(None, description="where the plant stands")
    meeting_point: str | None = Field(
        None, description="where people gather in an emergency and the fire brigade is met"
    )
    dwelling: YesNo = Field(False, description="yes where the plant serves dwellings alone: some duties end there")
    climate: Climate = Field(default_factory=Climate, description="design weather of the site")
    units: Literal["metric", "us_customary"] = Field("metric", description="how the manual prints numbers")
    rules: Rules = Field(default_factory=Rules, description="law and safety standard that apply")
    people: dict[str, Person] = Field(
        default_factory=dict, description="roles (owner, operator, contractor, witness, emergency, ...) and people"
    )
    noise: NoiseLimits = Field(default_factory=NoiseLimits, description="sound levels agreed for the boundary")


class Space(Part):
    """A room or outdoor place that refrigerant can reach if it leaks."""

    name: str | None = Field(None, description="name on the door")
    floor_area: Area | None = Field(None, description="floor area of the room")
    height: Length | None = Field(None, description="clear height of the room")
    occupancy: Literal["general public", "supervised", "authorised persons only"] | None = Field(
        None, description="who may be in the room"
    )
    below_ground: YesNo = Field(False, description="yes where the floor lies below ground level")
    outdoors: YesNo = Field(False, description="yes for a place in the open air")
    hottest_air: Temperature | None = Field(
        None, description="hottest air of this place, where it differs from plant.climate.summer_dry_bulb"
    )
    ventilation: VolumeFlow | None = Field(None, description="air flow of the mechanical ventilation, if any")
    leak_detector: YesNo | None = Field(None, description="yes where a refrigerant detector watches the room")
    trapped_person_alarm: YesNo | None = Field(None, description="yes where a person locked in can raise an alarm")
    release_from_inside: YesNo | None = Field(None, description="yes where the door opens from inside when locked")
