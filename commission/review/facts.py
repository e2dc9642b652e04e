"""What the rules look at: the plant, its systems, and what could be calculated of each."""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field, replace
from typing import TYPE_CHECKING

from commission.description import LoadedPlant
from commission.description.model import Conditions, RatedPoint, System
from commission.errors import CommissionError
from commission.quantities import Display, Explained, Kind, Pressure
from commission.review.finding import Figure, Severity
from commission.review.thresholds import Threshold, thresholds, thresholds_of

if TYPE_CHECKING:
    from commission.prediction import Prediction, SystemModel
    from commission.properties import Refrigerant
    from commission.safety import Figure as SafetyFigure
    from commission.safety import Figures, SpaceCharge

CONDITION_KEYS: tuple[str, ...] = tuple(Conditions.model_fields)
IDLE = (("comfort_cooling", "coldest"), ("space_heating", "hottest"))
"""Duty and day that do not go together: nothing is asked of the plant on such a day."""
DOUBTFUL = (("liquid_cooling", "coldest"),)
"""Duty and day that go together at some plants only: what is found there is a note."""
COOLING_DUTIES = ("cold_storage", "comfort_cooling", "liquid_cooling")


@dataclass(frozen=True, slots=True)
class PlantFacts:
    """The plant as loaded, how it shows quantities, the day of the visit where one is known, and the thresholds.

    As part of the facts of a system it shows quantities as those of that system.
    """

    loaded: LoadedPlant
    display: Display
    visit: dt.date | None
    thresholds: Mapping[str, Threshold] = field(default_factory=thresholds)

    def threshold(self, key: str) -> Threshold:
        """One threshold, the plant's own where it has one."""
        return self.thresholds[key]

    def limit(self, key: str) -> float:
        """The value of a threshold in SI."""
        return self.thresholds[key].value

    def figure(self, label: str, value: float, kind: Kind, digits: int | None = None) -> Figure:
        """A figure from an SI value (pressures absolute)."""
        return Figure(label, self.display.text(value, kind, digits), value, kind)

    def quantity(self, key: str, value: float, label: str | None = None) -> Figure:
        """A figure of a quantity of the nomenclature, labelled with its own name unless said otherwise."""
        return self.figure(label or self.display.label(key), value, self.display.kind(key))

    def threshold_figure(self, key: str, label: str) -> Figure:
        """A threshold as a figure."""
        entry = self.threshold(key)
        return self.figure(label, entry.value, entry.kind)


@dataclass(frozen=True, slots=True)
class Outlook:
    """What the fitted model expects at one named condition, or why it cannot say."""

    name: str
    prediction: Prediction | None
    reason: str | None

    def get(self, key: str) -> Explained | None:
        """The expected value of a quantity, None where it was not calculated."""
        return self.prediction.expected.get(key) if self.prediction else None


@dataclass(frozen=True, slots=True)
class SystemFacts:
    """One system, its refrigerant and fitted model, and what it is expected to do at the conditions of interest.

    `refrigerant` and `model` are None where they could not be had; `reason` then says why. `outlooks` are keyed
    `design`, `hottest` and `coldest`; the last two only where the climate of the site is written. `safety` holds the
    safety figures and `spaces` the charge limits room by room, both empty where the refrigerant is not known.
    """

    plant: PlantFacts
    id: str
    system: System
    refrigerant: Refrigerant | None
    model: SystemModel | None
    reason: str | None
    outlooks: Mapping[str, Outlook] = field(default_factory=dict)
    safety: Figures | None = None
    spaces: tuple[SpaceCharge, ...] = ()

    @property
    def title(self) -> str:
        """The name people use, or the id."""
        return self.system.name or self.id

    @property
    def cools(self) -> bool:
        """Whether the duty is to take heat away."""
        return self.system.duty in COOLING_DUTIES

    @property
    def evaporative(self) -> bool:
        """Whether the heat goes off by evaporation, so that the wet bulb of the air counts and not its dry bulb."""
        return self.system.condenser.type == "evaporative"

    def path(self, *parts: str | int) -> str:
        """The key path of a part of this system."""
        return ".".join(["systems", self.id, *map(str, parts)])

    def absolute(self, pressure: Pressure) -> float:
        """A written pressure in Pa absolute at this site."""
        return self.plant.loaded.absolute(pressure)

    def expected(self, outlook: str, key: str) -> Explained | None:
        """An expected value at a named condition, None where it is not known."""
        found = self.outlooks.get(outlook)
        return found.get(key) if found else None

    def severity(self, outlook: str, usual: Severity) -> Severity:
        """The severity of a finding at an outlook: a note where the plant may not run on such a day at all."""
        return "note" if (self.system.duty, outlook) in DOUBTFUL else usual

    def safety_figure(self, key: str) -> SafetyFigure | None:
        """A figure of the safety room, None where it was not calculated."""
        return self.safety.get(key) if self.safety else None

    def rated_points(self) -> Iterator[tuple[int, RatedPoint]]:
        """The rated points of the whole system with their index."""
        return enumerate(self.system.rated_points)


