"""A whole map of operating points at once: sources by sinks. SI units.

The states of the low side depend on the evaporating temperature alone, those of the high side on the condensing
temperature alone, and only the compression on both (and on the air around the suction line). So the cycle is charted
once as a Chebyshev series over both temperatures, and all points are balanced on it together by Newton's method. The
series is checked against the cycle itself at the corners of the map. What does not lie on one smooth branch (head
pressure held, suction pressure limited, a fixed restriction, a flow set by its outlet) is operated point by point.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.polynomial import chebyshev

from commission.errors import NotCalculatedError
from commission.machine.operating_point import Balance, Media
from commission.machine.single_stage import FREE, SingleStage, _Circuit
from commission.machine.streams import Stream
from commission.machine.wet_air import coil_heats
from commission.properties import State
from commission.properties.lines import Array, nodes, series_at_nodes

Ends = tuple[float, float]
Flags = np.ndarray[tuple[int, ...], np.dtype[np.bool_]]
TERMS, AROUND_TERMS = 8, (3, 4)
"""Terms of the series in each dew temperature, and in the temperature around the suction line, more where too few."""
EXACT = 5e-7
"""How well, relative, the series must repeat the cycle at the corners of the map."""
ENOUGH = 1e-8
"""Newton's method ends when no temperature moves by more than this, in K."""
COLUMNS = ("source", "sink", "source_drive", "sink_drive", "power", "flow", "discharge")
"""What is charted: heat from source and to sink (W), temperatures that drive the exchangers (K), power (W), flow
(kg/s), temperature at the discharge (K). The first four enter the balance."""
BALANCED = 4


@dataclass(frozen=True, slots=True)
class OperatingMap:
    """Operating points over sources (rows) and sinks (columns): arrays of one shape, NaN where there is no balance.

    Temperatures in K (dew points; `discharge_temperature` at the discharge port), pressures in Pa absolute at suction
    and discharge port, heat and power in W, flow in kg/s. `regimes` names the regime of each point, and `because` the
    reason where there is no balance. `charted` tells which points were balanced together, the others one by one.
    """

    evaporating_temperature: Array
    condensing_temperature: Array
    heat_from_source: Array
    heat_to_sink: Array
    power: Array
    flow: Array
    discharge_temperature: Array
    regimes: tuple[tuple[str, ...], ...]
    because: dict[tuple[int, int], str]
    charted: Flags


def operating_map(
    machine: SingleStage,
    sources: Sequence[Stream],
    sinks: Sequence[Stream],
    surroundings: Sequence[float],
    speed_share: float = 1.0,
) -> OperatingMap:
    """The operating points of `machine` for every source with every sink; `surroundings` (K) goes with the sinks.

    Raises:
        ValueError: no source or sink, or not one temperature of the surroundings for each sink.
    """
    if not sources or not sinks or len(surroundings) != len(sinks):
        raise ValueError("a map needs sources and sinks, and for each sink the temperature around the pipes")
    grid = _Grid(machine, tuple(sources), tuple(sinks), tuple(surroundings), speed_share)
    shape = len(sources), len(sinks)
    columns = {name: np.full(shape, np.nan) for name in ("evaporating", "condensing", *COLUMNS)}
    charted: Flags = np.zeros(shape, dtype=np.bool_)
    found = _balanced(grid)
    if found is not None:
        values, charted = found
        for name, value in values.items():
            columns[name][charted] = value[charted]
    regimes = [[FREE if here else "" for here in row] for row in charted.tolist()]
    because = _one_by_one(grid, charted, columns, regimes)
    return OperatingMap(
        evaporating_temperature=columns["evaporating"],
        condensing_temperature=columns["condensing"],
        heat_from_source=columns["source"],
        heat_to_sink=columns["sink"],
        power=columns["power"],
        flow=columns["flow"],
        discharge_temperature=columns["discharge"],
        regimes=tuple(tuple(row) for row in regimes),
        because=because,
        charted=charted,
    )


