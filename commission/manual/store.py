"""Where figures may be kept between builds: a store handed in from above; an unwritable one means compute."""

from __future__ import annotations

import hashlib
import os
import tempfile
from collections.abc import Callable
from contextlib import suppress
from functools import cache
from importlib.metadata import version
from pathlib import Path
from typing import Protocol


class Store(Protocol):
    """Keeps bytes by key. Losing everything is allowed: whatever is missing is computed again."""

    def get(self, key: str) -> bytes | None:
        """The bytes kept under `key`, or None."""

    def put(self, key: str, data: bytes) -> None:
        """Keeps `data`; failing to do so is no error."""


class FolderStore:
    """A store in one folder, a file for each key, written atomically."""

    def __init__(self, folder: Path) -> None:
        self._folder = folder

    def get(self, key: str) -> bytes | None:
        """The bytes kept under `key`, or None where there are none or they cannot be read."""
        with suppress(OSError):
            return (self._folder / key).read_bytes()
        return None

    def put(self, key: str, data: bytes) -> None:
        """Keeps `data`; a folder that cannot be written is passed over."""
        with suppress(OSError):
            self._folder.mkdir(parents=True, exist_ok=True)
            handle, name = tempfile.mkstemp(dir=self._folder)
            with os.fdopen(handle, "wb") as file:
                file.write(data)
            os.replace(name, self._folder / key)


@cache
def package_digest() -> str:
    """SHA-256 of all modules and data of the package and of the property library's version: what a calculation follows
    besides the plant's description."""
    import commission

    found = hashlib.sha256(version("CoolProp").encode())
    folder = Path(commission.__file__).parent
    for path in sorted(p for p in folder.rglob("*") if p.suffix in (".py", ".yaml")):
        found.update(path.relative_to(folder).as_posix().encode() + b"\0" + path.read_bytes())
    return found.hexdigest()


def kept(store: Store | None, parts: tuple[object, ...], make: Callable[[], bytes]) -> bytes:
    """What `make` returns for these `parts`, from the store where it is there. `parts` must determine the result."""
    if store is None:
        return make()
    key = hashlib.sha256("\x1f".join(repr(p) for p in parts).encode()).hexdigest()
    data = store.get(key)
    if data is None:
        data = make()
        store.put(key, data)
    return data
