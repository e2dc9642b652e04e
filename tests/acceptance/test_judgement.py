"""A visit judged from end to end: trim and test, withheld verdicts, and the plain data of a record."""

from __future__ import annotations

import datetime as dt
import json
from dataclasses import replace
from pathlib import Path

import pytest

from commission.acceptance import Judgement, Reading, carry, judge, make_sheet
from commission.acceptance.budget import Budget, Measured
from commission.acceptance.evaluation import _settled
from commission.acceptance.judgement import apart, coarse, decide_guarantee
from commission.description import LoadedPlant
from commission.errors import NotCalculatedError
from commission.prediction import SystemModel, fit
from tests.acceptance.conftest import CARBON_DIOXIDE, CHILLER, COLD_ROOM, write_plant
from tests.acceptance.visits import visit

SINK, SOURCE = "heat_sink_inlet_temperature", "heat_source_inlet_temperature"
DAY = dt.date(2026, 5, 14)


def test_trim_has_deviations_and_no_verdict(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """Trim: deviations only, no outcome, whatever the contract says."""
    found = judge(cold_room, cold_room_model, *visit(cold_room, cold_room_model), "trim", on=DAY)
    assert found.guarantees == ()
    assert found.outcome is None
    assert len(found.deviations) > 10


def chiller_test(
    chiller: LoadedPlant, model: SystemModel, since_start: float | None = 3600.0, **changes: float
) -> Judgement:
    """A test of the chiller at its rated condition with some readings changed."""
    return judge(chiller, model, *visit(chiller, model, **changes), "test", on=DAY, since_start=since_start)


def test_a_good_chiller_conforms(chiller: LoadedPlant, chiller_model: SystemModel) -> None:
    """At the rated point the chiller delivers what was promised: both guarantees conform, by the liquid side."""
    found = chiller_test(chiller, chiller_model)
    assert [(g.terms.quantity, g.outcome, g.route) for g in found.guarantees] == [
        ("cooling_capacity", "conforming", "liquid side"),
        ("cooling_cop", "conforming", "liquid side"),
    ]
    assert found.outcome == "conforming"
    assert found.guarantees[0].guaranteed is not None
    assert found.guarantees[0].guaranteed.value == pytest.approx(38e3, rel=1e-6)


def test_a_poor_chiller_does_not(chiller: LoadedPlant, chiller_model: SystemModel) -> None:
    """One kelvin less of water range on both sides is 20 % less capacity: not conforming, the outcome of the visit.
    On the source side alone the first law would not close, and there is no verdict."""
    expected = chiller_model.predict().expected
    cold = expected["heat_source_outlet_temperature"].value + 1.0
    hot = expected["heat_sink_outlet_temperature"].value - 0.85
    poor = chiller_test(chiller, chiller_model, heat_source_outlet_temperature=cold, heat_sink_outlet_temperature=hot)
    assert poor.guarantees[0].outcome == "not conforming"
    assert poor.outcome == "not conforming"
    odd = chiller_test(chiller, chiller_model, heat_source_outlet_temperature=cold)
    assert "first law" in {i.rule for i in odd.impossible}
    assert odd.outcome == "undecided"


def test_impossible_readings_withhold_the_verdict(chiller: LoadedPlant, chiller_model: SystemModel) -> None:
    """Readings that cannot be leave every guarantee undecided, with the reason instead of a verdict."""
    found = chiller_test(chiller, chiller_model, liquid_temperature=330.0)
    assert "subcooling" in {i.rule for i in found.impossible}
    assert {g.outcome for g in found.guarantees} == {"undecided"}
    assert found.guarantees[0].withheld is not None
    assert found.guarantees[0].withheld.startswith("readings that cannot be: ")
    assert found.guarantees[0].what_would_decide is not None


def test_unsteady_plant_withholds_the_verdict(chiller: LoadedPlant, chiller_model: SystemModel) -> None:
    """Ten minutes after the start, or with a wandering inlet, a test gives no verdict; unknown steadiness is said."""
    early = chiller_test(chiller, chiller_model, since_start=600.0)
    assert early.outcome == "undecided"
    assert "10 min after the start" in (early.guarantees[0].withheld or "")
    unknown = chiller_test(chiller, chiller_model, since_start=None)
    assert unknown.outcome == "conforming"
    assert unknown.steadiness[0].steady is None
    asked, read = visit(chiller, chiller_model)
    wandering = [
        Reading(r.key, r.value, r.instrument, "", (r.value - 2.0, r.value, r.value + 2.0)) if r.key == SINK else r
        for r in asked
    ]
    moved = judge(chiller, chiller_model, wandering, read, "test", on=DAY, since_start=3600.0)
    assert "condenser water inlet temperature moved more" in (moved.guarantees[0].withheld or "")


def test_refused_route_is_undecided_with_its_reason(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """Where the agreed route cannot be used the guarantee is undecided and the reason of the refusal is said."""
    asked, read = visit(cold_room, cold_room_model)
    found = judge(cold_room, cold_room_model, asked, read, "test", since_start=3600.0, upsets=("hot gas bypass",))
    assert found.guarantees[0].outcome == "undecided"
    assert "hot gas is bypassed" in (found.guarantees[0].withheld or "")
    assert found.guarantees[1].outcome == "conforming"  # the electric meter does not mind
    assert found.outcome == "undecided"
    without = visit(cold_room, cold_room_model, liquid_temperature=None)
    lacking = judge(cold_room, cold_room_model, *without, "test", since_start=3600.0)
    assert "it needs a reading of liquid temperature" in (lacking.guarantees[0].withheld or "")


def test_incapable_test_is_undecided_and_says_what_would_decide(
    cold_room: LoadedPlant, cold_room_model: SystemModel
) -> None:
    """A capacity near its limit, by a route less certain than its tolerance, is undecided; the change is named."""
    power = 0.90 * cold_room_model.predict().expected["power_input"].value
    found = judge(cold_room, cold_room_model, *visit(cold_room, cold_room_model, power_input=power), "test",
                  since_start=3600.0)  # fmt: skip
    verdict = found.guarantees[0]
    assert verdict.decision is not None
    assert not verdict.decision.capable
    assert verdict.outcome == "undecided"
    assert verdict.withheld is None
    assert verdict.what_would_decide is not None
    assert "heat lost by the compressor shell" in verdict.what_would_decide


def test_where_the_contract_is_silent_a_coarse_test_decides_and_is_named(
    cold_room: LoadedPlant, cold_room_model: SystemModel
) -> None:
    """The same visit without an agreed largest uncertainty: the measured value decides, and its coarseness is said."""
    power = 0.90 * cold_room_model.predict().expected["power_input"].value
    readings = visit(cold_room, cold_room_model, power_input=power)
    agreed = judge(cold_room, cold_room_model, *readings, "test", since_start=3600.0).guarantees[0]
    assert agreed.measured is not None
    assert agreed.guaranteed is not None
    silent = replace(agreed.terms, largest=None)
    carried = carry(silent, {}, cold_room_model)
    decision, budget = decide_guarantee(silent, agreed.measured, carried)
    assert decision.outcome == "conforming"
    shown = cold_room_model.facts.shown
    said = coarse(replace(agreed, terms=silent, decision=decision, budget=budget, guaranteed=carried.explained), shown)
    assert said is not None
    assert "(± 11 %) is coarser than the tolerance (5 %)" in said
    assert coarse(agreed, shown) is None


@pytest.mark.parametrize(
    ("one", "other", "texts"),
    [(0.05004, 0.05, ("5.004", "5.000")), (0.0504, 0.05, ("5.04", "5.00")), (0.083, 0.05, ("8", "5"))],
)
def test_shares_that_are_nearly_alike_keep_the_digits_that_differ(
    one: float, other: float, texts: tuple[str, str]
) -> None:
    """A test of 5.04 % against a tolerance of 5 % is not said to be 5 % against 5 %."""
    assert apart(one, other) == texts


def test_expired_calibration_is_carried_along(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """On a day after its calibration ended an instrument is warned of; the verdict stands and shows it."""
    readings = visit(cold_room, cold_room_model)
    late = judge(cold_room, cold_room_model, *readings, "test", on=dt.date(2027, 2, 15), since_start=3600.0)
    assert [w for w in late.warnings if "power meter: its calibration ended on 2027-01-31" in w]
    early = judge(cold_room, cold_room_model, *readings, "test", on=DAY, since_start=3600.0)
    assert not [w for w in early.warnings if "calibration ended" in w]


def test_test_without_a_sheet_is_said(chiller: LoadedPlant, chiller_model: SystemModel) -> None:
    """A test without a frozen sheet is judged by the description of today, and says so."""
    found = chiller_test(chiller, chiller_model)
    assert found.sheet_digest is None
    assert [w for w in found.warnings if "no frozen test sheet" in w]


def test_instrument_not_named_is_assumed(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """A reading without an instrument is judged with a usual one, which is warned of."""
    asked, read = visit(cold_room, cold_room_model)
    bare = [Reading(r.key, r.value) for r in read]
    found = judge(cold_room, cold_room_model, asked, bare, "trim")
    assert [w for w in found.warnings if w.startswith("suction pressure: the instrument is not stated")]


def test_wrong_instrument_is_not_judged(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """A pressure read with a probe is not judged, and the reason is said."""
    asked, read = visit(cold_room, cold_room_model)
    wrong = [Reading(r.key, r.value, "air probe") if r.key == "suction_pressure" else r for r in read]
    found = judge(cold_room, cold_room_model, asked, wrong, "trim")
    assert "air probe measures temperature" in found.not_judged["suction_pressure"]
    assert "suction_pressure" not in {d.key for d in found.deviations}


def test_barometer_that_was_read_is_used(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """With a barometer the doubt of the weather goes out of every gauge."""
    asked, read = visit(cold_room, cold_room_model)
    air = Reading("barometric_pressure", cold_room.barometric_pressure, None)
    with_it = judge(cold_room, cold_room_model, [*asked, air], read, "trim")
    assert "barometric_pressure" not in with_it.not_judged
    part = [c for c in with_it.measured["suction_pressure"].budget.components if c.name == "air pressure at the site"]
    assert len(part) == 1
    assert part[0].source == "reading of a barometer"


def test_data_of_a_judgement_is_plain(chiller: LoadedPlant, chiller_model: SystemModel) -> None:
    """The data of a judgement is JSON without loss, in °C and Pa absolute, and holds verdict, limits and reasons."""
    data = chiller_test(chiller, chiller_model).as_data()
    assert json.loads(json.dumps(data, allow_nan=False)) == data
    assert data["outcome"] == "conforming"
    assert data["conditions"][SINK]["unit"] == "°C"
    assert data["conditions"][SINK]["value"] == pytest.approx(30.0)
    assert data["readings"]["suction_pressure"]["unit"] == "Pa"
    first = data["guarantees"][0]
    assert first["decision"]["limit_low"] == pytest.approx(0.95 * 38e3)
    assert first["measured"]["uncertainty"] > 0.0
    assert {r["route"] for r in data["routes"]} == {"liquid side", "compressor heat balance"}
    assert {r["route"] for r in data["refused"]} == {"air side"}


def test_two_routes_are_held_against_each_other(chiller: LoadedPlant, chiller_model: SystemModel) -> None:
    """Liquid side and compressor heat balance give one capacity, and both sides close by the first law; a wrong flow
    is seen by it."""
    good = chiller_test(chiller, chiller_model).closures
    assert {(c.quantity, c.first, c.second) for c in good} >= {
        ("cooling_capacity", "compressor heat balance", "liquid side"),
        ("first law", "liquid side", "compressor heat balance"),
    }
    assert not [c for c in good if c.significant]
    flow = 1.4 * chiller_model.rated_condition["heat_source_flow"]
    bad = judge(chiller, chiller_model, *visit(chiller, chiller_model, heat_source_flow=flow), "trim").closures
    assert [c for c in bad if c.quantity == "cooling_capacity" and c.significant]


def test_heat_meter_is_the_liquid_side(chiller: LoadedPlant, chiller_model: SystemModel, tmp_path: Path) -> None:
    """A capacity that a heat meter shows counts as the liquid side, with its own stated accuracy."""
    meter = "heat meter: {measures: heat, accuracy: {of_reading: 3 %}, calibrated_until: 2028-01-31}"
    text = CHILLER.replace("instruments:\n", f"instruments:\n  {meter}\n")
    plant = write_plant(tmp_path / "metered", text)
    asked, read = visit(chiller, chiller_model)
    read.append(Reading("cooling_capacity", 37.5e3, "heat meter"))
    found = judge(plant, chiller_model, asked, read, "test", since_start=3600.0)
    verdict = found.guarantees[0]
    assert verdict.route == "liquid side"
    assert verdict.measured is not None
    assert verdict.measured.value == 37.5e3
    assert verdict.measured.budget.standard == pytest.approx(0.03 * 37.5e3 / 3**0.5)


def test_net_capacity_deducts_the_fan(cold_room: LoadedPlant, cold_room_model: SystemModel, tmp_path: Path) -> None:
    """A net cooling capacity is the measured one less the evaporator fan, 110 W here."""
    plant = write_plant(
        tmp_path / "net", COLD_ROOM.replace("quantity: cooling_capacity", "quantity: net_cooling_capacity")
    )
    readings = visit(cold_room, cold_room_model)
    gross, net = (
        judge(p, cold_room_model, *readings, "test", since_start=3600.0).guarantees[0] for p in (cold_room, plant)
    )
    assert gross.measured is not None
    assert net.measured is not None
    assert gross.measured.value - net.measured.value == pytest.approx(110.0, abs=0.5)


def test_another_boundary_is_no_verdict(cold_room_model: SystemModel, tmp_path: Path) -> None:
    """A contract that counts only the compressor cannot be judged by a meter that counts the fan too."""
    text = COLD_ROOM.replace("decision: guarded}", "decision: guarded, includes: [compressor]}")
    plant = write_plant(tmp_path / "boundary", text)
    model = fit(plant, "cold-room")
    found = judge(plant, model, *visit(plant, model), "test", since_start=3600.0)
    assert found.guarantees[1].outcome == "undecided"
    assert found.guarantees[1].withheld == (
        "the contract counts the power of compressor, the design that of compressor, condenser fan: "
        "these are two boundaries"
    )
    with pytest.raises(NotCalculatedError, match="two boundaries"):
        make_sheet(plant, model, {SINK: (300.0, 305.0)})
    same = write_plant(tmp_path / "same", text.replace("[compressor]}", "[condenser fan, compressor]}"))
    agreed = judge(same, cold_room_model, *visit(same, cold_room_model), "test", since_start=3600.0)
    assert agreed.guarantees[1].outcome == "conforming"


def test_carbon_dioxide_above_its_critical_point(tmp_path: Path) -> None:
    """A transcritical water heater, rated by its outlet: no condensing temperature is made up, the heat balance takes
    the gas cooler's outlet at its pressure, and a plant as designed deviates from nothing."""
    plant = write_plant(tmp_path / "co2", CARBON_DIOXIDE)
    model = fit(plant, "heater")
    found = judge(plant, model, *visit(plant, model), "trim", on=DAY)
    assert not {"condensing_temperature", "subcooling"} & set(found.derived)
    balance = next(
        r for r in found.routes if r.route == "compressor heat balance" and r.measured.key == "cooling_capacity"
    )
    expected = model.predict().expected["cooling_capacity"].value
    assert balance.measured.value == pytest.approx(expected, rel=0.01)
    assert [d.key for d in found.deviations if d.ratio > 0.2] == []
    assert found.impossible == ()
    outlet = [r for r in visit(plant, model)[0] if r.key != "heat_sink_outlet_temperature"]
    blind = judge(plant, model, outlet, visit(plant, model)[1], "trim", on=DAY)
    assert blind.deviations == ()
    assert "water outlet temperature was not read" in blind.not_judged["suction_pressure"]


def test_what_the_conditions_settle_is_not_judged() -> None:
    """Where inlet and outlet of the sink are both conditions, their difference is no reading to judge."""
    ends = {k: Measured(k, 300.0, Budget(())) for k in ("heat_sink_inlet_temperature", "heat_sink_outlet_temperature")}
    key = "heat_sink_temperature_change"
    have = {**ends, key: Measured(key, 0.0, Budget(()))}
    assert set(_settled(ends, have)) == {key}
    assert _settled({k: v for k, v in ends.items() if "inlet" in k}, have) == {}
