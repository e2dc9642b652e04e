"""Ready phrases: what a checklist says of a system in words."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from types import MappingProxyType
from typing import TYPE_CHECKING, Any

from commission.checklists.instruments import described, strength_gauge, to_bring
from commission.errors import CommissionError
from commission.quantities import NOMENCLATURE, Kind
from commission.safety import (
    charge_limits,
    fluid_of,
    hazards,
    label_text,
    limit_order,
    oil_named,
    relief_valves,
    strength_test_steps,
)

if TYPE_CHECKING:
    from commission.checklists.words import Facts
    from commission.prediction import Prediction


def _levels(facts: Facts) -> str | None:
    shown = [f"{level.shown} {level.what} ({level.says})" for level in hazards(facts.substance).people]
    return "; ".join(shown) or None


def _other_season(facts: Facts) -> str:
    from commission.checklists.words import outdoor_conditions

    if not outdoor_conditions(facts.loaded, facts.system_id):
        return "with the heat-sink liquid at least 5 K colder or warmer than in the test"
    days = facts.design_days
    runs = [word for word in days if word in facts.predictions] or list(days)  # it may stand still on one of them
    ends = [facts.display.text(days[word], Kind.TEMPERATURE) for word in ("coldest", "hottest") if word in runs]
    if not ends:
        return "as much colder or warmer outdoors than the test as the site offers"
    return f"at least half of the way from the test's outdoor air to {' or '.join(ends)}"


def _design_days(facts: Facts) -> str | None:
    """What the discharge shows on the design days that could be calculated; a sealed unit has no gauge there."""
    key = "discharge_temperature" if facts.system.sealed else "discharge_pressure"
    texts = []
    for word, outdoors in facts.design_days.items():
        prediction = facts.predictions.get(word)
        if prediction is not None and key in prediction.expected:
            shown = facts.display.of(key, prediction.expected[key].value)
            texts.append(f"{shown} at {facts.display.text(outdoors, Kind.TEMPERATURE)} outdoors")
    return ", ".join(texts) or None


def _acts_first(facts: Facts) -> str | None:
    """What may stop the machine before the high-pressure limit device, when its cooling is taken off."""
    system, display = facts.system, facts.display
    hot, least = system.controls.discharge_temperature_limit, system.heat_sink.least_flow
    found = []
    if hot is not None:
        found.append(f"the discharge limiter at {display.text(hot, Kind.TEMPERATURE)}")
    if least is not None and system.heat_sink.medium != "air":
        found.append(f"the flow switch at {display.of('heat_sink_flow', least)}")
    ceiling, limit = _ceiling(facts), system.controls.high_pressure_limit
    if ceiling is not None and (limit is None or ceiling < facts.loaded.absolute(limit)):
        shown = display.text(ceiling, Kind.PRESSURE)
        found.append(f"the controller, whose valve opens at its own ceiling of {shown} and holds the pressure there")
    return " or ".join(found) or None


def _ceiling(facts: Facts) -> float | None:
    """The highest pressure that the control of a gas cooler allows, Pa absolute."""
    control = facts.system.controls.gas_cooler_pressure
    return None if control is None or control.highest is None else facts.loaded.absolute(control.highest)


WATER = 4.18e6
"""Heat capacity of a cubic metre of water between 10 and 60 °C, J/(m³ K), within 1 % (steam tables, from memory)."""


def _heat_up(facts: Facts) -> str | None:
    """Heat to the store from cold to its set point, and the time at the expected heating capacity."""
    store, prediction = facts.system.store, facts.predictions.get("expected")
    cold = None if store is None else store.cold_water
    if store is None or cold is None or store.set_point is None:
        return None
    heat = WATER * store.volume * (store.set_point - cold)
    text = f"about {heat / 3.6e6:.0f} kWh of heat from {facts.display.text(cold, Kind.TEMPERATURE)}"
    capacity = None if prediction is None else prediction.expected.get("heating_capacity")
    if capacity is None:
        return text
    return f"{text}, {heat / capacity.value / 3600:.1f} h at the heating capacity expected at this condition"


def _flow_stages(facts: Facts) -> str | None:
    stages = facts.system.heat_source.flow_stages
    return ", ".join(f"{name} {facts.display.of('heat_source_flow', v)}" for name, v in stages.items()) or None


def _highest_discharge(facts: Facts) -> str | None:
    """The highest discharge temperature: of common practice for ammonia and some oils, else the plant's own limiter."""
    oil = oil_named(facts.system.compressor.oil)
    limiter = facts.system.controls.discharge_temperature_limit
    shown = None if limiter is None else facts.display.text(limiter, Kind.TEMPERATURE)
    kept = None if oil is None or oil.discharge is None else f"for {oil.family} oil kept below {oil.discharge}"
    if facts.substance.components == ("R-717",):
        kept = "reciprocating ammonia compressors are kept below 120 to 140 °C, oil-flooded screws at 80 to 90 °C"
    stops = None if shown is None else f"{'only ' if kept else ''}at {shown} the limiter stops it"
    return "; ".join(part for part in (kept, stops) if part) or None


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
        f"{_small(facts.display.short(key))} {facts.display.of(key, value)}"
        for key, value in prediction.conditions.items()
        if NOMENCLATURE[key].kind in (Kind.TEMPERATURE, Kind.SPEED)
    )


