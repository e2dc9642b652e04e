"""The checklist of one system: stages in safe order, each item with its values filled in."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.checklists.entries import Answer
from commission.checklists.evaluate import evaluate
from commission.checklists.library import CheckedItem, CheckedStage, kind_of_unit, plant_library
from commission.checklists.marks import mark_with_figures
from commission.checklists.rendering import Target, fill, target
from commission.checklists.words import Facts, predictions
from commission.quantities import Display, Explained, Kind
from commission.safety import MARKS, fluid_of, safety_figures, substance_of

if TYPE_CHECKING:
    from commission.description import LoadedPlant
    from commission.prediction import Prediction, SystemModel


@dataclass(frozen=True, slots=True)
class Item:
    """One act or observation, ready to be shown.

    `answer` says what is written down: a value (of `quantity`, a key of the nomenclature, in `unit` as shown),
    yes/no, a file name or text; "not applicable" with a reason is always allowed. `figures` are all calculated
    numbers in its texts. `reading` says that it asks for a reading of the running plant, which a record holds under
    its readings. `rest_at` and `as_answered` name the item whose answer decides what this one must be. `mark` is
    that of the source, or of a figure from memory in the texts where that is weaker. `note` says why an item is
    shown although a fact it depends on is not known. `left_out` holds the reason where the plant's own list leaves
    the item out. `origin` is the data file and line.
    """

    id: str
    do: str
    source: str
    mark: str
    answer: Answer
    how: str | None = None
    must_read: Target | None = None
    if_not: str | None = None
    hazard: str | None = None
    caution: str | None = None
    who: str | None = None
    quantity: str | None = None
    unit: str | None = None
    reading: bool = False
    rest_at: str | None = None
    as_answered: str | None = None
    figures: tuple[Explained, ...] = ()
    note: str | None = None
    left_out: str | None = None
    origin: str = ""

    @property
    def sureness(self) -> str:
        """What the mark of the source means, in words."""
        return MARKS[self.mark]


@dataclass(frozen=True, slots=True)
class Stage:
    """One stage of the work; its place in the list is part of what makes the work safe."""

    id: str
    title: str
    purpose: str
    items: tuple[Item, ...]


def stages(
    loaded: LoadedPlant,
    system_id: str,
    model: SystemModel | Prediction | None = None,
    conditions: Mapping[str, float] | None = None,
    library: Sequence[CheckedStage] | None = None,
) -> tuple[Stage, ...]:
    """The checklist of one system; a stage in which nothing applies is left out.

    `model` is the fitted model, or one prediction of it; without it expected readings say that they are not calculated.
    `conditions` (SI, keys of the nomenclature) is the condition of the expected readings, None the rated one. `library`
    replaces the shipped library and the plant's own files.

    Raises:
        InputError: no such system or refrigerant.
        ChecklistError: the plant's own checklists cannot be used.
    """
    facts = facts_of(loaded, system_id, model, conditions)
    checked = plant_library(loaded.folder) if library is None else library
    placed: dict[str, list[tuple[CheckedItem, str | None]]] = {stage.id: [] for stage in checked}
    moved: list[tuple[CheckedItem, str | None]] = []
    for stage in checked:
        for item in stage.items:
            applies, note = _applies(item, facts)
            if not applies:
                continue
            if _moves(item, facts):
                moved.append((item, note))
            else:
                placed[stage.id].append((item, note))
    for item, note in moved:
        _insert(checked, placed, item, note)
    return tuple(
        Stage(
            stage.id,
            stage.title,
            fill(stage.purpose, facts)[0],
            tuple(render(i, n, facts) for i, n in placed[stage.id]),
        )
        for stage in checked
        if placed[stage.id]
    )


def facts_of(
    loaded: LoadedPlant, system_id: str, model: SystemModel | Prediction | None, conditions: Mapping[str, float] | None
) -> Facts:
    """Everything the checklist of one system is worked out from."""
    from commission.prediction import Prediction

    substance = substance_of(fluid_of(loaded, system_id))
    found, missing = predictions(model, loaded, system_id, conditions)
    display = loaded.display(system_id)
    figures = safety_figures(loaded, system_id, None if isinstance(model, Prediction) else model)
    return Facts(loaded, system_id, substance, figures, found, missing, display)


def _applies(item: CheckedItem, facts: Facts) -> tuple[bool, str | None]:
    """Whether an item applies. Not known counts as yes, with a note: a question too many hurts nobody."""
    if item.when is None:
        return True, None
    found = evaluate(item.when, facts.lookup, facts.loaded.barometric_pressure)
    if found.known:
        return bool(found.content), None
    return True, f"shown because a fact is not known ({found.missing})"


def _moves(item: CheckedItem, facts: Facts) -> bool:
    if item.entry.move is None:
        return False
    if item.move_when is None:
        return True
    return evaluate(item.move_when, facts.lookup, facts.loaded.barometric_pressure).content is True


def _insert(
    checked: Sequence[CheckedStage],
    placed: dict[str, list[tuple[CheckedItem, str | None]]],
    item: CheckedItem,
    note: str | None,
) -> None:
    """Put a moved item behind or before the one it names; where that does not apply, the next one that does."""
    move = item.entry.move
    assert move is not None
    there = placed[move.to]
    order = [x.entry.id for stage in checked if stage.id == move.to for x in stage.items]
    index = len(there)
    if move.after is not None:
        earlier = {*order[: order.index(move.after) + 1]}
        index = max((i + 1 for i, (x, _) in enumerate(there) if x.entry.id in earlier), default=0)
        while index < len(there) and _moved_behind(there[index][0], move.after):
            index += 1
    elif move.before is not None:
        later = {*order[order.index(move.before) :]}
        index = min((i for i, (x, _) in enumerate(there) if x.entry.id in later), default=index)
    there.insert(index, (item, note))


def _moved_behind(item: CheckedItem, named: str) -> bool:
    """Whether an item was moved behind the same one already: several keep the order of the library."""
    return item.entry.move is not None and item.entry.move.after == named


def render(item: CheckedItem, note: str | None, facts: Facts) -> Item:
    """An item with its values filled in."""
    figures: list[Explained] = []
    texts: dict[str, str] = {}
    for key, template in item.texts.items():
        filled, used = fill(template, facts)
        if filled.strip():
            texts[key] = filled.strip()
        figures += used
    reading = target(item, texts.get("says"), facts)
    if reading is not None:
        figures += reading.explained
    entry = item.entry
    mark = mark_with_figures(entry.mark or _mark_of(entry.source), item, facts)
    return Item(
        id=entry.id,
        do=texts["do"],
        source=texts["source"],
        mark=mark,
        answer=entry.answer,
        how=texts.get("how"),
        must_read=reading,
        if_not=texts.get("if_not"),
        hazard=texts.get("hazard"),
        caution=texts.get("caution"),
        who=texts.get("who"),
        quantity=entry.quantity,
        unit=_unit(item, facts, reading),
        reading=entry.must_read is not None and entry.must_read.value == f"expected.{entry.quantity}",
        rest_at=entry.must_read.rest_at if entry.must_read else None,
        as_answered=entry.must_read.as_answered if entry.must_read else None,
        figures=tuple(dict.fromkeys(figures)),
        note=note,
        left_out=item.left_out,
        origin=item.origin,
    )


STATED = ("setting", "nameplate", "contract", "supplier", "agreement")


def _mark_of(source: str) -> str:
    """How sure a source is where the entry does not say: a clause that is cited was remembered, unless marked."""
    if source.startswith("common practice"):
        return "practice"
    if source.startswith("design model"):
        return "C"
    return "stated" if source.startswith(STATED) else "M"


def _unit(item: CheckedItem, facts: Facts, reading: Target | None) -> str | None:
    """The unit of an answer; a flow is asked in the unit in which it must read, or L/h would be read as m³/h."""
    from commission.quantities import FLOWS, pretty

    entry = item.entry
    if entry.answer != "value":
        return None
    sizes = () if reading is None else tuple(x for x in (reading.value, reading.low, reading.high) if x is not None)
    if sizes and reading is not None and reading.kind in FLOWS:
        return pretty(facts.display.fitting(reading.kind, *sizes).unit_and_digits(reading.kind)[0])
    if entry.unit is not None:
        return pretty(_unit_as_shown(entry.unit, facts.display))
    assert entry.quantity is not None
    return pretty(facts.display.asking(entry.quantity).unit_and_digits(facts.display.kind(entry.quantity))[0])


def _unit_as_shown(unit: str, display: Display) -> str:
    """The unit of an answer in the plant's own system of units; vacuum and times stay as they are measured."""
    kind = kind_of_unit(unit)
    if display.system == "metric" or kind is None or kind in (Kind.DURATION, Kind.NUMBER):
        return unit
    return "micron" if unit == "Pa a" else display.unit_and_digits(kind)[0]