@dataclass(frozen=True)
class _Grid:
    """What is asked."""

    machine: SingleStage
    sources: tuple[Stream, ...]
    sinks: tuple[Stream, ...]
    surroundings: tuple[float, ...]
    speed_share: float

    def media(self, i: int, j: int, surroundings: float | None = None) -> Media:
        """The condition of one point."""
        around = self.surroundings[j] if surroundings is None else surroundings
        return Media(self.sources[i], self.sinks[j], around, self.speed_share)

    def corners(self) -> Iterator[tuple[int, int]]:
        """Coldest and warmest source with coldest and warmest sink."""
        by_source = [s.temperature for s in self.sources]
        by_sink = [s.temperature for s in self.sinks]
        for i in (by_source.index(min(by_source)), by_source.index(max(by_source))):
            for j in (by_sink.index(min(by_sink)), by_sink.index(max(by_sink))):
                yield i, j


def _one_by_one(
    grid: _Grid,
    done: Flags,
    columns: dict[str, Array],
    regimes: list[list[str]],
) -> dict[tuple[int, int], str]:
    """Operate the points that are not done, each started from the one before; the reasons where that cannot be."""
    because, near = {}, None
    for i, j in zip(*np.nonzero(~done), strict=True):
        place = int(i), int(j)
        try:
            point = grid.machine.operate(grid.media(*place), near)
        except NotCalculatedError as error:
            because[place], near = str(error), None
            continue
        near = point.balance
        compression = near.compression
        heats = (near.heat_from_source, near.heat_to_sink, near.source_drive, near.sink_drive)
        others = (compression.power, compression.flow, point.discharge_temperature)
        columns["evaporating"][place] = near.evaporating_temperature
        columns["condensing"][place] = near.condensing_temperature
        for name, value in zip(COLUMNS, (*heats, *others), strict=True):
            columns[name][place] = value
        regimes[place[0]][place[1]] = near.regime
    return because


def _balanced(grid: _Grid) -> tuple[dict[str, Array], Flags] | None:
    """All points on the free branch together, and which of them hold; None where there is no one smooth branch."""
    machine = grid.machine
    smooth = machine.restriction is None and machine.suction_regulator is None
    if not smooth or len(grid.sources) * len(grid.sinks) < 3 * TERMS:
        return None
    if len({s.air is None for s in grid.sources}) > 1:
        return None
    if any(s.outlet_wanted is not None for s in (*grid.sources, *grid.sinks)):
        return None
    free = replace(machine, head_pressure=None, greatest_evaporating=None)
    try:
        corners = {place: free.balance(grid.media(*place)) for place in grid.corners()}
        chart = _chart(replace(grid, machine=free), corners)
    except NotCalculatedError:
        return None
    if chart is None:
        return None
    evaporating, condensing, settled = _newton(grid, chart, corners)
    values = chart.along(grid.surroundings).values(evaporating, condensing)
    found = {"evaporating": evaporating, "condensing": condensing, **dict(zip(COLUMNS, values, strict=True))}
    control, limit = machine.head_pressure, machine.greatest_evaporating
    if control is not None:
        settled &= condensing >= control.hold
    if limit is not None:
        settled &= evaporating <= limit
    return found, settled


def _chart(grid: _Grid, corners: dict[tuple[int, int], Balance]) -> _Chart | None:
    """The chart with as few terms as repeat the corners; None where none do."""
    for terms in AROUND_TERMS:
        chart = _Chart.of(grid, list(corners.values()), terms)
        if all(chart.repeats(b, grid.surroundings[j]) for (_, j), b in corners.items()):
            return chart
        if chart.series.shape[1] == 1:
            return None
    return None


