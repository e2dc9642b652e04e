"""Fit of unknown levels to rated points, and refits with each assumption moved by its standard uncertainty.

With as many data as levels the fit is exact and the assumptions keep their values. With more data the assumptions
become unknowns too, held by their ranges as prior knowledge (weighted least squares; JCGM 100:2008 for ranges as
rectangular distributions, Gauss-Newton for the minimum); those about the condition alone keep their values (consider
parameters: Schmidt, Advances in Control Systems 3, 1966). In both cases the uncertainty of any later prediction is the
sum over causes of (prediction of the machine refitted with that cause moved by one standard uncertainty, minus the
prediction of the fitted machine) squared.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace

import numpy as np

from commission.description import Assumption
from commission.errors import NotCalculatedError
from commission.prediction.building import build
from commission.prediction.facts import Facts, Used
from commission.prediction.plan import Levels, Plan
from commission.prediction.problem import Problem, prepare, restricted
from commission.prediction.rated import MARGIN, Case, Datum, rated_of, reference
from commission.prediction.simulating import Seen, observed
from commission.prediction.table import Array, Table, gaps_of, move, scatter_directions
from commission.quantities import Input, Kind

SCATTER = "scatter of rated points"
WIDE_SCATTER = 0.05
"""Scatter from which rated points are not those of one machine at one speed: rounding and boundary leave 2 to 4 %
(common practice, no source)."""


CONSIDERED = frozenset(
    {"source_flow_departure", "sink_flow_departure", "source_humidity", "rating_to_the_mean", "rating_of_a_wet_coil"}
)
"""Assumptions about the condition or about what a catalogue means, not about the machine: the rated points do not move
them, or a rated flow would be shown as another than the stated one. Their ranges count in full."""


PART = 0.05
"""Part of a standard uncertainty over which slopes are taken."""


@dataclass(frozen=True)
class Variant:
    """A machine refitted with one cause moved by one standard uncertainty.

    `sign` is -1 where the cause was moved down, because its range ends at its value or no machine is left above;
    effects are given per +1. A wide scatter is moved only part of the way, to stay where the machine is one, and `sign`
    is then the whole over the part.
    """

    cause: str
    plan: Plan
    sign: float


@dataclass(frozen=True)
class Fit:
    """The fitted machine and what its uncertainty rests on.

    `scatter` is the relative standard deviation of capacity and power about the fit (n - p degrees of freedom `dof`),
    0 where the fit is exact. `held` are assumptions that the rated points would move beyond what is possible, with the
    end at which they stay. `misses` lists every datum with the relative miss of the fit.
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
    held: Mapping[str, float] = field(default_factory=dict)


def fit_system(facts: Facts) -> Fit:
    """Fit the levels of one system to its rated points.

    Raises:
        NotCalculatedError: too little is stated, or what is stated cannot be; the message says which.
    """
    values = Used(facts.nominal)
    problem, start = prepare(facts, values)
    data = sum(len(c.data) for c in problem.cases)
    if data > len(problem.free):
        return _fit_table(problem, start, values)
    levels, plan, points = _exact(problem, values, start, None)
    return _finish(problem, levels, plan, points, values, _exact_variants(problem, values, levels, points), 0.0, 0)


def _exact(
    problem: Problem,
    a: Mapping[str, float],
    start: Levels,
    jacobian: list[Array] | None,
    starts: Sequence[Seen] | None = None,
) -> tuple[Levels, Plan, tuple[Seen, ...]]:
    """Newton for as many levels as data; `jacobian` (a list of one, or empty) is reused and refreshed as needed."""
    logs = np.array(start.logs())
    store = jacobian if jacobian is not None else []
    free = list(problem.free)
    gaps, plan, points = gaps_of(problem, a, start, starts)
    for trial in range(30):
        if float(np.abs(gaps).max(initial=0.0)) < 1e-5:
            return Levels.from_logs(tuple(logs)), plan, points
        if not store or trial in (6, 12, 18):
            store[:] = [_level_jacobian(problem, a, logs, gaps, points)]
        step = np.linalg.lstsq(store[0], -gaps, rcond=None)[0]
        step *= min(1.0, 0.4 / max(float(np.abs(step).max()), 1e-12))
        for halving in range(6):
            tried = logs.copy()
            tried[free] += step * 0.5**halving
            try:
                gaps, plan, points = gaps_of(problem, a, Levels.from_logs(tuple(tried)), points)
            except NotCalculatedError:
                if halving == 5:
                    raise
                continue
            logs = tried
            break
    worst = _names(problem)[int(np.abs(gaps).argmax())]
    raise NotCalculatedError(f"no machine of this kind reproduces the rated point: {worst} cannot be reached")


