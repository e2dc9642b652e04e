"""Intervals by the calendar: a month after 31 January is the last day of February, a year after 29 February too."""

from __future__ import annotations

import calendar
import datetime as dt
import re
from dataclasses import dataclass
from typing import Literal

UnitOfTime = Literal["day", "week", "month", "year"]
ALLOWED = "a whole number of days, weeks, months or years, such as 6 months"
_WRITTEN = re.compile(r"([1-9][0-9]{0,3})\s*(day|week|month|year)s?", re.IGNORECASE)
_MOST = {"day": 9999, "week": 5200, "month": 1200, "year": 100}


@dataclass(frozen=True, slots=True)
class Interval:
    """A time by the calendar: `count` (1 or more) of `unit`."""

    count: int
    unit: UnitOfTime

    def after(self, day: dt.date) -> dt.date:
        """The last day of the interval that begins on `day`: the same day of a later month, or that month's last.

        Raises:
            OverflowError: later than the calendar reaches (year 9999).
        """
        if self.unit in ("day", "week"):
            return day + dt.timedelta(days=self.count * (7 if self.unit == "week" else 1))
        months = day.month - 1 + self.count * (12 if self.unit == "year" else 1)
        year, month = day.year + months // 12, months % 12 + 1
        if year > dt.MAXYEAR:
            raise OverflowError(f"{self.text} after {day} is past the calendar")
        return dt.date(year, month, min(day.day, calendar.monthrange(year, month)[1]))

    @property
    def text(self) -> str:
        """As a person says it, such as `6 months`."""
        return f"{self.count} {self.unit}{'s' if self.count > 1 else ''}"

    @property
    def days(self) -> int:
        """About how many days: to sort by, and to say how early to remind."""
        return self.count * {"day": 1, "week": 7, "month": 30, "year": 365}[self.unit]


def read_interval(text: str) -> Interval:
    """An interval as a person writes it: `6 months`, `1 week`, `5 years`.

    Raises:
        ValueError: anything else; its message says what is allowed.
    """
    found = _WRITTEN.fullmatch(text.strip())
    if found is None:
        raise ValueError(ALLOWED)
    count, unit = int(found.group(1)), found.group(2).lower()
    if count > _MOST[unit]:
        raise ValueError(f"{ALLOWED}; at most {_MOST[unit]} {unit}s")
    return Interval(count, unit)  # type: ignore[arg-type]  # the pattern allows exactly these words
