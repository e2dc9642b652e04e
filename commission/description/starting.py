"""A first description: a commented skeleton for each duty, with the schema that lets an editor help."""

from __future__ import annotations

import json
from collections.abc import Mapping
from importlib.resources import files
from pathlib import Path
from typing import get_args

from commission.description.assembling import PLANT_FILE
from commission.description.model import Duty
from commission.description.reference import SCHEMA_FILE, json_schema
from commission.errors import InputError, Problem, nearest

DUTIES: tuple[str, ...] = get_args(Duty)
HINT = f"# yaml-language-server: $schema=./{SCHEMA_FILE}\n"


def new_plant(folder: Path | str, duty: str) -> tuple[Path, ...]:
    """Write a skeleton for one system of `duty` into `folder`, valid as written; the paths of what was written.

    Raises:
        InputError: unknown duty, a file that is there already, or a folder that cannot be written to.
    """
    return write_new(Path(folder), {PLANT_FILE: skeleton(duty), SCHEMA_FILE: schema_text()})


def skeleton(duty: str) -> str:
    """The text of `plant.yaml` for one system of `duty`.

    Raises:
        InputError: unknown duty.
    """
    if duty not in DUTIES:
        near = nearest(duty, DUTIES)
        raise InputError(Problem("there is no such duty", value=duty, allowed=", ".join(DUTIES), nearest=near))
    parts = files("commission.description") / "skeletons"
    return "".join((parts / name).read_text(encoding="utf-8") for name in ("head.yaml", f"{duty}.yaml"))


def schema_text() -> str:
    """The JSON Schema as it is written beside a description."""
    return json.dumps(json_schema(), indent=1, ensure_ascii=False, sort_keys=True) + "\n"


def write_new(folder: Path, texts: Mapping[str, str]) -> tuple[Path, ...]:
    """Write files that must not be there yet; the folder is made where needed.

    Raises:
        InputError: each file that is there already, or the reason why one cannot be written.
    """
    targets = {folder / name: text for name, text in texts.items()}
    there = [path for path in targets if path.exists() or path.is_symlink()]
    if there:
        message = "this file is there already; nothing was written"
        raise InputError(*(Problem(message, file=str(path), allowed="a new or empty folder") for path in there))
    try:
        folder.mkdir(parents=True, exist_ok=True)
        for path, text in targets.items():
            with path.open("x", encoding="utf-8", newline="\n") as stream:
                stream.write(text)
    except OSError as error:
        raise InputError(Problem(f"cannot be written: {error.strerror}", file=str(error.filename or folder))) from None
    return tuple(targets)
