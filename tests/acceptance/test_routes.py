"""Routes to a capacity: against hand calculation, Monte Carlo and the honest figures of the field; and the refusals."""

from __future__ import annotations

import random
import statistics

import pytest

from commission.acceptance import (
    Budget,
    Component,
    Measured,
    air_side,
    closure,
    compressor_heat_balance,
    derive,
    liquid_side,
)
from commission.acceptance.derived import unbalance
from commission.acceptance.evaluation import evaluate
from commission.acceptance.routes import UPSETS, compressor_power, shell_share
from commission.description import LoadedPlant
from commission.description.model import Medium
from commission.errors import NotCalculatedError
from commission.prediction import SystemModel
from commission.properties import liquid, refrigerant
from tests.acceptance.visits import measured, sure, visit

AIR = 101_325.0


def states(**changes: float) -> dict[str, Measured]:
    """A plausible set of R-134a readings."""
    base = {
        "suction_pressure": 3.4e5, "suction_temperature": 285.15, "discharge_pressure": 9.7e5,
        "discharge_temperature": 335.15, "liquid_temperature": 306.15, "compressor_power": 8600.0,
    }  # fmt: skip
    return sure(**{**base, **changes})


def test_heat_balance_closes_on_a_textbook_cycle() -> None:
    """Cengel & Boles, actual R-134a cycle (suction 0.14 MPa -10 °C, discharge 0.8 MPa 50 °C, liquid 26 °C, 0.05 kg/s):
    from its power 2.02 kW and states the balance returns its capacity 7.93 kW (within 0.5 %)."""
    readings = states(
        suction_pressure=0.14e6, suction_temperature=263.15, discharge_pressure=0.8e6, discharge_temperature=323.15,
        liquid_temperature=299.15, compressor_power=2020.0,
    )  # fmt: skip
    no_loss = Measured("shell heat loss share", 0.0)
    cooling = compressor_heat_balance(refrigerant("R-134a"), readings, shell=no_loss).measured.value
    heating = compressor_heat_balance(refrigerant("R-134a"), readings, key="heating_capacity", shell=no_loss)
    assert cooling == pytest.approx(7930.0, rel=0.005)
    assert heating.measured.value - cooling == pytest.approx(2020.0, rel=1e-9)


