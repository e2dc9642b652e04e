"""Derived facts and ready phrases: what a checklist asks about a system that is not a single key of the description."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from types import MappingProxyType
from typing import TYPE_CHECKING, Any

from commission.errors import CommissionError
from commission.quantities import NOMENCLATURE, Kind
from commission.safety import charge_limits, hazards, label_text, limit_order, strength_test_steps

if TYPE_CHECKING:
    from commission.checklists.words import Facts
    from commission.description.model import Medium

GLYCOL = ("propylene glycol", "ethylene glycol")
HYDROCARBONS = {"R-290", "R-600a", "R-1270", "R-170", "R-600"}


def _freezer(facts: Facts) -> bool | None:
    system = facts.system
    if system.duty != "cold_storage":
        return False
    room = system.controls.room_temperature
    if room is None and system.design is not None:
        room = system.design.heat_source_inlet_temperature
    return None if room is None else room < 273.15


def _outdoors(facts: Facts) -> bool:
    source = facts.system.heat_source
    space = facts.loaded.plant.spaces.get(source.space or "")
    return source.medium == "air" and space is not None and space.outdoors


def _tower(facts: Facts) -> bool | None:
    """Known where the condenser is evaporative; a chiller that gives heat to water may have a tower behind it."""
    system = facts.system
    if system.condenser.type == "evaporative":
        return True
    return None if system.heat_sink.medium == "water" and system.duty == "liquid_cooling" else False


def _levels(facts: Facts) -> str | None:
    shown = [f"{level.ppm:.0f} ppm {level.what} ({level.says})" for level in hazards(facts.substance).people]
    return "; ".join(shown) or None


def _other_season(facts: Facts) -> str:
    from commission.checklists.words import outdoor_conditions

    if outdoor_conditions(facts.loaded, facts.system_id):
        return "at least 15 K colder or warmer outdoors than the test"
    return "with the heat-sink liquid at least 5 K colder or warmer than in the test"


def _design_days(facts: Facts) -> str | None:
    """What the discharge shows on the design days that could be calculated; a sealed unit has no gauge there."""
    key = "discharge_temperature" if facts.system.sealed else "discharge_pressure"
    climate = facts.loaded.plant.plant.climate
    texts = []
    for word, outdoors in (("hottest", climate.summer_dry_bulb), ("coldest", climate.winter_dry_bulb)):
        prediction = facts.predictions.get(word)
        if prediction is not None and outdoors is not None and key in prediction.expected:
            shown = facts.display.text(prediction.expected[key].value, NOMENCLATURE[key].kind)
            texts.append(f"{shown} at {facts.display.text(outdoors, Kind.TEMPERATURE)} outdoors")
    return ", ".join(texts) or None


def _flow_stages(facts: Facts) -> str | None:
    stages = facts.system.heat_source.flow_stages
    return ", ".join(f"{name} {facts.display.text(v, Kind.VOLUME_FLOW)}" for name, v in stages.items()) or None


def _highest_discharge(facts: Facts) -> str | None:
    components = facts.substance.components
    if components == ("R-744",):
        return None
    if components == ("R-717",):
        return "reciprocating ammonia compressors stay below 120 to 140 °C, oil-flooded screws at 80 to 90 °C"
    return "with polyolester oil never above 105 to 110 °C"


def _three_phase(facts: Facts) -> bool | None:
    phases = facts.system.nameplate.phases
    return None if phases is None else phases == "3"


def _rotation(facts: Facts) -> bool | None:
    kind = facts.system.compressor.type
    three = _three_phase(facts)
    if kind == "reciprocating" or three is False or facts.system.compressor.drive == "variable speed":
        return False
    return None if kind is None or three is None else True


def _antifreeze(medium: Medium) -> bool:
    return medium.medium in GLYCOL


def _indoor_spaces(facts: Facts) -> str | None:
    """Every indoor space that holds a part of the circuit, as it stands on the door."""
    named = facts.loaded.plant.spaces
    places = facts.system.spaces
    held = [facts.space_id("evaporator"), facts.space_id("condensing_unit"), *places.pipework]
    found = [named[i].name or i for i in dict.fromkeys(held) if i in named and not named[i].outdoors]
    return ", ".join(found) or None


def _condition(facts: Facts) -> str | None:
    prediction = facts.predictions.get("expected")
    if prediction is None:
        return None
    return ", ".join(
        f"{_short(facts, key)} {facts.display.of(key, value)}"
        for key, value in prediction.conditions.items()
        if NOMENCLATURE[key].kind in (Kind.TEMPERATURE, Kind.SPEED)
    )


def _short(facts: Facts, key: str) -> str:
    """A condition as people on site say it: the room, outdoors, or the nomenclature's own label."""
    from commission.checklists.words import outdoor_conditions

    if key in outdoor_conditions(facts.loaded, facts.system_id):
        return "outdoors"
    if key == "heat_source_inlet_temperature" and facts.system.duty in ("cold_storage", "comfort_cooling"):
        return "room"
    return NOMENCLATURE[key].label.lower()


