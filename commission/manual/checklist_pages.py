"""The checklist of a system: stages in safe order, each item with its values, cautions and room to tick and write."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.errors import CommissionError
from commission.manual.book import Sheet
from commission.manual.gather import PlantData, SystemData
from commission.manual.showing import How, kind_of, label_of, show_how, value_text
from commission.quantities import Display

if TYPE_CHECKING:
    from commission.checklists import Item, Stage


UPKEEP = "upkeep"
"""The stage of what comes again for as long as the plant runs: it is not part of commissioning."""


@dataclass(frozen=True, slots=True)
class FigureView:
    """One calculated number inside an item."""

    label: str
    value: str
    how: How


@dataclass(frozen=True, slots=True)
class ItemView:
    """One item as the page shows it."""

    number: str
    item: Item
    must: str | None
    missing: str | None
    unit: str
    figures: tuple[FigureView, ...]


@dataclass(frozen=True, slots=True)
class StageView:
    """One stage with its numbered items."""

    number: int
    stage: Stage
    items: tuple[ItemView, ...]
    left_out: tuple[Item, ...]


def _item(item: Item, number: str, data: SystemData, display: Display) -> ItemView:
    figures = {e.quantity: e for e in (*item.figures, *(item.must_read.explained if item.must_read else ()))}
    return ItemView(
        number=number,
        item=item,
        must=item.must_read.text if item.must_read else None,
        missing=item.must_read.missing if item.must_read else None,
        unit=item.unit or "",
        figures=tuple(
            FigureView(
                label_of(key, display),
                value_text(e.value, kind_of(e, display), display),
                show_how(e, display, data.assumptions),
            )
            for key, e in figures.items()
        ),
    )


def _stage(stage: Stage, n: int, data: SystemData, display: Display) -> StageView:
    asked = [i for i in stage.items if i.left_out is None]
    return StageView(
        number=n,
        stage=stage,
        items=tuple(_item(i, f"{n}.{m}", data, display) for m, i in enumerate(asked, start=1)),
        left_out=tuple(i for i in stage.items if i.left_out is not None),
    )


def checklist_page(plant: PlantData, data: SystemData) -> Sheet:
    """All stages of one system on one page, each printed from a new sheet of paper."""
    from commission.checklists import stages

    context: dict[str, object] = {"because": None}
    try:
        found = stages(plant.loaded, data.id, data.model)
        views = tuple(_stage(s, n, data, data.display) for n, s in enumerate(found, start=1))
        once = [v for v in views if v.stage.id != UPKEEP]
        context |= {
            "stages": views,
            "count": sum(len(v.items) for v in once),
            "stage_count": len(once),
            "again": sum(len(v.items) for v in views) - sum(len(v.items) for v in once),
            "plant_name": plant.name,
            "system_name": data.name,
            "digest": plant.loaded.digest[:12],
            "assumptions_page": data.page("assumptions"),
            "calculated": data.because is None,
            "reason": data.because,
        }
    except CommissionError as error:
        context = {"because": "; ".join(str(p) for p in error.problems)}
    return Sheet(data.page("checklist"), "Checklist", data.group, "checklist.html", context, data.kicker, paper=True)
