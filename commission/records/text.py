"""Records as text: stable YAML, and the `filed:` block added below what a person wrote without touching it."""

from __future__ import annotations

import math
import textwrap
from collections.abc import Mapping
from pathlib import Path
from typing import Any

from commission.records.disk import digest_of

FILED_KEY = "filed"
_SEAL = "  seal: "


def dump(data: Mapping[str, Any]) -> str:
    """`data` as YAML in its own order, one line for each key and for short mappings below it."""
    import yaml

    lines = []
    for key, value in plain(data).items():
        flow = None if isinstance(value, dict | list) else False
        lines.append(
            yaml.safe_dump({key: value}, sort_keys=False, allow_unicode=True, width=110, default_flow_style=flow)
        )
    return "".join(lines)


def plain(value: Any) -> Any:
    """Mappings, lists and scalars only; empty parts left out; numbers to eight digits, which no instrument reaches.

    Raises:
        ValueError: a number is not finite (a fault of the package: nothing that cannot be calculated gets here).
    """
    if isinstance(value, Mapping):
        return {str(k): plain(v) for k, v in value.items() if v is not None and v != () and v != {} and v != []}
    if isinstance(value, list | tuple):
        return [plain(v) for v in value]
    if isinstance(value, bool | int | str):
        return value
    if isinstance(value, float):
        if not math.isfinite(value):
            raise ValueError(f"{value} cannot be filed")
        return float(f"{value:.8g}")
    return value.isoformat()


def with_filed_block(written: str, data: Mapping[str, Any], filed: Mapping[str, Any]) -> str:
    """The record as written, with the `filed:` block and its seal below.

    The text is kept letter for letter, comments included. Where nothing can be added below it (a record exported in
    braces, or closed with an end mark) it is written anew from `data`, what was read in it.
    """
    body = written.replace("\r\n", "\n").replace("\r", "\n").rstrip("\n") + "\n"
    block = f"{FILED_KEY}:\n{textwrap.indent(dump(filed), '  ')}"
    if not _can_be_extended(body, data, block):
        body = dump(data)
    unsealed = f"{body}\n{block}"
    return f"{unsealed}{_SEAL}{digest_of(unsealed.encode())}\n"


def seal_holds(content: bytes) -> bool | None:
    """Whether a filed record's seal fits the bytes above it; None where it has no `filed:` block (never filed)."""
    if f"\n{FILED_KEY}:\n".encode() not in content:
        return None
    head, mark, tail = content.rpartition(b"\n" + _SEAL.encode())
    return bool(mark) and tail.rstrip(b"\n").decode("ascii", "replace") == digest_of(head + b"\n")


def is_filed(path: Path) -> bool:
    """Whether the file at `path` is a filed record; False where it cannot be read, which its reader will tell."""
    try:
        return seal_holds(path.read_bytes()) is not None
    except OSError:
        return False


def _can_be_extended(body: str, data: Mapping[str, Any], block: str) -> bool:
    from commission.description import read_yaml
    from commission.description.positions import DescriptionError

    try:
        again = read_yaml(f"{body}\n{block}").data
    except DescriptionError:
        return False
    return isinstance(again, dict) and {k: v for k, v in again.items() if k != FILED_KEY} == dict(data)
