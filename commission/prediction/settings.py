"""Settings that are expected to be held at another value than the stated one, and why."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.description import Assumption
from commission.prediction.facts import Facts
from commission.prediction.fitting import Fit
from commission.quantities import Display, Kind

if TYPE_CHECKING:
    from commission.prediction.model import SystemModel


@dataclass(frozen=True, slots=True)
class HeldOff:
    """A stated setting and the value at which the calculation holds it (SI, pressures absolute).

    `quantity` is the expected reading that shows it; `fitted` says that the rated points moved it, and not the
    description itself.
    """

    assumption: str
    quantity: str
    what: str
    kind: Kind
    stated: float
    held: float
    fitted: bool

    def words(self, display: Display) -> str | None:
        """A sentence for people, or None where the two read the same."""
        stated, held = (display.text(v, self.kind) for v in (self.stated, self.held))
        if stated == held:
            return None
        because = "the rated points are met best so" if self.fitted else "the description says by how much it is off"
        return f"{self.what} is set to {stated} and calculated at {held}: {because}; the setting stays as it is"


def value_used(model: SystemModel, assumption: Assumption) -> float:
    """The value (SI) with which the fitted machine calculates; the rated points may move it off the listed one."""
    return model.fit.values.get(assumption.key, assumption.value)


def held_off(facts: Facts, fit: Fit) -> tuple[HeldOff, ...]:
    """The settings of a system that its fitted machine holds elsewhere than stated."""
    found = []
    for key, quantity, what, kind, stated in _stated(facts):
        if stated is None or key not in fit.used:
            continue
        off = fit.values[key]
        if off != 0.0:
            found.append(HeldOff(key, quantity, what, kind, stated, stated + off, off != fit.used[key].value))
    return tuple(found)


def _stated(facts: Facts) -> tuple[tuple[str, str, str, Kind, float | None], ...]:
    """Assumption, reading, words, kind and stated value of each setting that an assumption may move."""
    system = facts.system
    superheat = system.expansion.superheat if system.expansion else None
    hold = system.controls.head_pressure.hold if system.controls.head_pressure else None
    cooler = system.controls.gas_cooler_pressure
    point = cooler.set_point if cooler is not None else None
    pressure = facts.loaded.absolute(point) if point is not None else None
    return (
        ("superheat_departure", "superheat", "superheat", Kind.TEMPERATURE_DIFFERENCE, superheat),
        ("head_pressure_departure", "condensing_temperature", "head-pressure control", Kind.TEMPERATURE, hold),
        ("high_pressure_departure", "discharge_pressure", "high pressure", Kind.PRESSURE, pressure),
    )
