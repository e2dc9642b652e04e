"""Read YAML into plain data whose scalars all stay text, with the place of every key and value.

YAML 1.1 would read `no` as False, `1:30` as 90 and `010` as 8; here a person's text reaches the quantity types as it
was written. Tags, anchors and aliases are refused, so no file can build objects or expand beyond its own size.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import yaml

from commission.description.positions import DescriptionError, KeyPath, Mark, Position, Positions
from commission.description.syntax import syntax_problem
from commission.errors import Problem, shorten

MAX_BYTES = 512 * 1024
"""Largest file that is read; a description of fifty systems has about 200 kB."""
MAX_DEPTH = 20
"""Deepest nesting of lists and mappings."""
MAX_PARTS = 50_000
"""Most keys and values of a file, or of all files of a plant together; fifty systems have about ten thousand."""

_BEFORE_COMMA, _AFTER_COMMA = re.compile(r"-?\d{1,3}$"), re.compile(r"\d{3}(?!\d)")

Loader: Any = getattr(yaml, "CSafeLoader", yaml.SafeLoader)


@dataclass(frozen=True, slots=True)
class ReadFile:
    """Plain data (mappings, lists and text), the place of each part, duplicate keys found, and the bytes read."""

    data: Any
    positions: Positions
    problems: tuple[Problem, ...]
    content: bytes


def read_bytes(path: Path, file: str, limit: int = MAX_BYTES) -> bytes:
    """The content of a file that a person wrote.

    Raises:
        DescriptionError: missing, not readable, not a file, or over `limit` bytes.
    """
    try:
        if not path.is_file():
            what = "is a folder; a file is wanted" if path.is_dir() else "there is no such file"
            raise DescriptionError(Problem(what, file=file))
        if path.stat().st_size > limit:
            raise DescriptionError(
                Problem(f"the file is larger than {limit // 1024} kB", file=file, allowed="split it over several files")
            )
        with path.open("rb") as stream:
            content = stream.read(limit + 1)
    except OSError as error:
        raise DescriptionError(Problem(f"cannot be read: {error.strerror}", file=file)) from None
    except ValueError:  # a NUL in the name
        raise DescriptionError(Problem("this cannot be the name of a file", file=shorten(repr(file)))) from None
    if len(content) > limit:
        raise DescriptionError(Problem(f"the file is larger than {limit // 1024} kB", file=file))
    return content


def decode(content: bytes, file: str) -> str:
    """The text of a file in UTF-8, with or without a byte-order mark.

    Raises:
        DescriptionError: a byte that is not UTF-8, or a character that no text holds, with its line.
    """
    try:
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = content.count(b"\n", 0, error.start) + 1
        column = error.start - (content.rfind(b"\n", 0, error.start) + 1) + 1
        raise DescriptionError(
            Problem("this is not text in UTF-8", file, line, column, allowed="save the file in the encoding UTF-8")
        ) from None
    unreadable = yaml.reader.Reader.NON_PRINTABLE.search(text)
    if unreadable:
        start = unreadable.start()
        raise DescriptionError(
            Problem(
                f"the character {unreadable.group()!r} cannot stand in this file",
                file,
                text.count("\n", 0, start) + 1,
                start - text.rfind("\n", 0, start),
            )
        )
    return text


def read_yaml(source: Path | str, file: str | None = None) -> ReadFile:
    """Read one YAML file (a `Path`) or YAML text (a `str`) into plain data and positions.

    `file` is the name shown in messages, by default the name of the path. All scalars stay text. Duplicate keys are
    kept as problems of the result, so that they can be reported with those of the next stage.

    Raises:
        DescriptionError: not readable, over `MAX_BYTES`, not YAML, deeper than `MAX_DEPTH`, more than one document,
            or with tags, anchors, aliases or keys that are not plain words; with file, line and column.
    """
    if isinstance(source, Path):
        name = file or source.name
        content = read_bytes(source, name)
    else:
        name = file or "text"
        content = source.encode("utf-8", "replace")
        if len(content) > MAX_BYTES:
            raise DescriptionError(Problem(f"the text is larger than {MAX_BYTES // 1024} kB", file=name))
    text = decode(content, name)
    builder = _Builder(name)
    try:
        builder.read(yaml.parse(text, Loader=Loader))
    except yaml.MarkedYAMLError as error:
        raise DescriptionError(syntax_problem(error, name, text, MAX_DEPTH)) from None
    except (yaml.YAMLError, RecursionError) as error:
        raise DescriptionError(Problem(f"this is not YAML: {shorten(str(error))}", name, 1, 1)) from None
    return ReadFile(builder.root, builder.positions, tuple(builder.problems), content)


@dataclass(slots=True)
class _Open:
    """A list or mapping being read: where its next value goes."""

    node: dict[str, Any] | list[Any]
    path: KeyPath
    key: str | None = None
    key_place: Position | None = None
    skip: bool = False


@dataclass(slots=True)
class _Builder:
    """Builds plain data from parse events without recursion, so that depth and size stay bounded."""

    file: str
    root: Any = None
    positions: Positions = field(default_factory=Positions)
    problems: list[Problem] = field(default_factory=list)
    stack: list[_Open] = field(default_factory=list)
    parts: int = 0

    def read(self, events: Iterator[Any]) -> None:
        documents = 0
        for event in events:
            if isinstance(event, yaml.DocumentStartEvent):
                documents += 1
                if documents > 1:
                    self.refuse(event, "one file holds one document; a second one starts here")
            elif isinstance(event, yaml.NodeEvent):
                self.parts += 1
                if self.parts > 2 * MAX_PARTS:
                    self.refuse(event, f"the file holds more than {MAX_PARTS} keys and values")
                self.check_node(event)
                self.node(event)
            elif isinstance(event, yaml.CollectionEndEvent):
                self.stack.pop()
        if self.root is None:
            raise DescriptionError(Problem("the file is empty", self.file, 1, 1))

    def place(self, event: Any) -> Position:
        return Position(self.file, event.start_mark.line + 1, event.start_mark.column + 1)

    def refuse(self, event: Any, message: str) -> None:
        place = self.place(event)
        raise DescriptionError(*self.problems, Problem(message, self.file, place.line, place.column))

    def check_node(self, event: Any) -> None:
        if isinstance(event, yaml.AliasEvent):
            self.refuse(event, f"an alias (*{shorten(str(event.anchor), 40)}) is not allowed; write the text again")
        if event.anchor is not None:
            self.refuse(event, f"an anchor (&{shorten(event.anchor, 40)}) is not allowed here; quote text with an &")
        if event.tag is not None:
            self.refuse(event, f"a tag ({shorten(event.tag, 40)}) is not allowed here; quote text that starts with !")

    def node(self, event: Any) -> None:
        place = self.place(event)
        scalar = isinstance(event, yaml.ScalarEvent)
        top = self.stack[-1] if self.stack else None
        if top is not None and isinstance(top.node, dict) and top.key is None:
            if not scalar:
                self.refuse(event, "a key must be a plain word, not a list or mapping")
            self.take_key(top, event.value, place)
            return
        value: Any = event.value if scalar else ([] if isinstance(event, yaml.SequenceStartEvent) else {})
        path = self.attach(top, value, place, event.value if scalar else None)
        if not scalar:
            if len(self.stack) >= MAX_DEPTH:
                self.refuse(event, f"nested more than {MAX_DEPTH} levels deep")
            self.stack.append(_Open(value, path))

    def take_key(self, top: _Open, key: str, place: Position) -> None:
        top.key, top.key_place = key, place
        if self.joined_by_comma(top, key, place):
            return
        top.skip = key in top.node
        if top.skip:
            path = (*top.path, key)
            first = self.positions.marks[path].key
            self.problems.append(
                Problem(
                    f"{shorten(key, 60)!r} is written twice here; it stands in line {first.line} already",
                    self.file,
                    place.line,
                    place.column,
                    ".".join(map(str, path)),
                )
            )

    def joined_by_comma(self, top: _Open, key: str, place: Position) -> bool:
        """Whether `key` is the rest of a number that a thousands comma cut in two: `{flow: 1,200 m3/h}`.

        The number is put together again, so that this slip is told once and not as two others.
        """
        assert isinstance(top.node, dict)
        before, value = next(reversed(top.node.items()), ("", ""))
        if not (_AFTER_COMMA.match(key) and isinstance(value, str) and _BEFORE_COMMA.match(value)):
            return False
        whole = f"{value}{key}"
        self.problems.append(
            Problem(
                "between braces a comma ends the value",
                self.file,
                place.line,
                place.column,
                ".".join(map(str, (*top.path, before))),
                shorten(f"{value},{key}", 60),
                allowed=f"a number without thousands comma, such as {shorten(whole, 60)}",
            )
        )
        top.node[before], top.skip = whole, True
        return True

    def attach(self, top: _Open | None, value: Any, place: Position, text: str | None) -> KeyPath:
        """Put `value` where it belongs; the second of two equal keys is read, but not kept."""
        if top is None:
            self.root = value
            self.positions.marks[()] = Mark(place, place, text)
            return ()
        if isinstance(top.node, list):
            path: KeyPath = (*top.path, len(top.node))
            top.node.append(value)
            self.positions.marks.setdefault(path, Mark(place, place, text))
            return path
        assert top.key is not None
        assert top.key_place is not None
        path = (*top.path, top.key)
        if not top.skip:
            top.node[top.key] = value
            self.positions.marks.setdefault(path, Mark(top.key_place, place, text))
        top.key = None
        return path
