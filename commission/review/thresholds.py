"""The thresholds of the rules, as data with source and mark."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from types import MappingProxyType

from commission.quantities import Kind, parse


@dataclass(frozen=True, slots=True)
class Threshold:
    """A value a rule compares with, in SI, and why it is that value."""

    key: str
    value: float
    kind: Kind
    meaning: str
    source: str
    mark: str


@cache
def thresholds() -> Mapping[str, Threshold]:
    """All thresholds of `thresholds.yaml` by key.

    Raises:
        KeyError, QuantityError: an entry is incomplete (a fault of the package, not of a user).
    """
    import yaml

    text = (files("commission.review") / "thresholds.yaml").read_text(encoding="utf-8")
    table: dict[str, Threshold] = {}
    for key, entry in yaml.load(text, Loader=yaml.BaseLoader).items():
        kind = Kind(entry["kind"])
        table[key] = Threshold(key, parse(entry["value"], kind), kind, entry["meaning"], entry["source"], entry["mark"])
    return MappingProxyType(table)
