"""The meaning of a description: what no single field can see. Plain functions, each yielding the problems it finds."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import islice

from commission.description.checking import MAX_PROBLEMS
from commission.description.instruments import MEASURED, read_end
from commission.description.looked import Looked
from commission.description.meaning_of_systems import CHECKS_OF_A_SYSTEM
from commission.description.model import Instrument, Part
from commission.description.positions import KeyPath
from commission.errors import InputError, Problem
from commission.quantities import Pressure, Reference, parse


def problems_of_meaning(looked: Looked) -> list[Problem]:
    """All problems that the second pass can see, or more than a person can read."""
    return list(islice(_all(looked), MAX_PROBLEMS + 1))


def _all(looked: Looked) -> Iterator[Problem]:
    for check in (_site, _instruments, _pressures, _refrigerant_figures):
        yield from check(looked)
    for identity, system in looked.plant.systems.items():
        for of_system in CHECKS_OF_A_SYSTEM:
            yield from of_system(looked, ("systems", identity), system)


def _site(looked: Looked) -> Iterator[Problem]:
    site = looked.plant.plant
    at: KeyPath = ("plant", "climate")
    dry, wet, winter = site.climate.summer_dry_bulb, site.climate.summer_wet_bulb, site.climate.winter_dry_bulb
    if dry is not None and wet is not None and wet > dry:
        yield looked.positions.problem((*at, "summer_wet_bulb"), "a wet bulb cannot be above its dry bulb")
    if dry is not None and winter is not None and winter > dry:
        yield looked.positions.problem((*at, "winter_dry_bulb"), "winter cannot be warmer than summer")
    stated = site.barometric_pressure
    if stated is not None:
        path: KeyPath = ("plant", "barometric_pressure")
        if stated.reference is Reference.GAUGE:
            yield looked.positions.problem(path, "the pressure of the air is absolute", allowed="such as 977 hPa a")
        elif not 40e3 < stated.pascal < 115e3:
            yield looked.positions.problem(path, "this cannot be the pressure of the air", allowed="400 to 1150 hPa a")


def _instruments(looked: Looked) -> Iterator[Problem]:
    for identity, instrument in looked.plant.instruments.items():
        at: KeyPath = ("instruments", identity)
        yield from _scale(looked, at, instrument)
        yield from _small_parts(looked, at, instrument)
        done, until = instrument.calibrated_on, instrument.calibrated_until
        if done and until and done > until:
            yield looked.positions.problem((*at, "calibrated_until"), "the calibration ends before it was done")


def _scale(looked: Looked, at: KeyPath, instrument: Instrument) -> Iterator[Problem]:
    kind = MEASURED[instrument.measures][0]
    ends: list[tuple[float, Reference | None]] = []
    for key, text in (("from", instrument.from_), ("to", instrument.to)):
        if text is not None:
            end, problems = looked.quantity((*at, key), lambda text=text: read_end(text, kind))  # type: ignore[misc]  # a lambda's default has no type
            yield from problems
            ends += [end] if end is not None else []
    if len(ends) == 2 and ends[0][1] is not ends[1][1]:
        yield looked.positions.problem((*at, "to"), "both ends of the scale must be gauge, or both absolute")
    elif len(ends) == 2 and ends[0][0] >= ends[1][0]:
        yield looked.positions.problem((*at, "to"), "the upper end of the scale must be above the lower end")
    if instrument.accuracy and instrument.accuracy.of_span is not None and None in (instrument.from_, instrument.to):
        yield looked.positions.problem(
            (*at, "accuracy", "of_span"), "a share of the span needs both ends of the scale", allowed="from: and to:"
        )


def _small_parts(looked: Looked, at: KeyPath, instrument: Instrument) -> Iterator[Problem]:
    """Fixed error, resolution and drift are differences of what the instrument measures."""
    difference = MEASURED[instrument.measures][1]
    texts = (
        ((*at, "accuracy", "absolute"), instrument.accuracy.absolute if instrument.accuracy else None),
        ((*at, "resolution"), instrument.resolution),
        ((*at, "drift_per_year"), instrument.drift_per_year),
    )
    for path, text in texts:
        if text is None:
            continue
        size, problems = looked.quantity(path, lambda text=text: parse(text, difference))  # type: ignore[misc]  # as above
        yield from problems
        if size is not None and size <= 0:
            yield looked.positions.problem(path, "this must be more than nothing")


def _pressures(looked: Looked) -> Iterator[Problem]:
    """No pressure lies below a perfect vacuum at the barometric pressure of the site."""
    for path, pressure in _walk_pressures((), looked.plant):
        if pressure.absolute(looked.barometric_pressure) < 0:
            lowest = f"{-looked.barometric_pressure / 1e5:.3f} bar g and above"
            yield looked.positions.problem(path, "this is below a perfect vacuum", allowed=lowest)


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


def _refrigerant_figures(looked: Looked) -> Iterator[Problem]:
    """Figures that replace those of the register: the register itself says what is wrong with them."""
    if not looked.plant.refrigerants:
        return
    from commission.properties.register import register

    for name, figures in looked.plant.refrigerants.items():
        for key, figure in figures.items():
            try:
                register({name: {key: figure.model_dump(exclude_none=True)}})
            except InputError as error:
                for problem in error.problems:
                    yield looked.positions.problem(
                        ("refrigerants", name, key),
                        problem.message,
                        allowed=problem.allowed,
                        nearest=problem.nearest,
                        value=problem.value,
                    )
