"""A build: what it writes, that it is the same each time, and that a failing one harms nothing."""

from __future__ import annotations

import hashlib
import json
from pathlib import Path

import pytest

from commission.description import DescriptionError
from commission.errors import InputError
from commission.manual import BuildResult, FolderStore, build, templates_folder
from commission.manual.store import kept
from tests.manual.plants import REPORT, copy_plant, write_tiny_plant


def _digests(folder: Path) -> dict[str, str]:
    files = (p for p in sorted(folder.rglob("*")) if p.is_file())
    return {p.relative_to(folder).as_posix(): hashlib.sha256(p.read_bytes()).hexdigest() for p in files}


@pytest.fixture
def tiny(tmp_path: Path) -> Path:
    """A plant that is built quickly."""
    return write_tiny_plant(tmp_path / "tiny" / "plant")


def test_first_page_and_pages_of_each_system_are_there(built: BuildResult, site: Path) -> None:
    """The result names the first page, and the system has every page that the rooms can fill."""
    assert built.first_page == site / "index.html"
    assert built.not_calculated == {}
    for page in (
        "what-it-is", "how-it-should-run", "saturation-table", "safety-figures", "checklist", "before-the-visit",
        "test-sheet", "day-sheet", "records", "assumptions",
    ):  # fmt: skip
        assert (site / "systems" / "cold-room" / f"{page}.html").is_file(), page
    for page in ("emergency-card", "open-items", "findings", "instruments", "documents", "methods", "search"):
        assert (site / f"{page}.html").is_file(), page
    assert len([p for p in site.rglob("*.html") if p.parent.name != "single"]) == built.pages


def test_evidence_in_markdown_is_copied_as_it_is(site: Path) -> None:
    """A filed attachment keeps its digest; it is no page of the manual."""
    (copied,) = (site / "records" / "attachments").rglob(REPORT)
    assert copied.read_text(encoding="utf-8") == "# Report\n"
    assert not copied.with_suffix(".html").exists()


def test_a_record_shows_what_was_answered(site: Path) -> None:
    """The act as the checklist words it, the answer, and what was said beside it."""
    (page,) = (site / "systems" / "cold-room").glob("record-2026-04-21-*.html")
    text = page.read_text(encoding="utf-8")
    assert "What was answered" in text
    assert "Read the superheat at the evaporator outlet" in text
    assert ">6.1 K<" in text
    assert "valve closed by half a turn" in text


def test_nothing_that_changes_by_date_is_written(site: Path) -> None:
    """No site map (it carries the day of the build), and no trace of the build folder in any page."""
    assert not list(site.glob("sitemap*"))
    for page in site.rglob("*.html"):
        assert str(site.parent) not in page.read_text(encoding="utf-8")


def test_two_builds_are_the_same_to_the_byte(hostile: BuildResult, hostile_plant: Path, tmp_path: Path) -> None:
    """Another folder, another run, figures out of a cold store and then out of a warm one: the same bytes."""
    store = FolderStore(tmp_path / "store")
    digests = _digests(hostile.first_page.parent)
    for name in ("cold", "warm"):
        build(hostile_plant, tmp_path / name, cache=store)
        assert _digests(tmp_path / name) == digests
    assert list((tmp_path / "store").iterdir())


def test_a_store_that_cannot_be_written_means_compute(tmp_path: Path) -> None:
    """The store is a file where a folder is wanted: nothing is kept, nothing is raised, and the value is made."""
    blocked = tmp_path / "file"
    blocked.write_text("no folder")
    store = FolderStore(blocked)
    assert [kept(store, ("a", 1), lambda: b"made") for _ in range(2)] == [b"made", b"made"]
    assert store.get("anything") is None


def test_progress_is_told(tiny: Path, tmp_path: Path) -> None:
    """Each stage of the build says what it is doing."""
    heard: list[str] = []
    build(tiny, tmp_path / "manual", progress=heard.append)
    assert "calculating impossible" in heard
    assert any(text.startswith("page 1 of ") for text in heard)


def test_a_manual_for_the_local_preview_says_so_in_its_policy(tiny: Path, tmp_path: Path) -> None:
    """Only a served manual lets the reload script run; still nothing may be fetched from elsewhere."""
    build(tiny, tmp_path / "served", serving=True)
    text = (tmp_path / "served" / "index.html").read_text(encoding="utf-8")
    assert "&#39;unsafe-inline&#39;" in text
    assert "default-src &#39;none&#39;" in text


def test_the_manual_lies_in_the_plant_folder_unless_said(tiny: Path) -> None:
    """Without a folder the manual is written to PLANT/manual, and building again replaces it."""
    for _ in range(2):
        assert build(tiny).first_page == tiny.resolve() / "manual" / "index.html"


