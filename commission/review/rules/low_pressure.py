"""The settings of the low side against what is expected there."""

from __future__ import annotations

from collections.abc import Iterator

from commission.quantities import Kind
from commission.review.facts import SystemFacts, explained_figure
from commission.review.finding import Remark


def cut_out_over_suction(facts: SystemFacts) -> Iterator[Remark]:
    """A low-pressure cut-out that the expected suction pressure reaches or nears.

    Source: a machine stopped by its own cut-out at its design condition does not do its duty. Margin: threshold
    `low_pressure_margin`. An error only where the expectation lies below the setting by twice its uncertainty.
    """
    setting = facts.system.controls.low_pressure_cut_out
    if setting is None:
        return
    cut_out = facts.absolute(setting)
    entry = facts.plant.threshold("low_pressure_margin")
    for name in ("design", "coldest"):
        expected = facts.expected(name, "suction_pressure")
        if expected is None:
            continue
        margin = (expected.value - cut_out) / cut_out
        if margin >= entry.value:
            continue
        sure = expected.value + 2 * (expected.uncertainty or 0.0) < cut_out
        yield Remark(
            "error" if sure and name == "design" else facts.severity(name, "warning"),
            facts.path("controls", "low_pressure_cut_out"),
            f"{facts.title} is expected to {'stop' if margin <= 0 else 'come close to stopping'} on low pressure "
            f"{facts.outlooks[name].name}.",
            (
                explained_figure(facts.plant, expected, "expected suction pressure"),
                facts.plant.figure("low-pressure cut-out", cut_out, Kind.PRESSURE),
                facts.plant.figure("margin, share of the absolute setting", margin, Kind.RATIO),
            ),
            "Set the cut-out below every suction pressure of ordinary running, but above the pressure at which the "
            "suction line draws in air.",
            entry.source,
            entry.mark,
        )
        return


def never_cuts_in(facts: SystemFacts) -> Iterator[Remark]:
    """A cut-in that the low side does not reach when the room calls for cooling again.

    Source: at standstill the low side of a pumped-down plant warms to the room and holds at most saturation there, once
    the solenoid valve lets liquid in; a cut-in above it never closes.
    """
    setting, room = facts.system.controls.low_pressure_cut_in, facts.system.controls.room_temperature
    if setting is None or room is None or facts.refrigerant is None or room >= facts.refrigerant.T_critical:
        return
    cut_in, reached = facts.absolute(setting), facts.refrigerant.dew(room).p
    if cut_in < reached:
        return
    yield Remark(
        "error",
        facts.path("controls", "low_pressure_cut_in"),
        f"{facts.title} cannot start again by itself: its low-pressure cut-in lies above saturation at the room's "
        "temperature.",
        (
            facts.plant.figure("low-pressure cut-in", cut_in, Kind.PRESSURE),
            facts.plant.figure("saturation at the room temperature", reached, Kind.PRESSURE),
            facts.plant.figure("room temperature", room, Kind.TEMPERATURE),
        ),
        "Set the cut-in below saturation at the coldest room temperature.",
    )


def cold_start(facts: SystemFacts) -> Iterator[Remark]:
    """A cut-in above saturation at the coldest day, with the receiver or condenser outdoors.

    Source: after a stop in winter all liquid lies in the cold part outdoors, and its saturation pressure is all that
    drives it to the low side; below the cut-in the machine does not start.
    """
    setting, fluid = facts.system.controls.low_pressure_cut_in, facts.refrigerant
    winter = facts.plant.loaded.plant.plant.climate.winter_dry_bulb
    place = facts.plant.loaded.plant.spaces.get(facts.system.spaces.condensing_unit or "")
    if setting is None or fluid is None or winter is None or place is None or not place.outdoors:
        return
    if facts.system.duty != "cold_storage" or winter >= fluid.T_critical:
        return
    cut_in, driving = facts.absolute(setting), fluid.bubble(winter).p
    if cut_in < driving:
        return
    yield Remark(
        "warning",
        facts.path("controls", "low_pressure_cut_in"),
        f"{facts.title} may not start on the coldest day: its low-pressure cut-in lies above saturation outdoors.",
        (
            facts.plant.figure("low-pressure cut-in", cut_in, Kind.PRESSURE),
            facts.plant.figure("saturation at the coldest outdoor air", driving, Kind.PRESSURE),
            facts.plant.figure("coldest day of the site", winter, Kind.TEMPERATURE),
        ),
        "Set the cut-in lower, or find out what keeps the receiver warm or bridges the cut-in at a start.",
    )


