"""Two phases of a mixture at a given pressure and molar vapour fraction; unknowns T, both densities, ln K of each.

Michelsen & Mollerup, Thermodynamic Models: Fundamentals & Computational Aspects, 2nd ed. 2007, chapter 12 (full
Newton on the equal-fugacity equations). Used to make the tables of the two-phase region only.
"""

from __future__ import annotations

import numpy as np

from commission.errors import NotCalculatedError
from commission.properties.isofugacity import DIFFERENCE, MAX_STEPS, Array, Equilibrium, Phases


def start_at_bubble(bubble: Equilibrium) -> Array:
    """Unknowns of the flash at a bubble point: ln T, ln of both molar densities, ln K of every component."""
    K = np.array(bubble.y) / np.array(bubble.x)
    return np.concatenate([np.log([bubble.T, bubble.rho_liquid, bubble.rho_vapour]), np.log(K)])


def solve(phases: Phases, p: float, fraction: float, start: Array) -> tuple[Equilibrium, Array]:
    """Equilibrium at pressure `p` (Pa) with the molar vapour `fraction`, and the unknowns as the next start.

    Raises:
        NotCalculatedError: no convergence, or both phases became the same.
    """
    u = np.array(start)
    worst = np.inf
    for _ in range(MAX_STEPS):
        residual, jacobian = _system(phases, u, p, fraction)
        step = np.linalg.solve(jacobian, -residual)
        worst = float(np.abs(step).max())
        u = u + step * min(1.0, 0.3 / worst if worst > 0 else 1.0)
        if worst < 1e-11 or not np.isfinite(u).all():
            break
    if not np.isfinite(u).all() or worst > 1e-8 or abs(u[1] - u[2]) < 1e-3:
        raise NotCalculatedError(f"no two-phase state of {'/'.join(phases.fluids)} found at {p:.0f} Pa")
    x, y = _compositions(phases, u, fraction)
    T, rho_l, rho_v = (float(v) for v in np.exp(u[:3]))
    return Equilibrium(T, p, rho_l, rho_v, tuple(x / x.sum()), tuple(y / y.sum()), fraction), u


def bulk(phases: Phases, point: Equilibrium) -> tuple[float, float, float, float]:
    """(h J/kg, s J/(kg K), specific volume m3/kg, mass fraction of vapour) of both phases together."""
    parts = []
    for state, rho, composition in (
        (phases.liquid, point.rho_liquid, point.x),
        (phases.vapour, point.rho_vapour, point.y),
    ):
        phases.evaluate(state, rho, point.T, np.array(composition))
        parts.append((state.molar_mass(), state.hmass(), state.smass(), 1.0 / state.rhomass()))
    (M_l, *liquid), (M_v, *vapour) = parts
    q = point.quality * M_v / (point.quality * M_v + (1 - point.quality) * M_l)
    h, s, v = ((1 - q) * a + q * b for a, b in zip(liquid, vapour, strict=True))
    return h, s, v, q


def _compositions(phases: Phases, u: Array, fraction: float) -> tuple[Array, Array]:
    K = np.exp(u[3:])
    x = phases.z / (1.0 + fraction * (K - 1.0))
    return x, K * x


def _residual(phases: Phases, u: Array, p: float, fraction: float) -> Array:
    x, y = _compositions(phases, u, fraction)
    T = float(np.exp(u[0]))
    liquid = phases.evaluate(phases.liquid, float(np.exp(u[1])), T, x / x.sum())
    vapour = phases.evaluate(phases.vapour, float(np.exp(u[2])), T, y / y.sum())
    return np.concatenate([liquid[:-1] - vapour[:-1], [liquid[-1] / p - 1, vapour[-1] / p - 1, (y - x).sum()]])


def _system(phases: Phases, u: Array, p: float, fraction: float) -> tuple[Array, Array]:
    residual = _residual(phases, u, p, fraction)
    columns = []
    for k in range(len(u)):
        moved = u.copy()
        moved[k] += DIFFERENCE
        columns.append((_residual(phases, moved, p, fraction) - residual) / DIFFERENCE)
    return residual, np.column_stack(columns)
