"""Conformity decided from a value, its uncertainty and limits, after JCGM 106:2012.

The same rule stands in plain JavaScript in `site_templates/scripts/decision.js`; one file of vectors holds the two
together. Nothing here knows refrigeration.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from decimal import ROUND_HALF_UP, Decimal
from typing import Literal

from commission.acceptance.budget import Budget
from commission.acceptance.distributions import normal_cdf, normal_quantile

Outcome = Literal["conforming", "not conforming", "undecided"]
Rule = Literal["simple", "guarded"]
RELATIVE_ROUNDING = 1e-9
"""A difference below one part in 10^9 is the rounding of the arithmetic, not of the plant: it never decides."""


@dataclass(frozen=True, slots=True)
class Decision:
    """What was decided and by which limits; all values in the unit of the measured quantity.

    `acceptance_low` and `acceptance_high` bound the values that are accepted. `capable` says whether the test keeps
    the largest uncertainty that was agreed, yes where none was. `uncertainty_needed` is the standard uncertainty at
    which this very value would be decided, None where it is decided already or lies on the limit. `what_would_decide`
    is a sentence for a person.
    """

    outcome: Outcome
    probability_of_conformity: float
    limit_low: float | None
    limit_high: float | None
    acceptance_low: float | None
    acceptance_high: float | None
    rule: Rule
    confidence: float = 0.95
    standard_uncertainty: float = 0.0
    largest_expanded_uncertainty: float | None = None
    capable: bool = True
    uncertainty_needed: float | None = None
    what_would_decide: str | None = None


def decide(
    value: float,
    uncertainty: Budget | float,
    lower: float | None = None,
    upper: float | None = None,
    rule: Rule = "simple",
    confidence: float = 0.95,
    largest_expanded_uncertainty: float | None = None,
) -> Decision:
    """Decide whether a measured value conforms to its limits.

    - *simple* (JCGM 106, 8.2, the default of nearly all contracts): a value on or inside the limits conforms, whatever
      its uncertainty. The parties share the risk, which is only fair while the test is good enough for the tolerance;
      so `largest_expanded_uncertainty` (two-sided at `confidence`) may be agreed, and without it every test counts.
      Where it is exceeded the test is not
      capable, and a value nearer to a limit than its one-sided expanded uncertainty is *undecided*, both ways.
    - *guarded* (JCGM 106, 8.3): accepted only where the value is inside by the guard band `k u`, rejected only where it
      is outside by it, *undecided* between. `k` is the one-sided normal quantile at `confidence`, so that an accepted
      plant conforms with at least that probability (one limit).

    `uncertainty` is a budget or a standard uncertainty; few degrees of freedom widen it (`Budget.one_sided`).

    Raises:
        ValueError: no limit, limits crossed, a number that is not finite, negative uncertainty, or a confidence
            outside 0.5 to 1.
    """
    u = uncertainty.one_sided(confidence) if isinstance(uncertainty, Budget) else float(uncertainty)
    _check(value, u, lower, upper, confidence)
    k = normal_quantile(confidence)
    capable = largest_expanded_uncertainty is None or not _above(
        normal_quantile(0.5 + confidence / 2.0) * u, largest_expanded_uncertainty
    )
    guard = 0.0 if rule == "simple" and capable else k * u
    below = math.inf if lower is None else value - lower
    above = math.inf if upper is None else upper - value
    margin, limit = min((below, lower), (above, upper), key=lambda pair: pair[0])
    assert limit is not None
    slack = RELATIVE_ROUNDING * max(abs(value), abs(limit))
    outcome: Outcome = "undecided"
    if margin >= guard - slack:
        outcome = "conforming"
    elif margin < -slack and -margin >= guard - slack:
        outcome = "not conforming"
    needed = None
    if outcome == "undecided":
        needed = abs(margin) / k
        if rule == "simple" and largest_expanded_uncertainty is not None:
            needed = max(needed, largest_expanded_uncertainty / normal_quantile(0.5 + confidence / 2.0))
    return Decision(
        outcome,
        probability_of_conformity(value, u, lower, upper),
        lower,
        upper,
        None if lower is None else lower + guard,
        None if upper is None else upper - guard,
        rule,
        confidence,
        u,
        largest_expanded_uncertainty,
        capable,
        needed if needed else None,
    )


def probability_of_conformity(value: float, u: float, lower: float | None, upper: float | None) -> float:
    """Probability that the true value lies inside the limits, for a normal distribution (JCGM 106, 7.2 to 7.4)."""
    if u == 0.0:
        return float((lower is None or value >= lower) and (upper is None or value <= upper))
    high = 1.0 if upper is None else normal_cdf((upper - value) / u)
    low = 0.0 if lower is None else normal_cdf((lower - value) / u)
    return max(0.0, high - low)


def significant(deviation: float, uncertainty: float, confidence: float = 0.95) -> bool:
    """Whether a deviation is larger than its two-sided expanded uncertainty: chance alone hardly explains it."""
    return _above(abs(deviation), normal_quantile(0.5 + confidence / 2.0) * uncertainty)


def fixed(value: float, digits: int) -> str:
    """A number with `digits` decimals, halves away from zero, no negative zero: the same text as in the browser."""
    text = str(Decimal(value).quantize(Decimal(1).scaleb(-digits), ROUND_HALF_UP))
    return text.lstrip("-") if float(text) == 0 else text


def _above(a: float, b: float) -> bool:
    return a > b + RELATIVE_ROUNDING * abs(b)


def _check(value: float, u: float, lower: float | None, upper: float | None, confidence: float) -> None:
    if lower is None and upper is None:
        raise ValueError("without a limit there is nothing to decide")
    if not all(math.isfinite(x) for x in (value, u, lower or 0.0, upper or 0.0)) or u < 0.0:
        raise ValueError(
            f"finite numbers and an uncertainty of zero or more are wanted: {value}, {u}, {lower}, {upper}"
        )
    if lower is not None and upper is not None and lower > upper:
        raise ValueError(f"the lower limit {lower:g} lies above the upper limit {upper:g}")
    if not 0.5 < confidence < 1.0:
        raise ValueError(f"a confidence between 0.5 and 1 is wanted, not {confidence:g}")


def sure_text(probability: float) -> str:
    """A probability in per cent; nothing measured is certain, so none is said to be 100.0 or 0.0."""
    if probability > 0.999:
        return "more than 99.9 %"
    return "less than 0.1 %" if probability < 0.001 else f"{100.0 * probability:.1f} %"