def _small(label: str) -> str:
    return label[:1].lower() + label[1:]


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
            f"{facts.display.words(key)} {facts.display.of(key, value)}"
            for key, value in promise.at.model_dump().items()
            if value is not None and key in NOMENCLATURE
        ]
        label = facts.display.words(promise.quantity)
        texts.append(f"{label} {promise.value} at {', '.join(at)}, decided by the {promise.decision} rule")
    return "; ".join(texts) or "nothing is guaranteed; the sheet shows deviations from the expected values, no verdict"


def _charge_limits(facts: Facts) -> str:
    texts = []
    for space in charge_limits(facts.loaded, facts.system_id, facts.substance):
        if space.lowest is not None and space.lowest.value is not None:
            shown = facts.display.text(space.lowest.value.value, Kind.MASS)
            texts.append(f"{space.name} {shown} by {space.lowest.document}, {space.lowest.edition}")
    return "; ".join(texts) or "none by room size (see 'Charge and rooms' on the page 'Safety figures')"


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
    return f"{text}; kept 5 years (EU 2024/573 article 7)" if facts.substance.listed else text


RESETS = {
    "automatic": "the compressor stops, and starts again by itself only after the pressure has fallen",
    "by hand": "the compressor stops and stays out until somebody resets the device by hand",
    "by hand with tool": "the compressor stops and stays out until somebody resets the device with a tool",
}
"""How a high-pressure limit device lets the machine run again: limiter, cut-out and safety cut-out of EN 12263."""


def _reset(facts: Facts) -> str:
    stated = facts.system.controls.high_pressure_reset
    return RESETS.get(stated or "", "the compressor stops; write how the device is reset, which is not stated")


def _relief_valves(facts: Facts) -> str | None:
    """The set pressure of each relief valve, by where it sits."""
    found = relief_valves(facts.system).items()
    bar = facts.loaded.absolute
    return ", ".join(f"{name} {facts.display.text(bar(p), Kind.PRESSURE)}" for name, p in found) or None


def _power_counts(facts: Facts) -> str | None:
    """What the rated power counts, which is what the expected one counts."""
    system = facts.system
    unit = system.condensing_unit
    stated = [p.includes for p in system.rated_points] + ([unit.includes] if unit is not None else [])
    counted = next((includes for includes in stated if includes is not None), None)
    if counted is None:
        return None
    return ", ".join(counted[:-1]) + (" and " if len(counted) > 1 else "") + counted[-1]


