"""`commission review`: what in the description cannot be, is unlikely, or is missing."""

from __future__ import annotations

import datetime as dt
from pathlib import Path

import click

from commission.cli.options import plant_argument


@click.command(name="review")
@plant_argument
@click.option(
    "--visit",
    type=click.DateTime(["%Y-%m-%d"]),
    help="Day of the next visit, to find instruments whose calibration will have run out.",
)
def command(plant: Path, visit: dt.datetime | None) -> None:
    """Check PLANT against the laws of physics, its own figures and the rules of the trade."""
    from commission.description import load_plant
    from commission.review import review

    loaded = load_plant(plant)
    findings = review(loaded, visit=visit.date() if visit else None)
    for finding in findings:
        click.echo(str(finding))
        click.echo()
    counts = {severity: sum(f.severity == severity for f in findings) for severity in ("error", "warning", "note")}
    words = [f"{n} {severity}{'' if n == 1 else 's'}" for severity, n in counts.items() if n]
    click.echo(", ".join(words) if words else "nothing found")
    if counts["error"]:
        raise click.exceptions.Exit(1)
