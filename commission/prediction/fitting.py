"""Fit of unknown levels to rated points, and refits with each assumption moved by its standard uncertainty.

With as many data as levels the fit is exact and the assumptions keep their values. With more data the assumptions
become unknowns too, held by their ranges as prior knowledge (weighted least squares; JCGM 100:2008 for ranges as
rectangular distributions, Gauss-Newton for the minimum). In both cases the uncertainty of any later prediction is the
sum over causes of (prediction of the machine refitted with that cause moved by one standard uncertainty, minus the
prediction of the fitted machine) squared.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from commission.description import Assumption
from commission.errors import NotCalculatedError
from commission.machine import Transcritical, conductance_for
from commission.prediction.building import (
    SINK_HUMIDITY,
    Levels,
    Plan,
    Rated,
    air_share,
    build,
    condenser_conductance,
    evaporator_conductance,
    humidity,
    media,
    source_conductance,
    stream,
)
from commission.prediction.facts import Facts, Used
from commission.prediction.rated import (
    MARGIN,
    Case,
    Datum,
    cases_of,
    rated_of,
    reference,
    with_data,
)
from commission.prediction.simulating import Seen, observed, simulate

SCATTER = "scatter of rated points"
Array = np.ndarray[tuple[int, ...], np.dtype[np.float64]]


@dataclass(frozen=True)
class Variant:
    """A machine refitted with one cause moved by one standard uncertainty.

    `sign` is -1 where the cause was moved down because its range ends at its value; effects are given per +1.
    """

    cause: str
    plan: Plan
    sign: float


@dataclass(frozen=True)
class Fit:
    """The fitted machine and what its uncertainty rests on.

    `scatter` is the relative standard deviation of capacity and power about the fit (n - p degrees of freedom `dof`),
    0 where the fit is exact. `misses` lists every datum with the relative miss of the fit.
    """

    plan: Plan
    levels: Levels
    variants: tuple[Variant, ...]
    used: Mapping[str, Assumption]
    values: Mapping[str, float]
    cases: tuple[Case, ...]
    points: tuple[Seen, ...]
    scatter: float
    dof: int
    misses: tuple[tuple[Datum, float], ...]


@dataclass(frozen=True)
class _Problem:
    """Everything fixed during one fit: which levels are free and which assumptions may move."""

    facts: Facts
    cases: tuple[Case, ...]
    reference: int
    fixed_compressor: bool
    fixed_evaporator: bool
    fixed_condenser: bool
    loose: tuple[str, ...]

    @property
    def free(self) -> tuple[int, ...]:
        """Numbers of the levels (in the order of `Levels`) that the fit may move."""
        return (
            *(() if self.fixed_compressor else (0, 1)),
            *(() if self.fixed_condenser else (2,)),
            *(() if self.fixed_evaporator else (3,)),
        )


def move(assumption: Assumption) -> float:
    """The step of one standard uncertainty, downwards where the range ends at the value."""
    u = assumption.standard_uncertainty
    return u if assumption.high - assumption.value >= assumption.value - assumption.low else -u


def fit_system(facts: Facts) -> Fit:
    """Fit the levels of one system to its rated points.

    Raises:
        NotCalculatedError: too little is stated, or what is stated cannot be; the message says which.
    """
    values = Used(facts.nominal)
    problem, start = _prepare(facts, values)
    data = sum(len(c.data) for c in problem.cases)
    if data > len(problem.free):
        return _fit_table(problem, start, values)
    levels, plan, points = _exact(problem, values, start, None)
    return _finish(problem, levels, plan, points, values, _exact_variants(problem, values, levels, points), 0.0, 0)


def _prepare(facts: Facts, a: Mapping[str, float]) -> tuple[_Problem, Levels]:
    """Data, free levels, and levels to start from; assumptions become data where too little is stated."""
    cases = list(cases_of(facts))
    middle = reference(tuple(cases))
    case = cases[middle]
    rated = rated_of(facts, a, case)
    evaporator = _evaporator(facts, a, rated, case)
    condenser = condenser_conductance(facts, a, rated.sink_flow)
    published = facts.system.compressor.polynomial is not None and not any(c.data for c in cases)
    missing = _missing(facts, cases, evaporator is None, condenser is None, published)
    cases[middle] = with_data(case, tuple(missing))
    problem = _Problem(facts, tuple(cases), middle, published, evaporator is not None, condenser is not None, ())
    return problem, _start(problem, a, rated)


def _evaporator(facts: Facts, a: Mapping[str, float], rated: Rated, case: Case) -> float | None:
    known = evaporator_conductance(facts, a, rated.source_flow)
    if known is not None or case.unit is None:
        return known
    medium = stream(
        rated.source_temperature, rated.source_flow, facts.source_liquid, humidity(facts, a), facts.pressure
    )
    return source_conductance(rated.source_heat, a["source_minus_evaporating"], medium, air_share(facts, a))


def _missing(facts: Facts, cases: Sequence[Case], evaporator: bool, condenser: bool, published: bool) -> list[Datum]:
    """Assumptions that stand in for data that nobody states, at the reference case."""
    stated = {d.of for c in cases for d in c.data}
    extra = []

    def assume(of: str, key: str) -> None:
        one = facts.assumptions[key]
        extra.append(Datum(of, one.value, 0.02 * (one.standard_uncertainty or 1.0), f"assumption {key}", key))

    compressor = facts.system.compressor
    if evaporator and "evaporating_temperature" not in stated:
        assume("source_minus_evaporating", "source_minus_evaporating")
    if condenser and "condensing_temperature" not in stated:
        assume("condensing_minus_sink_inlet", sink_difference(facts))
    if published:
        return extra
    if not {"power_input", "compressor_power"} & stated and not {"cooling_capacity", "heating_capacity"} <= stated:
        value, origin = compressor.isentropic_efficiency, facts.origin("compressor.isentropic_efficiency")
        if value is not None:
            extra.append(Datum("isentropic_efficiency", value, 0.01 * value, origin))
        else:
            assume("isentropic_efficiency", "compressor_isentropic_efficiency")
    if not {"cooling_capacity", "heating_capacity", "refrigerant_flow"} & stated:
        value, origin = compressor.volumetric_efficiency, facts.origin("compressor.volumetric_efficiency")
        if value is not None:
            extra.append(Datum("volumetric_efficiency", value, 0.01 * value, origin))
        else:
            assume("volumetric_efficiency", "compressor_volumetric_efficiency")
    return extra


def _start(problem: _Problem, a: Mapping[str, float], rated: Rated) -> Levels:
    """Levels from the reference point with dew points as stated or assumed, without any balance."""
    facts, case = problem.facts, problem.cases[problem.reference]
    given = {d.of: d.value for d in case.data}
    evaporating, condensing = _dew_points(problem, a, rated, given)
    plan = build(facts, a, Levels(1.0, 1.0, 1.0, 1.0), rated)
    conditions = {**case.conditions, "heat_source_inlet_temperature": rated.source_temperature}
    compression, source, _ = plan.machine.cycle(evaporating, condensing, media(facts, plan, conditions))
    if isinstance(plan.machine, Transcritical):
        return _gas_cooler_start(problem, a, rated, plan, evaporating, condensing)
    if problem.fixed_compressor:
        heat = source + compression.power
        return Levels(1.0, 1.0, *_conductances(problem, a, rated, evaporating, condensing, heat))
    swept = rated.source_heat / source
    power = given.get("power_input")
    if power is None and "cooling_capacity" not in given and "heating_capacity" not in given:
        power = rated.sink_heat - rated.source_heat
    counted = plan.fans.counted(1.0) if "power_input" in given else 0.0
    if power is not None and power <= counted:
        raise NotCalculatedError(
            f"the power input at {case.origin} ({power / 1e3:.2f} kW) is no more than the fans it is said to include "
            f"({counted / 1e3:.2f} kW): nothing is left for the compressor"
        )
    isentropic = swept * compression.power / (power - counted) if power else 0.65
    heat = rated.source_heat + swept * compression.power / isentropic
    return Levels(swept, isentropic, *_conductances(problem, a, rated, evaporating, condensing, heat))


def _gas_cooler_start(
    problem: _Problem, a: Mapping[str, float], rated: Rated, plan: Plan, evaporating: float, outlet: float
) -> Levels:
    """Levels of a transcritical machine: the gas cooler's conductance follows from its outlet temperature."""
    facts, case = problem.facts, problem.cases[problem.reference]
    machine = plan.machine
    assert isinstance(machine, Transcritical)
    conditions = {**case.conditions, "heat_source_inlet_temperature": rated.source_temperature}
    around = media(facts, plan, conditions)
    compression, source, _ = machine.cycle(evaporating, outlet, around)
    swept = 1.0 if problem.fixed_compressor else rated.source_heat / source
    power = {d.of: d.value for d in case.data}.get("power_input")
    counted = plan.fans.counted(1.0)
    isentropic = swept * compression.power / (power - counted) if power is not None and power > counted else 0.65
    if problem.fixed_compressor:
        isentropic = 1.0
    small = replace(around, sink=replace(around.sink, capacity_rate=around.sink.capacity_rate / swept))
    slow = build(facts, a, Levels(1.0, isentropic, 1.0, 1.0), rated).machine
    assert isinstance(slow, Transcritical)
    conductance = swept * slow.cycle_conductance(evaporating, outlet, small)
    evaporator = _evaporator(facts, a, rated, case)
    if evaporator is None:
        difference = rated.source_temperature - evaporating
        evaporator = source_conductance(rated.source_heat, difference, around.source, air_share(facts, a))
    return Levels(swept, isentropic, conductance, evaporator)


