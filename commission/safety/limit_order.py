"""Order of the pressures that protect a circuit: expected, limit, relief, allowable; and what is out of order."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

from commission.quantities import Explained, Input, Kind
from commission.safety.facts import fact
from commission.safety.figure import Figures
from commission.safety.stamped import relief_valves, stamped_pressures

if TYPE_CHECKING:
    from commission.description import LoadedPlant
    from commission.quantities import Pressure


@dataclass(frozen=True, slots=True)
class PressureStep:
    """One pressure of the ladder: Pa absolute, where it comes from, and whether it protects the low side alone."""

    title: str
    pressure: float
    origin: str
    low_side: bool = False


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
    setting = system.controls.high_pressure_limit
    if setting is not None:
        path = f"{base}.controls.high_pressure_limit"
        steps.append(PressureStep("high-pressure limit", loaded.absolute(setting), str(loaded.where(path))))
    for valve in relief_settings(loaded, system_id):
        steps.append(PressureStep(valve.title, valve.pressure, str(loaded.where(valve.path)), valve.low_side))
    for stamped in stamped_pressures(loaded, system_id):
        title = f"allowable pressure, {stamped.side} side"
        steps.append(PressureStep(title, stamped.absolute, stamped.origin, stamped.side == "low"))
    problems = (*_limit_problems(loaded, system_id, figures), *_standstill_problems(loaded, system_id, figures))
    return LimitOrder(tuple(sorted(steps, key=lambda step: step.pressure)), problems)


@dataclass(frozen=True, slots=True)
class ReliefSetting:
    """A relief valve that is described: its title, its key path, its set pressure in Pa absolute, what it protects."""

    title: str
    path: str
    pressure: float
    low_side: bool


def relief_settings(loaded: LoadedPlant, system_id: str) -> tuple[ReliefSetting, ...]:
    """The relief valves; one that opens no higher than the low side bears, below the high side, protects that side."""
    stamped = {s.side: s.absolute for s in stamped_pressures(loaded, system_id)}
    low, high = stamped.get("low"), stamped.get("high")
    valves = relief_valves(loaded.system(system_id))
    found = []
    for name, pressure in valves.items():
        setting = loaded.absolute(pressure)
        path = "receiver.relief_valve" if name == "receiver" else f"relief_valves.{name}"
        low_side = name != "receiver" and low is not None and high is not None and setting <= low < high
        title = "relief valve" if len(valves) == 1 else f"relief valve, {name}"
        found.append(ReliefSetting(title, f"systems.{system_id}.{path}", setting, low_side))
    return tuple(found)


def _stated(title: str, value: float, origin: str) -> Explained:
    return Explained("allowable_pressure", value, None, "as_stated", (Input(title, value, Kind.PRESSURE, origin),))


def _limit_problems(loaded: LoadedPlant, system_id: str, figures: Figures) -> tuple[OutOfOrder, ...]:
    controls = loaded.system(system_id).controls
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
    for valve in relief_settings(loaded, system_id):
        found += _relief_problems(loaded, valve, figures, controls.high_pressure_limit)
    return tuple(found)


def _relief_problems(
    loaded: LoadedPlant, valve: ReliefSetting, figures: Figures, limit: Pressure | None
) -> Iterator[OutOfOrder]:
    shown = _stated(valve.title, valve.pressure, str(loaded.where(valve.path)))
    top = figures.get("relief_highest")
    if top is not None and valve.pressure > top.value * (1 + 1e-9):
        yield OutOfOrder(
            f"the {valve.title} opens above the allowable pressure",
            "error",
            valve.path,
            (shown, top.explained),
            top.source,
            "fit a relief valve for the stamped pressure",
        )
    if limit is not None and not valve.low_side and loaded.absolute(limit) >= valve.pressure:
        yield OutOfOrder(
            f"the {valve.title} opens before the high-pressure limit stops the compressor",
            "error",
            valve.path,
            (shown, _stated("high-pressure limit", loaded.absolute(limit), "description")),
            "EN 378-2, 2016, table 3",
            "set the limit below the relief valve",
        )


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
