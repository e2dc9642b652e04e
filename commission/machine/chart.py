"""The cycle of a single stage as Chebyshev series over its dew temperatures, to evaluate it for many points at once.

The compression depends on both dew temperatures (and on the air around the suction line), the liquid before the valve
on condensing temperature and subcooling, and the temperature that drives the evaporator of a blend on evaporating
temperature and enthalpy of that liquid. SI units.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.polynomial import chebyshev

from commission.machine.operating_point import Media
from commission.machine.single_stage import CondenserCircuit, SingleStage
from commission.properties import State
from commission.properties.lines import Array, nodes, series_at_nodes

Ends = tuple[float, float]
Flags = np.ndarray[tuple[int, ...], np.dtype[np.bool_]]
TERMS, LIQUID_TERMS = 8, 5
"""Terms of the series in each dew temperature, and in the subcooling or the enthalpy of the liquid."""
COLUMNS = ("flow", "power", "outlet", "gas", "given", "discharge", "bubble")
"""What is charted: flow (kg/s) and power (W); enthalpy flow (W) at the evaporator outlet, above its dew point, and at
the discharge; temperatures (K) at the discharge port and of the bubble point."""


@dataclass(frozen=True)
class Surface:
    """One quantity as a series over two variables between `ends`."""

    ends: tuple[Ends, Ends]
    series: Array

    @classmethod
    def of(cls, quantity: Callable[[float, float], float], ends: tuple[Ends, Ends], counts: tuple[int, int]) -> Surface:
        """Chart `quantity` between the ends; a variable whose ends are one takes a single term."""
        counts = tuple(n if high > low else 1 for n, (low, high) in zip(counts, ends, strict=True))  # type: ignore[assignment]  # two in, two out
        x, y = (spread(e, n) for e, n in zip(ends, counts, strict=True))
        return cls(ends, in_series(np.array([[quantity(a, b) for b in y] for a in x]), (0, 1)))

    def at(self, x: Array, y: Array) -> Array:
        """The quantity at points of any shape."""
        along, across = (terms(v, e, n) for v, e, n in zip((x, y), self.ends, self.series.shape, strict=True))
        return np.asarray(((along @ self.series) * across).sum(axis=-1))


@dataclass(frozen=True)
class Series:
    """The chart of the compression at the surroundings of each sink: shape (sinks, columns, terms, terms)."""

    ends: tuple[Ends, Ends]
    series: Array

    def at(self, evaporating: Array, condensing: Array) -> dict[str, Array]:
        """The columns at points of shape (any, any, sinks)."""
        x, y = (terms(v, ends, TERMS) for v, ends in zip((evaporating, condensing), self.ends, strict=True))
        sinks, columns = self.series.shape[:2]
        flat = np.moveaxis(y, 2, 0).reshape(sinks, -1, TERMS)
        inner = flat @ self.series.reshape(sinks, columns * TERMS, TERMS).transpose(0, 2, 1)
        shape = (sinks, *y.shape[:2], columns, TERMS)
        found = (inner.reshape(shape) * np.moveaxis(x, 2, 0)[..., None, :]).sum(axis=-1)
        return dict(zip(COLUMNS, np.moveaxis(found, (0, 3), (3, 0)), strict=True))


@dataclass(frozen=True)
class Chart:
    """Charts of compression, liquid and drive; `compression` has the shape (columns, terms around, terms, terms).

    `ends` are those of evaporating, condensing and surrounding temperature (K). `drive` is None for a pure fluid.
    """

    ends: tuple[Ends, Ends, Ends]
    compression: Array
    liquid: Surface
    drive: Surface | None

    @classmethod
    def of(
        cls, machine: SingleStage, media: Callable[[float], Media], ends: tuple[Ends, Ends, Ends], subcooling: Ends,
        around_terms: int,
    ) -> Chart:  # fmt: skip
        """Chart the cycle between `ends`; `media` makes the condition at a temperature around the suction line.

        Raises:
            NotCalculatedError: the cycle cannot be calculated all over that range.
        """
        first, second, third = ends
        heated = machine.suction_line.heating_share != 0.0 and third[1] > third[0]
        levels = spread(third, around_terms) if heated else [third[0]]
        table = np.empty((len(COLUMNS), len(levels), TERMS, TERMS))
        for k, around in enumerate(levels):
            circuit = CondenserCircuit(machine, media(around))
            near: State | None = None
            for j, condensing in enumerate(spread(second, TERMS)):  # compressions to one pressure lie near each other
                for i, evaporating in enumerate(spread(first, TERMS)):
                    table[:, k, i, j], near = _row(circuit, evaporating, condensing, near)
        liquid = Surface.of(lambda c, s: circuit.liquid(c, s).h, (second, subcooling), (TERMS, LIQUID_TERMS))
        return cls(ends, in_series(table, (1, 2, 3)), liquid, _drive(machine, first, liquid))

    def along(self, surroundings: Sequence[float]) -> Series:
        """The compression at these temperatures (K) around the suction line."""
        weights = terms(np.array(surroundings), self.ends[2], self.compression.shape[1])
        return Series(self.ends[:2], np.einsum("jk,qkec->jqec", weights, self.compression))

    def holds(self, evaporating: Array, condensing: Array, subcooling: Array) -> Flags:
        """Which points lie inside the chart."""
        (a, b), (c, d), (e, f) = *self.ends[:2], self.liquid.ends[1]
        inside = (a <= evaporating) & (evaporating <= b) & (c <= condensing) & (condensing <= d)
        return np.asarray(inside & (e - 1e-9 <= subcooling) & (subcooling <= f + 1e-9))


def _row(
    circuit: CondenserCircuit, evaporating: float, condensing: float, near: State | None
) -> tuple[tuple[float, ...], State]:
    """`COLUMNS` at one pair of dew temperatures, and the discharge; `near` is a neighbouring one."""
    fluid, compression = circuit.machine.refrigerant, circuit.cycle(evaporating, condensing)[0]
    pressure, outlet = (
        circuit.high_side(evaporating, condensing)[0],
        circuit.outlet(evaporating, circuit.machine.superheat),
    )
    discharge = fluid.vapour_from_enthalpy(pressure, compression.discharge_enthalpy, near)
    flow, gas = compression.flow, circuit.gas_heat(evaporating, circuit.machine.superheat, compression.flow)
    heats = flow * outlet.h, gas, flow * compression.discharge_enthalpy
    return (flow, compression.power, *heats, discharge.T, circuit.bubble_temperature(condensing)), discharge


def _drive(machine: SingleStage, evaporating: Ends, liquid: Surface) -> Surface | None:
    """Chart of the temperature that drives the evaporator of a blend."""
    fluid = machine.refrigerant
    if not fluid.is_blend:
        return None
    corners = liquid.at(*(v.ravel() for v in np.meshgrid(*map(np.array, liquid.ends))))
    return Surface.of(
        lambda e, h: fluid.mean_evaporating_temperature(fluid.dew_pressure(e), h),
        (evaporating, (float(corners.min()), float(corners.max()))),
        (TERMS, TERMS),
    )


def terms(value: Array, ends: Ends, count: int) -> Array:
    """Chebyshev polynomials of `value` between `ends`, along a new last axis."""
    low, high = ends
    scaled = (2.0 * value - low - high) / (high - low) if count > 1 else np.zeros_like(value)
    return np.asarray(chebyshev.chebvander(scaled, count - 1))


def spread(ends: Ends, count: int) -> list[float]:
    """Nodes of a series of `count` terms between `ends`."""
    low, high = ends
    return [float(v) for v in 0.5 * (low + high) + 0.5 * (high - low) * nodes(count)] if count > 1 else [low]


def in_series(table: Array, axes: Sequence[int]) -> Array:
    """Values at nodes along `axes` as coefficients of series."""
    for axis in axes:
        if table.shape[axis] > 1:
            table = np.moveaxis(series_at_nodes(np.moveaxis(table, axis, -1)), -1, axis)
    return table
