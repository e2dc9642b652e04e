"""Files of the plant folder that travel with the manual: documents are copied, the owner's pages rendered."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

from commission.description import LoadedPlant
from commission.manual.book import OwnerFile, Sheet

ACTIVE = {
    ".html", ".htm", ".xhtml", ".shtml", ".mhtml", ".svg", ".svgz", ".xml", ".xsl", ".js", ".mjs", ".hta", ".exe",
    ".bat", ".cmd", ".ps1", ".sh", ".jar", ".lnk", ".url",
}  # fmt: skip
"""Types of file that can run a program when they are opened: they are not copied into the manual."""


@dataclass(frozen=True, slots=True)
class DocumentLink:
    """A document as a page shows it; `path` is its file in the site, or None with the reason in `because`."""

    title: str
    reference: str | None
    path: str | None
    because: str | None
    place: str


def _inside(folder: Path, file: Path) -> bool:
    """Whether `file` really lies inside `folder`, links resolved."""
    return folder.resolve() in file.resolve().parents


def _walk(folder: Path) -> Iterator[Path]:
    """All ordinary files below `folder`, sorted, without hidden ones and without links that lead outside."""
    if not folder.is_dir():
        return
    for path in sorted(folder.rglob("*")):
        relative = path.relative_to(folder)
        if path.is_file() and not any(p.startswith(".") for p in relative.parts) and _inside(folder, path):
            yield path


def copied_files(plant_folder: Path) -> tuple[tuple[OwnerFile, ...], tuple[str, ...]]:
    """The files below `documents/`: copied, Markdown as pages; and a sentence for each that is left out."""
    folder = plant_folder / "documents"
    copied, left = [], []
    for path in _walk(folder):
        relative = path.relative_to(folder).as_posix()
        if path.suffix.lower() in ACTIVE:
            left.append(f"documents/{relative} is not copied: a file of this type can run a program when it is opened")
        elif path.suffix.lower() == ".md":
            sheet = Sheet(f"documents/{relative[:-3]}", _title(path), "documents", "owner.md", kicker="Documents")
            copied.append(OwnerFile(f"documents/{relative}", path, sheet))
        else:
            copied.append(OwnerFile(f"documents/{relative}", path))
    return tuple(copied), tuple(left)


def owner_pages(plant_folder: Path) -> tuple[tuple[OwnerFile, ...], tuple[str, ...]]:
    """The owner's Markdown pages and their pictures below `pages/`, and a sentence for each file that is left out."""
    folder = plant_folder / "pages"
    found, left = [], []
    for path in _walk(folder):
        relative = path.relative_to(folder).as_posix()
        if path.suffix.lower() == ".md":
            identity = f"pages/{relative[:-3]}"
            sheet = Sheet(identity, _title(path), "owner", "owner.md", kicker="The owner's pages")
            found.append(OwnerFile(f"pages/{relative}", path, sheet))
        elif path.suffix.lower() in {".png", ".jpg", ".jpeg", ".gif", ".webp", ".avif", ".pdf", ".csv", ".txt"}:
            found.append(OwnerFile(f"pages/{relative}", path))
        else:
            left.append(f"pages/{relative} is not copied: pictures, PDF, CSV and text files are")
    return tuple(found), tuple(left)


def _title(path: Path) -> str:
    """The first heading of a Markdown page, or its file name in words."""
    try:
        for line in path.read_text(encoding="utf-8-sig").splitlines():
            if line.startswith("# "):
                return line[2:].strip().rstrip("#").strip()
    except (OSError, UnicodeDecodeError):
        pass
    return path.stem.replace("-", " ").replace("_", " ").capitalize()


def document_links(loaded: LoadedPlant, copied: tuple[OwnerFile, ...], system: str | None) -> tuple[DocumentLink, ...]:
    """The documents of the plant (`system` None) or of one system."""
    pages = {f.site_path: address(f) for f in copied}
    documents = loaded.plant.documents if system is None else loaded.system(system).documents
    base = ("documents",) if system is None else ("systems", system, "documents")
    links = []
    for n, document in enumerate(documents):
        wanted = None
        because = None
        if document.file is not None:
            name = document.file.removeprefix("documents/")
            wanted = pages.get(f"documents/{name}")
            if wanted is None:
                because = f"the file documents/{name} is not in the plant folder"
        links.append(DocumentLink(document.title, document.reference, wanted, because, str(loaded.where((*base, n)))))
    return tuple(links)


def address(file: OwnerFile) -> str:
    """What a page links to: the rendered page of a Markdown file, or the copied file."""
    return file.sheet.id if file.sheet is not None else file.site_path
