"""Field types of the description: text as a person writes it becomes SI numbers; nothing else is accepted."""

from __future__ import annotations

import datetime as dt
from collections.abc import Callable
from typing import Annotated, Any

from pydantic import BeforeValidator, WithJsonSchema
from pydantic_core import PydanticCustomError

from commission.quantities import Kind, Pressure, QuantityError, describe, parse, parse_pressure


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


def _quantity(kind: Kind) -> tuple[BeforeValidator, WithJsonSchema]:
    return (
        BeforeValidator(_text_only(kind, lambda text: parse(text, kind))),
        WithJsonSchema({"type": ["string", "number"], "description": describe(kind)}),
    )


Temperature = Annotated[float, *_quantity(Kind.TEMPERATURE)]
TemperatureDifference = Annotated[float, *_quantity(Kind.TEMPERATURE_DIFFERENCE)]
Power = Annotated[float, *_quantity(Kind.POWER)]
Mass = Annotated[float, *_quantity(Kind.MASS)]
Volume = Annotated[float, *_quantity(Kind.VOLUME)]
Length = Annotated[float, *_quantity(Kind.LENGTH)]
Area = Annotated[float, *_quantity(Kind.AREA)]
VolumeFlow = Annotated[float, *_quantity(Kind.VOLUME_FLOW)]
Conductance = Annotated[float, *_quantity(Kind.CONDUCTANCE)]
Current = Annotated[float, *_quantity(Kind.CURRENT)]
Voltage = Annotated[float, *_quantity(Kind.VOLTAGE)]
Speed = Annotated[float, *_quantity(Kind.SPEED)]
Duration = Annotated[float, *_quantity(Kind.DURATION)]
Ratio = Annotated[float, *_quantity(Kind.RATIO)]
Number = Annotated[float, *_quantity(Kind.NUMBER)]
GaugeOrAbsolute = Annotated[
    Pressure,
    BeforeValidator(_text_only(Kind.PRESSURE, parse_pressure)),
    WithJsonSchema({"type": "string", "description": describe(Kind.PRESSURE)}),
]


def _yes_no(value: Any) -> bool:
    if value in ("yes", "true"):
        return True
    if value in ("no", "false"):
        return False
    raise PydanticCustomError("yes_no", "{message}", {"message": "yes or no is wanted here", "allowed": "yes, no"})


YesNo = Annotated[bool, BeforeValidator(_yes_no), WithJsonSchema({"type": ["boolean", "string"]})]


def _date(value: Any) -> dt.date:
    try:
        return dt.date.fromisoformat(value)
    except (TypeError, ValueError):
        message = {"message": "a date is wanted here", "allowed": "a date as year-month-day, for example 2027-03-31"}
        raise PydanticCustomError("date", "{message}", message) from None


Date = Annotated[dt.date, BeforeValidator(_date), WithJsonSchema({"type": "string", "format": "date"})]