def _dew_points(
    problem: _Problem, a: Mapping[str, float], rated: Rated, given: Mapping[str, float]
) -> tuple[float, float]:
    """Evaporating and condensing dew points (K) at the reference point, as stated or assumed."""
    facts, case = problem.facts, problem.cases[problem.reference]

    def assumed(of: str, key: str) -> float:
        return given[of] if of in given else a[key]

    if case.unit is not None:
        evaporating = case.unit.evaporating
    elif "evaporating_temperature" in given:
        evaporating = given["evaporating_temperature"]
    else:
        evaporating = rated.source_temperature - assumed("source_minus_evaporating", "source_minus_evaporating")
        evaporating += 0.35 * _glide(facts, evaporating)
    condensing = given.get("condensing_temperature")
    if condensing is None:
        difference = 12.0 if problem.fixed_condenser else assumed("condensing_minus_sink_inlet", sink_difference(facts))
        condensing = rated.sink_temperature + difference
        condensing += 0.5 * _glide(facts, condensing)
    return evaporating, condensing


def sink_difference(facts: Facts) -> str:
    """Key of the assumption that sizes a condenser or a gas cooler of which nothing is stated."""
    return "gas_cooler_approach" if facts.transcritical else "condensing_minus_sink_inlet"


def _glide(facts: Facts, temperature: float) -> float:
    """Dew point minus bubble point in K at the dew pressure of `temperature`; 0 for a pure fluid."""
    fluid = facts.fluid
    return temperature - fluid.bubble_temperature(fluid.dew(temperature).p) if fluid.is_blend else 0.0


