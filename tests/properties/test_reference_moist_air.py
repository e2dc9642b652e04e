"""Moist air against published examples, an independent psychrometric library and real moist air."""

from __future__ import annotations

import numpy as np
import psychrolib
import pytest

from commission.properties import moist_air, moist_air_from_enthalpy, saturated_air, saturated_air_at_enthalpy
from commission.properties.psychrometrics import TRIPLE_POINT, dew_point, saturation_pressure

SEA_LEVEL = 101325.0


def test_example_of_a_psychrometric_chart() -> None:
    """ASHRAE Fundamentals ch. 1: 40 °C with wet bulb 20 °C is 6.5 g/kg, 56.7 kJ/kg, dew point 7 °C, 14 %, 0.896 m3/kg.

    Recalled from memory; chart reading, so half a unit of the last digit. The perfect-gas value of W is 6.40 g/kg.
    """
    air = moist_air(313.15, SEA_LEVEL, wet_bulb=293.15)
    assert pytest.approx(6.5e-3, abs=0.11e-3) == air.W
    assert air.h == pytest.approx(56.7e3, abs=100)
    assert air.dew_point - 273.15 == pytest.approx(7.2, abs=0.5)
    assert air.relative_humidity == pytest.approx(0.14, abs=0.005)
    assert 1 / air.density == pytest.approx(0.896, abs=0.001)


def test_example_of_a_heating_coil() -> None:
    """ASHRAE Fundamentals ch. 1: 10 m3/s of saturated air heated from 2 °C to 40 °C takes 490 to 492 kW, 12.74 kg/s."""
    cold = saturated_air(275.15, SEA_LEVEL)
    flow = 10 * cold.density
    warm = moist_air(313.15, SEA_LEVEL, humidity_ratio=cold.W)
    assert flow == pytest.approx(12.75, abs=0.02)
    assert flow * (warm.h - cold.h) == pytest.approx(491e3, abs=1.2e3)


def test_example_of_a_cooling_coil_with_condensate() -> None:
    """ASHRAE Fundamentals ch. 1: 5 m3/s from 30 °C 50 % to saturated 10 °C, condensate at 10 °C: 197 to 198 kW."""
    warm, cold = moist_air(303.15, SEA_LEVEL, relative_humidity=0.5), saturated_air(283.15, SEA_LEVEL)
    flow = 5 * warm.density
    assert pytest.approx(13.3e-3, abs=0.15e-3) == warm.W
    assert pytest.approx(7.66e-3, abs=0.06e-3) == cold.W
    water = 4.186e3 * 10
    assert flow * (warm.h - cold.h - (warm.W - cold.W) * water) == pytest.approx(198e3, abs=1.2e3)


@pytest.fixture
def si() -> None:
    """The independent library in SI units."""
    psychrolib.SetUnitSystem(psychrolib.SI)


@pytest.mark.usefixtures("si")
def test_agreement_with_an_independent_library() -> None:
    """PsychroLib 2.5 (same source, other code) at 400 seeded states from -40 to 55 °C, sea level to 4000 m."""
    rng = np.random.default_rng(20)
    for _ in range(400):
        t, p, rh = float(rng.uniform(-40, 55)), float(rng.uniform(62e3, 106e3)), float(rng.uniform(0.02, 1))
        W = psychrolib.GetHumRatioFromRelHum(t, rh, p)
        air = moist_air(t + 273.15, p, relative_humidity=rh)
        assert pytest.approx(W, rel=1e-9) == air.W
        assert air.h == pytest.approx(psychrolib.GetMoistAirEnthalpy(t, W), abs=1e-3)
        assert 1 / air.density == pytest.approx(psychrolib.GetMoistAirVolume(t, W, p), rel=1e-6)
        assert air.dew_point - 273.15 == pytest.approx(psychrolib.GetTDewPointFromHumRatio(t, W, p), abs=1e-6)
        wet = psychrolib.GetTWetBulbFromHumRatio(t, W, p)
        if abs(wet) > 0.8:  # nearer 0 °C a wet and an iced wick both fit, and the two codes choose differently
            assert air.wet_bulb - 273.15 == pytest.approx(wet, abs=2e-3)


def test_distance_to_real_moist_air_is_as_stated() -> None:
    """CoolProp's real moist air (Herrmann, Kretzschmar & Gatley 2009): W up to 0.9 % higher, wet bulb within 0.05 K."""
    from commission.properties.coolprop import load

    real = load().HAPropsSI
    for t in (-15.0, 2.0, 12.0, 24.0, 35.0, 45.0):
        for rh in (0.2, 0.5, 0.9):
            for p in (SEA_LEVEL, 80e3):
                air = moist_air(t + 273.15, p, relative_humidity=rh)
                W = real("W", "T", t + 273.15, "P", p, "R", rh)
                assert 0.0 < W / air.W - 1 < 9e-3
                assert air.wet_bulb == pytest.approx(real("B", "T", t + 273.15, "P", p, "R", rh), abs=0.05)


def test_ways_round_close() -> None:
    """Wet bulb, enthalpy and saturated enthalpy lead back to the state they came from."""
    rng = np.random.default_rng(21)
    for _ in range(300):
        T, p, rh = float(rng.uniform(225, 345)), float(rng.uniform(60e3, 106e3)), float(rng.uniform(0.0, 1))
        air = moist_air(T, p, relative_humidity=rh)
        assert pytest.approx(air.W, abs=1e-9) == moist_air(T, p, wet_bulb=air.wet_bulb).W
        assert pytest.approx(T, abs=1e-8) == moist_air_from_enthalpy(air.h, air.W, p).T
        full = saturated_air(T, p)
        assert pytest.approx(T, abs=1e-6) == saturated_air_at_enthalpy(full.h, p).T
        assert air.wet_bulb <= T
        if rh > 1e-6:
            assert pytest.approx(saturation_pressure(air.dew_point), rel=1e-9) == air.vapour_pressure
            assert air.dew_point <= air.wet_bulb + 1e-6 or abs(air.wet_bulb - TRIPLE_POINT) < 1


def test_ice_and_water_meet_at_the_triple_point() -> None:
    """611.657 Pa at 0.01 °C (IAPWS) on both branches; the ice branch is steeper."""
    below, above = saturation_pressure(TRIPLE_POINT - 1e-9), saturation_pressure(TRIPLE_POINT)
    assert below == pytest.approx(611.657, rel=2e-4)
    assert above == pytest.approx(611.657, rel=2e-4)
    assert dew_point(saturation_pressure(253.15)) == pytest.approx(253.15, abs=1e-8)
