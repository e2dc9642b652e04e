"""The media that a machine takes heat from and gives heat to, as the exchangers see them. SI units."""

from __future__ import annotations

import math
from dataclasses import dataclass

from commission.errors import NotCalculatedError
from commission.properties import Liquid, MoistAir, moist_air


@dataclass(frozen=True, slots=True)
class Stream:
    """One medium on its way through an exchanger.

    `temperature` in K is known at the inlet, or at the outlet with `by_outlet` (as water heating is rated);
    with `outlet_wanted` (K) inlet and outlet are known and the flow follows from the heat (once-through water heating).
    `volume_flow` in m3/s at that state, `mass_flow` in kg/s (dry air for air), `capacity_rate` in W/K. `air` is the
    moist-air state at the inlet, None for a liquid.
    """

    temperature: float
    volume_flow: float
    mass_flow: float
    capacity_rate: float
    air: MoistAir | None = None
    by_outlet: bool = False
    outlet_wanted: float | None = None

    def settled(self, heat: float) -> Stream:
        """The medium at the flow with which `heat` (W) brings it to the outlet that is wanted; itself where none is."""
        if self.outlet_wanted is None:
            return self
        rate = max(heat, 1.0) / (self.outlet_wanted - self.temperature)
        share = rate / self.capacity_rate
        return Stream(self.temperature, share * self.volume_flow, share * self.mass_flow, rate, self.air)

    def inlet(self, taken: float) -> float:
        """Inlet temperature in K where the medium takes up `taken` W (negative: gives)."""
        return self.temperature - taken / self.capacity_rate if self.by_outlet else self.temperature

    def outlet(self, taken: float) -> float:
        """Outlet temperature in K where the medium takes up `taken` W of sensible heat (negative: gives)."""
        return self.temperature if self.by_outlet else self.temperature + taken / self.capacity_rate


def air_stream(temperature: float, volume_flow: float, relative_humidity: float, pressure: float) -> Stream:
    """Moist air at `temperature` (K), `relative_humidity` (0-1) and barometric `pressure` (Pa).

    Raises:
        NotCalculatedError: the flow is not positive.
    """
    _positive(volume_flow)
    air = moist_air(temperature, pressure, relative_humidity=relative_humidity)
    mass_flow = volume_flow * air.density
    return Stream(temperature, volume_flow, mass_flow, mass_flow * air.cp, air)


def liquid_stream(temperature: float, volume_flow: float, liquid: Liquid, by_outlet: bool = False) -> Stream:
    """Water or brine at `temperature` (K), where density and specific heat are taken, at its inlet or outlet.

    Raises:
        NotCalculatedError: the flow is not positive.
    """
    _positive(volume_flow)
    mass_flow = volume_flow * liquid.density(temperature)
    return Stream(temperature, volume_flow, mass_flow, mass_flow * liquid.specific_heat(temperature), None, by_outlet)


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
