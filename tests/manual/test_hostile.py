"""Text from a description is never code, and the owner's Markdown is cleaned."""

from __future__ import annotations

from pathlib import Path

import pytest

from commission.manual import BuildResult
from commission.manual.site import clean
from tests.manual.pages import read_page
from tests.manual.plants import BOLD, IMAGE, LINK, SCRIPT


@pytest.fixture(scope="module")
def folder(hostile: BuildResult) -> Path:
    """The manual of the hostile plant."""
    return hostile.first_page.parent


def test_hostile_names_show_as_text(folder: Path) -> None:
    """The name of the plant stands on the front page letter by letter: tags, links and stars included."""
    page = read_page(folder / "index.html")
    assert f"Works {SCRIPT} {LINK} {BOLD} & Co" in page.text
    assert IMAGE in page.text
    assert f"{LINK} {SCRIPT}" in page.text


def test_no_page_holds_a_foreign_tag_or_address(folder: Path) -> None:
    """No script of the description, no handler, no frame and no javascript: address is on any page.

    A single file holds one style and one script of ours, whose hashes another test looks at.
    """
    for path in folder.rglob("*.html"):
        page = read_page(path)
        single = path.parent.name == "single"
        tags = [(t, a) for t, a in page.tags if (t, a.get("type")) != ("script", "application/json")]  # data, never run
        assert [t for t, _ in tags if t in ("style", "script") and single] == ["style", "script"] * single, path
        for tag, attributes in tags:
            assert tag not in {"iframe", "object", "embed"}, (path, tag)
            assert single or tag != "style", path
            if tag == "script" and not single:
                source = str(attributes.get("src"))
                assert source.endswith((".js",)), path
                assert "scripts/" in source, path
            if tag == "img":
                assert str(attributes.get("src")).endswith(".svg") or "pages" in path.parts, path
            assert not any(name.startswith("on") for name in attributes), (path, tag)
        assert not any(link.lower().startswith("javascript") for _, link in page.links), path


def test_owner_page_keeps_what_is_harmless(folder: Path) -> None:
    """Headings, tables and links for people stay; everything that could run, style or fetch is gone."""
    page = read_page(folder / "pages" / "call & ask.html")
    links = [link for tag, link in page.links if tag == "a"]
    assert "https://example.org/" in links
    assert "mailto:someone@example.org" in links
    assert ("th", {"align": "right"}) in [(t, {k: v for k, v in a.items() if k == "align"}) for t, a in page.tags]
    assert not any("example.org" in link for tag, link in page.links if tag != "a")


def test_files_that_can_run_are_not_copied(hostile: BuildResult, folder: Path) -> None:
    """A script and a page of the owner stay out, and so does a link that leads out of the folder; the build says so."""
    assert not (folder / "documents" / "trap.html").exists()
    assert not (folder / "pages" / "run.js").exists()
    assert not (folder / "documents" / "outside.txt").exists()
    assert (folder / "documents" / "drawing.txt").read_text() == "a drawing"
    assert any("trap.html" in w for w in hostile.warnings)
    assert any("run.js" in w for w in hostile.warnings)


def test_a_system_that_cannot_be_calculated_says_why_and_stops_no_other(hostile: BuildResult, folder: Path) -> None:
    """The reason stands in the result and on its page; the other system has its readings."""
    assert set(hostile.not_calculated) == {"impossible"}
    reason = hostile.not_calculated["impossible"]
    assert reason
    page = read_page(folder / "systems" / "impossible" / "how-it-should-run.html")
    assert "Not calculated" in page.text
    assert reason[:40] in page.text
    good = read_page(folder / "systems" / "good" / "how-it-should-run.html")
    assert "Suction pressure" in good.text
    assert (folder / "systems" / "impossible" / "day-sheet.html").is_file()


def test_tables_of_the_owner_scroll_inside_themselves(folder: Path) -> None:
    """Each table of a Markdown page lies in a region with a name of its own, and the page stays well formed."""
    text = (folder / "pages" / "call & ask.html").read_text(encoding="utf-8")
    assert text.count("<table>") == text.count("</table></div>") == 1
    assert 'aria-label="Table 1, scrolls sideways"' in text


@pytest.mark.parametrize(
    "dirty",
    [
        "<script>alert(1)</script>",
        '<a href="javascript:alert(1)">x</a>',
        '<a href="JaVaScRiPt:alert(1)">x</a>',
        '<a href="data:text/html,x">x</a>',
        '<img src="https://example.org/x.png">',
        '<img src="//example.org/x.png">',
        '<img src="x.png" onerror="alert(1)">',
        '<p style="background: url(https://example.org)">x</p>',
        '<svg onload="alert(1)"></svg>',
        '<form action="https://example.org"><input></form>',
        '<link rel="stylesheet" href="https://example.org/x.css">',
        '<meta http-equiv="refresh" content="0;url=https://example.org">',
        '<base href="https://example.org/">',
    ],
)
def test_cleaning_leaves_nothing_that_runs_or_fetches(dirty: str) -> None:
    """Each known way to run, style or fetch is gone after cleaning."""
    cleaned = str(clean(dirty)).lower()
    for word in ("script", "alert", "onerror", "onload", "style", "example.org", "data:", "<form", "<svg", "<meta"):
        assert word not in cleaned, cleaned
