"""The manual: a static site that works from a folder, with everything a plant room needs to know."""

from commission.manual.build import BuildResult, build
from commission.manual.store import FolderStore, Store
from commission.manual.where import templates_folder

__all__ = ["BuildResult", "FolderStore", "Store", "build", "templates_folder"]
