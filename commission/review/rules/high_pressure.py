"""The order of everything that limits the high side: expected day, limiter, relief, allowable pressure."""

from __future__ import annotations

from collections.abc import Iterator

from commission.quantities import Kind
from commission.review.facts import SystemFacts, explained_figure
from commission.review.finding import Remark
from commission.safety import ReliefSetting, relief_settings


def limiter_over_allowable(facts: SystemFacts) -> Iterator[Remark]:
    """The high-pressure limiter set above the allowable pressure, or above the share of it that the standard allows.

    Source: the limiter must act before the nameplate pressure is reached (EN 378-2, table 3).
    """
    setting, allowable = facts.system.controls.high_pressure_limit, facts.system.nameplate.allowable_pressure_high
    if setting is None or allowable is None:
        return
    limit, stamped = facts.absolute(setting), facts.absolute(allowable)
    highest = facts.safety_figure("high_pressure_limit_highest")
    over = limit > stamped
    if not over and (highest is None or limit <= highest.value + 1.0):
        return
    figures = [
        facts.plant.figure("high-pressure limiter", limit, Kind.PRESSURE),
        facts.plant.figure("allowable pressure, high side", stamped, Kind.PRESSURE),
    ]
    if highest is not None:
        figures.append(facts.plant.figure(highest.title, highest.value, Kind.PRESSURE))
    yield Remark(
        "error" if over else "warning",
        facts.path("controls", "high_pressure_limit"),
        f"The high-pressure limiter of {facts.title} is set above "
        + ("the allowable pressure of the high side." if over else "the share of the allowable pressure it may have."),
        tuple(figures),
        "Do not run the plant before the limiter is set right and proved; read the nameplate again.",
        highest.source if highest else None,
        highest.sureness if highest else None,
    )


def relief_out_of_order(facts: SystemFacts) -> Iterator[Remark]:
    """A relief valve that opens above the allowable pressure, or before the limiter stops the machine.

    Source: EN 378-2: a relief device opens at most at the allowable pressure of what it protects, after the limiter.
    """
    for valve in relief_settings(facts.plant.loaded, facts.id):
        yield from _relief_out_of_order(facts, valve)


def _relief_out_of_order(facts: SystemFacts, valve: ReliefSetting) -> Iterator[Remark]:
    allowable = facts.system.nameplate.allowable_pressure_high
    if allowable is not None and valve.pressure > facts.absolute(allowable) + 1.0:
        yield Remark(
            "error",
            valve.path,
            f"The {valve.title} of {facts.title} opens above the allowable pressure of the high side.",
            (
                facts.plant.figure("relief valve", valve.pressure, Kind.PRESSURE),
                facts.plant.figure("allowable pressure, high side", facts.absolute(allowable), Kind.PRESSURE),
            ),
            "Do not charge the plant before the valve is right; read both nameplates.",
        )
    setting = facts.system.controls.high_pressure_limit
    if setting is not None and not valve.low_side and valve.pressure <= facts.absolute(setting):
        yield Remark(
            "error",
            valve.path,
            f"The {valve.title} of {facts.title} opens before the high-pressure limiter stops the compressor.",
            (
                facts.plant.figure("high-pressure limiter", facts.absolute(setting), Kind.PRESSURE),
                facts.plant.figure("relief valve", valve.pressure, Kind.PRESSURE),
            ),
            "Set the limiter below the relief valve: refrigerant must not be blown off by an ordinary high pressure.",
        )


def limiter_below_the_day(facts: SystemFacts) -> Iterator[Remark]:
    """A limiter that the expected discharge pressure of the hottest day, or of the design condition, reaches or nears.

    Source: a machine stopped by its limiter at its own design condition does not do its duty. The margin is the
    threshold `high_pressure_margin`. An error only where the expectation passes the setting by twice its uncertainty.
    """
    setting = facts.system.controls.high_pressure_limit
    if setting is None:
        return
    limit = facts.absolute(setting)
    entry = facts.plant.threshold("high_pressure_margin")
    for name in ("hottest", "design"):
        expected = facts.expected(name, "discharge_pressure")
        if expected is None:
            continue
        margin = (limit - expected.value) / limit
        if margin >= entry.value:
            continue
        trips = margin <= 0
        sure = expected.value - 2 * (expected.uncertainty or 0.0) > limit
        yield Remark(
            "error" if sure else "warning",
            facts.path("controls", "high_pressure_limit"),
            f"{facts.title} is expected to {'trip' if trips else 'come close to tripping'} on high pressure "
            f"{facts.outlooks[name].name}.",
            (
                explained_figure(facts.plant, expected, "expected discharge pressure"),
                facts.plant.figure("high-pressure limiter", limit, Kind.PRESSURE),
                facts.plant.figure("margin, share of the absolute setting", margin, Kind.RATIO),
            ),
            "Check the condenser and its air, then the setting: it may be raised only as far as the nameplate allows.",
            entry.source,
            entry.mark,
        )
        return  # one finding says it; the hottest day is the harder of the two


def receiver_without_relief(facts: SystemFacts) -> Iterator[Remark]:
    """A liquid receiver for which no relief valve is written.

    Source: RSIF IF-08 3.2.2 (after EN 378-2): without a relief device two limiters in series are needed, except for
    non-flammable, non-toxic refrigerants in small systems.
    """
    receiver = facts.system.receiver
    if receiver is None or receiver.relief_valve is not None or facts.system.sealed:
        return
    yield Remark(
        "note",
        facts.path("receiver"),
        f"No relief valve is written for the receiver of {facts.title}.",
        (),
        "Find out whether there is one and write its set pressure. Without one the documents ask for two "
        "high-pressure limiters in series, small systems with harmless refrigerants apart; confirm with the edition in "
        "force.",
    )
