"""`commission new`: a first description to work on."""

from __future__ import annotations

from pathlib import Path

import click

from commission.cli.options import say

DUTIES = ("cold_storage", "comfort_cooling", "liquid_cooling", "space_heating", "water_heating")


class _WithHeadings(click.Command):
    """The command whose help ends with the headings of a schedule, read only when help is asked for."""

    def format_epilog(self, ctx: click.Context, formatter: click.HelpFormatter) -> None:
        from commission.description import schedule_columns

        first = ", ".join(headings[0] for headings in schedule_columns().values())
        formatter.write_paragraph()
        formatter.write_text(
            "A schedule has one row of headings and one row for each system. Units stand in the cells, in brackets "
            "behind the heading such as Ambient [°F], or in a row below the headings. Other columns are kept as "
            f"remarks. Headings that are understood, besides other words for the same: {first}."
        )


@click.command(name="new", cls=_WithHeadings)
@click.argument("folder", metavar="DIR", type=click.Path(path_type=Path))
@click.option("--duty", type=click.Choice(DUTIES), help="What the system does.")
@click.option(
    "--from-schedule",
    "schedule",
    type=click.Path(path_type=Path),
    help="An equipment schedule as CSV, one row per system, instead of --duty.",
)
def command(folder: Path, duty: str | None, schedule: Path | None) -> None:
    """Write a first description into DIR, commented, valid as written, never overwriting a file."""
    from commission.description import from_schedule, new_plant
    from commission.errors import InputError, Problem

    if duty is not None and schedule is None:
        written = new_plant(folder, duty)
    elif schedule is not None and duty is None:
        written = from_schedule(schedule, folder)
    else:
        raise InputError(Problem("say either --duty or --from-schedule", allowed=f"--duty one of {', '.join(DUTIES)}"))
    for path in written:
        click.echo(str(path))
    say(f"next: commission review {folder}, then commission build {folder}")
