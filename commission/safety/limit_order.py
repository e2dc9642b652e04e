"""Order of the pressures that protect a circuit: expected, limit, relief, allowable; and what is out of order."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

from commission.quantities import Explained, Input, Kind
from commission.safety.facts import fact
from commission.safety.figure import Figures
from commission.safety.stamped import stamped_pressures

if TYPE_CHECKING:
    from commission.description import LoadedPlant


@dataclass(frozen=True, slots=True)
class PressureStep:
    """One pressure of the ladder: Pa absolute, and where it comes from."""

    title: str
    pressure: float
    origin: str


@dataclass(frozen=True, slots=True)
class OutOfOrder:
    """Two pressures that stand wrong. `figures` are in Pa absolute, `path` is the key to look at in the description."""

    title: str
    severity: Literal["error", "warning"]
    path: str
    figures: tuple[Explained, ...]
    source: str
    what_to_do: str


@dataclass(frozen=True, slots=True)
class LimitOrder:
    """The ladder from low to high, and what is out of order."""

    steps: tuple[PressureStep, ...]
    problems: tuple[OutOfOrder, ...]


def limit_order(loaded: LoadedPlant, system_id: str, figures: Figures) -> LimitOrder:
    """The ladder of one system and its faults (EN 378-2:2016 table 3; margin to the hottest day: common practice)."""
    system = loaded.system(system_id)
    base = f"systems.{system_id}"
    steps: list[PressureStep] = []
    for key in ("standstill_pressure", "hottest_discharge_pressure"):
        figure = figures.get(key)
        if figure is not None:
            steps.append(PressureStep(figure.title, figure.value, "calculated"))
    named = [("high-pressure limit", f"{base}.controls.high_pressure_limit", system.controls.high_pressure_limit)]
    if system.receiver is not None:
        named.append(("relief valve", f"{base}.receiver.relief_valve", system.receiver.relief_valve))
    for title, path, pressure in named:
        if pressure is not None:
            steps.append(PressureStep(title, loaded.absolute(pressure), str(loaded.where(path))))
    for stamped in stamped_pressures(loaded, system_id):
        steps.append(PressureStep(f"allowable pressure, {stamped.side} side", stamped.absolute, stamped.origin))
    problems = (*_limit_problems(loaded, system_id, figures), *_standstill_problems(loaded, system_id, figures))
    return LimitOrder(tuple(sorted(steps, key=lambda step: step.pressure)), problems)


def _stated(title: str, value: float, origin: str) -> Explained:
    return Explained("allowable_pressure", value, None, "as_stated", (Input(title, value, Kind.PRESSURE, origin),))


def _limit_problems(loaded: LoadedPlant, system_id: str, figures: Figures) -> tuple[OutOfOrder, ...]:
    controls, receiver = loaded.system(system_id).controls, loaded.system(system_id).receiver
    found: list[OutOfOrder] = []
    highest = figures.get("high_pressure_limit_highest")
    path = f"systems.{system_id}.controls.high_pressure_limit"
    if controls.high_pressure_limit is not None:
        setting = loaded.absolute(controls.high_pressure_limit)
        shown = _stated("high-pressure limit", setting, str(loaded.where(path)))
        if highest is not None and setting > highest.value * (1 + 1e-9):
            found.append(
                OutOfOrder(
                    "the high-pressure limit is set above what the nameplate allows",
                    "error",
                    path,
                    (shown, highest.explained),
                    highest.source,
                    "set it lower, or prove another nameplate",
                )
            )
        hottest = figures.get("hottest_discharge_pressure")
        if hottest is not None and setting <= hottest.value:
            found.append(
                OutOfOrder(
                    "the plant will trip on the hottest day: expected discharge pressure reaches the limit",
                    "warning",
                    path,
                    (shown, hottest.explained),
                    "design model",
                    "check condenser and settings before raising anything",
                )
            )
    if receiver is not None and receiver.relief_valve is not None:
        relief = loaded.absolute(receiver.relief_valve)
        path = f"systems.{system_id}.receiver.relief_valve"
        shown = _stated("relief valve", relief, str(loaded.where(path)))
        top = figures.get("relief_highest")
        if top is not None and relief > top.value * (1 + 1e-9):
            found.append(
                OutOfOrder(
                    "the relief valve opens above the allowable pressure",
                    "error",
                    path,
                    (shown, top.explained),
                    top.source,
                    "fit a relief valve for the stamped pressure",
                )
            )
        if controls.high_pressure_limit is not None and loaded.absolute(controls.high_pressure_limit) >= relief:
            limit = _stated("high-pressure limit", loaded.absolute(controls.high_pressure_limit), "description")
            found.append(
                OutOfOrder(
                    "the relief valve opens before the high-pressure limit stops the compressor",
                    "error",
                    path,
                    (shown, limit),
                    "EN 378-2, 2016, table 3",
                    "set the limit below the relief valve",
                )
            )
    return tuple(found)


def _standstill_problems(loaded: LoadedPlant, system_id: str, figures: Figures) -> tuple[OutOfOrder, ...]:
    still = figures.get("standstill_pressure")
    if still is None:
        return ()
    source = fact("relief_setting_ratio").source
    return tuple(
        OutOfOrder(
            f"at standstill on the hottest day the {stamped.side} side is above its allowable pressure",
            "error",
            f"systems.{system_id}.nameplate.allowable_pressure_{stamped.side}",
            (still.explained, _stated(f"allowable pressure, {stamped.side} side", stamped.absolute, stamped.origin)),
            source,
            "read the nameplate again; if it stands, this refrigerant cannot be used in it",
        )
        for stamped in stamped_pressures(loaded, system_id)
        if still.value > stamped.absolute
    )
