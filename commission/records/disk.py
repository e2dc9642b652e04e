"""Files that are written once and whole: a reader, a crash or a second person never sees half of one.

The order is that of any careful writer on a journalling file system: write a hidden file beside the target, flush it to
the disk, give it its name without overwriting, flush the folder. A process killed at any moment leaves either nothing
under the name or the whole file; the hidden file it may leave is swept away by the next one that holds the lock.
"""

from __future__ import annotations

import contextlib
import hashlib
import os
import shutil
import sys
import time
from collections.abc import Iterator
from pathlib import Path

from commission.errors import InputError, Problem

PART = ".part"
LOCK_NAME = ".lock"


class FolderError(InputError):
    """A folder or file of the records cannot be read or written."""


class ExistsError(FolderError):
    """A file of that name is there already, and a record is never overwritten."""


def digest_of(data: bytes) -> str:
    """SHA-256 of `data` in hexadecimal digits."""
    return hashlib.sha256(data).hexdigest()


def digest_of_file(path: Path) -> str:
    """SHA-256 of a file in hexadecimal digits, read in pieces so that a long video does not fill the memory.

    Raises:
        FolderError: the file cannot be read.
    """
    try:
        with path.open("rb") as file:
            return hashlib.file_digest(file, "sha256").hexdigest()
    except OSError as error:
        raise FolderError(Problem(f"this file cannot be read: {error.strerror}", file=str(path))) from None


def write_new(path: Path, data: bytes) -> None:
    """Write a file that must not exist yet, whole or not at all.

    Raises:
        ExistsError: there is a file of that name.
        FolderError: the folder cannot be written.
    """
    part = _write_part(path, data)
    try:
        _name_without_overwriting(part, path)
    finally:
        _drop(part)
    _flush_folder(path.parent)


def copy_new(source: Path, path: Path) -> None:
    """Copy a file under a name that must not exist yet, whole or not at all, in pieces whatever its size.

    Raises:
        ExistsError: there is a file of that name.
        FolderError: the source cannot be read or the folder cannot be written.
    """
    part = _part_of(path)
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        with source.open("rb") as read, part.open("wb") as written:
            shutil.copyfileobj(read, written, 1 << 20)
            written.flush()
            os.fsync(written.fileno())
        _name_without_overwriting(part, path)
    except OSError as error:
        message = f"this file cannot be copied to {path}: {error.strerror}"
        raise FolderError(Problem(message, file=str(source))) from None
    finally:
        _drop(part)
    _flush_folder(path.parent)


def replace(path: Path, data: bytes) -> None:
    """Put new contents in the place of a file in one step: a reader sees the old or the new, never a mixture.

    Raises:
        FolderError: the folder cannot be written.
    """
    part = _write_part(path, data)
    try:
        os.replace(part, path)
    except OSError as error:
        _drop(part)
        raise FolderError(Problem(f"this file cannot be written: {error.strerror}", file=str(path))) from None
    _flush_folder(path.parent)


def sweep(folder: Path) -> tuple[str, ...]:
    """Remove hidden part files that a killed process left; only call it with the lock held. Returns their names."""
    stale = sorted(p for p in folder.rglob(f".*{PART}") if p.is_file())
    for path in stale:
        path.unlink(missing_ok=True)
    return tuple(p.relative_to(folder).as_posix() for p in stale)


@contextlib.contextmanager
def lock(folder: Path, patience: float = 60.0) -> Iterator[None]:
    """Hold the folder's lock; waits up to `patience` seconds for somebody else to finish.

    It is the operating system's lock on an open file, so it goes when its holder dies, however it dies: there is no
    lock file to clear by hand. On a network share it is only as good as the share's own locking.

    Raises:
        FolderError: the lock was not free in time, or the folder cannot be written.
    """
    path = folder / LOCK_NAME
    try:
        handle = os.open(path, os.O_RDWR | os.O_CREAT, 0o666)
    except OSError as error:
        raise FolderError(Problem(f"this folder cannot be written: {error.strerror}", file=str(folder))) from None
    try:
        deadline = time.monotonic() + patience
        while not _try_lock(handle):
            if time.monotonic() > deadline:
                message = f"somebody else has been filing here for {patience:.0f} s; try again when they have finished"
                raise FolderError(Problem(message, file=str(folder)))
            time.sleep(0.02)
        yield
    finally:
        os.close(handle)


if sys.platform == "win32":
    import msvcrt

    def _try_lock(handle: int) -> bool:
        try:
            msvcrt.locking(handle, msvcrt.LK_NBLCK, 1)
        except OSError:
            return False
        return True

else:
    import fcntl

    def _try_lock(handle: int) -> bool:
        try:
            fcntl.flock(handle, fcntl.LOCK_EX | fcntl.LOCK_NB)
        except BlockingIOError:
            return False
        return True


def _part_of(path: Path) -> Path:
    return path.with_name(f".{path.name}.{os.getpid()}{PART}")


def _drop(part: Path) -> None:
    """Remove a part file where there is one; the error that is under way says more than a failure here would."""
    with contextlib.suppress(OSError):
        part.unlink()


def _write_part(path: Path, data: bytes) -> Path:
    part = _part_of(path)
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        with part.open("wb") as file:
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
    except OSError as error:
        _drop(part)
        raise FolderError(Problem(f"this file cannot be written: {error.strerror}", file=str(path))) from None
    return part


def _name_without_overwriting(part: Path, path: Path) -> None:
    exists = ExistsError(Problem("a file of this name is there already; a record is never overwritten", file=str(path)))
    try:
        os.link(part, path)
    except FileExistsError:
        raise exists from None
    except OSError:
        # Memory sticks and some network shares know no hard links. The lock keeps every other run of this package
        # out between the look and the renaming; on Windows the renaming itself refuses an existing name.
        if path.exists():
            raise exists from None
        try:
            os.rename(part, path)
        except FileExistsError:
            raise exists from None
        except OSError as error:
            raise FolderError(Problem(f"this file cannot be written: {error.strerror}", file=str(path))) from None


def _flush_folder(folder: Path) -> None:
    """Flush the folder's own entry, so that the name outlives a loss of power; Windows has no such call."""
    if sys.platform == "win32":
        return
    handle = os.open(folder, os.O_RDONLY)
    try:
        os.fsync(handle)
    except OSError:  # some network file systems refuse to flush a folder; the name is then theirs to keep
        pass
    finally:
        os.close(handle)
