"""Saturation lines and the two-phase region as Chebyshev series: a few microseconds a point, and vectorised.

The variable of a line is sqrt(1 - T/Tc): near the critical point every saturation property of an analytic equation of
state is a power series in it, so 33 terms reach nine digits where a series in T reaches five.
"""

from __future__ import annotations

import json
import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cache, cached_property
from importlib.resources import files
from typing import Any

import numpy as np
from numpy.polynomial import chebyshev
from numpy.typing import NDArray

Array = NDArray[np.float64]
COLUMNS = ("ln_p", "h", "s", "ln_rho")
PIECES = 1024  # of the range of a series; polynomials of degree 4 repeat a series of 41 terms there to 1e-12
DEGREE = 4


Piece = tuple[tuple[float, ...], tuple[float, ...]]


@cache
def _to_pieces(terms: int) -> Array:
    """What turns the coefficients of a series into those of its pieces: shape (PIECES, DEGREE + 1, terms).

    On each piece stands a polynomial in the distance from its middle in pieces, lowest power first. Horner's rule on a
    few floats is several times quicker at a single point than a series of numpy.
    """
    within = nodes(DEGREE + 1)  # of a piece, whose half width is 1 / PIECES
    powers = np.linalg.inv(np.vander(0.5 * within, DEGREE + 1, increasing=True))
    middles = (2.0 * np.arange(PIECES) + 1.0) / PIECES - 1.0
    return np.asarray(powers @ chebyshev.chebvander(middles[:, None] + within / PIECES, terms - 1))


