"""Readings as written become SI values; every slip is a problem with its place in the record."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field

from commission.description import MEASURED, Conditions, KeyPath, LoadedPlant, Positions, System
from commission.errors import Problem
from commission.errors import nearest as nearest_word
from commission.quantities import NOMENCLATURE, Kind, QuantityError, Reference, parse, parse_pressure
from commission.records.model import Measured
from commission.records.record import SiteReading

BAROMETER = "barometric_pressure"
CONDITION_KEYS: tuple[str, ...] = (*Conditions.model_fields, BAROMETER)
"""What the plant cannot choose; everything else that can be read is a reading."""
LOWEST_BAROMETER, HIGHEST_BAROMETER = 50e3, 110e3
"""Pa; from the highest inhabited places to the deepest mines, a wider range than any weather."""
UNBALANCE_OF: Mapping[str, str] = {"voltage": "voltage_unbalance", "current": "current_unbalance"}


@dataclass(slots=True)
class ReadingsReader:
    """Reads the quantities of one record and keeps all problems found."""

    loaded: LoadedPlant
    system: System | None
    positions: Positions
    problems: list[Problem] = field(default_factory=list)
    barometric_pressure: float = 0.0

    def barometer(self, conditions: Mapping[str, Measured]) -> bool:
        """Find the barometric pressure (Pa) that gauge readings count from; says whether the record measured it."""
        self.barometric_pressure = self.loaded.barometric_pressure
        measured = conditions.get(BAROMETER)
        if measured is None:
            return False
        before = len(self.problems)
        found = self.one(("conditions", BAROMETER), BAROMETER, measured)
        if found is None or len(self.problems) > before:
            return False
        if not LOWEST_BAROMETER <= found.value <= HIGHEST_BAROMETER:
            message = (
                "no barometer on a site shows this; write the absolute pressure of the air, not reduced to sea level"
            )
            self.problem(("conditions", BAROMETER), message, allowed="between 500 mbar a and 1100 mbar a")
            return False
        self.barometric_pressure = found.value
        return True

    def section(self, name: str, written: Mapping[str, Measured], known: tuple[str, ...]) -> dict[str, SiteReading]:
        """All quantities of `conditions` or `readings`, in the order written."""
        found: dict[str, SiteReading] = {}
        for key, measured in written.items():
            path: KeyPath = (name, key)
            if key not in known:
                self.unknown_key(path, key, known)
                continue
            reading = self.one(path, key, measured)
            if reading is not None:
                found[key] = reading
                found |= self.unbalance(reading, written)
        return found

    def unknown_key(self, path: KeyPath, key: str, known: tuple[str, ...]) -> None:
        """A key that does not belong here: the nearest that does, or the section where it belongs."""
        if key in CONDITION_KEYS:
            self.problem(path, f"{key} is a condition of the day; write it under conditions", at_key=True)
        elif key in NOMENCLATURE:
            self.problem(path, f"{key} is something the plant answers with; write it under readings", at_key=True)
        else:
            message = f"{key!r} is not a quantity of the nomenclature"
            self.problem(path, message, nearest=nearest_word(key, known), at_key=True)

    def one(self, path: KeyPath, key: str, measured: Measured) -> SiteReading | None:
        """One quantity in SI; None where nothing usable is written."""
        lists = {"samples": measured.samples, "phases": measured.phases}
        several = {n: [self.si((*path, n, i), key, t) for i, t in enumerate(texts)] for n, texts in lists.items()}
        if measured.samples and measured.phases:
            self.problem(path, "write either samples or phases: which reading belongs to which would not be clear")
            return None
        written = measured.samples or measured.phases
        numbers = [v for v in (*several["samples"], *several["phases"]) if v is not None]
        value = None
        if measured.value is not None:
            at = (*path, "value") if (*path, "value") in self.positions else path
            value = self.si(at, key, measured.value)
            if value is not None and numbers and not min(numbers) <= value <= max(numbers):
                self.problem(at, "this value lies outside the samples it should be the mean of", allowed="leave it out")
        elif not written:
            self.problem(path, "a value with its unit is wanted here, or samples")
        if written and len(numbers) == len(written):
            value = math.fsum(numbers) / len(numbers)
        instrument = self.instrument(path, key, measured)
        if value is None:
            return None
        return SiteReading(
            key,
            value,
            measured.value or f"mean of {len(written)} {'samples' if measured.samples else 'phases'}",
            instrument,
            measured.where,
            tuple(v for v in several["samples"] if v is not None),
            tuple(v for v in several["phases"] if v is not None),
            measured.remark,
        )

    def si(self, path: KeyPath, key: str, text: str) -> float | None:
        """The SI value of a text as this quantity (pressures: Pa absolute); a slip becomes a problem and None."""
        return self.si_of_kind(path, NOMENCLATURE[key].kind, text, of_air=key == BAROMETER)

    def si_of_kind(self, path: KeyPath, kind: Kind, text: str, of_air: bool = False) -> float | None:
        """The SI value of a text of this kind; the pressure of the air itself (`of_air`) cannot be gauge."""
        try:
            if kind is not Kind.PRESSURE:
                return parse(text, kind)
            pressure = parse_pressure(text)
        except QuantityError as error:
            first = error.problems[0]
            self.problem(path, first.message, allowed=first.allowed, nearest=first.nearest)
            return None
        if of_air and pressure.reference is Reference.GAUGE:
            self.problem(path, "the pressure of the air is absolute", allowed="for example 978 mbar a")
            return None
        absolute = pressure.absolute(self.barometric_pressure)
        if absolute < 0.0:
            self.problem(path, "this is below a perfect vacuum")
            return None
        return absolute

    def instrument(self, path: KeyPath, key: str, measured: Measured) -> str | None:
        """The instrument's id as named, or the one that the description gives for this quantity."""
        known = self.loaded.plant.instruments
        named = measured.instrument
        if named is None:
            return self.system.measured_with.get(key) if self.system else None
        at = (*path, "instrument")
        if named not in known:
            allowed = ", ".join(known) or "describe it under instruments in plant.yaml"
            self.problem(at, "no instrument has this name", allowed=allowed, nearest=nearest_word(named, known))
            return None
        kind = MEASURED[known[named].measures][0]
        if kind is not NOMENCLATURE[key].kind:
            fit = [i for i, one in known.items() if MEASURED[one.measures][0] is NOMENCLATURE[key].kind]
            message = f"{named!r} measures {known[named].measures}; {key} is a {NOMENCLATURE[key].kind.value}"
            self.problem(at, message, allowed=", ".join(fit) or "an instrument for it is not described yet")
        return named

    def unbalance(self, reading: SiteReading, written: Mapping[str, Measured]) -> dict[str, SiteReading]:
        """Unbalance of three phases: largest deviation from their mean, over the mean; where it was not written."""
        key = UNBALANCE_OF.get(reading.key)
        if key is None or len(reading.phases) != 3 or key in written or reading.value <= 0.0:
            return {}
        mean = math.fsum(reading.phases) / 3
        share = max(abs(v - mean) for v in reading.phases) / mean
        text = f"from the phases of {reading.key}"
        return {key: SiteReading(key, share, text, None, reading.where)}

    def problem(
        self,
        path: KeyPath,
        message: str,
        *,
        allowed: str | None = None,
        nearest: str | None = None,
        at_key: bool = False,
    ) -> None:
        """Keep one problem."""
        found = self.positions.problem(path, message, allowed=allowed, nearest=nearest, at_key=at_key)
        self.problems.append(found)
