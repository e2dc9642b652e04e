"""How sure a saturation pressure is: from the distance of the property source to published boiling points.

The temperature uncertainty at the normal boiling point has two parts. The distance between the source and the
published figure, the larger of bubble and dew, is taken as the half-width of an even (rectangular) spread, since
nobody knows which of the two is nearer the truth: u = d / sqrt(3) (GUM 4.3.7). The published figure is itself
recalled or rounded: an even spread of 0.03 K for pure fluids (the largest distance of a well-measured one), 0.2 K for
blends and 0.4 K where it is marked as not sure (figures of different documents differ by so much: common practice, no
source). Both are combined as a root sum of squares and become a relative pressure by d ln p / dT of the dew line
there (Clausius and Clapeyron); in relative terms the pressure error of a mixture model changes slowly with
temperature, so it is used at any temperature.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from commission.properties.errors import celsius

if TYPE_CHECKING:
    from commission.properties.refrigerant import Refrigerant
    from commission.properties.register import Figure, RegisterEntry

ATMOSPHERE = 101325.0
CRITICAL_DISTANCE = 3.0  # K
PURE_HALF_WIDTH, BLEND_HALF_WIDTH, NOT_SURE_HALF_WIDTH = 0.03, 0.2, 0.4  # K


def boiling_point_distance(refrigerant: Refrigerant, entry: RegisterEntry) -> float | None:
    """Largest distance (K) of the property source from the published boiling points; None where there are none."""
    distances = []
    for figure, temperature in (
        (entry.boiling_bubble, refrigerant.bubble_temperature),
        (entry.boiling_dew, refrigerant.dew_temperature),
    ):
        if figure is not None and figure.number is not None:
            distances.append(abs(temperature(ATMOSPHERE) - figure.number))
    return max(distances, default=None)


def source_warnings(refrigerant: Refrigerant, entry: RegisterEntry) -> tuple[str, ...]:
    """What a reader must know of the property source of this refrigerant beyond its stated uncertainty.

    A critical temperature more than 3 K from the published one (common practice, no source) means that the parameters
    of the mixture are estimates, so that pressures at condensing temperatures are less sure than the boiling point
    says.
    """
    published = entry.critical_temperature
    if published is None or published.number is None:
        return ()
    if abs(refrigerant.T_critical - published.number) <= CRITICAL_DISTANCE:
        return ()
    return (
        f"{refrigerant.name}: the property source puts the critical temperature at {celsius(refrigerant.T_critical)}, "
        f"published is {celsius(published.number)}: pressures at condensing temperatures are less sure than stated",
    )


def temperature_uncertainty(refrigerant: Refrigerant, entry: RegisterEntry) -> float:
    """Standard uncertainty (K) of the saturation temperature at the normal boiling point."""
    distance = boiling_point_distance(refrigerant, entry) or 0.0
    return math.hypot(distance, _half_width(refrigerant, entry.boiling_dew)) / math.sqrt(3)


def _half_width(refrigerant: Refrigerant, figure: Figure | None) -> float:
    if not refrigerant.is_blend:
        return PURE_HALF_WIDTH
    return NOT_SURE_HALF_WIDTH if figure is None or figure.mark == "M-low" else BLEND_HALF_WIDTH


def pressure_relative_uncertainty(refrigerant: Refrigerant, entry: RegisterEntry) -> float:
    """Relative standard uncertainty of saturation pressures; see the module's text for the method.

    Where there is no boiling point at atmospheric pressure (R-744) the slope at the lower end of the dew line is used.
    """
    T = refrigerant.T_low if refrigerant.p_dew_low > ATMOSPHERE else refrigerant.dew_temperature(ATMOSPHERE)
    return temperature_uncertainty(refrigerant, entry) * refrigerant.dew_slopes(T).ln_p
