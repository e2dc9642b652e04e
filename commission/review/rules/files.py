"""Record files that are not as they were filed."""

from __future__ import annotations

from collections.abc import Iterator

from commission.review.facts import PlantFacts
from commission.review.finding import Figure, Remark


def changed_records(plant: PlantFacts) -> Iterator[Remark]:
    """A filed record that was altered or is gone, or a file among them that was never filed.

    Source: the list of digests beside the records (SHA256SUMS). It detects accident, not fraud.
    """
    from commission.records import check_files

    for found in check_files(plant.loaded):
        figures = [Figure("digest listed", found.listed)] if found.listed else []
        figures += [Figure("digest found", found.found)] if found.found else []
        yield Remark(
            "note" if found.state == "not listed" else "error",
            f"records/{found.name}",
            f"{found.sentence[:1].upper()}{found.sentence[1:]}.",
            tuple(figures),
            "File it, or move it out of the folder."
            if found.state == "not listed"
            else "Bring back the file whose digest is printed on the signed page; never edit a filed record.",
        )


def unreadable_records(plant: PlantFacts) -> Iterator[Remark]:
    """A filed record that cannot be read any more, or whose own seal does not hold.

    Source: the digest that each filed record carries of itself.
    """
    from commission.records import damaged, history

    for problem in damaged(plant.loaded):
        yield Remark(
            "error",
            f"records/{problem.file}",
            f"A filed record cannot be read: {problem.message}.",
            (),
            "Bring back the file from a copy; never edit a filed record.",
        )
    for record in history(plant.loaded):
        if not record.seal_holds:
            yield Remark(
                "error",
                f"records/{record.path.name}",
                f"The record of {record.started.date().isoformat()} was changed after it was filed.",
                (),
                "Bring back the file from a copy; a correction is a new record that names the old one.",
            )
