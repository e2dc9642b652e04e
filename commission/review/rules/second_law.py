"""Stated efficiencies against the second law."""

from __future__ import annotations

from collections.abc import Iterator

from commission.quantities import Kind
from commission.review.facts import SystemFacts, explained_figure
from commission.review.finding import Figure, Remark
from commission.review.stated import StatedCop, stated_cops


def beats_carnot(facts: SystemFacts) -> Iterator[Remark]:
    """A stated COP above that of a reversible machine between the entropic mean temperatures of its media.

    Source: second law of thermodynamics. Where a temperature is not written, the bound most generous to the machine
    is taken, so every finding is an error.
    """
    for stated in stated_cops(facts):
        if stated.cop > stated.limit.value:
            yield Remark(
                "error",
                stated.path,
                f"{stated.name} of {facts.title} states more than any machine can reach between these temperatures.",
                _figures(facts, stated),
                "Look for a capacity or power in a wrong unit or column, or temperatures of another point.",
            )


def too_good(facts: SystemFacts) -> Iterator[Remark]:
    """A stated COP above the share of Carnot that real machines reach.

    Source: second law for the limit, threshold `second_law_share` for the share.
    """
    entry = facts.plant.threshold("second_law_share")
    for stated in stated_cops(facts):
        share = stated.cop / stated.limit.value
        if entry.value < share <= 1:
            yield Remark(
                "warning",
                stated.path,
                f"{stated.name} of {facts.title} is better than real machines are.",
                (
                    *_figures(facts, stated),
                    facts.plant.figure("share of the Carnot COP", share, Kind.RATIO),
                    facts.plant.threshold_figure("second_law_share", "few machines pass"),
                ),
                "Ask the supplier what the power counts, and check the temperatures of the point.",
                entry.source,
                entry.mark,
            )


def _figures(facts: SystemFacts, stated: StatedCop) -> tuple[Figure, ...]:
    plant = facts.plant
    return (
        plant.quantity(stated.quantity, stated.cop, "COP stated"),
        explained_figure(plant, stated.limit, "Carnot COP"),
        plant.figure("mean temperature where heat is taken", stated.source_mean, Kind.TEMPERATURE),
        plant.figure("mean temperature where heat is given", stated.sink_mean, Kind.TEMPERATURE),
    )