def _names(problem: Problem) -> list[str]:
    return [f"{d.of.replace('_', ' ')} ({d.origin})" for c in problem.cases for d in c.data]


def _level_jacobian(
    problem: Problem, a: Mapping[str, float], logs: Array, gaps: Array, starts: Sequence[Seen]
) -> Array:
    columns = []
    for n in problem.free:
        moved = logs.copy()
        moved[n] += 2e-3
        columns.append((gaps_of(problem, a, Levels.from_logs(tuple(moved)), starts)[0] - gaps) / 2e-3)
    if not all(float(np.abs(column).max()) > 0 for column in columns):
        raise NotCalculatedError(
            "what is stated does not move one of the unknowns of the machine, so that it stays open"
        )
    return np.column_stack(columns)


def _uncertain(facts: Facts, used: Used) -> list[str]:
    return [k for k in facts.assumptions if k in used.keys_used and facts.assumptions[k].standard_uncertainty > 0]


def _exact_variants(problem: Problem, values: Used, levels: Levels, points: tuple[Seen, ...]) -> tuple[Variant, ...]:
    variants, store = [], list[Array]()
    for key in _uncertain(problem.facts, values):
        assumption = problem.facts.assumptions[key]
        for side in (1.0, -1.0):
            a = {**values.plain(), key: assumption.value + side * move(assumption)}
            try:
                _, plan, _ = _exact(problem, a, levels, store, points)
            except NotCalculatedError as error:
                refused = error
                continue
            variants.append(Variant(key, plan, side * math.copysign(1.0, move(assumption))))
            break
        else:
            raise NotCalculatedError(
                f"within the range of the assumption '{assumption.title}' the rated point cannot be: {refused}"
            ) from None
    return tuple(variants)


