"""Refrigerants, moist air, water and brines, barometric pressure, and the register of refrigerants. SI throughout.

Nothing heavy is imported here: the equation of state is loaded when the first property is asked for.
"""

from commission.properties.atmosphere import barometric_pressure
from commission.properties.errors import PropertyRangeError
from commission.properties.liquids import Liquid, liquid
from commission.properties.psychrometrics import (
    MoistAir,
    moist_air,
    moist_air_from_enthalpy,
    saturated_air,
    saturated_air_at_enthalpy,
)
from commission.properties.refrigerant import Refrigerant, refrigerant
from commission.properties.register import Figure, RegisterEntry, register
from commission.properties.states import SaturationSlopes, SaturationState, Slopes, State

__all__ = [
    "Figure",
    "Liquid",
    "MoistAir",
    "PropertyRangeError",
    "Refrigerant",
    "RegisterEntry",
    "SaturationSlopes",
    "SaturationState",
    "Slopes",
    "State",
    "barometric_pressure",
    "liquid",
    "moist_air",
    "moist_air_from_enthalpy",
    "refrigerant",
    "register",
    "saturated_air",
    "saturated_air_at_enthalpy",
]
