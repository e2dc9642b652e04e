"""Read a quantity as a person writes it: number, unit, and for pressures gauge or absolute."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass

from commission.errors import InputError, Problem, nearest, shorten
from commission.quantities.kinds import Kind
from commission.quantities.units import Reference, find_unit, kinds_of, known_spellings


@dataclass(frozen=True, slots=True)
class Pressure:
    """A pressure as written: pascal, and what it is counted from. Gauge becomes absolute at the site's barometer."""

    pascal: float
    reference: Reference

    def absolute(self, barometric_pressure: float) -> float:
        """Pascal absolute, with the barometric pressure of the site in Pa."""
        return self.pascal + barometric_pressure if self.reference is Reference.GAUGE else self.pascal


class QuantityError(InputError):
    """A text is not a quantity of the wanted kind; its one problem says what to write instead."""


MAX_LENGTH = 200
"""Longest text that is read as a quantity; the longest sensible one has about thirty characters."""

_NUMBER = re.compile(r"([+\-−–]?) ?([0-9]+(?:[.,][0-9]+)?|[.,][0-9]+)((?:[eE][+-]?[0-9]{1,3})?) *(.*)")
_SPACES = dict.fromkeys(map(ord, "\u00a0\u202f\u2009\u2007\u2002\u2003"), " ")
"""No-break, thin and figure spaces, which good typography puts between number and unit."""

_HINTS: dict[tuple[Kind, str], str] = {
    (Kind.HEAT_FLOW, "ton"): "a ton can be a mass too; write refrigeration tons (12,000 Btu/h each)",
    (Kind.HEAT_FLOW, "tons"): "a ton can be a mass too; write refrigeration tons (12,000 Btu/h each)",
    (Kind.HEAT_FLOW, "mbtu/h"): "MBtu/h can mean thousand or million; write MBH or kBtu/h, or MMBtu/h",
    (Kind.HEAT_FLOW, "mbtuh"): "MBtuh can mean thousand or million; write MBH or kBtu/h, or MMBtu/h",
    (Kind.POWER, "kva"): "kVA is apparent power; the electric power in kW is wanted here",
    (Kind.PRESSURE, "inhg"): "say what it is counted from: inHg vacuum (below the air) or inHg a (absolute)",
    (Kind.PRESSURE, "mmhg"): "say what it is counted from: mmHg a (absolute)",
    (Kind.MASS, "ton"): "there are several tons; write kg or lb",
    (Kind.MASS, "tons"): "there are several tons; write kg or lb",
    (Kind.MASS, "t"): "write the mass in kg",
    (Kind.VOLUME, "gal(uk)"): "write the volume in L or US gal",
}
"""What to write instead of a spelling that does not say one thing only."""

_EXAMPLE: dict[Kind, str] = {
    Kind.TEMPERATURE: "-8 °C or 17.6 °F",
    Kind.TEMPERATURE_DIFFERENCE: "6 K or 10.8 °F difference",
    Kind.PRESSURE: "24 bar g, 25 bar a, 350 psig or 364.7 psia",
    Kind.PRESSURE_DIFFERENCE: "120 Pa or 0.5 in w.g.",
    Kind.POWER: "1.6 kW or 450 W",
    Kind.HEAT_FLOW: "3.4 kW, 11600 Btu/h or 1.8 refrigeration tons",
    Kind.MASS: "0.45 kg or 1.0 lb",
    Kind.VOLUME: "2.5 L or 60 US gal",
    Kind.VOLUME_FLOW: "1200 m3/h, 400 cfm or 24 gpm",
    Kind.LIQUID_FLOW: "1.5 m3/h or 7 gpm",
    Kind.RATIO: "65 %",
    Kind.ENERGY: "1.8 kWh",
    Kind.LENGTH: "2.8 m or 9 ft",
    Kind.AREA: "24 m2 or 260 ft2",
    Kind.MASS_FLOW: "45 kg/h or 100 lb/h",
    Kind.CONDUCTANCE: "450 W/K",
    Kind.CURRENT: "5.2 A",
    Kind.VOLTAGE: "400 V",
    Kind.SPEED: "1450 rpm",
    Kind.VELOCITY: "3 m/s or 500 fpm",
    Kind.DENSITY: "0.038 kg/m3",
    Kind.SPECIFIC_ENTHALPY: "280 kJ/kg",
    Kind.SOUND_LEVEL: "45 dB(A)",
    Kind.DURATION: "20 min or 6 h",
}


def _fail(text: str, kind: Kind, message: str, near: str | None = None) -> QuantityError:
    return QuantityError(Problem(message, value=text, allowed=describe(kind), nearest=near))


def describe(kind: Kind) -> str:
    """What may stand where this kind of quantity is wanted, with examples."""
    if kind is Kind.NUMBER:
        return "a plain number, such as 3.2"
    article = "an" if kind.value[0] in "aeiou" else "a"
    return f"{article} {kind.value}, for example {_EXAMPLE[kind]}"


