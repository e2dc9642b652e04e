"""What the review found, worst first."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from commission.manual.book import Sheet
from commission.manual.gather import PlantData
from commission.manual.showing import show_how

if TYPE_CHECKING:
    from commission.review import Finding

_WORDS = {
    "error": ("Errors", "Cannot be, or can hurt somebody: resolve these first."),
    "warning": ("Warnings", "Likely wrong, or will cost a test: look at each."),
    "note": ("Notes", "Advice."),
}


def findings_page(plant: PlantData, findings: tuple[Finding, ...]) -> Sheet:
    """All findings by severity, each with figures, place, source and what to do."""
    names = {d.id: d for d in plant.systems}
    groups = []
    for severity, (title, meaning) in _WORDS.items():
        items = [_finding(f, n, names, plant) for n, f in enumerate(findings) if f.severity == severity]
        if items:
            groups.append({"title": title, "meaning": meaning, "severity": severity, "items": items})
    return Sheet("findings", "Findings", "plant", "findings.html", {"groups": groups})


def _finding(f: Finding, number: int, names: dict[str, Any], plant: PlantData) -> dict[str, Any]:
    data = names.get(f.system or "")
    figures = [
        {
            "label": x.label[:1].upper() + x.label[1:],
            "text": x.text,
            "how": show_how(x.explained, plant.display, data.assumptions if data else {}, kind=x.kind)
            if x.explained is not None
            else None,
        }
        for x in f.figures
    ]
    return {
        "anchor": f"finding-{number + 1}",
        "title": f.title,
        "system": data.name if data else None,
        "figures": figures,
        "what_to_do": f.what_to_do,
        "source": f.source,
        "mark": f.mark,
        "rule": f.rule,
        "place": str(f.place) if f.place else None,
        "assumptions_page": data.page("assumptions") if data else None,
    }
