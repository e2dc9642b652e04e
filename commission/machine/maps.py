"""A whole map of operating points at once: sources by sinks. SI units.

The cycle is charted once (see `chart`), and all points are balanced on it together by Newton's method, with the same
equations as a single point. The chart is checked against the cycle itself at the corners of the map. What does not lie
on one smooth branch (head pressure held, suction pressure limited, a fixed restriction, a flow set by its outlet) is
operated point by point.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from commission.errors import NotCalculatedError
from commission.machine.chart import TERMS, Chart, Ends
from commission.machine.circuit import PINCH, ROUNDING, SMALL
from commission.machine.condenser_circuit import COLDEST, FREE, CondenserCircuit
from commission.machine.exchanger import DEPTH, LEAST_WETTED
from commission.machine.operating_point import Balance, Media
from commission.machine.single_stage import SingleStage
from commission.machine.streams import Stream
from commission.machine.wet_air import coil_heats
from commission.properties.lines import Array

Flags = np.ndarray[tuple[int, ...], np.dtype[np.bool_]]
FEW, WIDE = 3, 2.0
"""Terms of the chart in what the suction gas is above evaporation, one more from a range of so many kelvin; two more
where too few."""
EXACT = 5e-7
"""How well, relative, the chart must repeat the cycle at the corners of the map."""
ENOUGH = 1e-8
"""Newton's method ends when no temperature moves by more than this, in K."""
STEP = 1e-3
"""Step of the differences for Newton's method, in K."""
FOUND = ("source", "sink", "power", "flow", "discharge")


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
    columns = {name: np.full(shape, np.nan) for name in ("evaporating", "condensing", *FOUND)}
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
        heats = near.heat_from_source, near.heat_to_sink
        others = compression.power, compression.flow, point.discharge_temperature
        columns["evaporating"][place] = near.evaporating_temperature
        columns["condensing"][place] = near.condensing_temperature
        for name, value in zip(FOUND, (*heats, *others), strict=True):
            columns[name][place] = value
        regimes[place[0]][place[1]] = near.regime
    return because


def _balanced(grid: _Grid) -> tuple[dict[str, Array], Flags] | None:
    """All points on the free branch together, and which of them hold; None where there is no one smooth branch."""
    machine = grid.machine
    smooth = (
        machine.restriction is None and machine.suction_regulator is None and not (machine.flash or machine.exchanger)
    )
    if not smooth or len(grid.sources) * len(grid.sinks) < 3 * TERMS:
        return None
    if len({s.air is None for s in grid.sources}) > 1:
        return None
    if any(s.outlet_wanted is not None for s in (*grid.sources, *grid.sinks)) or any(s.by_outlet for s in grid.sources):
        return None
    free = replace(machine, head_pressure=None, greatest_evaporating=None, greatest_feed=None)
    grid = replace(grid, machine=free)
    try:
        corners = {place: free.balance(grid.media(*place)) for place in grid.corners()}
        found = _chart(grid, corners)
    except NotCalculatedError:
        return None
    if found is None:
        return None
    low, condensing, settled = _newton(found, corners)
    values = found.at(low, condensing)
    values["discharge"] = found.discharge(condensing, values["given"] / values["flow"])
    settled &= (values["inside"] > 0) & (values["dry"] < 1 - LEAST_WETTED)
    control, limit = machine.head_pressure, machine.greatest_evaporating
    if control is not None:
        settled &= condensing >= control.hold
    if limit is not None:
        settled &= values["evaporating"] <= limit
    if machine.greatest_feed is not None:
        settled &= False
    return {"condensing": condensing, **{k: values[k] for k in ("evaporating", *FOUND)}}, settled


def _chart(grid: _Grid, corners: dict[tuple[int, int], Balance]) -> _Balances | None:
    """The equations on a chart with as few terms as repeat the corners; None where none do."""
    found, cycles, cooled = list(corners.values()), [], []
    for place, balance in corners.items():
        circuit = CondenserCircuit(grid.machine, grid.media(*place))
        second = circuit.second(balance)
        cycles.append(circuit.around(balance.evaporating_temperature, second, balance.superheat))
        cooled.append(circuit.subcooled(second))
    bent = 0.3 if grid.machine.suction_line.heating_share else 0.1  # between the corners a warm line may pass them
    ends = (
        _ends([b.evaporating_temperature for b in found], 0.5),
        _ends([b.condensing_temperature or np.nan for b in found], 0.5),
        _ends([c.suction.T - b.evaporating_temperature for c, b in zip(cycles, found, strict=True)], bent),
        _ends([b.superheat for b in found], 0.1),
        _ends(cooled, 0.1),
    )
    few = FEW if ends[2][1] - ends[2][0] < WIDE else FEW + 1
    for terms in (few, few + 2):
        balances = _Balances(grid, Chart.of(circuit, ends, terms), ends)
        if _repeats(balances, corners):
            return balances
        if ends[2][0] == ends[2][1]:
            return None
    return None


