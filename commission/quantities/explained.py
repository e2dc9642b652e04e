"""A calculated number that a person sees, with everything needed to check it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files

from commission.errors import Problem
from commission.quantities.bounds import UNBOUNDED, Bounds
from commission.quantities.kinds import Kind


@dataclass(frozen=True, slots=True)
class Input:
    """One number that went into a calculation.

    `name` is a key of the nomenclature where there is one, or plain words. `value` is in SI. `origin` says where it
    comes from: a place in a file, `reading`, `assumption KEY`, `fitted`, or `calculated`.
    """

    name: str
    value: float
    kind: Kind
    origin: str


@dataclass(frozen=True, slots=True)
class Explained:
    """A calculated number with its method, inputs and assumptions.

    `quantity` is a key of the nomenclature; `value` is in SI (pressures absolute); `uncertainty` is the standard
    uncertainty (coverage factor 1) in the same unit, None where none can be stated; `method` is a key of
    `methods.yaml`; `assumptions` are keys of the assumption list that move this value; `bounds` is what can be.
    """

    quantity: str
    value: float
    uncertainty: float | None
    method: str
    inputs: tuple[Input, ...] = ()
    assumptions: tuple[str, ...] = ()
    bounds: Bounds = UNBOUNDED

    def band(self, coverage: float) -> tuple[float, float] | None:
        """Lowest and highest value within `coverage` standard uncertainties, as far as they can be (SI); None where no
        uncertainty can be stated."""
        return None if self.uncertainty is None else self.bounds.around(self.value, coverage * self.uncertainty)


@dataclass(frozen=True, slots=True)
class Method:
    """How a number is calculated: its name, formula as plain text, source, and how sure the source is."""

    key: str
    name: str
    formula: str
    source: str
    mark: str


@cache
def methods() -> Mapping[str, Method]:
    """All methods of `methods.yaml` by key.

    Raises:
        ValueError: an entry is incomplete (a fault of the package, not of a user).
    """
    import yaml

    text = (files("commission.quantities") / "methods.yaml").read_text(encoding="utf-8")
    table: dict[str, Method] = {}
    for key, entry in yaml.safe_load(text).items():
        missing = {"name", "formula", "source", "mark"} - set(entry)
        if missing:
            raise ValueError(str(Problem(f"method lacks {sorted(missing)}", file="methods.yaml", path=key)))
        table[key] = Method(key, *(str(entry[k]) for k in ("name", "formula", "source", "mark")))
    return table
