"""The names that checklist data may use: a fixed table, so that every name is checked when a file is read.

Names follow the keys of the description (`system.controls.high_pressure_limit`, `plant.climate.summer_dry_bulb`) and of
the nomenclature (`expected.suction_pressure`). Each says what it is; the same table makes the reference page.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from functools import cache
from types import MappingProxyType, NoneType, UnionType
from typing import Annotated, Any, Literal, Union, get_args, get_origin, get_type_hints

from commission.checklists.language import NameType, Type
from commission.quantities import NOMENCLATURE, Kind
from commission.safety import FIGURE_TITLES

READINGS: Mapping[str, str] = MappingProxyType(
    {
        "expected": "expected reading at the condition of the list (rated, or the one asked for)",
        "hottest": "expected reading on the hottest day of the system's season, rest as rated",
        "coldest": "expected reading on the coldest day of the system's season, rest as rated",
        "condition": "condition of the list",
    }
)

WORDS: Mapping[str, tuple[Type, str, tuple[str, ...]]] = MappingProxyType(
    {
        "fluid.name": ("text", "designation of the refrigerant", ()),
        "fluid.safety_class": ("text", "safety class by ISO 817", ("A1", "A2L", "A2", "A3", "B1", "B2L", "B2", "B3")),
        "fluid.flammable": ("yes/no", "class 2L, 2 or 3", ()),
        "fluid.highly_flammable": ("yes/no", "class 2 or 3", ()),
        "fluid.toxic": ("yes/no", "class B", ()),
        "fluid.heavy": ("yes/no", "heavier than air", ()),
        "fluid.fluorinated": ("yes/no", "made of fluorocarbons, wholly or in part", ()),
        "fluid.ammonia": ("yes/no", "R-717", ()),
        "fluid.carbon_dioxide": ("yes/no", "R-744", ()),
        "fluid.blend": ("yes/no", "a blend", ()),
        "fluid.hydrocarbon": ("yes/no", "made of hydrocarbons alone", ()),
        "fluid.liquid_only": ("yes/no", "charged as liquid only", ()),
        "fluid.lfl": (Kind.DENSITY, "lower flammability limit", ()),
        "fluid.practical_limit": (Kind.DENSITY, "practical limit", ()),
        "fluid.gwp": (Kind.NUMBER, "global warming potential by the law in force", ()),
        "law.leak_checks": ("yes/no", "the refrigerant law asks for leak checks at intervals", ()),
        "law.greenhouse_gas": ("yes/no", "the refrigerant holds a gas listed by EU 2024/573 annex I or II", ()),
        "law.building_inspection": (
            "yes/no",
            "heating or air conditioning of a building, large enough for the inspections of EU 2024/1275",
            (),
        ),
        "room.walk_in": ("yes/no", "people walk into the cooled room", ()),
        "room.freezer": ("yes/no", "the cooled room is held below 0 °C", ()),
        "room.light_charge": (
            "yes/no",
            "the refrigerant burns slowly and its charge is below the lowest limit of the evaporator's space",
            (),
        ),
        "source.liquid": ("yes/no", "heat is taken from a liquid", ()),
        "sink.liquid": ("yes/no", "heat is given to a liquid", ()),
        "source.antifreeze": ("yes/no", "the liquid that heat is taken from holds glycol", ()),
        "sink.antifreeze": ("yes/no", "the liquid that heat is given to holds glycol", ()),
        "sink.tower": ("yes/no", "whether the heat-sink water goes over a cooling tower", ()),
        "source.freezing_point": (
            Kind.TEMPERATURE,
            "where the first ice forms in the liquid that heat is taken from",
            (),
        ),
        "sink.freezing_point": (Kind.TEMPERATURE, "where the first ice forms in the liquid that heat is given to", ()),
        "source.outdoors": ("yes/no", "heat is taken from outdoor air", ()),
        "piped.on_site": ("yes/no", "refrigerant pipes are joined on site: not factory sealed", ()),
        "unit.charged": ("yes/no", "the unit comes with refrigerant in it: sealed, or behind shut service valves", ()),
        "unit.extra_charge": (Kind.MASS, "refrigerant added on site to what comes in the unit (factory_charge)", ()),
        "drive.three_phase": ("yes/no", "three supply phases", ()),
        "back_up.power": (Kind.POWER, "power that the back-up heat takes, an element all of it as heat", ()),
        "motor.outside": ("yes/no", "an open compressor: its motor stands outside the refrigerant", ()),
        "ventilation.least": (Kind.VOLUME_FLOW, "air flow that the emergency ventilation must reach, as designed", ()),
        "water.return_least": (Kind.TEMPERATURE, "coldest that hot water may come back from its loop", ()),
        "water.store_least": (Kind.TEMPERATURE, "coldest that hot water may leave its store outside a dwelling", ()),
        "rotation.matters": (
            "yes/no",
            "a compressor that turning backwards harms: scroll, screw or rotary, on three phases",
            (),
        ),
        "relief.described": ("yes/no", "a relief valve is described", ()),
        "oil.sight_glass": ("yes/no", "a compressor that shows its oil level: semi-hermetic, open, or a screw", ()),
        "rated.capacity": (Kind.HEAT_FLOW, "largest capacity that is stated", ()),
        **{
            f"curve.{which}_{key}": (Kind.TEMPERATURE, f"{says} of the {which} point of the weather curve", ())
            for which in ("coldest", "middle", "mildest")
            for key, says in (("outdoor", "outdoor temperature"), ("flow", "flow temperature"))
        },
        "machinery.guarded": (
            "yes/no",
            "the condensing unit stands indoors, below ground or in a room with a refrigerant detector",
            (),
        ),
        "charging.vapour_pressure": (
            Kind.PRESSURE,
            "pressure up to which vapour alone is let in: above ice in the exchangers, and above dry ice",
            (),
        ),
        "words.system": ("text", "name of the system", ()),
        "words.evaporator_space": ("text", "name of the space of the evaporator", ()),
        "words.condensing_space": ("text", "name of the space of the condensing unit", ()),
        "words.indoor_spaces": ("text", "names of the indoor spaces that hold a part of the circuit", ()),
        "words.condition": ("text", "condition of the list in words", ()),
        "words.instruments": (
            "text",
            "instruments that the work on this system needs, with serial and calibration",
            (),
        ),
        "words.instruments_to_bring": ("text", "instruments that the work needs and nobody described", ()),
        "words.test_steps": ("text", "steps of the pressure test, whole circuit joined", ()),
        "words.limit_ladder": ("text", "pressures from low to high: expected, limit, relief, allowable", ()),
        "words.label": ("text", "text of the refrigerant label", ()),
        "words.guarantees": ("text", "what the contract guarantees", ()),
        "words.charge_limits": ("text", "lowest charge limit and its document, by space", ()),
        "words.owner": ("text", "the owner and how to reach them", ()),
        "words.contractor": ("text", "the contractor and how to reach them", ()),
        "words.other_season": ("text", "how far another season's condition lies from the test", ()),
        "words.design_days": ("text", "expected discharge on the hottest and coldest day of the season", ()),
        "words.acts_first": ("text", "what may stop the machine before the high-pressure limit device", ()),
        "words.strength_gauge": ("text", "gauge of the plant for the strength test of the whole circuit", ()),
        "words.strength_gauge_high_side": ("text", "gauge of the plant for the strength test of the high side", ()),
        "words.flow_stages": ("text", "air flow of each stage of the fan", ()),
        "words.levels": ("text", "levels in the air that matter to people", ()),
        "words.highest_discharge": ("text", "highest discharge temperature by common practice", ()),
        "words.heat_up": ("text", "heat and time that the store takes from cold", ()),
        "words.reset": ("text", "what the compressor does after its high-pressure limit device has acted", ()),
        "words.relief_valves": ("text", "set pressure of each relief valve, by where it sits", ()),
        "words.power_counts": ("text", "what the rated power input counts", ()),
        "words.rest_pressures": ("text", "pressure of liquid and vapour at rest at a few temperatures", ()),
        "words.held_off_superheat": ("text", "why the superheat is expected at another value than it is set to", ()),
        "words.held_off_discharge_pressure": (
            "text",
            "why the high pressure is expected at another value than it is set to",
            (),
        ),
        "words.records": ("text", "what the refrigerant law wants recorded", ()),
    }
)


@cache
def names() -> Mapping[str, NameType]:
    """Every name with its type and meaning."""
    table: dict[str, NameType] = {key: NameType(kind, says, choices) for key, (kind, says, choices) in WORDS.items()}
    for prefix, says in READINGS.items():
        for quantity in NOMENCLATURE.values():
            table[f"{prefix}.{quantity.key}"] = NameType(quantity.kind, f"{says}: {quantity.words}")
    for key, (title, kind) in FIGURE_TITLES.items():
        table[f"figure.{key}"] = NameType(kind, title)
    for prefix, found in _described():
        table.update(found if not prefix else {f"{prefix}.{key}": value for key, value in found.items()})
    return MappingProxyType(table)


def _described() -> Iterator[tuple[str, dict[str, NameType]]]:
    from commission.description.model import Site, Space, System

    yield "system", dict(_walk(System))
    yield "plant", dict(_walk(Site))
    yield "evaporator_space", dict(_walk(Space))
    yield "condensing_space", dict(_walk(Space))


def _walk(model: Any, prefix: str = "") -> Iterator[tuple[str, NameType]]:
    """The keys of a model of the description, with the kind of each."""
    hints = get_type_hints(model, include_extras=True)
    for name, info in model.model_fields.items():
        annotation = hints[name]
        found = _type_of(annotation)
        key = f"{prefix}{name.rstrip('_')}"
        says = info.description or name.replace("_", " ")
        if found is not None:
            yield key, NameType(found, says, _choices(annotation))
            continue
        yield key, NameType("part", says)
        inner = _model_of(annotation)
        if inner is not None:
            yield from _walk(inner, f"{key}.")


def _plain(annotation: Any) -> Any:
    """The one type of `X | None`."""
    if get_origin(annotation) in (Union, UnionType):
        parts = [a for a in get_args(annotation) if a is not NoneType]
        return parts[0] if len(parts) == 1 else annotation
    return annotation


def _type_of(annotation: Any) -> Type | None:
    from commission.description.fields import Meaning

    plain = _plain(annotation)
    if get_origin(plain) is Annotated:
        bare, *metadata = get_args(plain)
        kind = next((m.kind for m in metadata if isinstance(m, Meaning) and m.kind is not None), None)
        if kind is not None:
            return kind
        plain = bare
    if plain is bool:
        return "yes/no"
    if plain is str or get_origin(plain) is Literal:
        return "text"
    return Kind.NUMBER if plain is int else None


def _choices(annotation: Any) -> tuple[str, ...]:
    plain = _plain(annotation)
    return tuple(map(str, get_args(plain))) if get_origin(plain) is Literal else ()


def _model_of(annotation: Any) -> Any:
    from pydantic import BaseModel

    plain = _plain(annotation)
    return plain if isinstance(plain, type) and issubclass(plain, BaseModel) else None
