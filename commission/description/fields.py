"""Field types of the description: text as a person writes it becomes SI numbers; nothing else is accepted."""

from __future__ import annotations

import datetime as dt
import re
from collections.abc import Callable
from dataclasses import dataclass
from typing import Annotated, Any

from pydantic import BeforeValidator, WithJsonSchema
from pydantic_core import PydanticCustomError

from commission.quantities import Kind, Pressure, QuantityError, describe, parse, parse_pressure


@dataclass(frozen=True, slots=True)
class Meaning:
    """What a field holds, for the reference of keys: its kind of quantity or its form, in words."""

    kind: Kind | None
    words: str


_WITH_UNIT = r"[0-9].*[^0-9.,\s]"
"""What an editor can check of a quantity: a digit, and something after it that is no digit."""


def _refuse(error: QuantityError) -> PydanticCustomError:
    problem = error.problems[0]
    return PydanticCustomError(
        "quantity",
        "{message}",
        {"message": problem.message, "allowed": problem.allowed, "nearest": problem.nearest, "value": problem.value},
    )


def _text_only(kind: Kind, read: Callable[[str], Any]) -> Callable[[Any], Any]:
    def convert(value: Any) -> Any:
        if not isinstance(value, str):
            raise PydanticCustomError(
                "quantity", "{message}", {"message": f"a {kind.value} is wanted here", "allowed": describe(kind)}
            )
        try:
            return read(value)
        except QuantityError as error:
            raise _refuse(error) from None

    return convert


def _within(kind: Kind, low: str | None, high: str | None, more_than_nothing: bool) -> Callable[[str], float]:
    """A reader that also holds the value to the range in which such a thing can be; the ends are written as a
    person would write them, so that the message can show them."""
    least = parse(low, kind) if low is not None else None
    most = parse(high, kind) if high is not None else None

    def read(text: str) -> float:
        value = parse(text, kind)
        if more_than_nothing and value <= 0:
            raise _out_of_range("this must be more than nothing", describe(kind))
        if (least is not None and value < least) or (most is not None and value > most):
            limits = " ".join(f"{word} {end}" for word, end in (("from", low), ("up to", high)) if end is not None)
            raise _out_of_range("this is outside what can be", limits)
        return value

    return read


def _out_of_range(message: str, allowed: str) -> PydanticCustomError:
    return PydanticCustomError("quantity", "{message}", {"message": message, "allowed": allowed})


def _quantity(
    kind: Kind, low: str | None = None, high: str | None = None, *, positive: bool = False
) -> tuple[BeforeValidator, WithJsonSchema, Meaning]:
    if kind is Kind.NUMBER:
        schema: dict[str, Any] = {"type": ["string", "number"]}
    else:
        schema = {"type": "string", "pattern": _WITH_UNIT}
    words = describe(kind)
    if low is not None and high is not None:
        words += f"; from {low} to {high}"
    return (
        BeforeValidator(_text_only(kind, _within(kind, low, high, positive))),
        WithJsonSchema({**schema, "description": words}),
        Meaning(kind, words),
    )


Temperature = Annotated[float, *_quantity(Kind.TEMPERATURE, "-150 °C", "400 °C")]
TemperatureDifference = Annotated[float, *_quantity(Kind.TEMPERATURE_DIFFERENCE, "0 K", "200 K")]
PressureDifference = Annotated[float, *_quantity(Kind.PRESSURE_DIFFERENCE, positive=True)]
Power = Annotated[float, *_quantity(Kind.POWER, "0 W", "1000 MW")]
PowerInput = Annotated[float, *_quantity(Kind.POWER, positive=True)]
HeatFlow = Annotated[float, *_quantity(Kind.HEAT_FLOW, "0 W", "1000 MW")]
Capacity = Annotated[float, *_quantity(Kind.HEAT_FLOW, positive=True)]
Mass = Annotated[float, *_quantity(Kind.MASS, positive=True)]
PartOfMass = Annotated[float, *_quantity(Kind.MASS, "0 kg", "10000 kg")]
MassFlow = Annotated[float, *_quantity(Kind.MASS_FLOW, positive=True)]
Volume = Annotated[float, *_quantity(Kind.VOLUME, positive=True)]
Altitude = Annotated[float, *_quantity(Kind.LENGTH, "-450 m", "6000 m")]
Length = Annotated[float, *_quantity(Kind.LENGTH, positive=True)]
Area = Annotated[float, *_quantity(Kind.AREA, positive=True)]
VolumeFlow = Annotated[float, *_quantity(Kind.VOLUME_FLOW, positive=True)]
LiquidFlow = Annotated[float, *_quantity(Kind.LIQUID_FLOW, positive=True)]
Conductance = Annotated[float, *_quantity(Kind.CONDUCTANCE, positive=True)]
Current = Annotated[float, *_quantity(Kind.CURRENT, positive=True)]
Voltage = Annotated[float, *_quantity(Kind.VOLTAGE, positive=True)]
Speed = Annotated[float, *_quantity(Kind.SPEED, positive=True)]
Duration = Annotated[float, *_quantity(Kind.DURATION, positive=True)]
Ratio = Annotated[float, *_quantity(Kind.RATIO, "0 %", "100 %")]


