"""The saturation table that hangs beside the gauges, at the barometric pressure of the site."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from commission.properties import PropertyRangeError, Refrigerant


@dataclass(frozen=True, slots=True)
class SaturationRow:
    """One temperature (K) with the bubble and dew pressures in Pa, absolute and gauge at the site."""

    T: float
    p_bubble: float
    p_dew: float
    p_bubble_gauge: float
    p_dew_gauge: float


def saturation_table(
    refrigerant: Refrigerant, barometric_pressure: float, temperatures: Iterable[float]
) -> tuple[SaturationRow, ...]:
    """Rows for all temperatures (K) at which both lines hold; others are left out, never extrapolated."""
    rows = []
    for T in temperatures:
        try:
            bubble, dew = refrigerant.bubble(T).p, refrigerant.dew(T).p
        except PropertyRangeError:
            continue
        rows.append(SaturationRow(T, bubble, dew, bubble - barometric_pressure, dew - barometric_pressure))
    return tuple(rows)
