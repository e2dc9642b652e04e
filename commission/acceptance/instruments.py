"""From what an instrument promises to the uncertainty of one reading: class, span, resolution, place, calibration."""

from __future__ import annotations

import datetime as dt
import math
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cache
from importlib.resources import files
from typing import Any

from commission.acceptance.budget import Budget, Component, Measured, spread_of
from commission.description.model import Instrument
from commission.errors import NotCalculatedError, Problem, nearest
from commission.quantities import NOMENCLATURE, Kind, Quantity, Reference

_WORD_OF_KIND: Mapping[Kind, str] = {
    Kind.TEMPERATURE: "temperature",
    Kind.TEMPERATURE_DIFFERENCE: "temperature difference",
    Kind.PRESSURE: "pressure",
    Kind.POWER: "electric power",
    Kind.CURRENT: "current",
    Kind.VOLTAGE: "voltage",
    Kind.RATIO: "relative humidity",
    Kind.VOLUME_FLOW: "volume flow",
    Kind.MASS: "mass",
    Kind.SPEED: "rotational speed",
}
_ROOT_3 = math.sqrt(3.0)
_ROOT_12 = math.sqrt(12.0)
_DAYS_A_YEAR = 365.25
_ICE = 273.15
BAROMETER = "barometric pressure"


@dataclass(frozen=True, slots=True)
class Reading:
    """What was read on site: quantity by nomenclature key, value in SI (pressures absolute), instrument, place.

    `samples` are single readings in their order, `phases` one reading for each supply phase; `value` is then their
    mean.
    """

    key: str
    value: float
    instrument: str | None = None
    where: str = ""
    samples: tuple[float, ...] = ()
    phases: tuple[float, ...] = ()


@dataclass(frozen=True, slots=True)
class Statement:
    """The largest permissible error of an instrument: parts are added (worst case). SI; K for temperatures.

    `of_reading` counts from 0 °C for temperatures and from the air pressure for gauges. `span` and `end` belong to
    `of_span` and `of_end`.
    """

    absolute: float = 0.0
    of_reading: float = 0.0
    of_span: float = 0.0
    of_end: float = 0.0
    at_least: float = 0.0
    at_most_of_reading: float = math.inf
    span: float = 0.0
    end: float = 0.0
    source: str = ""
    mark: str = ""

    def limit(self, shown: float) -> float:
        """Largest permissible error at `shown`, the number as the instrument counts it (°C, gauge Pa)."""
        size = abs(shown)
        error = self.absolute + self.of_reading * size + self.of_span * self.span + self.of_end * self.end
        return min(max(error, self.at_least), self.at_most_of_reading * size)


@cache
def library() -> Mapping[str, Any]:
    """The data of `instruments.yaml`: classes, what is assumed where nothing is stated, extras, remedies."""
    import yaml

    text = (files("commission.acceptance") / "instruments.yaml").read_text(encoding="utf-8")
    data: Mapping[str, Any] = yaml.safe_load(text)
    return data


COUNTED = ("running_share", "starts_per_hour", "defrost_time", "compressor_stage")
"""What is counted, timed over a log or by the clock, or one of a few known values: no instrument has an error in it
that would be worth a word."""


def instrument_class(name: str, measures: str) -> Mapping[str, Any]:
    """The entry of a class such as `IEC 60751 A`; spaces and letter case do not count.

    Raises:
        NotCalculatedError: the class is not in the library, or is one of another kind of instrument.
    """
    classes = library()["classes"]
    table = {_squeeze(key): (key, entry) for key, entry in classes.items()}
    found = table.get(_squeeze(name)) or table.get(_squeeze(name.replace("class ", "", 1)))
    if found is None:
        known = [key for key, entry in classes.items() if entry["measures"] == measures]
        raise NotCalculatedError(
            Problem(
                "this instrument class is not in the library; state its accuracy instead",
                value=name,
                allowed=", ".join(known) or "accuracy: {of_reading: ..., of_span: ..., absolute: ...}",
                nearest=nearest(name, classes),
            )
        )
    key, entry = found
    same = {measures, "temperature" if measures == "temperature difference" else measures}
    if entry["measures"] not in same:
        raise NotCalculatedError(
            Problem(f"{key} is a class of {entry['measures']} instruments, not of {measures}", value=name)
        )
    return {**entry, "name": key}


