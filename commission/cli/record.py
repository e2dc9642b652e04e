"""`commission record`: judge a visit, freeze the verdict with what it was judged by, and file it for good."""

from __future__ import annotations

import datetime as dt
from pathlib import Path
from typing import TYPE_CHECKING

import click

from commission.cli.options import check_system, plant_argument, say
from commission.errors import InputError, NotCalculatedError, Problem

if TYPE_CHECKING:
    from commission.description import LoadedPlant
    from commission.records.logger import Cycles, Log


@click.command(name="record")
@plant_argument
@click.argument("file", type=click.Path(path_type=Path), required=False)
@click.option("--attach", type=click.Path(path_type=Path), help="Folder with the files that the record names.")
@click.option("--form", "stage", metavar="STAGE", help="Print a blank record of this checklist stage instead.")
@click.option("--system", metavar="ID", help="System of the blank record.")
@click.option("--log", type=click.Path(path_type=Path), help="Fill the blank record from a logger's CSV file.")
@click.option(
    "--cycles", is_flag=True, help="From the log take means over whole cycles: for a plant that cycles or defrosts."
)
@click.option("--mapping", type=click.Path(path_type=Path), help="What the columns of the logger mean, as YAML.")
def command(
    plant: Path,
    file: Path | None,
    attach: Path | None,
    stage: str | None,
    system: str | None,
    log: Path | None,
    mapping: Path | None,
    cycles: bool,
) -> None:
    """File the visit FILE under PLANT/records and print the path of the filed record.

    A filed record is never rewritten; a correction is a new record that names the old one. With --form a blank record
    to fill in is printed and nothing is filed; with --log and --mapping it holds the steadiest stretch of the log, with
    --cycles as well the means over its latest whole cycles.
    """
    if (file is None) == (stage is None):
        raise InputError(Problem("give either the FILE to be filed or --form with a stage", path="record"))
    if (log is None) != (mapping is None) or (stage is None and (log is not None or cycles)):
        raise InputError(Problem("--log and --mapping (and --cycles) belong together, with --form", path="record"))
    from commission.description import load_plant

    loaded = load_plant(plant)
    if file is not None:
        _file(loaded, file, attach)
        return
    known = list(loaded.plant.systems)
    if system is None and len(known) > 1:
        raise InputError(Problem("say which system the form is for", path="--system", allowed=", ".join(known)))
    chosen = system or known[0]
    check_system(chosen, known)
    assert stage is not None
    if log is not None and mapping is not None:
        click.echo(_from_log(loaded, chosen, stage, log, mapping, cycles))
    else:
        click.echo(_blank(loaded, chosen, stage))


def _file(loaded: LoadedPlant, file: Path, attach: Path | None) -> None:
    from commission.cli.judgement import not_compared
    from commission.records import file_record, read_filed, read_record

    path = file_record(loaded, file, attach, filed_at=dt.datetime.now().astimezone())
    for sentence in not_compared(read_record(file, loaded), loaded):
        say(f"mind: {sentence}")
    filed = read_filed(path)
    say(filed.filed.sentence)
    for text in (*filed.filed.impossible, *filed.filed.warnings):
        say(f"mind: {text}")
    for item in filed.filed.open_items:
        say(f"open item {item.number}: {item.what}")
    click.echo(str(path))


def _blank(loaded: LoadedPlant, system: str, stage: str) -> str:
    from commission.prediction import fit
    from commission.records import record_form

    try:
        model = fit(loaded, system)
    except NotCalculatedError as error:
        say(f"the readings are those of measured_with, since nothing is calculated: {error.problems[0].message}")
        model = None
    return record_form(loaded, system, stage, model)


def _from_log(loaded: LoadedPlant, system: str, stage: str, log: Path, mapping: Path, cycles: bool) -> str:
    from commission.records.logger import draft_of, quietest, read_log, read_mapping

    found = read_log(log, read_mapping(mapping, loaded), loaded.barometric_pressure)
    read = _whole_cycles(found) if cycles else quietest(found)
    if read is None:
        raise InputError(Problem("in no stretch of 20 minutes did everything stand still by the site limits",
                                 file=log.name, allowed="a longer log, or --cycles where the plant cycles or defrosts")
                        )  # fmt: skip
    return draft_of(found, read, system=system, stage=stage, mode="trim", people={"operator": {"name": ""}})


def _whole_cycles(log: Log) -> Cycles:
    """The latest whole cycles that are enough by the site limits, or all that there are.

    Raises:
        InputError: there is less than one.
    """
    from commission.acceptance.steadiness import library
    from commission.records.logger import best_cycles

    limits = library()["site"]
    try:
        return best_cycles(log, int(limits["cycles"]), float(limits["cycles_time"]))
    except NotCalculatedError as error:
        raise InputError(Problem(str(error), file=log.name, allowed="a longer log")) from error
