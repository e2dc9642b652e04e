"""JCGM 100:2008 (GUM): the worked examples of its annex H and clause 4.4.3, reproduced."""

from __future__ import annotations

import math

import numpy as np
import pytest

from commission.acceptance.budget import (
    Budget,
    Component,
    Measured,
    combined_variance,
    propagate,
    repeated_means,
    spread_of,
)


def one(key: str, value: float, standard: float, dof: float = math.inf) -> Measured:
    """A value with one component."""
    return Measured(key, value, Budget((Component(key, standard, dof=dof, cause=key),)))


def test_h1_end_gauge_calibration() -> None:
    """H.1: length 50 000 838 nm, u_c 32 nm, effective degrees of freedom 16, k_99 2.92, U_99 93 nm (as printed)."""
    inputs = {
        "ls": one("ls", 50_000_623.0, 25.0, 18),
        "d": one("d", 215.0, 9.7, 25.6),
        "alpha": one("alpha", 11.5e-6, 1.2e-6),
        "theta": one("theta", -0.1, 0.41),
        "d_alpha": one("d_alpha", 0.0, 0.58e-6, 50),
        "d_theta": one("d_theta", 0.0, 0.029, 2),
    }

    def length(ls: float, d: float, alpha: float, theta: float, d_alpha: float, d_theta: float) -> float:
        return ls + d - ls * (d_alpha * theta + alpha * d_theta)

    result = propagate("length", length, inputs)
    assert result.value == pytest.approx(50_000_838.0, abs=0.5)
    assert result.budget.standard == pytest.approx(32.0, abs=0.5)
    assert math.floor(result.budget.dof) == 16
    assert result.budget.coverage(0.99) == pytest.approx(2.92, abs=0.005)
    assert result.budget.expanded(0.99) == pytest.approx(93.0, abs=0.5)
    parts = {c.cause: abs(c.value) for c in result.budget.components}
    assert parts["d_alpha"] == pytest.approx(2.9, abs=0.05)
    assert parts["d_theta"] == pytest.approx(16.6, abs=0.1)  # printed 16.6, from rounded inputs
    assert parts["alpha"] == parts["theta"] == 0.0


H2_V = (5.007, 4.994, 5.005, 4.990, 4.999)
H2_I = tuple(x * 1e-3 for x in (19.663, 19.639, 19.640, 19.685, 19.678))
H2_PHI = (1.0456, 1.0438, 1.0468, 1.0428, 1.0433)


def test_h2_resistance_and_reactance() -> None:
    """H.2: R 127.732 u 0.071, X 219.847 u 0.295, Z 254.260 u 0.236 ohm (printed), inputs correlated."""
    (v, i, phi), u, r = repeated_means([H2_V, H2_I, H2_PHI])
    assert r[0][1] == pytest.approx(-0.36, abs=0.005)
    assert r[0][2] == pytest.approx(0.86, abs=0.005)
    assert r[1][2] == pytest.approx(-0.65, abs=0.005)
    cases = {
        "R": (v / i * math.cos(phi), (math.cos(phi) / i, -v * math.cos(phi) / i**2, -v / i * math.sin(phi))),
        "X": (v / i * math.sin(phi), (math.sin(phi) / i, -v * math.sin(phi) / i**2, v / i * math.cos(phi))),
        "Z": (v / i, (1 / i, -v / i**2, 0.0)),
    }
    printed = {"R": (127.732, 0.071), "X": (219.847, 0.295), "Z": (254.260, 0.236)}
    for name, (value, sensitivities) in cases.items():
        assert value == pytest.approx(printed[name][0], abs=0.0006)
        uncertainty = math.sqrt(combined_variance(sensitivities, u, r))
        assert uncertainty == pytest.approx(printed[name][1], abs=0.001)


def test_h3_calibration_line_of_a_thermometer() -> None:
    """H.3: y1 -0.1712 u 0.0029, y2 0.00218 u 0.00067, r -0.930; correction at 30 °C -0.1494 u 0.0041 (printed)."""
    t = np.array([21.521, 22.012, 22.512, 23.003, 23.507, 23.999, 24.513, 25.002, 25.503, 26.010, 26.511])
    b = np.array([-0.171, -0.169, -0.166, -0.159, -0.164, -0.165, -0.156, -0.157, -0.159, -0.161, -0.160])
    design = np.column_stack([np.ones_like(t), t - 20.0])
    y, *_ = np.linalg.lstsq(design, b, rcond=None)
    s2 = float(((b - design @ y) ** 2).sum() / (len(t) - 2))
    covariance = s2 * np.linalg.inv(design.T @ design)
    u = [math.sqrt(covariance[0, 0]), math.sqrt(covariance[1, 1])]
    r = float(covariance[0, 1] / (u[0] * u[1]))
    assert (y[0], y[1]) == (pytest.approx(-0.1712, abs=5e-5), pytest.approx(0.00218, abs=5e-6))
    assert u == [pytest.approx(0.0029, abs=5e-5), pytest.approx(0.00067, abs=5e-6)]
    assert r == pytest.approx(-0.930, abs=5e-4)
    variance = combined_variance((1.0, 10.0), u, ((1.0, r), (r, 1.0)))
    assert y[0] + 10.0 * y[1] == pytest.approx(-0.1494, abs=5e-5)
    assert math.sqrt(variance) == pytest.approx(0.0041, abs=5e-5)


def test_4_4_3_twenty_temperatures() -> None:
    """4.4.3: mean 100.145 °C (printed 100.14), standard uncertainty of the mean 0.333 °C, 19 degrees of freedom."""
    samples = (
        96.90, 98.18, 98.25, 98.61, 99.03, 99.49, 99.56, 99.74, 99.89, 100.07,
        100.33, 100.42, 100.68, 100.95, 101.11, 101.20, 101.57, 101.84, 102.36, 102.72,
    )  # fmt: skip
    component = spread_of(samples)
    assert math.fsum(samples) / 20 == pytest.approx(100.145, abs=5e-4)
    assert component.value == pytest.approx(0.333, abs=5e-4)
    assert component.dof == 19


def test_table_g2_student_factors() -> None:
    """Table G.2: t for 95 % at 5, 10, 20 degrees of freedom 2.57, 2.23, 2.09; 95.45 % at 50, infinite 2.05, 2.00."""
    for dof, printed in ((5, 2.57), (10, 2.23), (20, 2.09)):
        assert Budget((Component("x", 1.0, dof=dof),)).coverage(0.95) == pytest.approx(printed, abs=0.005)
    assert Budget((Component("x", 1.0, dof=50),)).coverage(0.9545) == pytest.approx(2.05, abs=0.005)
    assert Budget((Component("x", 1.0),)).coverage(0.9545) == pytest.approx(2.0, abs=0.005)
