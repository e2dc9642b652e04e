"""The register of refrigerants: what is known of each, with source and mark, and what a plant says instead.

Figures live in `register.yaml`; a plant overrides any of them, giving its own source.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, replace
from functools import cache
from typing import Any

from commission.errors import InputError, Problem, nearest
from commission.quantities import Kind, QuantityError, parse, parse_pressure

MARKS = {
    "V2": "read in two public sources",
    "V1": "read in one public source",
    "C": "recomputed",
    "M": "from memory, check the edition in force",
    "M-low": "from memory and not sure: check the document before it decides anything",
    "stated": "stated in the plant's description",
}
KINDS: Mapping[str, Kind | None] = {
    "safety_class": None,
    "molar_mass": Kind.NUMBER,
    "boiling_bubble": Kind.TEMPERATURE,
    "boiling_dew": Kind.TEMPERATURE,
    "sublimation": Kind.TEMPERATURE,
    "critical_temperature": Kind.TEMPERATURE,
    "critical_pressure": Kind.PRESSURE,
    "lfl": Kind.DENSITY,
    "lfl_ashrae34": Kind.DENSITY,
    "atel_odl": Kind.DENSITY,
    "rcl": Kind.DENSITY,
    "rcl_volume": Kind.RATIO,
    "practical_limit": Kind.DENSITY,
    "gwp_ar4": Kind.NUMBER,
    "gwp_ar5": Kind.NUMBER,
    "gwp_ar6": Kind.NUMBER,
    "gwp_eu517": Kind.NUMBER,
    "gwp_eu573": Kind.NUMBER,
    "odp": Kind.NUMBER,
    "autoignition": Kind.TEMPERATURE,
    "oils": None,
    "charge_as_liquid_only": None,
}
GWP_BASES = ("ar4", "ar5", "ar6", "eu517", "eu573")


@dataclass(frozen=True, slots=True)
class Figure:
    """One figure of the register.

    `value` is in the SI unit of `kind` (K, Pa, kg/m3, 1), a text where `kind` is None, or None where the sources
    disagree so that one must be stated. `mark` is a key of `MARKS`; `written` is the figure as printed.
    """

    value: float | str | bool | None
    kind: Kind | None
    source: str
    mark: str
    note: str = ""
    written: str = ""

    @property
    def number(self) -> float | None:
        """The value where it is a number."""
        return self.value if isinstance(self.value, float) else None


@dataclass(frozen=True, slots=True)
class RegisterEntry:
    """One refrigerant of the register; a figure that is None is not known.

    `composition` gives mass fractions. `lfl` is by ISO 817 / EN 378-1, `lfl_ashrae34` by ASHRAE 34. `gwp` is by
    basis: `ar4`, `ar5`, `ar6` (IPCC reports), `eu517` (repealed method, printed on labels), `eu573` (in force in the
    EU).
    """

    name: str
    other_names: tuple[str, ...]
    composition: Mapping[str, float]
    composition_figure: Figure
    gwp: Mapping[str, Figure]
    notes: str = ""
    safety_class: Figure | None = None
    molar_mass: Figure | None = None
    boiling_bubble: Figure | None = None
    boiling_dew: Figure | None = None
    sublimation: Figure | None = None
    critical_temperature: Figure | None = None
    critical_pressure: Figure | None = None
    lfl: Figure | None = None
    lfl_ashrae34: Figure | None = None
    atel_odl: Figure | None = None
    rcl: Figure | None = None
    rcl_volume: Figure | None = None
    practical_limit: Figure | None = None
    odp: Figure | None = None
    autoignition: Figure | None = None
    oils: Figure | None = None
    charge_as_liquid_only: Figure | None = None

    @property
    def is_flammable(self) -> bool:
        """Class 2L, 2 or 3 of ISO 817 / ASHRAE 34."""
        return self.safety_class is not None and str(self.safety_class.value)[1:2] in {"2", "3"}


def register(overrides: Mapping[str, Mapping[str, Mapping[str, Any]]] | None = None) -> Mapping[str, RegisterEntry]:
    """The register by designation, with a plant's own figures in place of the book's.

    `overrides` is {designation or ordinary name: {figure key: {value, source, note}}}; `value` is written as in the
    register (a quantity with its unit). Without overrides the same object is returned each time.

    Raises:
        InputError: unknown refrigerant or figure, a value of the wrong kind, or an override without a source; all
            problems at once.
    """
    book = _book()
    if not overrides:
        return book
    problems: list[Problem] = []
    changed = dict(book)
    for name, figures in overrides.items():
        try:
            entry = changed[_known(name)]
        except InputError as error:
            problems += error.problems
            continue
        for key, plain in figures.items():
            try:
                entry = _overridden(entry, key, plain)
            except InputError as error:
                problems += error.problems
        changed[entry.name] = entry
    if problems:
        raise InputError(*problems)
    return changed


def _known(name: str) -> str:
    from commission.properties.models import designation

    return designation(name)


def _overridden(entry: RegisterEntry, key: str, plain: Mapping[str, Any]) -> RegisterEntry:
    path = f"{entry.name}.{key}"
    if key not in KINDS:
        raise InputError(
            Problem("the register has no such figure", path=path, allowed=", ".join(KINDS), nearest=nearest(key, KINDS))
        )
    if not str(plain.get("source") or "").strip():
        raise InputError(Problem("a figure that replaces the register's needs its source", path=path))
    try:
        figure = _figure(key, {"mark": "stated", **plain}, {})
    except QuantityError as error:
        raise InputError(*(replace(p, path=path) for p in error.problems)) from None
    if key.startswith("gwp_"):
        return replace(entry, gwp={**entry.gwp, key.removeprefix("gwp_"): figure})
    return replace(entry, **{key: figure})  # type: ignore[arg-type]  # keys are those of KINDS, checked above


@cache
def _book() -> Mapping[str, RegisterEntry]:
    from commission.properties.models import other_names, read_yaml

    return _Book(read_yaml("register.yaml"), other_names())


class _Book(Mapping[str, RegisterEntry]):
    """The register of the package; an entry is made when it is asked for, since a plant has one or two of forty."""

    def __init__(self, data: Mapping[str, Any], names: Mapping[str, tuple[str, ...]]) -> None:
        self._plain, self._sources, self._names = data["refrigerants"], data["sources"], names
        self._made: dict[str, RegisterEntry] = {}

    def __getitem__(self, name: str) -> RegisterEntry:
        if name not in self._made:
            self._made[name] = _entry(name, self._plain[name], self._names.get(name, ()), self._sources)
        return self._made[name]

    def __iter__(self) -> Iterator[str]:
        return iter(self._plain)

    def __len__(self) -> int:
        return len(self._plain)


def _entry(name: str, plain: Mapping[str, Any], others: tuple[str, ...], sources: Mapping[str, str]) -> RegisterEntry:
    figures = {key: _figure(key, figure, sources) for key, figure in plain["figures"].items()}
    said = plain["composition_source"]
    return RegisterEntry(
        name=name,
        other_names=others,
        composition=plain["composition"],
        composition_figure=Figure(None, None, sources[said["source"]], said["mark"]),
        gwp={basis: figures[f"gwp_{basis}"] for basis in GWP_BASES if f"gwp_{basis}" in figures},
        notes=plain.get("notes", ""),
        **{key: figure for key, figure in figures.items() if not key.startswith("gwp_")},
    )


def _figure(key: str, plain: Mapping[str, Any], sources: Mapping[str, str]) -> Figure:
    written, kind = plain.get("value"), KINDS[key]
    value: float | str | bool | None
    if written is None or isinstance(written, bool):
        value = written
    elif kind is None:
        value = str(written)
    elif kind is Kind.PRESSURE:
        value = parse_pressure(str(written)).absolute(101325.0)
    else:
        value = parse(str(written), kind)
    source = str(plain["source"])
    return Figure(
        value, kind, sources.get(source, source), str(plain["mark"]), str(plain.get("note", "")), str(written)
    )
