"""The figures of standards and law that this room works with: value, document, edition, mark; read from YAML once."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from types import MappingProxyType
from typing import Any

from commission.quantities import Kind, parse, parse_number, parse_pressure
from commission.quantities.units import Reference

MARKS: Mapping[str, str] = MappingProxyType(
    {
        "V2": "read in two public sources",
        "V1": "read in one public source",
        "C": "recomputed, or follows from a formula",
        "M": "from memory, check the edition in force",
        "M-low": "from memory and not sure: check the document before it decides anything",
        "practice": "common practice, no source",
        "stated": "as the plant's own documents state it",
    }
)
"""What each mark means, in the words a reader sees."""

STANDARD_ATMOSPHERE = 101325.0


@dataclass(frozen=True, slots=True)
class Fact:
    """One figure: `value` in SI (pressures absolute at the standard atmosphere, `gauge` their gauge value), its source
    as `document` and `edition`, the `mark`, and what it `says`."""

    key: str
    value: float
    kind: Kind
    document: str
    edition: str
    mark: str
    says: str
    gauge: float | None = None

    @property
    def source(self) -> str:
        """Document and edition on one line."""
        return f"{self.document}, {self.edition}" if self.edition else self.document

    def gauge_at(self, barometric_pressure: float) -> float:
        """Pa absolute of a gauge pressure at a site's barometric pressure; an absolute pressure stays as it is."""
        return self.value if self.gauge is None else self.gauge + barometric_pressure


@cache
def load(name: str) -> Any:
    """A data file of this room as plain data, read once and never changed.

    Raises:
        FileNotFoundError: there is no such file (a fault of the package).
    """
    import yaml

    return yaml.safe_load((files("commission.safety") / name).read_text(encoding="utf-8"))


def read_value(text: str, kind: Kind) -> float:
    """The SI value of a data-file entry; gauge pressures count from the standard atmosphere.

    Raises:
        QuantityError: the entry is not a quantity of this kind.
    """
    if kind is Kind.PRESSURE:
        return parse_pressure(text).absolute(STANDARD_ATMOSPHERE)
    if kind is Kind.NUMBER:
        return parse_number(text)[0]
    return parse(text, kind)


@cache
def facts() -> Mapping[str, Fact]:
    """All entries of `facts.yaml` by key.

    Raises:
        ValueError: an entry has an unknown mark (a fault of the package).
    """
    table: dict[str, Fact] = {}
    for key, entry in load("facts.yaml").items():
        kind = Kind(entry["kind"])
        text = str(entry["value"])
        gauge = None
        if kind is Kind.PRESSURE:
            pressure = parse_pressure(text)
            gauge = pressure.pascal if pressure.reference is Reference.GAUGE else None
        if entry["mark"] not in MARKS:
            raise ValueError(f"facts.yaml: {key}: unknown mark {entry['mark']!r}")
        table[key] = Fact(
            key,
            read_value(text, kind),
            kind,
            str(entry["document"]),
            str(entry["edition"]),
            str(entry["mark"]),
            str(entry["says"]),
            gauge,
        )
    return MappingProxyType(table)


def fact(key: str) -> Fact:
    """One figure by key.

    Raises:
        KeyError: no such figure (a fault of the package).
    """
    return facts()[key]


def weaker(*marks: str) -> str:
    """The least sure of several marks: a calculated figure is no surer than its weakest input."""
    order = ("stated", "V2", "V1", "C", "practice", "M", "M-low")
    return max(marks, key=order.index)
