"""What surrounds every page: navigation, policy, the page that follows."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from itertools import pairwise
from typing import Any

from commission.manual.book import Book, Sheet
from commission.manual.gather import PlantData

POLICY = (
    "default-src 'none'; script-src 'self'; style-src 'self'; img-src 'self' data:; font-src 'self'; base-uri 'none'; "
    "form-action 'none'"
)
"""Nothing leaves the folder and nothing inline runs."""

SERVED_POLICY = POLICY.replace("script-src 'self'", "script-src 'self' 'unsafe-inline'") + "; connect-src 'self'"
"""For `build --serve` only: the reload script is inline and asks the local server."""

_FEW_SYSTEMS = 12


@dataclass(frozen=True, slots=True)
class NavItem:
    """One link of the navigation."""

    title: str
    href: str
    current: bool


@dataclass(frozen=True, slots=True)
class NavSection:
    """A heading with links; `line` marks a system, whose pages hang on one line."""

    title: str
    href: str | None
    current: bool
    line: bool
    items: tuple[NavItem, ...]


class Frames:
    """Makes the outer context of each page; the sections that do not change are made once."""

    def __init__(self, book: Book, plant: PlantData, version: str, serving: bool) -> None:
        self.book, self.plant, self.version, self.serving = book, plant, version, serving

    def __call__(self, sheet: Sheet) -> Mapping[str, Any]:
        """The context of one page."""
        return {
            "language": "en-GB",
            "policy": SERVED_POLICY if self.serving else POLICY,
            "plant_name": self.plant.name,
            "version": self.version,
            "digest": self.plant.loaded.digest,
            "navigation": self.navigation(sheet),
            "next_page": self._next(sheet),
        }

    def navigation(self, sheet: Sheet) -> tuple[NavSection, ...]:
        """The plant, its systems (the pages of the present one), the owner's pages, reference."""
        sections = [self._section("The plant", self.book.group("plant"), sheet)]
        few = len(self.plant.systems) <= _FEW_SYSTEMS
        for data in self.plant.systems:
            pages = self.book.group(data.group)
            here = sheet.group == data.group
            if pages and (here or few):
                first = self.book.link(sheet.id, pages[0].id)
                items = self._items(pages, sheet) if here or len(self.plant.systems) == 1 else ()
                sections.append(NavSection(data.name, None if items else first, False, bool(items), items))
        for title, group in (("The owner's pages", "owner"), ("Reference", "reference")):
            pages = self.book.group(group)
            if pages:
                sections.append(self._section(title, pages, sheet))
        return tuple(sections)

    def _section(self, title: str, pages: tuple[Sheet, ...], sheet: Sheet) -> NavSection:
        return NavSection(title, None, False, False, self._items(pages, sheet))

    def _items(self, pages: Iterable[Sheet], sheet: Sheet) -> tuple[NavItem, ...]:
        return tuple(NavItem(p.label, self.book.link(sheet.id, p.id), p.id == sheet.id) for p in pages)

    def _next(self, sheet: Sheet) -> NavItem | None:
        """The page that follows in the same system."""
        if not sheet.group.startswith("system:"):
            return None
        pages = self.book.group(sheet.group)
        for here, after in pairwise(pages):
            if here.id == sheet.id:
                return NavItem(after.label, self.book.link(sheet.id, after.id), False)
        return None
