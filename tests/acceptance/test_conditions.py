"""The condition of the day: dry and wet bulb become a humidity, the other end of a medium stands for the rated one."""

from __future__ import annotations

from dataclasses import replace

import pytest

from commission.acceptance import (
    Budget,
    Component,
    Measured,
    Reading,
    Terms,
    capability,
    carry,
    evaluate,
    expect,
    judge,
    make_sheet,
    read_sheet,
)
from commission.acceptance.conditions import DRY, HUMIDITY, WET, day_condition, with_air
from commission.acceptance.derived import derive
from commission.description import LoadedPlant
from commission.errors import NotCalculatedError
from commission.prediction import SystemModel, fit
from tests.acceptance.conftest import write_plant
from tests.acceptance.visits import sure, visit

FLOW, RETURN = "heat_sink_outlet_temperature", "heat_sink_inlet_temperature"
HEAT_PUMP = """
plant: {name: Test heat pump, barometric_pressure: 1013.25 hPa a}
instruments:
  air probe: {measures: temperature, accuracy: {absolute: 0.2 K}, calibrated_until: 2027-02-28}
  wick: {measures: temperature, accuracy: {absolute: 0.4 K}, calibrated_until: 2027-02-28}
  pair: {measures: temperature, class: IEC 60751 A, matched_pair: yes, resolution: 0.01 K, calibrated_until: 2027-02-28}
  flow meter: {measures: volume flow, to: 3 m3/h, class: EN 1434 class 2, calibrated_until: 2028-01-31}
  power meter: {measures: electric power, class: MID class B, calibrated_until: 2028-01-31}
systems:
  heat-pump:
    duty: space_heating
    refrigerant: R-290
    heat_source: {medium: air, flow: 3300 m3/h}
    heat_sink: {medium: water, flow: 1.55 m3/h}
    compressor: {type: scroll}
    expansion: {device: electronic valve, superheat: 5 K}
    rated_points:
      - {heat_source_inlet_temperature: 7 °C, heat_source_wet_bulb: 6 °C, heat_sink_outlet_temperature: 35 °C,
         heating_capacity: 9.0 kW, power_input: 1.9 kW, includes: [compressor]}
    guarantee:
      - {quantity: heating_capacity, value: 7.4 kW, tolerance: {below: 5 %}, decision: simple, route: liquid side,
         at: {heat_source_inlet_temperature: 2 °C, heat_source_wet_bulb: 1 °C, heat_sink_outlet_temperature: 35 °C}}
    measured_with:
      heat_source_inlet_temperature: air probe
      heat_source_wet_bulb: wick
      heat_sink_inlet_temperature: pair
      heat_sink_outlet_temperature: pair
      heat_sink_flow: flow meter
      power_input: power meter
"""
STATED = {DRY: 275.15, WET: 274.15, FLOW: 308.15}


@pytest.fixture(scope="module")
def plant(tmp_path_factory: pytest.TempPathFactory) -> LoadedPlant:
    """A heat pump whose contract speaks of 2/1 °C, as read from its file."""
    return write_plant(tmp_path_factory.mktemp("heat-pump"), HEAT_PUMP)


@pytest.fixture(scope="module")
def model(plant: LoadedPlant) -> SystemModel:
    """The fitted heat pump."""
    return fit(plant, "heat-pump")


def bulbs(dry: float, wet: float, u_dry: float = 0.0, u_wet: float = 0.0) -> dict[str, Measured]:
    """Dry and wet bulb as measured, °C and K."""
    return {
        DRY: Measured(DRY, 273.15 + dry, Budget((Component("d", u_dry, cause="dry"),) if u_dry else ())),
        WET: Measured(WET, 273.15 + wet, Budget((Component("w", u_wet, cause="wet"),) if u_wet else ())),
    }


