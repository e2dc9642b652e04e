"""The meaning of a description: what no single field can see. Plain functions, each yielding the problems it finds."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from dataclasses import dataclass
from itertools import pairwise
from typing import TypeVar

from commission.description.assumptions import library, range_problems
from commission.description.instruments import MEASURED, read_end
from commission.description.model import Guarantee, Instrument, Part, Plant, System
from commission.description.positions import KeyPath, Positions
from commission.errors import Problem, nearest
from commission.quantities import NOMENCLATURE, Pressure, QuantityError, Reference, parse

T = TypeVar("T")


@dataclass(frozen=True, slots=True)
class Looked:
    """What the checks look at: the plant, where its parts stand, and the barometric pressure of the site in Pa."""

    plant: Plant
    positions: Positions
    barometric_pressure: float


def problems_of_meaning(looked: Looked) -> list[Problem]:
    """All problems that the second pass can see."""
    found: list[Problem] = []
    for check in (_site, _instruments, _pressures):
        found += check(looked)
    for identity, system in looked.plant.systems.items():
        for of_system in (_assumptions, _spaces, _measured_with, _guarantees, _speeds, _limits, _enough):
            found += of_system(looked, ("systems", identity), system)
    return found


def _site(looked: Looked) -> Iterator[Problem]:
    climate = looked.plant.plant.climate
    at: KeyPath = ("plant", "climate")
    dry, wet, winter = climate.summer_dry_bulb, climate.summer_wet_bulb, climate.winter_dry_bulb
    if dry is not None and wet is not None and wet > dry:
        yield looked.positions.problem((*at, "summer_wet_bulb"), "a wet bulb cannot be above its dry bulb")
    if dry is not None and winter is not None and winter > dry:
        yield looked.positions.problem((*at, "winter_dry_bulb"), "winter cannot be warmer than summer")


def _quantity(looked: Looked, path: KeyPath, read: Callable[[], T]) -> tuple[T | None, list[Problem]]:
    """A value read, or the problem of reading it at its place."""
    try:
        return read(), []
    except QuantityError as error:
        first = error.problems[0]
        return None, [looked.positions.problem(path, first.message, allowed=first.allowed, nearest=first.nearest)]


def _instruments(looked: Looked) -> Iterator[Problem]:
    for identity, instrument in looked.plant.instruments.items():
        yield from _instrument(looked, ("instruments", identity), instrument)


def _instrument(looked: Looked, at: KeyPath, instrument: Instrument) -> Iterator[Problem]:
    kind, difference = MEASURED[instrument.measures]
    ends: list[tuple[float, Reference | None]] = []
    for key, text in (("from", instrument.from_), ("to", instrument.to)):
        if text is not None:
            end, problems = _quantity(looked, (*at, key), lambda text=text: read_end(text, kind))  # type: ignore[misc]
            yield from problems
            ends += [end] if end is not None else []
    if len(ends) == 2 and ends[0][1] is not ends[1][1]:
        yield looked.positions.problem((*at, "to"), "both ends of the scale must be gauge, or both absolute")
    elif len(ends) == 2 and ends[0][0] >= ends[1][0]:
        yield looked.positions.problem((*at, "to"), "the upper end of the scale must be above the lower end")
    accuracy = instrument.accuracy
    small = (
        ((*at, "accuracy", "absolute"), accuracy.absolute if accuracy else None),
        ((*at, "resolution"), instrument.resolution),
        ((*at, "drift_per_year"), instrument.drift_per_year),
    )
    for path, text in small:
        if text is not None:
            size, problems = _quantity(looked, path, lambda text=text: parse(text, difference))  # type: ignore[misc]
            yield from problems
            if size is not None and size <= 0:
                yield looked.positions.problem(path, "this must be more than nothing")
    if accuracy and accuracy.of_span is not None and len(ends) < 2:
        yield looked.positions.problem(
            (*at, "accuracy", "of_span"), "a share of the span needs both ends of the scale", allowed="from: and to:"
        )
    if (
        instrument.calibrated_on
        and instrument.calibrated_until
        and instrument.calibrated_on > instrument.calibrated_until
    ):
        yield looked.positions.problem((*at, "calibrated_until"), "the calibration ends before it was done")


def _pressures(looked: Looked) -> Iterator[Problem]:
    """No pressure lies below a perfect vacuum at the barometric pressure of the site."""
    for path, pressure in _walk_pressures((), looked.plant):
        if pressure.absolute(looked.barometric_pressure) < 0:
            yield looked.positions.problem(
                path,
                "this is below a perfect vacuum",
                allowed=f"{-looked.barometric_pressure / 1e5:.3f} bar g and above",
            )


def _walk_pressures(path: KeyPath, part: object) -> Iterator[tuple[KeyPath, Pressure]]:
    if isinstance(part, Pressure):
        yield path, part
    elif isinstance(part, dict):
        for key, value in part.items():
            yield from _walk_pressures((*path, key), value)
    elif isinstance(part, tuple):
        for number, value in enumerate(part):
            yield from _walk_pressures((*path, number), value)
    elif isinstance(part, Part):
        for name, info in type(part).model_fields.items():
            yield from _walk_pressures((*path, info.alias or name), getattr(part, name))


def _known(looked: Looked, path: KeyPath, word: str | None, known: Iterable[str], what: str) -> Iterator[Problem]:
    """A reference to something that must be described elsewhere in the plant."""
    words = tuple(known)
    if word is not None and word not in words:
        allowed = ", ".join(words) or f"no {what} is described yet"
        yield looked.positions.problem(path, f"no {what} has this id", allowed=allowed, nearest=nearest(word, words))


def _spaces(looked: Looked, at: KeyPath, system: System) -> Iterator[Problem]:
    known = looked.plant.spaces
    yield from _known(looked, (*at, "spaces", "evaporator"), system.spaces.evaporator, known, "space")
    yield from _known(looked, (*at, "spaces", "condensing_unit"), system.spaces.condensing_unit, known, "space")
    for number, space in enumerate(system.spaces.pipework):
        yield from _known(looked, (*at, "spaces", "pipework", number), space, known, "space")
    for side in ("heat_source", "heat_sink"):
        medium = getattr(system, side)
        yield from _known(looked, (*at, side, "space"), medium.space, known, "space")
        brine = medium.medium.endswith("glycol")
        if brine and medium.mass_fraction is None:
            yield looked.positions.problem(
                (*at, side), "a glycol needs its mass_fraction", allowed="mass_fraction: 30 %", at_key=True
            )
        if not brine and medium.mass_fraction is not None:
            yield looked.positions.problem((*at, side, "mass_fraction"), f"{medium.medium} has no glycol fraction")
        if medium.medium != "air" and medium.relative_humidity is not None:
            yield looked.positions.problem((*at, side, "relative_humidity"), "only air has a relative humidity")


def _measured_with(looked: Looked, at: KeyPath, system: System) -> Iterator[Problem]:
    instruments = looked.plant.instruments
    for key, identity in system.measured_with.items():
        path = (*at, "measured_with", key)
        quantity = NOMENCLATURE.get(key)
        if quantity is None:
            yield looked.positions.problem(
                path, f"{key!r} is not a quantity of the nomenclature", nearest=nearest(key, NOMENCLATURE), at_key=True
            )
            continue
        yield from _known(looked, path, identity, instruments, "instrument")
        if identity in instruments:
            kind = MEASURED[instruments[identity].measures][0]
            if kind is not quantity.kind:
                fit = ", ".join(i for i, one in instruments.items() if MEASURED[one.measures][0] is quantity.kind)
                yield looked.positions.problem(
                    path,
                    f"{identity!r} measures {instruments[identity].measures}; {key} is a {quantity.kind.value}",
                    allowed=fit or "an instrument for it is not described yet",
                )


def _guarantees(looked: Looked, at: KeyPath, system: System) -> Iterator[Problem]:
    for number, guarantee in enumerate(system.guarantee):
        yield from _guarantee(looked, (*at, "guarantee", number), guarantee)


def _guarantee(looked: Looked, at: KeyPath, guarantee: Guarantee) -> Iterator[Problem]:
    kind = NOMENCLATURE[guarantee.quantity].kind
    value, problems = _quantity(looked, (*at, "value"), lambda: parse(guarantee.value, kind))
    yield from problems
    if value is not None and value <= 0:
        yield looked.positions.problem((*at, "value"), "a guaranteed value must be more than nothing")
    if not guarantee.at.model_fields_set:
        yield looked.positions.problem((*at, "at"), "a guarantee needs the condition at which it holds")


def _speeds(looked: Looked, at: KeyPath, system: System) -> Iterator[Problem]:
    compressor = system.compressor
    ordered = [
        (key, value)
        for key in ("minimum_speed", "nominal_speed", "maximum_speed")
        if (value := getattr(compressor, key)) is not None
    ]
    for (low_key, low), (high_key, high) in pairwise(ordered):
        if low > high:
            yield looked.positions.problem((*at, "compressor", high_key), f"this is below the {low_key}")


def _limits(looked: Looked, at: KeyPath, system: System) -> Iterator[Problem]:
    controls = system.controls
    low, again = controls.low_pressure_cut_out, controls.low_pressure_cut_in
    if low and again and again.absolute(looked.barometric_pressure) <= low.absolute(looked.barometric_pressure):
        yield looked.positions.problem(
            (*at, "controls", "low_pressure_cut_in"), "the machine must cut in above the pressure at which it cuts out"
        )


def _assumptions(looked: Looked, at: KeyPath, system: System) -> Iterator[Problem]:
    entries = library()
    for key, own in system.assumptions.items():
        path = (*at, "assumptions", key)
        if key not in entries:
            yield looked.positions.problem(
                path, f"{key!r} is not in the assumption list", nearest=nearest(key, entries), at_key=True
            )
        else:
            yield from range_problems(own, entries[key].kind, looked.positions, path)


def _enough(looked: Looked, at: KeyPath, system: System) -> Iterator[Problem]:
    """A rated point says at which condition it holds and at least one result."""
    for number, point in enumerate(system.rated_points):
        path = (*at, "rated_points", number)
        results = [point.cooling_capacity, point.heating_capacity, point.power_input]
        if all(result is None for result in results):
            yield looked.positions.problem(
                path, "a rated point needs a result", allowed="cooling_capacity, heating_capacity, power_input"
            )
