"""Weighted least squares over a table of rated points: levels and uncertain assumptions together."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from commission.description import Assumption
from commission.errors import NotCalculatedError
from commission.prediction.plan import Levels, Plan
from commission.prediction.problem import Problem, plan_of
from commission.prediction.simulating import Seen, observed, simulate

Array = np.ndarray[tuple[int, ...], np.dtype[np.float64]]
CONDUCTANCES = (2, 3)
SIZE = 1.0
"""Standard uncertainty of a conductance about its start, as a logarithm: without it, points that ask for a better
machine than there is would be met by exchangers without end (common practice, no source)."""
ROUNDS, POINTS, TRIALS = 5, 60, 10
"""Least Jacobians of a search, points that all of them together may take where the table is short, trials of a step."""
GAIN = 0.01
"""Gain in the sum of squares, over their mean, that ends the search: a tenth of a standard uncertainty is then left."""
SMALL, NEAR = 1e-3, 1.0
"""Step that counts as none, and way over which a Jacobian still holds: standard uncertainties, or logarithms."""
BEND = 15.0
"""Scatter, in standard uncertainties, up to which a minimum at a bend of the machine is believed."""
LONGEST = 0.7
"""Longest step of an unknown; the machine may not be calculable far away."""


def move(assumption: Assumption) -> float:
    """The step of one standard uncertainty, downwards where the range ends at the value."""
    u = assumption.standard_uncertainty
    return u if assumption.high - assumption.value >= assumption.value - assumption.low else -u


def gaps_of(
    problem: Problem, a: Mapping[str, float], levels: Levels, starts: Sequence[Seen] | None
) -> tuple[Array, Plan, tuple[Seen, ...]]:
    """(calculated - stated) / sigma of every datum; assumed data follow their assumption value."""
    plan = plan_of(problem, a, levels)
    gaps, points = [], []
    for n, case in enumerate(problem.cases):
        point = simulate(problem.facts, a, plan, case, starts[n] if starts else None)
        points.append(point)
        for datum in case.data:
            wanted = a[datum.assumption] if datum.assumption is not None else datum.value
            gaps.append((observed(point, datum.of) - wanted) / datum.sigma)
    return np.array(gaps), plan, tuple(points)


@dataclass(frozen=True)
class Table:
    """Weighted least squares over free levels (logarithms) and loose assumptions (in standard uncertainties).

    `start` are the levels that stated or assumed temperature differences give at the reference point.
    """

    problem: Problem
    values: Mapping[str, float]
    start: Levels

    def with_value(self, key: str, value: float) -> Table:
        """The same with another value of one assumption that is not loose."""
        return replace(self, values={**self.values, key: value})

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
        return plan_of(self.problem, a, levels)

    def gaps(self, x: Array, starts: Sequence[Seen] | None) -> tuple[Array, Plan, tuple[Seen, ...]]:
        """Misses of data, of conductances and of assumptions, in standard uncertainties."""
        levels, a = self.unpack(x)
        data, plan, points = gaps_of(self.problem, a, levels, starts)
        free = self.problem.free
        sizes = [(x[n] - self.start.logs()[k]) / SIZE for n, k in enumerate(free) if k in CONDUCTANCES]
        return np.concatenate([data, sizes, x[len(free) :]]), plan, points

    def minimum(self, x: Array) -> tuple[Array, Array, Plan, tuple[Seen, ...], Array]:
        """Least squares by Levenberg and Marquardt (Marquardt, SIAM J. Applied Mathematics 11, 1963, 431-441).

        The Jacobian learns from each step (Broyden, Mathematics of Computation 19, 1965, 577-593) and is made anew
        where the way was long. The last one belongs to the minimum within `NEAR`. At a bend of the machine (a coil that
        begins to be wet) a minimum is known by a whole round that gains nothing.

        Raises:
            NotCalculatedError: no machine is near the start, or the minimum is not found: the points contradict.
        """
        gaps, plan, points = self.gaps(x, None)
        columns, damping = list(range(len(x))), 0.0
        for _ in range(max(ROUNDS, POINTS // len(self.problem.cases))):
            matrix = self._jacobian(x, gaps, points, columns)
            columns = [n for n in range(len(x)) if np.abs(matrix[: len(gaps) - len(self.problem.loose), n]).max() > 0]
            origin, before, learnt = x, gaps, matrix
            for _ in range(TRIALS):
                step = _damped(learnt, gaps, damping)
                if float(np.abs(step).max()) < 1e-3 * SMALL:
                    break
                try:
                    found = self.gaps(x + step, points)
                except NotCalculatedError:
                    damping = max(10 * damping, 1e-3)
                    continue
                learnt = learnt + np.outer(found[0] - gaps - learnt @ step, step) / float(step @ step)
                if float(found[0] @ found[0]) > float(gaps @ gaps):
                    damping = max(10 * damping, 1e-3)
                    continue
                x, (gaps, plan, points) = x + step, found
                damping = 0.2 * damping if damping > 1e-6 else 0.0
                if float(np.abs(step).max()) < SMALL or self._done(learnt, gaps):
                    break
            worth = self._worth(gaps, len(x))
            stuck = float(before @ before) - float(gaps @ gaps) < worth < GAIN * BEND**2
            if float(np.abs(x - origin).max()) < NEAR and (stuck or self._done(matrix, gaps)):
                return x, gaps, plan, points, matrix
        raise NotCalculatedError("the rated points contradict each other: no machine comes near all of them")

    def _done(self, matrix: Array, gaps: Array) -> bool:
        """Whether a further step would gain next to nothing beside the scatter of the data."""
        step = np.linalg.lstsq(matrix, -gaps, rcond=None)[0]
        left = gaps + matrix @ step
        return float(gaps @ gaps) - float(left @ left) < self._worth(gaps, len(step))

    @staticmethod
    def _worth(gaps: Array, unknowns: int) -> float:
        """Gain in the sum of squares below which a step is not worth taking."""
        return GAIN * max(1.0, float(gaps @ gaps) / max(len(gaps) - unknowns, 1))

    def _jacobian(self, x: Array, gaps: Array, starts: Sequence[Seen], columns: Sequence[int]) -> Array:
        """By differences; `columns` are the unknowns that move a datum, the others are priors alone."""
        matrix = np.zeros((len(gaps), len(x)))
        for n in range(len(x)):
            step = 2e-3 if n < len(self.problem.free) else 0.05
            if n in columns:
                try:
                    matrix[:, n] = self._column(x, n, step, gaps, starts)
                except NotCalculatedError:
                    matrix[:, n] = self._column(x, n, -step, gaps, starts)
                if np.abs(matrix[: len(gaps) - len(self.problem.loose), n]).max() < 1e-6:
                    matrix[: len(gaps) - len(self.problem.loose), n] = 0.0
            else:
                matrix[len(gaps) - len(x) + n, n] = 1.0
        return matrix

    def _column(self, x: Array, n: int, step: float, gaps: Array, starts: Sequence[Seen]) -> Array:
        moved = x.copy()
        moved[n] += step
        return (self.gaps(moved, starts)[0] - gaps) / step


def _damped(matrix: Array, gaps: Array, damping: float) -> Array:
    """The step of Levenberg and Marquardt, at most `LONGEST`."""
    sizes = np.sqrt(damping) * np.diag(np.linalg.norm(matrix, axis=0))
    whole = np.vstack([matrix, sizes]) if damping else matrix
    wanted = np.concatenate([-gaps, np.zeros(matrix.shape[1])]) if damping else -gaps
    step: Array = np.asarray(np.linalg.lstsq(whole, wanted, rcond=None)[0], dtype=np.float64)
    return step * min(1.0, LONGEST / max(float(np.abs(step).max()), 1e-12))


def scatter_directions(inverse: Array, rows: Array) -> list[Array]:
    """Directions in which one standard deviation of the stated data moves the fit.

    They are columns of a square root of H^-1 (J^T J) H^-1, with H^-1 = `inverse` and J = `rows` of the stated data.
    Moving the prior of assumption k by one standard uncertainty moves the fit by column k of H^-1; both together make
    up the covariance H^-1 of the weighted least squares.
    """
    values, vectors = np.linalg.eigh(inverse @ (rows.T @ rows) @ inverse)
    order = np.argsort(values)[::-1]
    largest = values[order[0]]
    return [vectors[:, n] * math.sqrt(values[n]) for n in order if values[n] > 1e-4 * largest]
