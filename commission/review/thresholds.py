"""The thresholds of the rules: data with source and mark, which a plant may replace by its own."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from functools import cache
from importlib.resources import files
from pathlib import Path
from types import MappingProxyType

from pydantic import Field

from commission.description import read_yaml, validate
from commission.description.model import Part
from commission.errors import InputError, Problem, nearest
from commission.quantities import Kind, QuantityError, parse

OWN_FILE = "review.yaml"
"""File of a plant folder that replaces thresholds: `thresholds: {KEY: {value: ..., source: ...}}`."""


class ReviewFileError(InputError):
    """The plant's own `review.yaml` cannot be used; every problem with its line."""


@dataclass(frozen=True, slots=True)
class Threshold:
    """A value a rule compares with, in SI, and why it is that value."""

    key: str
    value: float
    kind: Kind
    meaning: str
    source: str
    mark: str


class OwnThreshold(Part):
    """A value that this plant's people have agreed on instead."""

    value: str = Field(description="value with unit")
    source: str = Field(min_length=1, description="where it comes from, or who agreed on it")


class ReviewFile(Part):
    """What a plant may say to the review."""

    thresholds: dict[str, OwnThreshold] = Field(default_factory=dict)


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


def thresholds_of(folder: Path) -> Mapping[str, Threshold]:
    """The thresholds with those that the plant in `folder` replaces.

    Raises:
        ReviewFileError: the file cannot be read, names an unknown threshold, or a value is of another kind.
    """
    path = folder / OWN_FILE
    if not path.exists():
        return thresholds()
    read = read_yaml(path)
    own = validate(ReviewFile, read.data, read.positions, also=read.problems, error=ReviewFileError)
    table = dict(thresholds())
    problems: list[Problem] = []
    for key, entry in own.thresholds.items():
        at = ("thresholds", key)
        if key not in table:
            near = nearest(key, table)
            problems.append(read.positions.problem(at, "no threshold has this name", nearest=near, at_key=True))
            continue
        try:
            value = parse(entry.value, table[key].kind)
        except QuantityError as error:
            first = error.problems[0]
            problems.append(read.positions.problem((*at, "value"), first.message, allowed=first.allowed))
        else:
            table[key] = replace(table[key], value=value, source=entry.source, mark="stated by the plant")
    if problems:
        raise ReviewFileError(*problems)
    return MappingProxyType(table)