def below_atmosphere(facts: SystemFacts) -> Iterator[Remark]:
    """A suction pressure expected below the barometric pressure of the site.

    Source: definition: a leak then draws in air and moisture instead of showing itself; with a flammable refrigerant
    the mixture inside can burn.
    """
    barometric = facts.plant.loaded.barometric_pressure
    for name in ("coldest", "design"):
        expected = facts.expected(name, "suction_pressure")
        if expected is None or expected.value >= barometric:
            continue
        yield Remark(
            facts.severity(name, "warning"),
            facts.path(),
            f"{facts.title} is expected to draw its suction below atmosphere {facts.outlooks[name].name}.",
            (
                explained_figure(facts.plant, expected, "expected suction pressure"),
                facts.plant.figure("the same, absolute", expected.value, Kind.PRESSURE_DIFFERENCE),
                facts.plant.figure("barometric pressure of the site", barometric, Kind.PRESSURE_DIFFERENCE),
            ),
            "Prove tightness under vacuum as well as under pressure, watch for air in the condenser, and set the "
            "low-pressure cut-out with this in mind.",
        )
        return


def cut_out_below_the_air(facts: SystemFacts) -> Iterator[Remark]:
    """A low-pressure cut-out below the barometric pressure of the site, the refrigerant flammable.

    Source: definition: before it acts the low side draws in air through any leak, and the compressor squeezes a mixture
    that can burn. An error, but for a plant that is expected to run below the air by design.
    """
    from commission.safety import substance_of

    setting, fluid = facts.system.controls.low_pressure_cut_out, facts.refrigerant
    barometric = facts.plant.loaded.barometric_pressure
    if setting is None or fluid is None or not substance_of(fluid).flammable or facts.absolute(setting) >= barometric:
        return
    expected = facts.expected("design", "suction_pressure")
    designed = expected is not None and expected.value < barometric
    yield Remark(
        "warning" if designed else "error",
        facts.path("controls", "low_pressure_cut_out"),
        f"The low-pressure cut-out of {facts.title} acts only after air is drawn in, and {fluid.name} burns.",
        (
            facts.plant.figure("low-pressure cut-out", facts.absolute(setting), Kind.PRESSURE),
            facts.plant.figure("barometric pressure of the site", barometric, Kind.PRESSURE_DIFFERENCE),
        ),
        "Set it above the pressure of the air; where the plant runs below it by design, let the supplier say how air "
        "is kept out and noticed.",
    )


def suction_limit(facts: SystemFacts) -> Iterator[Remark]:
    """A valve (MOP) or crankcase pressure regulator set below the suction pressure of the design condition.

    Source: such a limit is for pull-down; where it acts at the design condition the machine does not give its capacity.
    """
    expansion, controls = facts.system.expansion, facts.system.controls
    limits = (
        ("expansion.maximum_operating_pressure", expansion.maximum_operating_pressure if expansion else None),
        ("controls.crankcase_pressure_regulator", controls.crankcase_pressure_regulator),
    )
    expected = facts.expected("design", "suction_pressure")
    for key, setting in limits:
        if setting is None or expected is None or facts.absolute(setting) > expected.value:
            continue
        yield Remark(
            "warning",
            facts.path(key),
            f"A limit of the suction pressure of {facts.title} acts at the design condition already.",
            (
                facts.plant.figure("limit", facts.absolute(setting), Kind.PRESSURE),
                explained_figure(facts.plant, expected, "expected suction pressure"),
            ),
            "Set it above the suction pressure of the design condition, and below what the motor bears in pull-down.",
        )
