"""Phase equilibrium of a mixture of fixed composition by equal fugacities, at a given temperature.

CoolProp's own temperature-quality flashes fail on blends at scattered ordinary temperatures, so the equilibrium is
solved here from Helmholtz energies alone: unknowns are the logarithms of both densities and the composition of the
phase that appears; equations are equal pressure and equal fugacity of each component (Michelsen & Mollerup,
Thermodynamic Models: Fundamentals & Computational Aspects, 2nd ed. 2007, chapters 1 and 12). Used to make the
saturation lines and the tables of the two-phase region, never while an operating point is solved.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from commission.errors import NotCalculatedError
from commission.properties.coolprop import load
from commission.properties.saturation import GAS_CONSTANT

Array = NDArray[np.float64]
MAX_STEPS = 60
DIFFERENCE = 1e-6  # step of the forward differences in logarithms: half the digits of a double


@dataclass(frozen=True)
class Equilibrium:
    """One point of equilibrium: temperature K, pressure Pa, molar densities mol/m3 and mole fractions of both phases.

    `quality` is the mole fraction of the whole that is vapour.
    """

    T: float
    p: float
    rho_liquid: float
    rho_vapour: float
    x: tuple[float, ...]
    y: tuple[float, ...]
    quality: float


class Phases:
    """Two equation-of-state objects of one mixture, one per phase. Not to be shared between threads."""

    def __init__(self, fluids: tuple[str, ...], mole_fractions: tuple[float, ...]) -> None:
        self.cp = load()
        self.z = np.array(mole_fractions)
        self.n = len(fluids)
        self.fluids = fluids
        self.liquid, self.vapour = (self._state("&".join(fluids), phase) for phase in ("liquid", "gas"))

    def _state(self, names: str, phase: str) -> Any:
        state = self.cp.AbstractState("HEOS", names)
        if self.n > 1:
            state.set_mole_fractions(list(self.z))
        state.specify_phase(getattr(self.cp, f"iphase_{phase}"))
        return state

    def evaluate(self, state: Any, rho: float, T: float, composition: Array) -> Array:
        """ln of the fugacity of each component (Pa), then the pressure (Pa), at molar density `rho` and `T`."""
        if self.n > 1:
            state.set_mole_fractions(list(composition))
        state.update(self.cp.DmolarT_INPUTS, rho, T)
        out = np.empty(self.n + 1)
        for i in range(self.n):
            fugacity = state.fugacity(i)
            out[i] = np.log(fugacity) if fugacity > 0 else np.nan
        out[-1] = state.p()
        return out

    def first_guess(self, T: float, incipient: str) -> Array:
        """Start from Raoult's law with the vapour pressures of the components: good well below critical."""
        pure = [self.cp.AbstractState("HEOS", name) for name in self.fluids]
        p_pure, v_pure = np.empty(self.n), np.empty(self.n)
        for i, state in enumerate(pure):
            state.update(self.cp.QT_INPUTS, 0.0, min(T, 0.9 * state.T_critical()))
            p_pure[i] = (
                state.p()
                * np.exp(5.4 * (1 - state.T_critical() / T))
                / np.exp(5.4 * (1 - state.T_critical() / state.T()))
            )
            v_pure[i] = 1.0 / state.rhomolar()
        if incipient == "vapour":
            p = float(self.z @ p_pure)
            x, other = self.z, self.z * p_pure / p
        else:
            p = 1.0 / float((self.z / p_pure).sum())
            x = other = self.z * p / p_pure
        rho_vapour = p / (GAS_CONSTANT * T) * 1.02
        return np.concatenate([[np.log(1.0 / float(x @ v_pure)), np.log(rho_vapour)], np.log(other[:-1] / other[-1])])

    def solve(self, T: float, incipient: str, start: Array | None = None) -> tuple[Equilibrium, Array]:
        """The bubble point (`incipient` 'vapour') or dew point ('liquid') at `T`, with the unknowns as next start.

        Unknowns: ln of both molar densities, and ln(w_i / w_n) of the incipient phase for i = 1..n-1.

        Raises:
            NotCalculatedError: no convergence, or both phases became the same.
        """
        u = self.first_guess(T, incipient) if start is None else np.array(start)
        for _ in range(MAX_STEPS):
            residual, jacobian = self._system(u, T, incipient)
            step = np.linalg.solve(jacobian, -residual)
            worst = float(np.abs(step).max())
            u = u + step * min(1.0, 0.5 / worst if worst > 0 else 1.0)
            if worst < 1e-11:
                break
            if not np.isfinite(u).all():
                break
        else:
            worst = float(np.abs(step).max())
        if not np.isfinite(u).all() or worst > 1e-8 or abs(u[0] - u[1]) < 1e-3:
            raise NotCalculatedError(
                f"no phase equilibrium of {'/'.join(self.fluids)} found at {T:.2f} K ({incipient})"
            )
        return self._point(u, T, incipient), u

    def _other(self, u: Array) -> Array:
        w = np.exp(np.append(u[2:], 0.0))
        return np.asarray(w / w.sum())

    def _phases(self, u: Array, incipient: str) -> tuple[Array, Array]:
        other = self._other(u)
        return (self.z, other) if incipient == "vapour" else (other, self.z)

    def _system(self, u: Array, T: float, incipient: str) -> tuple[Array, Array]:
        x, y = self._phases(u, incipient)
        liquid = self.evaluate(self.liquid, float(np.exp(u[0])), T, x)
        vapour = self.evaluate(self.vapour, float(np.exp(u[1])), T, y)
        scale = np.ones(self.n + 1)
        scale[-1] = 1.0 / abs(vapour[-1])
        residual = (liquid - vapour) * scale
        columns = []
        for k in range(len(u)):
            moved = u.copy()
            moved[k] += DIFFERENCE
            xm, ym = self._phases(moved, incipient)
            if k == 0 or (k > 1 and incipient == "liquid"):
                change = self.evaluate(self.liquid, float(np.exp(moved[0])), T, xm) - liquid
            else:
                change = vapour - self.evaluate(self.vapour, float(np.exp(moved[1])), T, ym)
            columns.append(change * scale / DIFFERENCE)
        return residual, np.column_stack(columns)

    def _point(self, u: Array, T: float, incipient: str) -> Equilibrium:
        x, y = self._phases(u, incipient)
        rho_l, rho_v = float(np.exp(u[0])), float(np.exp(u[1]))
        # the pressure of the vapour: that of a liquid has lost digits to its steepness
        p = float(self.evaluate(self.vapour, rho_v, T, y)[-1])
        return Equilibrium(T, p, rho_l, rho_v, tuple(x), tuple(y), 0.0 if incipient == "vapour" else 1.0)

    def properties(self, T: float, rho: float, phase: str) -> tuple[float, float, float, float]:
        """(p Pa, h J/kg, s J/(kg K), density kg/m3) of the overall composition at molar density `rho`."""
        state = self.liquid if phase == "liquid" else self.vapour
        self.evaluate(state, rho, T, self.z)
        return state.p(), state.hmass(), state.smass(), state.rhomass()