def test_bulbs_become_a_humidity_with_the_causes_of_both(model: SystemModel) -> None:
    """Each bulb moves the humidity through its slope, under its own cause; at 2/1 °C the wet one by some 15 % per K."""
    found = day_condition(model, bulbs(2.0, 1.0, 0.1, 0.2))
    parts = {c.cause: c.value for c in found.used[HUMIDITY].budget.components}
    near = ((2.1, 1.0), (1.9, 1.0), (2.0, 1.2), (2.0, 0.8))
    turned = {(d, w): day_condition(model, bulbs(d, w)).used[HUMIDITY].value for d, w in near}
    assert parts["dry"] == pytest.approx((turned[2.1, 1.0] - turned[1.9, 1.0]) / 2.0, rel=0.02)
    assert parts["wet"] == pytest.approx((turned[2.0, 1.2] - turned[2.0, 0.8]) / 2.0, rel=0.02)
    assert parts["dry"] < 0.0 < parts["wet"]
    assert found.spent == {WET}
    assert found.derived[HUMIDITY].method == "humidity_of_bulbs"


def test_the_slope_does_not_cross_the_freezing_of_the_wick(model: SystemModel) -> None:
    """At a wet bulb of 0.0 °C, where the wick turns to ice, the doubt is like that a tenth of a kelvin away."""
    doubt = [day_condition(model, bulbs(1.0, w, 0.0, 0.2)).used[HUMIDITY].budget.standard for w in (-0.1, 0.0, 0.1)]
    assert max(doubt) < 1.2 * min(doubt)


def test_a_wet_bulb_above_the_dry_bulb(model: SystemModel) -> None:
    """Within the doubt of both probes the air is saturated, and that is said; beyond it nothing is made of it."""
    near = day_condition(model, bulbs(2.0, 2.2, 0.1, 0.2))
    assert near.used[HUMIDITY].value == pytest.approx(1.0)
    assert near.used[HUMIDITY].budget.standard > 0.0
    assert ["taken as saturated" in w for w in near.warnings] == [True]
    far = day_condition(model, bulbs(2.0, 3.0, 0.1, 0.2))
    assert HUMIDITY not in far.used
    assert "1.0 K above the dry bulb" in far.unused[WET]
    assert far.spent == frozenset()


def test_a_humidity_that_was_read_goes_first(model: SystemModel) -> None:
    """With both read the humidity is the condition, and the wet bulb says why it is not judged."""
    found = day_condition(model, {**bulbs(2.0, 1.0), HUMIDITY: Measured(HUMIDITY, 0.9)})
    assert found.used[HUMIDITY].value == 0.9
    assert "relative humidity was read too" in found.unused[WET]


def test_a_dry_bulb_is_needed(model: SystemModel) -> None:
    """A wet bulb alone gives no humidity."""
    found = day_condition(model, {WET: Measured(WET, 274.15)})
    assert "needs a reading of the dry bulb" in found.unused[WET]


def test_expectations_keep_what_a_probe_moves_twice(model: SystemModel) -> None:
    """The dry bulb moves an expectation by itself and through the humidity: one cause, the sum of both."""
    day = {**bulbs(2.0, 1.0, 0.5, 0.0), FLOW: Measured(FLOW, 308.15)}
    part = sum(c.value for c in expect(model, day)["evaporating_temperature"].budget.components if c.cause == "dry")
    up, down = (
        model.predict({**STATED, DRY: 275.15 + d}).expected["evaporating_temperature"].value for d in (0.5, -0.5)
    )
    assert part == pytest.approx((up - down) / 2.0, rel=0.1)


def test_a_guarantee_at_dry_and_wet_bulb_is_carried(model: SystemModel) -> None:
    """At 2/1 °C itself the guarantee is what is stated, and in drier air it is less by the ratio of the model."""
    terms = Terms("heating_capacity", 7400.0, STATED, below=0.05)
    same = carry(terms, {**bulbs(2.0, 1.0), FLOW: Measured(FLOW, 308.15)}, model)
    assert same.value == pytest.approx(7400.0)
    drier = carry(terms, {**bulbs(2.0, -1.0), FLOW: Measured(FLOW, 308.15)}, model)
    ratio = [model.predict({**STATED, WET: w}).expected["heating_capacity"].value for w in (272.15, 274.15)]
    assert drier.value == pytest.approx(7400.0 * ratio[0] / ratio[1])


