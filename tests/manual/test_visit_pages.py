"""A visit's page and its certificate, rendered by themselves: what was frozen, and what has become of it since."""

from __future__ import annotations

import hashlib
import re
import shutil
from collections.abc import Callable
from pathlib import Path

import pytest

from commission.acceptance.judgement import decide
from commission.description import load_plant
from commission.manual.archive import Archive, read_archive
from commission.manual.book import Sheet
from commission.manual.gather import gather_one
from commission.manual.rendering import environment, render_body
from commission.manual.single import LoneBook
from commission.manual.visit_pages import certificates, record_page
from commission.manual.where import templates_folder
from commission.records import file_record, recompute
from commission.records.filed import FrozenClosure

SYSTEM = "cold-room"
LATER = """\
system: cold-room
stage: performance
mode: {mode}
started: {day}T10:20:00+01:00
people: {{operator: {{name: A fitter}}, witness: {{name: The owner}}}}
"""
Pages = Callable[[Path], tuple[Archive, dict[str, str]]]


@pytest.fixture
def folder(plant: Path, tmp_path: Path) -> Path:
    """A copy of the plant with three visits that a test may add to."""
    target = tmp_path / "plant"
    shutil.copytree(plant, target)
    return target


@pytest.fixture
def pages() -> Pages:
    """The archive, and the text of each record page and certificate by page id."""

    def make(folder: Path) -> tuple[Archive, dict[str, str]]:
        import commission.prediction

        loaded = load_plant(folder)
        gathered = gather_one(loaded, commission.prediction.fit(loaded, SYSTEM))
        (data,) = gathered.systems
        archive = read_archive(gathered)
        env = environment(templates_folder(), gathered.display)
        sheets = [record_page(gathered, data, r, archive) for r in archive.of(SYSTEM)]
        sheets += certificates(gathered, data, archive)
        return archive, {s.id: _text(str(render_body(env, LoneBook(), s)), s) for s in sheets}

    return make


def _text(html: str, sheet: Sheet) -> str:
    words = " ".join(re.sub(r"<[^>]+>", " ", html).split())
    return f"{sheet.title} {words}"


def _one(texts: dict[str, str], part: str) -> str:
    (found,) = [text for page, text in texts.items() if part in page]
    return found


def _file(folder: Path, tmp_path: Path, text: str) -> Path:
    draft = tmp_path / "later.yaml"
    draft.write_text(text, encoding="utf-8")
    return file_record(load_plant(folder), draft)


def test_a_certificate_keeps_its_reservation_and_says_when_it_was_closed(
    folder: Path, pages: Pages, tmp_path: Path
) -> None:
    """Accepted under a reservation: provisional, with its number; what a later visit closes stands beside, labelled."""
    _, texts = pages(folder)
    certificate = _one(texts, "certificate")
    assert certificate.startswith("Certificate of provisional acceptance")
    assert re.search(r"\d+: the door gasket is replaced within four weeks", certificate)
    assert "Closed since" not in certificate
    number = re.search(r"(\d+): the door gasket", certificate)
    assert number is not None
    closing = LATER.format(mode="trim", day="2026-06-02")
    closing += f"item_updates: [{{item: {number.group(1)}, closed: yes, closed_by: the warden}}]\n"
    _file(folder, tmp_path, closing)
    _, texts = pages(folder)
    again = _one(texts, "certificate")
    assert again.startswith("Certificate of provisional acceptance")
    assert "Closed since, 2026-06-02 by the warden." in again


def test_a_certificate_says_how_much_of_the_checklist_has_no_answer(folder: Path, pages: Pages, tmp_path: Path) -> None:
    """An accepted guarantee says nothing of strength and evacuation: the certificate counts what no record answers, by
    stages up to that of the test, and an answer in a later record takes an item off."""
    archive, texts = pages(folder)
    left = archive.open_answers(SYSTEM)
    asked = dict(archive.unanswered[SYSTEM])
    assert {"Strength and tightness", "Evacuation"} <= set(asked)
    assert not {"Handover", "Upkeep visits"} & set(asked)
    assert f"the checklist is open. When this page was made, {left} items of it had no answer" in _one(
        texts, "certificate"
    )
    item = asked["Evacuation"][0][0]
    _file(
        folder,
        tmp_path,
        LATER.format(mode="trim", day="2026-07-14")
        + f"answers: {{{item}: {{answer: not applicable, reason: evacuated in the factory}}}}\n",
    )
    archive, texts = pages(folder)
    assert archive.open_answers(SYSTEM) == left - 1
    assert f"{left - 1} items of it had no answer" in _one(texts, "certificate")


def test_a_certificate_names_both_digests_of_its_sheet_apart(folder: Path, pages: Pages) -> None:
    """The first line of a sheet and the SHA-256 of its file are two numbers: both stand on the certificate, named."""
    _, texts = pages(folder)
    sheet = folder / "records" / "sheets" / "agreed.yaml"
    line = sheet.read_text(encoding="utf-8").splitlines()[0].removeprefix("digest: ")
    of_file = hashlib.sha256(sheet.read_bytes()).hexdigest()
    certificate = _one(texts, "certificate")
    assert f"Digest line of the test sheet {line}" in certificate
    assert f"File of the test sheet (SHA-256) {of_file}" in certificate


