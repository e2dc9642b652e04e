"""Units, nomenclature and `Explained`: the words and numbers that every room shares. Knows no physics."""

from commission.quantities.bounds import Bounds, bounds
from commission.quantities.display import Display, json_value, limits_in_words, pretty
from commission.quantities.explained import Explained, Input, Method, methods
from commission.quantities.kinds import FLOWS, SI_UNIT, Kind
from commission.quantities.nomenclature import NOMENCLATURE, MediumName, Quantity, nomenclature
from commission.quantities.parse import Pressure, QuantityError, describe, parse, parse_number, parse_pressure
from commission.quantities.units import UNITS, Reference, Unit, find_unit

__all__ = [
    "FLOWS",
    "NOMENCLATURE",
    "SI_UNIT",
    "UNITS",
    "Bounds",
    "Display",
    "Explained",
    "Input",
    "Kind",
    "MediumName",
    "Method",
    "Pressure",
    "Quantity",
    "QuantityError",
    "Reference",
    "Unit",
    "bounds",
    "describe",
    "find_unit",
    "json_value",
    "limits_in_words",
    "methods",
    "nomenclature",
    "parse",
    "parse_number",
    "parse_pressure",
    "pretty",
]
