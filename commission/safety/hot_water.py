"""Stored hot water: hygiene, scalding, and the volume that an element above the bottom leaves warm."""

from __future__ import annotations

from typing import TYPE_CHECKING

from commission.quantities import Explained, Input, Kind
from commission.safety.facts import fact

if TYPE_CHECKING:
    from commission.description import LoadedPlant

SHARE_BELOW = {"store top": 0.8, "store middle": 0.5, "store bottom": 0.0}
"""Share of the store below an element by where it sits (common practice: the top fifth, the middle, the bottom)."""


def warm_volume_below_element(loaded: LoadedPlant, system_id: str) -> Explained | None:
    """Volume in m³ that the back-up element cannot heat, in which legionella can grow; None where there is none.

    An element heats only what lies above it. Where the heat pump itself reaches the hygiene temperature in the whole
    store (its set point does), nothing stays below.
    """
    system = loaded.system(system_id)
    store, back_up = system.store, system.back_up
    if store is None or back_up is None or back_up.where not in SHARE_BELOW:
        return None
    hygiene = fact("hot_water_hygiene").value
    if store.set_point is not None and store.set_point >= hygiene:
        return None
    share = SHARE_BELOW[back_up.where]
    if share == 0:
        return None
    inputs = (
        Input("volume of the store", store.volume, Kind.VOLUME, str(loaded.where(f"systems.{system_id}.store.volume"))),
        Input("share below the element", share, Kind.RATIO, "common practice, by where the element sits"),
    )
    return Explained("warm_volume_below_element", store.volume * share, None, "warm_volume_below_element", inputs)
