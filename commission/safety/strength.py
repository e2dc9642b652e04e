"""Pressure test on site: strength and tightness pressures, steps, hold, nitrogen at another temperature."""

from __future__ import annotations

from typing import TYPE_CHECKING

from commission.errors import NotCalculatedError
from commission.quantities import Input, Kind
from commission.safety.facts import Fact, fact
from commission.safety.figure import Collector, fact_input
from commission.safety.formulas import nitrogen_pressure, pressure_steps
from commission.safety.stamped import Stamped, stamped_pressures

if TYPE_CHECKING:
    from commission.description import LoadedPlant


NAMEPLATE = Fact("nameplate", 0.0, Kind.PRESSURE, "nameplate", "", "stated", "as stamped on the unit")
REFERENCE_TEMPERATURE = 293.15
"""Where the change of a nitrogen charge per kelvin is stated, K."""


def pressure_test_figures(loaded: LoadedPlant, system_id: str, out: Collector) -> None:
    """Strength and tightness test pressures from the lowest nameplate pressure still connected (EN 378-2, table 3).

    The ratio applies to the gauge pressure, as stamped pressures are gauge. A saturation pressure never raises them.
    """
    keys = tuple(f"{what}_test_pressure{side}" for what in ("strength", "tightness") for side in ("", "_high_side"))
    system = loaded.system(system_id)
    out.add(
        "pre_test_pressure",
        fact("pre_test_pressure").gauge_at(loaded.barometric_pressure),
        "safety_rule_figure",
        (fact_input(fact("pre_test_pressure"), loaded.barometric_pressure),),
        fact("pre_test_pressure"),
    )
    for hold in ("strength_test_hold", "tightness_test_hold"):
        out.add(hold, fact(hold).value, "safety_rule_figure", (fact_input(fact(hold)),), fact(hold))
    if system.sealed:
        out.refuse("the unit is factory sealed: it is not tested again on site", *keys, "nitrogen_change_per_kelvin")
        _lowest(loaded, system_id, out)
        return
    stamped = stamped_pressures(loaded, system_id)
    if not stamped:
        reason = "no allowable pressure is stated: write nameplate.allowable_pressure_low and _high as stamped"
        out.refuse(reason, *keys, "allowable_pressure_lowest", "nitrogen_change_per_kelvin")
        return
    lowest = _lowest(loaded, system_id, out)
    assert lowest is not None
    note = "" if len(stamped) == 2 else "only one side's allowable pressure is stated; read the other nameplate first"
    _test_pair(out, lowest, loaded.barometric_pressure, "", note)
    high = next((s for s in stamped if s.side == "high"), None)
    if high is None:
        out.refuse("the allowable pressure of the high side is not stated", keys[1], keys[3])
    elif high.absolute <= lowest.absolute:
        out.refuse("both sides have the same allowable pressure: the joined test proves both", keys[1], keys[3])
    else:
        _test_pair(out, high, loaded.barometric_pressure, "_high_side", "only with the low side shut off")
    _nitrogen_figure(out, lowest)


def _lowest(loaded: LoadedPlant, system_id: str, out: Collector) -> Stamped | None:
    stamped = stamped_pressures(loaded, system_id)
    if not stamped:
        out.refuse("no allowable pressure is stated on the nameplate", "allowable_pressure_lowest")
        return None
    lowest = min(stamped, key=lambda s: s.absolute)
    out.add(
        "allowable_pressure_lowest",
        lowest.absolute,
        "lowest_nameplate_pressure",
        tuple(s.as_input() for s in stamped),
        NAMEPLATE,
    )
    return lowest


def _test_pair(out: Collector, stamped: Stamped, barometric: float, suffix: str, note: str) -> None:
    for what in ("strength", "tightness"):
        rule = fact(f"{what}_test_ratio")
        value = rule.value * stamped.gauge + barometric
        out.add(
            f"{what}_test_pressure{suffix}",
            value,
            "test_pressure",
            (stamped.as_input(), fact_input(rule)),
            rule,
            note=note,
        )


def _nitrogen_figure(out: Collector, lowest: Stamped) -> None:
    rule = Fact("virial", 0.0, Kind.NUMBER, "virial equation of nitrogen", "", "C", "dry nitrogen at constant volume")
    try:
        warmer = nitrogen_pressure(lowest.absolute, REFERENCE_TEMPERATURE, REFERENCE_TEMPERATURE + 1)
    except ValueError:
        out.refuse("the test pressure is above 150 bar: use tables of nitrogen", "nitrogen_change_per_kelvin")
        return
    out.add(
        "nitrogen_change_per_kelvin",
        warmer - lowest.absolute,
        "nitrogen_hold",
        (
            lowest.as_input(),
            Input("temperature at the first reading", REFERENCE_TEMPERATURE, Kind.TEMPERATURE, "20 °C"),
        ),
        rule,
    )


def strength_test_steps(loaded: LoadedPlant, system_id: str, *, high_side: bool = False) -> tuple[float, ...]:
    """The steps of the pressure test in Pa absolute, pre-test first (RSIF IF-09 1.3.1).

    Raises:
        NotCalculatedError: sealed unit, or no nameplate pressure.
    """
    out = Collector()
    pressure_test_figures(loaded, system_id, out)
    key = "strength_test_pressure_high_side" if high_side else "strength_test_pressure"
    if key not in out.found:
        raise NotCalculatedError(out.missing[key])
    barometric = loaded.barometric_pressure
    pre_test = fact("pre_test_pressure").gauge
    assert pre_test is not None
    steps = pressure_steps(
        pre_test,
        out.found[key].value - barometric,
        fact("strength_test_first_share").value,
        fact("strength_test_step_share").value,
    )
    return tuple(step + barometric for step in steps)