def _instruments(facts: Facts) -> str:
    wanted = set(facts.system.measured_with.values())
    listed = facts.loaded.plant.instruments
    chosen = {key: item for key, item in listed.items() if key in wanted} or listed
    texts = []
    for key, item in chosen.items():
        until = (
            f"calibrated until {item.calibrated_until.isoformat()}"
            if item.calibrated_until
            else "no calibration stated"
        )
        texts.append(f"{key} ({item.serial or 'no serial stated'}, {until})")
    return "; ".join(texts) or "No instrument is described; without serial and calibration a report is void."


def _steps(facts: Facts) -> str | None:
    try:
        steps = strength_test_steps(facts.loaded, facts.system_id)
    except CommissionError:
        return None
    numbers = [facts.display.number(step, Kind.PRESSURE, 1) for step in steps]
    return f"{', '.join(numbers)} {facts.display.unit_and_digits(Kind.PRESSURE)[0]}"


def _ladder(facts: Facts) -> str | None:
    order = limit_order(facts.loaded, facts.system_id, facts.figures)
    steps = [step for step in order.steps if not step.low_side]
    shown = [f"{step.title} {facts.display.text(step.pressure, Kind.PRESSURE, 1)}" for step in steps]
    return " < ".join(shown) or None


def _label(facts: Facts) -> str:
    law = facts.loaded.plant.plant.rules.refrigerant_law
    return "; ".join(label_text(law, facts.substance, facts.system.charge, facts.system.sealed))


def _guarantees(facts: Facts) -> str:
    texts = []
    for promise in facts.system.guarantee:
        at = [
            f"{NOMENCLATURE[key].label.lower()} {facts.display.of(key, value)}"
            for key, value in promise.at.model_dump().items()
            if value is not None and key in NOMENCLATURE
        ]
        label = NOMENCLATURE[promise.quantity].label.lower()
        texts.append(f"{label} {promise.value} at {', '.join(at)}, decided by the {promise.decision} rule")
    return "; ".join(texts) or "nothing is guaranteed; the sheet shows deviations from the expected values, no verdict"


def _charge_limits(facts: Facts) -> str:
    texts = []
    for space in charge_limits(facts.loaded, facts.system_id, facts.substance):
        if space.lowest is not None and space.lowest.value is not None:
            shown = facts.display.text(space.lowest.value.value, Kind.MASS)
            texts.append(f"{space.name} {shown} by {space.lowest.document}, {space.lowest.edition}")
    return "; ".join(texts) or "none by room size (see the page on charge)"


def _person(role: str) -> Callable[[Facts, str], str | None]:
    def find(facts: Facts, _: str) -> str | None:
        person = facts.loaded.plant.plant.people.get(role)
        if person is None:
            return None
        return ", ".join(part for part in (person.name, person.firm, person.phone) if part)

    return find


