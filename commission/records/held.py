"""Readings of which no model expects anything, but of which an item of the checklist asks something all the same."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.description import LoadedPlant

if TYPE_CHECKING:
    from commission.records.record import CheckedAnswer, SiteReading

_ASKED: Mapping[str, tuple[str, str]] = {
    "store_top_temperature": ("upkeep.hot-water", "hot_water_hygiene"),
    "circulation_return_temperature": ("upkeep.hot-water", "hot_water_circulation"),
}
"""Quantity to the item that asks for at least so much, and the key of that figure among the safety figures."""


@dataclass(frozen=True, slots=True)
class Held:
    """What a reading is held to: the item that asks it and its act, whether the reading keeps it, and that in words."""

    item: str
    act: str
    kept: bool
    text: str


def held(loaded: LoadedPlant, system: str, readings: Iterable[SiteReading]) -> dict[str, Held]:
    """By quantity, what the system's checklist holds a reading to; a reading that no item asks for is left out.

    The figures are those of the safety figures, with their source (hot water: HSG274 part 2, DVGW W 551).

    Raises:
        ChecklistError: the plant's own checklists cannot be used.
    """
    from commission.checklists import stages
    from commission.safety import fact

    asked = [r for r in readings if r.key in _ASKED]
    if not asked:
        return {}
    display = loaded.display(system)
    items = {i.id: i.do for stage in stages(loaded, system) for i in stage.items if i.left_out is None}
    found = {}
    for reading in asked:
        item, key = _ASKED[reading.key]
        if item in items:
            figure = fact(key)
            kept = reading.value >= figure.value
            least = display.text(figure.value, figure.kind)
            text = f"held to at least {least} in service ({figure.source}): {'kept' if kept else 'below it'}"
            found[reading.key] = Held(item, items[item], kept, text)
    return found


def contradicted(
    loaded: LoadedPlant, system: str, answers: Mapping[str, CheckedAnswer], read: Mapping[str, SiteReading]
) -> list[str]:
    """A sentence for each item that is answered with yes although a reading of the same record says no."""
    said = []
    for key, one in held(loaded, system, read.values()).items():
        answer = answers.get(one.item)
        if answer is not None and answer.outcome == "done" and not one.kept:
            label = loaded.display(system).words(key)
            said.append(
                f'"{one.act.rstrip(".")}" is answered {answer.answer!r}, but {label} was read as '
                f"{read[key].as_written}: {one.text}"
            )
    return said
