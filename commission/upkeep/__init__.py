"""What is due: duties as data, next days counted from records and description, and the calendar."""

from commission.upkeep.calendar import calendar
from commission.upkeep.due import Duty, due
from commission.upkeep.intervals import Interval, read_interval
from commission.upkeep.reading import UpkeepError, shipped, upkeep_of

__all__ = ["Duty", "Interval", "UpkeepError", "calendar", "due", "read_interval", "shipped", "upkeep_of"]
