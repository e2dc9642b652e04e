"""Drives MkDocs from Python: generated pages bypass Markdown, the owner's own pages are converted and cleaned."""

from __future__ import annotations

import itertools
import logging
import posixpath
import re
import shutil
from collections.abc import Callable, Iterable, Mapping
from pathlib import Path
from typing import Any
from urllib.parse import quote

import jinja2
import nh3
from markupsafe import Markup
from mkdocs.config.defaults import MkDocsConfig
from mkdocs.plugins import BasePlugin
from mkdocs.structure.files import File, Files
from mkdocs.structure.nav import Navigation
from mkdocs.structure.pages import Page
from mkdocs.structure.toc import TableOfContents
from mkdocs.utils import is_markdown_file

from commission.manual import search
from commission.manual.book import Book, OwnerFile, Sheet
from commission.manual.rendering import harden, render_body

Frame = Callable[[Sheet], Mapping[str, Any]]
"""What the outer template needs to know for one page."""


class GeneratedPage(Page):
    """A page whose body comes from a template instead of Markdown."""

    def __init__(self, sheet: Sheet, body: Markup, file: File, config: MkDocsConfig) -> None:
        super().__init__(sheet.title, file, config)
        self.body = body

    def read_source(self, config: MkDocsConfig) -> None:
        """There is no source."""
        self.markdown, self.meta = "", {}

    def render(self, config: MkDocsConfig, files: Files) -> None:
        """The body is there already."""
        self.content = self.body
        self.toc = TableOfContents([])
        self.present_anchor_ids = set()
        self.links_to_anchors = {}


class _Manual(BasePlugin):  # type: ignore[type-arg,no-untyped-call]  # MkDocs leaves the plugin class unparametrised
    """Adds the pages and files, hardens the environment, gathers the search index."""

    def __init__(
        self,
        book: Book,
        env: jinja2.Environment,
        frame: Frame,
        owner: Iterable[OwnerFile],
        texts: Mapping[str, bytes],
        progress: Callable[[str], None],
    ) -> None:
        super().__init__()
        self.book, self.env, self.frame, self.texts, self.progress = book, env, frame, texts, progress
        self.owner = {f.site_path: f for f in owner}
        self.sheets: dict[str, Sheet] = {}
        self.entries: list[search.Entry] = []

    def on_files(self, files: Files, *, config: MkDocsConfig) -> Files:
        """Adds generated pages, figures and the owner's files."""
        pages = [s for s in self.book if s.template != "owner.md"]
        for n, sheet in enumerate(pages, start=1):
            self.progress(f"page {n} of {len(pages)}: {sheet.id}")
            file = File.generated(config, f"{sheet.id}.md", content="")
            GeneratedPage(sheet, render_body(self.env, self.book, sheet), file, config)
            self.sheets[file.src_uri] = sheet
            files.append(file)
        for path, content in self.texts.items():
            files.append(File.generated(config, path, content=content))
        for item in self.owner.values():
            if _left_as_it_is(item):
                continue
            file = File.generated(config, item.site_path, abs_src_path=str(item.source))
            if item.sheet is not None:
                self.sheets[file.src_uri] = item.sheet
            files.append(file)
        return files

    def on_page_content(self, html: str, *, page: Page, config: MkDocsConfig, files: Files) -> str:
        """Cleans what came from Markdown and notes the page for the search."""
        sheet = self.sheets[page.file.src_uri]
        body = html if isinstance(page, GeneratedPage) else with_wide_tables(clean(html))
        title = sheet.title if isinstance(page, GeneratedPage) else (page.title or sheet.title)
        self.entries.append(search.entry(page.file.url, title, sheet.kicker, body))
        return body

    def on_env(self, env: jinja2.Environment, *, config: MkDocsConfig, files: Files) -> jinja2.Environment:
        """MkDocs' environment has autoescape off."""
        harden(env)
        return env

    def on_page_context(
        self,
        context: Any,
        *,
        page: Page,
        config: MkDocsConfig,
        nav: Navigation,
    ) -> Any:
        """What the outer template needs."""
        sheet = self.sheets[page.file.src_uri]
        context["sheet"] = sheet
        context["title"] = sheet.title if isinstance(page, GeneratedPage) else (page.title or sheet.title)
        context["written_by_owner"] = not isinstance(page, GeneratedPage)
        context["link"] = lambda target, anchor="": self.book.link(sheet.id, target, anchor)
        context["root"] = posixpath.relpath(".", posixpath.dirname(sheet.id) or ".")
        context.update(self.frame(sheet))
        return context


def _left_as_it_is(item: OwnerFile) -> bool:
    """Evidence of a visit in Markdown: a copy with its digest, not a page of the manual."""
    return item.sheet is None and is_markdown_file(item.site_path)


