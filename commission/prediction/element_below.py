"""Heating a stratified store while an element at its bottom warms the water that the machine draws. SI units.

Two zones: hot water at the goal on top, and below it one mixed cold zone, since water that is heated from below turns
over. The machine takes from the cold zone and gives to the hot one; the element heats the cold zone, so that the
machine draws ever warmer water, gives less and needs more. Steps in time, each with the heat balance of the store.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from commission.errors import NotCalculatedError

STEPS = 200
"""Steps in the time that the machine would take alone: with twice as many the result moves by less than 0.5 %."""


@dataclass(frozen=True, slots=True)
class Cold:
    """The cold zone at the start: heat capacity (J/K), temperature (K), and the temperature (K) it is to reach."""

    capacity: float
    temperature: float
    goal: float


def heated_from_below(
    cold: Cold, machine: Callable[[float], tuple[float, float]], lost: float, power: float, delay: float, longest: float
) -> tuple[float, float]:
    """Time (s) and electric energy (J) until all is hot.

    `machine` gives heat and electric power in W by the temperature (K) of the water it draws; `lost` (W) leaves the
    store; the element adds `power` (W) after `delay` (s). `longest` (s) is what the machine takes alone.

    Raises:
        NotCalculatedError: the machine gives no more heat than is lost.
    """
    temperature, time, energy = cold.temperature, 0.0, 0.0
    left, step = cold.capacity * (cold.goal - temperature), longest / STEPS
    while True:
        given, drawn = machine(temperature)
        if given <= lost:
            raise NotCalculatedError("the machine gives no more heat than the store and its loop lose")
        by_element = power if time >= delay else 0.0
        gain = given - lost + by_element
        lasts = min(step, left / gain)
        time += lasts
        energy += lasts * (drawn + by_element)
        if lasts < step:
            return time, energy
        temperature += by_element * lasts * (cold.goal - temperature) / left  # its capacity is what is left over this
        left -= gain * lasts
