"""Times as a logger writes them become moments; summer time and zones are taken as the mapping says."""

from __future__ import annotations

import datetime as dt
import math
import re
from collections.abc import Mapping
from dataclasses import dataclass, field

from commission.errors import InputError, Problem

_TOKENS: Mapping[str, str] = {
    "YYYY": r"(?P<Y>\d{4})",
    "MM": r"(?P<M>\d{1,2})",
    "DD": r"(?P<D>\d{1,2})",
    "hh": r"(?P<h>\d{1,2})",
    "mm": r"(?P<m>\d{2})",
    "ss": r"(?P<s>\d{2}(?:[.,]\d{1,6})?)",
    "zz": r"(?P<z>Z|[+-]\d{2}:?\d{2})",
}
_ORDER = re.compile("|".join(_TOKENS))
_BACK = 1200.0
"""Seconds by which the clock must go back to count as the end of summer time; less is a row out of order."""
_EPOCH = dt.datetime(1970, 1, 1)
_OFFSET = re.compile(r"([+-])(\d{2}):?(\d{2})")


class FormError(InputError):
    """The form of the time, or its zone, cannot be used; the problem's path says which."""


@dataclass(slots=True)
class Clock:
    """Reads the times of one file in the order of its rows: the hour that comes twice in autumn is told apart by order.

    `repeated_hour` counts rows in such an hour; `impossible` those in the hour that is left out in spring.
    """

    pattern: re.Pattern[str]
    zone: dt.tzinfo | None
    has_seconds: bool
    ends_with_seconds: bool = False
    repeated_hour: int = 0
    impossible: int = 0
    _hours: dict[tuple[str, str, str, str, bool], tuple[float, float | None]] = field(default_factory=dict)
    _last_local: float = -math.inf
    _second_pass: bool = False
    _minute: str = ""
    _minute_start: float = 0.0

    def read(self, text: str) -> float | None:
        """Seconds since 1970-01-01 UTC; None where the text is no time in this form or no time at all."""
        last = text[-2:]
        if text[:-2] == self._minute and last.isdecimal() and last < "60":
            return self._minute_start + int(last)
        text = text.strip()
        found = self._read(text)
        # Rows of one minute differ in their last two digits only; the hour that comes twice is left to the slow way.
        self._minute = ""
        if found is not None and self.ends_with_seconds and text[-2:].isdecimal() and self._last_local == -math.inf:
            self._minute, self._minute_start = text[:-2], found - int(text[-2:])
        return found

    def _read(self, text: str) -> float | None:
        match = self.pattern.fullmatch(text)
        if match is None:
            return None
        parts = match.groupdict()
        minutes = int(parts["m"])
        seconds = float(parts["s"].replace(",", ".")) if self.has_seconds else 0.0
        if minutes > 59 or seconds >= 61.0:
            return None
        within = 60.0 * minutes + seconds
        if self.zone is None:
            return self._with_offset(parts, within)
        key = (parts["Y"], parts["M"], parts["D"], parts["h"], minutes >= 30)
        if key not in self._hours:
            hour = self._hour(key)
            if hour is None:
                return None
            self._hours[key] = hour
        first, second = self._hours[key]
        if second is None:
            self._last_local, self._second_pass = -math.inf, False
            return first + within
        return self._in_repeated_hour(first, second, within)

    def _in_repeated_hour(self, first: float, second: float, within: float) -> float:
        """First pass until the clock goes back by a good part of an hour, then the second."""
        self.repeated_hour += 1
        local = first + within
        if local < self._last_local - _BACK:
            self._second_pass = True
        self._last_local = local
        return (second if self._second_pass else first) + within

    def _hour(self, key: tuple[str, str, str, str, bool]) -> tuple[float, float | None] | None:
        """UTC of the beginning of a local hour, and of its second coming where it has one.

        Looked up for each half hour, since some zones change their clocks by half an hour.
        """
        year, month, day, hour = (int(k) for k in key[:4])
        half = 30 if key[4] else 0
        try:
            local = dt.datetime(year, month, day, hour, half)
        except ValueError:
            return None
        found = [local.replace(tzinfo=self.zone, fold=fold).timestamp() - 60.0 * half for fold in (0, 1)]
        if found[0] == found[1]:
            return found[0], None
        if found[0] > found[1]:  # the hour that is left out in spring
            self.impossible += 1
            return None
        return found[0], found[1]

    def _with_offset(self, parts: Mapping[str, str], within: float) -> float | None:
        year, month, day, hour = (int(parts[p]) for p in "YMDh")
        try:
            local = dt.datetime(year, month, day, hour)
        except ValueError:
            return None
        return (local - _EPOCH).total_seconds() + within - _offset_seconds(parts["z"])


def compile_form(form: str, zone: str | None) -> Clock:
    """A clock for times written in this form, in this zone.

    Raises:
        FormError: a part of the time is missing or said twice, or neither a zone nor `zz` says what the clock shows.
    """
    tokens = _ORDER.findall(form)
    missing = [t for t in ("YYYY", "MM", "DD", "hh", "mm") if tokens.count(t) != 1]
    if missing or len(set(tokens)) != len(tokens):
        allowed = "for example DD.MM.YYYY hh:mm:ss or YYYY-MM-DDThh:mm:sszz"
        raise FormError(Problem("each of YYYY, MM, DD, hh and mm stands in it once", path="form", allowed=allowed))
    if ("zz" in tokens) == (zone is not None):
        allowed = "zone: Europe/London, UTC or +01:00; or zz in the form, not both"
        raise FormError(Problem("say once in which zone the logger's clock runs", path="zone", allowed=allowed))
    pattern, at = "", 0
    for found in _ORDER.finditer(form):
        pattern += re.escape(form[at : found.start()]) + _TOKENS[found.group()]
        at = found.end()
    whole = re.compile(pattern + re.escape(form[at:]))
    return Clock(whole, zone_of(zone), "ss" in tokens, form.endswith("ss"))


def zone_of(name: str | None) -> dt.tzinfo | None:
    """The zone of this name or offset, None where none is named.

    Raises:
        FormError: there is no such zone.
    """
    import zoneinfo

    if name is None:
        return None
    if _OFFSET.fullmatch(name):
        return dt.timezone(dt.timedelta(seconds=_offset_seconds(name)))
    try:
        return zoneinfo.ZoneInfo(name)
    except (zoneinfo.ZoneInfoNotFoundError, ValueError, OSError):
        allowed = "a name of the zone list such as Europe/London, UTC, or an offset such as +01:00"
        raise FormError(Problem(f"no zone is called {name!r}", path="zone", allowed=allowed)) from None


def _offset_seconds(text: str) -> float:
    match = _OFFSET.fullmatch(text)
    if match is None:
        return 0.0
    sign, hours, minutes = match.groups()
    return (1.0 if sign == "+" else -1.0) * (3600.0 * int(hours) + 60.0 * int(minutes))
