"""From the register of refrigerants to what the safety rules need; every figure keeps its source and mark."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from commission.errors import NotCalculatedError
from commission.safety.facts import load
from commission.safety.substance import Known, Substance

if TYPE_CHECKING:
    from commission.description import LoadedPlant
    from commission.properties import Refrigerant


def fluid_of(loaded: LoadedPlant, system_id: str) -> Refrigerant:
    """The refrigerant of a system, with the figures that the plant states in place of the register's.

    Raises:
        InputError: no such system or refrigerant.
    """
    from commission.properties import refrigerant

    fluid = refrigerant(loaded.system(system_id).refrigerant)
    entry = loaded.register[fluid.name]
    return fluid if entry == fluid.register else fluid.with_register(entry)


def substance_of(fluid: Refrigerant) -> Substance:
    """The safety view of a refrigerant.

    Raises:
        NotCalculatedError: the register does not state its safety class.
    """
    entry = fluid.register
    if entry.safety_class is None or not isinstance(entry.safety_class.value, str):
        raise NotCalculatedError(f"the register states no safety class for {fluid.name}")
    liquid_only = entry.charge_as_liquid_only
    return Substance(
        name=fluid.name,
        safety_class=entry.safety_class.value,
        molar_mass=fluid.molar_mass,
        critical_temperature=fluid.T_critical,
        components=tuple(entry.composition),
        fractions=entry.composition,
        lfl=_known(entry.lfl),
        practical_limit=_known(entry.practical_limit),
        atel_odl=_known(entry.atel_odl),
        rcl=_known(entry.rcl),
        gwp=_known(entry.gwp.get("eu573")),
        listed=bool(set(entry.composition) & listed_gases()),
        liquid_only=bool(liquid_only is not None and liquid_only.value),
    )


def listed_gases() -> frozenset[str]:
    """Gases of annexes I and II of EU 2024/573."""
    law = load("leak_checks.yaml")["EU 2024/573"]
    return frozenset((*law["annex_i"]["components"], *law["annex_ii"]["components"]))


def _known(figure: Any) -> Known | None:
    """A figure of the register that is a number."""
    if figure is None or figure.number is None:
        return None
    return Known(figure.number, figure.source, figure.mark)