def explained_figure(plant: PlantFacts, explained: Explained, label: str | None = None) -> Figure:
    """A calculated value with its standard uncertainty where one is stated."""
    figure = plant.quantity(explained.quantity, explained.value, label)
    if explained.uncertainty:
        kind = plant.display.kind(explained.quantity)
        shown = plant.display.fitting(kind, explained.value)
        spread = f"{shown.spread(explained.uncertainty, kind)} {shown.spread_unit(kind)}".rstrip()
        figure = replace(figure, text=f"{figure.text} (standard uncertainty {spread})")
    return replace(figure, explained=explained)


def conditions_of(part: Conditions) -> dict[str, float]:
    """The quantities that a condition states, in SI."""
    return {key: value for key in CONDITION_KEYS if (value := getattr(part, key)) is not None}


def gather(
    loaded: LoadedPlant, visit: dt.date | None, models: Mapping[str, SystemModel]
) -> tuple[PlantFacts, tuple[SystemFacts, ...]]:
    """The facts of the plant and of each system in the order of the file; what fails for one stops no other.

    Raises:
        ReviewFileError: the plant's own thresholds cannot be used.
    """
    display = loaded.display()
    plant = PlantFacts(loaded, display, visit, thresholds_of(loaded.folder))
    return plant, tuple(
        _system_facts(plant, key, system, models.get(key)) for key, system in loaded.plant.systems.items()
    )


def _system_facts(plant: PlantFacts, key: str, system: System, fitted: SystemModel | None) -> SystemFacts:
    from commission.prediction import fit
    from commission.properties import refrigerant

    plant = replace(plant, display=plant.loaded.display(key))
    facts = SystemFacts(plant, key, system, None, None, None)
    try:
        facts = replace(facts, refrigerant=refrigerant(system.refrigerant))
    except CommissionError as error:
        return replace(facts, reason=reason_of(error))
    try:
        model = fitted if fitted is not None else fit(plant.loaded, key)
        facts = replace(facts, model=model, outlooks=_outlooks(facts, model))
    except CommissionError as error:
        facts = replace(facts, reason=reason_of(error))
    return _with_safety(facts)


def _with_safety(facts: SystemFacts) -> SystemFacts:
    """The same facts with the figures of the safety room."""
    from commission.safety import charge_limits, safety_figures, substance_of

    assert facts.refrigerant is not None
    loaded = facts.plant.loaded
    try:
        return replace(
            facts,
            safety=safety_figures(loaded, facts.id, facts.model),
            spaces=charge_limits(loaded, facts.id, substance_of(facts.refrigerant)),
        )
    except CommissionError as error:
        return replace(facts, reason=facts.reason or reason_of(error))


def reason_of(error: CommissionError) -> str:
    """What went wrong, on one line."""
    return "; ".join(problem.message for problem in error.problems)


def _outlooks(facts: SystemFacts, model: SystemModel) -> dict[str, Outlook]:
    """Design, hottest and coldest day: outdoor air of the climate, all else as designed or by the weather curve."""
    design = conditions_of(facts.system.design) if facts.system.design else {}
    found = {"design": _outlook("at the design condition", model, design)}
    climate = facts.plant.loaded.plant.plant.climate
    for name, words, air in (
        ("hottest", "on the hottest day of the site", climate.summer_dry_bulb),
        ("coldest", "on the coldest day of the site", climate.winter_dry_bulb),
    ):
        side = outdoor_side(facts)
        if air is None or side is None or (facts.system.duty, name) in IDLE:
            continue
        if (facts.system.duty, name) in DOUBTFUL:
            words += ", if it runs then"
        key = f"heat_{side}_inlet_temperature"
        stays = model.along(key)
        found[name] = _outlook(words, model, {**{k: v for k, v in design.items() if k in stays}, key: air})
    return found


def outdoor_side(facts: SystemFacts) -> str | None:
    """`source` or `sink`, whichever breathes outdoor air; None where neither does."""
    spaces = facts.plant.loaded.plant.spaces
    for side, medium in (("sink", facts.system.heat_sink), ("source", facts.system.heat_source)):
        if medium.medium == "air" and medium.space and spaces[medium.space].outdoors:
            return side
    return None


def _outlook(name: str, model: SystemModel, conditions: Mapping[str, float]) -> Outlook:
    known = {key: value for key, value in conditions.items() if key in model.condition_axes}
    try:
        return Outlook(name, model.predict(known), None)
    except CommissionError as error:
        return Outlook(name, None, reason_of(error))
