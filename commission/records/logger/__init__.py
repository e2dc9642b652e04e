"""Records from a logger's file: a mapping written once, rows in time order, steady windows, whole cycles, a draft."""

from commission.records.logger.draft import draft_of
from commission.records.logger.mapping import LoggerMapping, MappingError, read_mapping
from commission.records.logger.rows import Gap, Log, LogError, LogReport, read_log
from commission.records.logger.windows import Window, quietest, steady_windows, whole_cycles

__all__ = [
    "Gap",
    "Log",
    "LogError",
    "LogReport",
    "LoggerMapping",
    "MappingError",
    "Window",
    "draft_of",
    "quietest",
    "read_log",
    "read_mapping",
    "steady_windows",
    "whole_cycles",
]
