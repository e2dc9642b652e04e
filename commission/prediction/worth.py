"""Which assumption is most worth replacing by a fact: one ranking, for the review and for the manual."""

from __future__ import annotations

from collections.abc import Collection, Mapping

LEADING = (
    "suction_pressure", "discharge_pressure", "discharge_temperature", "evaporating_temperature",
    "condensing_temperature", "superheat", "subcooling", "power_input", "cooling_capacity", "heating_capacity",
)  # fmt: skip
"""The values that decide which assumption matters most: what is read and what is promised."""


def shares(parts: Mapping[str, Mapping[str, float]]) -> dict[str, float]:
    """The mean share (0-1) of each cause in the variance of the leading values.

    `parts` are those of a prediction, that of the rated condition where systems are to be ranked: the signed change of
    each value by one standard uncertainty of each cause (JCGM 100:2008, 5.1: variances add).
    """
    totals: dict[str, float] = {}
    counted = 0
    for key in LEADING:
        squares = {cause: part**2 for cause, part in parts.get(key, {}).items()}
        whole = sum(squares.values())
        if whole <= 0:
            continue
        counted += 1
        for cause, square in squares.items():
            totals[cause] = totals.get(cause, 0.0) + square / whole
    return {cause: total / counted for cause, total in totals.items()}


def most_worth(parts: Mapping[str, Mapping[str, float]], assumptions: Collection[str]) -> str | None:
    """The assumption with the largest share, None where none of them moves a leading value; of equals the first."""
    found = shares(parts)
    ranked = sorted((key for key in assumptions if found.get(key, 0.0) > 0), key=lambda key: -found[key])
    return ranked[0] if ranked else None
