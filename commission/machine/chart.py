"""The cycle of a single stage as Chebyshev series, to evaluate it for many points at once. SI units.

The compression depends on both dew temperatures and on how far the suction gas is above evaporation; the gas that
leaves the evaporator on evaporating temperature and superheat; the liquid before the valve on condensing temperature
and subcooling; the temperature that drives the evaporator of a blend on evaporating temperature and enthalpy of that
liquid.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from itertools import product

import numpy as np
from numpy.polynomial import chebyshev

from commission.machine.condenser_circuit import CondenserCircuit
from commission.properties import SaturationState, State
from commission.properties.lines import Array, nodes, series_at_nodes

Ends = tuple[float, float]
TERMS, SOME, MANY = 8, 5, 12
"""Terms of a series in a dew temperature, in superheat or subcooling, and in the enthalpy at the discharge."""


@dataclass(frozen=True)
class Series:
    """Quantities as a series over variables between `ends`; `table` has the shape (quantities, terms, terms, ...)."""

    ends: tuple[Ends, ...]
    table: Array

    @classmethod
    def of(
        cls, quantities: Callable[..., tuple[float, ...]], ends: tuple[Ends, ...], counts: tuple[int, ...]
    ) -> Series:
        """Chart `quantities` between the ends; a variable whose ends are one takes a single term."""
        grid = [_spread(e, n) for e, n in zip(ends, counts, strict=True)]
        values = np.array([quantities(*at) for at in product(*grid)])
        table = values.T.reshape(-1, *(len(g) for g in grid))
        for axis, along in enumerate(grid, 1):
            if len(along) > 1:
                table = np.moveaxis(series_at_nodes(np.moveaxis(table, axis, -1)), -1, axis)
        return cls(ends, table)

    def at(self, *values: Array) -> Array:
        """The quantities at points of any one shape: shape (quantities, *shape)."""
        shape, found = values[0].shape, self.table[:, None]
        for n, (value, ends) in enumerate(zip(values, self.ends, strict=True)):
            count = self.table.shape[n + 1]
            if count == 1:
                found = found[:, :, 0]
                continue
            along = _terms(value.reshape(-1), ends, count)
            if found.shape[1] == 1:  # the first of them
                found = np.tensordot(along, found[:, 0], (1, 1)).swapaxes(0, 1)
            else:
                found = np.einsum("qnc...,nc->qn...", found, along)
        return np.broadcast_to(found, (len(self.table), int(np.prod(shape)))).reshape(-1, *shape)


@dataclass(frozen=True)
class Chart:
    """`compression`: flow (kg/s), power (W), and enthalpy flow (W) at the discharge. `dew`: enthalpy (J/kg) of the dew
    point at the discharge pressure, and `discharge`: temperature (K) there, by what its gas is above that enthalpy.
    `gas`: enthalpy at the evaporator outlet, and above its dew point (J/kg). `bubble`: bubble point (K). `liquid`:
    enthalpy before the valve (J/kg). `drive`: temperature (K) that drives the evaporator, None for a pure fluid."""

    compression: Series
    dew: Series
    discharge: Series
    gas: Series
    bubble: Series | None
    liquid: Series
    drive: Series | None

    @classmethod
    def of(cls, circuit: CondenserCircuit, ends: Sequence[Ends], terms: int) -> Chart:
        """Chart the cycle between `ends` of evaporating and condensing temperature, of suction gas above evaporation,
        of superheat and of subcooling (K).

        Raises:
            NotCalculatedError: the cycle cannot be calculated all over that range.
        """
        evaporating, condensing, excess, superheat, subcooling = ends
        fluid, suctions = circuit.machine.refrigerant, dict[tuple[float, float], State]()
        near: State | None = None
        above: list[float] = []

        def dew(c: float) -> SaturationState:
            return fluid.dew(fluid.dew_temperature(circuit.high_side(evaporating[0], c)[0]))

        dews = {c: dew(c) for c in _spread(condensing, TERMS)}

        def compression(c: float, x: float, e: float) -> tuple[float, ...]:
            nonlocal near
            if (e, x) not in suctions:
                loss = circuit.machine.suction_line.pressure_loss
                line = fluid.dew(e - loss)
                suctions[e, x] = fluid.superheated(line, e + x - line.T)
            compressor, share = circuit.machine.compressor, circuit.media.speed_share
            found = compressor.compress(fluid, suctions[e, x], dews[c].p, share, near)
            near = found.isentropic_end
            above.append(found.discharge_enthalpy - dews[c].h)
            return found.flow, found.power, found.flow * found.discharge_enthalpy

        def discharge(c: float, above: float) -> tuple[float]:
            nonlocal near
            near = fluid.vapour_from_enthalpy(dews[c].p, dews[c].h + above, near)
            return (near.T,)

        def gas(e: float, s: float) -> tuple[float, ...]:
            line = fluid.dew(e)
            outlet = fluid.superheated(line, s)
            return outlet.h, outlet.h - line.h

        liquid = Series.of(lambda c, s: (circuit.liquid(c, s).h,), (condensing, subcooling), (TERMS, SOME))
        bubble = drive = None
        if fluid.is_blend:
            corners = liquid.at(*(v.ravel() for v in np.meshgrid(condensing, subcooling)))
            bubble = Series.of(lambda c: (circuit.bubble_temperature(c),), (condensing,), (TERMS,))
            drive = Series.of(
                lambda e, h: (fluid.mean_evaporating_temperature(fluid.dew_pressure(e), h),),
                (evaporating, (float(corners.min()), float(corners.max()))),
                (TERMS, TERMS),
            )
        charted = Series.of(compression, (condensing, excess, evaporating), (TERMS, terms, TERMS))
        return cls(
            charted,
            Series.of(lambda c: (dews[c].h,), (condensing,), (TERMS,)),
            Series.of(discharge, (condensing, (min(above), max(above))), (TERMS, MANY)),
            Series.of(gas, (evaporating, superheat), (TERMS, SOME)),
            bubble,
            liquid,
            drive,
        )


def _terms(value: Array, ends: Ends, count: int) -> Array:
    """Chebyshev polynomials of `value` between `ends`, along a new last axis."""
    low, high = ends
    return np.asarray(chebyshev.chebvander((2.0 * value - low - high) / (high - low), count - 1))


def _spread(ends: Ends, count: int) -> list[float]:
    """Nodes of a series of `count` terms between `ends`, one where they are one."""
    low, high = ends
    return [float(v) for v in 0.5 * (low + high) + 0.5 * (high - low) * nodes(count)] if high > low else [low]
