"""Which refrigerants are modelled, and how: reads `models.yaml` and the compositions of the register."""

from __future__ import annotations

import re
from collections.abc import Mapping
from functools import cache
from importlib.resources import files
from typing import Any

from commission.errors import InputError, NotCalculatedError, Problem, nearest


@cache
def read_yaml(name: str) -> Any:
    """A YAML file of this room, by the quick parser where the YAML library has it."""
    import yaml

    loader = getattr(yaml, "CSafeLoader", yaml.SafeLoader)
    return yaml.load((files("commission.properties") / name).read_text(encoding="utf-8"), Loader=loader)


@cache
def _models() -> Mapping[str, Any]:
    data: Mapping[str, Any] = read_yaml("models.yaml")
    return data


def modelled() -> tuple[str, ...]:
    """Designations of all refrigerants whose cycle properties can be calculated."""
    return tuple(_models()["critical_points"])


def other_names() -> Mapping[str, tuple[str, ...]]:
    """Ordinary names by designation, such as `ammonia` for R-717."""
    return {name: tuple(words) for name, words in _models()["other_names"].items()}


def blends() -> tuple[str, ...]:
    """Designations of the modelled refrigerants of more than one component."""
    entries = read_yaml("register.yaml")["refrigerants"]
    return tuple(name for name in modelled() if len(entries[name]["composition"]) > 1)


def model_of(designation: str) -> tuple[tuple[str, ...], tuple[float, ...], tuple[float, float]]:
    """CoolProp's component names, mass fractions, and critical point (K, Pa) of a designation.

    Raises:
        NotCalculatedError: the refrigerant has no model.
    """
    if designation not in _models()["critical_points"]:
        raise NotCalculatedError(f"{designation} has no equation of state here, so no cycle can be calculated with it")
    composition: Mapping[str, float] = read_yaml("register.yaml")["refrigerants"][designation]["composition"]
    components = _models()["components"]
    T, p = _models()["critical_points"][designation]
    return tuple(components[c] for c in composition), tuple(composition.values()), (T, p)


def _plain(name: str) -> str:
    """A name without case, spaces, dashes and brackets, to compare spellings: `R-1234ze(E)` is `r1234zee`."""
    return re.sub(r"[\s\-–_()]", "", name).casefold()


@cache
def _spellings() -> Mapping[str, str]:
    table = {_plain(name): name for name in modelled()}
    for name, words in other_names().items():
        table.update({_plain(word): name for word in words})
    return table


def designation(name: str) -> str:
    """The designation meant by `name`: R-454B, R454B, r 454b, propane, ammonia, CO2.

    Raises:
        InputError: unknown; its problem carries the nearest known name.
    """
    found = _spellings().get(_plain(name)) if isinstance(name, str) and len(name) < 60 else None
    if found is not None:
        return found
    near = nearest(_plain(str(name)), _spellings())
    raise InputError(
        Problem(
            "this refrigerant is not in the register",
            value=str(name),
            allowed=", ".join(modelled()),
            nearest=_spellings()[near] if near else None,
        )
    )
