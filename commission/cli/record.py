"""`commission record`: judge a visit, freeze the verdict with what it was judged by, and file it for good."""

from __future__ import annotations

from pathlib import Path

import click

from commission.cli.options import check_system, plant_argument, say
from commission.errors import InputError, Problem


@click.command(name="record", short_help="File a visit for good, its verdict frozen.")
@plant_argument
@click.argument("file", type=click.Path(path_type=Path), required=False)
@click.option("--attach", type=click.Path(path_type=Path), help="Folder with the files that the record names.")
@click.option("--form", "stage", metavar="STAGE", help="Print a blank record of this checklist stage instead.")
@click.option("--system", metavar="ID", help="System of the blank record.")
def command(plant: Path, file: Path | None, attach: Path | None, stage: str | None, system: str | None) -> None:
    """File the visit FILE under PLANT/records and print the path of the filed record.

    A filed record is never rewritten; a correction is a new record that names the old one. With --form a blank record
    to fill in is printed and nothing is filed.
    """
    if (file is None) == (stage is None):
        raise InputError(Problem("give either the FILE to be filed or --form with a stage", path="record"))
    from commission.description import load_plant

    loaded = load_plant(plant)
    if file is not None:
        from commission.cli.judgement import as_text
        from commission.records import file_record, judge_record, read_record

        say(as_text(judge_record(loaded, read_record(file, loaded)), loaded))
        click.echo(str(file_record(loaded, file, attach)))
        return
    from commission.prediction import fit
    from commission.records import record_form

    known = list(loaded.plant.systems)
    if system is None and len(known) > 1:
        raise InputError(Problem("say which system the form is for", path="--system", allowed=", ".join(known)))
    chosen = system or known[0]
    check_system(chosen, known)
    assert stage is not None
    click.echo(record_form(loaded, chosen, stage, fit(loaded, chosen)))