def parse_number(text: str) -> tuple[float, str]:
    """The number at the start of `text` and what follows it.

    A comma is a decimal mark only where it cannot group digits: `0,45` is 0.45, `1,200` is refused.

    Raises:
        QuantityError: no finite number stands there, or its comma is ambiguous.
    """
    if len(text) > MAX_LENGTH:
        raise QuantityError(Problem("this is too long to be a number with a unit", value=text))
    plain = text.translate(_SPACES).strip()
    match = _NUMBER.fullmatch(plain)
    if match is None or not plain.isprintable():
        raise QuantityError(Problem(_no_number(plain), value=text))
    sign, digits, exponent, rest = match.groups()
    if "," in digits and len(digits.split(",")[1]) == 3:
        raise QuantityError(
            Problem("a comma before three digits can mean thousands or decimals; write 1200 or 1.2 plainly", value=text)
        )
    fault = _after_number(rest)
    if fault:
        raise QuantityError(Problem(fault, value=text))
    number = float(digits.replace(",", ".") + exponent) * (-1.0 if sign in {"-", "−", "–"} else 1.0)
    if not math.isfinite(number):
        raise QuantityError(Problem("the number is too large", value=text))
    return number, rest.strip()


def _no_number(text: str) -> str:
    """Why no number stands at the start of `text`."""
    if not text:
        return "a number is wanted here; nothing is written"
    if text[0] in "<>~≈≤≥±":
        return f"write the number plainly, without {text[0]}"
    if text[0] in "¼½¾⅓⅔⅛⅜⅝⅞":
        return "write a fraction as a decimal, such as 0.5"
    return "a number is wanted here"


def _after_number(rest: str) -> str | None:
    """What is wrong with the text after a number before its unit is looked at."""
    if re.match(r"[-–−…]\s*[0-9.,]|(to|bis|\.\.)\s*[0-9]|±", rest):
        return "write one number, not a range"
    if re.match(r"/\s*[0-9]", rest) or rest[:1] in set("¼½¾⅓⅔⅛⅜⅝⅞"):
        return "write a fraction as a decimal, such as 0.5"
    if re.match(r"1/(min|s)$", rest):
        return None  # revolutions, as in 1450 1/min
    if re.match(r"['’`]?[0-9]|[.,]|[eE][+-]?[0-9]", rest):
        return "write the number without digit grouping, such as 1200 or 1.2"
    return None


def parse(text: str, kind: Kind) -> float:
    """The SI value of `text` as a quantity of `kind` (not for pressures: see `parse_pressure`).

    Raises:
        QuantityError: unit missing, unknown or of another kind, or a temperature below absolute zero.
    """
    if kind is Kind.PRESSURE:
        raise ValueError("a pressure keeps its reference: use parse_pressure")
    return _parse(text, kind)[0]


def parse_pressure(text: str) -> Pressure:
    """A pressure with its reference.

    Raises:
        QuantityError: unit missing or unknown, neither gauge nor absolute is said, or below a perfect vacuum.
    """
    value, reference = _parse(text, Kind.PRESSURE)
    assert reference is not None
    return Pressure(value, reference)


def _parse(text: str, kind: Kind) -> tuple[float, Reference | None]:
    try:
        number, spelling = parse_number(text)
    except QuantityError as error:
        raise _fail(text, kind, error.problems[0].message) from None
    if not spelling:
        if kind is Kind.NUMBER:
            return number, None
        raise _fail(text, kind, "a bare number has no meaning here; write its unit")
    unit = find_unit(spelling, kind)
    if unit is not None:
        value = unit.factor * number + unit.offset
        if value < 0 and (kind is Kind.TEMPERATURE or unit.reference is Reference.ABSOLUTE):
            limit = "absolute zero" if kind is Kind.TEMPERATURE else "a perfect vacuum"
            raise _fail(text, kind, f"this is below {limit}")
        return value, unit.reference
    message, near = _explain_unit(spelling, number, kind)
    raise _fail(text, kind, message, near)


def _explain_unit(spelling: str, number: float, kind: Kind) -> tuple[str, str | None]:
    """Why this unit does not do here, what to write, and the nearest spelling where the message names none."""
    others = kinds_of(spelling)
    shown = shorten(spelling, 40)
    if "Â" in spelling or "â" in spelling:
        return "the unit is garbled; save the file in the encoding UTF-8 and write it again", None
    hint = _HINTS.get((kind, "".join(spelling.casefold().split())))
    if hint:
        return hint, None
    if kind is Kind.PRESSURE and Kind.PRESSURE_DIFFERENCE in others:
        gap = "" if spelling.casefold() == "psi" else " "
        return f"say gauge or absolute: {number:g} {shown}{gap}g or {number:g} {shown}{gap}a", None
    if kind is Kind.TEMPERATURE_DIFFERENCE and Kind.TEMPERATURE in others:
        unit = find_unit(spelling, Kind.TEMPERATURE)
        word = "K" if unit is not None and unit.name == "°C" else "°F difference"
        return f"a temperature difference is meant here, not a temperature; write {number:g} {word}", None
    if kind is Kind.TEMPERATURE and Kind.TEMPERATURE_DIFFERENCE in others:
        return f"{shown} is a temperature difference here; write a temperature in °C or °F", None
    if kind is Kind.NUMBER:
        return f"a plain number is wanted here, without {shown!r}", None
    if others:
        return f"{shown!r} is a unit of {others[0].value}; a {kind.value} is wanted here", None
    return f"{shown!r} is not a unit of {kind.value} that is known here", nearest(spelling, known_spellings(kind))
