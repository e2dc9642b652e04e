"""The Jinja environment of the pages: autoescape always, an unknown name is an error, units by filter."""

from __future__ import annotations

from functools import partial
from pathlib import Path
from typing import Any

import jinja2
from markupsafe import Markup

from commission.manual.book import Book, Sheet
from commission.manual.showing import sourced
from commission.quantities import Display


def environment(templates: Path, display: Display) -> jinja2.Environment:
    """The environment of the page bodies. Text is escaped everywhere; nothing is undefined silently."""
    env = jinja2.Environment(
        loader=jinja2.FileSystemLoader([templates]),
        autoescape=True,
        undefined=jinja2.StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
        auto_reload=False,
    )
    harden(env)
    env.globals["display"] = display
    env.filters["sourced"] = sourced
    return env


def harden(env: jinja2.Environment) -> None:
    """Autoescape and strict undefined names, for MkDocs' own environment too."""
    env.autoescape = True
    env.undefined = jinja2.StrictUndefined


def render_body(env: jinja2.Environment, book: Book, sheet: Sheet) -> Markup:
    """The body of one page as safe HTML."""
    link = partial(book.link, sheet.id)
    context: dict[str, Any] = {"sheet": sheet, "book": book, "link": link, **sheet.context}
    return Markup(env.get_template(f"pages/{sheet.template}").render(context))
