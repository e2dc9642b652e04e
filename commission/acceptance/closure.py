"""Two routes check each other: the same capacity measured twice, or both capacities held together by the first law."""

from __future__ import annotations

import itertools
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass

from commission.acceptance.budget import Budget, Measured, combine
from commission.acceptance.decision import significant
from commission.acceptance.routes import RouteResult, closure


@dataclass(frozen=True, slots=True)
class Closure:
    """Two routes side by side. `difference` is in W, `significant` where it is beyond its expanded uncertainty (95 %).

    `quantity` is the capacity that both give, or `first law` where one gives the cooling and the other the heating
    capacity: then the difference is heat to the sink less heat from the source less the power that stays in the gas.
    """

    quantity: str
    first: str
    second: str
    difference: float
    budget: Budget
    significant: bool


def closures(routes: Iterable[RouteResult], power: Measured | None, shell: Measured) -> tuple[Closure, ...]:
    """Every pair of different routes that can be held against each other."""
    found = list(routes)
    return (*_same(found), *(_first_law(found, power, shell) if power is not None else ()))


def _same(routes: list[RouteResult]) -> Iterator[Closure]:
    for a, b in itertools.combinations(routes, 2):
        if a.measured.key == b.measured.key and a.route != b.route:
            budget = combine(a.measured.budget, b.measured.budget.scaled(-1.0))
            difference = a.measured.value - b.measured.value
            beyond = significant(difference, budget.one_sided(0.975))
            yield Closure(a.measured.key, a.route, b.route, difference, budget, beyond)


def _first_law(routes: list[RouteResult], power: Measured, shell: Measured) -> Iterator[Closure]:
    by: Mapping[str, list[RouteResult]] = {
        key: [r for r in routes if r.measured.key == key] for key in ("cooling_capacity", "heating_capacity")
    }
    for cold, hot in itertools.product(by["cooling_capacity"], by["heating_capacity"]):
        if cold.route == hot.route == "compressor heat balance":
            continue  # one balance closes by itself and shows nothing
        rest = closure(cold.measured, hot.measured, power, shell)
        beyond = significant(rest.value, rest.budget.one_sided(0.975))
        yield Closure("first law", cold.route, hot.route, rest.value, rest.budget, beyond)
