"""Systems whose compressor is stated by polynomials, by a table, or with a variable speed."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from commission.description import LoadedPlant
from commission.errors import NotCalculatedError
from commission.prediction import fit

Written = Callable[[str], LoadedPlant]
C = 273.15

POLYNOMIAL = """
duty: liquid_cooling
refrigerant: R-134a
heat_source: {medium: water}
heat_sink: {medium: air}
compressor:
  type: scroll
  polynomial:
    temperature_unit: °C
    suction_superheat: 10 K
    cooling_capacity: [32000, 1150, -260, 14, -5, -0.6, 0, 0, 0, 0]
    power: [2800, 20, 95, 0, 0.3, 0.3, 0, 0, 0, 0]
design: {heat_source_inlet_temperature: 12 °C, heat_sink_inlet_temperature: 32 °C}
"""
TABLE = """
duty: liquid_cooling
refrigerant: R-134a
heat_source: {medium: water}
heat_sink: {medium: air}
compressor:
  type: scroll
  displacement: 36 m3/h
  table:
    suction_superheat: 10 K
    points:
POINTS
design: {heat_source_inlet_temperature: 12 °C, heat_sink_inlet_temperature: 32 °C}
"""
INVERTER = """
duty: space_heating
refrigerant: R-32
heat_source: {medium: air}
heat_sink: {medium: water}
compressor: {type: rotary, drive: variable speed, nominal_speed: 60 Hz, minimum_speed: 20 Hz, maximum_speed: 90 Hz}
rated_points:
  - {heat_source_inlet_temperature: 7 °C, heat_sink_inlet_temperature: 30 °C, heat_sink_outlet_temperature: 35 °C,
     heating_capacity: 8 kW, power_input: 1.8 kW}
"""


def _capacity(S: float, D: float) -> float:
    return 32000 + 1150 * S - 260 * D + 14 * S * S - 5 * S * D - 0.6 * D * D


def _power(S: float, D: float) -> float:
    return 2800 + 20 * S + 95 * D + 0.3 * S * D + 0.3 * D * D


def test_polynomials_and_a_design_condition_are_enough(written: Written) -> None:
    """With polynomials the power at the dew points found is that of the polynomials; the doubt is that of the trade."""
    model = fit(written(POLYNOMIAL), "it")
    expected = model.predict().expected
    line = model.fit.plan.machine.suction_line.pressure_loss
    S = expected["evaporating_temperature"].value - C - line
    D = expected["condensing_temperature"].value - C + model.fit.plan.machine.discharge_line_loss
    assert expected["compressor_power"].value == pytest.approx(_power(S, D), rel=2e-3)
    assert expected["cooling_capacity"].value == pytest.approx(_capacity(S, D), rel=0.06)
    assert 0.02 < (expected["cooling_capacity"].uncertainty or 0) / expected["cooling_capacity"].value < 0.08
    assert {"compressor_flow_departure", "compressor_power_departure"} <= set(model.assumptions)


def test_a_rated_point_settles_the_departure_from_polynomials(written: Written) -> None:
    """A rated point of the system scales the polynomials: the promise is kept without doubt."""
    point = """rated_points:
  - {heat_source_inlet_temperature: 12 °C, heat_sink_inlet_temperature: 32 °C, cooling_capacity: 25 kW,
     power_input: 8 kW, includes: [compressor]}
"""
    model = fit(written(POLYNOMIAL + point), "it")
    expected = model.predict().expected
    assert expected["cooling_capacity"].value == pytest.approx(25_000, rel=1e-4)
    assert expected["power_input"].value == pytest.approx(8000, rel=1e-4)
    assert expected["cooling_capacity"].uncertainty == pytest.approx(0, abs=5)
    assert "compressor_flow_departure" not in model.assumptions


def test_a_table_of_the_compressor_gives_its_shape(written: Written) -> None:
    """A table made from the polynomials leads to nearly the same machine as the polynomials themselves."""
    points = "\n".join(
        f"      - {{evaporating_temperature: {S} °C, condensing_temperature: {D} °C, "
        f"cooling_capacity: {_capacity(S, D):.0f} W, compressor_power: {_power(S, D):.0f} W}}"
        for S in (-5, 0, 5, 10)
        for D in (35, 45, 55)
    )
    by_table = fit(written(TABLE.replace("POINTS", points)), "it").predict().expected
    by_polynomial = fit(written(POLYNOMIAL), "it").predict().expected
    for key in ("cooling_capacity", "power_input"):
        assert by_table[key].value == pytest.approx(by_polynomial[key].value, rel=0.04)


def test_polynomials_without_a_condition_say_what_is_missing(written: Written) -> None:
    """A compressor alone does not say at which condition the plant works."""
    with pytest.raises(NotCalculatedError, match="design"):
        fit(written(POLYNOMIAL.split("design")[0]), "it")


def test_capacity_follows_the_speed(written: Written) -> None:
    """At half speed a machine gives more than half the heat with a better COP, as its exchangers are relieved."""
    model = fit(written(INVERTER), "it")
    full, half = model.predict(), model.predict({"compressor_speed": 30.0})
    share = half.expected["heating_capacity"].value / full.expected["heating_capacity"].value
    assert 0.5 < share < 0.6
    assert half.expected["heating_cop"].value > full.expected["heating_cop"].value
    assert (half.expected["heating_cop"].uncertainty or 0) > 0.02 * half.expected["heating_cop"].value


def test_an_unknown_speed_is_inferred_from_one_reading(written: Written) -> None:
    """The speed that explains a power reading is found again; beyond the drive's range there is none."""
    model = fit(written(INVERTER), "it")
    reading = model.predict({"compressor_speed": 42.0}).expected["power_input"].value
    assert model.infer("compressor_speed", "power_input", reading) == pytest.approx(42.0, rel=1e-5)
    with pytest.raises(NotCalculatedError, match="no compressor speed"):
        model.infer("compressor_speed", "power_input", 9000.0)
