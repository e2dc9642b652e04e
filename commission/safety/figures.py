"""All safety figures of one system in one call."""

from __future__ import annotations

from typing import TYPE_CHECKING

from commission.quantities import Explained, Input, Kind
from commission.safety.ambient import design_pressures
from commission.safety.charge import SpaceCharge, charge_limits, lowest_limit, smallest_space
from commission.safety.evacuation import evacuation_figures
from commission.safety.facts import Fact, fact
from commission.safety.figure import TITLES, Collector, Figure, Figures, fact_input
from commission.safety.formulas import (
    dispersal_charge,
    emergency_ventilation_ashrae15,
    emergency_ventilation_en378,
)
from commission.safety.leaks import annex_ii_mass, leak_duty_of
from commission.safety.limit_devices import limit_devices
from commission.safety.register import fluid_of, substance_of
from commission.safety.standstill import standstill
from commission.safety.strength import pressure_test_figures

if TYPE_CHECKING:
    from commission.description import LoadedPlant
    from commission.description.model import Space
    from commission.prediction import SystemModel
    from commission.safety.substance import Substance


def safety_figures(loaded: LoadedPlant, system_id: str, model: SystemModel | None = None) -> Figures:
    """Every figure of `TITLES` for one system: found, or with the reason why not.

    `model` is the fitted model of the system; without it, figures that need an expected reading are not calculated.

    Raises:
        InputError: no such system or refrigerant.
    """
    fluid = fluid_of(loaded, system_id)
    substance = substance_of(fluid)
    out = Collector()
    pressure_test_figures(loaded, system_id, out)
    standstill(loaded, system_id, fluid, out)
    design_pressures(loaded, system_id, fluid, out)
    limit_devices(loaded, system_id, fluid, model, out)
    evacuation_figures(loaded, system_id, substance, out)
    _charge(charge_limits(loaded, system_id, substance), substance, out)
    _ventilation(loaded, system_id, out)
    _leaks(loaded, system_id, substance, out)
    for key in TITLES:
        if key not in out.found and key not in out.missing:
            raise AssertionError(f"no figure and no reason for {key}")
    return out.finish()


def _charge(spaces: tuple[SpaceCharge, ...], substance: Substance, out: Collector) -> None:
    found = lowest_limit(spaces)
    if found is None:
        out.refuse("no document gives a limit in kilograms for the spaces of this system", "room_charge_limit")
    else:
        space, limit = found
        assert limit.value is not None
        title, kind = TITLES["room_charge_limit"]
        note = f"{space.name}: {limit.rule}; {space.advice}"
        out.found["room_charge_limit"] = Figure(
            "room_charge_limit", title, kind, limit.value, limit.document, limit.edition, limit.mark, note
        )
    _concentration(smallest_space(spaces), substance, out)


_CEILING = (
    "a ceiling, no setting: set it as low as its maker allows, below what the whole charge reaches in the smallest "
    "space"
)
_NEVER = (
    "a ceiling, no setting: the whole charge, evenly mixed in the smallest space, stays below it, so that a detector "
    "set to it might never alarm; set it as low as its maker allows, well below that concentration"
)


def _concentration(space: SpaceCharge | None, substance: Substance, out: Collector) -> None:
    rule = Fact("dispersal", 0.0, Kind.DENSITY, "definition", "", "C", "charge over volume, evenly mixed")
    lfl = substance.lfl
    alarm = fact("flammable_alarm_share")
    if lfl is None:
        out.refuse("the refrigerant has no lower flammability limit", "leak_share_of_lfl", "flammable_alarm_level")
    else:
        value = dispersal_charge(alarm.value * lfl.value, 1.0)
        inputs = (Input("LFL", lfl.value, Kind.DENSITY, f"register: {lfl.source} ({lfl.mark})"), fact_input(alarm))
        reached = space.concentration.value if space is not None and space.concentration is not None else None
        never = reached is not None and reached < value
        out.add("flammable_alarm_level", value, "safety_rule_figure", inputs, alarm, note=_NEVER if never else _CEILING)
    if space is None or space.concentration is None:
        out.refuse("no closed space with floor area, height and charge stated", "leak_concentration")
        if lfl is not None:
            out.refuse("no closed space with floor area, height and charge stated", "leak_share_of_lfl")
        return
    spread: Explained = space.concentration
    note = f"{space.name}; a leak is never evenly mixed: near the leak and the floor it is denser"
    out.add("leak_concentration", spread.value, spread.method, spread.inputs, rule, note=note)
    if lfl is not None:
        inputs = (
            Input("concentration", spread.value, Kind.DENSITY, "calculated"),
            Input("LFL", lfl.value, Kind.DENSITY, f"register: {lfl.source} ({lfl.mark})"),
        )
        out.add("leak_share_of_lfl", spread.value / lfl.value, "leak_share", inputs, rule, mark=lfl.mark, note=note)


