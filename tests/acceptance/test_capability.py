"""Before the visit: what can be decided with these instruments, and that the named change would decide it."""

from __future__ import annotations

import datetime as dt
import math
from pathlib import Path

import pytest

from commission.acceptance import Budget, apply_change, capability, decide, make_sheet
from commission.acceptance.choosing import FOLLOWS_FROM, NO_HOOD, PRESSURES
from commission.description import LoadedPlant
from commission.errors import InputError
from commission.prediction import SystemModel, fit
from tests.acceptance.conftest import COLD_ROOM, write_plant

SINK = "heat_sink_inlet_temperature"


def test_every_instrument_is_put_to_use(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """Each quantity that can be read has its expected value, its instrument and the deviation that would be seen."""
    found = capability(cold_room, cold_room_model, {SINK: 295.15}, on=dt.date(2026, 5, 14))
    rows = {r.key: r for r in found.readings}
    assert rows["suction_pressure"].instrument == "low gauge"
    assert rows["discharge_pressure"].instrument == "high gauge"
    assert rows["discharge_temperature"].instrument == "pipe probes"
    assert rows["heat_source_outlet_temperature"].instrument == "air probe"
    assert rows["compressor_superheat"].instrument is None  # made of a gauge and a probe
    expected = cold_room_model.predict({SINK: 295.15}).expected
    for key, row in rows.items():
        assert row.expected.value == expected[key].value
        assert row.detectable == pytest.approx(row.budget.expanded())
        assert row.detectable > 0.0
    assert found.not_read["heat_source_flow"] == NO_HOOD
    assert found.not_read["heat_source_relative_humidity"] == "no instrument of the plant reads it"


def test_undecidable_guarantee_names_a_change_that_decides(cold_room: LoadedPlant, tmp_path: Path) -> None:
    """A guarantee near what the model expects cannot be decided by clamped-on probes; the named change, applied to the
    budget, gives a decision."""
    near = write_plant(tmp_path / "near", COLD_ROOM.replace("value: 3.3 kW", "value: 3.7 kW"))
    found = capability(near, fit(near, "cold-room"), {SINK: 300.15})
    row = found.guarantees[0]
    assert not row.decided
    assert row.change is not None
    assert row.decision is not None
    assert row.verdict.measured is not None
    assert row.verdict.budget is not None
    better = apply_change(row.verdict.budget, row.change)
    d = row.decision
    after = decide(row.verdict.measured.value, better, d.limit_low, d.limit_high, d.rule, d.confidence,
                   d.largest_expanded_uncertainty)  # fmt: skip
    assert after.outcome == "conforming"
    assert better.standard < row.verdict.budget.standard
    assert d.what_would_decide is not None
    assert cold_room.digest != near.digest


def test_decidable_guarantee_needs_no_change(chiller: LoadedPlant, chiller_model: SystemModel) -> None:
    """The chiller's flow meter and matched pair can prove its guarantees; no change is asked for."""
    found = capability(chiller, chiller_model)
    assert [(g.decided, g.change) for g in found.guarantees] == [(True, None), (True, None)]


def test_matched_pair_is_what_makes_it_provable(chiller: LoadedPlant, tmp_path: Path) -> None:
    """Without the matched pair the range of the water is too uncertain for its tolerance, and that is the advice."""
    text = (chiller.folder / "plant.yaml").read_text(encoding="utf-8")
    loose = text.replace("matched_pair: yes, resolution: 0.01 K", "resolution: 0.1 K").replace(
        "class: IEC 60751 A", "class: IEC 60751 B"
    )
    plain = write_plant(tmp_path / "loose", loose)
    found = capability(plain, fit(plain, "chiller"))
    row = found.guarantees[0]
    assert not row.decided
    assert row.change is not None
    assert "two probes compared in one bath" in row.change.text()


def test_inlets_without_an_instrument_are_assumed(cold_room: LoadedPlant, tmp_path: Path) -> None:
    """A plant without instruments still gets a page: inlets are assumed with a warning, the rest is listed."""
    start = COLD_ROOM.index("instruments:")
    bare = COLD_ROOM[:start] + COLD_ROOM[COLD_ROOM.index("systems:") :]
    bare = bare.replace("    measured_with: {power_input: power meter}\n", "")
    plant = write_plant(tmp_path / "bare", bare)
    found = capability(plant, fit(plant, "cold-room"))
    assert set(found.conditions) == {SINK, "heat_source_inlet_temperature"}
    assert found.readings == ()
    assert "suction_pressure" in found.not_read
    assert found.guarantees[0].verdict.withheld is not None
    assert cold_room.plant.instruments


def test_wrong_forecast_is_refused(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """A condition that the system does not have is an error."""
    with pytest.raises(InputError):
        capability(cold_room, cold_room_model, {"compressor_speed": 50.0})


def test_no_budget_is_empty(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """No row claims certainty: each budget has components."""
    for row in capability(cold_room, cold_room_model).readings:
        assert row.budget != Budget()


def test_a_factory_sealed_unit_is_offered_no_gauges(tmp_path: Path) -> None:
    """No ports, and a casing that stays shut: pressures, pipes and what is worked out from them are left out with the
    reason; meters and the pipe that is named stay."""
    sealed = COLD_ROOM.replace("    refrigerant:", "    sealed: yes\n    refrigerant:", 1)
    sealed = sealed.replace("measured_with: {", "measured_with: {discharge_temperature: pipe probes, ")
    plant = write_plant(tmp_path / "sealed", sealed)
    model = fit(plant, "cold-room")
    found = capability(plant, model, {SINK: 295.15})
    rows = {r.key for r in found.readings}
    assert not rows & {*PRESSURES, *FOLLOWS_FROM}
    assert {"discharge_temperature", "power_input"} <= rows
    assert "has no ports" in found.not_read["suction_pressure"]
    assert "stays shut" in found.not_read["suction_temperature"]
    assert "follows from a pressure" in found.not_read["subcooling"]
    assert found.guarantees[0].verdict.withheld is not None
    assert "suction pressure" in found.guarantees[0].verdict.withheld
    sheet = make_sheet(plant, model, {SINK: (295.15, 300.15)}, keys=["suction_pressure", "discharge_temperature"])
    assert {t.key: t.instruments for t in sheet.targets_for("expectation")} == {
        "suction_pressure": (),
        "discharge_temperature": ("pipe probes",),
    }


def test_a_sealed_unit_with_its_own_gauge_is_read(tmp_path: Path) -> None:
    """Where `measured_with` names an instrument for a pressure the unit has one of its own, and it is put to use."""
    own = COLD_ROOM.replace("    refrigerant:", "    sealed: yes\n    refrigerant:", 1).replace(
        "measured_with: {", "measured_with: {suction_pressure: low gauge, "
    )
    plant = write_plant(tmp_path / "own", own)
    rows = {r.key: r for r in capability(plant, fit(plant, "cold-room"), {SINK: 295.15}).readings}
    assert rows["suction_pressure"].instrument == "low gauge"
    assert "evaporating_temperature" in rows


def test_a_coarse_test_decides_by_the_simple_rule_and_is_named(cold_room: LoadedPlant, tmp_path: Path) -> None:
    """Where the contract agrees no largest uncertainty the page says that the test would decide, and how coarse it is;
    where it agrees one, that it would not."""
    text = (cold_room.folder / "plant.yaml").read_text(encoding="utf-8").replace("value: 3.3 kW", "value: 3.7 kW")
    assert " largest_uncertainty: 5 %," in text
    silent = write_plant(tmp_path / "silent", text.replace(" largest_uncertainty: 5 %,", ""))
    found = capability(silent, fit(silent, "cold-room"), {SINK: 300.15})
    row = found.guarantees[0]
    assert row.decided
    assert row.coarse is not None
    assert "coarser than the tolerance" in row.coarse
    assert row.coarse in found.warnings
    agreed = write_plant(tmp_path / "agreed", text)
    bound = capability(agreed, fit(agreed, "cold-room"), {SINK: 300.15}).guarantees[0]
    assert (bound.decided, bound.coarse) == (False, None)


def test_a_better_gauge_is_advised_only_where_it_shows_more(cold_room: LoadedPlant, tmp_path: Path) -> None:
    """An instrument is good enough where its doubt is no larger than that of the expectation: a gauge of 0.5 % of its
    span is, one of 5 % is not and sees a deviation only when it is half as large again."""
    coarse = COLD_ROOM.replace("accuracy: {of_span: 0.5 %}", "accuracy: {of_span: 5 %}")
    assert coarse != COLD_ROOM
    plant = write_plant(tmp_path / "coarse", coarse)
    found = {}
    for name, one in (("fine", cold_room), ("coarse", plant)):
        rows = {r.key: r for r in capability(one, fit(one, "cold-room")).readings}
        found[name] = rows["discharge_pressure"]
        for r in rows.values():
            assert r.good_enough == (r.of_reading <= r.of_expectation)
    assert found["fine"].good_enough
    assert not found["coarse"].good_enough
    assert found["coarse"].detectable > 1.5 * found["fine"].detectable


def test_what_a_guarantee_reads_is_what_is_expected(chiller: LoadedPlant, chiller_model: SystemModel) -> None:
    """One expected value: the reading by which a guarantee is worked through is that of the model at the forecast."""
    forecast = {"heat_sink_inlet_temperature": 304.15}
    expected = chiller_model.predict(forecast).expected
    proved = [g for g in capability(chiller, chiller_model, forecast).guarantees if g.verdict.measured is not None]
    assert proved
    for g in proved:
        assert g.verdict.measured is not None
        assert g.verdict.measured.value == pytest.approx(expected[g.terms.quantity].value, rel=1e-12)


def test_a_part_larger_than_the_whole_is_explained(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """A reading may be more uncertain than its deviation only by causes that reading and expectation share."""
    rows = capability(cold_room, cold_room_model, {SINK: 295.15}).readings
    for row in rows:
        apart = math.hypot(row.of_reading, row.of_expectation)
        assert row.partly_cancels is (row.alone > row.detectable)
        assert not row.partly_cancels or row.budget.standard < apart
    heat = next(r for r in rows if r.key == "heating_capacity")
    assert heat.budget.standard < 0.99 * math.hypot(heat.of_reading, heat.of_expectation)