@dataclass(frozen=True)
class Line:
    """One saturation line: ln p (Pa), h (J/kg), s (J/(kg K)) and ln density (kg/m3) against temperature.

    `coefficients` has one row per column of `COLUMNS`.
    """

    T_critical: float
    T_low: float
    T_high: float
    coefficients: Array

    @cached_property
    def _scale(self) -> tuple[float, float]:
        low, high = (math.sqrt(1.0 - T / self.T_critical) for T in (self.T_high, self.T_low))
        return 2.0 / (high - low), (high + low) / (high - low)

    @cached_property
    def _orders(self) -> Array:
        return np.arange(self.coefficients.shape[1], dtype=np.float64)

    @cached_property
    def _slopes(self) -> Array:
        """Coefficients of the derivative of each column by the scaled variable."""
        padded = np.zeros_like(self.coefficients)
        padded[:, :-1] = chebyshev.chebder(self.coefficients, axis=1)
        return padded

    def variable(self, T: float) -> float:
        """The scaled variable, -1 at `T_high` and +1 at `T_low`."""
        slope, offset = self._scale
        return slope * math.sqrt(1.0 - T / self.T_critical) - offset

    @cached_property
    def _pieces(self) -> tuple[float, float, Array, list[Piece | None]]:
        """Slope and offset of the place of a temperature among the pieces, and the pieces' coefficients: all of them,
        and those of visited pieces as floats, of ln p and of the other three in a row."""
        (slope, offset), half = self._scale, PIECES / 2
        found = np.moveaxis(_to_pieces(self.coefficients.shape[1]) @ self.coefficients.T, 2, 1)
        return half * slope, half * (1.0 - offset), found.reshape(PIECES, -1), [None] * PIECES

    def _at(self, T: float) -> tuple[float, Piece]:
        """Distance from the middle of the piece that holds `T`, in pieces, and its coefficients."""
        slope, offset, rows, visited = self._pieces
        x = slope * math.sqrt(1.0 - T / self.T_critical) + offset
        n = min(int(x), PIECES - 1)  # rounding at the ends only
        piece = visited[n]
        if piece is None:
            row = rows[n].tolist()
            piece = visited[n] = tuple(row[: DEGREE + 1]), tuple(row[DEGREE + 1 :])
        return x - n - 0.5, piece

    def ln_p(self, T: float) -> float:
        """ln p (Pa) at `T` (K), which the caller has checked to lie on the line."""
        x, ((a0, a1, a2, a3, a4), _) = self._at(T)
        return a0 + x * (a1 + x * (a2 + x * (a3 + x * a4)))

    def row(self, T: float) -> tuple[float, float, float, float]:
        """(ln p, h, s, ln density) at `T` (K), which the caller has checked to lie on the line."""
        x, ((a0, a1, a2, a3, a4), (b0, b1, b2, b3, b4, c0, c1, c2, c3, c4, d0, d1, d2, d3, d4)) = self._at(T)
        return (
            a0 + x * (a1 + x * (a2 + x * (a3 + x * a4))),
            b0 + x * (b1 + x * (b2 + x * (b3 + x * b4))),
            c0 + x * (c1 + x * (c2 + x * (c3 + x * c4))),
            d0 + x * (d1 + x * (d2 + x * (d3 + x * d4))),
        )

    def slopes(self, T: float) -> tuple[float, float, float, float]:
        """d/dT of (ln p, h, s, ln density) along the line."""
        x = self.variable(T)
        terms = np.cos(self._orders * math.acos(min(1.0, max(-1.0, x))))
        inner = -self._scale[0] / (2.0 * self.T_critical * math.sqrt(1.0 - T / self.T_critical))
        a, b, c, d = (self._slopes.dot(terms) * inner).tolist()
        return a, b, c, d

    def rows(self, T: Array) -> Array:
        """(ln p, h, s, ln density) for an array of temperatures: shape (4, *T.shape)."""
        slope, offset = self._scale
        x = slope * np.sqrt(1.0 - np.asarray(T) / self.T_critical) - offset
        return np.asarray(chebyshev.chebval(x, self.coefficients.T))

    @cached_property
    def _inverse(self) -> Chebyshev1:
        """The scaled variable against ln p, good to 1e-8 K."""
        top = float(self.coefficients[0] @ np.cos(self._orders * math.pi))  # ln p at T_high
        bottom = float(self.coefficients[0].sum())
        # beyond the end by the slope there, so that the variable keeps its square-root character near critical
        pivot = top + self.slopes(self.T_high)[0] * (self.T_critical - self.T_high)
        size = 41
        x = np.cos(math.pi * (np.arange(size) + 0.5) / size)
        lo, hi = math.sqrt(max(pivot - top, 0.0)), math.sqrt(pivot - bottom)
        wanted = pivot - ((hi - lo) / 2 * x + (hi + lo) / 2) ** 2
        t = x.copy()
        derivative = self._slopes[0]
        for _ in range(12):
            t = np.clip(
                t - (chebyshev.chebval(t, self.coefficients[0]) - wanted) / chebyshev.chebval(t, derivative), -1, 1
            )
        return Chebyshev1(pivot, lo, hi, np.asarray(chebyshev.chebfit(x, t, size - 1), dtype=np.float64))

    @property
    def ln_p_range(self) -> tuple[float, float]:
        """ln p at both ends of the line, lowest first."""
        return self.row(self.T_low)[0], self.row(self.T_high)[0]

    def temperature(self, p: float) -> float:
        """Temperature (K) of the line at pressure `p` (Pa), which the caller has checked to lie on it."""
        slope, offset = self._scale
        T = self.T_critical * (1.0 - ((self._inverse(math.log(p)) + offset) / slope) ** 2)
        return min(self.T_high, max(self.T_low, T))  # rounding at the ends only


@dataclass(frozen=True)
class Chebyshev1:
    """A series in sqrt(pivot - ln p) between `lo` and `hi`."""

    pivot: float
    lo: float
    hi: float
    coefficients: Array

    @cached_property
    def _pieces(self) -> tuple[float, float, list[tuple[float, ...]]]:
        scale = PIECES / (self.hi - self.lo)
        found = _to_pieces(len(self.coefficients)) @ self.coefficients
        return scale, scale * self.lo, [tuple(piece) for piece in found.tolist()]

    def __call__(self, ln_p: float) -> float:
        scale, start, pieces = self._pieces
        x = scale * math.sqrt(max(self.pivot - ln_p, 0.0)) - start
        n = min(max(int(x), 0), PIECES - 1)  # rounding at the ends only
        a0, a1, a2, a3, a4 = pieces[n]
        x -= n + 0.5
        return a0 + x * (a1 + x * (a2 + x * (a3 + x * a4)))


TABLES = ("temperature", "quality", "volume", "entropy")


