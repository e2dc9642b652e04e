"""The safety figures of a system, and the emergency card for the door."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any

from commission.errors import CommissionError
from commission.manual.book import Sheet
from commission.manual.gather import PlantData, SystemData
from commission.manual.showing import VACUUM, How, Row, show, show_how, unit_of
from commission.quantities import Display, Kind, pretty

if TYPE_CHECKING:
    from commission.safety import ChargeLimit, Figure, Figures, LimitOrder, ReliefDuty, SpaceCharge, Substance

_GROUPS: tuple[tuple[str, tuple[str, ...]], ...] = (
    ("Strength and tightness", (
        "allowable_pressure_lowest", "pre_test_pressure", "strength_test_pressure", "strength_test_pressure_high_side",
        "strength_test_hold", "tightness_test_pressure", "tightness_test_pressure_high_side", "tightness_test_hold",
        "nitrogen_change_per_kelvin",
    )),
    ("Evacuation", ("evacuation_limit", "evacuation_target", "evacuation_hold", "rise_test_hold", "rise_test_limit")),
    ("Limit devices", (
        "standstill_pressure", "standstill_least_volume", "hottest_discharge_pressure", "high_pressure_limit_highest",
        "high_pressure_margin",
        "high_pressure_limit_temperature", "low_pressure_cut_out_temperature", "low_pressure_cut_in_temperature",
        "low_pressure_trip_lowest", "relief_highest", "design_pressure_high_side", "design_pressure_low_side",
    )),
    ("Leaks", (
        "room_charge_limit", "leak_concentration", "leak_share_of_lfl", "flammable_alarm_level", "co2_equivalent",
        "annex_ii_mass", "leak_check_months",
    )),
)  # fmt: skip


@dataclass(frozen=True, slots=True)
class LimitView:
    """One document's charge limit for one space."""

    document: str
    rule: str
    value: str
    how: How | None
    because: str | None = None


@dataclass(frozen=True, slots=True)
class SpaceView:
    """One space that refrigerant can reach."""

    name: str
    holds: str
    volume: str | None
    charge: str | None
    verdict: str
    over: bool | None
    limits: tuple[LimitView, ...]
    alternatives: tuple[LimitView, ...]
    notes: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class ReliefView:
    """One reason for a relief device: `stated` is what the description shows of it, `look` the tint of the note."""

    title: str
    stated: str
    look: str
    rows: tuple[Row, ...]
    source: str


def _sentence(text: str) -> str:
    return text[:1].upper() + text[1:]


def figure_row(figure: Figure, data: SystemData, display: Display) -> Row:
    """A safety figure as a row; the source of the rule takes the place of the method's."""
    from commission.safety import tonnes

    how = show_how(figure.explained, display, data.assumptions, kind=figure.kind)
    how = replace(how, source=figure.source, mark=figure.sureness)
    shown = display.fitting(figure.kind, figure.value)
    unit = unit_of(shown, figure.kind)
    value = shown.number(figure.value, figure.kind)
    if figure.kind is Kind.PRESSURE and figure.value < VACUUM:
        value, unit = f"{figure.value:.0f}", "Pa absolute"
    elif figure.key == "leak_check_months":
        value, unit = f"{figure.value:.0f}", "months"
    elif figure.key == "co2_equivalent":
        value, unit = tonnes(figure.value), "t"
    return Row(figure.key, _sentence(figure.title), figure.note, value, pretty(unit), "", how)


def _missing_row(key: str, reason: str) -> Row:
    from commission.safety import QUANTITY_TITLES

    return Row(key, _sentence(QUANTITY_TITLES[key][0]), "", None, "", "", None, because=reason)


def _groups(figures: Figures, data: SystemData, display: Display) -> tuple[tuple[str, tuple[Row, ...]], ...]:
    groups = []
    for title, keys in _GROUPS:
        rows = [figure_row(figures.found[k], data, display) for k in keys if k in figures.found]
        rows += [_missing_row(k, figures.not_calculated[k]) for k in keys if k in figures.not_calculated]
        if rows:
            groups.append((title, tuple(rows)))
    return tuple(groups)


def _limit(limit: ChargeLimit, data: SystemData, display: Display) -> LimitView:
    document = f"{limit.document}, {limit.edition}" if limit.edition else limit.document
    if limit.value is None:
        return LimitView(document, limit.rule, "none", None, limit.reason or "the document gives none")
    how = replace(show_how(limit.value, display, data.assumptions, kind=Kind.MASS), source=document)
    return LimitView(document, limit.rule, display.text(limit.value.value, Kind.MASS), how)


