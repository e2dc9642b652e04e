"""Day sheets and checklist of each system once more as one file each, for tablets that open single files only.

Style and script stand inside the file, allowed by their hashes alone; links to other pages become plain words.
"""

from __future__ import annotations

import base64
import hashlib
import re
from pathlib import Path

import jinja2
from markupsafe import Markup

from commission.manual.book import Book, Sheet
from commission.manual.gather import PlantData, SystemData
from commission.manual.paper import paper_style
from commission.manual.rendering import render_body

KINDS = (("live-sheet", "Live day sheet"), ("day-sheet", "Day sheet for pencil"), ("checklist", "Checklist"))
"""The pages that exist as single files too."""

_AWAY = re.compile(r'<a (?:class="[^"]*" )?href="(?!#)[^"]*"[^>]*>(.*?)</a>', re.DOTALL)


def single_path(data: SystemData, kind: str) -> str:
    """Where the single file of a page is; its name says what it is when it lies alone in a download folder."""
    return f"single/{data.slug}-{kind}.html"


def policy(*, style: str, script: str) -> str:
    """Nothing is fetched and nothing runs but these two texts (Content Security Policy level 3, hash sources)."""
    return (
        f"default-src 'none'; style-src '{_hash(style)}'; script-src '{_hash(script)}'; img-src data:; "
        "base-uri 'none'; form-action 'none'"
    )


def _hash(text: str) -> str:
    return "sha256-" + base64.b64encode(hashlib.sha256(text.encode("utf-8")).digest()).decode("ascii")


def without_links_away(body: Markup) -> Markup:
    """The body with links inside the page only: other pages are not there."""
    return Markup(_AWAY.sub(r"\1", str(body)))


def single_files(book: Book, env: jinja2.Environment, templates: Path, plant: PlantData) -> dict[str, bytes]:
    """The text of each single file by its place in the site."""
    return {
        single_path(data, kind): one_file(book, env, templates, plant, book.get(data.page(kind)))
        for data in plant.systems
        for kind, _ in KINDS
    }


def one_file(book: Book, env: jinja2.Environment, templates: Path, plant: PlantData, sheet: Sheet) -> bytes:
    """One page as a file that needs no other."""
    paper = paper_style(plant.name, plant.loaded.digest).decode("utf-8")
    look = _tight((templates / "style" / "manual.css").read_text(encoding="utf-8"))
    style = f"\n{look}\n@media print {{\n{paper}\n}}\n"
    names = ("page.js", *sheet.scripts)
    script = "\n" + "\n".join(_tight((templates / "scripts" / n).read_text(encoding="utf-8")) for n in names) + "\n"
    text = env.get_template("single.html").render(
        sheet=sheet,
        plant_name=plant.name,
        digest=plant.loaded.digest,
        policy=policy(style=style, script=script),
        style=Markup(style),
        script=Markup(script),
        body=without_links_away(render_body(env, book, sheet)),
    )
    return text.encode("utf-8")


def _tight(text: str) -> str:
    """A style or a script without its indentation: none of ours has words that run over several lines."""
    return re.sub(r"\n[ \t]+", "\n", text)


class LoneBook(Book):
    """The book of a page that stands alone: its links are taken out, so that they need not lead anywhere."""

    def link(self, here: str, target: str, anchor: str = "") -> str:
        """An address that `without_links_away` takes out."""
        return f"{target}.html"