@dataclass(frozen=True)
class TwoPhase:
    """What a blend does between bubble and dew at constant pressure, against the enthalpy fraction x (0 bubble, 1 dew).

    Four series over (sqrt(ln(pc/p)), x), in the order of `TABLES`: temperature less the straight line (K), mass
    fraction of vapour less x, and the fractions of the changes of volume and entropy less x. All vanish at both ends.
    `tables` has the shape (terms in pressure, 4, terms in x).
    """

    p_critical: float
    low: float
    high: float
    tables: Array

    def series(self, p: float) -> Array:
        """Chebyshev coefficients in 2x - 1 of the four tables at pressure `p` (Pa): shape (4, terms in x)."""
        return np.asarray(self._terms(p).dot(self._flat).reshape(self.tables.shape[1:]))

    def temperature_series(self, p: float) -> list[float]:
        """The first row of `series`."""
        series: list[float] = self._terms(p).dot(self._temperatures).tolist()
        return series

    def _terms(self, p: float) -> Array:
        w = (2.0 * math.sqrt(math.log(self.p_critical / p)) - self.high - self.low) / (self.high - self.low)
        return np.cos(self._orders * math.acos(min(1.0, max(-1.0, w))))

    @cached_property
    def _orders(self) -> Array:
        return np.arange(len(self.tables), dtype=np.float64)

    @cached_property
    def _flat(self) -> Array:
        return self.tables.reshape(len(self.tables), -1)

    @cached_property
    def _temperatures(self) -> Array:
        return np.ascontiguousarray(self.tables[:, 0])


@dataclass(frozen=True)
class FluidData:
    """Everything of one refrigerant that is data: model, limits, lines and two-phase tables."""

    refrigerant: str
    property_source: str
    fluids: tuple[str, ...]
    mole_fractions: tuple[float, ...]
    molar_mass: float
    T_critical: float
    p_critical: float
    T_triple: float
    T_max: float
    p_max: float
    T_low: float
    T_high: float
    h_offset: float
    s_offset: float
    boiling_bubble: float | None
    boiling_dew: float | None
    dew: Line
    bubble: Line
    two_phase: TwoPhase | None

    def to_json(self) -> dict[str, Any]:
        """Plain data for the file; `read` is its inverse."""
        plain = {
            key: list(value) if isinstance(value, tuple) else value
            for key, value in vars(self).items()
            if key not in ("dew", "bubble", "two_phase")
        }
        for name, line in (("dew", self.dew), ("bubble", self.bubble)):
            plain[name] = {c: line.coefficients[k].tolist() for k, c in enumerate(COLUMNS)}
        if self.two_phase is not None:
            plain["two_phase"] = {
                "low": self.two_phase.low,
                "high": self.two_phase.high,
                **{k: self.two_phase.tables[:, i].tolist() for i, k in enumerate(TABLES)},
            }
        return plain

    @classmethod
    def from_json(cls, plain: Mapping[str, Any]) -> FluidData:
        """The inverse of `to_json`."""
        ends = plain["T_critical"], plain["T_low"], plain["T_high"]
        lines = {n: Line(*ends, np.array([plain[n][c] for c in COLUMNS])) for n in ("dew", "bubble")}
        table = plain.get("two_phase")
        two_phase = None
        if table is not None:
            tables = np.stack([np.array(table[k]) for k in TABLES], axis=1)
            two_phase = TwoPhase(plain["p_critical"], table["low"], table["high"], tables)
        scalars: dict[str, Any] = {
            k: tuple(v) if isinstance(v, list) else v
            for k, v in plain.items()
            if k not in ("dew", "bubble", "two_phase", "about")
        }
        return cls(**scalars, dew=lines["dew"], bubble=lines["bubble"], two_phase=two_phase)


def file_name(refrigerant: str) -> str:
    """Name of the line file of a designation such as `R-1234ze(E)`."""
    return refrigerant.replace("(", "-").replace(")", "") + ".json"


def read(refrigerant: str) -> FluidData | None:
    """The shipped data of a designation, or None where there is none."""
    path = files("commission.properties") / "lines" / file_name(refrigerant)
    if not path.is_file():
        return None
    return FluidData.from_json(json.loads(path.read_text(encoding="utf-8")))


def series_at_nodes(values: Sequence[Array] | Array) -> Array:
    """Chebyshev coefficients along the last axis from values at the roots x_k = cos(pi (k + 1/2) / n)."""
    values = np.asarray(values)
    n = values.shape[-1]
    angles = math.pi * (np.arange(n) + 0.5) / n
    basis = np.cos(np.outer(angles, np.arange(n))) * (2.0 / n)
    basis[:, 0] /= 2.0
    return np.asarray(values @ basis)


def nodes(n: int) -> Array:
    """The roots of the Chebyshev polynomial of degree `n`, from +1 down to -1."""
    return np.asarray(np.cos(math.pi * (np.arange(n) + 0.5) / n))
