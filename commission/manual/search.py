"""The search index: a classic script, loaded on first use, that a plain scan in the browser reads."""

from __future__ import annotations

import json
import re
from collections.abc import Iterable
from dataclasses import dataclass
from html.parser import HTMLParser

_EXCERPT = 300
_WORDS = 600
_SKIP = {"script", "style", "svg"}
_HEADINGS = {"h1", "h2", "h3"}


@dataclass(frozen=True, slots=True)
class Entry:
    """One page in the index."""

    path: str
    title: str
    kicker: str
    headings: tuple[str, ...]
    text: str


class _Text(HTMLParser):
    """Collects the visible text and the headings of a page body."""

    def __init__(self) -> None:
        super().__init__(convert_charrefs=True)
        self.parts: list[str] = []
        self.headings: list[str] = []
        self._skip = 0
        self._heading: list[str] | None = None

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self._skip += tag in _SKIP
        if tag in _HEADINGS:
            self._heading = []

    def handle_endtag(self, tag: str) -> None:
        self._skip -= tag in _SKIP
        if tag in _HEADINGS and self._heading is not None:
            self.headings.append(" ".join("".join(self._heading).split()))
            self._heading = None

    def handle_data(self, data: str) -> None:
        if self._skip:
            return
        if self._heading is not None:
            self._heading.append(data)
        else:
            self.parts.append(data)


def entry(path: str, title: str, kicker: str, body: str) -> Entry:
    """The entry of a page from its rendered body."""
    reader = _Text()
    reader.feed(body)
    reader.close()
    return Entry(path, title, kicker, tuple(reader.headings), " ".join(" ".join(reader.parts).split()))


def index_script(entries: Iterable[Entry]) -> str:
    """The index as a classic script: `window.MANUAL_INDEX = [...]`.

    Each entry holds address, title, kicker, headings, the first 300 characters, and each further word once, in lower
    case, so that a serial number deep in a page is found too.
    """
    rows = []
    for e in entries:
        shown = e.text[:_EXCERPT]
        words = dict.fromkeys(re.findall(r"[^\s,;:()|]+", e.text.lower()))
        rows.append([e.path, e.title, e.kicker, list(e.headings), shown, " ".join(list(words)[:_WORDS])])
    data = json.dumps(rows, ensure_ascii=True, separators=(",", ":")).replace("<", "\\u003c")
    return f"window.MANUAL_INDEX={data};\n"
