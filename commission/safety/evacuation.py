"""Evacuation: level, criterion, hold and rise test, by refrigerant and charge."""

from __future__ import annotations

from typing import TYPE_CHECKING

from commission.quantities import Input, Kind
from commission.safety.facts import fact
from commission.safety.figure import Collector, fact_input
from commission.safety.oils import oil_named
from commission.safety.stamped import place

if TYPE_CHECKING:
    from commission.description import LoadedPlant
    from commission.safety.substance import Substance

COLD_EVAPORATION = 273.15 - 20
"""Evaporating below this, water in the circuit freezes in the valve: evacuate deeper (common practice)."""
KEYS = ("evacuation_limit", "evacuation_target", "evacuation_hold", "rise_test_hold", "rise_test_limit")


def evacuation_figures(loaded: LoadedPlant, system_id: str, substance: Substance, out: Collector) -> None:
    """Level, hold and rise test. A vacuum proves dryness, not tightness (RSIF IF-09 1.6.1)."""
    system = loaded.system(system_id)
    if system.sealed:
        out.refuse("the unit is factory sealed: it is not evacuated on site", *KEYS)
        return
    ammonia = "R-717" in substance.components
    limit = fact("evacuation_limit_ammonia" if ammonia else "evacuation_limit")
    out.add("evacuation_limit", limit.value, "safety_rule_figure", (fact_input(limit),), limit)
    coldest = _coldest_evaporation(loaded, system_id)
    oil = oil_named(system.compressor.oil)
    cold = coldest is not None and coldest < COLD_EVAPORATION
    dry = cold or (oil is not None and oil.draws_water)
    target = limit if ammonia else fact("evacuation_target_dry" if dry else "evacuation_target")
    inputs = [fact_input(target)]
    if coldest is not None:
        inputs.append(Input("coldest evaporation stated", coldest, Kind.TEMPERATURE, "description"))
    note = "" if oil is None or ammonia else f"{target.says}; here {system.compressor.oil}: {oil.says}"
    out.add("evacuation_target", target.value, "safety_rule_figure", tuple(inputs), target, note=note)
    _hold(loaded, system_id, substance, ammonia, out)
    out.add(
        "rise_test_hold",
        fact("rise_test_hold").value,
        "safety_rule_figure",
        (fact_input(fact("rise_test_hold")),),
        fact("rise_test_hold"),
    )
    # with the pump shut off ammonia is judged by the rule's own limit, above which practice has no figure
    rise = limit if ammonia else fact("rise_test_limit")
    out.add("rise_test_limit", rise.value, "safety_rule_figure", (fact_input(rise),), rule=rise)


def _hold(loaded: LoadedPlant, system_id: str, substance: Substance, ammonia: bool, out: Collector) -> None:
    """Time under vacuum; a charge that is not stated takes the longer hold."""
    charge = loaded.system(system_id).charge
    edge = fact("evacuation_large_charge")
    long_hold = ammonia or "R-744" in substance.components or charge is None or charge >= edge.value
    hold = fact("evacuation_hold_large" if long_hold else "evacuation_hold")
    inputs = [fact_input(hold)]
    note = hold.says
    if charge is None:
        note = "the charge is not stated, so the longer hold is shown"
    else:
        inputs.append(Input("charge", charge, Kind.MASS, place(loaded, f"systems.{system_id}.charge")))
    out.add("evacuation_hold", hold.value, "safety_rule_figure", tuple(inputs), hold, note=note)


def _coldest_evaporation(loaded: LoadedPlant, system_id: str) -> float | None:
    system = loaded.system(system_id)
    stated = [p.evaporating_temperature for p in system.rated_points if p.evaporating_temperature is not None]
    if system.condensing_unit is not None:
        stated += [p.evaporating_temperature for p in system.condensing_unit.rated_points]
    return min(stated, default=None)