def test_a_later_visit_still_stands_under_the_reservation(folder: Path, pages: Pages, tmp_path: Path) -> None:
    """The page of a retest says which reservations of an earlier test stand."""
    path = _file(folder, tmp_path, LATER.format(mode="test", day="2026-07-14"))
    _, texts = pages(folder)
    page = _one(texts, path.stem)
    assert "Reservations that stand" in page
    assert "the door gasket is replaced within four weeks (of an earlier test)" in page


def test_a_record_links_the_sheet_it_was_judged_by(folder: Path, pages: Pages) -> None:
    """The frozen sheet is one click away; once it is gone or changed the page says so."""
    _, texts = pages(folder)
    tested = next(t for p, t in texts.items() if "performance" in p and "certificate" not in p)
    assert "Frozen test sheet: sheets/agreed.yaml" in tested
    assert "gone or changed since" not in tested
    sheet = folder / "records" / "sheets" / "agreed.yaml"
    sheet.write_text(sheet.read_text(encoding="utf-8").replace("Agreed", "Another"), encoding="utf-8")
    _, texts = pages(folder)
    tested = next(t for p, t in texts.items() if "performance" in p and "certificate" not in p)
    assert "sheets/agreed.yaml (gone or changed since)" in tested


def test_two_routes_are_printed_on_page_and_certificate(
    folder: Path, pages: Pages, monkeypatch: pytest.MonkeyPatch
) -> None:
    """What was frozen of two routes is printed with its uncertainty, and whether they agree."""
    from commission.records.filed import FiledBlock

    closures = (
        FrozenClosure.model_construct(
            quantity="cooling_capacity", first="compressor heat balance", second="liquid side", difference=310.0,
            expanded=420.0, significant=False,
        ),
        FrozenClosure.model_construct(
            quantity="first law", first="liquid side", second="compressor heat balance", difference=-900.0,
            expanded=400.0, significant=True,
        ),
    )  # fmt: skip
    monkeypatch.setattr(FiledBlock, "__getattribute__", _with(closures))
    _, texts = pages(folder)
    for text in (_one(texts, "certificate"), next(t for p, t in texts.items() if p.endswith("performance"))):
        assert "Two routes held against each other" in text
        assert re.search(
            r"Cooling capacity by compressor heat balance less that by liquid side: \+0\.31 ± 0\.42 kW", text
        )
        assert re.search(r"leaves through its shell\): −0\.90 ± 0\.40 kW", text)
        assert re.search(r"they (DO NOT AGREE|do not agree)", text)


def _with(closures: tuple[FrozenClosure, ...]) -> Callable[[object, str], object]:
    def get(self: object, name: str) -> object:
        return closures if name == "closures" else object.__getattribute__(self, name)

    return get


def test_a_later_tool_does_not_touch_the_certificate(
    folder: Path, pages: Pages, monkeypatch: pytest.MonkeyPatch
) -> None:
    """A version that decides otherwise, of a plant that promises otherwise: the certificate prints what was frozen, to
    the letter, and the recomputation beside it says what it would be now."""
    archive, before = pages(folder)
    certificate = _one(before, "certificate")
    assert "conforming" in certificate

    def stricter(value: float, budget: object, lower: float | None, *rest: object, **more: object) -> object:
        return decide(value, budget, None if lower is None else 3.0 * lower, *rest, **more)  # type: ignore[arg-type]

    monkeypatch.setattr("commission.acceptance.judgement.decide", stricter)
    monkeypatch.setattr("commission.records.recomputation.versions", lambda: {"commission": "9.9", "CoolProp": "9.9"})
    plant = folder / "plant.yaml"
    text = plant.read_text(encoding="utf-8")
    assert "below: 15 %" in text
    plant.write_text(text.replace("below: 15 %", "below: 1 %"), encoding="utf-8")
    _, after = pages(folder)
    assert _one(after, "certificate") == certificate
    tested = next(r for r in archive.of(SYSTEM) if r.verdict == "conforming")
    again = recompute(load_plant(folder), tested)
    assert again.outcome == "not conforming"
    assert "the filed verdict stands: conforming" in again.label
    assert any("commission was" in c and "is 9.9 now" in c for c in again.changed)


def test_evidence_that_can_run_is_not_copied(folder: Path, pages: Pages, tmp_path: Path) -> None:
    """An attached page with a script stays in the records folder: named with its digest, not part of the manual."""
    (tmp_path / "report.html").write_text("<script>alert(1)</script>", encoding="utf-8")
    path = _file(folder, tmp_path, LATER.format(mode="trim", day="2026-07-14") + "attachments: [report.html]\n")
    archive, texts = pages(folder)
    assert not [f for f in archive.files if f.site_path.endswith(".html")]
    page = _one(texts, path.stem)
    assert "report.html" in page
    assert "SHA-256" in page
