"""JCGM 106:2012: probabilities of conformity and acceptance limits of its worked examples (values from memory)."""

from __future__ import annotations

import pytest

from commission.acceptance.decision import decide, probability_of_conformity


@pytest.mark.parametrize(
    ("clause", "value", "u", "lower", "upper", "printed", "tolerance"),
    [
        ("7.4, breakdown voltage of a diode, V", -5.47, 0.05, None, -5.40, 0.92, 0.005),
        ("7.4, burst pressure of a container, kPa", 509.7, 8.6, 490.0, None, 0.99, 0.005),
        ("7.5, kinematic viscosity of an oil, mm2/s", 13.6, 1.8, 12.5, 16.3, 0.66, 0.005),
    ],
)
def test_probability_of_conformity(
    clause: str, value: float, u: float, lower: float | None, upper: float | None, printed: float, tolerance: float
) -> None:
    """The probability of conformity of each worked example is the printed one."""
    assert probability_of_conformity(value, u, lower, upper) == pytest.approx(printed, abs=tolerance), clause


def test_speed_limit_with_a_guard_band() -> None:
    """8.3.3: speed meter with u/v 2 %, limit 100 km/h, 99.9 %: prosecuted from about 107 km/h on."""
    assert decide(107.0, 0.02 * 107.0, None, 100.0, "guarded", 0.999).outcome == "not conforming"
    assert decide(106.0, 0.02 * 106.0, None, 100.0, "guarded", 0.999).outcome == "undecided"
    threshold = 100.0 / (1.0 - 3.0902 * 0.02)
    assert decide(threshold * 1.0001, 0.02 * threshold, None, 100.0, "guarded", 0.999).outcome == "not conforming"
    assert threshold == pytest.approx(106.6, abs=0.05)


def test_guard_band_of_two_standard_uncertainties() -> None:
    """8.3.2: with a guard band of 2 u the probability at the acceptance limit is 97.7 % (normal distribution)."""
    confidence = 0.97725
    found = decide(10.0, 1.0, 5.0, None, "guarded", confidence)
    assert found.acceptance_low == pytest.approx(7.0, abs=1e-4)
    assert probability_of_conformity(7.0, 1.0, 5.0, None) == pytest.approx(0.977, abs=5e-4)
