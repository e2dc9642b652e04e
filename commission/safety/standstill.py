"""What a circuit holds when it stands on the hottest day: saturation with liquid in it, else charge in its volume."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from commission.errors import NotCalculatedError
from commission.quantities import Input, Kind
from commission.safety.facts import Fact
from commission.safety.figure import Collector
from commission.safety.stamped import hottest_ambient, place, stamped_pressures

if TYPE_CHECKING:
    from commission.description import LoadedPlant
    from commission.properties import Refrigerant

PRESSURE, VOLUME = "standstill_pressure", "standstill_least_volume"
RULE = Fact(
    "standstill",
    0.0,
    Kind.PRESSURE,
    "EN 378-2",
    "2016, 6.2.2",
    "V1",
    "the allowable pressure must cover standstill; nameplates decide",
)
EXCHANGERS = ("evaporator.internal_volume", "condenser.internal_volume")
VESSELS = ("receiver.volume", "suction_accumulator")
LOWEST, STEPS = 1e3, 60
"""Pa and halvings between which the pressure of a density is searched for."""


def standstill(loaded: LoadedPlant, system_id: str, fluid: Refrigerant, out: Collector) -> None:
    """Pressure at rest at the hottest ambient; where there is no liquid then, also the least volume for the stamp."""
    warmest = hottest_ambient(loaded, system_id)
    if warmest is None:
        out.refuse("the hottest ambient is not stated: write plant.climate.summer_dry_bulb", PRESSURE, VOLUME)
        return
    hottest = Input("hottest ambient", warmest[0], Kind.TEMPERATURE, warmest[1])
    if hottest.value < fluid.T_critical:
        _saturated(fluid, hottest, out)
        out.refuse("with liquid present the pressure at rest does not follow the volume", VOLUME)
        return
    charge = loaded.system(system_id).charge
    if charge is None:
        reason = f"{fluid.name} has no liquid at the hottest ambient, and the charge is not stated"
        out.refuse(reason, PRESSURE, VOLUME)
        return
    mass = Input("charge", charge, Kind.MASS, place(loaded, f"systems.{system_id}.charge"))
    _least_volume(loaded, system_id, fluid, hottest, mass, out)
    _shut_in(loaded, system_id, fluid, hottest, mass, out)


def _saturated(fluid: Refrigerant, hottest: Input, out: Collector) -> None:
    try:
        pressure = fluid.bubble(hottest.value).p
    except NotCalculatedError as error:
        out.refuse(str(error), PRESSURE)
        return
    note = "only while liquid is present, everything at one temperature, and not after pump-down"
    doubt = pressure * fluid.pressure_relative_uncertainty
    out.add(PRESSURE, pressure, "standstill_pressure", (hottest,), RULE, note=note, uncertainty=doubt)


def _shut_in(
    loaded: LoadedPlant, system_id: str, fluid: Refrigerant, hottest: Input, charge: Input, out: Collector
) -> None:
    """The whole charge in the volumes that are stated: what is left out, lines and compressor, only lowers it."""
    volumes = _volumes(loaded, system_id)
    if isinstance(volumes, str):
        reason = f"{fluid.name} has no liquid at the hottest ambient, so its pressure follows charge and volume"
        out.refuse(f"{reason}; write {volumes}", PRESSURE)
        return
    try:
        pressure = gas_pressure(fluid, hottest.value, charge.value / sum(given.value for given in volumes))
    except NotCalculatedError as error:
        out.refuse(str(error), PRESSURE)
        return
    note = "no liquid is left at this temperature; everything at one temperature; lines and compressor left out"
    inputs = (hottest, charge, *volumes)
    doubt = pressure * fluid.pressure_relative_uncertainty
    out.add(PRESSURE, pressure, "standstill_without_liquid", inputs, RULE, mark="C", note=note, uncertainty=doubt)


def _volumes(loaded: LoadedPlant, system_id: str) -> tuple[Input, ...] | str:
    """The volumes of the refrigerant side, or the keys of the exchangers that are not stated."""
    found, missing = [], []
    for key in (*EXCHANGERS, *VESSELS):
        value = loaded.system(system_id)
        for part in key.split("."):
            value = None if value is None else getattr(value, part)
        if isinstance(value, float):
            found.append(Input(_named(key), value, Kind.VOLUME, place(loaded, f"systems.{system_id}.{key}")))
        elif key in EXCHANGERS:
            missing.append(key)
    return " and ".join(missing) if missing else tuple(found)


def _named(key: str) -> str:
    return f"volume of the {key.split('.')[0].replace('_', ' ')}"


def _least_volume(
    loaded: LoadedPlant, system_id: str, fluid: Refrigerant, hottest: Input, charge: Input, out: Collector
) -> None:
    """The volume in which the charge just reaches the lowest stamped pressure: a smaller circuit passes it."""
    stamped = min(stamped_pressures(loaded, system_id), key=lambda s: s.absolute, default=None)
    if stamped is None:
        out.refuse("no allowable pressure is stated on the nameplate", VOLUME)
        return
    try:
        density = fluid.vapour(hottest.value, stamped.absolute).rho
    except NotCalculatedError as error:
        out.refuse(str(error), VOLUME)
        return
    note = "of all that stays joined at rest; a smaller one passes the lowest stamped pressure on the hottest day"
    inputs = (hottest, charge, stamped.as_input())
    out.add(VOLUME, charge.value / density, "standstill_least_volume", inputs, RULE, mark="C", note=note)


def gas_pressure(fluid: Refrigerant, temperature: float, density: float) -> float:
    """Pressure (Pa absolute) of a pure gas above its critical temperature (K) at a density (kg/m³).

    One phase at any density, so the density rises with the pressure: found by halving ln p.

    Raises:
        NotCalculatedError: a blend, below the critical temperature, or a density beyond the equation of state.
    """
    if fluid.is_blend or temperature < fluid.T_critical:
        raise NotCalculatedError(f"{fluid.name} can hold liquid at {temperature - 273.15:.1f} °C")
    low, high = LOWEST, fluid.p_max
    if not fluid.vapour(temperature, low).rho < density < fluid.vapour(temperature, high).rho:
        raise NotCalculatedError(f"{density:.0f} kg/m³ of {fluid.name} lies beyond its equation of state")
    for _ in range(STEPS):
        middle = math.sqrt(low * high)
        low, high = (middle, high) if fluid.vapour(temperature, middle).rho < density else (low, middle)
    return math.sqrt(low * high)
