"""Reads built pages without a browser: links, anchors, texts."""

from __future__ import annotations

from dataclasses import dataclass, field
from html.parser import HTMLParser
from pathlib import Path


@dataclass
class ReadPage:
    """What one page holds."""

    links: list[tuple[str, str]] = field(default_factory=list)
    ids: list[str] = field(default_factory=list)
    tags: list[tuple[str, dict[str, str | None]]] = field(default_factory=list)
    text: str = ""


class _Reader(HTMLParser):
    def __init__(self) -> None:
        super().__init__(convert_charrefs=True)
        self.page = ReadPage()

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        found = dict(attrs)
        self.page.tags.append((tag, found))
        if found.get("id"):
            self.page.ids.append(str(found["id"]))
        for name in ("href", "src", "data-index"):
            if found.get(name):
                self.page.links.append((tag, str(found[name])))

    def handle_data(self, data: str) -> None:
        self.page.text += data


def read_page(path: Path) -> ReadPage:
    """Links, ids, tags and text of a page."""
    reader = _Reader()
    reader.feed(path.read_text(encoding="utf-8"))
    reader.close()
    return reader.page
