"""`commission predict`: what each system should read at a condition."""

from __future__ import annotations

import datetime as dt
import json
from collections.abc import Mapping
from pathlib import Path
from typing import TYPE_CHECKING, Any

import click

from commission.cli.options import check_system, json_option, parse_conditions, plant_argument
from commission.errors import InputError, NotCalculatedError, Problem

if TYPE_CHECKING:
    from commission.cli.before import Ahead
    from commission.description import LoadedPlant
    from commission.prediction import Prediction
    from commission.quantities import Display

COVERAGE = 2.0  # expanded uncertainty as shown and printed: about 95 % (JCGM 100:2008, 6.2 and G.6.6)


@click.command(name="predict")
@plant_argument
@click.option("--system", metavar="ID", help="Only this system.")
@click.option(
    "--at",
    "pairs",
    multiple=True,
    metavar="KEY=VALUE",
    help="A condition of the day, such as 'heat_sink_inlet_temperature=31 °C'; may be repeated. Needs --system.",
)
@click.option(
    "--freeze", "name", metavar="NAME", help="Freeze a test sheet of this name instead. Needs --system, --over."
)
@click.option(
    "--before-visit",
    "page",
    metavar="FILE",
    type=click.Path(dir_okay=False, path_type=Path),
    help="Write the page to print before a visit at --at instead, with the grid for the pencil. Needs --system, --at.",
)
@click.option("--over", "ranges", multiple=True, metavar="KEY=LOW..HIGH", help="Range of the day for these two.")
@click.option(
    "--visit",
    "day",
    type=click.DateTime(["%Y-%m-%d"]),
    help="Day of the visit for these two: calibrations count on it.",
)
@json_option
def command(
    plant: Path,
    system: str | None,
    pairs: tuple[str, ...],
    name: str | None,
    page: Path | None,
    ranges: tuple[str, ...],
    day: dt.datetime | None,
    as_json: bool,
) -> None:
    """Print what each gauge, probe and meter of PLANT should read.

    Without --at this is the rated condition of each system. Uncertainties are expanded ones, coverage factor 2.

    Before a visit, --before-visit writes one file to print for a forecast day: what each reading should be, which
    instruments are good enough, whether a test could decide and what would, and the targets over the range of the day.
    With --freeze that range becomes the sheet that both sides sign.
    """
    from commission.cli.before import Ahead, before_visit

    ahead = Ahead(name, page, ranges, day.date() if day else None)
    _check_options(system, pairs, ahead)
    from commission.description import load_plant

    loaded = load_plant(plant)
    known = list(loaded.plant.systems)
    if system is not None:
        check_system(system, known)
        if name is not None or page is not None:
            for path in before_visit(loaded, system, pairs, ahead):
                click.echo(str(path))
            return
    known_axes = _axes(loaded, system) if pairs and system is not None else ()
    conditions = parse_conditions(pairs, loaded.barometric_pressure, known_axes) if pairs else None
    results = {name: _predict(loaded, name, conditions) for name in ([system] if system else known)}
    if as_json:
        click.echo(json.dumps({"systems": {n: _as_data(r) for n, r in results.items()}}, indent=2, ensure_ascii=False))
        return
    from commission.manual.page_display import page_display

    blocks = []
    for name, result in results.items():
        title = f"{loaded.plant.systems[name].name or name} ({name}), {loaded.plant.systems[name].refrigerant}"
        blocks.append(_as_text(title, result, page_display(loaded, name), given=bool(pairs)))
    click.echo("\n\n".join(blocks))


def _check_options(system: str | None, pairs: tuple[str, ...], ahead: Ahead) -> None:
    """Which options need which.

    Raises:
        InputError: one stands without what it needs.
    """
    made = (("--before-visit", ahead.page), ("--freeze", ahead.name))
    for option, given in (("--at", pairs), *made, ("--over", ahead.ranges)):
        if given and system is None:
            message = f"{option} needs --system, since each system has conditions of its own"
            raise InputError(Problem(message, path=option))
    if ahead.page is not None and not pairs:
        raise InputError(
            Problem("--before-visit needs the forecast", path="--at",
                    allowed="for example --at 'heat_sink_inlet_temperature=31 °C'")
        )  # fmt: skip
    if ahead.name is not None and ahead.page is None and not ahead.ranges:
        raise InputError(
            Problem("a frozen sheet needs the range of the day", path="--over",
                    allowed="for example --over 'heat_sink_inlet_temperature=15 °C..35 °C'")
        )  # fmt: skip
    if ahead.name is None and ahead.page is None:
        for option, stands in (("--over", bool(ahead.ranges)), ("--visit", ahead.day is not None)):
            if stands:
                message = f"{option} belongs to --freeze or --before-visit; a single condition is given by --at"
                raise InputError(Problem(message, path=option))


def _axes(loaded: LoadedPlant, system: str) -> tuple[str, ...]:
    """The conditions that a system can be asked at; none where it cannot be calculated."""
    from commission.prediction import fit

    try:
        return tuple(fit(loaded, system).condition_axes)
    except NotCalculatedError:
        return ()


def _predict(loaded: LoadedPlant, system: str, conditions: Mapping[str, float] | None) -> Prediction | str:
    """The prediction, or the reason why there is none; a condition that the system does not have stays an error."""
    from commission.prediction import fit

    try:
        model = fit(loaded, system)
    except NotCalculatedError as error:
        return error.problems[0].message
    try:
        return model.predict(conditions)
    except NotCalculatedError as error:
        return error.problems[0].message


def _as_data(result: Prediction | str) -> dict[str, Any]:
    from commission.quantities import NOMENCLATURE, json_value

    if isinstance(result, str):
        return {"conditions": {}, "expected": {}, "not_calculated": {"system": result}}
    conditions = {}
    for key, value in result.conditions.items():
        number, unit = json_value(value, NOMENCLATURE[key].kind)
        conditions[key] = {"value": number, "unit": unit}
    expected = {}
    for key, explained in result.expected.items():
        number, unit = json_value(explained.value, NOMENCLATURE[key].kind)
        u = explained.uncertainty
        spread = None if u is None else COVERAGE * u
        expected[key] = {"value": number, "unit": unit, "uncertainty": spread}
    return {"conditions": conditions, "expected": expected, "not_calculated": dict(result.not_calculated)}


def _as_text(title: str, result: Prediction | str, display: Display, *, given: bool) -> str:
    lines = [title]
    if isinstance(result, str):
        return f"{title}\n  not calculated: because {result}"
    for key, value in result.conditions.items():
        taken = "  (rated, not given)" if given and key in result.filled else ""
        lines.append(f"  at {display.words(key)} {display.of(key, value)}{taken}")
    lines.append(f"  regime: {result.regime}")
    rows = [("", "expected", "± (k = 2)")]
    for key, explained in result.expected.items():
        quantity = display.quantities[key]
        u = explained.uncertainty
        own = display.fitting(quantity.kind, explained.value)
        spread = (
            "not stated"
            if u is None
            else f"{own.spread(COVERAGE * u, quantity.kind)} " + own.spread_unit(quantity.kind)
        )
        rows.append((quantity.label, display.of(key, explained.value), spread.strip()))
    widths = [max(len(row[i]) for row in rows) for i in range(3)]
    lines += [f"  {a:<{widths[0]}}  {b:>{widths[1]}}  {c:>{widths[2]}}" for a, b, c in rows]
    lines += [f"  {display.label(k)}: not calculated: because {why}" for k, why in result.not_calculated.items()]
    lines += [f"  note: {warning}" for warning in result.warnings]
    return "\n".join(lines)
