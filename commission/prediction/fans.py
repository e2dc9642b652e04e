"""Fans and pumps of a system, and which of them its stated boundary counts."""

from __future__ import annotations

from collections.abc import Mapping

from commission.prediction.facts import CONDENSER_FAN, EVAPORATOR_FAN, Facts
from commission.prediction.plan import Fans


def fans_of(facts: Facts, a: Mapping[str, float], source_heat: float, sink_heat: float) -> Fans:
    """Fans and pumps with the boundary that the supplier states."""
    system = facts.system
    includes = boundary(facts)
    source_air, sink_air = facts.source_liquid is None, facts.sink_liquid is None

    def counted(word: str) -> float:
        return a["fans_in_rated_power"] if includes is None else float(word in includes)

    source = sink = 0.0
    source_counted = counted(EVAPORATOR_FAN if source_air else "source pump")
    sink_counted = counted(CONDENSER_FAN if sink_air else "sink pump")
    if source_air:
        stated = system.evaporator.fan_power
        source = stated if stated is not None else a["evaporator_fan_share"] * source_heat
    elif includes is not None and source_counted:
        pump = system.heat_source.pump_power
        source = pump if pump is not None else a["pump_share"] * source_heat
    if sink_air:
        stated = system.condenser.fan_power
        sink = stated if stated is not None else a["condenser_fan_share"] * sink_heat
    elif includes is not None and sink_counted:
        pump = system.heat_sink.pump_power
        sink = pump if pump is not None else a["pump_share"] * sink_heat
    exponents = [a["fan_power_exponent"] if m.flow_stages else 0.0 for m in (system.heat_source, system.heat_sink)]
    return Fans(source, sink, source_counted, sink_counted, *exponents)


def boundary(facts: Facts) -> tuple[str, ...] | None:
    """What the power input counts as the supplier states it, or None where nobody says."""
    for point in facts.system.rated_points:
        if point.includes is not None:
            return point.includes
    unit = facts.system.condensing_unit
    return unit.includes if unit is not None and not facts.system.rated_points else None
