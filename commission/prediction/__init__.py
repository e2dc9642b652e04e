"""A description becomes a fitted model; the model says what each gauge, probe and meter should read."""

from commission.prediction.conditions import ConditionAxis
from commission.prediction.model import Prediction, SystemModel, fit
from commission.prediction.saturation import SaturationRow, saturation_table

__all__ = ["ConditionAxis", "Prediction", "SaturationRow", "SystemModel", "fit", "saturation_table"]
