"""A description written out as a person would write it: short parts on one line, text quoted only where it must be."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from typing import Any

from commission.description.starting import HINT

_WIDTH = 110
_NEVER_PLAIN = set("{}[],#:\"'\\")
_NOT_FIRST = ("", *"-?=&*!|>%@`")
_ORDER = (
    "name", "duty", "serves", "refrigerant", "charge", "installed_on", "spaces", "nameplate", "heat_source",
    "heat_sink",    "evaporator", "condenser", "controls", "rated_points",
)  # fmt: skip
_TO_ADD = """\
    # Add what is known; each fact replaces an assumption that the manual would show instead:
    #charge: {charge}
    #nameplate: {{allowable_pressure_low: {low}, allowable_pressure_high: {high}}}
    #compressor: {{type: scroll, drive: fixed speed}}
    #expansion: {{device: thermostatic valve, superheat: {superheat}}}
    #controls: {{high_pressure_limit: {limit}}}
"""
_AS_WRITTEN = {
    "metric": {"altitude": "310 m", "charge": "0.9 kg", "low": "17 bar g", "high": "28 bar g", "superheat": "6 K",
               "limit": "22 bar g"},
    "us_customary": {"altitude": "1000 ft", "charge": "2 lb", "low": "250 psig", "high": "450 psig",
                     "superheat": "10 °F difference", "limit": "400 psig"},
}  # fmt: skip


def description_text(
    data: Mapping[str, Any],
    schedule: str,
    lines: Mapping[str, int],
    notes: Mapping[str, list[str]],
    titles: Sequence[str] = (),
) -> str:
    """The text of `plant.yaml`.

    `lines` says in which line of the schedule each system stands; `notes` are the cells of columns that a description
    has no key for, kept as comments, and so are the `titles` above the headings.
    """
    origin = f"# Made from {_comment(schedule)}, one system for each row."
    head = f"{HINT}#\n{origin} Look through it, then add what is known.\n"
    head += "".join(f"# {_comment(title)}\n" for title in titles)
    parts = [head, "plant:\n", *_block(data["plant"], 2)]
    such_as = _AS_WRITTEN[data["plant"]["units"]]
    parts.append(
        f"  #altitude: {such_as['altitude']}    # sets the barometric pressure, and with it every gauge pressure\n"
    )
    if "spaces" in data:
        parts += ["\nspaces:\n", *_block(data["spaces"], 2)]
        parts.append("  # for each: add floor_area, height, occupancy, or outdoors: yes\n")
    parts.append("\nsystems:\n")
    for identity, system in data["systems"].items():
        parts.append(
            f"  {scalar(identity)}:{' ' * max(1, 37 - len(identity))}# line {lines[identity]} of the schedule\n"
        )
        ordered = {key: system[key] for key in sorted(system, key=_place)}
        parts += [*_block(ordered, 4), *(f"    # {_comment(note)}\n" for note in notes.get(identity, ()))]
        parts += [*_lines_to_add(system, such_as), "\n"]
    return "".join(parts).rstrip("\n") + "\n"


def _lines_to_add(system: Mapping[str, Any], such_as: Mapping[str, str]) -> Iterator[str]:
    """The lines of `_TO_ADD` whose keys the system does not have yet, with values in the units of the plant."""
    for line in _TO_ADD.format(**such_as).splitlines(keepends=True):
        key = line.strip().lstrip("#").partition(":")[0]
        if key not in system:
            yield line


def _place(key: str) -> int:
    return _ORDER.index(key) if key in _ORDER else len(_ORDER)


def _block(data: Mapping[str, Any], indent: int) -> Iterator[str]:
    """The lines of a mapping: each value on its line where it fits, else below its key."""
    space = " " * indent
    for key, value in data.items():
        line = f"{space}{scalar(key)}: {_flow(value)}\n"
        if isinstance(value, str) or (isinstance(value, Mapping) and len(line) <= _WIDTH):
            yield line
        elif isinstance(value, Mapping):
            yield f"{space}{scalar(key)}:\n"
            yield from _block(value, indent + 2)
        else:
            yield f"{space}{scalar(key)}:\n"
            for one in value:
                first, *rest = _block(one, indent + 4)
                yield f"{space}  - {first.lstrip()}"
                yield from rest


def _flow(value: Any) -> str:
    if isinstance(value, Mapping):
        return "{" + ", ".join(f"{scalar(k)}: {_flow(v)}" for k, v in value.items()) + "}"
    if isinstance(value, list):
        return "[" + ", ".join(_flow(one) for one in value) + "]"
    return scalar(value)


def scalar(text: str) -> str:
    """`text` as a YAML scalar that reads back as itself inside any list or mapping: plain where it can, else quoted."""
    number = text[:1] == "-" and text[1:2].isdigit()
    safe_start = text[:1] not in _NOT_FIRST or number
    if text == text.strip() and text.isprintable() and safe_start and not set(text) & _NEVER_PLAIN:
        return text
    return '"' + "".join(map(_escaped, text)) + '"'


def _escaped(character: str) -> str:
    """A character inside double quotes (YAML 1.1, 5.6)."""
    if character in '"\\':
        return f"\\{character}"
    code = ord(character)
    if character.isprintable():
        return character
    return f"\\x{code:02x}" if code < 0x100 else f"\\u{code:04x}" if code < 0x10000 else f"\\U{code:08x}"


def _comment(text: str) -> str:
    return "".join(c if c.isprintable() else " " for c in text)
