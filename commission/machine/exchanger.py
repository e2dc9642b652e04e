"""Exchangers by effectiveness and number of transfer units: conductance given, heat bounded. SI units.

Kays & London, Compact Heat Exchangers, 3rd ed. 1984; Incropera & DeWitt, Fundamentals of Heat and Mass Transfer,
6th ed., ch. 11. One side evaporates or condenses, so that the ratio of capacity rates is zero and the flow
arrangement does not matter.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

from commission.errors import NotCalculatedError
from commission.machine.streams import Stream
from commission.machine.wet_air import coil_heat

GAS_SHARE = 0.25
"""Conductance of a surface that only superheats gas, over that of the same surface wetted (common practice, no source):
the gas side transfers a tenth of what boiling does, but it is only a part of the resistance."""
LEAST_WETTED, DEPTH = 0.01, 5.0
"""Wetted share below which heat falls on in a straight line, as if against so many kelvin: no balance lies there, but a
trial that leaves nothing wetted must be told how far off it is."""
MOST_UNITS = 50.0
"""Transfer units beyond which the inlet of a medium cannot be told from its outlet: e^-50 of the difference is left."""

Flow = Literal["counterflow", "parallel", "crossflow unmixed"]


def effectiveness(transfer_units: float, capacity_ratio: float = 0.0, flow: Flow = "counterflow") -> float:
    """Effectiveness (0-1) of an exchanger with `transfer_units` = UA/C_min and `capacity_ratio` = C_min/C_max.

    Incropera & DeWitt 6th ed. eq. 11.28a (parallel), 11.29a (counterflow), 11.32 (cross-flow, both unmixed, an
    approximation), 11.35a (capacity ratio zero).

    Raises:
        ValueError: a negative number of transfer units, or a capacity ratio outside 0-1.
    """
    if transfer_units < 0 or not 0 <= capacity_ratio <= 1:
        raise ValueError(f"no exchanger has NTU {transfer_units} and capacity ratio {capacity_ratio}")
    if capacity_ratio < 1e-12:
        return -math.expm1(-transfer_units)
    if flow == "parallel":
        return -math.expm1(-transfer_units * (1 + capacity_ratio)) / (1 + capacity_ratio)
    if flow == "crossflow unmixed":
        inner = math.expm1(-capacity_ratio * transfer_units**0.78)
        return -math.expm1(transfer_units**0.22 / capacity_ratio * inner)
    if capacity_ratio > 1 - 1e-9:
        return transfer_units / (1 + transfer_units)
    power = math.exp(-transfer_units * (1 - capacity_ratio))
    return (1 - power) / (1 - capacity_ratio * power)


def conductance_for(heat: float, temperature_difference: float, capacity_rate: float) -> float:
    """Conductance in W/K that transfers `heat` (W) at inlet difference (K) to a medium of `capacity_rate` (W/K).

    Inverse of `Exchanger.heat` at full flow.

    Raises:
        NotCalculatedError: more heat than the medium can take up at that difference, whatever the conductance.
    """
    greatest = capacity_rate * temperature_difference
    if not 0 < heat < greatest:
        raise NotCalculatedError(
            f"{heat / 1e3:.2f} kW cannot be transferred at {temperature_difference:.1f} K inlet difference: "
            f"the flow of the medium would carry {greatest / 1e3:.2f} kW at most"
        )
    return -capacity_rate * math.log1p(-heat / greatest)


@dataclass(frozen=True, slots=True)
class Exchanger:
    """An evaporator or condenser.

    `conductance` in W/K holds at `rated_flow` (m3/s) of the medium; elsewhere it follows flow to the power
    `flow_exponent`, which is the share of the medium's side in the whole resistance times its own exponent.
    `air_share` is the air side's share of the resistance of a coil that may be wet; None for one that stays dry.
    `gas_share` counts for an evaporator: `conductance` is that of its whole surface wetted, and a dry part has
    `gas_share` times as much.
    """

    conductance: float
    rated_flow: float
    flow_exponent: float = 0.0
    air_share: float | None = None
    gas_share: float = GAS_SHARE

    def at(self, volume_flow: float) -> Exchanger:
        """The same exchanger rated at another flow of the medium in m3/s."""
        if volume_flow == self.rated_flow:
            return self
        return Exchanger(
            self.conductance_at(volume_flow), volume_flow, self.flow_exponent, self.air_share, self.gas_share
        )

    def conductance_at(self, volume_flow: float) -> float:
        """Conductance in W/K at another flow of the medium in m3/s."""
        if self.flow_exponent == 0.0 or volume_flow == self.rated_flow:
            return self.conductance
        return self.conductance * float((volume_flow / self.rated_flow) ** self.flow_exponent)

    def heat_from(self, stream: Stream, refrigerant: float, wetted: float = 1.0, before: float = 0.0) -> float:
        """Heat in W that a medium gives to refrigerant evaporating at `refrigerant` (K), wet coils included.

        `wetted` is the share of the surface at work. A medium that is known by its inlet gives heat `before` (W) to
        another zone first, and comes colder by as much.
        """
        if wetted < LEAST_WETTED:
            lacking = (LEAST_WETTED - wetted) * self.conductance_at(stream.volume_flow) * DEPTH
            return self.heat_from(stream, refrigerant, LEAST_WETTED, before) - lacking
        if stream.by_outlet:
            return self.heat_per_kelvin(stream, surface_share=wetted) * (stream.temperature - refrigerant)
        rate, conductance = stream.capacity_rate, wetted * self.conductance_at(stream.volume_flow)
        share = effectiveness(conductance / rate)
        if self.air_share is not None and stream.air is not None:
            return coil_heat(stream, refrigerant, conductance, self.air_share) - before * share
        return share * (rate * (stream.temperature - refrigerant) - before)

    def dry_share(self, stream: Stream, heat: float, difference: float) -> float:
        """Share of the surface that takes `heat` (W) to superheat gas, at a mean `difference` (K) to the medium; above
        1 where it is not enough."""
        return heat / (self.gas_share * self.conductance_at(stream.volume_flow) * difference)

    def heat_per_kelvin(self, stream: Stream, flow_share: float = 1.0, surface_share: float = 1.0) -> float:
        """Heat in W for each kelvin between the known temperature of the medium and the refrigerant.

        The shares scale flow and surface. With the outlet known, C e (T_in - T_r) = C e/(1 - e) (T_out - T_r).

        Raises:
            NotCalculatedError: a medium known by its outlet has a flow too small for its inlet to be told.
        """
        rate = flow_share * stream.capacity_rate
        units = surface_share * self.conductance_at(flow_share * stream.volume_flow) / rate
        if not stream.by_outlet:
            return rate * effectiveness(units)
        if units > MOST_UNITS:
            raise NotCalculatedError(
                f"a flow of {3600 * flow_share * stream.volume_flow:.3g} m3/h is far too small for the exchanger: with "
                "its outlet temperature fixed there is no inlet temperature that could be"
            )
        return rate * math.expm1(units)
