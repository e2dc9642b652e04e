"""Which pages a manual has, in which order: the table of contents as one function."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.manual import plant_pages, safety_pages, system_pages
from commission.manual.archive import Archive, open_lines, read_archive, series_of, visits
from commission.manual.before_visit import before_the_visit
from commission.manual.book import Book, OwnerFile
from commission.manual.checklist_pages import checklist_page
from commission.manual.day_sheet import day_sheet
from commission.manual.documents import address, copied_files, document_links, owner_pages
from commission.manual.findings import findings_page
from commission.manual.gather import PlantData, SystemData
from commission.manual.live_sheet import live_sheet
from commission.manual.paper import paper_style
from commission.manual.plots import Figure, charts, draw, history_figures, ph_figure
from commission.manual.records_pages import ITEMS, open_items_page, records_page
from commission.manual.saturation import saturation_page
from commission.manual.sheet_pages import test_sheets
from commission.manual.single import KINDS, single_path
from commission.manual.states import Standing
from commission.manual.store import Store
from commission.manual.upkeep_pages import CALENDAR, PAGE, next_duties, upkeep_page
from commission.manual.visit_pages import certificates, record_page

if TYPE_CHECKING:
    from commission.review import Finding
    from commission.upkeep import Duty


@dataclass(frozen=True, slots=True)
class Contents:
    """Everything that is written: pages, the owner's files, figures, and what was left out."""

    book: Book
    owner_files: tuple[OwnerFile, ...]
    texts: dict[str, bytes]
    findings: tuple[Finding, ...]
    left_out: tuple[str, ...]


def write_book(plant: PlantData, store: Store | None, progress: Callable[[str], None]) -> Contents:
    """All pages of the manual, with links that are checked when they are rendered."""
    from commission.records import items_csv
    from commission.review import review
    from commission.upkeep import calendar, due

    book = Book()
    documents, left_documents = copied_files(plant.loaded.folder)
    pages, left_pages = owner_pages(plant.loaded.folder)
    texts: dict[str, bytes] = {"style/paper.css": paper_style(plant.name, plant.loaded.digest)}
    archive = read_archive(plant)
    for path in (
        "search-index.js",
        "scripts/search.js",
        *(f.site_path for f in (*documents, *archive.files) if f.sheet is None),
    ):
        book.add_file(path)

    progress("reviewing")
    findings = review(plant.loaded, models={d.id: d.model for d in plant.systems if d.model is not None})
    standings = {d.id: _standing(d, findings, archive) for d in plant.systems}
    counts = {s: sum(f.severity == s for f in findings) for s in ("error", "warning", "note")}
    progress("counting what is due")
    duties = due(plant.loaded)
    texts[CALENDAR] = calendar(plant.loaded, duties)
    texts[ITEMS] = items_csv(archive.items).encode()
    for path in (CALENDAR, ITEMS):
        book.add_file(path)
    coming = {d.id: next_duties(d, duties) for d in plant.systems}
    book.add(plant_pages.at_a_glance(plant, standings, open_lines(plant, archive), counts, coming))
    book.add(safety_pages.emergency_page(plant))
    for data in plant.systems:
        _system(book, plant, data, documents, archive, duties, texts, store, progress)
    book.add(open_items_page(plant, archive))
    book.add(upkeep_page(book, plant, archive, duties))
    book.add(findings_page(plant, findings))
    book.add(plant_pages.instruments(plant))
    links = {"": document_links(plant.loaded, documents, None)}
    links |= {d.id: document_links(plant.loaded, documents, d.id) for d in plant.systems}
    book.add(plant_pages.documents_page(plant, links, tuple(address(f) for f in documents)))
    for page in (*documents, *pages):
        if page.sheet is not None:
            book.add(page.sheet)
    book.add(plant_pages.method_page())
    book.add(plant_pages.reference_page())
    singles = [(d.name, tuple((single_path(d, kind), title) for kind, title in KINDS)) for d in plant.systems]
    for _, files in singles:
        for path, _ in files:
            book.add_file(path)
    book.add(plant_pages.carry_page(singles))
    book.add(plant_pages.search_page())
    return Contents(book, (*documents, *pages, *archive.files), texts, findings, (*left_documents, *left_pages))


def _standing(data: SystemData, findings: tuple[Finding, ...], archive: Archive) -> Standing:
    own = [f for f in findings if f.system == data.id]
    return Standing(
        because=data.because,
        errors=sum(f.severity == "error" for f in own),
        warnings=sum(f.severity == "warning" for f in own),
        visits=visits(archive, data.id),
        promised=bool(data.system.guarantee),
        open_items=sum(i.state == "open" and i.system == data.id for i in archive.items),
        unanswered=archive.open_answers(data.id),
    )


def _system(
    book: Book,
    plant: PlantData,
    data: SystemData,
    documents: tuple[OwnerFile, ...],
    archive: Archive,
    duties: tuple[Duty, ...],
    texts: dict[str, bytes],
    store: Store | None,
    progress: Callable[[str], None],
) -> None:
    """The pages of one system, in the order in which they are needed."""
    progress(f"drawing {data.id}")
    weather: tuple[Figure, ...] = charts(data, data.grid, data.display) if data.grid else ()
    cycle = ph_figure(data, data.display)
    found = series_of(data, archive)
    past = history_figures(data, found, data.display)
    for figure in (*weather, *([cycle] if cycle else []), *past):
        for path, svg in draw(figure, store).items():
            texts[path] = svg
            book.add_file(path)
    links = document_links(plant.loaded, documents, data.id)
    book.add(system_pages.what_it_is(plant, data, links, next_duties(data, duties), bool(archive.of(data.id)), PAGE))
    book.add(system_pages.how_it_should_run(plant, data, weather, cycle))
    book.add(saturation_page(plant, data))
    book.add(safety_pages.safety_page(plant, data))
    book.add(checklist_page(plant, data))
    book.add(before_the_visit(plant, data))
    for sheet in test_sheets(plant, data):
        book.add(sheet)
    progress(f"tabulating {data.id}")
    book.add(live_sheet(plant, data, store))
    book.add(day_sheet(plant, data))
    book.add(records_page(data, archive, found, past))
    for record in archive.of(data.id):
        book.add(record_page(plant, data, record, archive))
    for sheet in certificates(plant, data, archive):
        book.add(sheet)
    book.add(system_pages.assumptions(data))