def _space(space: SpaceCharge, data: SystemData, display: Display) -> SpaceView:
    return SpaceView(
        name=space.name,
        holds=", ".join(space.holds),
        volume=None if space.volume is None else f"{space.volume:.1f} m³",
        charge=None if space.charge is None else display.text(space.charge, Kind.MASS),
        verdict=_sentence(space.advice),
        over=space.over,
        limits=tuple(_limit(x, data, display) for x in space.limits),
        alternatives=tuple(_limit(x, data, display) for x in space.alternatives),
        notes=space.notes,
    )


def _ladder(order: LimitOrder, display: Display) -> dict[str, Any]:
    steps = [(_sentence(s.title), display.text(s.pressure, Kind.PRESSURE), s.origin) for s in reversed(order.steps)]
    return {"steps": steps, "problems": order.problems}


_RELIEF = {
    True: ("The description names a relief valve.", "good"),
    False: ("The description names no relief valve.", "danger"),
    None: ("The description does not say whether it is there: look on the plant.", "care"),
}


def _relief(duty: ReliefDuty, data: SystemData, display: Display) -> ReliefView:
    from commission.safety import MARKS

    stated, look = _RELIEF[duty.stated]
    rows = tuple(replace(show(e.quantity, e, display, data.assumptions), band="") for e in duty.figures)
    return ReliefView(_sentence(duty.title), stated, look, rows, f"{duty.source}; {MARKS[duty.mark]}")


def _law_dates(plant: PlantData, data: SystemData, substance: Substance) -> list[dict[str, str]]:
    """What the law of the plant forbids, and from when, in the order of days."""
    from commission.safety import MARKS, market_dates

    return [
        {
            "since": d.since.isoformat(),
            "what": _sentence(d.what),
            "until": f"reclaimed gas is allowed until {d.reclaimed_until}" if d.reclaimed_until else "",
            "source": f"{d.document}, {d.edition}; {MARKS[d.mark]}",
        }
        for d in market_dates(plant.loaded.plant.plant.rules.refrigerant_law, data.system, substance)
    ]


def _warm_below(plant: PlantData, data: SystemData) -> tuple[Row, ...]:
    """The part of a store that its element leaves warm, where there is one."""
    from commission.safety import warm_volume_below_element

    found = warm_volume_below_element(plant.loaded, data.id)
    return (show(found.quantity, found, plant.display, data.assumptions),) if found is not None else ()


def safety_page(plant: PlantData, data: SystemData) -> Sheet:
    """Pressures, evacuation, limit devices, charge for each space, leak checks: figures with document and edition."""
    from commission.safety import (
        MARKS,
        charge_limits,
        fluid_of,
        hazards,
        leak_duty_of,
        limit_order,
        relief_duties,
        safety_figures,
        substance_of,
    )

    loaded, display = plant.loaded, plant.display
    context: dict[str, Any] = {"because": None}
    try:
        substance = substance_of(fluid_of(loaded, data.id))
        figures = safety_figures(loaded, data.id, data.model)
        context |= {
            "marks": MARKS,
            "hazards": hazards(substance),
            "substance": substance,
            "groups": _groups(figures, data, display),
            "spaces": [_space(x, data, display) for x in charge_limits(loaded, data.id, substance)],
            "ladder": _ladder(limit_order(loaded, data.id, figures), display),
            "relief": [_relief(x, data, display) for x in relief_duties(loaded, data.id, figures)],
            "dates": _law_dates(plant, data, substance),
            "warm_below": _warm_below(plant, data),
            "duty": leak_duty_of(loaded, data.id),
            "assumptions_page": data.page("assumptions"),
        }
    except CommissionError as error:
        context = {"because": "; ".join(p.message for p in error.problems)}
    return Sheet(data.page("safety-figures"), "Safety figures", data.group, "safety.html", context, data.kicker)


def emergency_page(plant: PlantData) -> Sheet:
    """The card of each system, one printed page each."""
    from commission.safety import emergency_card, fluid_of, substance_of

    cards, missing = [], []
    for data in plant.systems:
        try:
            substance = substance_of(fluid_of(plant.loaded, data.id))
        except CommissionError as error:
            missing.append((data.name, "; ".join(p.message for p in error.problems)))
            continue
        cards.append((data.name, emergency_card(plant.loaded, data.id, substance, plant.display)))
    return Sheet("emergency-card", "Emergency card", "plant", "emergency.html", {"cards": cards, "missing": missing})
