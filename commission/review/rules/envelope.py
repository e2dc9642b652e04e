"""Running outside what compressors and oil bear."""

from __future__ import annotations

from collections.abc import Iterator

from commission.review.facts import SystemFacts, explained_figure
from commission.review.finding import Remark

OUTLOOKS = ("hottest", "coldest", "design")
_HOTTEST = {"R-717": "discharge_temperature_ammonia", "R-744": "discharge_temperature_carbon_dioxide"}
"""The threshold of refrigerants whose machines and oils bear more than those of halocarbons and hydrocarbons."""


def discharge_too_hot(facts: SystemFacts) -> Iterator[Remark]:
    """An expected discharge temperature above what oil bears, or above the limit that is set.

    Source: common practice (thresholds `discharge_temperature_warm`, and of its own for ammonia and carbon dioxide).
    """
    name = facts.refrigerant.name if facts.refrigerant is not None else ""
    entry = facts.plant.threshold(_HOTTEST.get(name, "discharge_temperature_warm"))
    setting = facts.system.controls.discharge_temperature_limit
    limit = entry.value if setting is None else min(entry.value, setting)
    for name in OUTLOOKS:
        expected = facts.expected(name, "discharge_temperature")
        if expected is None or expected.value <= limit:
            continue
        own = setting is not None and setting <= entry.value
        yield Remark(
            facts.severity(name, "warning"),
            facts.path("controls", "discharge_temperature_limit") if own else facts.path(),
            f"The discharge of {facts.title} is expected to run too hot {facts.outlooks[name].name}.",
            (
                explained_figure(facts.plant, expected, "expected discharge temperature"),
                facts.plant.quantity("discharge_temperature", limit, "limit that is set" if own else "keep below"),
            ),
            "Look for ways to less lift or less superheat; measure this temperature first on the day.",
            entry.source,
            entry.mark,
        )
        return


def outside_envelope(facts: SystemFacts) -> Iterator[Remark]:
    """An expected operating point outside the application envelope that is written of the compressor.

    Source: the maker's envelope: a polygon of dew points at suction and discharge, corners in order.
    """
    from commission.prediction.limits import inside

    corners = [(c.evaporating_temperature, c.condensing_temperature) for c in facts.system.compressor.envelope]
    if len(corners) < 3:
        return
    for name in OUTLOOKS:
        evaporating = facts.expected(name, "evaporating_temperature")
        condensing = facts.expected(name, "condensing_temperature")
        gas, superheat = facts.expected(name, "suction_temperature"), facts.expected(name, "compressor_superheat")
        if evaporating is None or condensing is None:
            continue
        at_suction = evaporating.value if gas is None or superheat is None else gas.value - superheat.value
        if inside(corners, at_suction, condensing.value):
            continue
        yield Remark(
            facts.severity(name, "warning"),
            facts.path("compressor", "envelope"),
            f"The compressor of {facts.title} is expected to run outside its envelope {facts.outlooks[name].name}.",
            (explained_figure(facts.plant, evaporating), explained_figure(facts.plant, condensing)),
            "Ask the maker of the compressor whether it may run there, and find the control that keeps it inside.",
        )
        return


def pressure_ratio_too_high(facts: SystemFacts) -> Iterator[Remark]:
    """A pressure ratio that one stage does not do well.

    Source: common practice (threshold `pressure_ratio_high`).
    """
    entry = facts.plant.threshold("pressure_ratio_high")
    for name in OUTLOOKS:
        expected = facts.expected(name, "pressure_ratio")
        if expected is None or expected.value <= entry.value:
            continue
        yield Remark(
            facts.severity(name, "warning"),
            facts.path(),
            f"The pressure ratio of {facts.title} is high for one stage {facts.outlooks[name].name}.",
            (
                explained_figure(facts.plant, expected, "expected pressure ratio"),
                facts.plant.threshold_figure("pressure_ratio_high", "one stage up to about"),
            ),
            "Ask the maker of the compressor whether it may run there.",
            entry.source,
            entry.mark,
        )
        return


def head_pressure_hold(facts: SystemFacts) -> Iterator[Remark]:
    """A head-pressure hold at or above the condensing temperature of the design condition.

    Source: the hold is for cold days; where it also acts at the design condition, the plant never runs as designed.
    """
    hold = facts.system.controls.head_pressure
    condensing = facts.expected("design", "condensing_temperature")
    if hold is None or condensing is None or hold.hold < condensing.value - 0.05:
        return
    yield Remark(
        "warning",
        facts.path("controls", "head_pressure", "hold"),
        f"The head-pressure control of {facts.title} holds the condensing temperature up even at the design condition.",
        (
            facts.plant.quantity("condensing_temperature", hold.hold, "held"),
            explained_figure(facts.plant, condensing, "expected at the design condition"),
        ),
        "Set the hold clearly below the condensing temperature of the design condition.",
    )


def over_the_nameplate_current(facts: SystemFacts) -> Iterator[Remark]:
    """A current expected above the largest current of the nameplate.

    Source: the nameplate: cables and protection are chosen by it.
    """
    stamped = facts.system.nameplate.rated_current
    for name in ("hottest", "design"):
        expected = facts.expected(name, "current")
        if stamped is None or expected is None or expected.value <= stamped:
            continue
        yield Remark(
            facts.severity(name, "warning"),
            facts.path("nameplate", "rated_current"),
            f"{facts.title} is expected to draw more than the current of its nameplate {facts.outlooks[name].name}.",
            (
                explained_figure(facts.plant, expected, "expected current"),
                facts.plant.quantity("current", stamped, "nameplate"),
            ),
            "Check voltage and phases of the nameplate, and the setting of the motor protection.",
        )
        return


def no_head_pressure_in_winter(facts: SystemFacts) -> Iterator[Remark]:
    """A thermostatic valve with nothing that keeps the condensing pressure up on the coldest day.

    Source: common practice (threshold `winter_condensing`).
    """
    expansion, entry = facts.system.expansion, facts.plant.threshold("winter_condensing")
    condensing = facts.expected("coldest", "condensing_temperature")
    if facts.system.controls.head_pressure is not None or condensing is None or not facts.cools:
        return
    if expansion is None or expansion.device == "electronic valve" or condensing.value >= entry.value:
        return
    yield Remark(
        facts.severity("coldest", "warning"),
        facts.path("controls"),
        f"Nothing that is written holds up the condensing pressure of {facts.title} on the coldest day.",
        (
            explained_figure(facts.plant, condensing, "expected condensing temperature"),
            facts.plant.threshold_figure("winter_condensing", "usually held above"),
        ),
        "Ask how the expansion device gets its pressure difference in winter, and write the control under "
        "controls.head_pressure.",
        entry.source,
        entry.mark,
    )
