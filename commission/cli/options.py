"""Arguments and options that several verbs share."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import Any

import click

from commission.errors import InputError, Problem, nearest

plant_argument: Callable[[Any], Any] = click.argument("plant", type=click.Path(path_type=Path))
json_option: Callable[[Any], Any] = click.option(
    "--json", "as_json", is_flag=True, help="Print the result as JSON (°C, K, Pa absolute, W, kg/s)."
)


def say(message: str) -> None:
    """A line of progress or advice, to standard error."""
    click.echo(message, err=True)


def parse_conditions(
    pairs: tuple[str, ...], barometric_pressure: float, known: tuple[str, ...] = ()
) -> dict[str, float]:
    """`--at KEY=VALUE` pairs as SI values by nomenclature key; `known` are the conditions to name where a key is not.

    Raises:
        InputError: with every pair that has no `=`, an unknown or repeated key, or a value that cannot be read.
    """
    from commission.quantities import NOMENCLATURE, Kind, QuantityError, parse, parse_pressure

    problems: list[Problem] = []
    conditions: dict[str, float] = {}
    for pair in pairs:
        key, found, text = (part.strip() for part in pair.partition("="))
        place = f"--at {key}"
        if not found:
            problems.append(Problem("write KEY=VALUE", path="--at", value=pair, allowed="for example --at "
                                    "'heat_sink_inlet_temperature=31 °C'"))  # fmt: skip
        elif key not in NOMENCLATURE:
            near = nearest(key, NOMENCLATURE)
            near = nearest(key, known) or near
            problems.append(Problem("there is no quantity of this name", path=place, value=key,
                                    allowed=", ".join(known) or None, nearest=near))  # fmt: skip
        elif key in conditions:
            problems.append(Problem("this condition is given twice", path=place, value=text))
        else:
            kind = NOMENCLATURE[key].kind
            try:
                if kind is Kind.PRESSURE:
                    conditions[key] = parse_pressure(text).absolute(barometric_pressure)
                else:
                    conditions[key] = parse(text, kind)
            except QuantityError as error:
                problem = error.problems[0]
                problems.append(Problem(problem.message, path=place, value=text, allowed=problem.allowed,
                                        nearest=problem.nearest))  # fmt: skip
    if problems:
        raise InputError(*problems)
    return conditions


def check_system(system: str, known: list[str]) -> None:
    """Raises InputError with the nearest id where the plant has no such system."""
    if system not in known:
        raise InputError(
            Problem(
                "the plant has no system of this id",
                path="--system",
                value=system,
                allowed=", ".join(known),
                nearest=nearest(system, known),
            )
        )
