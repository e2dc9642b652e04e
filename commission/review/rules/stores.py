"""Stores of hot water: what stays lukewarm, what is never heated through, and a loop that does not balance."""

from __future__ import annotations

from collections.abc import Iterator

from commission.quantities import Kind
from commission.review.facts import SystemFacts
from commission.review.finding import Figure, Remark

PARTLY = {"store top": "top", "store middle": "middle"}


def lukewarm_below_element(facts: SystemFacts) -> Iterator[Remark]:
    """An element above the bottom that replaces the machine: the water below it is not heated.

    Source: warm water stays on top; an element heats what lies above it. The machine must heat the rest, and an element
    that replaces it leaves a lukewarm volume in which legionella grow.
    """
    store, back_up = facts.system.store, facts.system.back_up
    if store is None or back_up is None or back_up.by != "electric element" or back_up.where not in PARTLY:
        return
    if back_up.mode != "replaces" and store.hygiene_heating is None:
        return
    yield Remark(
        "warning",
        facts.path("back_up", "where"),
        f"The store of {facts.title} stays lukewarm below its element, which sits at the {PARTLY[back_up.where]}.",
        (facts.plant.figure("volume of the store", store.volume, Kind.VOLUME),),
        "Make sure that the machine, a second element at the bottom or a pump that stirs the store heats all of it.",
    )


def not_heated_through(facts: SystemFacts) -> Iterator[Remark]:
    """A store of drinking hot water below the hygiene temperature and with no heating through that is written.

    Source: the whole store to 60 °C, at least daily or permanently (HSG274, DVGW W 551 in own words; threshold
    `hygiene_temperature`).
    """
    store = facts.system.store
    if store is None or facts.system.duty != "water_heating":
        return
    entry = facts.plant.threshold("hygiene_temperature")
    if store.set_point is not None and store.set_point >= entry.value:
        return
    hygiene = store.hygiene_heating
    if hygiene is not None and hygiene.temperature >= entry.value:
        return
    figures = [facts.plant.threshold_figure("hygiene_temperature", "whole store to")]
    if store.set_point is not None:
        figures.append(facts.plant.figure("set point of the store", store.set_point, Kind.TEMPERATURE))
    else:
        figures.append(Figure("set point of the store", "not written"))
    if hygiene is not None:
        figures.append(facts.plant.figure("hygiene heating to", hygiene.temperature, Kind.TEMPERATURE))
    yield Remark(
        "warning",
        facts.path("store"),
        f"Nothing written heats the whole store of {facts.title} hot enough against legionella.",
        tuple(figures),
        "Find out how the store is kept safe, write it under store.hygiene_heating, and guard the taps against "
        "scalding.",
        entry.source,
        entry.mark,
    )


def circulation_does_not_balance(facts: SystemFacts) -> Iterator[Remark]:
    """A circulation loop whose flow, return and heat loss do not belong together.

    Source: first law on the loop: heat loss = flow x density x heat capacity x (set point - return). The water that
    leaves may be a few kelvin off the set point, hence the wide threshold `circulation_balance`.
    """
    from commission.properties import liquid

    store = facts.system.store
    loop = None if store is None else store.circulation
    if store is None or loop is None or store.set_point is None:
        return
    if loop.flow is None or loop.return_temperature is None or loop.heat_loss is None:
        return
    change, water = store.set_point - loop.return_temperature, liquid("water")
    mean = 0.5 * (store.set_point + loop.return_temperature)
    carried = loop.flow * water.density(store.set_point) * water.specific_heat(mean) * change
    if abs(carried - loop.heat_loss) <= facts.plant.limit("circulation_balance") * loop.heat_loss:
        return
    plant = facts.plant
    yield Remark(
        "warning",
        facts.path("store", "circulation"),
        f"Flow, return and heat loss of the circulation of {facts.title} do not belong together.",
        (
            plant.figure("set point of the store", store.set_point, Kind.TEMPERATURE),
            plant.figure("return", loop.return_temperature, Kind.TEMPERATURE),
            plant.figure("flow of the loop", loop.flow, Kind.LIQUID_FLOW),
            plant.figure("heat that this flow gives up between the two", carried, Kind.HEAT_FLOW),
            plant.figure("heat loss of the loop as written", loop.heat_loss, Kind.HEAT_FLOW),
        ),
        "Find out which of the three is measured and which is a guess; heat-up times and hygiene rest on them.",
    )
