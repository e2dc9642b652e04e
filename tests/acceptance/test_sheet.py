"""The frozen sheet: same bytes, tampering detected, values between the points, and verdicts that never move."""

from __future__ import annotations

import datetime as dt
from pathlib import Path

import pytest

from commission.acceptance import Budget, Measured, SheetError, TestSheet, grid_of, judge, make_sheet, read_sheet
from commission.acceptance.sheet import digest_of
from commission.description import LoadedPlant
from commission.errors import InputError, NotCalculatedError
from commission.prediction import SystemModel, fit
from tests.acceptance.conftest import COLD_ROOM, write_plant
from tests.acceptance.visits import visit

SINK, SOURCE = "heat_sink_inlet_temperature", "heat_source_inlet_temperature"
RANGES = {SINK: grid_of(293.15, 308.15, 5.0), SOURCE: (273.15, 277.15)}


@pytest.fixture(scope="module")
def sheet(cold_room: LoadedPlant, cold_room_model: SystemModel) -> TestSheet:
    """A sheet of the cold room over 20 to 35 °C outdoors."""
    return make_sheet(cold_room, cold_room_model, RANGES, prepared_for=dt.date(2026, 5, 14), title="acceptance test")


def at(sink: float, source: float) -> dict[str, Measured]:
    """A sure condition."""
    return {SINK: Measured(SINK, sink), SOURCE: Measured(SOURCE, source)}


