"""A description becomes a fitted model; the model says what each gauge, probe and meter should read."""

from commission.prediction.conditions import ConditionAxis
from commission.prediction.fans import boundary
from commission.prediction.faults import FAULTS, Fault, with_fault
from commission.prediction.heating_up import HeatUp, heat_up
from commission.prediction.model import Nominal, Prediction, SystemModel, fit
from commission.prediction.saturation import SaturationRow, saturation_table
from commission.prediction.settings import HeldOff, value_used
from commission.prediction.surface import operating_surface

__all__ = [
    "FAULTS",
    "ConditionAxis",
    "Fault",
    "HeatUp",
    "HeldOff",
    "Nominal",
    "Prediction",
    "SaturationRow",
    "SystemModel",
    "boundary",
    "fit",
    "heat_up",
    "operating_surface",
    "saturation_table",
    "value_used",
    "with_fault",
]
