"""The pressure of a plant at rest against its temperature: gas that does not condense, or liquid that is not there.

Liquid and vapour at one temperature stand at saturation. So a plant that has stood long enough shows by one gauge and a
few thermometers whether air is in it, another refrigerant, or no liquid any more. A blend at rest lies between its
bubble and its dew point, nearer to the first the more liquid it holds.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

from commission.acceptance.budget import Budget, Measured, combine, propagate
from commission.acceptance.decision import significant
from commission.acceptance.derived import property_part
from commission.errors import NotCalculatedError

if TYPE_CHECKING:
    from commission.properties import Refrigerant

Finding = Literal["as it should be", "too high", "too low"]
LARGEST_SPREAD = 1.0
"""K between the places; further apart the plant is not at one temperature (common practice, no source)."""
_MEANING: dict[Finding, str] = {
    "as it should be": "liquid and vapour of this refrigerant, and no other gas that this gauge could show",
    "too high": "air or nitrogen in the circuit, another refrigerant, or a warmer place that holds liquid",
    "too low": "no liquid left (a leak, or the charge shut in elsewhere), another refrigerant, or a colder place that "
    "holds liquid",
}


@dataclass(frozen=True, slots=True)
class Standstill:
    """A plant at rest judged. Pressures absolute, in Pa; `low` and `high` are the dew and bubble pressure at the mean
    of the temperatures (one value for a pure substance).

    `excess` is how far the reading lies outside them, negative below; `budget` is that of reading minus the nearer end.
    """

    finding: Finding
    temperature: float
    low: float
    high: float
    excess: float
    budget: Budget
    text: str


def standstill(
    refrigerant: Refrigerant,
    pressure: Measured,
    temperatures: Sequence[Measured],
    *,
    liquid_present: bool,
    pumped_down: bool,
) -> Standstill:
    """Judge the pressure (Pa absolute) of a plant at rest by the temperatures (K) read at it.

    Only with liquid present, one temperature throughout and no pump-down before; a deviation beyond its expanded
    uncertainty (95 %) is a finding.

    Raises:
        NotCalculatedError: one of these does not hold, or there is no liquid at this temperature (carbon dioxide above
            31 °C).
    """
    if pumped_down:
        raise NotCalculatedError("after a pump-down the low side is empty: open the valves and let the plant stand")
    if not liquid_present:
        raise NotCalculatedError("without liquid the pressure at rest follows charge and volume, not the temperature")
    temperature = _mean(temperatures)
    if temperature.value + temperature.budget.expanded() >= refrigerant.T_critical:
        raise NotCalculatedError(
            f"{refrigerant.name} has no liquid at {temperature.value - 273.15:.1f} °C: above "
            f"{refrigerant.T_critical - 273.15:.1f} °C the pressure at rest follows charge and volume"
        )
    low, high = refrigerant.dew(temperature.value).p, refrigerant.bubble(temperature.value).p
    upper = abs(pressure.value - high) <= abs(pressure.value - low)
    inputs = {"read": pressure, "at": temperature, "off": property_part(refrigerant)}

    def beyond(read: float, at: float, off: float) -> float:
        return read - (1.0 + off) * (refrigerant.bubble(at).p if upper else refrigerant.dew(at).p)

    gap = propagate("standstill pressure", beyond, inputs)
    inside = min(low, high) <= pressure.value <= max(low, high)
    excess = 0.0 if inside else gap.value
    finding: Finding = "as it should be"
    if significant(excess, gap.budget.one_sided(0.975)):
        finding = "too high" if excess > 0.0 else "too low"
    return Standstill(finding, temperature.value, low, high, excess, gap.budget, f"{finding}: {_MEANING[finding]}")


def _mean(temperatures: Sequence[Measured]) -> Measured:
    """Mean of the places, if they are at one temperature.

    Raises:
        NotCalculatedError: none was read, or they lie too far apart.
    """
    if not temperatures:
        raise NotCalculatedError("it needs a reading of the temperature at the plant")
    warmest = max(temperatures, key=lambda m: m.value)
    coldest = min(temperatures, key=lambda m: m.value)
    spread = warmest.value - coldest.value
    doubt = 0.0 if warmest is coldest else combine(warmest.budget, coldest.budget.scaled(-1.0)).expanded()
    if spread > max(LARGEST_SPREAD, doubt):
        raise NotCalculatedError(
            f"the plant is not at one temperature: {spread:.1f} K between its places; the coldest one that holds "
            "liquid sets the pressure"
        )
    n = len(temperatures)
    value = sum(m.value for m in temperatures) / n
    return Measured("temperature at rest", value, combine(*(m.budget.scaled(1.0 / n) for m in temperatures)))
