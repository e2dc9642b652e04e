"""Weighted least squares over a table of rated points: levels and uncertain assumptions together."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from commission.description import Assumption
from commission.errors import NotCalculatedError
from commission.prediction.building import Levels, Plan
from commission.prediction.problem import Problem, plan_of
from commission.prediction.simulating import Seen, observed, simulate

Array = np.ndarray[tuple[int, ...], np.dtype[np.float64]]


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
    """Weighted least squares over free levels (logarithms) and loose assumptions (in standard uncertainties)."""

    problem: Problem
    values: Mapping[str, float]

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
        """Misses of data and of assumptions, in standard uncertainties."""
        levels, a = self.unpack(x)
        data, plan, points = gaps_of(self.problem, a, levels, starts)
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
                step: Array = np.asarray(np.linalg.lstsq(matrix, -gaps, rcond=None)[0], dtype=np.float64)
                step *= min(1.0, 0.7 / max(float(np.abs(step).max()), 1e-12))
                x, gaps, plan, points = self._step(x, step, gaps, points)
                moved = max(moved, float(np.abs(step).max()))
                if float(np.abs(step).max()) < 1e-3:
                    break
            if moved < 1.0:
                break
        return x, gaps, plan, points, matrix

    def _step(
        self, x: Array, step: Array, gaps: Array, points: Sequence[Seen]
    ) -> tuple[Array, Array, Plan, tuple[Seen, ...]]:
        """The step, halved while the machine cannot be calculated there or the sum of squares grows beyond doubling.

        Raises:
            NotCalculatedError: even a small step leads where no balance is.
        """
        refused: NotCalculatedError | None = None
        for trial in range(6):
            try:
                found = self.gaps(x + step * 0.5**trial, points)
            except NotCalculatedError as error:
                refused = error
                continue
            if float(found[0] @ found[0]) < 2 * float(gaps @ gaps) + 1.0:
                return x + step * 0.5**trial, *found
        if refused is not None:
            raise refused
        raise NotCalculatedError("the rated points contradict each other: no machine comes near all of them")

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
