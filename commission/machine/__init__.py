"""Compressor, exchangers, cycle, balance: plain SI dataclasses that know nothing of a description."""

from commission.machine.compressor import Compression, Compressor, EfficiencyShape
from commission.machine.exchanger import Exchanger, conductance_for, effectiveness
from commission.machine.head_pressure import HeadPressure
from commission.machine.operating_point import Balance, Media, OperatingPoint, StatePoint
from commission.machine.single_stage import FREE, HELD, LOWEST, SingleStage, SuctionLine
from commission.machine.solver import NoSolutionError, Solution, solve
from commission.machine.streams import Stream, air_stream, carnot_cooling, entropic_mean, liquid_stream

__all__ = [
    "FREE",
    "HELD",
    "LOWEST",
    "Balance",
    "Compression",
    "Compressor",
    "EfficiencyShape",
    "Exchanger",
    "HeadPressure",
    "Media",
    "NoSolutionError",
    "OperatingPoint",
    "SingleStage",
    "Solution",
    "StatePoint",
    "Stream",
    "SuctionLine",
    "air_stream",
    "carnot_cooling",
    "conductance_for",
    "effectiveness",
    "entropic_mean",
    "liquid_stream",
    "solve",
]
