"""`commission compare`: a visit's readings against what the design predicts at the conditions of that visit."""

from __future__ import annotations

import json
from pathlib import Path

import click

from commission.cli.options import json_option, plant_argument


@click.command(name="compare")
@plant_argument
@click.argument("record", type=click.Path(path_type=Path))
@json_option
def command(plant: Path, record: Path, as_json: bool) -> None:
    """Judge RECORD, a visit to PLANT, without filing it.

    Leaves with 1 where a guarantee is not met, with 0 where it is met, undecided, or where nothing is guaranteed.
    """
    from commission.cli.judgement import as_text
    from commission.description import load_plant
    from commission.records import judge_record, read_record

    loaded = load_plant(plant)
    judgement = judge_record(loaded, read_record(record, loaded))
    if as_json:
        click.echo(json.dumps(judgement.as_data(), indent=2, ensure_ascii=False))
    else:
        click.echo(as_text(judgement, loaded))
    if judgement.outcome == "not conforming":
        raise click.exceptions.Exit(1)
