"""Compressor, exchangers, cycle, balance: plain SI dataclasses that know nothing of a description."""

from commission.machine.circuit import Parts, SuctionLine, between, within_reach
from commission.machine.compressor import Compression, Compressor, EfficiencyShape
from commission.machine.condenser_circuit import FREE, HELD, LIMITED, LOWEST, REGULATED
from commission.machine.exchanger import Exchanger, conductance_for, effectiveness
from commission.machine.gas_cooler import (
    GasCoolerPressure,
    PressureBy,
    best_pressure,
    liao_best_pressure,
    lifting_best_pressure,
)
from commission.machine.head_pressure import HeadPressure
from commission.machine.maps import OperatingMap, operating_map
from commission.machine.operating_point import Balance, Media, OperatingPoint, StatePoint
from commission.machine.polynomial import PolynomialCompressor, in_fahrenheit, ten_coefficients
from commission.machine.single_stage import SingleStage
from commission.machine.solver import NoSolutionError, Solution, solve
from commission.machine.stages import Stage, stage_of, staged
from commission.machine.streams import Stream, air_stream, carnot_cooling, entropic_mean, liquid_stream
from commission.machine.transcritical import Transcritical
from commission.machine.wet_air import LeavingAir, coil_conductance, leaving_air

__all__ = [
    "FREE",
    "HELD",
    "LIMITED",
    "LOWEST",
    "REGULATED",
    "Balance",
    "Compression",
    "Compressor",
    "EfficiencyShape",
    "Exchanger",
    "GasCoolerPressure",
    "HeadPressure",
    "LeavingAir",
    "Media",
    "NoSolutionError",
    "OperatingMap",
    "OperatingPoint",
    "Parts",
    "PolynomialCompressor",
    "PressureBy",
    "SingleStage",
    "Solution",
    "Stage",
    "StatePoint",
    "Stream",
    "SuctionLine",
    "Transcritical",
    "air_stream",
    "best_pressure",
    "between",
    "carnot_cooling",
    "coil_conductance",
    "conductance_for",
    "effectiveness",
    "entropic_mean",
    "in_fahrenheit",
    "leaving_air",
    "liao_best_pressure",
    "lifting_best_pressure",
    "liquid_stream",
    "operating_map",
    "solve",
    "stage_of",
    "staged",
    "ten_coefficients",
    "within_reach",
]