def _newton(grid: _Grid, chart: _Chart, corners: dict[tuple[int, int], Balance]) -> tuple[Array, Array, Flags]:
    """Evaporating and condensing temperature (K) of all points, and which of them have settled inside the chart."""
    source = np.array([s.temperature for s in grid.sources])[:, None]
    sink = np.array([s.temperature for s in grid.sinks])[None, :]
    rate = np.array([grid.machine.condenser.heat_per_kelvin(s) for s in grid.sinks])[None, :]
    low = np.array([grid.machine.evaporator.heat_per_kelvin(s) for s in grid.sources])[:, None]
    series = chart.along(grid.surroundings)
    ends = np.array([[b.evaporating_temperature, b.condensing_temperature or np.nan] for b in corners.values()])
    plane = np.array([[1.0, grid.sources[i].temperature, grid.sinks[j].temperature] for i, j in corners])
    slopes = np.linalg.lstsq(plane, ends, rcond=None)[0]
    x, y = (a + b * source + c * sink for a, b, c in slopes.T)
    moved = np.full(x.shape, np.inf)
    for _ in range(15):
        x, y = chart.inside(x, y)
        value, by_x, by_y = series.slopes(x, y)
        given, by_drive = _given(grid, value[2])
        first, second = given - value[0], rate * (value[3] - sink) - value[1]
        a, b = by_drive * by_x[2] - by_x[0], by_drive * by_y[2] - by_y[0]
        c, d = rate * by_x[3] - by_x[1], rate * by_y[3] - by_y[1]
        a, b, first = a / low, b / low, first / low
        c, d, second = c / rate, d / rate, second / rate
        determinant = a * d - b * c
        dx, dy = (b * second - d * first) / determinant, (c * first - a * second) / determinant
        x, y = x + dx, y + dy
        moved = np.maximum(np.abs(dx), np.abs(dy))
        if float(np.nanmax(moved)) < ENOUGH:
            break
    return x, y, (moved < ENOUGH) & chart.holds(x, y)


def _given(grid: _Grid, drive: Array) -> tuple[Array, Array]:
    """Heat (W) that the sources give to refrigerant at `drive` (K), and its derivative: dry, wet or liquid."""
    evaporator, streams = grid.machine.evaporator, grid.sources
    if evaporator.air_share is None or any(s.air is None for s in streams):
        per_kelvin = np.array([evaporator.heat_per_kelvin(s) for s in streams])[:, None]
        warm = np.array([s.temperature for s in streams])[:, None]
        return per_kelvin * (warm - drive), np.broadcast_to(-per_kelvin, drive.shape)
    conductances = np.array([evaporator.conductance_at(s.volume_flow) for s in streams])
    here, near = coil_heats(streams, np.stack((drive, drive - 1e-3)), conductances, evaporator.air_share)
    return here, (here - near) / 1e-3


@dataclass(frozen=True)
class _Series:
    """The chart at the surroundings of each sink; `series` has the shape (sinks, columns, terms, terms)."""

    ends: tuple[Ends, Ends]
    series: Array

    def values(self, evaporating: Array, condensing: Array) -> Array:
        """The columns at points of shape (any, sinks): shape (columns, any, sinks)."""
        return self._summed(self.series, evaporating, condensing)

    def slopes(self, evaporating: Array, condensing: Array) -> tuple[Array, Array, Array]:
        """The columns of the balance and their derivatives by both dew temperatures."""
        used = self.series[:, :BALANCED]
        along = [_derived(used, axis) * (2.0 / (b - a)) for axis, (a, b) in zip((2, 3), self.ends, strict=True)]
        found = self._summed(np.concatenate((used, *along), axis=1), evaporating, condensing)
        return found[:BALANCED], found[BALANCED : 2 * BALANCED], found[2 * BALANCED :]

    def _summed(self, series: Array, evaporating: Array, condensing: Array) -> Array:
        x, y = (_terms(v, ends, TERMS) for v, ends in zip((evaporating, condensing), self.ends, strict=True))
        return np.asarray(np.einsum("ijqe,ije->qij", np.einsum("jqec,ijc->ijqe", series, y), x))


