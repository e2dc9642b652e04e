"""Ten-coefficient polynomials: identities, units, correction of the suction state."""

from __future__ import annotations

import pytest

from commission.errors import NotCalculatedError
from commission.machine import PolynomialCompressor, in_fahrenheit, ten_coefficients
from commission.properties import refrigerant

COUNTING = tuple(float(n) for n in range(1, 11))


def test_order_of_the_terms() -> None:
    """C = 1 to 10, S = -10, D = 40 give 529 101; swapping C8 and C9 is the usual mistake (recomputed)."""
    assert ten_coefficients(COUNTING, -10.0, 40.0) == pytest.approx(529_101)


@pytest.mark.parametrize(("S", "D"), [(-10.0, 40.0), (5.0, 55.0), (-31.7, 18.3)])
def test_fahrenheit_is_the_same_polynomial(S: float, D: float) -> None:
    """All ten terms re-expanded in °F give the same value at the same temperatures (14 °F and 104 °F for the first)."""
    value = ten_coefficients(in_fahrenheit(COUNTING), S * 1.8 + 32, D * 1.8 + 32)
    assert value == pytest.approx(ten_coefficients(COUNTING, S, D), rel=1e-9)


def _compressor(**changes: object) -> PolynomialCompressor:
    flow = (0.02, 6e-4, -8e-5, 8e-6, 0, 0, 0, 0, 0, 0)
    power = (900.0, 8.0, 14.0, 0, 0, 0, 0, 0, 0, 0)
    values: dict[str, object] = {"flow": flow, "capacity": None, "power": power}
    return PolynomialCompressor(**{**values, **changes})  # type: ignore[arg-type]  # any field may be changed by a test


def test_at_the_rated_suction_state_nothing_is_corrected() -> None:
    """At the superheat of the rating flow and power are the polynomials themselves."""
    fluid = refrigerant("R-290")
    machine = _compressor()
    suction = fluid.vapour(273.15, fluid.dew(263.15).p)
    done = machine.compress(fluid, suction, fluid.dew(313.15).p)
    assert done.flow == pytest.approx(ten_coefficients(machine.flow or (), -10.0, 40.0), rel=1e-6)
    assert done.power == pytest.approx(ten_coefficients(machine.power, -10.0, 40.0), rel=1e-6)


def test_warmer_suction_gas_means_less_flow_by_three_quarters_of_the_density() -> None:
    """Dabiri & Rice 1981: m2/m1 = 1 + 0.75 (v1/v2 - 1), power unchanged."""
    fluid = refrigerant("R-290")
    p = fluid.dew(263.15).p
    rated, warm = fluid.vapour(273.15, p), fluid.vapour(293.15, p)
    high = fluid.dew(313.15).p
    first, second = (_compressor().compress(fluid, s, high) for s in (rated, warm))
    assert second.flow / first.flow == pytest.approx(1 + 0.75 * (warm.rho / rated.rho - 1), rel=1e-6)
    assert second.power == pytest.approx(first.power)


def test_capacity_gives_the_flow_it_was_made_from() -> None:
    """Inverse route: a capacity polynomial over the enthalpy difference of its rating is the flow."""
    fluid = refrigerant("R-290")
    suction = fluid.vapour(273.15, fluid.dew(263.15).p)
    high = fluid.dew(313.15).p
    effect = suction.h - fluid.liquid(313.15, high).h
    capacity = tuple(c * effect for c in _compressor().flow or ())
    done = _compressor(flow=None, capacity=capacity).compress(fluid, suction, high)
    assert done.flow == pytest.approx(_compressor().compress(fluid, suction, high).flow, rel=1e-6)


def test_outside_their_range_polynomials_are_refused() -> None:
    """Where a polynomial gives no flow the condition is named."""
    fluid = refrigerant("R-290")
    suction = fluid.vapour(243.15, fluid.dew(233.15).p)
    with pytest.raises(NotCalculatedError, match=r"-40\.0 °C evaporating"):
        _compressor(flow=(0.02, 6e-4, 0, 0, 0, 0, 0, 0, 0, 0)).compress(fluid, suction, fluid.dew(313.15).p)


def test_ten_are_wanted() -> None:
    """Nine coefficients are no polynomial of this kind."""
    with pytest.raises(ValueError, match="not 9"):
        ten_coefficients(COUNTING[:9], 0.0, 40.0)
