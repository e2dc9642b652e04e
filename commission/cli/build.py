"""`commission build`: the plant's manual as a folder of pages."""

from __future__ import annotations

from pathlib import Path

import click

from commission.cli.options import plant_argument, say


@click.command(name="build")
@plant_argument
@click.option("--out", type=click.Path(path_type=Path), help="Folder of the manual; PLANT/manual unless said.")
@click.option("--serve", is_flag=True, help="Serve it on this computer and rebuild when the plant folder changes.")
@click.option("--strict", is_flag=True, help="Leave with 1 where review finds an error.")
@click.option("--no-cache", is_flag=True, help="Compute everything anew.")
def command(plant: Path, out: Path | None, serve: bool, strict: bool, no_cache: bool) -> None:
    """Build the manual of PLANT and print the path of its first page."""
    from commission.manual import build

    folder = out or plant / "manual"
    cache = None if no_cache else _cache_folder()
    result = build(plant, folder, progress=say, cache=cache, strict=strict)
    click.echo(str(result.first_page))
    if serve:
        from commission.cli.serve import serve_manual

        serve_manual(plant, cache, say)
    errors = sum(1 for finding in result.findings if finding.severity == "error")
    if strict and errors:
        say(f"review found {errors} error{'s' if errors > 1 else ''}; see the page Findings")
        raise click.exceptions.Exit(1)


def _cache_folder() -> Path:
    import platformdirs

    return Path(platformdirs.user_cache_dir("commission", appauthor=False))
