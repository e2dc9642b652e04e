"""Read a quantity as a person writes it: number, unit, and for pressures gauge or absolute."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass

from commission.errors import InputError, Problem, nearest
from commission.quantities.kinds import Kind
from commission.quantities.units import Reference, find_unit, kinds_of, known_spellings, units_of


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


_NUMBER = re.compile(r"\s*([+\-−]?)(\d+(?:[.,]\d+)?|[.,]\d+)((?:[eE][+-]?\d{1,3})?)\s*(.*)", re.DOTALL)
_EXAMPLE: dict[Kind, str] = {
    Kind.TEMPERATURE: "-8 °C or 17.6 °F",
    Kind.TEMPERATURE_DIFFERENCE: "6 K or 10.8 °F difference",
    Kind.PRESSURE: "24 bar g, 25 bar a, 350 psig or 364.7 psia",
    Kind.PRESSURE_DIFFERENCE: "120 Pa or 0.5 in w.g.",
    Kind.POWER: "3.4 kW, 11600 Btu/h or 1.8 refrigeration tons",
    Kind.MASS: "0.45 kg or 1.0 lb",
    Kind.VOLUME: "2.5 L",
    Kind.VOLUME_FLOW: "1200 m3/h or 400 cfm",
    Kind.RATIO: "65 %",
    Kind.NUMBER: "a plain number such as 3.2",
    Kind.DURATION: "20 min or 6 h",
}


def _fail(text: str, kind: Kind, message: str, near: str | None = None) -> QuantityError:
    return QuantityError(Problem(message, value=text, allowed=describe(kind), nearest=near))


def describe(kind: Kind) -> str:
    """What may stand where this kind of quantity is wanted, with examples."""
    example = _EXAMPLE.get(kind) or " or ".join(f"1 {u.name}" for u in units_of(kind)[:3])
    return f"a {kind.value}, for example {example}"


def parse_number(text: str) -> tuple[float, str]:
    """The number at the start of `text` and what follows it.

    A comma is a decimal mark only where it cannot group digits: `0,45` is 0.45, `1,200` is refused.

    Raises:
        QuantityError: no finite number stands there, or its comma is ambiguous.
    """
    match = _NUMBER.fullmatch(text)
    if match is None or not text.isprintable():
        raise QuantityError(Problem("a number is wanted here", value=text))
    sign, digits, exponent, rest = match.groups()
    if "," in digits and len(digits.split(",")[1]) == 3:
        raise QuantityError(
            Problem("a comma before three digits can mean thousands or decimals; write 1200 or 1.2 plainly", value=text)
        )
    if rest[:1] in {",", "."} or rest[:1].isdigit() or re.match(r"[eE][+-]?\d", rest):
        raise QuantityError(Problem("write the number without digit grouping, such as 1200 or 1.2", value=text))
    number = float(digits.replace(",", ".") + exponent) * (-1.0 if sign in {"-", "−"} else 1.0)
    if not math.isfinite(number):
        raise QuantityError(Problem("the number is too large", value=text))
    return number, rest.strip()


def parse(text: str, kind: Kind) -> float:
    """The SI value of `text` as a quantity of `kind` (not for pressures: see `parse_pressure`).

    Raises:
        QuantityError: unit missing, unknown or of another kind.
    """
    if kind is Kind.PRESSURE:
        raise ValueError("a pressure keeps its reference: use parse_pressure")
    return _parse(text, kind)[0]


def parse_pressure(text: str) -> Pressure:
    """A pressure with its reference.

    Raises:
        QuantityError: unit missing or unknown, or neither gauge nor absolute is said.
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
        return unit.factor * number + unit.offset, unit.reference
    raise _fail(text, kind, _explain_unit(spelling, number, kind), nearest(spelling, known_spellings(kind)))


def _explain_unit(spelling: str, number: float, kind: Kind) -> str:
    """Why this unit does not do here, and what to write."""
    others = kinds_of(spelling)
    if kind is Kind.PRESSURE and Kind.PRESSURE_DIFFERENCE in others:
        return f"say gauge or absolute: {number:g} {spelling} g or {number:g} {spelling} a"
    if kind is Kind.TEMPERATURE_DIFFERENCE and Kind.TEMPERATURE in others:
        unit = "K" if "C" in spelling else "°F difference"
        return f"a temperature difference is meant here, not a temperature; write {number:g} {unit}"
    if kind is Kind.TEMPERATURE and Kind.TEMPERATURE_DIFFERENCE in others:
        return f"K is a temperature difference here; write the temperature as {number - 273.15:.2f} °C if you mean it"
    if kind is Kind.NUMBER:
        return f"a plain number is wanted here, without {spelling!r}"
    if others:
        return f"{spelling!r} is a unit of {others[0].value}; a {kind.value} is wanted here"
    return f"{spelling!r} is not a unit of {kind.value} that is known here"
