"""The kinds of physical quantity, each with its SI unit inside and the units a person sees."""

from __future__ import annotations

from enum import StrEnum


class Kind(StrEnum):
    """What sort of thing a number measures; a unit belongs to exactly one kind."""

    TEMPERATURE = "temperature"
    TEMPERATURE_DIFFERENCE = "temperature difference"
    PRESSURE = "pressure"
    PRESSURE_DIFFERENCE = "pressure difference"
    POWER = "power"
    HEAT_FLOW = "heat flow rate"
    ENERGY = "energy"
    MASS = "mass"
    VOLUME = "volume"
    LENGTH = "length"
    AREA = "area"
    VOLUME_FLOW = "volume flow"
    LIQUID_FLOW = "liquid flow"
    MASS_FLOW = "mass flow"
    CONDUCTANCE = "thermal conductance"
    CURRENT = "electric current"
    VOLTAGE = "voltage"
    SPEED = "rotational speed"
    VELOCITY = "velocity"
    DURATION = "duration"
    RATIO = "ratio"
    NUMBER = "number"
    DENSITY = "density"
    SPECIFIC_ENTHALPY = "specific enthalpy"
    SOUND_LEVEL = "sound pressure level"


FLOWS = (Kind.VOLUME_FLOW, Kind.LIQUID_FLOW)
"""Volume flows: of air, gas or anything; and of what is known to be a liquid."""

SI_UNIT: dict[Kind, str] = {
    Kind.TEMPERATURE: "K",
    Kind.TEMPERATURE_DIFFERENCE: "K",
    Kind.PRESSURE: "Pa",
    Kind.PRESSURE_DIFFERENCE: "Pa",
    Kind.POWER: "W",
    Kind.HEAT_FLOW: "W",
    Kind.ENERGY: "J",
    Kind.MASS: "kg",
    Kind.VOLUME: "m3",
    Kind.LENGTH: "m",
    Kind.AREA: "m2",
    Kind.VOLUME_FLOW: "m3/s",
    Kind.LIQUID_FLOW: "m3/s",
    Kind.MASS_FLOW: "kg/s",
    Kind.CONDUCTANCE: "W/K",
    Kind.CURRENT: "A",
    Kind.VOLTAGE: "V",
    Kind.SPEED: "1/s",
    Kind.VELOCITY: "m/s",
    Kind.DURATION: "s",
    Kind.RATIO: "1",
    Kind.NUMBER: "1",
    Kind.DENSITY: "kg/m3",
    Kind.SPECIFIC_ENTHALPY: "J/kg",
    Kind.SOUND_LEVEL: "dB(A)",
}
