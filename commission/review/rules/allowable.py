"""What the circuit holds when it stands still on a hot day, against the nameplate."""

from __future__ import annotations

from collections.abc import Iterator

from commission.quantities import Kind
from commission.review.facts import SystemFacts
from commission.review.finding import Remark
from commission.safety import hottest_ambient

SIDES = ("low", "high")


def standstill_over_allowable(facts: SystemFacts) -> Iterator[Remark]:
    """Saturation at the hottest ambient above a stamped allowable pressure.

    Source: EN 378-2, 6.2.2: the allowable pressure covers standstill. The figure holds while liquid is present and the
    whole circuit has that temperature; a small charge in a large low side may stay below it.
    """
    figure = facts.safety_figure("standstill_pressure")
    if figure is None:
        return
    for side in SIDES:
        stamped = getattr(facts.system.nameplate, f"allowable_pressure_{side}")
        if stamped is None or figure.value <= facts.absolute(stamped):
            continue
        yield Remark(
            "error",
            facts.path("nameplate", f"allowable_pressure_{side}"),
            f"{facts.title} at standstill on the hottest day holds more than its {side} side is allowed to.",
            (
                facts.plant.figure(figure.title, figure.value, Kind.PRESSURE),
                facts.plant.figure(f"allowable pressure, {side} side", facts.absolute(stamped), Kind.PRESSURE),
            ),
            "Read the nameplate again. If it is right, this refrigerant must not be charged into these parts unless a "
            "limited charge, an expansion vessel or a standstill unit keeps the pressure down.",
            figure.source,
            figure.sureness,
        )


def standstill_not_shown(facts: SystemFacts) -> Iterator[Remark]:
    """A circuit without liquid on the hottest day whose pressure at rest cannot be worked out.

    Source: EN 378-2, 6.2.2: the allowable pressure covers standstill. Above its critical temperature a refrigerant has
    no saturation: what it holds follows from charge and volume.
    """
    least = facts.safety_figure("standstill_least_volume")
    warmest = hottest_ambient(facts.plant.loaded, facts.id)
    if facts.safety_figure("standstill_pressure") is not None or facts.refrigerant is None or warmest is None:
        return
    if warmest[0] < facts.refrigerant.T_critical:
        return
    yield Remark(
        "warning",
        facts.path(),
        f"Nothing shows what {facts.title} holds at standstill on the hottest day: it has no liquid then.",
        (
            facts.plant.figure("hottest ambient", warmest[0], Kind.TEMPERATURE),
            *(() if least is None else (facts.plant.figure(least.title, least.value, Kind.VOLUME),)),
        ),
        "Write the charge, evaporator.internal_volume and condenser.internal_volume, with receiver and accumulator, as "
        "the supplier states them; a circuit smaller than the least volume passes its stamp when the power is cut.",
    )


def allowable_below_table(facts: SystemFacts) -> Iterator[Remark]:
    """A stamped allowable pressure below saturation at the design temperature of its ambient class.

    Source: EN 378-2, table 2. A calculated pressure questions a nameplate and never replaces it.
    """
    for side in SIDES:
        figure = facts.safety_figure(f"design_pressure_{side}_side")
        stamped = getattr(facts.system.nameplate, f"allowable_pressure_{side}")
        if figure is None or stamped is None or figure.value <= facts.absolute(stamped):
            continue
        yield Remark(
            "warning",
            facts.path("nameplate", f"allowable_pressure_{side}"),
            f"The allowable pressure of the {side} side of {facts.title} is below what the ambient class asks for.",
            (
                facts.plant.figure(figure.title, figure.value, Kind.PRESSURE),
                facts.plant.figure(f"allowable pressure, {side} side", facts.absolute(stamped), Kind.PRESSURE),
            ),
            "Read the nameplate again and ask the maker by which ambient it was chosen.",
            figure.source,
            figure.sureness,
        )
