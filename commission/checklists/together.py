"""What an answer must be where another answer decides it: a pressure at rest by the temperature, a hold by its start.

The list itself can only say in words what such a reading must be; a record that holds both answers is judged here.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING

from commission.checklists.rendering import Target, show
from commission.errors import NotCalculatedError
from commission.quantities import Kind
from commission.safety import fluid_of

if TYPE_CHECKING:
    from commission.acceptance import Measured
    from commission.checklists.stages import Item
    from commission.description import LoadedPlant

GAUGE, PROBE = "discharge_pressure", "liquid_temperature"
"""The quantities whose instruments read a circuit at rest: the gauge that bears every pressure, a probe on a pipe."""


def target_with(item: Item, answers: Mapping[str, float], loaded: LoadedPlant, system_id: str) -> Target | None:
    """What the answer of an item must be, given the answers of the same record in SI by item id.

    None where no other answer decides it, that answer is not given, or nothing can be said of it (carbon dioxide above
    31 °C has no liquid).
    """
    own = answers.get(item.id)
    if own is None:
        return None
    if item.rest_at is not None and item.rest_at in answers:
        try:
            return _at_rest(own, answers[item.rest_at], loaded, system_id)
        except NotCalculatedError:
            return None
    if item.as_answered is not None and item.as_answered in answers:
        return _as_answered(answers[item.as_answered], loaded, system_id)
    return None


def _at_rest(pressure: float, temperature: float, loaded: LoadedPlant, system_id: str) -> Target:
    from commission.acceptance import standstill

    found = standstill(
        fluid_of(loaded, system_id),
        _measured(GAUGE, pressure, loaded, system_id),
        [_measured(PROBE, temperature, loaded, system_id)],
        liquid_present=True,
        pumped_down=False,
    )
    margin = found.budget.expanded()
    display = loaded.display(system_id)
    low, high = found.low - margin, found.high + margin
    span = f"{show(low, Kind.PRESSURE, display)} to {show(high, Kind.PRESSURE, display)}"
    text = f"{span} at {display.text(temperature, Kind.TEMPERATURE)}; {found.text}"
    return Target(text, None, low, high, Kind.PRESSURE)


def _as_answered(start: float, loaded: LoadedPlant, system_id: str) -> Target:
    margin = _measured(GAUGE, start, loaded, system_id).budget.expanded()
    display = loaded.display(system_id)
    low, high = start - margin, start + margin
    shown = f"{show(low, Kind.PRESSURE, display)} to {show(high, Kind.PRESSURE, display)}"
    return Target(f"{shown}, as at the start", start, low, high, Kind.PRESSURE)


def _measured(key: str, value: float, loaded: LoadedPlant, system_id: str) -> Measured:
    """A reading with the budget of the instrument that the system names for it, or of what is usual."""
    from commission.acceptance import Reading, measure

    named = loaded.system(system_id).measured_with.get(key)
    return measure(Reading(key, value, named), loaded.plant.instruments, loaded.barometric_pressure)