def test_same_sheet_same_bytes(sheet: TestSheet, cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """Made twice from the same description, and read back, the text is the same to the byte."""
    again = make_sheet(cold_room, cold_room_model, RANGES, prepared_for=dt.date(2026, 5, 14), title="acceptance test")
    assert again.to_text() == sheet.to_text()
    assert read_sheet(sheet.to_text()).to_text() == sheet.to_text()
    assert read_sheet(sheet.to_text()).digest == sheet.digest


def test_sheet_says_what_it_was_made_from(sheet: TestSheet, cold_room: LoadedPlant) -> None:
    """Digest of the description, versions, instruments with their statement, assumptions and the day are in it."""
    text = sheet.to_text()
    assert cold_room.digest in text
    assert set(sheet.versions) == {"commission", "CoolProp"}
    assert sheet.instruments["high gauge"]["accuracy of_span"] == "0.5 %"
    assert sheet.instruments["pipe probes"]["calibrated_until"] == "2027-02-28"
    assert "prepared_for: '2026-05-14'" in text
    assert "shell_heat_loss_share" in sheet.assumptions
    capacity, power = sheet.targets_for("guarantee")
    assert capacity.instruments == ("low gauge", "pipe probes", "high gauge", "power meter", "air probe")
    assert power.instruments == ("power meter", "air probe")
    assert capacity.reading_uncertainty is not None
    assert 0.03 < capacity.reading_uncertainty / capacity.values[0] < 0.07


def test_line_ends_of_another_system_do_not_break_it(sheet: TestSheet, tmp_path: Path) -> None:
    """A sheet saved with other line ends is the same sheet."""
    path = tmp_path / "sheet.yaml"
    path.write_bytes(sheet.to_text().replace("\n", "\r\n").encode())
    assert read_sheet(path).digest == sheet.digest


@pytest.mark.parametrize(
    "old_new", [("tolerance_below: 0.05", "tolerance_below: 0.15"), ("site", "none"), ("\n", "\n\n")]
)
def test_tampering_is_detected(sheet: TestSheet, old_new: tuple[str, str]) -> None:
    """Any change of the body is found by the digest on the first line."""
    head, body = sheet.to_text().split("\n", 1)
    changed = body.replace(old_new[0], old_new[1], 1)
    assert changed != body
    with pytest.raises(SheetError) as caught:
        read_sheet(f"{head}\n{changed}")
    problem = caught.value.problems[0]
    assert "changed after it was frozen" in problem.message
    assert problem.value == sheet.digest


@pytest.mark.parametrize(
    ("body", "message"),
    [
        ("form: something else\n", "not a test sheet of this form"),
        ("form: commission test sheet 1\n", "lacks something"),
        ("[1, 2\n", "not YAML"),
    ],
)
def test_other_files_are_refused(body: str, message: str) -> None:
    """A file with a fitting digest that is no sheet says what is wrong."""
    with pytest.raises(SheetError, match=message):
        read_sheet(f"digest: {digest_of(body)}\n{body}")


def test_unreadable_files_are_refused(tmp_path: Path) -> None:
    """A missing file, other bytes than UTF-8 and a text without digest are errors with the file's name."""
    with pytest.raises(SheetError, match="first line of a test sheet is its digest"):
        read_sheet("form: x\n")
    with pytest.raises(SheetError, match="cannot be read") as caught:
        read_sheet(tmp_path / "missing.yaml")
    assert caught.value.problems[0].file == str(tmp_path / "missing.yaml")
    (tmp_path / "bytes.yaml").write_bytes(b"\xff\xfe")
    with pytest.raises(SheetError, match="not UTF-8"):
        read_sheet(tmp_path / "bytes.yaml")


def test_points_are_the_model_and_between_is_bounded(sheet: TestSheet, cold_room_model: SystemModel) -> None:
    """At a grid point the sheet is the model; between the points it is within the error that it states itself."""
    found, reasons = sheet.expectations(at(298.15, 277.15))
    model = cold_room_model.predict({SINK: 298.15, SOURCE: 277.15}).expected
    assert reasons == {}
    for key, expectation in found.items():
        assert expectation.value == pytest.approx(model[key].value, rel=1e-6, abs=1e-6)
    between, _ = sheet.expectations(at(300.65, 275.15))
    exact = cold_room_model.predict({SINK: 300.65, SOURCE: 275.15}).expected
    for target in sheet.targets_for("expectation"):
        assert abs(between[target.key].value - exact[target.key].value) <= 1.05 * target.between + 1e-9


def test_outside_the_agreed_range_there_is_no_target(sheet: TestSheet) -> None:
    """A day outside the range has no target, and the reason is said for each."""
    found, reasons = sheet.expectations(at(311.15, 275.15))
    assert found == {}
    assert "outside the range that was agreed" in reasons["suction_pressure"]
    with pytest.raises(NotCalculatedError, match="outside the range"):
        sheet.carried(sheet.targets_for("guarantee")[0], at(311.15, 275.15))


def test_a_held_condition_moves_along_its_slope(sheet: TestSheet, cold_room_model: SystemModel) -> None:
    """A humidity that was read and differs a little from the one held moves the target as the model would."""
    humidity = "heat_source_relative_humidity"
    moved = {**at(298.15, 275.15), humidity: Measured(humidity, 0.80)}
    target = sheet.targets_for("guarantee")[0]
    change = sheet.carried(target, moved).value - sheet.carried(target, at(298.15, 275.15)).value
    model = [
        cold_room_model.predict({SINK: 298.15, SOURCE: 275.15, humidity: h}).expected["cooling_capacity"].value
        for h in (0.80, 0.85)
    ]
    # The guarantee stands at the designed humidity, so that only the day's side of the ratio moves.
    base = cold_room_model.predict({SINK: 305.15, SOURCE: 275.15}).expected["cooling_capacity"].value
    assert change == pytest.approx(3300.0 * (model[0] - model[1]) / base, abs=1.0, rel=0.1)


def test_wrong_ranges_are_refused(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """Unknown conditions, unordered values, no range and too many points are errors that say what is allowed."""
    with pytest.raises(InputError, match="no such condition") as caught:
        make_sheet(cold_room, cold_room_model, {"heat_sink_inlet_temperatur": (290.0,)})
    assert caught.value.problems[0].nearest == SINK
    with pytest.raises(InputError, match="rising order"):
        make_sheet(cold_room, cold_room_model, {SINK: (300.0, 290.0)})
    with pytest.raises(InputError, match="at least one condition"):
        make_sheet(cold_room, cold_room_model, {})
    with pytest.raises(InputError, match="too many"):
        make_sheet(cold_room, cold_room_model, {SINK: grid_of(280.0, 300.0, 0.01)})


def test_later_changes_never_move_a_frozen_verdict(
    sheet: TestSheet, cold_room: LoadedPlant, cold_room_model: SystemModel, tmp_path: Path
) -> None:
    """With a sheet the verdict and its limits are the same after guarantee, assumption and rated point have changed;
    without it they move."""
    frozen = read_sheet(sheet.to_text())
    asked, read = visit(cold_room, cold_room_model, {SINK: 298.15})
    before = judge(cold_room, cold_room_model, asked, read, "test", frozen, since_start=3600.0)
    changed = (
        COLD_ROOM.replace("value: 3.3 kW", "value: 4.4 kW")
        .replace("cooling_capacity: 3.45 kW", "cooling_capacity: 3.60 kW")
        .replace("    duty:", "    assumptions: {suction_line_superheat: {value: 9 K, source: measured}, " +
            "shell_heat_loss_share: {value: 12 %, source: measured}}\n    duty:")
    )  # fmt: skip
    other = write_plant(tmp_path / "changed", changed)
    other_model = fit(other, "cold-room")
    after = judge(other, other_model, asked, read, "test", frozen, since_start=3600.0)
    today = judge(other, other_model, asked, read, "test", None, since_start=3600.0)
    for old, new in zip(before.guarantees, after.guarantees, strict=True):
        assert old.decision is not None
        assert new.decision is not None
        assert old.frozen
        assert (old.outcome, old.decision.limit_low) == (new.outcome, new.decision.limit_low)
        assert old.guaranteed == new.guaranteed
        assert old.measured is not None
        assert new.measured is not None
        assert new.measured.value == pytest.approx(old.measured.value, rel=1e-4)
    assert today.guarantees[0].outcome == "not conforming"
    assert today.guarantees[0].measured is not None
    assert before.guarantees[0].measured is not None
    assert today.guarantees[0].measured.value < 0.97 * before.guarantees[0].measured.value
    assert {k: e.value for k, e in before.expectations.items()} == {k: e.value for k, e in after.expectations.items()}


def test_measured_capacity_is_the_same_with_and_without_a_sheet(tmp_path: Path) -> None:
    """Where the head pressure is held the fans draw less on a cold day: at every grid point the route gives the same
    capacity with the sheet as without."""
    text = COLD_ROOM.replace(
        "    receiver:", "    controls: {head_pressure: {by: fan speed, hold: 38 °C}}\n    receiver:"
    )
    plant = write_plant(tmp_path / "held", text)
    model = fit(plant, "cold-room")
    frozen_sheet = make_sheet(plant, model, {SINK: (283.15, 295.15, 307.15)})
    powers = []
    for sink in (283.15, 295.15, 307.15):
        powers.append(model.predict({SINK: sink}).expected["fan_power"].value)
        readings = visit(plant, model, {SINK: sink})
        live, frozen = (judge(plant, model, *readings, "trim", s) for s in (None, frozen_sheet))
        for a, b in zip(live.routes, frozen.routes, strict=True):
            assert a.measured.value == pytest.approx(b.measured.value, rel=1e-5)
    assert powers[0] < 0.5 * powers[2]


def test_conditions_of_the_forecast_are_held(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """A sheet made for a forecast holds its other conditions there, and its points are the model at them."""
    made = make_sheet(cold_room, cold_room_model, {SINK: (295.15, 300.15)}, held={SOURCE: 277.15, SINK: 290.0})
    assert made.conditions[SOURCE] == 277.15
    assert SINK not in made.conditions
    for target in made.targets_for("expectation"):
        for at, value in zip((295.15, 300.15), target.values, strict=True):
            there = cold_room_model.predict({**made.conditions, SINK: at})
            assert value == pytest.approx(there.expected[target.key].value, rel=1e-6)


FLOW = "heat_sink_flow"


def own_part(budget: Budget) -> float:
    """The standard uncertainty that a target has of itself."""
    return sum(c.value for c in budget.components if c.name == "frozen target")


def test_a_flow_nobody_reads_is_as_stated(sheet: TestSheet, cold_room_model: SystemModel) -> None:
    """What the sheet holds at one value is as stated: at its points the bands are those of a plain prediction."""
    day = at(303.15, 273.15)
    plain = cold_room_model.predict({k: m.value for k, m in day.items()})
    assert FLOW in plain.as_stated
    for target in sheet.targets_for("expectation"):
        own = own_part(sheet.value_at(target, day)[1])
        assert own == pytest.approx(plain.expected[target.key].uncertainty, rel=1e-9), target.key


def test_a_flow_that_was_read_is_known(sheet: TestSheet, cold_room_model: SystemModel) -> None:
    """With a reading of the air flow its departure is out of the budget, as it is without a sheet; it moves the outlet
    of the condenser most."""
    day = at(303.15, 273.15)
    rated = cold_room_model.rated_condition[FLOW]
    known = cold_room_model.predict({**{k: m.value for k, m in day.items()}, FLOW: rated})
    assert FLOW not in known.as_stated
    for target in sheet.targets_for("expectation"):
        _, budget = sheet.value_at(target, {**day, FLOW: Measured(FLOW, rated)})
        assert own_part(budget) == pytest.approx(known.expected[target.key].uncertainty, rel=1e-6), target.key
    outlet = next(t for t in sheet.targets if t.key == "heat_sink_outlet_temperature")
    unread, read = (sheet.value_at(outlet, d)[1].standard for d in (day, {**day, FLOW: Measured(FLOW, rated)}))
    assert read < 0.7 * unread


def test_a_guarantee_is_carried_with_the_flows_as_stated(sheet: TestSheet) -> None:
    """A departed flow is the same at both ends of the carrying: at the guarantee's own condition it leaves no doubt."""
    target = next(t for t in sheet.targets_for("guarantee") if t.key == "cooling_capacity")
    _, budget = sheet.value_at(target, at(305.15, 275.15))
    own = sheet.value_at(target, at(303.15, 273.15))[1]
    assert budget.standard < 0.02 * target.values[0]
    assert own.standard < 0.02 * target.values[0]