def _repeats(found: _Balances, corners: dict[tuple[int, int], Balance]) -> bool:
    """Whether the chart gives the heat of balances that were found without it."""
    shape = len(found.grid.sources), len(found.grid.sinks)
    first = next(iter(corners.values()))
    low, condensing = np.full(shape, first.unknowns[0]), np.full(shape, first.condensing_temperature or np.nan)
    for place, balance in corners.items():
        low[place], condensing[place] = balance.unknowns[0], balance.condensing_temperature
    at = found.at(low, condensing)
    return all(
        abs(at[name][place] / value - 1) < EXACT
        for place, b in corners.items()
        for name, value in (
            ("source", b.heat_from_source), ("sink", b.heat_to_sink), ("power", b.compression.power),
        )
    )  # fmt: skip


def _newton(found: _Balances, corners: dict[tuple[int, int], Balance]) -> tuple[Array, Array, Flags]:
    """The unknown of the low side (see `positive`) and the condensing temperature (K) of all points, and which of
    them have settled."""
    grid = found.grid
    ends = np.array([[b.unknowns[0], b.condensing_temperature or np.nan] for b in corners.values()])
    plane = np.array([[1.0, grid.sources[i].temperature, grid.sinks[j].temperature] for i, j in corners])
    slopes = np.linalg.lstsq(plane, ends, rcond=None)[0]
    source = np.array([s.temperature for s in grid.sources])[:, None]
    sink = np.array([s.temperature for s in grid.sinks])[None, :]
    x, y = (a + b * source + c * sink for a, b, c in slopes.T)
    moved = np.full(x.shape, np.inf)
    for _ in range(20):
        y = np.clip(y, *found.ends[1])
        first, second = found.gaps(np.stack((x, x - STEP, x)), np.stack((y, y, y - STEP)))
        a, b = (first[0] - first[1]) / STEP, (first[0] - first[2]) / STEP
        c, d = (second[0] - second[1]) / STEP, (second[0] - second[2]) / STEP
        determinant = a * d - b * c
        dx = (b * second[0] - d * first[0]) / determinant
        dy = (c * first[0] - a * second[0]) / determinant
        x, y = x + dx, y + dy
        moved = np.maximum(np.abs(dx), np.abs(dy))
        if float(np.nanmax(moved)) < ENOUGH:
            break
    return x, y, moved < ENOUGH


