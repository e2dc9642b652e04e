"""The pages of one manual before they are rendered: paths, titles, groups and the links between them."""

from __future__ import annotations

import posixpath
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any
from urllib.parse import quote


@dataclass(frozen=True, slots=True)
class Sheet:
    """One generated page.

    `id` is its path without `.html`; `group` is `plant`, `reference`, `owner` or `system:ID`; `template` stands in
    `site_templates/pages/`; `context` is what the template may use; `kicker` is the line above the title; `scripts` are
    files of `site_templates/scripts/` that this page needs, in their order.
    """

    id: str
    title: str
    group: str
    template: str
    context: Mapping[str, Any] = field(default_factory=dict)
    kicker: str = ""
    short: str = ""
    listed: bool = True
    paper: bool = False
    scripts: tuple[str, ...] = ()

    @property
    def label(self) -> str:
        """The title as navigation shows it."""
        return self.short or self.title

    @property
    def path(self) -> str:
        """The file inside the site."""
        return f"{self.id}.html"


@dataclass(frozen=True, slots=True)
class OwnerFile:
    """A file of the plant folder that becomes part of the site: a Markdown page (`sheet` set) or a copied file."""

    site_path: str
    source: Path
    sheet: Sheet | None = None


class Book:
    """All pages by id, in reading order. A link to a page that does not exist is an error of the build."""

    def __init__(self) -> None:
        self._sheets: dict[str, Sheet] = {}
        self._files: set[str] = set()

    def add(self, sheet: Sheet) -> None:
        """Adds a page.

        Raises:
            ValueError: two pages share an id (a fault of the package).
        """
        if sheet.id in self._sheets:
            raise ValueError(f"two pages are called {sheet.id}")
        self._sheets[sheet.id] = sheet

    def add_file(self, path: str) -> None:
        """Makes a copied file or a figure known, so that pages may link to it."""
        self._files.add(path)

    def __iter__(self) -> Iterator[Sheet]:
        return iter(self._sheets.values())

    def __contains__(self, key: object) -> bool:
        return key in self._sheets

    def __len__(self) -> int:
        return len(self._sheets)

    def get(self, key: str) -> Sheet:
        """The page with this id."""
        return self._sheets[key]

    def group(self, name: str) -> tuple[Sheet, ...]:
        """The listed pages of one group, in reading order."""
        return tuple(s for s in self if s.group == name and s.listed)

    def link(self, here: str, target: str, anchor: str = "") -> str:
        """The relative address of page or file `target` as seen from page `here`.

        Raises:
            KeyError: no page or file of that name exists.
        """
        if target in self._sheets:
            path = f"{target}.html"
        elif target in self._files:
            path = target
        else:
            raise KeyError(f"page {here} links to {target}, which does not exist")
        start = posixpath.dirname(here) or "."
        relative = quote(posixpath.relpath(path, start))
        return f"{relative}#{quote(anchor)}" if anchor else relative


def slug(text: str) -> str:
    """`text` as a file name and anchor: lower case, letters, digits and hyphens."""
    out = "".join(c if c.isascii() and c.isalnum() else "-" for c in text.lower())
    parts = [p for p in out.split("-") if p]
    return "-".join(parts)


def slugs(keys: Iterator[str] | tuple[str, ...]) -> dict[str, str]:
    """A file name for each key, all different even where two keys differ only in signs or case."""
    table: dict[str, str] = {}
    used: set[str] = set()
    for key in keys:
        base = slug(key) or "item"
        name, n = base, 2
        while name in used:
            name, n = f"{base}-{n}", n + 1
        used.add(name)
        table[key] = name
    return table