def _ventilation(loaded: LoadedPlant, system_id: str, out: Collector) -> None:
    """Emergency ventilation where the condensing unit stands indoors; the largest charge of one system in that room."""
    keys = ("emergency_ventilation", "emergency_ventilation_ashrae15")
    room = loaded.system(system_id).spaces.condensing_unit
    space = loaded.plant.spaces.get(room or "")
    if space is None or space.outdoors:
        out.refuse("no condensing unit stands indoors", *keys)
        return
    charges = {
        key: system.charge
        for key, system in loaded.plant.systems.items()
        if system.spaces.condensing_unit == room and system.charge is not None
    }
    if not charges:
        out.refuse("no charge is stated of the systems in the machinery room", *keys)
        return
    largest = max(charges, key=lambda key: charges[key])
    inputs = (
        Input(
            "largest charge in the room", charges[largest], Kind.MASS, str(loaded.where(f"systems.{largest}.charge"))
        ),
    )
    for key, rule, formula in (
        (keys[0], fact("emergency_ventilation_en"), emergency_ventilation_en378),
        (keys[1], fact("emergency_ventilation_ashrae"), emergency_ventilation_ashrae15),
    ):
        out.add(key, formula(charges[largest]), key, inputs, rule)
    _enough_air_changes(loaded, room or "", space, out)


def _enough_air_changes(loaded: LoadedPlant, room: str, space: Space, out: Collector) -> None:
    """EN 378-3 never asks for more than its number of air changes: in a small room that is less than the formula."""
    rule = fact("emergency_air_changes")
    if space.floor_area is None or space.height is None:
        return
    volume = space.floor_area * space.height
    flow = rule.value * volume / 3600
    if flow >= out.found["emergency_ventilation"].value:
        return
    place = str(loaded.where(f"spaces.{room}"))
    inputs = (Input(rule.says, rule.value, Kind.NUMBER, rule.source), Input("room volume", volume, Kind.VOLUME, place))
    out.add("emergency_ventilation", flow, "safety_rule_figure", inputs, rule)


def _leaks(loaded: LoadedPlant, system_id: str, substance: Substance, out: Collector) -> None:
    system = loaded.system(system_id)
    duty = leak_duty_of(loaded, system_id)
    rule = Fact("leak_check", 0.0, Kind.NUMBER, duty.document, duty.edition, duty.mark, duty.reason)
    if system.charge is None or substance.gwp is None:
        why = "the charge is not stated" if system.charge is None else "the register has no GWP"
        out.refuse(why, "co2_equivalent")
    else:
        gwp = substance.gwp
        inputs = (
            Input("charge", system.charge, Kind.MASS, str(loaded.where(f"systems.{system_id}.charge"))),
            Input("GWP", gwp.value, Kind.NUMBER, f"register: {gwp.source} ({gwp.mark})"),
        )
        out.add("co2_equivalent", system.charge * gwp.value, "co2_equivalent", inputs, rule, mark=gwp.mark)
    own = None if system.charge is None else annex_ii_mass(substance, system.charge)
    if own is None:
        why = "the charge is not stated" if system.charge is None else "the refrigerant holds no gas of annex II"
        out.refuse(why, "annex_ii_mass")
    else:
        out.add("annex_ii_mass", own.value, own.method, own.inputs, rule)
    if duty.months is None:
        out.refuse(duty.reason, "leak_check_months")
    else:
        measured = tuple(dict.fromkeys(given for measure in duty.measures for given in measure.inputs))
        out.add("leak_check_months", float(duty.months), "leak_check_interval", measured, rule)