@dataclass(frozen=True)
class _Balances:
    """The equations of the balance for all points at once; arrays have the shape (..., sources, sinks).

    `ends` are those of the chart: evaporating and condensing temperature, suction gas above evaporation, superheat,
    subcooling.
    """

    grid: _Grid
    chart: Chart
    ends: tuple[Ends, ...]

    @cached_property
    def _sink(self) -> tuple[Array, Array, Array]:
        """Known temperatures (K) of the sinks, W for each kelvin of difference, and rise by outlet for each kelvin."""
        condenser, sinks = self.grid.machine.condenser, self.grid.sinks
        rates = [condenser.heat_per_kelvin(s) for s in sinks]
        rises = [r / s.capacity_rate if s.by_outlet else 0.0 for r, s in zip(rates, sinks, strict=True)]
        return np.array([s.temperature for s in sinks]), np.array(rates), np.array(rises)

    @cached_property
    def _source(self) -> tuple[Array, Array, Array, Array]:
        """Known temperatures (K) of the sources, capacity rates, conductances and W for each kelvin, as columns."""
        evaporator, sources = self.grid.machine.evaporator, self.grid.sources
        figures = (
            [s.temperature for s in sources],
            [s.capacity_rate for s in sources],
            [evaporator.conductance_at(s.volume_flow) for s in sources],
            [evaporator.heat_per_kelvin(s) for s in sources],
        )
        a, b, c, d = (np.array(f)[:, None] for f in figures)
        return a, b, c, d

    def at(self, low: Array, condensing: Array) -> dict[str, Array]:
        """`FOUND` and what the balance needs beside them, at the unknown of the low side and the dew point (K)."""
        machine, line, chart = self.grid.machine, self.grid.machine.suction_line, self.chart
        warm = self._source[0]
        evaporating = np.clip(warm - self.difference(low), *self.ends[0])
        difference = warm - evaporating
        superheat = _within_reach(machine.superheat, difference, machine.superheat_share)
        around = np.array(self.grid.surroundings)
        excess = superheat + line.heating_share * (around - evaporating - superheat) + line.warming
        flow, power, given = chart.compression.at(condensing, excess, evaporating)
        outlet, gas = chart.gas.at(evaporating, superheat)
        bubble = condensing if chart.bubble is None else chart.bubble.at(condensing)[0]
        sink_drive, subcooling = self._high(condensing, bubble)
        liquid = chart.liquid.at(condensing, subcooling)[0]
        source_drive = evaporating
        if chart.drive is not None:
            mean = warm - chart.drive.at(evaporating, liquid)[0]
            source_drive = warm - _between(difference, 2.0 * mean - difference)
        zone = np.sqrt(np.maximum(difference * (difference - superheat), 1e-12))
        return {
            "evaporating": evaporating,
            "source": flow * (outlet - liquid),
            "sink": given - flow * liquid,
            "power": power,
            "flow": flow,
            "given": given,
            "sink_drive": sink_drive,
            "source_drive": source_drive,
            "gas": flow * gas,
            "dry": flow * gas / (machine.evaporator.gas_share * self._source[2] * zone),
            "inside": self._inside(evaporating, condensing, excess, superheat, subcooling),
        }

    def discharge(self, condensing: Array, enthalpy: Array) -> Array:
        """Temperature (K) at the discharge by dew point (K) and enthalpy there (J/kg)."""
        return np.asarray(self.chart.discharge.at(condensing, enthalpy - self.chart.dew.at(condensing)[0])[0])

    def _high(self, condensing: Array, bubble: Array) -> tuple[Array, Array]:
        """Temperature that drives the condensers (K), and subcooling (K)."""
        machine, (known, _, rise) = self.grid.machine, self._sink
        drive = condensing
        if machine.refrigerant.is_blend:
            by_outlet = np.array([s.by_outlet for s in self.grid.sinks])
            mean = _between(bubble - known, condensing - known)
            drive = np.where(by_outlet, 0.5 * (condensing + bubble), known + mean)
        if machine.subcooling_share is None:
            return drive, np.full(bubble.shape, machine.subcooling)
        entering = np.where(rise > 0, np.maximum(known - rise * (drive - known), COLDEST), known)
        return drive, _within_reach(machine.subcooling, bubble - entering, machine.subcooling_share)

    def _inside(self, *values: Array) -> Flags:
        """Which points lie inside the chart."""
        found = np.ones(values[0].shape, dtype=np.bool_)
        for value, (low, high) in zip(values, self.ends, strict=True):
            found &= (low - 1e-9 <= value) & (value <= high + 1e-9)
        return found

    def difference(self, low: Array) -> Array:
        """Inlet of the source over evaporation (K) that goes with the unknown of the low side; see `positive`."""
        far = np.hypot(low, 2.0 * SMALL)
        return np.where(low > 0, 0.5 * (low + far), 2.0 * SMALL**2 / (far + np.abs(low)))

    def gaps(self, low: Array, condensing: Array) -> tuple[Array, Array]:
        """`low_gaps` and `sink_gap` of the circuit for arrays, in kelvin of the exchangers."""
        known, rate, conductance, per_kelvin = self._source
        value, machine = self.at(low, condensing), self.grid.machine
        wetted = np.maximum(1.0 - value["dry"], LEAST_WETTED)
        units = wetted * conductance / rate
        if machine.evaporator.air_share is not None and all(s.air is not None for s in self.grid.sources):
            share = machine.evaporator.air_share
            given = coil_heats(self.grid.sources, value["source_drive"], wetted * conductance, share)
        else:
            given = rate * -np.expm1(-units) * (known - value["source_drive"])
        given = given + value["gas"] * np.expm1(-units)
        given = given - np.maximum(LEAST_WETTED - 1.0 + value["dry"], 0.0) * conductance * DEPTH
        sink, sink_rate, _ = self._sink
        return (
            (given - value["source"] + value["gas"]) / per_kelvin,
            value["sink_drive"] - sink - value["sink"] / sink_rate,
        )


def _between(narrow: Array, wide: Array) -> Array:
    """`between` for arrays."""
    inside = np.sqrt(np.maximum(narrow, PINCH * wide) * wide)
    return np.where(narrow >= PINCH * wide, inside, 0.5 * (narrow / PINCH**0.5 + PINCH**0.5 * wide))


def _within_reach(setting: float, difference: Array, share: float) -> Array:
    """`within_reach` for arrays."""
    allowed = share * np.maximum(difference, 0.0)
    if setting == math.inf:
        return np.asarray(allowed)
    low, high = (1 - ROUNDING) * setting, (1 + ROUNDING) * setting
    over = np.clip(allowed, low, high) - low
    return np.where(allowed < low, allowed, np.clip(allowed, low, high) - over**2 / (4 * ROUNDING * setting))


def _ends(values: Sequence[float], more: float) -> Ends:
    low, high = min(values), max(values)
    if more and high - low < 1e-12 and more < 0.5:
        return low, low
    slack = more * (1.0 + 0.1 * (high - low))
    return low - slack, high + slack