def _conductances(
    problem: _Problem, a: Mapping[str, float], rated: Rated, evaporating: float, condensing: float, heat: float
) -> tuple[float, float]:
    facts, case = problem.facts, problem.cases[problem.reference]
    condenser = condenser_conductance(facts, a, rated.sink_flow)
    if condenser is None:
        medium = stream(rated.sink_temperature, rated.sink_flow, facts.sink_liquid, SINK_HUMIDITY, facts.pressure)
        condenser = conductance_for(
            heat, condensing - 0.5 * _glide(facts, condensing) - rated.sink_temperature, medium.capacity_rate
        )
    evaporator = _evaporator(facts, a, rated, case)
    if evaporator is None:
        medium = stream(
            rated.source_temperature, rated.source_flow, facts.source_liquid, humidity(facts, a), facts.pressure
        )
        difference = rated.source_temperature - evaporating + 0.35 * _glide(facts, evaporating)
        evaporator = source_conductance(rated.source_heat, difference, medium, air_share(facts, a))
    return condenser, evaporator


def _plan(problem: _Problem, a: Mapping[str, float], levels: Levels) -> Plan:
    """The machine with these free levels; conductances that are rated follow the assumption values."""
    facts, case = problem.facts, problem.cases[problem.reference]
    rated = rated_of(facts, a, case)
    evaporator = _evaporator(facts, a, rated, case) if problem.fixed_evaporator else levels.evaporator
    condenser = condenser_conductance(facts, a, rated.sink_flow) if problem.fixed_condenser else levels.condenser
    assert evaporator is not None
    assert condenser is not None
    if problem.fixed_compressor:
        flow = 1 + a["compressor_flow_departure"]
        levels = replace(levels, swept_flow=flow, isentropic=flow / (1 + a["compressor_power_departure"]))
    return build(facts, a, replace(levels, evaporator=evaporator, condenser=condenser), rated)


def _gaps(
    problem: _Problem, a: Mapping[str, float], levels: Levels, starts: Sequence[Seen] | None
) -> tuple[Array, Plan, tuple[Seen, ...]]:
    """(calculated - stated) / sigma of every datum; assumed data follow their assumption value."""
    plan = _plan(problem, a, levels)
    gaps, points = [], []
    for n, case in enumerate(problem.cases):
        point = simulate(problem.facts, a, plan, case, starts[n] if starts else None)
        points.append(point)
        for datum in case.data:
            wanted = a[datum.assumption] if datum.assumption is not None else datum.value
            gaps.append((observed(point, datum.of) - wanted) / datum.sigma)
    return np.array(gaps), plan, tuple(points)


