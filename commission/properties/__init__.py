"""Refrigerants, moist air, water and brines, barometric pressure, and the register of refrigerants. SI throughout."""

from commission.properties.errors import PropertyRangeError
from commission.properties.refrigerant import Refrigerant, refrigerant
from commission.properties.states import SaturationSlopes, SaturationState, Slopes, State

__all__ = [
    "PropertyRangeError",
    "Refrigerant",
    "SaturationSlopes",
    "SaturationState",
    "Slopes",
    "State",
    "refrigerant",
]
