"""The manual: a static site that works from a folder, with everything a plant room needs to know."""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from commission.manual.building import BuildResult, build
    from commission.manual.store import FolderStore, Store
    from commission.manual.where import templates_folder

__all__ = ["BuildResult", "FolderStore", "Store", "build", "templates_folder"]

_HOME = {
    "BuildResult": "building",
    "build": "building",
    "FolderStore": "store",
    "Store": "store",
    "templates_folder": "where",
}


def __getattr__(name: str) -> Any:
    """Load what is asked for when it is asked for (PEP 562): a verb that only shows numbers needs none of the pages."""
    if name not in _HOME:
        raise AttributeError(name)
    return getattr(importlib.import_module(f"commission.manual.{_HOME[name]}"), name)