def _records(facts: Facts) -> str:
    text = (
        "kind and quantity of refrigerant, each addition and recovery with date and cause, firm and person with "
        "certificate number, dates and results of leak checks and repairs"
    )
    return f"{text}; kept 5 years (EU 2024/573 article 7)" if _greenhouse(facts) else text


def _greenhouse(facts: Facts) -> bool:
    return facts.substance.listed


def _known(name: str) -> Callable[[Facts, str], float | None]:
    def find(facts: Facts, _: str) -> float | None:
        known = getattr(facts.substance, name)
        return None if known is None else float(known.value)

    return find


PHRASES: Mapping[str, Callable[[Facts, str], Any]] = MappingProxyType(
    {
        "fluid.name": lambda f, _: f.substance.name,
        "fluid.safety_class": lambda f, _: f.substance.safety_class,
        "fluid.flammable": lambda f, _: f.substance.flammable,
        "fluid.highly_flammable": lambda f, _: f.substance.flammability in ("2", "3"),
        "fluid.toxic": lambda f, _: f.substance.toxicity == "B",
        "fluid.heavy": lambda f, _: f.substance.heavy,
        "fluid.fluorinated": lambda f, _: f.substance.fluorinated,
        "fluid.ammonia": lambda f, _: "R-717" in f.substance.components,
        "fluid.carbon_dioxide": lambda f, _: f.substance.components == ("R-744",),
        "fluid.blend": lambda f, _: len(f.substance.components) > 1,
        "fluid.liquid_only": lambda f, _: f.substance.liquid_only,
        "fluid.lfl": _known("lfl"),
        "fluid.practical_limit": _known("practical_limit"),
        "fluid.gwp": _known("gwp"),
        "law.leak_checks": lambda f, _: f.duty.applies,
        "law.greenhouse_gas": lambda f, _: _greenhouse(f),
        "room.walk_in": lambda f, _: f.system.duty == "cold_storage" and not f.system.sealed,
        "room.freezer": lambda f, _: _freezer(f),
        "source.liquid": lambda f, _: f.system.heat_source.medium != "air",
        "sink.liquid": lambda f, _: f.system.heat_sink.medium != "air",
        "source.antifreeze": lambda f, _: _antifreeze(f.system.heat_source),
        "sink.antifreeze": lambda f, _: _antifreeze(f.system.heat_sink),
        "sink.tower": lambda f, _: _tower(f),
        "source.outdoors": lambda f, _: _outdoors(f),
        "piped.on_site": lambda f, _: not f.system.sealed,
        "drive.three_phase": lambda f, _: _three_phase(f),
        "rotation.matters": lambda f, _: _rotation(f),
        "words.system": lambda f, _: f.system.name or f.system_id,
        "words.evaporator_space": lambda f, _: f.space_name("evaporator"),
        "words.condensing_space": lambda f, _: f.space_name("condensing_unit"),
        "words.indoor_spaces": lambda f, _: _indoor_spaces(f),
        "words.condition": lambda f, _: _condition(f),
        "words.instruments": lambda f, _: _instruments(f),
        "words.test_steps": lambda f, _: _steps(f),
        "words.limit_ladder": lambda f, _: _ladder(f),
        "words.label": lambda f, _: _label(f),
        "words.guarantees": lambda f, _: _guarantees(f),
        "words.charge_limits": lambda f, _: _charge_limits(f),
        "words.owner": _person("owner"),
        "words.contractor": _person("contractor"),
        "words.other_season": lambda f, _: _other_season(f),
        "words.design_days": lambda f, _: _design_days(f),
        "words.flow_stages": lambda f, _: _flow_stages(f),
        "words.levels": lambda f, _: _levels(f),
        "words.highest_discharge": lambda f, _: _highest_discharge(f),
        "only.flammable": lambda f, _: "" if f.substance.flammable else None,
        "only.hydrocarbon": lambda f, _: "" if set(f.substance.components) <= HYDROCARBONS else None,
        "words.records": lambda f, _: _records(f),
    }
)
"""What each derived name is read from. Keys are those of `names.WORDS`; a test holds the two together."""
