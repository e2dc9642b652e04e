"""Whether the instruments can show what the plant is expected to read."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass

from commission.description.instruments import ResolvedInstrument
from commission.errors import NotCalculatedError
from commission.quantities import NOMENCLATURE, Explained, Kind, Reference
from commission.review.facts import SystemFacts, explained_figure
from commission.review.finding import Figure, Remark

READ_ON_SITE = (
    "suction_pressure", "discharge_pressure", "suction_temperature", "discharge_temperature", "liquid_temperature",
    "heat_source_inlet_temperature", "heat_sink_inlet_temperature", "power_input", "current",
)  # fmt: skip
OUTLOOKS = ("design", "hottest", "coldest")


@dataclass(frozen=True, slots=True)
class Scale:
    """An instrument as it stands in the description, with the ends of its scale in SI (pressures absolute)."""

    id: str
    chosen: bool
    resolved: ResolvedInstrument
    low: float
    high: float


def scales(facts: SystemFacts, key: str) -> tuple[Scale, ...]:
    """The instrument named for a quantity, else every instrument that measures its kind."""
    plant = facts.plant.loaded.plant
    named = facts.system.measured_with.get(key)
    found = []
    for identity, instrument in plant.instruments.items():
        resolved = instrument.resolved
        if named is not None and identity != named:
            continue
        if resolved.kind is not NOMENCLATURE[key].kind or (named is None and instrument.measures == "vacuum"):
            continue
        offset = facts.plant.loaded.barometric_pressure if resolved.reference is Reference.GAUGE else 0.0
        low = -math.inf if resolved.range_low is None else resolved.range_low + offset
        high = math.inf if resolved.range_high is None else resolved.range_high + offset
        found.append(Scale(identity, named is not None, resolved, low, high))
    return tuple(found)


def off_the_scale(facts: SystemFacts) -> Iterator[Remark]:
    """No instrument, or not the one named, has the expected reading on its scale.

    Source: an instrument reads nothing outside its scale. A named pressure gauge that would be overloaded is an error,
    since it can burst or be spoilt.
    """
    for key in READ_ON_SITE:
        if facts.system.sealed and NOMENCLATURE[key].kind is Kind.PRESSURE:
            continue  # no ports
        candidates = scales(facts, key)
        if not candidates:
            continue
        for name in OUTLOOKS:
            expected = facts.expected(name, key)
            if expected is None or any(scale.low <= expected.value <= scale.high for scale in candidates):
                continue
            yield _off_scale(facts, key, name, expected, candidates)
            break


def _off_scale(
    facts: SystemFacts, key: str, outlook: str, expected: Explained, candidates: tuple[Scale, ...]
) -> Remark:
    kind = NOMENCLATURE[key].kind
    chosen = candidates[0].chosen
    overloaded = kind is Kind.PRESSURE and chosen and expected.value > candidates[0].high
    who = f"{candidates[0].id} cannot show" if chosen else "None of the instruments can show"
    figures = [explained_figure(facts.plant, expected, f"expected {facts.outlooks[outlook].name}")]
    figures += [Figure(f"scale of {scale.id}", _scale_text(facts, scale, kind)) for scale in candidates]
    return Remark(
        facts.severity(outlook, "error" if overloaded else "warning"),
        facts.path("measured_with", key) if chosen else "instruments",
        f"{who} the expected {facts.plant.display.words(key)} of {facts.title}.",
        tuple(figures),
        "Bring an instrument whose scale holds the reading, with room above it for the trip of the limiter.",
    )


def _scale_text(facts: SystemFacts, scale: Scale, kind: Kind) -> str:
    show = facts.plant.display.text
    low = "no lower end written" if math.isinf(scale.low) else show(scale.low, kind)
    high = "no upper end written" if math.isinf(scale.high) else show(scale.high, kind)
    return f"{low} to {high}"


def limiter_off_the_scale(facts: SystemFacts) -> Iterator[Remark]:
    """No pressure gauge reaches the setting of the high-pressure limiter, so its trip cannot be proved.

    Source: common practice: each limit device is proved with a gauge on the same pressure.
    """
    setting, candidates = facts.system.controls.high_pressure_limit, scales(facts, "discharge_pressure")
    if setting is None or not candidates or facts.system.sealed:
        return
    limit = facts.absolute(setting)
    if any(scale.high >= limit for scale in candidates):
        return
    yield Remark(
        "warning",
        facts.path("controls", "high_pressure_limit"),
        f"No gauge reaches the setting of the high-pressure limiter of {facts.title}: its trip cannot be proved.",
        (
            facts.plant.figure("high-pressure limiter", limit, Kind.PRESSURE),
            *(Figure(f"scale of {scale.id}", _scale_text(facts, scale, Kind.PRESSURE)) for scale in candidates),
        ),
        "Bring a gauge with a longer scale.",
    )


def too_coarse_for_superheat(facts: SystemFacts) -> Iterator[Remark]:
    """Gauge and probe together cannot tell a healthy superheat from none.

    Source: JCGM 100: u^2 = u(T)^2 + (u(p) dT/dp)^2, expanded with its coverage factor, as a share of the superheat
    expected (threshold `superheat_uncertainty_share`). The best gauge and probe on the list are taken where none is
    named.
    """
    superheat = facts.expected("design", "superheat") or facts.expected("design", "compressor_superheat")
    pressure = facts.expected("design", "suction_pressure")
    temperature = facts.expected("design", "suction_temperature")
    fluid = facts.refrigerant
    if superheat is None or pressure is None or temperature is None or fluid is None or superheat.value <= 0:
        return
    gauges = _expanded(facts, "suction_pressure", pressure.value)
    probes = _expanded(facts, "suction_temperature", temperature.value)
    if not gauges or not probes:
        return
    (gauge_error, gauge), (probe_error, probe) = min(gauges), min(probes)
    step = 100.0
    rise = fluid.dew_temperature(pressure.value + step) - fluid.dew_temperature(pressure.value - step)
    slope = rise / (2 * step)
    total = math.hypot(probe_error, gauge_error * slope)
    entry = facts.plant.threshold("superheat_uncertainty_share")
    if total <= entry.value * superheat.value:
        return
    worst = gauge if gauge_error * slope > probe_error else probe
    yield Remark(
        "warning",
        f"instruments.{worst}",
        f"{gauge} and {probe} are too coarse to judge the superheat of {facts.title}.",
        (
            explained_figure(facts.plant, superheat, "superheat expected"),
            facts.plant.figure("expanded uncertainty of the superheat", total, Kind.TEMPERATURE_DIFFERENCE),
            facts.plant.figure(f"share of {gauge}", gauge_error * slope, Kind.TEMPERATURE_DIFFERENCE),
            facts.plant.figure(f"share of {probe}", probe_error, Kind.TEMPERATURE_DIFFERENCE),
        ),
        f"Replace {worst} by a finer one: it makes most of the uncertainty.",
        entry.source,
        entry.mark,
    )


def _expanded(facts: SystemFacts, key: str, value: float) -> list[tuple[float, str]]:
    """Expanded uncertainty (95 %) in SI of each instrument that can show this value, with its id."""
    from commission.acceptance.instruments import instrument_budget

    instruments = facts.plant.loaded.plant.instruments
    found = []
    for scale in scales(facts, key):
        if scale.low <= value <= scale.high:
            barometric = facts.plant.loaded.barometric_pressure
            try:
                budget = instrument_budget(instruments[scale.id], key, value, barometric, on=facts.plant.visit)
            except NotCalculatedError:
                continue  # nothing is stated of its accuracy, so it cannot be the one that decides
            found.append((budget.expanded(), scale.id))
    return found
