"""What a refrigerant does to people, and the levels that matter to them beside those that matter to equipment."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.safety.facts import load

if TYPE_CHECKING:
    from commission.safety.substance import Substance


@dataclass(frozen=True, slots=True)
class Level:
    """One concentration: `ppm` by volume, what it is the limit of, what it means, and its source."""

    ppm: float
    what: str
    says: str
    document: str
    mark: str

    @property
    def shown(self) -> str:
        """The concentration as a person reads it: 15 000 ppm."""
        return f"{self.ppm:,.0f} ppm".replace(",", " ")


@dataclass(frozen=True, slots=True)
class Hazards:
    """`tags` are the words by which data files choose sentences; `effects` the sentences in plain words."""

    tags: tuple[str, ...]
    effects: tuple[str, ...]
    people: tuple[Level, ...]
    equipment: tuple[Level, ...]


def hazards(substance: Substance) -> Hazards:
    """Hazards by safety class (ISO 817) and by what is known of the substance itself."""
    tags = _tags(substance)
    table = load("people.yaml")
    effects = tuple(str(text) for tag, text in table["effects"].items() if tag in tags)
    component = next((c for c in substance.components if len(substance.components) == 1 and c in table["levels"]), "")
    return Hazards(tags, effects, _levels(table["levels"], component), _levels(table["equipment"], component))


def _levels(table: dict[str, list[dict[str, object]]], component: str) -> tuple[Level, ...]:
    return tuple(
        Level(float(str(row["ppm"])), str(row["what"]), str(row["says"]), str(row["document"]), str(row["mark"]))
        for row in table.get(component, [])
    )


def _tags(substance: Substance) -> tuple[str, ...]:
    tags = []
    if substance.flammable:
        tags.append("flammable")
        tags.append("lower_flammable" if substance.flammability == "2L" and substance.toxicity == "A" else "")
        tags.append("higher_flammable" if substance.flammability in ("2", "3") else "")
    tags.append("toxic" if substance.toxicity == "B" else "")
    carbon_dioxide = substance.components == ("R-744",)
    tags.append("carbon_dioxide" if carbon_dioxide else "")
    tags.append("asphyxiant" if substance.toxicity == "A" and not carbon_dioxide else "")
    tags.append("heavy" if substance.heavy else "light")
    tags.append("cold")
    tags.append("decomposes" if substance.fluorinated and not substance.flammable else "")
    tags.append("pressure" if carbon_dioxide else "")
    return tuple(tag for tag in tags if tag)