def _exact(
    problem: _Problem,
    a: Mapping[str, float],
    start: Levels,
    jacobian: list[Array] | None,
    starts: Sequence[Seen] | None = None,
) -> tuple[Levels, Plan, tuple[Seen, ...]]:
    """Newton for as many levels as data; `jacobian` (a list of one, or empty) is reused and refreshed as needed."""
    logs = np.array(start.logs())
    store = jacobian if jacobian is not None else []
    free = list(problem.free)
    gaps, plan, points = _gaps(problem, a, start, starts)
    for trial in range(30):
        if float(np.abs(gaps).max(initial=0.0)) < 1e-6:
            return Levels.from_logs(tuple(logs)), plan, points
        if not store or trial in (6, 12, 18):
            store[:] = [_level_jacobian(problem, a, logs, gaps, points)]
        step = np.linalg.lstsq(store[0], -gaps, rcond=None)[0]
        step *= min(1.0, 0.4 / max(float(np.abs(step).max()), 1e-12))
        logs[free] += step
        gaps, plan, points = _gaps(problem, a, Levels.from_logs(tuple(logs)), points)
    worst = _names(problem)[int(np.abs(gaps).argmax())]
    raise NotCalculatedError(f"no machine of this kind reproduces the rated point: {worst} cannot be reached")


def _names(problem: _Problem) -> list[str]:
    return [f"{d.of.replace('_', ' ')} ({d.origin})" for c in problem.cases for d in c.data]


def _level_jacobian(
    problem: _Problem, a: Mapping[str, float], logs: Array, gaps: Array, starts: Sequence[Seen]
) -> Array:
    columns = []
    for n in problem.free:
        moved = logs.copy()
        moved[n] += 2e-3
        columns.append((_gaps(problem, a, Levels.from_logs(tuple(moved)), starts)[0] - gaps) / 2e-3)
    return np.column_stack(columns)


def _moved(facts: Facts, values: Mapping[str, float], key: str) -> dict[str, float]:
    return {**values, key: values[key] + move(facts.assumptions[key])}


def _uncertain(facts: Facts, used: Used) -> list[str]:
    return [k for k in facts.assumptions if k in used.keys_used and facts.assumptions[k].standard_uncertainty > 0]


def _exact_variants(problem: _Problem, values: Used, levels: Levels, points: tuple[Seen, ...]) -> tuple[Variant, ...]:
    variants, store = [], list[Array]()
    for key in _uncertain(problem.facts, values):
        a = _moved(problem.facts, values.plain(), key)
        try:
            _, plan, _ = _exact(problem, a, levels, store, points)
        except NotCalculatedError as error:
            raise NotCalculatedError(
                f"with the assumption {key} at {a[key]:.4g} instead of {values[key]:.4g} (within its range) the rated "
                f"point cannot be: {error}"
            ) from None
        variants.append(Variant(key, plan, math.copysign(1.0, move(problem.facts.assumptions[key]))))
    return tuple(variants)


def _finish(
    problem: _Problem,
    levels: Levels,
    plan: Plan,
    points: tuple[Seen, ...],
    values: Used,
    variants: tuple[Variant, ...],
    scatter: float,
    dof: int,
    at: Mapping[str, float] | None = None,
) -> Fit:
    a = at if at is not None else values.plain()
    used = {k: v for k, v in problem.facts.assumptions.items() if k in values.keys_used}
    misses = []
    for case, point in zip(problem.cases, points, strict=True):
        for datum in case.data:
            if datum.assumption is None:
                misses.append((datum, observed(point, datum.of) / datum.value - 1))
    return Fit(plan, levels, variants, used, dict(a), problem.cases, points, scatter, dof, tuple(misses))


def _fit_table(problem: _Problem, start: Levels, values: Used) -> Fit:
    """More data than levels: levels and uncertain assumptions together, assumptions held by their ranges."""
    build(problem.facts, values, start, rated_of(problem.facts, values, problem.cases[problem.reference]))
    _gaps(problem, values, start, None)
    problem = replace(problem, loose=tuple(_uncertain(problem.facts, values)))
    table = _Table(problem, values.plain())
    x, gaps, plan, points, matrix = table.minimum(table.pack(start))
    stated = np.array([d.assumption is None for c in problem.cases for d in c.data])
    dof = int(stated.sum()) - len(problem.free)
    chi = math.sqrt(float((gaps[: len(stated)][stated] ** 2).sum()) / dof)
    inverse: Array = np.asarray(np.linalg.inv(matrix.T @ matrix), dtype=np.float64)
    variants = []
    for n, key in enumerate(problem.loose):
        sign = math.copysign(1.0, move(problem.facts.assumptions[key]))
        variants.append(Variant(key, table.plan(x + inverse[:, len(problem.free) + n]), sign))
    for direction in _scatter_directions(inverse, matrix[: len(stated)][stated]):
        variants.append(Variant(SCATTER, table.plan(x + max(chi, 1.0) * direction), 1.0))
    levels, a = table.unpack(x)
    return _finish(problem, levels, plan, points, values, tuple(variants), MARGIN * chi, dof, a)