def statement(instrument: Instrument) -> Statement:
    """What an instrument promises: its stated accuracy, or else its class.

    Raises:
        NotCalculatedError: neither is stated, the class is unknown, or a share of the span has no span.
    """
    resolved = instrument.resolved
    accuracy = (resolved.accuracy_absolute, resolved.accuracy_of_reading, resolved.accuracy_of_span)
    span, end = resolved.span or 0.0, resolved.range_high or 0.0
    if any(part is not None for part in accuracy):
        absolute, of_reading, of_span = (part or 0.0 for part in accuracy)
        found = Statement(absolute, of_reading, of_span, span=span, end=end, source="stated accuracy", mark="stated")
    elif instrument.class_ is not None:
        entry = instrument_class(instrument.class_, instrument.measures)
        numbers = {k: float(v) for k, v in entry.items() if isinstance(v, int | float)}
        found = Statement(**numbers, span=span, end=end, source=entry["source"], mark=entry["mark"])
    else:
        raise NotCalculatedError("neither accuracy nor class of the instrument is stated")
    if found.of_span and not span:
        raise NotCalculatedError("a share of the span needs both ends of the scale: write from and to")
    if found.of_end and not end:
        raise NotCalculatedError("this class needs the upper end of the scale: write to")
    return found


def instrument_budget(
    instrument: Instrument,
    key: str,
    value: float,
    barometric: float,
    on: dt.date | None = None,
    samples: Sequence[float] | None = None,
    *,
    name: str = "instrument",
    barometric_standard: float | None = None,
    names: Mapping[str, Quantity] = NOMENCLATURE,
) -> Budget:
    """Uncertainty of one reading of quantity `key` (a nomenclature key) with value `value` in SI.

    Largest permissible errors are rectangular (JCGM 100, 4.3.7), a resolution is rectangular over one step (F.2.2.1),
    the spread of samples is type A (4.2.3). A gauge counts from the air pressure `barometric` (Pa), whose own standard
    uncertainty in Pa is `barometric_standard` (from the library where None) and is shared by all gauges. A matched
    pair shares its class error, so that it cancels in a difference. A stated drift per year counts from the
    calibration to the day `on`; nothing is assumed where it is not stated. `name` is the id of the instrument, `names`
    the nomenclature of the system.

    Raises:
        NotCalculatedError: the statement of the instrument is incomplete, or it measures something else.
    """
    kind = NOMENCLATURE[key].kind
    label = names[key].words
    if instrument.resolved.kind is not kind:
        raise NotCalculatedError(f"{name} measures {instrument.measures}; {label} is a {kind.value}")
    gauge = instrument.resolved.reference is Reference.GAUGE
    found = statement(instrument)
    shown = _as_shown(value, kind, barometric if gauge else 0.0)
    parts = [_error(found, shown, key, name, instrument.matched_pair)]
    parts += _place(instrument, key, name)
    if instrument.resolved.resolution:
        parts.append(_resolution(instrument.resolved.resolution, key, name))
    if gauge:
        parts.append(barometer_component(barometric_standard))
    if instrument.resolved.drift_per_year and instrument.calibrated_on and on:
        parts.append(_drift(instrument.resolved.drift_per_year, instrument.calibrated_on, on, key, name))
    if samples is not None and len(samples) > 1:
        parts.append(replace(spread_of(samples, f"spread of samples, {key}", f"{key}: spread"), of=key))
    return Budget(tuple(parts), tuple(_warnings(instrument, name, value - (barometric if gauge else 0.0), on)))


def assumed_budget(
    key: str,
    value: float,
    barometric: float,
    samples: Sequence[float] | None = None,
    reason: str = "not stated",
    names: Mapping[str, Quantity] = NOMENCLATURE,
) -> Budget:
    """Uncertainty of a reading whose instrument is not stated: what is usual, shown as assumed, with a warning.

    What was counted or timed (`COUNTED`) has no instrument and an empty budget.

    Raises:
        NotCalculatedError: nothing usual is known for this kind of quantity.
    """
    kind = NOMENCLATURE[key].kind
    if key in COUNTED:
        return Budget()
    usual = kind is not Kind.RATIO or key.endswith("relative_humidity")
    entry = library()["not_stated"].get(_WORD_OF_KIND.get(kind)) if usual else None
    label = names[key].words
    if entry is None:
        raise NotCalculatedError(
            f"the instrument for {label} is {reason}, and nothing usual is known for a {kind.value}"
        )
    numbers = {k: float(entry[k]) for k in ("absolute", "of_reading", "of_span", "span") if k in entry}
    found = Statement(**numbers, source=entry["source"], mark=entry["mark"])
    gauge = kind is Kind.PRESSURE
    remedy = library()["remedies"]["unknown"]
    error = _error(found, _as_shown(value, kind, barometric if gauge else 0.0), key, "assumed instrument", False)
    parts = [replace(error, remedy=remedy)]
    if entry.get("clamped_on"):
        parts.append(_extra("clamped_on", key, f"{key}: clamped on the pipe"))
    if "resolution" in entry:
        parts.append(_resolution(float(entry["resolution"]), key, "assumed instrument"))
    if gauge:
        parts.append(barometer_component(None))
    if samples is not None and len(samples) > 1:
        parts.append(replace(spread_of(samples, f"spread of samples, {key}", f"{key}: spread"), of=key))
    return Budget(
        tuple(parts), (f"{label}: the instrument is {reason}; its uncertainty is assumed ({entry['source']})",)
    )


