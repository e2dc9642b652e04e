"""Saturation of two blends as computed once: a change of the property source must be seen, not hidden.

For R-454B there is no published saturation check; expect 1 to 2 % in pressure against tables (its boiling point tells
so).
"""

from __future__ import annotations

import pytest

from commission.properties import refrigerant

# °C, kPa bubble, kPa dew, kJ/kg dew less bubble
R410A = [
    (-40, 175.5, 174.9, 262.8),
    (-20, 400.7, 399.3, 243.7),
    (0, 800.7, 798.1, 221.4),
    (20, 1447.5, 1442.9, 194.3),
    (40, 2425.6, 2418.6, 159.1),
]
R454B = [
    (-40, 169.0, 159.6, 305.8),
    (-20, 384.8, 365.5, 285.1),
    (0, 767.4, 732.4, 261.3),
    (20, 1384.6, 1328.0, 232.7),
    (40, 2313.6, 2232.6, 196.7),
]


@pytest.mark.parametrize(("name", "rows", "tol"), [("R-410A", R410A, 1.2e-3), ("R-454B", R454B, 3e-4)])
def test_blends_keep_their_pressures_and_latent_heats(
    name: str, rows: list[tuple[float, float, float, float]], tol: float
) -> None:
    """R-410A (computed with the pseudo-pure equation, 0.12 % in latent heat apart) and R-454B."""
    r = refrigerant(name)
    for celsius, bubble, dew, latent in rows:
        T = celsius + 273.15
        assert r.bubble(T).p == pytest.approx(bubble * 1e3, rel=5e-4)
        assert r.dew(T).p == pytest.approx(dew * 1e3, rel=5e-4)
        assert r.dew(T).h - r.bubble(T).h == pytest.approx(latent * 1e3, rel=tol)
