"""Systems, and single values, that could not be calculated."""

from __future__ import annotations

from collections.abc import Iterator

from commission.review.facts import SystemFacts
from commission.review.finding import Remark


def not_calculated(facts: SystemFacts) -> Iterator[Remark]:
    """No fitted model, or no expectation at the design condition or on the hottest or coldest day.

    Source: nothing is substituted silently; what cannot be calculated says why.
    """
    if facts.model is None:
        yield Remark(
            "warning",
            facts.path(),
            f"{facts.title}: not calculated: because {facts.reason}",
            (),
            "Correct or complete the description; until then no reading of this system can be judged.",
        )
        return
    for key, outlook in facts.outlooks.items():
        if outlook.prediction is None:
            yield Remark(
                facts.severity(key, "warning"),
                facts.path(),
                f"{facts.title} {outlook.name}: not calculated: because {outlook.reason}",
                (),
                "Check the condition, the climate of the site and the rated points.",
            )


def warned(facts: SystemFacts) -> Iterator[Remark]:
    """What the prediction itself warns of at the design condition and on the hottest and coldest day.

    Source: the physics says so where it leaves the range it was fitted to or a property its range. Envelope and limit
    devices have rules of their own.
    """
    seen = _limits(facts)
    for outlook in facts.outlooks.values():
        for warning in outlook.prediction.warnings if outlook.prediction else ():
            if warning not in seen:
                seen.add(warning)
                yield Remark(
                    "note",
                    facts.path(),
                    f"{facts.title} {outlook.name}: {warning}",
                    (),
                    "Take the expected readings of such a day with this in mind.",
                )


def _limits(facts: SystemFacts) -> set[str]:
    from commission.prediction.limits import beyond_limits

    found = [o.prediction for o in facts.outlooks.values() if o.prediction is not None]
    if facts.model is None:
        return set()
    of = facts.model.facts
    return {
        text for p in found for text in beyond_limits(of, {k: e.value for k, e in p.expected.items()}, p.conditions)
    }
