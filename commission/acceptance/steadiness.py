"""Whether the plant stood still enough for its readings to count, by limits that are data."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Any, Literal

from commission.acceptance.instruments import Reading
from commission.quantities import NOMENCLATURE, Kind, Quantity

CYCLES = "whole_cycles"
_MEDIUM = ("heat_source_inlet_temperature", "heat_source_outlet_temperature", "heat_sink_inlet_temperature",
           "heat_sink_outlet_temperature")  # fmt: skip


@dataclass(frozen=True, slots=True)
class Steadiness:
    """One check of steadiness. `steady` is None where nothing shows it either way; `text` says it to a person.

    `key` is a nomenclature key, `since_start`, `since_defrost` or `whole_cycles`; `largest` and `limit` are in
    the SI unit of `kind`.
    """

    key: str
    largest: float | None
    limit: float
    kind: Kind
    steady: bool | None
    text: str


@dataclass(frozen=True, slots=True)
class WholeCycles:
    """Readings that are means over whole cycles: `count` of them in `seconds`, each from one start of the compressor,
    or one defrost, to the next (`by`)."""

    count: int
    seconds: float
    by: Literal["start", "defrost"]


@cache
def library() -> Mapping[str, Any]:
    """The sets of limits of `steadiness.yaml` by name."""
    import yaml

    text = (files("commission.acceptance") / "steadiness.yaml").read_text(encoding="utf-8")
    data: Mapping[str, Any] = yaml.safe_load(text)
    return data


def steadiness(
    readings: Iterable[Reading],
    since_start: float | None,
    since_defrost: float | None,
    *,
    limits: str = "site",
    liquid_sides: frozenset[str] = frozenset(),
    defrosts: bool = False,
    cycles: WholeCycles | None = None,
    names: Mapping[str, Quantity] = NOMENCLATURE,
) -> tuple[Steadiness, ...]:
    """All checks of one visit. Times in s; `liquid_sides` holds `source` and `sink` where the medium is a liquid.

    `defrosts`: whether the plant has a defrost at all, so that the time since the last one must be known. With `cycles`
    the readings are means over whole cycles, one sample for each: then enough cycles are wanted, and that they are
    alike, instead of a time since the last start. `names` is the nomenclature of the system.
    """
    chosen = library()[limits]
    if cycles is not None:
        checks = [_cycles(chosen, cycles)]
    else:
        checks = list(_times(chosen, since_start, since_defrost, defrosts))
    for reading in readings:
        one = _spread(reading, chosen, liquid_sides, names)
        if one is not None:
            checks.append(one)
    return tuple(checks)


def _cycles(chosen: Mapping[str, Any], cycles: WholeCycles) -> Steadiness:
    least, hours = int(chosen["cycles"]), float(chosen["cycles_time"]) / 3600.0
    steady = cycles.count >= least or cycles.seconds >= 3600.0 * hours
    number = f"{cycles.count} whole cycle{'' if cycles.count == 1 else 's'}"
    over = "from start to start, while it ran" if cycles.by == "start" else "from defrost to defrost"
    return Steadiness(
        CYCLES, float(cycles.count), float(least), Kind.NUMBER, steady,
        f"{'read' if steady else 'too short:'} as means over {number} ({cycles.seconds / 60.0:.0f} min), {over}; at "
        f"least {least} cycles or {hours:.0f} hours are wanted ({chosen['title']})",
    )  # fmt: skip


def _times(
    chosen: Mapping[str, Any], since_start: float | None, since_defrost: float | None, defrosts: bool
) -> Iterator[Steadiness]:
    wanted = [("since_start", since_start, "the start")]
    if defrosts or since_defrost is not None:
        wanted.append(("since_defrost", since_defrost, "the last defrost"))
    for key, seconds, what in wanted:
        limit = float(chosen[key])
        least = f"at least {limit / 60:.0f} min after {what} are wanted ({chosen['title']})"
        if seconds is None:
            yield Steadiness(key, None, limit, Kind.DURATION, None, f"the time since {what} is not recorded; {least}")
        else:
            steady = seconds >= limit
            said = "read" if steady else "read too early:"
            hint = "" if steady else "; where it never runs so long, take means over whole cycles from a logger"
            text = f"{said} {seconds / 60:.0f} min after {what}; {least}{hint}"
            yield Steadiness(key, seconds, limit, Kind.DURATION, steady, text)


def _spread(
    reading: Reading, chosen: Mapping[str, Any], liquid_sides: frozenset[str], names: Mapping[str, Quantity]
) -> Steadiness | None:
    entry = next((chosen["limits"][c] for c in _classes(reading.key, liquid_sides) if c in chosen["limits"]), None)
    if entry is None or not reading.samples:
        return None
    label = names[reading.key].words
    mean = math.fsum(reading.samples) / len(reading.samples)
    limit = float(entry["individual"]) * (abs(mean) if entry.get("relative") else 1.0)
    kind = NOMENCLATURE[reading.key].kind
    if len(reading.samples) < int(chosen["least_samples"]):
        few = f"{label}: {len(reading.samples)} samples are too few to show that it stood still"
        return Steadiness(reading.key, None, limit, kind, None, few)
    largest = max(abs(x - mean) for x in reading.samples)
    steady = largest <= limit
    verb = "stood still" if steady else "moved more than is allowed"
    return Steadiness(reading.key, largest, limit, kind, steady, f"{label} {verb} ({chosen['title']})")


def _classes(key: str, liquid_sides: frozenset[str]) -> Iterator[str]:
    """Names of limits that a quantity falls under, the most particular first."""
    kind = NOMENCLATURE[key].kind
    side = key.removeprefix("heat_").partition("_")[0]
    liquid = side in liquid_sides
    if key in _MEDIUM:
        if liquid:
            yield "liquid inlet" if "inlet" in key else "liquid outlet"
        yield "medium temperature"
    elif key.endswith("wet_bulb"):
        yield "wet bulb"
    elif key in ("evaporating_temperature", "condensing_temperature"):
        yield "saturation temperature"
    elif kind is Kind.TEMPERATURE:
        yield "refrigerant temperature"
    elif kind is Kind.PRESSURE:
        yield "pressure"
    elif kind in (Kind.POWER, Kind.HEAT_FLOW):
        yield "power"
    elif kind is Kind.VOLUME_FLOW:
        if liquid:
            yield "liquid flow"
        yield "flow"