def _scatter_directions(inverse: Array, rows: Array) -> list[Array]:
    """Directions in which one standard deviation of the stated data moves the fit.

    They are columns of a square root of H^-1 (J^T J) H^-1, with H^-1 = `inverse` and J = `rows` of the stated data.
    Moving the prior of assumption k by one standard uncertainty moves the fit by column k of H^-1; both together make
    up the covariance H^-1 of the weighted least squares.
    """
    values, vectors = np.linalg.eigh(inverse @ (rows.T @ rows) @ inverse)
    order = np.argsort(values)[::-1]
    largest = values[order[0]]
    return [vectors[:, n] * math.sqrt(values[n]) for n in order if values[n] > 1e-4 * largest]


@dataclass(frozen=True)
class _Table:
    """Weighted least squares over free levels (logarithms) and loose assumptions (in standard uncertainties)."""

    problem: _Problem
    values: Mapping[str, float]

    def pack(self, levels: Levels) -> Array:
        """Unknowns at these levels and all assumptions at their values."""
        logs = np.array(levels.logs())[list(self.problem.free)]
        return np.concatenate([logs, np.zeros(len(self.problem.loose))])

    def unpack(self, x: Array) -> tuple[Levels, dict[str, float]]:
        """Levels and assumption values of the unknowns."""
        logs = np.zeros(4)
        logs[list(self.problem.free)] = x[: len(self.problem.free)]
        a = dict(self.values)
        for key, z in zip(self.problem.loose, x[len(self.problem.free) :], strict=True):
            a[key] += float(z) * move(self.problem.facts.assumptions[key])
        return Levels.from_logs(tuple(logs)), a

    def plan(self, x: Array) -> Plan:
        """The machine of these unknowns."""
        levels, a = self.unpack(x)
        return _plan(self.problem, a, levels)

    def gaps(self, x: Array, starts: Sequence[Seen] | None) -> tuple[Array, Plan, tuple[Seen, ...]]:
        """Misses of data and of assumptions, in standard uncertainties."""
        levels, a = self.unpack(x)
        data, plan, points = _gaps(self.problem, a, levels, starts)
        return np.concatenate([data, x[len(self.problem.free) :]]), plan, points

    def minimum(self, x: Array) -> tuple[Array, Array, Plan, tuple[Seen, ...], Array]:
        """Gauss-Newton with the Jacobian of the start, made anew once near the minimum."""
        gaps, plan, points = self.gaps(x, None)
        columns = list(range(len(x)))
        for _ in range(3):
            matrix = self._jacobian(x, gaps, points, columns)
            columns = [n for n in range(len(x)) if np.abs(matrix[: len(gaps) - len(self.problem.loose), n]).max() > 0]
            moved = 0.0
            for _ in range(4):
                step = np.linalg.lstsq(matrix, -gaps, rcond=None)[0]
                step *= min(1.0, 0.7 / max(float(np.abs(step).max()), 1e-12))
                x = x + step
                gaps, plan, points = self.gaps(x, points)
                moved = max(moved, float(np.abs(step).max()))
                if float(np.abs(step).max()) < 1e-3:
                    break
            if moved < 0.3:
                break
        return x, gaps, plan, points, matrix

    def _jacobian(self, x: Array, gaps: Array, starts: Sequence[Seen], columns: Sequence[int]) -> Array:
        """By differences; `columns` are the unknowns that move a datum, the others are priors alone."""
        matrix = np.zeros((len(gaps), len(x)))
        for n in range(len(x)):
            step = 2e-3 if n < len(self.problem.free) else 0.05
            if n in columns:
                moved = x.copy()
                moved[n] += step
                matrix[:, n] = (self.gaps(moved, starts)[0] - gaps) / step
                if np.abs(matrix[: len(gaps) - len(self.problem.loose), n]).max() < 1e-6:
                    matrix[: len(gaps) - len(self.problem.loose), n] = 0.0
            else:
                matrix[len(gaps) - len(x) + n, n] = 1.0
        return matrix