def test_heat_balance_returns_the_capacity_of_the_model(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """From the readings that the model expects, the route gives back the capacity that the model expects (0.1 %)."""
    found = evaluate(cold_room, cold_room_model, *visit(cold_room, cold_room_model))
    expected = cold_room_model.predict().expected
    for key in ("cooling_capacity", "heating_capacity"):
        assert found.capacity(key).measured.value == pytest.approx(expected[key].value, rel=1e-3)


def test_heat_balance_is_as_uncertain_as_the_field_says(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """With ordinary site instruments 7 to 10 % (95 %) are honest (Nordtest, Fahlén); here with clamped-on probes."""
    found = evaluate(cold_room, cold_room_model, *visit(cold_room, cold_room_model)).capacity("cooling_capacity")
    assert 0.06 < found.measured.budget.expanded() / found.measured.value < 0.13


def test_budget_agrees_with_monte_carlo(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """JCGM 101: propagating the distributions themselves gives the same standard uncertainty (4 %, 3000 draws)."""
    _, read = visit(cold_room, cold_room_model)
    readings = measured(cold_room, read)
    readings["compressor_power"] = Measured("compressor_power", 1480.0, Budget((Component("meter", 9.0, cause="m"),)))
    fluid = cold_room_model.refrigerant
    shell = shell_share()
    linear = compressor_heat_balance(fluid, readings, shell=shell).measured
    random.seed(101)
    causes = {c.cause: c for m in (*readings.values(), shell) for c in m.budget.components}
    draws = []
    for _ in range(3000):
        unit = {
            name: random.uniform(-(3**0.5), 3**0.5) if c.distribution == "rectangular" else random.gauss(0.0, 1.0)
            for name, c in causes.items()
        }
        method = 1.0 + 0.02 * random.gauss(0.0, 1.0)

        def moved(m: Measured, unit: dict[str, float] = unit) -> Measured:
            return Measured(m.key, m.value + sum(c.value * unit[c.cause] for c in m.budget.components))

        one = compressor_heat_balance(fluid, {k: moved(m) for k, m in readings.items()}, shell=moved(shell))
        draws.append(method * one.measured.value)
    assert statistics.stdev(draws) == pytest.approx(linear.budget.standard, rel=0.04)
    assert statistics.fmean(draws) == pytest.approx(linear.value, rel=0.005)


@pytest.mark.parametrize("upset", sorted(UPSETS))
def test_upsets_refuse_the_heat_balance(upset: str) -> None:
    """Injection, bypass and cooling refuse the route, each with its reason."""
    with pytest.raises(NotCalculatedError) as caught:
        compressor_heat_balance(refrigerant("R-134a"), states(), upsets=(upset,))
    assert str(caught.value) == UPSETS[upset]


def test_refusals_of_the_heat_balance() -> None:
    """Screw oil, missing readings, swapped temperatures, wet suction and flash gas each refuse by name."""
    fluid = refrigerant("R-134a")
    with pytest.raises(NotCalculatedError, match="screw compressor"):
        compressor_heat_balance(fluid, states(), compressor="screw")
    short = states()
    del short["liquid_temperature"]
    with pytest.raises(NotCalculatedError, match="it needs a reading of liquid temperature"):
        compressor_heat_balance(fluid, short)
    swapped = states(suction_temperature=345.15, discharge_temperature=318.15)
    with pytest.raises(NotCalculatedError, match="holds no more heat"):
        compressor_heat_balance(fluid, swapped)
    doubt = Budget((Component("gauge", 1.5),))
    wet = {**states(), "compressor_superheat": Measured("compressor_superheat", 2.0, doubt)}
    with pytest.raises(NotCalculatedError, match="suction gas may be wet"):
        compressor_heat_balance(fluid, wet)
    flash = {**states(), "subcooling": Measured("subcooling", -4.0, doubt)}
    with pytest.raises(NotCalculatedError, match="flash gas"):
        compressor_heat_balance(fluid, flash)


WATER = sure(
    heat_source_inlet_temperature=285.15, heat_source_outlet_temperature=280.15, heat_source_flow=6.5 / 3600,
    heat_sink_inlet_temperature=303.15, heat_sink_outlet_temperature=308.15, heat_sink_flow=8.0 / 3600,
)  # fmt: skip


def test_liquid_side_by_hand() -> None:
    """Water 12/7 °C, 6.5 m3/h: 999.5 kg/m3 times 4.194 kJ/kg K times 5 K is 37.8 kW (steam-table values, 0.2 %)."""
    found = liquid_side(Medium(medium="water"), "source", WATER).measured
    assert found.value == pytest.approx(6.5 / 3600 * 999.5 * 4194.0 * 5.0, rel=0.002)
    assert found.key == "cooling_capacity"
    assert liquid_side(Medium(medium="water"), "sink", WATER).measured.value > 0.0


def test_glycol_needs_its_mass_fraction_and_is_less_sure() -> None:
    """Without a stated mass fraction there is no route; with one, its doubt is part of the budget."""
    with pytest.raises(NotCalculatedError, match="mass fraction of propylene glycol is not stated"):
        liquid_side(Medium(medium="propylene glycol"), "source", WATER)
    medium = Medium.model_validate({"medium": "propylene glycol", "mass_fraction": "30 %"})
    found = liquid_side(medium, "source", WATER).measured
    fluid = liquid("propylene glycol", 0.3)
    expected = 6.5 / 3600 * fluid.density(285.15) * fluid.specific_heat(282.65) * 5.0
    assert found.value == pytest.approx(expected)
    assert [c.name for c in found.budget.components] == ["mass fraction of propylene glycol"]


def test_sides_refuse_the_other_medium() -> None:
    """The liquid side refuses air and the air side refuses water."""
    with pytest.raises(NotCalculatedError, match="heat source is air"):
        liquid_side(Medium(medium="air"), "source", WATER)
    with pytest.raises(NotCalculatedError, match="heat sink is water"):
        air_side(Medium(medium="water"), "sink", AIR, WATER)


def test_two_routes_close(chiller_model: SystemModel) -> None:
    """First law: on the expected readings sink heat less source heat less the power that stays in the gas is zero."""
    expected = chiller_model.predict().expected
    at = {k: Measured(k, e.value) for k, e in expected.items()}
    shell = Measured("shell heat loss share", 1.0 - (at["heating_capacity"].value - at["cooling_capacity"].value)
                     / at["compressor_power"].value)  # fmt: skip
    rest = closure(at["cooling_capacity"], at["heating_capacity"], at["compressor_power"], shell)
    assert rest.value == pytest.approx(0.0, abs=1e-6 * at["heating_capacity"].value)
    assert 0.0 <= shell.value <= 0.15


def test_compressor_power_from_the_meter_of_the_unit() -> None:
    """The power of the compressor is read, or the power input less the fans; with neither there is none."""
    assert compressor_power(sure(compressor_power=900.0), None) == Measured("compressor_power", 900.0)
    fans = Measured("fan_power", 130.0, Budget((Component("fans", 10.0),)))
    found = compressor_power({"power_input": Measured("power_input", 1630.0, Budget((Component("m", 9.0),)))}, fans)
    assert found is not None
    assert found.value == 1500.0
    assert found.budget.standard == pytest.approx((100.0 + 81.0) ** 0.5)
    assert compressor_power(sure(power_input=1600.0), None) is None


def test_derived_superheat_and_its_slope() -> None:
    """Superheat moves by minus the slope of the dew line times the error of the gauge: 2.1 K for 0.17 bar at -10 °C."""
    fluid = refrigerant("R-134a")
    gauge = Budget((Component("gauge", 17_000.0, cause="g"),))
    readings = {
        "suction_pressure": Measured("suction_pressure", fluid.dew(263.15).p, gauge),
        "suction_temperature": Measured("suction_temperature", 271.15),
    }
    found = derive(fluid, readings)["compressor_superheat"].measured
    assert found.value == pytest.approx(8.0, abs=1e-6)
    own = {c.cause: c.value for c in found.budget.components}
    assert own["g"] == pytest.approx(-2.1, abs=0.1)


def test_derived_values_share_the_gauge() -> None:
    """Superheat plus evaporating temperature is the probe alone: the gauge cancels."""
    fluid = refrigerant("R-134a")
    readings = {
        "suction_pressure": Measured("suction_pressure", 3e5, Budget((Component("gauge", 9000.0, cause="g"),))),
        "suction_temperature": Measured("suction_temperature", 280.0, Budget((Component("probe", 0.3, cause="p"),))),
    }
    found = derive(fluid, readings)
    total = Budget(
        found["compressor_superheat"].measured.budget.components
        + found["evaporating_temperature"].measured.budget.components
    )
    assert total.standard == pytest.approx(0.3, rel=1e-3)


def test_unbalance_of_phases() -> None:
    """Largest deviation from the mean over the mean: 9.0, 10.0, 11.6 A is 13.7 % (by hand)."""
    found = unbalance(Measured("current", 10.2), (9.0, 10.0, 11.6), 0.1).measured
    assert found.key == "current_unbalance"
    assert found.value == pytest.approx(1.4 / 10.2)
    assert found.budget.standard == pytest.approx(0.1 / 12**0.5 * (4 / 3) ** 0.5 / 10.2)
    with pytest.raises(ValueError, match="at least two phases"):
        unbalance(Measured("current", 10.2), (10.2,), 0.1)
