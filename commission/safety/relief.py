"""Where a relief device is needed: by displacement, by vessel, and where standstill can pass the allowable pressure."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.quantities import Explained, Input, Kind
from commission.safety.facts import Fact, fact
from commission.safety.figure import Figures
from commission.safety.stamped import place, relief_valves, stamped_pressures

if TYPE_CHECKING:
    from commission.description import LoadedPlant


@dataclass(frozen=True, slots=True)
class ReliefDuty:
    """One reason why relief is needed; `stated` says whether the description shows a relief device (None: cannot)."""

    title: str
    stated: bool | None
    path: str
    figures: tuple[Explained, ...]
    source: str
    mark: str


def relief_duties(loaded: LoadedPlant, system_id: str, figures: Figures) -> tuple[ReliefDuty, ...]:
    """Every reason for a relief device that the description shows (RSIF IF-08 after EN 378-2; standstill)."""
    system = loaded.system(system_id)
    base = f"systems.{system_id}"
    relief = bool(relief_valves(system))
    in_receiver = system.receiver is not None and system.receiver.relief_valve is not None
    found: list[ReliefDuty] = []
    rule = fact("relief_compressor_displacement")
    displacement = system.compressor.displacement
    if displacement is not None and displacement > rule.value:
        shown = _shown(loaded, f"{base}.compressor.displacement", "displacement", displacement, Kind.VOLUME_FLOW, rule)
        found.append(
            ReliefDuty(
                "the compressor needs a discharge relief and a category IV limiter",
                None,
                f"{base}.compressor.displacement",
                shown,
                rule.source,
                rule.mark,
            )
        )
    rule = fact("relief_two_valves_volume")
    volume = system.receiver.volume if system.receiver is not None else None
    if volume is not None and volume >= rule.value:
        shown = _shown(loaded, f"{base}.receiver.volume", "receiver volume", volume, Kind.VOLUME, rule)
        found.append(
            ReliefDuty(
                "the receiver needs two relief valves on a change-over valve",
                in_receiver,
                f"{base}.receiver.relief_valve",
                shown,
                rule.source,
                rule.mark,
            )
        )
    found += _standstill(loaded, system_id, figures, relief)
    return tuple(found)


def _standstill(loaded: LoadedPlant, system_id: str, figures: Figures, relief: bool) -> list[ReliefDuty]:
    """Liquid that cannot exist at the hottest ambient can pass any stamp; a saturation above the stamp does too."""
    still = figures.get("standstill_pressure")
    supercritical = "no liquid" in figures.not_calculated.get("standstill_pressure", "")
    path = f"systems.{system_id}.receiver.relief_valve"
    if supercritical:
        title = "standing still on a hot day the refrigerant can pass any allowable pressure: relief on every part"
        return [ReliefDuty(title, relief, path, (), "EN 378-2:2016; EN 13136", "M")]
    lowest = min(stamped_pressures(loaded, system_id), key=lambda s: s.absolute, default=None)
    if still is not None and lowest is not None and still.value > lowest.absolute:
        title = "standing still on a hot day the refrigerant passes the allowable pressure"
        return [ReliefDuty(title, relief, path, (still.explained,), still.source, still.mark)]
    return []


def _shown(loaded: LoadedPlant, path: str, name: str, value: float, kind: Kind, rule: Fact) -> tuple[Explained, ...]:
    inputs = (Input(name, value, kind, place(loaded, path)), Input(rule.says, rule.value, kind, rule.source))
    return (Explained(name.replace(" ", "_"), value, None, "as_stated", inputs),)
