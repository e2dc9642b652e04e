"""How a number is shown to a person: unit and digits by kind, metric or US; pressures say gauge or absolute."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, replace
from typing import Self

from commission.quantities.kinds import FLOWS, Kind
from commission.quantities.nomenclature import NOMENCLATURE, Quantity
from commission.quantities.sizes import UnitSystem, by_size
from commission.quantities.units import Reference, Unit, find_unit

_SHOWN: dict[Kind, tuple[tuple[str, int], tuple[str, int]]] = {
    Kind.TEMPERATURE: (("°C", 1), ("°F", 1)),
    Kind.TEMPERATURE_DIFFERENCE: (("K", 1), ("°F difference", 1)),
    Kind.PRESSURE: (("bar g", 2), ("psig", 1)),
    Kind.PRESSURE_DIFFERENCE: (("kPa", 1), ("psi", 2)),
    Kind.POWER: (("kW", 2), ("kW", 2)),
    Kind.HEAT_FLOW: (("kW", 2), ("kBtu/h", 1)),
    Kind.ENERGY: (("kWh", 2), ("kWh", 2)),
    Kind.MASS: (("kg", 2), ("lb", 2)),
    Kind.VOLUME: (("L", 1), ("US gal", 2)),
    Kind.LENGTH: (("m", 2), ("ft", 1)),
    Kind.AREA: (("m2", 1), ("ft2", 0)),
    Kind.VOLUME_FLOW: (("m3/h", 0), ("cfm", 0)),
    Kind.LIQUID_FLOW: (("m3/h", 0), ("gpm", 0)),
    Kind.MASS_FLOW: (("kg/h", 1), ("lb/h", 1)),
    Kind.CONDUCTANCE: (("W/K", 0), ("Btu/h °F", 0)),
    Kind.CURRENT: (("A", 1), ("A", 1)),
    Kind.VOLTAGE: (("V", 0), ("V", 0)),
    Kind.SPEED: (("rpm", 0), ("rpm", 0)),
    Kind.VELOCITY: (("m/s", 1), ("fpm", 0)),
    Kind.DURATION: (("min", 0), ("min", 0)),
    Kind.RATIO: (("%", 0), ("%", 0)),
    Kind.DENSITY: (("kg/m3", 3), ("lb/ft3", 4)),
    Kind.SPECIFIC_ENTHALPY: (("kJ/kg", 1), ("Btu/lb", 1)),
    Kind.SOUND_LEVEL: (("dB(A)", 0), ("dB(A)", 0)),
}

JSON_UNIT: dict[Kind, str] = {Kind.TEMPERATURE: "°C", Kind.PRESSURE: "Pa"}
"""Units of `--json` where they are not the SI unit of the kind: °C, and Pa absolute."""


def _unit(name: str, kind: Kind) -> Unit:
    unit = find_unit(name, kind)
    if unit is None:
        raise ValueError(f"{name} is not a unit of {kind}")
    return unit


def _places(usual: int, kind: Kind, shown: float) -> int:
    """Digits behind the point: a volume flow runs from a litre of water a minute to air by the thousand m3/h, and keeps
    three figures."""
    if kind not in FLOWS:
        return usual
    return next((places for least, places in ((100.0, 0), (10.0, 1), (1.0, 2)) if abs(shown) >= least), 3)


@dataclass(frozen=True, slots=True)
class Display:
    """Shows quantities to a person at one site: their names, and SI values as numbers with units.

    `barometric_pressure` in Pa turns absolute pressures into the gauge pressures that instruments show. `quantities` is
    the nomenclature of the system in question, which calls its media by their names; that of any system where none is.
    `chosen` are the kinds shown in another unit than the usual one, with its digits (see `fitting`).
    """

    system: UnitSystem
    barometric_pressure: float
    quantities: Mapping[str, Quantity] = field(default_factory=lambda: NOMENCLATURE, repr=False)
    chosen: tuple[tuple[Kind, str, int], ...] = ()

    def fitting(self, kind: Kind, *values: float) -> Self:
        """The same display with the unit of `kind` in which the largest of `values` (SI) is best read.

        A number alone, as in the column of a table, keeps the usual unit; a value that stands with its unit, or a row
        of its own, takes the one that fits its size: 110 W and not 0.11 kW.
        """
        found = by_size(kind, max(map(abs, values)), self.system) if values and self._own(kind) is None else None
        return self if found is None else replace(self, chosen=(*self.chosen, (kind, *found)))

    def asking(self, key: str) -> Self:
        """The same display with the unit in which a quantity of the nomenclature is asked for and written down."""
        quantity = self.quantities[key]
        if quantity.asked_in is None or self._own(quantity.kind) is not None:
            return self
        return replace(self, chosen=(*self.chosen, (quantity.kind, *quantity.asked_in)))

    def _own(self, kind: Kind) -> tuple[str, int] | None:
        return next(((unit, digits) for one, unit, digits in self.chosen if one is kind), None)

    def unit_and_digits(self, kind: Kind) -> tuple[str, int]:
        """The unit shown for `kind` and the digits behind the point."""
        if kind is Kind.NUMBER:
            return "", 2
        return self._own(kind) or _SHOWN[kind][0 if self.system == "metric" else 1]

    def _places(self, kind: Kind, shown: float) -> int:
        """Digits behind the point of a shown number: those of the unit chosen, or those usual for the kind."""
        return self.unit_and_digits(kind)[1] if self._own(kind) else _places(self.unit_and_digits(kind)[1], kind, shown)

    def convert(self, value: float, kind: Kind) -> float:
        """An SI value in the unit shown; an absolute pressure becomes gauge where the unit is gauge."""
        if kind is Kind.NUMBER:
            return value
        unit = _unit(self.unit_and_digits(kind)[0], kind)
        if unit.reference is Reference.GAUGE:
            value = value - self.barometric_pressure
        return (value - unit.offset) / unit.factor

    def number(self, value: float, kind: Kind, digits: int | None = None) -> str:
        """The number alone, in the unit shown, with a true minus sign and no negative zero."""
        shown = self.convert(value, kind)
        places = self._places(kind, shown) if digits is None else digits
        text = f"{shown:.{places}f}"
        if float(text) == 0:
            text = text.lstrip("-")
        return text.replace("-", "−")

    def text(self, value: float, kind: Kind, digits: int | None = None) -> str:
        """Number and unit, such as `−8.0 °C` or `2.31 bar g`; without `digits` in the unit that fits its size."""
        shown = self.fitting(kind, value) if digits is None else self
        return f"{shown.number(value, kind, digits)} {pretty(shown.unit_and_digits(kind)[0])}".rstrip()

    def between(self, low: float, high: float, kind: Kind, digits: int | None = None) -> str:
        """Two ends and their unit, such as `0.8 to 4.0 %`."""
        shown = self.fitting(kind, low, high) if digits is None else self
        first, last = (shown.number(end, kind, digits) for end in (low, high))
        return f"{first} to {last} {pretty(shown.unit_and_digits(kind)[0])}".rstrip()

    def spread(self, value: float, kind: Kind, digits: int | None = None) -> str:
        """The size of an uncertainty or deviation of this kind, number alone: an offset never applies."""
        factor = 1.0 if kind is Kind.NUMBER else _unit(self.unit_and_digits(kind)[0], kind).factor
        places = self._places(kind, 10 * value / factor) if digits is None else digits
        text = f"{value / factor:.{places}f}"
        if float(text) == 0:
            text = text.lstrip("-")
        return text.replace("-", "−")

    def spread_unit(self, kind: Kind) -> str:
        """The unit of `spread`: K for temperatures, bar for gauge pressures."""
        name = self.unit_and_digits(kind)[0]
        if kind is Kind.TEMPERATURE:
            name = "K" if self.system == "metric" else "°F difference"
        if kind is Kind.PRESSURE:
            name = "bar" if self.system == "metric" else "psi"
        return pretty(name)

    @property
    def absolute_unit(self) -> str:
        """The unit of `absolute`: bar a or psia."""
        return "bar a" if self.system == "metric" else "psia"

    def absolute(self, pressure: float) -> float:
        """A pressure (Pa absolute) in the site's unit, counted from vacuum and not from the air as a gauge does."""
        return pressure / _unit(self.absolute_unit, Kind.PRESSURE).factor

    def of(self, key: str, value: float) -> str:
        """Number and unit of a quantity of the nomenclature."""
        return self.text(value, self.quantities[key].kind)

    def measured(self, key: str, value: float, step: float | None) -> str:
        """Number and unit of a reading, with the digits of the smallest `step` (SI) that its instrument shows."""
        kind = self.quantities[key].kind
        if not step or kind is Kind.NUMBER:
            return self.of(key, value)
        shown = self.fitting(kind, value)
        size = step / _unit(shown.unit_and_digits(kind)[0], kind).factor
        return shown.text(value, kind, max(0, -math.floor(math.log10(size) + 1e-9)))

    def label(self, key: str) -> str:
        """What a quantity of the nomenclature is called here, as the head of a line."""
        return self.quantities[key].label

    def words(self, key: str) -> str:
        """The same inside a sentence."""
        return self.quantities[key].words

    def short(self, key: str) -> str:
        """The label of a condition beside its value in °C: `Outdoor air` where it enters, `Heating water outlet`."""
        return self.label(key).removesuffix(" temperature").replace(" air inlet", " air")

    def medium(self, side: str) -> str:
        """What the medium of `heat_source` or `heat_sink` is called here, as a label."""
        return self.label(f"{side}_flow").removesuffix(" flow")

    def kind(self, key: str) -> Kind:
        """The kind in which a quantity of the nomenclature is shown here."""
        return self.quantities[key].kind


def limits_in_words(low: float | None, high: float | None, show: Callable[[float], str]) -> str:
    """`at least 3.20 kW and at most 3.60 kW`, or the one of them that there is; empty where there is none."""
    found = [f"at least {show(low)}"] if low is not None else []
    found += [f"at most {show(high)}"] if high is not None else []
    return " and ".join(found)


def pretty(unit: str) -> str:
    """A unit as printed: m³/h for m3/h; a difference in °F says so without the word."""
    return unit.replace("m3", "m³").replace("m2", "m²").replace("ft3", "ft³").replace("ft2", "ft²")


def json_value(value: float, kind: Kind) -> tuple[float, str]:
    """Value and unit for `--json`: °C, K, Pa absolute, W, kg/s."""
    from commission.quantities.kinds import SI_UNIT

    if kind is Kind.TEMPERATURE:
        return value - 273.15, "°C"
    return value, JSON_UNIT.get(kind, SI_UNIT[kind])
