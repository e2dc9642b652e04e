"""Day sheet and checklist as one file each: nothing beside them, nothing fetched, nothing that leads away."""

from __future__ import annotations

import base64
import hashlib
import re
from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING

import pytest
from markupsafe import Markup

from commission.manual import BuildResult
from commission.manual.single import without_links_away
from tests.manual.pages import read_page

if TYPE_CHECKING:
    from playwright.sync_api import BrowserContext


@pytest.fixture(scope="module", params=["built", "hostile"])
def files(request: pytest.FixtureRequest) -> list[Path]:
    """The single files of one manual."""
    result: BuildResult = request.getfixturevalue(request.param)
    return sorted((result.first_page.parent / "single").glob("*.html"))


def test_links_away_become_words() -> None:
    """A link inside the page stays, any other leaves its words."""
    body = Markup('<a href="#a">in</a> <a href="x.html#b">out <b>side</b></a> <a class="c" href="../y.html">far</a>')
    assert without_links_away(body) == '<a href="#a">in</a> out <b>side</b> far'


def test_each_system_has_both_and_they_stand_alone(files: list[Path]) -> None:
    """No link, style, script or picture of a single file is another file."""
    assert {p.stem.rpartition("-")[2] for p in files} == {"sheet", "checklist"}
    for path in files:
        page = read_page(path)
        assert [link for _, link in page.links if not link.startswith("#")] == [], path
        assert {link[1:] for _, link in page.links} <= set(page.ids), path


def test_the_policy_allows_just_what_is_inside(files: list[Path]) -> None:
    """The hashes of the policy are those of the one style and the one script, and nothing else may run."""
    for path in files:
        text = path.read_text(encoding="utf-8")
        for element, directive in (("style", "style-src"), ("script", "script-src")):
            inside = re.findall(f"<{element}>(.*?)</{element}>", text, re.DOTALL)
            assert len(inside) == 1, (path, element)
            digest = base64.b64encode(hashlib.sha256(inside[0].encode()).digest()).decode()
            assert f"{directive} &#39;sha256-{digest}&#39;;".replace("+", "&#43;") in text.replace("+", "&#43;"), path
        assert "unsafe" not in text.partition("<title>")[0]


def test_a_single_file_opens_alone(look: Callable[..., BrowserContext], built: BuildResult, tmp_path: Path) -> None:
    """Copied away from its manual it shows itself with its style, without a message and as wide as a phone."""
    source = built.first_page.parent / "single" / "cold-room-day-sheet.html"
    alone = tmp_path / source.name
    alone.write_bytes(source.read_bytes())
    page = look(width=390).new_page()
    heard: list[str] = []
    page.on("console", lambda message: heard.append(message.text))
    page.on("pageerror", lambda error: heard.append(str(error)))
    page.goto(alone.as_uri())
    assert heard == []
    assert page.inner_text("h1") == "Day sheet"
    assert page.is_visible("[data-print]")
    assert page.evaluate("getComputedStyle(document.body).backgroundColor") != "rgba(0, 0, 0, 0)"
    assert page.evaluate("document.documentElement.scrollWidth") <= 390
