"""Dates from which the law forbids a refrigerant in new equipment or for servicing; no clock: dates only."""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from commission.safety.facts import load
from commission.safety.leaks import EU, US

if TYPE_CHECKING:
    from commission.description.model import System
    from commission.safety.substance import Substance

SMALL = 12e3
MEDIUM = 50e3
SMALL_SPLIT = 3.0
REMOTE_US = 200 * 0.45359237


@dataclass(frozen=True, slots=True)
class MarketDate:
    """`what` is forbidden from `since`; `reclaimed_until` where reclaimed gas is allowed longer."""

    law: str
    what: str
    since: dt.date
    reclaimed_until: dt.date | None
    document: str
    edition: str
    mark: str


def market_dates(law: str, system: System, substance: Substance) -> tuple[MarketDate, ...]:
    """All dates of `law` that concern this kind of equipment and this refrigerant, earliest first.

    Empty where the law has none, the register has no GWP, or the capacity that decides is not stated.
    """
    table: Mapping[str, Any] = load("market.yaml")
    if law not in table or substance.gwp is None:
        return ()
    rules = table[law]
    kinds = set(_kinds(law, system))
    found = [
        *_dates(law, rules, rules["entries"], kinds, substance, "in new equipment"),
        *_dates(law, rules, rules["servicing"], {_servicing(system)}, substance, "as virgin gas for servicing"),
    ]
    return tuple(sorted(found, key=lambda date: (date.since, date.what)))


def _dates(
    law: str, rules: Mapping[str, Any], entries: list[Any], kinds: set[str], substance: Substance, use: str
) -> Iterator[MarketDate]:
    gwp = substance.gwp.value if substance.gwp is not None else 0.0
    for entry in entries:
        if entry["of"] not in kinds:
            continue
        any_gas = bool(entry.get("any_f_gas", False))
        hit = substance.listed if any_gas else gwp >= float(entry["gwp_from"])
        if hit:
            limit = "any listed gas" if any_gas else f"GWP {entry['gwp_from']} or more"
            what = f"{substance.name} {use} ({entry['of']}, {limit})"
            yield MarketDate(
                law,
                what,
                entry["from"],
                entry.get("reclaimed_until"),
                str(rules["document"]),
                str(rules["edition"]),
                str(entry["mark"]),
            )


def _servicing(system: System) -> str:
    cooling = system.duty in ("cold_storage", "liquid_cooling")
    return "refrigeration" if cooling else "air conditioning and heat pumps"


def rated_capacity(system: System) -> float | None:
    """The largest capacity that is stated, in W; None where none is."""
    stated: list[float | None] = []
    for point in system.rated_points:
        stated += [point.cooling_capacity, point.heating_capacity]
    if system.condensing_unit is not None:
        stated += [point.cooling_capacity for point in system.condensing_unit.rated_points]
    return max((value for value in stated if value is not None), default=None)


def _kinds(law: str, system: System) -> Iterator[str]:
    """The kinds of equipment of the law that a system can be."""
    capacity = rated_capacity(system)
    if law == US:
        yield from _american(system)
        return
    if law != EU:
        return
    if system.duty == "cold_storage":
        yield "self-contained refrigeration" if system.sealed else "stationary refrigeration"
        return
    if capacity is None:
        return
    if system.duty == "liquid_cooling":
        yield "chiller up to 12 kW" if capacity <= SMALL else "chiller above 12 kW"
    elif system.sealed:
        size = "up to 12 kW" if capacity <= SMALL else "12 to 50 kW" if capacity <= MEDIUM else "above 50 kW"
        yield f"self-contained unit {size}"
    else:
        air = system.heat_sink.medium == "air" and system.heat_source.medium == "air"
        yield (f"air-to-{'air' if air else 'water'} split up to 12 kW" if capacity <= SMALL else "split above 12 kW")
        if system.charge is not None and system.charge < SMALL_SPLIT:
            yield "single split below 3 kg"


def _american(system: System) -> Iterator[str]:
    if system.duty == "cold_storage":
        if system.charge is not None:
            large = system.charge >= REMOTE_US
            yield "remote refrigeration of 200 lb or more" if large else "remote refrigeration below 200 lb"
    elif system.duty == "liquid_cooling":
        yield "chiller for comfort"
    else:
        yield "air conditioning or heat pump"
