"""The list of digests, `SHA256SUMS`, in the form that `sha256sum -c` reads; it detects accident, not fraud.

Whoever can alter a record can alter this list: the digest counts where it is printed on the signed page.
Form: GNU coreutils manual, section "cksum: common options and output" (digest, two spaces, name; a name with a
backslash or line break is escaped and its line begins with a backslash).
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Literal

from commission.errors import InputError, Problem
from commission.records.disk import LOCK_NAME, PART, digest_of_file, replace

SUMS_NAME = "SHA256SUMS"
State = Literal["altered", "missing", "not listed"]


class SumsError(InputError):
    """The list of digests itself cannot be read."""


@dataclass(frozen=True, slots=True)
class FileFinding:
    """One file under `records/` that is not as the list of digests says. `name` is relative to that folder."""

    state: State
    name: str
    listed: str | None
    found: str | None

    @property
    def sentence(self) -> str:
        """What was found, as a sentence for a person."""
        if self.state == "altered":
            return f"{self.name} is not the file that was filed: its digest differs from the list"
        if self.state == "missing":
            return f"{self.name} was filed and is not there any more"
        return f"{self.name} lies among the records and was never filed: file it, or keep it elsewhere"


def read_sums(folder: Path) -> dict[str, str]:
    """Name to digest, as listed in the folder; empty where there is no list.

    Raises:
        SumsError: a line is not of the form `digest  name`; all such lines are named.
    """
    path = folder / SUMS_NAME
    try:
        text = path.read_text(encoding="utf-8")
    except FileNotFoundError:
        return {}
    except (OSError, UnicodeDecodeError) as error:
        raise SumsError(Problem(f"the list of digests cannot be read: {error}", file=str(path))) from None
    sums: dict[str, str] = {}
    problems: list[Problem] = []
    for number, line in enumerate(text.split("\n"), 1):
        if not line:
            continue
        entry = _parse_line(line)
        if entry is None:
            message = "this line of the list of digests cannot be read"
            allowed = "64 hexadecimal digits, two spaces, the name of a file"
            problems.append(Problem(message, file=str(path), line=number, column=1, value=line, allowed=allowed))
        else:
            sums[entry[0]] = entry[1]
    if problems:
        raise SumsError(*problems)
    return sums


def _parse_line(line: str) -> tuple[str, str] | None:
    escaped = line.startswith("\\")
    digest, gap, name = line[escaped:][:64], line[escaped:][64:66], line[escaped:][66:]
    if gap not in ("  ", " *") or not name or len(digest) < 64 or set(digest) - set("0123456789abcdef"):
        return None
    if escaped:
        name = name.replace("\\\\", "\0").replace("\\n", "\n").replace("\\r", "\r").replace("\0", "\\")
    return name, digest


def sums_text(sums: Mapping[str, str]) -> str:
    """The list as text, sorted by name, so that the same files give the same bytes."""
    lines = []
    for name in sorted(sums):
        safe = name.replace("\\", "\\\\").replace("\n", "\\n").replace("\r", "\\r")
        mark = "\\" if safe != name else ""
        lines.append(f"{mark}{sums[name]}  {safe}\n")
    return "".join(lines)


def add_sums(folder: Path, new: Mapping[str, str]) -> None:
    """Add entries in one step; an entry that is listed is never changed. Call it with the lock held.

    Raises:
        SumsError: an entry is listed with another digest, or the list cannot be read.
    """
    sums = read_sums(folder)
    clash = [name for name, digest in new.items() if sums.get(name, digest) != digest]
    if clash:
        path = str(folder / SUMS_NAME)
        raise SumsError(*(Problem("this file is listed with another digest", file=path, path=n) for n in clash))
    if not set(new) <= set(sums):
        replace(folder / SUMS_NAME, sums_text({**sums, **new}).encode())


def files_in(folder: Path) -> tuple[str, ...]:
    """Every file that should be listed, relative to the folder, in order."""
    if not folder.is_dir():
        return ()
    names = []
    for path in sorted(folder.rglob("*")):
        name = path.relative_to(folder).as_posix()
        hidden = path.name == LOCK_NAME or (path.name.startswith(".") and path.name.endswith(PART))
        if path.is_file() and not hidden and name != SUMS_NAME:
            names.append(name)
    return tuple(names)


def compare_sums(folder: Path) -> tuple[FileFinding, ...]:
    """Each altered, missing or not yet listed file of a records folder, in the order of their names.

    Raises:
        SumsError: the list cannot be read.
        FolderError: a file cannot be read.
    """
    listed = read_sums(folder)
    present = files_in(folder)
    findings = [FileFinding("missing", n, d, None) for n, d in listed.items() if not (folder / n).is_file()]
    for name in present:
        found = digest_of_file(folder / name)
        if name not in listed:
            findings.append(FileFinding("not listed", name, None, found))
        elif listed[name] != found:
            findings.append(FileFinding("altered", name, listed[name], found))
    return tuple(sorted(findings, key=lambda f: f.name))
