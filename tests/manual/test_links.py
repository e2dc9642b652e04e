"""Every link of a manual leads somewhere inside it."""

from __future__ import annotations

from pathlib import Path
from urllib.parse import unquote, urlsplit

import pytest

from commission.manual import BuildResult
from tests.manual.pages import ReadPage, read_page

EXTERNAL = {"http", "https", "mailto"}


@pytest.fixture(scope="module", params=["example", "hostile"])
def pages(request: pytest.FixtureRequest, built: BuildResult) -> dict[Path, ReadPage]:
    """All pages of one manual."""
    result = built if request.param == "example" else request.getfixturevalue("hostile")
    site = result.first_page.parent
    return {p: read_page(p) for p in sorted(site.rglob("*.html")) if p.parent.name != "single"}


def test_every_link_and_anchor_resolves(pages: dict[Path, ReadPage]) -> None:
    """No link, picture, style sheet or script is missing, and no anchor leads nowhere."""
    broken = []
    for path, page in pages.items():
        for tag, link in page.links:
            parts = urlsplit(link)
            if parts.scheme:
                assert parts.scheme in EXTERNAL | {"data"}, (path, link)
                continue
            target = (path.parent / unquote(parts.path)).resolve() if parts.path else path
            if target.parent.name == "single":
                assert target.is_file(), target
                continue
            if not target.is_file() or (parts.fragment and unquote(parts.fragment) not in pages[target].ids):
                broken.append((path.name, tag, link))
    assert broken == []


def test_nothing_is_loaded_from_elsewhere(pages: dict[Path, ReadPage]) -> None:
    """Only links that a person presses may lead out of the folder: no picture, style or script does."""
    for path, page in pages.items():
        for tag, link in page.links:
            if urlsplit(link).scheme:
                assert tag == "a", (path, tag, link)


def test_ids_are_unique(pages: dict[Path, ReadPage]) -> None:
    """An id stands once on a page, so that a link means one place."""
    for path, page in pages.items():
        assert len(page.ids) == len(set(page.ids)), (path, sorted(i for i in page.ids if page.ids.count(i) > 1))


def test_every_page_carries_the_strict_policy_and_no_inline_code(pages: dict[Path, ReadPage]) -> None:
    """The policy is on every page, and nothing on it would need a wider one."""
    for path, page in pages.items():
        metas = [a for t, a in page.tags if t == "meta" and a.get("http-equiv") == "Content-Security-Policy"]
        assert len(metas) == 1, path
        policy = str(metas[0]["content"])
        assert policy.startswith("default-src 'none'"), path
        assert "unsafe" not in policy, path
        for tag, attributes in page.tags:
            assert "style" not in attributes, (path, tag)
            assert not any(name.startswith("on") for name in attributes), (path, tag)
            assert tag != "style", path
            is_data = attributes.get("type") == "application/json"  # which no browser runs
            assert tag != "script" or attributes.get("src") or is_data, path


def test_every_page_can_be_reached_from_the_first(built: BuildResult, pages: dict[Path, ReadPage]) -> None:
    """Following links from the first page leads to every page."""
    first = next(p for p in pages if p.name == "index.html" and not (p.parent / ".." / "index.html").is_file())
    seen, waiting = {first}, [first]
    while waiting:
        here = waiting.pop()
        for tag, link in pages[here].links:
            parts = urlsplit(link)
            if tag == "a" and not parts.scheme and parts.path:
                target = (here.parent / unquote(parts.path)).resolve()
                if target in pages and target not in seen:
                    seen.add(target)
                    waiting.append(target)
    assert {p.name for p in set(pages) - seen} == set()
    assert built.pages > 0
