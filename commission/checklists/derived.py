"""Derived facts: what a checklist asks about a system that is not a single key of the description."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from types import MappingProxyType
from typing import TYPE_CHECKING, Any

from commission.safety import charge_limits, fact, fluid_of, rated_capacity, relief_valves

if TYPE_CHECKING:
    from commission.checklists.words import Facts
    from commission.description.model import CurvePoint, Medium

GLYCOL = ("propylene glycol", "ethylene glycol")
INSPECTED_ABOVE = 70e3
"""W; Directive (EU) 2024/1275, article 23 (from memory)."""
COMFORT_WATER = 277.15
"""Water that leaves colder than 4 °C cools a process, not rooms (common practice)."""
HYDROCARBONS = {"R-290", "R-600a", "R-1270", "R-170", "R-600"}


def _freezer(facts: Facts) -> bool | None:
    system = facts.system
    if system.duty != "cold_storage":
        return False
    room = system.controls.room_temperature
    if room is None and system.design is not None:
        room = system.design.heat_source_inlet_temperature
    return None if room is None else room < 273.15


def _light_charge(facts: Facts) -> bool:
    """A charge of class 2L that no document limits further in the space of the evaporator: what sparks in the rest of
    the room is no part of the installation (EN 378-1:2016 annex C; IEC 60335-2-40)."""
    if facts.substance.flammability != "2L":
        return False
    limits = charge_limits(facts.loaded, facts.system_id, facts.substance)
    return any(space.space_id == facts.space_id("evaporator") and space.over is False for space in limits)


def _outdoors(facts: Facts) -> bool:
    source = facts.system.heat_source
    space = facts.loaded.plant.spaces.get(source.space or "")
    return source.medium == "air" and space is not None and space.outdoors


def _tower(facts: Facts) -> bool | None:
    """Known where it is stated, or the condenser is evaporative; else a chiller's water may go over a tower."""
    system = facts.system
    if system.condenser.type == "evaporative":
        return True
    if system.heat_sink.cooled_by is not None:
        return system.heat_sink.cooled_by == "cooling tower"
    return None if system.heat_sink.medium == "water" and system.duty == "liquid_cooling" else False


def _charged(facts: Facts) -> bool:
    """Refrigerant is in the unit when it comes. Not stated: the outdoor unit of an air conditioner is charged in the
    factory, any other unit that is joined on site comes empty (common practice, no source)."""
    system = facts.system
    if system.factory_charge is not None:
        return system.factory_charge > 0
    return system.sealed or system.duty == "comfort_cooling"


def _extra_charge(facts: Facts) -> float | None:
    whole, brought = facts.system.charge, facts.system.factory_charge
    return None if whole is None or brought is None else whole - brought


def _three_phase(facts: Facts) -> bool | None:
    phases = facts.system.nameplate.phases
    return None if phases is None else phases == "3"


def _rotation(facts: Facts) -> bool | None:
    kind = facts.system.compressor.type
    three = _three_phase(facts)
    if kind == "reciprocating" or three is False or facts.system.compressor.drive == "variable speed":
        return False
    return None if kind is None or three is None else True


def _sight_glass(facts: Facts) -> bool:
    """Machines whose oil level can be seen; a small hermetic one shows none."""
    compressor = facts.system.compressor
    return compressor.type == "screw" or compressor.build in ("semi-hermetic", "open")


def _building(facts: Facts) -> bool | None:
    """Heating or air conditioning of a building above 70 kW under the law of the Union (Directive (EU) 2024/1275)."""
    system, site = facts.system, facts.loaded.plant.plant
    outlet = system.controls.liquid_outlet_temperature
    process = system.duty == "liquid_cooling" and outlet is not None and outlet < COMFORT_WATER
    serves = system.duty in ("comfort_cooling", "space_heating", "liquid_cooling") and not process
    if site.rules.refrigerant_law != "EU 2024/573" or not serves:
        return False
    capacity = rated_capacity(system)
    return None if capacity is None else capacity > INSPECTED_ABOVE


def _antifreeze(medium: Medium) -> bool:
    return medium.medium in GLYCOL


def _freezing_point(side: str) -> Callable[[Facts, str], float | None]:
    """Where the first ice forms in a liquid, K."""

    def find(facts: Facts, _: str) -> float | None:
        from commission.properties import liquid

        medium: Medium = getattr(facts.system, side)
        if medium.medium == "air":
            return None
        return float(liquid(medium.medium, medium.mass_fraction or 0.0).freezing_temperature)

    return find


def _known(name: str) -> Callable[[Facts, str], float | None]:
    def find(facts: Facts, _: str) -> float | None:
        known = getattr(facts.substance, name)
        return None if known is None else float(known.value)

    return find


