"""From a plant folder to a manual: read, calculate, write the pages beside the old manual, swap."""

from __future__ import annotations

import json
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

from commission import __version__
from commission.description import LoadedPlant, load_plant
from commission.errors import InputError, Problem
from commission.manual.contents import write_book
from commission.manual.frame import Frames
from commission.manual.gather import gather
from commission.manual.rendering import environment
from commission.manual.single import single_files
from commission.manual.store import FolderStore, Store
from commission.manual.swap import MARKER, check_replaceable, fresh_folder
from commission.manual.where import templates_folder

if TYPE_CHECKING:
    from commission.review import Finding


@dataclass(frozen=True, slots=True)
class BuildResult:
    """What a build made.

    `first_page` is the page to open; `pages` their number; `findings` what the review found; `not_calculated` the
    reason by system id; `warnings` what was left out of the manual, one sentence each.
    """

    first_page: Path
    pages: int
    findings: tuple[Finding, ...]
    not_calculated: Mapping[str, str]
    warnings: tuple[str, ...]


def build(
    plant: Path | str | LoadedPlant,
    out: Path | None = None,
    *,
    progress: Callable[[str], None] = lambda _: None,
    cache: Store | Path | None = None,
    strict: bool = False,
    serving: bool = False,
) -> BuildResult:
    """Build the manual of a plant.

    `out` is the folder of the manual, `<plant folder>/manual` unless said; it must be new, empty or an older manual.
    `progress` is told what is being done. `cache` keeps figures between builds (a folder, or any store); None computes
    everything. With `strict`, a link of the owner's pages that leads nowhere stops the build. `serving` relaxes the
    security policy for the local preview.

    The new manual is written beside the old one and takes its place at the end: a build that fails leaves the old one
    untouched. The same plant folder and package give the same bytes.

    Raises:
        InputError: the description cannot be read, `out` cannot be written or replaced, or (`strict`) a link is broken.
    """
    loaded = plant if isinstance(plant, LoadedPlant) else load_plant(Path(plant))
    try:
        return _build(loaded, out, progress, cache, strict, serving)
    except FileNotFoundError as error:
        gone = Path(error.filename).resolve() if error.filename else None
        if gone is None or loaded.folder.resolve() not in gone.parents or gone.exists():
            raise
        message = "this file went away while the manual was being built: build again"
        raise InputError(Problem(message, file=str(gone.relative_to(loaded.folder.resolve())))) from error


def _build(
    loaded: LoadedPlant,
    out: Path | None,
    progress: Callable[[str], None],
    cache: Store | Path | None,
    strict: bool,
    serving: bool,
) -> BuildResult:
    """The build itself, from what was read to the swap."""
    target = Path(out) if out is not None else loaded.folder / "manual"
    check_replaceable(target, loaded.folder)
    store = FolderStore(cache) if isinstance(cache, Path) else cache
    templates = templates_folder()

    data = gather(loaded, progress)
    contents = write_book(data, store, progress)
    env = environment(templates, data.display)
    texts = contents.texts | single_files(contents.book, env, templates, data)
    frames = Frames(contents.book, data, __version__, serving)
    with fresh_folder(target) as fresh:
        from commission.manual.site import write_site

        broken = write_site(
            contents.book,
            env,
            templates=templates,
            frame=frames,
            owner=contents.owner_files,
            texts=texts,
            site_name=data.name,
            work=fresh.parent,
            out=fresh,
            progress=progress,
        )
        if strict and broken:
            raise InputError(*(Problem(text, file="pages/") for text in broken))
        about: dict[str, Any] = {"plant": data.name, "digest": loaded.digest, "made_by": f"commission {__version__}"}
        (fresh / MARKER).write_text(json.dumps(about, indent=2, ensure_ascii=False) + "\n", encoding="utf-8")
    progress(f"{len(contents.book)} pages written to {target}")
    return BuildResult(
        first_page=target.resolve() / "index.html",
        pages=len(contents.book),
        findings=contents.findings,
        not_calculated={d.id: d.because for d in data.systems if d.because is not None},
        warnings=(*contents.left_out, *broken),
    )