def _held_off(facts: Facts, name: str) -> str | None:
    """Why the expected value of a setting is not the stated one: `held_off_superheat` asks for that of superheat."""
    prediction = facts.predictions.get("expected")
    found = prediction.held_off if prediction is not None else ()
    said = next((one.words(facts.display) for one in found if one.quantity == name.removeprefix("held_off_")), None)
    return _too_little_load(facts, prediction) if said is None and name == "held_off_superheat" else said


def _too_little_load(facts: Facts, prediction: Prediction | None) -> str | None:
    """Why less superheat is expected than the valve is set to: the coil has no more to give at this condition."""
    expansion = facts.system.expansion
    stated = None if expansion is None else expansion.superheat
    expected = None if prediction is None else prediction.expected.get("superheat")
    if stated is None or expected is None or expected.value >= stated:
        return None
    setting, given = (facts.display.text(v, Kind.TEMPERATURE_DIFFERENCE) for v in (stated, expected.value))
    if setting == given:
        return None
    return f"superheat is set to {setting}; at this condition the evaporator gives {given}; the setting stays as it is"


REST_AT = (283.15, 293.15, 303.15)
"""Temperatures at which the pressure at rest is shown, K."""


def _rest_pressures(facts: Facts) -> str | None:
    """The pressure of liquid and vapour at rest at a few temperatures; a blend lies between dew and bubble point."""
    fluid = fluid_of(facts.loaded, facts.system_id)
    texts = []
    for T in REST_AT:
        if fluid.T_critical <= T:
            continue
        low, high = fluid.dew(T).p, fluid.bubble(T).p
        first, last = (facts.display.text(p, Kind.PRESSURE) for p in (low, high))
        span = last if first == last else f"{first.split(' ')[0]} to {last}"
        texts.append(f"{span} at {facts.display.text(T, Kind.TEMPERATURE, 0)}")
    return ", ".join(texts) or None


PHRASES: Mapping[str, Callable[[Facts, str], Any]] = MappingProxyType(
    {
        "words.system": lambda f, _: f.system.name or f.system_id,
        "words.evaporator_space": lambda f, _: f.space_name("evaporator"),
        "words.condensing_space": lambda f, _: f.space_name("condensing_unit"),
        "words.indoor_spaces": lambda f, _: _indoor_spaces(f),
        "words.condition": lambda f, _: _condition(f),
        "words.instruments": lambda f, _: described(f),
        "words.instruments_to_bring": lambda f, _: to_bring(f),
        "words.test_steps": lambda f, _: _steps(f),
        "words.limit_ladder": lambda f, _: _ladder(f),
        "words.label": lambda f, _: _label(f),
        "words.guarantees": lambda f, _: _guarantees(f),
        "words.charge_limits": lambda f, _: _charge_limits(f),
        "words.owner": _person("owner"),
        "words.contractor": _person("contractor"),
        "words.other_season": lambda f, _: _other_season(f),
        "words.design_days": lambda f, _: _design_days(f),
        "words.acts_first": lambda f, _: _acts_first(f),
        "words.strength_gauge": strength_gauge("strength_test_pressure"),
        "words.strength_gauge_high_side": strength_gauge("strength_test_pressure_high_side"),
        "words.flow_stages": lambda f, _: _flow_stages(f),
        "words.levels": lambda f, _: _levels(f),
        "words.highest_discharge": lambda f, _: _highest_discharge(f),
        "words.held_off_superheat": _held_off,
        "words.held_off_discharge_pressure": _held_off,
        "words.records": lambda f, _: _records(f),
        "words.heat_up": lambda f, _: _heat_up(f),
        "words.reset": lambda f, _: _reset(f),
        "words.relief_valves": lambda f, _: _relief_valves(f),
        "words.power_counts": lambda f, _: _power_counts(f),
        "words.rest_pressures": lambda f, _: _rest_pressures(f),
    }
)
"""What each phrase is made of."""