def _curve(which: str, key: str) -> Callable[[Facts, str], float | None]:
    """A point of the weather curve; one in the middle only where the curve has three points or more; the mildest where
    the machine still heats."""

    def find(facts: Facts, _: str) -> float | None:
        curve = facts.system.controls.weather_curve
        if curve is None:
            return None
        points: list[CurvePoint] = sorted(curve.points, key=lambda point: point.outdoor)
        if which == "middle" and len(points) < 3:
            return None
        if which == "mildest":
            return _mildest(points, curve.heating_limit)[key]
        point = {"coldest": points[0], "middle": points[len(points) // 2]}[which]
        return float(getattr(point, key))

    return find


BELOW_LIMIT = 1.0
"""K below the heating limit at which a controller is sure to heat (common practice)."""


def _mildest(points: list[CurvePoint], limit: float | None) -> dict[str, float]:
    """The last point of a curve, or where the straight line before it stands 1 K below the heating limit, K."""
    before, last = points[-2], points[-1]
    outdoor = last.outdoor
    if limit is not None and before.outdoor < limit - BELOW_LIMIT < outdoor:
        outdoor = limit - BELOW_LIMIT
    share = (outdoor - before.outdoor) / (last.outdoor - before.outdoor)
    return {"outdoor": outdoor, "flow": before.flow + share * (last.flow - before.flow)}


ABOVE_ICE = 3.0
"""K of saturation above the freezing point of a liquid that stands in an exchanger; more in pressure than gauges err
(common practice, no source)."""
ABOVE_DRY_ICE = 10e5
"""Pa; nearly twice the triple-point pressure of carbon dioxide, 5.18 bar (Span and Wagner 1996; margin by common
practice)."""


def _vapour_pressure(facts: Facts, _: str) -> float | None:
    """The pressure above which neither the liquid in an exchanger nor the refrigerant itself can freeze, Pa. Of a blend
    it is the pressure of the bubble point, at which boiling begins coldest."""
    found = [_freezing_point(side)(facts, "") for side in ("heat_source", "heat_sink")]
    freezing = [point for point in found if point is not None]
    least = [fluid_of(facts.loaded, facts.system_id).bubble(max(freezing) + ABOVE_ICE).p] if freezing else []
    if facts.substance.components == ("R-744",):
        least.append(ABOVE_DRY_ICE)
    return max(least, default=None)


def _guarded(facts: Facts) -> bool:
    """A room in which nobody can be sent without warning: gas gathers below ground, or the rules ask for a detector."""
    space = facts.space("condensing_unit")
    return space is not None and not space.outdoors and bool(space.below_ground or space.leak_detector)


def _ventilation(facts: Facts) -> float | None:
    """What the emergency ventilation must move, m³/s: what it was designed for where that is more than the rule."""
    rule = facts.figures.get("emergency_ventilation")
    space = facts.space("condensing_unit")
    designed = None if space is None else space.ventilation
    found = [flow for flow in (None if rule is None else rule.value, designed) if flow is not None]
    return max(found, default=None)


def _return_least(facts: Facts) -> float:
    """The coldest that hot water may come back from its loop, K: as stated where that is warmer than 50 °C."""
    store = facts.system.store
    loop = None if store is None else store.circulation
    stated = None if loop is None else loop.return_temperature
    least = float(fact("hot_water_circulation").value)
    return least if stated is None else max(stated, least)


def _store_least(facts: Facts) -> float | None:
    """The coldest that hot water may leave its store, K (HSG274 part 2; DVGW W 551); no figure in a dwelling."""
    return None if facts.loaded.plant.plant.dwelling else float(fact("hot_water_hygiene").value)


DERIVED: Mapping[str, Callable[[Facts, str], Any]] = MappingProxyType(
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
        "fluid.hydrocarbon": lambda f, _: set(f.substance.components) <= HYDROCARBONS,
        "fluid.liquid_only": lambda f, _: f.substance.liquid_only,
        "fluid.lfl": _known("lfl"),
        "fluid.practical_limit": _known("practical_limit"),
        "fluid.gwp": _known("gwp"),
        "law.leak_checks": lambda f, _: f.duty.applies,
        "law.greenhouse_gas": lambda f, _: f.substance.listed,
        "law.building_inspection": lambda f, _: _building(f),
        "room.walk_in": lambda f, _: f.system.duty == "cold_storage" and not f.system.sealed,
        "room.freezer": lambda f, _: _freezer(f),
        "room.light_charge": lambda f, _: _light_charge(f),
        "source.liquid": lambda f, _: f.system.heat_source.medium != "air",
        "sink.liquid": lambda f, _: f.system.heat_sink.medium != "air",
        "source.antifreeze": lambda f, _: _antifreeze(f.system.heat_source),
        "sink.antifreeze": lambda f, _: _antifreeze(f.system.heat_sink),
        "sink.tower": lambda f, _: _tower(f),
        "source.outdoors": lambda f, _: _outdoors(f),
        "source.freezing_point": _freezing_point("heat_source"),
        "sink.freezing_point": _freezing_point("heat_sink"),
        "relief.described": lambda f, _: bool(relief_valves(f.system)),
        "oil.sight_glass": lambda f, _: _sight_glass(f),
        "rated.capacity": lambda f, _: rated_capacity(f.system),
        "curve.coldest_outdoor": _curve("coldest", "outdoor"),
        "curve.coldest_flow": _curve("coldest", "flow"),
        "curve.middle_outdoor": _curve("middle", "outdoor"),
        "curve.middle_flow": _curve("middle", "flow"),
        "curve.mildest_outdoor": _curve("mildest", "outdoor"),
        "curve.mildest_flow": _curve("mildest", "flow"),
        "machinery.guarded": lambda f, _: _guarded(f),
        "charging.vapour_pressure": _vapour_pressure,
        "piped.on_site": lambda f, _: not f.system.sealed,
        "unit.charged": lambda f, _: _charged(f),
        "unit.extra_charge": lambda f, _: _extra_charge(f),
        "drive.three_phase": lambda f, _: _three_phase(f),
        "back_up.power": lambda f, _: f.system.back_up.power if f.system.back_up is not None else None,
        "motor.outside": lambda f, _: f.system.compressor.build == "open",
        "ventilation.least": lambda f, _: _ventilation(f),
        "water.return_least": lambda f, _: _return_least(f),
        "water.store_least": lambda f, _: _store_least(f),
        "rotation.matters": lambda f, _: _rotation(f),
    }
)
"""What each derived fact is read from."""