def _fraction(text: str) -> float:
    """A share that the trade writes as a plain number (0.85) or in per cent (85 %)."""
    try:
        value = parse(text, Kind.NUMBER)
    except QuantityError:
        return _within(Kind.RATIO, "0 %", "100 %", False)(text)
    if not 0.0 <= value <= 1.0:
        raise _out_of_range("this is outside what can be", f"0 to 1 as a plain number, or {value:g} % if you mean it")
    return value


_FRACTION = "a share from 0 to 1 as a plain number, or in per cent, for example 0.85 or 85 %"
Fraction = Annotated[
    float,
    BeforeValidator(_text_only(Kind.RATIO, _fraction)),
    WithJsonSchema({"type": ["string", "number"], "description": _FRACTION}),
    Meaning(Kind.RATIO, _FRACTION),
]
Number = Annotated[float, *_quantity(Kind.NUMBER)]
PositiveNumber = Annotated[float, *_quantity(Kind.NUMBER, positive=True)]
SoundLevel = Annotated[float, *_quantity(Kind.SOUND_LEVEL, "0 dB(A)", "150 dB(A)")]


def _pressure(text: str) -> Pressure:
    pressure = parse_pressure(text)
    if pressure.pascal > 1e8:
        raise _out_of_range("this is outside what can be", "up to 1000 bar")
    return pressure


GaugeOrAbsolute = Annotated[
    Pressure,
    BeforeValidator(_text_only(Kind.PRESSURE, _pressure)),
    WithJsonSchema({"type": "string", "pattern": _WITH_UNIT, "description": describe(Kind.PRESSURE)}),
    Meaning(Kind.PRESSURE, describe(Kind.PRESSURE)),
]


def _yes_no(value: Any) -> bool:
    if value in ("yes", "true"):
        return True
    if value in ("no", "false"):
        return False
    raise PydanticCustomError("yes_no", "{message}", {"message": "yes or no is wanted here", "allowed": "yes, no"})


YesNo = Annotated[
    bool,
    BeforeValidator(_yes_no),
    WithJsonSchema({"enum": ["yes", "no", "true", "false", True, False]}),
    Meaning(None, "yes or no"),
]


def _date(value: Any) -> dt.date:
    message = {"message": "a date is wanted here", "allowed": "a date as year-month-day, for example 2027-03-31"}
    if isinstance(value, str) and re.fullmatch(r"[0-9]{4}-[0-9]{2}-[0-9]{2}", value):
        try:
            return dt.date.fromisoformat(value)
        except ValueError:
            message["message"] = "there is no such day"
    raise PydanticCustomError("date", "{message}", message)


Date = Annotated[
    dt.date,
    BeforeValidator(_date),
    WithJsonSchema({"type": "string", "format": "date"}),
    Meaning(None, "a date as year-month-day"),
]


def _count(value: Any) -> int:
    if isinstance(value, str) and re.fullmatch(r"[0-9]{1,6}", value) and int(value) > 0:
        return int(value)
    allowed = {"message": "a whole number is wanted here", "allowed": "1, 2, 3 and so on"}
    raise PydanticCustomError("quantity", "{message}", allowed)


Count = Annotated[
    int,
    BeforeValidator(_count),
    WithJsonSchema({"type": ["integer", "string"], "minimum": 1}),
    Meaning(None, "a whole number, 1 or more"),
]


def _identity(value: Any) -> str:
    if isinstance(value, str) and len(value) <= 60 and re.fullmatch(r"\w(?:[\w .\-]*\w)?", value):
        return value
    allowed = "letters, digits, spaces, hyphens, underscores and full stops, at most 60, a letter or digit at both ends"
    message = {"message": "this cannot be an id", "allowed": allowed}
    raise PydanticCustomError("quantity", "{message}", message)


Identity = Annotated[str, BeforeValidator(_identity), WithJsonSchema({"type": "string"}), Meaning(None, "an id")]


def _relative_file(value: Any) -> str:
    """A file inside the plant's folder: never an absolute path and never upwards."""
    allowed = "a path inside the plant's folder with forward slashes, such as documents/unit.pdf"
    if isinstance(value, str) and value and value.isprintable() and len(value) <= 250:
        parts = value.split("/")
        if not any(p in ("", ".", "..") for p in parts) and not any(c in value for c in '\\:<>|"*?'):
            return value
    raise PydanticCustomError(
        "quantity", "{message}", {"message": "this cannot be the place of a file here", "allowed": allowed}
    )


FileName = Annotated[
    str,
    BeforeValidator(_relative_file),
    WithJsonSchema({"type": "string"}),
    Meaning(None, "a path inside the plant's folder"),
]