def test_as_stated_compares_bulbs(model: SystemModel) -> None:
    """As stated: the wet bulb of the day, read or from the humidity, is held against the stated one."""
    terms = Terms("heating_capacity", 7400.0, STATED, carried_by="as stated")
    flow = {FLOW: Measured(FLOW, 308.15)}
    near = carry(terms, {**bulbs(2.1, 1.2, 0.1, 0.2), **flow}, model)
    assert near.value == 7400.0
    assert near.budget.standard > 0.0
    humid = Measured(HUMIDITY, day_condition(model, bulbs(2.0, 1.0)).used[HUMIDITY].value)
    assert carry(terms, {DRY: Measured(DRY, 275.15), HUMIDITY: humid, **flow}, model).value == 7400.0
    with pytest.raises(NotCalculatedError, match="outdoor air wet bulb of the day is another one"):
        carry(terms, {**bulbs(2.0, -0.5), **flow}, model)


def test_wet_bulb_from_humidity_and_back() -> None:
    """The wet bulb that follows from a humidity gives that humidity again, at the pressure of the site."""
    day = {DRY: Measured(DRY, 300.15), HUMIDITY: Measured(HUMIDITY, 0.47, Budget((Component("h", 0.02),)))}
    wet = with_air(day, (WET,), 97e3)[WET]
    back = with_air({DRY: day[DRY], WET: wet}, (HUMIDITY,), 97e3)[HUMIDITY]
    assert back.value == pytest.approx(0.47, abs=1e-6)
    assert back.budget.standard == pytest.approx(0.02, rel=0.01)
    assert with_air(day, (DRY,), 97e3) is day


def test_a_table_by_wet_bulb_is_read_by_humidity(plant: LoadedPlant, model: SystemModel) -> None:
    """A supplier's table over dry and wet bulb is entered with the wet bulb that follows from the humidity read."""
    one = plant.system("heat-pump").rated_points[0]
    grid = [
        one.model_copy(update={DRY: 273.15 + d, WET: 273.15 + w, "heating_capacity": 1e3 * (9 + 0.2 * d + 0.1 * w)})
        for d in (2.0, 12.0)
        for w in (0.0, 2.0)
    ]
    terms = Terms("heating_capacity", 9e3, STATED, carried_by="supplier's table")
    day = bulbs(7.0, 1.5)
    humidity = day_condition(model, day).used[HUMIDITY]
    found = carry(terms, {DRY: day[DRY], HUMIDITY: humidity, FLOW: Measured(FLOW, 308.15)}, model, grid)
    assert found.value == pytest.approx(9e3 * (9 + 1.4 + 0.15) / (9 + 0.4 + 0.1), rel=1e-6)


def readings(plant: LoadedPlant, model: SystemModel, **changes: float | None) -> tuple[list[Reading], list[Reading]]:
    """A visit of a plant as designed at 2/1 °C, read with a psychrometer."""
    asked, read = visit(plant, model, STATED, **changes)
    return [*asked, Reading(WET, 274.15, "wick")], read


def test_a_visit_with_a_psychrometer(plant: LoadedPlant, model: SystemModel) -> None:
    """The wet bulb of a visit is its humidity: nothing is taken as designed for it, and the guarantee is decided."""
    found = judge(plant, model, *readings(plant, model), "test", since_start=7200.0, since_defrost=3600.0)
    assert HUMIDITY in found.conditions
    assert found.derived[HUMIDITY].measured == found.conditions[HUMIDITY]
    assert WET not in found.not_judged
    assert not [w for w in found.warnings if "humidity was not read" in w]
    assert [g.outcome for g in found.guarantees] == ["conforming"]
    assert found.guarantees[0].terms.at == pytest.approx(STATED)


