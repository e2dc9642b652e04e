"""Build beside, then swap: a failed build leaves the last good manual untouched."""

from __future__ import annotations

import os
import shutil
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from commission.errors import InputError, Problem

MARKER = "manual.json"
"""The file that says a folder is a manual of ours and may be replaced."""


def check_replaceable(out: Path, plant_folder: Path) -> None:
    """Refuses to replace anything that is not a manual.

    Raises:
        InputError: `out` is a file, holds other people's files, or is or contains the plant folder.
    """
    target, plant = out.resolve(), plant_folder.resolve()
    if target == plant or target in plant.parents:
        raise InputError(Problem("the manual would replace the plant folder itself; choose another folder with --out",
                                 file=str(out)))  # fmt: skip
    if not target.exists():
        return
    if not target.is_dir():
        raise InputError(Problem("a folder is wanted for the manual; a file of that name is there", file=str(out)))
    if any(target.iterdir()) and not (target / MARKER).is_file():
        raise InputError(
            Problem(
                "this folder holds files that are not a manual, so it is left alone; choose an empty or new folder",
                file=str(out),
            )
        )


@contextmanager
def fresh_folder(out: Path) -> Iterator[Path]:
    """A fresh folder beside `out`; on success it takes the place of `out`, on failure it goes away.

    Raises:
        InputError: the folder cannot be written or replaced.
    """
    out = out.resolve()
    try:
        out.parent.mkdir(parents=True, exist_ok=True)
        work = Path(tempfile.mkdtemp(prefix=f".{out.name}-", dir=out.parent))
    except OSError as error:
        raise InputError(Problem(f"the manual cannot be written here: {error.strerror}", file=str(out))) from error
    try:
        fresh = work / "new"
        fresh.mkdir()
        yield fresh
        _swap(fresh, out, work / "old")
    finally:
        shutil.rmtree(work, ignore_errors=True)


def _swap(fresh: Path, out: Path, old: Path) -> None:
    """`fresh` becomes `out`; when that fails, what was there is put back."""
    had_one = out.exists()
    try:
        if had_one:
            os.rename(out, old)
        try:
            os.rename(fresh, out)
        except OSError:
            if had_one:
                os.rename(old, out)
            raise
    except OSError as error:
        raise InputError(
            Problem(
                f"the new manual could not take the place of the old one ({error.strerror}); the old one is untouched",
                file=str(out),
            )
        ) from error
