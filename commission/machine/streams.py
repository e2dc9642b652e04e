"""The media that a machine takes heat from and gives heat to, as the exchangers see them. SI units."""

from __future__ import annotations

import math
from dataclasses import dataclass

from commission.errors import NotCalculatedError
from commission.properties import Liquid, MoistAir, moist_air


@dataclass(frozen=True, slots=True)
class Stream:
    """One medium on its way through an exchanger.

    `inlet_temperature` in K, `volume_flow` in m3/s at the inlet state, `mass_flow` in kg/s (dry air for air),
    `capacity_rate` in W/K. `air` is the moist-air state at the inlet, None for a liquid.
    """

    inlet_temperature: float
    volume_flow: float
    mass_flow: float
    capacity_rate: float
    air: MoistAir | None = None


def air_stream(temperature: float, volume_flow: float, relative_humidity: float, pressure: float) -> Stream:
    """Moist air at `temperature` (K), `relative_humidity` (0-1) and barometric `pressure` (Pa).

    Raises:
        NotCalculatedError: the flow is not positive.
    """
    _positive(volume_flow)
    air = moist_air(temperature, pressure, relative_humidity=relative_humidity)
    mass_flow = volume_flow * air.density
    return Stream(temperature, volume_flow, mass_flow, mass_flow * air.cp, air)


def liquid_stream(temperature: float, volume_flow: float, liquid: Liquid) -> Stream:
    """Water or brine at `temperature` (K); density and specific heat are taken at the inlet.

    Raises:
        NotCalculatedError: the flow is not positive.
    """
    _positive(volume_flow)
    mass_flow = volume_flow * liquid.density(temperature)
    return Stream(temperature, volume_flow, mass_flow, mass_flow * liquid.specific_heat(temperature))


def _positive(volume_flow: float) -> None:
    if not volume_flow > 0:
        raise NotCalculatedError(f"the flow of a medium must be positive, not {volume_flow:.4g} m3/s")


def entropic_mean(inlet: float, outlet: float) -> float:
    """Entropic mean temperature dh/ds in K of a medium of constant specific heat between two temperatures in K.

    For constant cp, dh/ds = (T1 - T2) / ln(T1/T2); second law of thermodynamics, no property data enters.
    """
    ratio = inlet / outlet
    if abs(ratio - 1) < 1e-6:
        return 0.5 * (inlet + outlet)
    return (inlet - outlet) / math.log(ratio)


def carnot_cooling(source_mean: float, sink_mean: float) -> float:
    """Highest COP of cooling between two entropic mean temperatures in K.

    Raises:
        NotCalculatedError: the source is as warm as the sink or warmer, so that no work need be done.
    """
    if sink_mean <= source_mean:
        raise NotCalculatedError("the heat source is warmer than the heat sink: the Carnot COP has no bound")
    return source_mean / (sink_mean - source_mean)
