"""`commission record`: judge a visit, freeze the verdict with what it was judged by, and file it for good."""

from __future__ import annotations

from pathlib import Path

import click

from commission.cli.options import plant_argument, say


@click.command(name="record")
@plant_argument
@click.argument("file", type=click.Path(path_type=Path))
@click.option("--attach", type=click.Path(path_type=Path), help="Folder with the files that the record names.")
def command(plant: Path, file: Path, attach: Path | None) -> None:
    """File the visit FILE under PLANT/records and print the path of the filed record.

    A filed record is never rewritten; a correction is a new record that names the old one.
    """
    from commission.cli.judgement import as_text
    from commission.description import load_plant
    from commission.records import file_record, judge_record, read_record

    loaded = load_plant(plant)
    say(as_text(judge_record(loaded, read_record(file, loaded)), loaded))
    click.echo(str(file_record(loaded, file, attach)))
