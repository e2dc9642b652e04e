"""Small systems of equations: Newton start by finite differences, then Broyden. Plain floats, since n is 1 to 4.

C. G. Broyden, Mathematics of Computation 19 (1965) 577-593 ("good" update). Steps are limited and halved where a
residual cannot be evaluated or grows, so that the solver never leaves the range in which properties hold.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

from commission.errors import NotCalculatedError

TRIALS = 6
Residuals = Callable[[Sequence[float]], Sequence[float]]


class NoSolutionError(NotCalculatedError):
    """The balance was not reached; the message says what closed the way."""


@dataclass(frozen=True, slots=True)
class Solution:
    """Unknowns at the solution, residuals there, number of residual evaluations, and the Jacobian for a warm start."""

    x: tuple[float, ...]
    residuals: tuple[float, ...]
    evaluations: int
    jacobian: tuple[tuple[float, ...], ...]


def solve(
    residuals: Residuals,
    start: Sequence[float],
    *,
    difference: float = 0.02,
    largest_step: float = 8.0,
    tolerance: float = 1e-8,
    evaluations: int = 120,
    jacobian: Sequence[Sequence[float]] | None = None,
) -> Solution:
    """Unknowns at which all residuals are below `tolerance`.

    `residuals` returns as many numbers of order one as there are unknowns; `difference` is the step of the finite
    differences and `largest_step` the longest step, both in units of the unknowns (K here). `jacobian` is that of a
    neighbouring solution, used in place of finite differences at the start.

    Raises:
        NoSolutionError: not converged within `evaluations`, or no direction leads further.
        NotCalculatedError: the residuals cannot be evaluated at the start.
    """
    x = list(start)
    r = residuals(x)
    worst, count = _worst(r), 1
    matrix: list[list[float]] | None = [list(row) for row in jacobian] if jacobian is not None else None
    known = matrix
    fresh = False
    while worst > tolerance:
        if count >= evaluations:
            raise NoSolutionError("no balance was found: heat and flow do not come together at any condition tried")
        if matrix is None:
            matrix = _differences(residuals, x, r, difference)
            count += len(x)
            fresh = True
        step = _linear(matrix, r)
        refused: list[str] = []
        moved = _move(residuals, x, worst, _limited(step, largest_step), refused) if step is not None else None
        count += moved[4] if moved else TRIALS
        if moved is None:
            if fresh:
                why = f", and beyond it: {refused[-1]}" if refused else ""
                raise NoSolutionError(f"no balance was found: heat and flow do not come together on the way{why}")
            matrix = None
            continue
        known = _broyden(matrix, moved[1], r, moved[2])
        matrix = None if moved[3] > 0.5 * worst and not fresh else known
        fresh = False
        x, _, r, worst, _ = moved
    return Solution(tuple(x), tuple(r), count, tuple(tuple(row) for row in (matrix or known or _identity(len(x)))))


def _worst(r: Sequence[float]) -> float:
    return max(map(abs, r))


def _identity(n: int) -> list[list[float]]:
    return [[1.0 if i == j else 0.0 for j in range(n)] for i in range(n)]


def _differences(residuals: Residuals, x: list[float], r: Sequence[float], step: float) -> list[list[float]]:
    columns = []
    for j in range(len(x)):
        moved = list(x)
        moved[j] += step
        try:
            r_moved = residuals(moved)
            sign = 1.0
        except NotCalculatedError:
            moved[j] = x[j] - step
            r_moved = residuals(moved)
            sign = -1.0
        columns.append([sign * (b - a) / step for a, b in zip(r, r_moved, strict=True)])
    return [[columns[j][i] for j in range(len(x))] for i in range(len(r))]


def _linear(matrix: list[list[float]], r: Sequence[float]) -> list[float] | None:
    """The step that undoes the residuals: Gauss elimination with row exchange; None where the matrix is singular."""
    n = len(r)
    if n == 2:
        (a, b), (c, d) = matrix
        determinant = a * d - b * c
        if abs(determinant) < 1e-14 * max(abs(a), abs(b), abs(c), abs(d), 1.0):
            return None
        return [(b * r[1] - r[0] * d) / determinant, (r[0] * c - a * r[1]) / determinant]
    rows = [[*matrix[i], -r[i]] for i in range(n)]
    for i in range(n):
        pivot = max(range(i, n), key=lambda k: abs(rows[k][i]))
        if abs(rows[pivot][i]) < 1e-14:
            return None
        rows[i], rows[pivot] = rows[pivot], rows[i]
        for k in range(i + 1, n):
            factor = rows[k][i] / rows[i][i]
            for j in range(i, n + 1):
                rows[k][j] -= factor * rows[i][j]
    x = [0.0] * n
    for i in reversed(range(n)):
        x[i] = (rows[i][n] - sum(rows[i][j] * x[j] for j in range(i + 1, n))) / rows[i][i]
    return x


def _limited(step: list[float], largest: float) -> list[float]:
    longest = _worst(step)
    return step if longest <= largest else [v * largest / longest for v in step]


def _move(
    residuals: Residuals, x: list[float], worst: float, step: list[float], refused: list[str]
) -> tuple[list[float], list[float], Sequence[float], float, int] | None:
    """Take the step, halved while it cannot be evaluated or makes things clearly worse than `worst`: unknowns, step
    taken, residuals, the worst of them, and the number of trials.

    Reasons why a step could not be evaluated are added to `refused`.
    """
    for trial in range(TRIALS):
        taken = [v * 0.5**trial for v in step] if trial else step
        x_new = [a + b for a, b in zip(x, taken, strict=True)]
        try:
            r_new = residuals(x_new)
        except NotCalculatedError as error:
            refused.append(str(error))
            continue
        here = _worst(r_new)
        if here < 1.5 * worst:
            return x_new, taken, r_new, here, trial + 1
    return None


def _broyden(
    matrix: list[list[float]], step: list[float], before: Sequence[float], after: Sequence[float]
) -> list[list[float]]:
    """The matrix that gives the change of the residuals along the step, and is the same across it."""
    square = sum([v * v for v in step])
    if square == 0:
        return matrix
    if len(step) == 2:
        (a, b), (c, d), (x, y) = *matrix, step
        first = (after[0] - before[0] - a * x - b * y) / square
        second = (after[1] - before[1] - c * x - d * y) / square
        return [[a + first * x, b + first * y], [c + second * x, d + second * y]]
    known = []
    for row, old, new in zip(matrix, before, after, strict=True):
        gap = (new - old - sum([m * v for m, v in zip(row, step, strict=True)])) / square
        known.append([m + gap * v for m, v in zip(row, step, strict=True)])
    return known
