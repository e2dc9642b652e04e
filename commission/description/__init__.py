"""The plant description: YAML that a person writes becomes a typed, checked plant, each part with its place."""

from commission.description.assumptions import Assumption, assumptions_for
from commission.description.checking import check, validate
from commission.description.instruments import MEASURED, ResolvedInstrument
from commission.description.model import (
    Conditions,
    Guarantee,
    Instrument,
    Part,
    Plant,
    RatedPoint,
    System,
)
from commission.description.naming import outdoor_sides
from commission.description.plant import LoadedPlant, load_plant
from commission.description.positions import DescriptionError, KeyPath, Position, Positions
from commission.description.reading import ReadFile, read_yaml
from commission.description.reference import KeyRow, json_schema, key_reference
from commission.description.schedule import from_schedule
from commission.description.schedule_headings import schedule_columns
from commission.description.starting import DUTIES, new_plant

__all__ = [
    "DUTIES",
    "MEASURED",
    "Assumption",
    "Conditions",
    "DescriptionError",
    "Guarantee",
    "Instrument",
    "KeyPath",
    "KeyRow",
    "LoadedPlant",
    "Part",
    "Plant",
    "Position",
    "Positions",
    "RatedPoint",
    "ReadFile",
    "ResolvedInstrument",
    "System",
    "assumptions_for",
    "check",
    "from_schedule",
    "json_schema",
    "key_reference",
    "load_plant",
    "new_plant",
    "outdoor_sides",
    "read_yaml",
    "schedule_columns",
    "validate",
]
