"""Records from a logger's file: a mapping written once, rows in time order, steady windows, whole cycles, a draft."""

from commission.records.logger.cycles import Cycles, best_cycles, whole_cycles
from commission.records.logger.draft import draft_of
from commission.records.logger.mapping import LoggerMapping, MappingError, read_mapping
from commission.records.logger.rows import Gap, Log, LogError, LogReport, read_log
from commission.records.logger.windows import Window, quietest, steady_windows

__all__ = [
    "Cycles",
    "Gap",
    "Log",
    "LogError",
    "LogReport",
    "LoggerMapping",
    "MappingError",
    "Window",
    "best_cycles",
    "draft_of",
    "quietest",
    "read_log",
    "read_mapping",
    "steady_windows",
    "whole_cycles",
]
