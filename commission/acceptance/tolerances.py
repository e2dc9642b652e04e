"""The library of tolerances: what each one is, and that only a contract's own kind can decide."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from types import MappingProxyType
from typing import Any, Literal, get_args

from commission.errors import InputError, NotCalculatedError, Problem, nearest
from commission.quantities import NOMENCLATURE

ToleranceKind = Literal[
    "contract default", "manufacturing", "market surveillance", "laboratory deviation", "rule of thumb"
]
Side = Literal["below", "above", "both"]


@dataclass(frozen=True, slots=True)
class LibraryTolerance:
    """One entry of the library.

    `value` is a number, None where it is a formula or a band; `unit` is empty for a share of the stated value;
    `formula` and `figures` hold what is not one number; `check` warns where the figure is not sure.
    """

    key: str
    title: str
    kind: ToleranceKind
    quantity: str
    value: float | None
    unit: str
    side: Side
    formula: str
    figures: Mapping[str, float]
    contains_test_uncertainty: bool
    source: str
    mark: str
    check: str


@cache
def tolerances() -> Mapping[str, LibraryTolerance]:
    """All entries of `tolerances.yaml` by key.

    Raises:
        ValueError: an entry is at fault (a fault of the package, not of a user).
    """
    import yaml

    text = (files("commission.acceptance") / "tolerances.yaml").read_text(encoding="utf-8")
    return MappingProxyType({key: _entry(key, data) for key, data in yaml.safe_load(text).items()})


def _entry(key: str, data: Mapping[str, Any]) -> LibraryTolerance:
    if data["kind"] not in get_args(ToleranceKind) or data["side"] not in get_args(Side):
        raise ValueError(f"{key}: unknown kind or side")
    if data["quantity"] not in NOMENCLATURE:
        raise ValueError(f"{key}: {data['quantity']} is not in the nomenclature")
    value = data["value"]
    several = value if isinstance(value, dict) else {}
    figures = {k: float(v) for k, v in several.items() if k != "formula"}
    return LibraryTolerance(
        key, data["title"], data["kind"], data["quantity"], None if several else float(value), data.get("unit", ""),
        data["side"], several.get("formula", ""), MappingProxyType(figures), bool(data["contains_test_uncertainty"]),
        data["source"], data["mark"], data.get("check", ""),
    )  # fmt: skip


def deciding_tolerance(key: str) -> LibraryTolerance:
    """The entry that a contract names, if it is of the kind that can decide.

    Raises:
        InputError: there is no such entry.
        NotCalculatedError: it is of another kind: a laboratory's, a maker's or a rule of thumb decides nothing here.
    """
    table = tolerances()
    if key not in table:
        raise InputError(Problem("no such tolerance", value=key, allowed=", ".join(table), nearest=nearest(key, table)))
    found = table[key]
    if found.kind != "contract default":
        raise NotCalculatedError(
            f"{found.title} ({found.source}) is a {found.kind}: only a contract default can decide"
        )
    return found


def ahri_550_tolerance(load: float, full_load_range: float) -> float:
    """Tolerance of capacity and efficiency of a liquid-chilling package, as a share (AHRI 550/590, Tol1, SI form).

    `load` is the load fraction (0 to 1), `full_load_range` the range of the evaporator water at full load in K.

    Raises:
        ValueError: load or range is not positive.
    """
    if load <= 0.0 or full_load_range <= 0.0:
        raise ValueError("load and water range must be positive")
    return 0.105 - 0.07 * load + 0.15 / 1.8 / (full_load_range * load)