def test_the_other_end_of_a_medium_is_enough(plant: LoadedPlant, model: SystemModel) -> None:
    """Rated by the flow temperature, read at the return: the same expectations, and it is said."""
    full = evaluate(plant, model, *readings(plant, model))
    asked, read = readings(plant, model, heat_sink_outlet_temperature=None)
    found = evaluate(plant, model, asked, read)
    assert FLOW not in found.conditions
    assert found.conditions[RETURN].value == full.measured[RETURN].value
    key = "condensing_temperature"
    assert found.expectations[key].value == pytest.approx(full.expectations[key].value, abs=0.02)
    assert [w for w in found.warnings if "taken from heating water inlet temperature" in w]
    assert RETURN not in {d.key for d in found.deviations}
    neither, read = readings(plant, model, heat_sink_outlet_temperature=None, heat_sink_inlet_temperature=None)
    assert evaluate(plant, model, neither, read).deviations == ()


def test_a_frozen_sheet_takes_the_wet_bulb(plant: LoadedPlant, model: SystemModel) -> None:
    """A sheet over dry bulb and humidity keeps 2/1 °C in its terms and is read with a psychrometer."""
    ranges = {DRY: (273.15, 276.15, 279.15), HUMIDITY: (0.7, 0.85, 1.0), FLOW: (306.15, 309.15)}
    frozen = read_sheet(make_sheet(plant, model, ranges).to_text())
    terms = frozen.targets_for("guarantee")[0].terms
    assert terms is not None
    assert terms.at == pytest.approx(STATED)
    found = judge(plant, model, *readings(plant, model), "test", frozen, since_start=7200.0, since_defrost=3600.0)
    assert found.guarantees[0].outcome == "conforming"
    assert found.guarantees[0].guaranteed is not None
    assert found.guarantees[0].guaranteed.value == pytest.approx(7400.0, rel=0.01)


def test_before_the_visit_the_psychrometer_is_offered(plant: LoadedPlant, model: SystemModel) -> None:
    """With no humidity probe and an instrument for the wet bulb, the visit is worked through with the wet bulb."""
    found = capability(plant, model, STATED)
    assert found.conditions[HUMIDITY].budget.standard > 0.0
    assert HUMIDITY not in found.not_read
    assert [g.decided for g in found.guarantees] == [True]


def test_a_liquid_source_knows_no_wet_bulb(chiller_model: SystemModel) -> None:
    """Water has no wet bulb: a guarantee that states one cannot be carried."""
    terms = replace(Terms("cooling_capacity", 38e3, {}), at={DRY: 285.15, WET: 284.15})
    with pytest.raises(NotCalculatedError, match="does not depend on chilled water wet bulb"):
        carry(terms, {DRY: Measured(DRY, 285.15)}, chiller_model)


def test_an_outlet_of_air_does_not_stand_for_its_inlet(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """Air that leaves a condenser is not mixed: it is no condition, whatever was read of it."""
    asked, read = visit(cold_room, cold_room_model, heat_sink_inlet_temperature=None)
    found = evaluate(cold_room, cold_room_model, asked, [*read, Reading("heat_sink_outlet_temperature", 308.0)])
    assert "heat_sink_outlet_temperature" not in found.conditions
    assert found.deviations == ()


def test_approaches_of_a_chiller(chiller_model: SystemModel, cold_room_model: SystemModel) -> None:
    """Of liquids: leaving chilled water stands 2 to 8 K above evaporating, condensing 2 to 8 K above the leaving
    water (common practice, no source: 3 to 5 K when clean); readings give back what is expected. Air has none."""
    prediction = chiller_model.predict()
    expected = {k: e.value for k, e in prediction.expected.items()}
    read = sure(**{k: v for k, v in expected.items() if not k.endswith("approach")}, **prediction.conditions)
    found = derive(chiller_model.refrigerant, read, chiller_model, prediction)
    for key in ("evaporator_approach", "condenser_approach"):
        assert 2.0 < expected[key] < 8.0
        assert found[key].measured.value == pytest.approx(expected[key], abs=1e-6)
    air = cold_room_model.predict()
    assert not {"evaporator_approach", "condenser_approach"} & set(air.expected)
    of_air = sure(**{k: e.value for k, e in air.expected.items()}, **air.conditions)
    assert "condenser_approach" not in derive(cold_room_model.refrigerant, of_air, cold_room_model, air)
