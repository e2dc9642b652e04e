"""Wild inputs: every call answers with a finite, consistent state or with this room's own refusal."""

from __future__ import annotations

import math
import random
from collections.abc import Callable

import pytest

from commission.properties import PropertyRangeError, Refrigerant, moist_air, refrigerant
from commission.properties.models import modelled
from commission.properties.states import SaturationState, State

ODD = (0.0, -1.0, math.nan, math.inf, -math.inf, 1e-300, 1e300, 5e-324)


def wild(source: random.Random, low: float, high: float, *, logarithmic: bool = False) -> float:
    """Now and then an odd number, else one far beyond the plausible range."""
    if source.random() < 0.08:
        return source.choice(ODD)
    if logarithmic:
        return math.exp(source.uniform(math.log(low), math.log(high)))
    return source.uniform(low, high)


def questions(r: Refrigerant, T: float, p: float, h: float) -> list[Callable[[], object]]:
    """Every call of a refrigerant with these numbers."""
    return [
        lambda: r.dew(T),
        lambda: r.bubble(T),
        lambda: r.dew_temperature(p),
        lambda: r.bubble_temperature(p),
        lambda: r.vapour(T, p),
        lambda: r.liquid(T, p),
        lambda: r.supercritical(T, p),
        lambda: r.throttled(p, h),
        lambda: r.vapour_from_enthalpy(p, h),
        lambda: r.mean_evaporating_temperature(p, h),
        lambda: r.continued_bubble_pressure(T),
    ]


def check(r: Refrigerant, answer: object, source: random.Random) -> None:
    """The answer is finite; a single phase lies on the equation, stable, and can be compressed or refuses."""
    if isinstance(answer, float):
        assert math.isfinite(answer)
        return
    assert isinstance(answer, (State, SaturationState))
    assert all(math.isfinite(v) for v in (answer.T, answer.p, answer.h, answer.s, answer.rho))
    assert answer.p > 0
    assert answer.rho > 0
    if isinstance(answer, State) and answer.quality is None and not answer.warnings:
        point = r._equation.at(answer.rho, answer.T)
        assert point.p_rho > 0
        assert abs(point.p - answer.p) / point.p_rho < 1e-6 * answer.rho
        assert point.h == pytest.approx(answer.h, abs=0.01)
        try:
            end = r.isentropic_end(answer, math.exp(source.uniform(math.log(1e4), math.log(2e7))))
        except PropertyRangeError:
            return
        assert end.s == pytest.approx(answer.s, abs=1e-4)


@pytest.mark.parametrize("name", modelled())
def test_a_refrigerant_answers_or_refuses(name: str) -> None:
    """150 wild triples of temperature, pressure and enthalpy; no other error, no nonsense."""
    r, source = refrigerant(name), random.Random(name)
    answered = 0
    for _ in range(150):
        T, p, h = wild(source, 50, 700), wild(source, 1, 1e9, logarithmic=True), wild(source, -3e5, 2.5e6)
        for ask in questions(r, T, p, h):
            try:
                answer = ask()
            except PropertyRangeError:
                continue
            answered += 1
            check(r, answer, source)
    assert answered > 100


def test_moist_air_answers_or_refuses() -> None:
    """3,000 wild states of air."""
    source = random.Random(3)
    answered = 0
    for _ in range(3000):
        T, p = wild(source, 150, 500), wild(source, 1e3, 3e5)
        measure = source.choice(("relative_humidity", "wet_bulb", "humidity_ratio"))
        value = {"relative_humidity": (-0.1, 1.1), "wet_bulb": (200, 400), "humidity_ratio": (-1e-3, 0.1)}[measure]
        try:
            air = moist_air(T, p, **{measure: wild(source, *value)})
            numbers = (air.W, air.h, air.density, air.cp, air.dew_point, air.wet_bulb, air.relative_humidity)
        except PropertyRangeError:
            continue
        answered += 1
        assert all(math.isfinite(n) for n in numbers)
        assert air.dew_point <= air.wet_bulb + 1.0 <= air.T + 1.0 + 1e-9
    assert answered > 300
