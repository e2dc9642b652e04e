"""Uncertainty budgets after JCGM 100:2008: components, their combination, and propagation through a function."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property

from commission.acceptance.distributions import student_quantile


@dataclass(frozen=True, slots=True)
class Component:
    """One signed contribution to the uncertainty of a value.

    `value` is the contribution as a standard uncertainty in the unit of the budget's quantity, signed: the change of
    the quantity when the cause grows by one standard uncertainty. `cause` names what it comes from; components with the
    same cause are fully correlated and add before they are squared. `sensitivity` is the change of the budget's
    quantity per unit of the quantity `of` (a nomenclature key or plain words) that the component belongs to, so that
    `value / sensitivity` is the standard uncertainty where it arises. `remedy` says how a person can make it
    smaller, empty where nobody on site can. `samples` is the number of samples behind a spread (type A).
    """

    name: str
    value: float
    distribution: str = "normal"
    dof: float = math.inf
    source: str = ""
    mark: str = ""
    cause: str = ""
    of: str = ""
    sensitivity: float = 1.0
    remedy: str = ""
    samples: int | None = None

    def scaled(self, factor: float) -> Component:
        """The contribution to a quantity that changes by `factor` per unit of this one."""
        return Component(
            self.name, self.value * factor, self.distribution, self.dof, self.source, self.mark, self.cause, self.of,
            self.sensitivity * factor, self.remedy, self.samples,
        )  # fmt: skip


@dataclass(frozen=True)
class Budget:
    """All components of the uncertainty of one value; `warnings` travel with it (an expired calibration, say)."""

    components: tuple[Component, ...] = ()
    warnings: tuple[str, ...] = ()

    @cached_property
    def groups(self) -> tuple[tuple[Component, ...], ...]:
        """Components by cause, in the order of their first appearance."""
        table: dict[tuple[str, int], list[Component]] = {}
        for number, component in enumerate(self.components):
            table.setdefault((component.cause, -1) if component.cause else ("", number), []).append(component)
        return tuple(tuple(group) for group in table.values())

    @cached_property
    def standard(self) -> float:
        """Combined standard uncertainty (JCGM 100, 5.1.2; correlated parts 5.2.2 with coefficients of 1 or -1)."""
        return math.hypot(*(sum(c.value for c in group) for group in self.groups)) if self.components else 0.0

    @cached_property
    def dof(self) -> float:
        """Effective degrees of freedom (Welch-Satterthwaite, JCGM 100, equation G.2b), not rounded."""
        total = self.standard
        parts = 0.0
        for group in self.groups:
            dof = min(c.dof for c in group)
            if not math.isinf(dof) and total > 0.0:
                parts += (sum(c.value for c in group) / total) ** 4 / dof
        return 1.0 / parts if parts > 0.0 else math.inf

    def coverage(self, confidence: float = 0.95) -> float:
        """Two-sided coverage factor: Student t at the effective degrees of freedom rounded down (JCGM 100, G.4.1)."""
        return student_quantile(0.5 + confidence / 2.0, _whole(self.dof))

    @property
    def coverage_factor(self) -> float:
        """Coverage factor for 95 %."""
        return self.coverage()

    def expanded(self, confidence: float = 0.95) -> float:
        """Expanded uncertainty: coverage factor times combined standard uncertainty."""
        return self.coverage(confidence) * self.standard if self.components else 0.0

    def one_sided(self, confidence: float = 0.95) -> float:
        """Standard uncertainty that a normal distribution needs to cover, on one side, what Student t covers here.

        The same as `standard` for many degrees of freedom, larger for few: so that the decision, here and in the
        browser, works with one normal distribution and still keeps its stated error rate.
        """
        if math.isinf(self.dof):
            return self.standard
        t, z = student_quantile(confidence, _whole(self.dof)), student_quantile(confidence, math.inf)
        return self.standard * t / z

    def scaled(self, factor: float) -> Budget:
        """The budget of a quantity that changes by `factor` per unit of this one."""
        return Budget(tuple(c.scaled(factor) for c in self.components), self.warnings)


def _whole(dof: float) -> float:
    return dof if math.isinf(dof) else max(1.0, math.floor(dof + 1e-9))


def combine(*budgets: Budget) -> Budget:
    """One budget of a sum: all components side by side, correlated where they share a cause; warnings once each."""
    warnings = dict.fromkeys(w for b in budgets for w in b.warnings)
    return Budget(tuple(c for b in budgets for c in b.components), tuple(warnings))


def spread_of(samples: Sequence[float], name: str = "spread of samples", cause: str = "") -> Component:
    """Type A component of the mean of independent samples: s / sqrt(n) with n - 1 degrees of freedom (JCGM 100, 4.2.3).

    Samples taken faster than the reading can change are not independent; then their number counts too high.

    Raises:
        ValueError: fewer than two samples.
    """
    n = len(samples)
    if n < 2:
        raise ValueError("a spread needs at least two samples")
    mean = math.fsum(samples) / n
    variance = math.fsum((x - mean) ** 2 for x in samples) / (n - 1)
    return Component(
        name, math.sqrt(variance / n), "Student t", n - 1, "JCGM 100:2008, 4.2.3", "standard", cause,
        remedy="take more samples over a longer steady window", samples=n,
    )  # fmt: skip


@dataclass(frozen=True, slots=True)
class Measured:
    """A value with its budget: SI, by nomenclature key (or plain words where there is none)."""

    key: str
    value: float
    budget: Budget = Budget()


def propagate(key: str, function: Callable[..., float], inputs: Mapping[str, Measured]) -> Measured:
    """Value and budget of `function(**values)` of measured inputs, keeping shared causes (JCGM 100, 5.1.2).

    Each sensitivity is the central difference over plus and minus one standard uncertainty (5.1.3, note 2), which
    also takes in a good part of the curvature. Whatever `function` raises passes through.
    """
    values = {name: m.value for name, m in inputs.items()}
    parts = []
    for name, measured in inputs.items():
        step = measured.budget.standard
        if step <= 0.0:
            continue
        high = function(**{**values, name: measured.value + step})
        low = function(**{**values, name: measured.value - step})
        parts.append(measured.budget.scaled((high - low) / (2.0 * step)))
    return Measured(key, function(**values), combine(*parts))


def combined_variance(
    sensitivities: Sequence[float], uncertainties: Sequence[float], correlation: Sequence[Sequence[float]]
) -> float:
    """Variance of a sum of correlated inputs with any correlation coefficients (JCGM 100, equation 16)."""
    terms = [c * u for c, u in zip(sensitivities, uncertainties, strict=True)]
    return math.fsum(
        a * b * r for a, row in zip(terms, correlation, strict=True) for b, r in zip(terms, row, strict=True)
    )


def repeated_means(columns: Sequence[Sequence[float]]) -> tuple[list[float], list[float], list[list[float]]]:
    """Means, their standard uncertainties and correlation of quantities read at the same times (JCGM 100, 5.2.3).

    Raises:
        ValueError: fewer than two readings, or columns of different length.
    """
    n = len(columns[0])
    if n < 2 or any(len(c) != n for c in columns):
        raise ValueError("simultaneous readings need columns of one length, two or more")
    means = [math.fsum(c) / n for c in columns]
    covariance = [
        [
            math.fsum((a - ma) * (b - mb) for a, b in zip(x, y, strict=True)) / (n * (n - 1))
            for y, mb in zip(columns, means, strict=True)
        ]
        for x, ma in zip(columns, means, strict=True)
    ]
    spread = [math.sqrt(covariance[i][i]) for i in range(len(columns))]
    correlation = [
        [
            covariance[i][j] / (a * b) if a and b else float(i == j)
            for j, b in enumerate(spread)
        ]
        for i, a in enumerate(spread)
    ]  # fmt: skip
    return means, spread, correlation


def largest_first(budget: Budget) -> Iterable[tuple[str, float]]:
    """Cause (or name) and size of each group of correlated components, the largest first."""
    sums = [(group[0].cause or group[0].name, abs(sum(c.value for c in group))) for group in budget.groups]
    return sorted(sums, key=lambda item: -item[1])