@dataclass(frozen=True)
class _Chart:
    """Series of `COLUMNS` over evaporating, condensing and surrounding temperature between `ends` (K).

    `series` has the shape (columns, terms around, terms, terms).
    """

    ends: tuple[Ends, Ends, Ends]
    series: Array

    @classmethod
    def of(cls, grid: _Grid, corners: Sequence[Balance], around_terms: int) -> _Chart:
        """Chart the cycle over the range of the corners and a little more.

        Raises:
            NotCalculatedError: the cycle cannot be calculated all over that range.
        """
        first = _ends([b.evaporating_temperature for b in corners], 0.5)
        second = _ends([b.condensing_temperature or np.nan for b in corners], 0.5)
        third = _ends(grid.surroundings, 0.0)
        heated = grid.machine.suction_line.heating_share != 0.0 and third[1] > third[0]
        levels = _spread(third, around_terms) if heated else [third[0]]
        table = np.empty((len(COLUMNS), len(levels), TERMS, TERMS))
        for k, around in enumerate(levels):
            circuit = _Circuit(grid.machine, grid.media(0, 0, around))
            near: State | None = None
            for j, condensing in enumerate(_spread(second, TERMS)):  # compressions to one pressure lie near each other
                for i, evaporating in enumerate(_spread(first, TERMS)):
                    table[:, k, i, j], near = _row(circuit, evaporating, condensing, near)
        for axis in (1, 2, 3):
            table = np.moveaxis(series_at_nodes(np.moveaxis(table, axis, -1)), -1, axis)
        return cls((first, second, third), table)

    def along(self, surroundings: Sequence[float]) -> _Series:
        """The chart at these temperatures (K) around the suction line."""
        terms = _terms(np.array(surroundings), self.ends[2], self.series.shape[1])
        return _Series(self.ends[:2], np.einsum("jk,qkec->jqec", terms, self.series))

    def inside(self, evaporating: Array, condensing: Array) -> tuple[Array, Array]:
        """Temperatures held inside the chart while a solution is sought."""
        return np.clip(evaporating, *self.ends[0]), np.clip(condensing, *self.ends[1])

    def holds(self, evaporating: Array, condensing: Array) -> Flags:
        """Which points lie inside the chart."""
        (a, b), (c, d) = self.ends[:2]
        return (a <= evaporating) & (evaporating <= b) & (c <= condensing) & (condensing <= d)

    def repeats(self, balance: Balance, around: float) -> bool:
        """Whether the series gives the heat of a balance that was found without it."""
        assert balance.condensing_temperature is not None
        place = (np.array([[v]]) for v in (balance.evaporating_temperature, balance.condensing_temperature))
        found = dict(zip(COLUMNS, self.along((around,)).values(*place)[:, 0, 0].tolist(), strict=True))
        wanted = {"source": balance.heat_from_source, "sink": balance.heat_to_sink, "power": balance.compression.power}
        return all(abs(found[name] / value - 1) < EXACT for name, value in wanted.items())


def _terms(value: Array, ends: Ends, count: int) -> Array:
    """Chebyshev polynomials of `value` between `ends`, along a new last axis."""
    low, high = ends
    scaled = (2.0 * value - low - high) / (high - low) if count > 1 else np.zeros_like(value)
    return np.asarray(chebyshev.chebvander(scaled, count - 1))


def _row(
    circuit: _Circuit, evaporating: float, condensing: float, near: State | None
) -> tuple[tuple[float, ...], State]:
    """`COLUMNS` at one pair of dew temperatures, and the discharge; `near` is a neighbouring one."""
    compression, source, sink = circuit.cycle(evaporating, condensing)
    pressure = circuit.high_side(evaporating, condensing)[0]
    discharge = circuit.machine.refrigerant.vapour_from_enthalpy(pressure, compression.discharge_enthalpy, near)
    drives = circuit.source_drive(evaporating, condensing), circuit.sink_drive(condensing)
    return (source, sink, *drives, compression.power, compression.flow, discharge.T), discharge


def _ends(values: Sequence[float], more: float) -> Ends:
    low, high = min(values), max(values)
    slack = more * (1.0 + 0.1 * (high - low))
    return low - slack, high + slack


def _spread(ends: Ends, count: int) -> list[float]:
    low, high = ends
    return [float(v) for v in 0.5 * (low + high) + 0.5 * (high - low) * nodes(count)]


def _derived(series: Array, axis: int) -> Array:
    """The series of the derivative by the scaled variable of `axis`, with as many terms."""
    padded = np.zeros_like(series)
    inner = chebyshev.chebder(series, axis=axis)
    padded[tuple(slice(0, n) for n in inner.shape)] = inner
    return padded