def measure(
    reading: Reading,
    instruments: Mapping[str, Instrument],
    barometric: float,
    on: dt.date | None = None,
    barometric_standard: float | None = None,
    *,
    names: Mapping[str, Quantity] = NOMENCLATURE,
) -> Measured:
    """A reading with its budget; an instrument that is not stated, or not well enough, is assumed with a warning.

    Raises:
        NotCalculatedError: the instrument measures another kind of quantity, or nothing usual is known.
    """
    samples = reading.samples or None
    instrument = instruments.get(reading.instrument) if reading.instrument else None
    if instrument is None or reading.instrument is None:
        budget = assumed_budget(reading.key, reading.value, barometric, samples, names=names)
        return Measured(reading.key, reading.value, budget)
    try:
        statement(instrument)
    except NotCalculatedError as error:
        reason = f"not stated well enough ({reading.instrument}: {error.problems[0].message})"
        budget = assumed_budget(reading.key, reading.value, barometric, samples, reason, names)
        return Measured(reading.key, reading.value, budget)
    budget = instrument_budget(
        instrument, reading.key, reading.value, barometric, on, samples,
        name=reading.instrument, barometric_standard=barometric_standard, names=names,
    )  # fmt: skip
    return Measured(reading.key, reading.value, budget)


def barometer_component(standard: float | None) -> Component:
    """What the air pressure adds to every reading of a gauge; one cause for all of them. `standard` in Pa."""
    entry = library()["extras"]["barometer"]
    if standard is None:
        return Component(
            "air pressure at the site", float(entry["standard"]), source=entry["source"], mark=entry["mark"],
            cause=BAROMETER, of="barometric_pressure", remedy=entry["remedy"],
        )  # fmt: skip
    return Component(
        "air pressure at the site", standard, source="reading of a barometer", cause=BAROMETER, of="barometric_pressure"
    )


def _error(found: Statement, shown: float, key: str, name: str, matched: bool) -> Component:
    remedies = library()["remedies"]
    remedy = remedies["scale"] if found.of_span else remedies["error"]
    if not matched and NOMENCLATURE[key].kind is Kind.TEMPERATURE and NOMENCLATURE[key].key.startswith("heat_"):
        remedy = f"{remedy}, or {remedies['matched']}"
    return Component(
        f"error of {name}", found.limit(shown) / _ROOT_3, "rectangular", source=found.source, mark=found.mark,
        cause=f"{name}: error" if matched else f"{key}: error of {name}", of=key, remedy=remedy,
    )  # fmt: skip


def _place(instrument: Instrument, key: str, name: str) -> Iterator[Component]:
    if instrument.clamped_on:
        yield _extra("clamped_on", key, f"{key}: {name} clamped on the pipe")
    if instrument.matched_pair:
        yield _extra("matched_pair", key, f"{key}: what comparing {name} leaves")


def _extra(which: str, key: str, cause: str) -> Component:
    entry = library()["extras"][which]
    name = cause.partition(": ")[2]
    return Component(
        name, float(entry["limit"]) / _ROOT_3, "rectangular", source=entry["source"], mark=entry["mark"],
        cause=cause, of=key, remedy=entry["remedy"],
    )  # fmt: skip


def _resolution(step: float, key: str, name: str) -> Component:
    return Component(
        f"resolution of {name}", step / _ROOT_12, "rectangular", source="JCGM 100:2008, F.2.2.1", mark="standard",
        cause=f"{key}: resolution of {name}", of=key, remedy=library()["remedies"]["resolution"],
    )  # fmt: skip


def _drift(per_year: float, calibrated: dt.date, on: dt.date, key: str, name: str) -> Component:
    years = max(0.0, (on - calibrated).days / _DAYS_A_YEAR)
    return Component(
        f"drift of {name}", per_year * years / _ROOT_3, "rectangular", source="stated drift per year", mark="stated",
        cause=f"{key}: drift of {name}", of=key, remedy="calibrate it again before the visit",
    )  # fmt: skip


def _warnings(instrument: Instrument, name: str, counted: float, on: dt.date | None) -> Iterator[str]:
    if on is not None and instrument.calibrated_until is not None and on > instrument.calibrated_until:
        until = instrument.calibrated_until.isoformat()
        yield f"{name}: its calibration ended on {until}, before the reading of {on.isoformat()}"
    if instrument.calibrated_until is None and instrument.calibrated_on is None:
        yield f"{name}: no calibration is stated"
    resolved = instrument.resolved
    low, high = resolved.range_low, resolved.range_high
    if low is not None and high is not None and not low <= counted <= high:
        yield f"{name}: the reading lies outside its scale"


def _as_shown(value: float, kind: Kind, zero: float) -> float:
    """The number as the instrument counts it: °C, or Pa above the air pressure for a gauge."""
    return value - _ICE if kind is Kind.TEMPERATURE else value - zero


def _squeeze(name: str) -> str:
    return "".join(name.lower().split())