_TAGS = {
    "a", "abbr", "b", "blockquote", "br", "caption", "code", "dd", "del", "div", "dl", "dt", "em", "figcaption",
    "figure", "h1", "h2", "h3", "h4", "h5", "h6", "hr", "i", "img", "li", "ol", "p", "pre", "s", "span", "strong",
    "sub", "sup", "table", "tbody", "td", "tfoot", "th", "thead", "tr", "u", "ul",
}  # fmt: skip
_ATTRIBUTES = {
    "a": {"href", "title"},
    "img": {"src", "alt", "title", "width", "height"},
    "td": {"align", "colspan", "rowspan"},
    "th": {"align", "colspan", "rowspan", "scope"},
    "ol": {"start"},
    **{f"h{n}": {"id"} for n in range(1, 7)},
}


def clean(html: str) -> Markup:
    """HTML from the owner's Markdown without anything that can run, style or phone home.

    Links keep http, https and mailto; pictures come from the folder only, so that no request leaves it.
    """

    def only_local_pictures(tag: str, attribute: str, value: str) -> str | None:
        if tag == "img" and attribute == "src" and (":" in value or value.startswith(("/", "\\"))):
            return None
        return value

    return Markup(
        nh3.clean(
            html,
            tags=_TAGS,
            attributes=_ATTRIBUTES,
            url_schemes={"http", "https", "mailto"},
            attribute_filter=only_local_pictures,
            link_rel="noopener noreferrer",
            strip_comments=True,
        )
    )


def with_wide_tables(cleaned: Markup) -> Markup:
    """Each table of a cleaned page inside a region of its own, which scrolls sideways where the screen is narrow."""
    numbers = itertools.count(1)

    def opened(_: re.Match[str]) -> str:
        label = f"Table {next(numbers)}, scrolls sideways"
        return f'<div class="wide" tabindex="0" role="region" aria-label="{label}"><table>'

    return Markup(re.sub("<table>", opened, str(cleaned)).replace("</table>", "</table></div>"))


class _Collect(logging.Handler):
    """Keeps MkDocs' warnings instead of printing them."""

    def __init__(self) -> None:
        super().__init__(logging.WARNING)
        self.messages: list[str] = []

    def emit(self, record: logging.LogRecord) -> None:
        self.messages.append(record.getMessage())


def write_site(
    book: Book,
    env: jinja2.Environment,
    *,
    templates: Path,
    frame: Frame,
    owner: Iterable[OwnerFile],
    texts: Mapping[str, bytes],
    site_name: str,
    work: Path,
    out: Path,
    progress: Callable[[str], None],
) -> list[str]:
    """Writes the whole site into `out` and returns the warnings (links of the owner's pages that lead nowhere)."""
    from mkdocs.commands.build import build as mkdocs_build

    docs = work / "docs"
    docs.mkdir()
    config = MkDocsConfig()
    config.load_dict(
        {
            "site_name": site_name,
            "docs_dir": str(docs),
            "site_dir": str(out),
            "theme": {"name": None, "custom_dir": str(templates)},
            "use_directory_urls": False,
            "plugins": [],
            "nav": [],
            "markdown_extensions": [{"tables": {"use_align_attribute": True}}, {"toc": {"toc_depth": 3}}],
            "validation": {
                "links": {"anchors": "warn", "absolute_links": "warn", "unrecognized_links": "warn"},
                "nav": {"omitted_files": "ignore"},
            },
        }
    )
    errors, warnings = config.validate()
    if errors or warnings:
        raise ValueError(f"MkDocs refuses its configuration: {errors or warnings}")
    config.theme.static_templates.clear()
    plugin = _Manual(book, env, frame, owner, texts, progress)
    config.plugins["commission_manual"] = plugin
    log = logging.getLogger("mkdocs")
    collect = _Collect()
    before = log.propagate, log.level
    log.propagate = False
    log.setLevel(logging.WARNING)
    log.addHandler(collect)
    try:
        config.plugins.on_startup(command="build", dirty=False)
        mkdocs_build(config)
        config.plugins.on_shutdown()
    finally:
        log.removeHandler(collect)
        log.propagate, log.level = before
    for item in filter(_left_as_it_is, plugin.owner.values()):
        target = out / item.site_path
        target.parent.mkdir(parents=True, exist_ok=True)
        shutil.copyfile(item.source, target)
    for name in ("sitemap.xml", "sitemap.xml.gz"):
        (out / name).unlink(missing_ok=True)
    (out / "search-index.js").write_text(search.index_script(plugin.entries), encoding="utf-8")
    return collect.messages


def page_address(sheet: Sheet) -> str:
    """The address of a page from the top of the site, quoted."""
    return quote(sheet.path)