def _finish(
    problem: Problem,
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
    variants = tuple(replace(v, plan=restricted(problem, v.plan)) for v in variants)
    plan = restricted(problem, plan)
    return Fit(plan, levels, variants, used, dict(a), problem.cases, points, scatter, dof, tuple(misses))


def _fit_table(problem: Problem, start: Levels, values: Used) -> Fit:
    """More data than levels: levels and uncertain assumptions together, assumptions held by their ranges."""
    build(problem.facts, values, start, rated_of(problem.facts, values, problem.cases[problem.reference]))
    gaps_of(problem, values, start, None)
    uncertain = _uncertain(problem.facts, values)
    problem = replace(problem, loose=tuple(k for k in uncertain if k not in CONSIDERED))
    held: dict[str, float] = {}
    sizes = start
    for _ in range(6):
        table = Table(problem, {**values.plain(), **held}, sizes)
        x, gaps, plan, points, matrix = table.minimum(table.pack(start))
        start, found = table.unpack(x)
        beyond = {k: b for k in problem.loose if (b := _bound(problem.facts.assumptions[k], found[k])) is not None}
        if not beyond:
            break
        held |= beyond
        problem = replace(problem, loose=tuple(k for k in problem.loose if k not in held))
    stated = np.array([d.assumption is None for c in problem.cases for d in c.data])
    dof = len(stated) - len(problem.free)
    chi = math.sqrt(float((gaps[: len(stated)][stated] ** 2).sum()) / dof)
    try:
        inverse: Array = np.asarray(np.linalg.inv(matrix.T @ matrix), dtype=np.float64)
    except np.linalg.LinAlgError:
        raise NotCalculatedError(
            "the rated points do not tell the sizes of compressor, condenser and evaporator apart: state a rated point "
            "at another condition, or the rating of an exchanger"
        ) from None
    variants = []
    for n, key in enumerate(problem.loose):
        sign = math.copysign(1.0, move(problem.facts.assumptions[key]))
        variants.append(Variant(key, table.plan(x + inverse[:, len(problem.free) + n]), sign))
    for key in (k for k in uncertain if k in CONSIDERED):
        variants.append(_considered(table, x, gaps, points, inverse @ matrix.T, key))
    for direction in scatter_directions(inverse, matrix[: len(stated)][stated]):
        variants.append(Variant(SCATTER, table.plan(x + direction), max(chi, 1.0)))
    done = _finish(problem, start, plan, points, values, tuple(variants), MARGIN * chi, dof, found)
    return replace(done, held=held)


def _considered(table: Table, x: Array, gaps: Array, points: Sequence[Seen], gain: Array, key: str) -> Variant:
    """The refit with one assumption moved that the fit itself leaves alone; `gain` turns gaps into steps of `x`.

    Where no machine is left that far, it is moved part of the way.
    """
    assumption = table.problem.facts.assumptions[key]
    step = move(assumption)
    slope = (table.with_value(key, assumption.value + PART * step).gaps(x, points)[0] - gaps) / PART
    for part in (1.0, PART):
        try:
            plan = table.with_value(key, assumption.value + part * step).plan(x - part * (gain @ slope))
        except NotCalculatedError as error:
            refused = error
            continue
        return Variant(key, plan, math.copysign(1.0, step) / part)
    raise refused


def _bound(assumption: Assumption, value: float) -> float | None:
    """The end of what is possible, where `value` lies beyond it: nothing of what is called a loss, a share or a size is
    negative, and no share is above one."""
    if assumption.low >= 0 > value:
        return 0.0
    if assumption.kind is Kind.RATIO and assumption.high <= 1 < value:
        return 1.0
    return None


def frost_notes(found: Fit) -> tuple[str, ...]:
    """A sentence on rated points that are averages over frost and defrosts, for every prediction."""
    places = [case.origin for case in found.cases if case.defrosts]
    if not places:
        return ()
    word = "point at" if len(places) == 1 else "points at"
    return (
        f"the rated {word} {', '.join(places)} count frost and defrosts: they are met with "
        f"{100 * found.values['frost_share']:.0f} % of the heat lost to them at 2 °C in damp air, and the sizes of the "
        "machine are those of a clean coil",
    )


def doubts(found: Fit) -> tuple[str, ...]:
    """Sentences on rated points that do not look like those of one machine, for every prediction."""
    notes = []
    for key in found.held:
        notes.append(
            f"the rated points can only be met with a {_lower(found.used[key].title)} that cannot be; it is held at "
            "the end of what is possible: the points contradict each other, or their power counts other parts than "
            "stated"
        )
    if found.scatter > WIDE_SCATTER:
        notes.append(
            f"the rated points lie {100 * found.scatter:.0f} % about the fit of one machine: if its speed is "
            "controlled, state compressor_speed with each point; else look for a slip in them"
        )
    return tuple(notes)


def _lower(title: str) -> str:
    return title[:1].lower() + title[1:]


def inputs_found(facts: Facts, found: Fit) -> dict[str, Input]:
    """What the fit found, for review: efficiencies at the rated points, levels, conductances."""
    machine = found.plan.machine
    point = found.points[reference(found.cases)]
    balance = point.balance
    assert balance is not None
    values: list[tuple[str, float, Kind]] = [
        ("isentropic efficiency at the rated point", point.compression.isentropic_efficiency, Kind.RATIO),
        ("swept flow times volumetric level", found.levels.swept_flow, Kind.VOLUME_FLOW),
        ("conductance of the condenser", machine.condenser.conductance, Kind.CONDUCTANCE),
        ("conductance of the evaporator", machine.evaporator.conductance, Kind.CONDUCTANCE),
        ("evaporating temperature at the rated point", balance.evaporating_temperature, Kind.TEMPERATURE),
    ]
    if balance.condensing_temperature is not None:
        values.append(("condensing temperature at the rated point", balance.condensing_temperature, Kind.TEMPERATURE))
    volumetric = point.compression.volumetric_efficiency
    if facts.system.compressor.displacement is not None and volumetric is not None:
        values.insert(0, ("volumetric efficiency at the rated point", volumetric, Kind.RATIO))
    if found.dof:
        values.append(("scatter of rated points about the fit", found.scatter, Kind.RATIO))
    return {name: Input(name, value, kind, "fitted") for name, value, kind in values}