class TestAFailingBuild:
    """Whatever goes wrong, the last good manual stays and nothing is left beside it."""

    @pytest.fixture
    def old(self, tmp_path: Path) -> Path:
        """A manual of before."""
        folder = tmp_path / "manual"
        folder.mkdir()
        (folder / "manual.json").write_text("{}")
        (folder / "index.html").write_text("the last good manual")
        return folder

    def _assert_untouched(self, old: Path) -> None:
        assert (old / "index.html").read_text() == "the last good manual"
        assert [p.name for p in old.parent.iterdir() if p.name.startswith(".")] == []

    def test_description_that_cannot_be_read(self, old: Path, tiny: Path) -> None:
        """A broken description is an error with its place."""
        copy = copy_plant(tiny, old.parent / "plant")
        (copy / "plant.yaml").write_text("plant: {name: x, altitude: 3}\nsystems: {}\n")
        with pytest.raises(DescriptionError) as caught:
            build(copy, old)
        assert caught.value.problems[0].line == 1
        self._assert_untouched(old)

    def test_a_fault_while_pages_are_written(self, old: Path, tiny: Path, monkeypatch: pytest.MonkeyPatch) -> None:
        """A fault in the middle of the site: what was written so far goes away."""
        from commission.manual import site as driver

        def fail(*_: object) -> None:
            raise RuntimeError("in the middle")

        monkeypatch.setattr(driver.search, "index_script", fail)
        with pytest.raises(RuntimeError, match="in the middle"):
            build(tiny, old)
        self._assert_untouched(old)

    def test_a_file_that_goes_away_meanwhile(self, old: Path, tiny: Path) -> None:
        """Somebody moves a document while the manual is built: it is named, not taken for a fault of the program."""
        documents = tiny / "documents"
        documents.mkdir()
        (documents / "drawing.txt").write_text("a drawing")

        def move(text: str) -> None:
            if text.startswith("page 1 of "):
                (documents / "drawing.txt").unlink()

        with pytest.raises(InputError) as caught:
            build(tiny, old, progress=move)
        assert caught.value.problems[0].file == "documents/drawing.txt"
        self._assert_untouched(old)

    def test_strict_and_a_link_that_leads_nowhere(self, old: Path, tiny: Path) -> None:
        """With strict, a broken link of an owner's page stops the build and is named."""
        copy = copy_plant(tiny, old.parent / "plant")
        (copy / "pages").mkdir(exist_ok=True)
        (copy / "pages" / "broken.md").write_text("# Broken\n\n[nowhere](missing.md)\n")
        with pytest.raises(InputError) as caught:
            build(copy, old, strict=True)
        assert "missing.md" in str(caught.value)
        self._assert_untouched(old)

    def test_without_strict_it_is_a_warning(self, old: Path, tiny: Path) -> None:
        """Without strict the same link is reported, and the new manual takes the place of the old one."""
        copy = copy_plant(tiny, old.parent / "plant")
        (copy / "pages").mkdir(exist_ok=True)
        (copy / "pages" / "broken.md").write_text("# Broken\n\n[nowhere](missing.md)\n")
        result = build(copy, old)
        assert any("missing.md" in w for w in result.warnings)
        assert "the last good manual" not in (old / "index.html").read_text(encoding="utf-8")
        assert json.loads((old / "manual.json").read_text(encoding="utf-8"))["plant"]


class TestWhereAManualMayBeWritten:
    """A build replaces nothing but a manual."""

    def test_a_folder_with_other_files_is_left_alone(self, tiny: Path, tmp_path: Path) -> None:
        """Somebody's folder is refused and keeps its file."""
        (tmp_path / "photos").mkdir()
        (tmp_path / "photos" / "cat.jpg").write_text("a cat")
        with pytest.raises(InputError) as caught:
            build(tiny, tmp_path / "photos")
        assert caught.value.problems[0].file == str(tmp_path / "photos")
        assert (tmp_path / "photos" / "cat.jpg").read_text() == "a cat"

    def test_the_plant_folder_and_what_holds_it_are_refused(self, tiny: Path) -> None:
        """The description would be lost."""
        for out in (tiny, tiny.parent):
            with pytest.raises(InputError) as caught:
                build(tiny, out)
            assert "plant folder" in caught.value.problems[0].message

    def test_a_file_in_the_way_is_refused(self, tiny: Path, tmp_path: Path) -> None:
        """A file is no folder."""
        (tmp_path / "manual").write_text("a file")
        with pytest.raises(InputError):
            build(tiny, tmp_path / "manual")
        assert (tmp_path / "manual").read_text() == "a file"


def test_templates_are_found_once() -> None:
    """The same function finds the templates in a checkout and in an installed package."""
    assert (templates_folder() / "pages" / "glance.html").is_file()
