"""The smallest change of a test that would decide it, computed, and applied again to show that it does."""

from __future__ import annotations

import itertools
import math
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, replace

from commission.acceptance.budget import Budget, Component
from commission.acceptance.decision import Decision
from commission.quantities import NOMENCLATURE, Quantity

_MOST_SAMPLES = 10_000


@dataclass(frozen=True, slots=True)
class Change:
    """One change of a test.

    `causes` are the causes (or names) of the components to make smaller, together `factor` times what they are;
    `names` are their names and `about` the readings that they belong to (a nomenclature key, or empty); `samples` is
    the number of samples to take instead, for a spread; `remedies` say how. `of` is the quantity that each arises in
    (a nomenclature key or words), `before` and `after` its standard uncertainty there, in the SI unit of that
    quantity.
    """

    causes: tuple[str, ...]
    names: tuple[str, ...]
    factor: float
    samples: int | None = None
    remedies: tuple[str, ...] = ()
    of: tuple[str, ...] = ()
    before: tuple[float, ...] = ()
    after: tuple[float, ...] = ()
    about: tuple[str, ...] = ()

    def text(self, quantities: Mapping[str, Quantity] = NOMENCLATURE) -> str:
        """The change as a sentence for a person, with the `quantities` as the system calls them."""
        named = itertools.zip_longest(self.names, self.about, fillvalue="")
        what = " and ".join(f"{name} ({quantities[of].words})" if of else name for name, of in named)
        how = f" ({'; '.join(self.remedies)})" if self.remedies else ""
        if self.samples is not None:
            return f"take {self.samples} samples for {what}{how}"
        if self.factor <= 0.01:
            return f"leave no doubt from {what}{how}"
        percent = math.floor(self.factor * 100.0)
        return f"bring the uncertainty from {what} down to {percent} % of what it is{how}"


def smallest_change(budget: Budget, largest_standard: float, confidence: float = 0.95) -> Change | None:
    """The change of fewest components, and of those the gentlest, that brings `budget` to `largest_standard`.

    Only components with a remedy are touched: what nobody on site can better is no advice. None where even all of
    them together would not do, or nothing needs to change. The standard uncertainty compared is the one-sided
    one of `Budget.one_sided`, as in `decide`.
    """

    def fits(trial: Budget) -> bool:
        return trial.one_sided(confidence) <= largest_standard

    if fits(budget):
        return None
    movable = [group for group in budget.groups if any(c.remedy for c in group)]
    movable.sort(key=lambda group: -abs(sum(c.value for c in group)))
    single = list(_single_changes(budget, movable, fits))
    if single:
        return max(single, key=lambda change: change.factor)
    for count in range(2, len(movable) + 1):
        together = _gentlest(budget, movable[:count], fits)
        if together is not None:
            return together
    return None


def apply_change(budget: Budget, change: Change) -> Budget:
    """The budget after `change`."""
    touched = set(change.causes)

    def moved(component: Component) -> Component:
        if (component.cause or component.name) not in touched:
            return component
        if change.samples is not None and component.samples:
            shrink = math.sqrt(component.samples / change.samples)
            return replace(component, value=component.value * shrink, dof=change.samples - 1, samples=change.samples)
        return replace(component, value=component.value * change.factor)

    return Budget(tuple(moved(c) for c in budget.components), budget.warnings)


def with_advice(
    decision: Decision,
    budget: Budget,
    other_ways: tuple[str, ...] = (),
    quantities: Mapping[str, Quantity] = NOMENCLATURE,
) -> Decision:
    """The decision with `what_would_decide` filled in, where it is undecided and anything would.

    `other_ways` are sentences for changes outside the budget, such as another route, in order of effort;
    `quantities` is the nomenclature of the system.
    """
    if decision.outcome != "undecided":
        return decision
    change = None
    if decision.uncertainty_needed is not None:
        change = smallest_change(budget, decision.uncertainty_needed, decision.confidence)
    if change is not None:
        return replace(decision, what_would_decide=change.text(quantities))
    if decision.uncertainty_needed is None:
        lies = "the value lies on the limit itself: only another test at another moment can decide"
        return replace(decision, what_would_decide="; ".join((lies, *other_ways)))
    none = "no better instrument on this route would decide: the value lies too near the limit"
    return replace(decision, what_would_decide="; ".join((none, *other_ways)))


def _single_changes(
    budget: Budget, movable: list[tuple[Component, ...]], fits: Callable[[Budget], bool]
) -> Iterator[Change]:
    for group in movable:
        if len(group) == 1 and group[0].samples:
            many = _fewest_samples(budget, group, fits)
            if many is not None:
                yield many
            continue
        one = _gentlest(budget, [group], fits)
        if one is not None:
            yield one


def _gentlest(budget: Budget, groups: list[tuple[Component, ...]], fits: Callable[[Budget], bool]) -> Change | None:
    """The gentlest common factor on these groups that fits, None where even leaving them out does not."""

    def change(factor: float) -> Change:
        return _change(groups, factor)

    factor = _largest_factor(lambda f: fits(apply_change(budget, change(f))))
    return None if factor is None else change(factor)


def _change(groups: list[tuple[Component, ...]], factor: float, samples: int | None = None) -> Change:
    causes = tuple(group[0].cause or group[0].name for group in groups)
    leading = [max((c for c in group if c.remedy), key=lambda c: abs(c.value)) for group in groups]
    remedies = tuple(dict.fromkeys(c.remedy for c in leading))
    before = tuple(abs(c.value / c.sensitivity) if c.sensitivity else abs(c.value) for c in leading)
    return Change(
        causes, tuple(c.name for c in leading), factor, samples, remedies,
        tuple(c.of for c in leading), before, tuple(factor * b for b in before), tuple(_about(c) for c in leading),
    )  # fmt: skip


def _about(component: Component) -> str:
    """The reading that a component belongs to, where its name does not say it already."""
    return component.of if component.of in NOMENCLATURE and component.cause.startswith(f"{component.of}:") else ""


def _largest_factor(fits: Callable[[float], bool]) -> float | None:
    """The largest factor from 0 to 1 that still fits, to a thousandth, rounded down; None where 0 does not fit."""
    if not fits(0.0):
        return None
    low, high = 0, 1000
    while high - low > 1:
        middle = (low + high) // 2
        low, high = (middle, high) if fits(middle / 1000.0) else (low, middle)
    return low / 1000.0


def _fewest_samples(budget: Budget, group: tuple[Component, ...], fits: Callable[[Budget], bool]) -> Change | None:
    old = group[0].samples or 2

    def change(n: int) -> Change:
        return _change([group], math.sqrt(old / n), n)

    if not fits(apply_change(budget, change(_MOST_SAMPLES))):
        return None
    low, high = old, _MOST_SAMPLES
    while high - low > 1:
        middle = (low + high) // 2
        low, high = (low, middle) if fits(apply_change(budget, change(middle))) else (middle, high)
    return change(high)
