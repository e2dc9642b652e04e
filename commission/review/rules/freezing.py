"""What can freeze: judged by the coldest refrigerant in the evaporator, never by the dew point alone."""

from __future__ import annotations

from collections.abc import Iterator

from commission.quantities import Kind
from commission.review.facts import SystemFacts
from commission.review.finding import Remark

ICE = 273.15


def coldest_refrigerant(facts: SystemFacts, outlook: str) -> float | None:
    """Coldest temperature of the circuit in K, which is where the refrigerant enters the evaporator; None if unknown.

    With a glide the dew point is the warmest place of an evaporator, and the inlet lies several kelvin below it.
    """
    found = facts.outlooks.get(outlook)
    if found is None or found.prediction is None:
        return None
    return min((state.T for state in found.prediction.states), default=None)


def liquid_can_freeze(facts: SystemFacts) -> Iterator[Remark]:
    """Refrigerant enters the evaporator colder than the liquid freezes, or close to it.

    Source: freezing point of water or of the mixture; margin by threshold `freezing_margin`.
    """
    from commission.properties import liquid

    medium = facts.system.heat_source
    if medium.medium == "air":
        return
    freezing = liquid(medium.medium, medium.mass_fraction or 0.0).freezing_temperature
    entry = facts.plant.threshold("freezing_margin")
    for name in ("coldest", "design"):
        coldest = coldest_refrigerant(facts, name)
        if coldest is None or coldest >= freezing + entry.value:
            continue
        frozen = coldest < freezing
        yield Remark(
            facts.severity(name, "warning") if frozen else "note",
            facts.path("heat_source"),
            f"The {medium.medium} of {facts.title} {'can freeze' if frozen else 'comes close to freezing'} in the "
            f"evaporator {facts.outlooks[name].name}.",
            (
                facts.plant.figure("refrigerant where it enters the evaporator", coldest, Kind.TEMPERATURE),
                facts.plant.figure(f"freezing point of the {medium.medium}", freezing, Kind.TEMPERATURE),
            ),
            "Prove flow before every start, set the frost protection by this figure, and add antifreeze or raise the "
            "temperature of the source if it does not do.",
            entry.source,
            entry.mark,
        )
        return


def coil_can_frost(facts: SystemFacts) -> Iterator[Remark]:
    """An air coil below the freezing point for which no defrost is written.

    Source: moisture that condenses below 0 °C freezes on the coil.
    """
    if facts.system.heat_source.medium != "air" or facts.system.evaporator.defrost is not None:
        return
    for name in ("design", "coldest"):
        coldest = coldest_refrigerant(facts, name)
        if coldest is None or coldest >= ICE:
            continue
        yield Remark(
            "note",
            facts.path("evaporator"),
            f"The coil of {facts.title} can frost {facts.outlooks[name].name} and no defrost is written.",
            (facts.plant.figure("refrigerant where it enters the coil", coldest, Kind.TEMPERATURE),),
            "Find out how ice is removed and write it under evaporator.defrost.",
        )
        return


def off_cycle_cannot_melt(facts: SystemFacts) -> Iterator[Remark]:
    """Off-cycle defrost in a room too cold to melt ice.

    Source: ice melts at 0 °C; the room air must be warmer (threshold `off_cycle_defrost_room`).
    """
    defrost, room = facts.system.evaporator.defrost, facts.system.controls.room_temperature
    if defrost is None or defrost.method != "off cycle" or room is None:
        return
    entry = facts.plant.threshold("off_cycle_defrost_room")
    differential = facts.system.controls.room_differential or 0.0
    if room >= entry.value:
        return
    yield Remark(
        "error" if room + differential < ICE else "warning",
        facts.path("evaporator", "defrost", "method"),
        f"The room of {facts.title} is too cold to melt ice in the off cycle.",
        (
            facts.plant.figure("room set point", room, Kind.TEMPERATURE),
            facts.plant.figure("warmest room air in ordinary cycling", room + differential, Kind.TEMPERATURE),
            facts.plant.threshold_figure("off_cycle_defrost_room", "off-cycle defrost from about"),
        ),
        "Fit a defrost with heat (electric, hot gas), or raise the set point.",
        entry.source,
        entry.mark,
    )


def protection_setting(facts: SystemFacts) -> Iterator[Remark]:
    """A frost protection set at or below the freezing point, or above the liquid that is expected to leave.

    Source: freezing point of the liquid: protection that acts after freezing protects nothing; set above the outlet of
    the design condition it stops the machine at its own duty.
    """
    from commission.properties import liquid

    medium, setting = facts.system.heat_source, facts.system.controls.freeze_protection
    if medium.medium == "air" or setting is None:
        return
    freezing = liquid(medium.medium, medium.mass_fraction or 0.0).freezing_temperature
    outlet = facts.expected("design", "heat_source_outlet_temperature")
    late, early = setting <= freezing, outlet is not None and setting >= outlet.value
    if not late and not early:
        return
    figures = [
        facts.plant.figure("frost protection", setting, Kind.TEMPERATURE),
        facts.plant.figure(f"freezing point of the {medium.medium}", freezing, Kind.TEMPERATURE),
    ]
    if outlet is not None:
        figures.append(facts.plant.quantity("heat_source_outlet_temperature", outlet.value, "expected to leave at"))
    yield Remark(
        "error" if late else "warning",
        facts.path("controls", "freeze_protection"),
        f"The frost protection of {facts.title} acts "
        + (f"only when the {medium.medium} is frozen." if late else "at the design condition already."),
        tuple(figures),
        "Set it between the freezing point and the coldest liquid of ordinary running, and prove it before the start.",
    )
