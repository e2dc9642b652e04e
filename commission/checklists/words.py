"""Values of the names in checklist data for one system: description, refrigerant, safety figures, predictions."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from functools import cached_property
from typing import TYPE_CHECKING, Any

from commission.checklists.derived import DERIVED
from commission.checklists.language import Value
from commission.checklists.names import names
from commission.checklists.phrases import PHRASES
from commission.errors import NotCalculatedError
from commission.quantities import Display, Kind, Pressure
from commission.safety import Figures, LeakDuty, Substance, hottest_ambient, leak_duty_of

if TYPE_CHECKING:
    from commission.description import LoadedPlant
    from commission.description.model import Space, System
    from commission.prediction import Prediction, SystemModel


@dataclass(frozen=True)
class Facts:
    """Everything one system's checklist is worked out from.

    `predictions` are by the word in front of a name: `expected`, `hottest`, `coldest`; one that is missing has its
    reason in `no_prediction`.
    """

    loaded: LoadedPlant
    system_id: str
    substance: Substance
    figures: Figures
    predictions: Mapping[str, Prediction]
    no_prediction: Mapping[str, str]
    display: Display
    cache: dict[str, Value] = field(default_factory=dict)

    @cached_property
    def system(self) -> System:
        """The description of the system."""
        return self.loaded.system(self.system_id)

    @cached_property
    def duty(self) -> LeakDuty:
        """The leak-check duty of the system."""
        return leak_duty_of(self.loaded, self.system_id)

    @cached_property
    def design_days(self) -> dict[str, float]:
        """Outdoor air of the hottest and the coldest design day, K."""
        return design_days(self.loaded, self.system_id)

    def space_id(self, part: str) -> str:
        """The id of the space that holds a part, or that its air comes from; empty where none is named."""
        place = getattr(self.system.spaces, part)
        if place is None:
            place = (self.system.heat_source if part == "evaporator" else self.system.heat_sink).space
        return place or ""

    def space(self, part: str) -> Space | None:
        """That space."""
        return self.loaded.plant.spaces.get(self.space_id(part))

    def space_name(self, part: str) -> str | None:
        """The name of that space as it stands on the door."""
        space = self.space(part)
        return None if space is None else space.name or self.space_id(part)

    def lookup(self, name: str) -> Value:
        """The value of a dotted name of `names()`."""
        if name not in self.cache:
            self.cache[name] = _look_up(self, name)
        return self.cache[name]


def predictions(
    model: SystemModel | Prediction | None,
    loaded: LoadedPlant,
    system_id: str,
    conditions: Mapping[str, float] | None,
) -> tuple[dict[str, Prediction], dict[str, str]]:
    """Predictions at the condition of the list and on the hottest and coldest design days, or why there are none."""
    from commission.prediction import Prediction

    if isinstance(model, Prediction):
        reason = "only one condition was calculated"
        return {"expected": model}, {"hottest": reason, "coldest": reason}
    found: dict[str, Prediction] = {}
    missing: dict[str, str] = {}
    days = design_days(loaded, system_id)
    wanted: dict[str, Mapping[str, float] | str | None] = {"expected": conditions}
    for word in ("hottest", "coldest"):
        if word == "hottest" and loaded.system(system_id).duty == "space_heating":
            wanted[word] = "nothing is heated on the hottest day"
            continue
        wanted[word] = _on_day(model, outdoor_conditions(loaded, system_id), word, days.get(word))
    for word, at in wanted.items():
        if model is None:
            missing[word] = "this system could not be calculated"
        elif isinstance(at, str):
            missing[word] = at
        else:
            try:
                found[word] = model.predict(at)
            except NotCalculatedError as error:
                missing[word] = str(error)
    return found, missing


def design_days(loaded: LoadedPlant, system_id: str) -> dict[str, float]:
    """Outdoor air of the hottest and the coldest day on which the system works in K, where the plant says it."""
    system, hottest = loaded.system(system_id), hottest_ambient(loaded, system_id)
    curve = system.controls.weather_curve
    warm, cold = None if hottest is None else hottest[0], loaded.plant.plant.climate.winter_dry_bulb
    if system.duty == "space_heating":
        warm = None if curve is None else curve.heating_limit
    if system.duty == "comfort_cooling" and cold is not None:
        cold = max(cold, COOL_DAY)
    found = {"hottest": warm, "coldest": cold}
    return {word: temperature for word, temperature in found.items() if temperature is not None}


COOL_DAY = 291.15
"""A cool day of the cooling season, 18 °C: below it windows cool a building (common practice, no source)."""


def outdoor_conditions(loaded: LoadedPlant, system_id: str) -> tuple[str, ...]:
    """The conditions of a system that are the temperature of outdoor air."""
    from commission.description import outdoor_sides

    return tuple(f"{side}_inlet_temperature" for side in outdoor_sides(loaded.plant, loaded.system(system_id)))


def _on_day(
    model: SystemModel | None, outdoor: tuple[str, ...], word: str, temperature: float | None
) -> dict[str, float] | str:
    """The condition of a design day: outdoor air on the side that is outdoors."""
    if model is None:
        return "this system could not be calculated"
    if temperature is None:
        return f"the {word} outdoor temperature is not stated (plant.climate)"
    sides = [key for key in outdoor if key in model.condition_axes]
    if not sides:
        return "no condition of this system is outdoor air"
    return dict.fromkeys(sides, temperature)


def _look_up(facts: Facts, name: str) -> Value:
    known = names()[name]
    head, _, rest = name.partition(".")
    reader: Callable[[Facts, str], Any] | None = PHRASES.get(name) or DERIVED.get(name)
    if reader is not None:
        content = reader(facts, rest)
        return _value(known.type, content, f"not known: {known.says}")
    if head in ("expected", "hottest", "coldest"):
        return _prediction(facts, head, rest, known.type)
    if head == "condition":
        prediction = facts.predictions.get("expected")
        content = None if prediction is None else prediction.conditions.get(rest)
        return _value(known.type, content, f"the condition {rest} does not belong to this system")
    if head == "figure":
        figure = facts.figures.get(rest)
        if figure is None:
            return Value(known.type, None, facts.figures.not_calculated.get(rest, "not calculated"))
        return Value(known.type, figure.value, None, (figure.explained,))
    return _described(facts, head, rest, known.type)


def _value(kind: Any, content: Any, missing: str) -> Value:
    return Value(kind, None, missing) if content is None else Value(kind, content)


def _prediction(facts: Facts, word: str, key: str, kind: Any) -> Value:
    prediction = facts.predictions.get(word)
    if prediction is None:
        return Value(kind, None, facts.no_prediction[word])
    explained = prediction.expected.get(key)
    if explained is not None:
        return Value(kind, explained.value, None, (explained,))
    if key in prediction.conditions:
        return Value(kind, prediction.conditions[key])
    return Value(kind, None, prediction.not_calculated.get(key, "not calculated for this kind of system"))


def _described(facts: Facts, head: str, path: str, kind: Any) -> Value:
    roots: dict[str, Any] = {
        "system": facts.system,
        "plant": facts.loaded.plant.plant,
        "evaporator_space": facts.space("evaporator"),
        "condensing_space": facts.space("condensing_unit"),
    }
    node = roots[head]
    where = path if head == "system" else f"{head}.{path}"
    missing = f"not stated: {where}"
    for part in path.split("."):
        if node is None:
            return Value(kind, None, missing)
        # names were made from these same models, so only fields that are declared can be reached
        node = getattr(node, part if part in type(node).model_fields else f"{part}_")
    if isinstance(node, Pressure):
        return Value(kind, facts.loaded.absolute(node))
    if kind == "part":
        return Value(kind, True) if node else Value(kind, None, missing)
    if isinstance(node, int) and not isinstance(node, bool) and isinstance(kind, Kind):
        node = float(node)
    return _value(kind, node, missing)
