"""Rules on rated points, efficiencies and guarantees."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from types import SimpleNamespace
from typing import Any

import pytest

from commission.errors import NotCalculatedError
from commission.quantities import Explained, Input, Kind
from commission.review.facts import SystemFacts
from commission.review.finding import Figure, Remark
from commission.review.rules import efficiency, guarantees, rated, second_law

Facts = Callable[..., SystemFacts]
AT = {"heat_source_inlet_temperature": "4 °C", "heat_sink_inlet_temperature": "32 °C"}
POINT = {**AT, "cooling_capacity": "3.4 kW", "power_input": "1.5 kW"}


def figure(remark: Remark, label: str) -> Figure:
    """The one figure of a remark with this label."""
    return next(f for f in remark.figures if f.label == label)


def test_two_results_at_one_condition(facts: Facts) -> None:
    """3.4 kW and 3.6 kW at one condition contradict each other; 3.4 and 3.42 kW are rounding."""
    near = {**POINT, "cooling_capacity": "3.42 kW"}
    far = {**POINT, "cooling_capacity": "3.6 kW"}
    (remark,) = rated.same_condition_other_value(facts({"rated_points": [POINT, far]}))
    assert remark.severity == "error"
    assert remark.path == "systems.one.rated_points.1"
    assert [f.value for f in remark.figures] == [pytest.approx(3400), pytest.approx(3600)]
    assert not list(rated.same_condition_other_value(facts({"rated_points": [POINT, near]})))


def test_two_conditions_may_have_two_results(facts: Facts) -> None:
    """Another ambient, or another speed, is another condition."""
    warmer = {**POINT, "heat_sink_inlet_temperature": "35 °C", "cooling_capacity": "3.2 kW"}
    slower = {**POINT, "compressor_speed": "900 rpm", "cooling_capacity": "2 kW"}
    assert not list(rated.same_condition_other_value(facts({"rated_points": [POINT, warmer, slower]})))


def test_a_harder_lift_with_a_better_cop(facts: Facts) -> None:
    """At 40 °C air a COP of 3 cannot stand beside 2.27 at 32 °C."""
    odd = {**AT, "heat_sink_inlet_temperature": "40 °C", "cooling_capacity": "3.3 kW", "power_input": "1.1 kW"}
    (remark,) = rated.easier_lift_lower_cop(facts({"rated_points": [POINT, odd]}))
    assert remark.severity == "warning"
    assert remark.path == "systems.one.rated_points.1"
    assert figure(remark, "COP of rated point 2").value == pytest.approx(3.0)
    assert figure(remark, "COP of rated point 1").value == pytest.approx(3.4 / 1.5)


def test_a_table_in_good_order(facts: Facts) -> None:
    """A colder source and a warmer sink at once cannot be compared; a falling COP is in order."""
    warmer = {**POINT, "heat_sink_inlet_temperature": "40 °C", "cooling_capacity": "3.0 kW", "power_input": "1.7 kW"}
    colder = {**POINT, "heat_source_inlet_temperature": "0 °C", "heat_sink_inlet_temperature": "20 °C",
              "cooling_capacity": "3.3 kW", "power_input": "1.1 kW"}  # fmt: skip
    assert not list(rated.easier_lift_lower_cop(facts({"rated_points": [POINT, warmer, colder]})))


def test_a_condensing_unit_table_is_held_to_the_same_order(facts: Facts) -> None:
    """A row at -20 °C evaporating with a better COP than at -10 °C, same air, has exchanged columns."""
    row = {"heat_sink_inlet_temperature": "32 °C", "power_input": "1.5 kW"}
    rows = [{**row, "evaporating_temperature": "-10 °C", "cooling_capacity": "3.4 kW"},
            {**row, "evaporating_temperature": "-20 °C", "cooling_capacity": "4.5 kW"}]  # fmt: skip
    (remark,) = rated.easier_lift_lower_cop(facts({"condensing_unit": {"rated_points": rows}}))
    assert remark.path == "systems.one.condensing_unit.rated_points.1"
    assert figure(remark, "Evaporating temperature, row 2 of the condensing unit's table").text == "−20.0 °C"


@pytest.mark.parametrize(("speed", "fires"), [("3000 rpm", False), ("6000 rpm", True), ("600 rpm", True)])
def test_a_rated_speed_outside_the_drive(facts: Facts, speed: str, fires: bool) -> None:
    """A drive from 900 to 5400 rpm does not run at 6000 or 600."""
    drive = {"drive": "variable speed", "minimum_speed": "900 rpm", "maximum_speed": "5400 rpm"}
    here = facts({"compressor": drive, "rated_points": [{**POINT, "compressor_speed": speed}]})
    found = list(rated.speed_outside_the_drive(here))
    assert [remark.severity for remark in found] == (["error"] if fires else [])
    if fires:
        assert figure(found[0], "speed of the rated point").text == speed
        assert figure(found[0], "highest speed").text == "5400 rpm"


@pytest.mark.parametrize(("share", "fires"), [(0.01, False), (0.08, True), (None, False)])
def test_points_that_scatter(facts: Facts, share: float | None, fires: bool) -> None:
    """8 % about the fit is more than one table has; with as many points as unknowns there is no scatter."""
    fitted = {} if share is None else {"scatter of rated points about the fit": Input("scatter", share, Kind.RATIO, "")}
    model: Any = SimpleNamespace(fitted=fitted)
    found = list(rated.scatter(replace(facts(), model=model)))
    assert [remark.severity for remark in found] == (["warning"] if fires else [])
    if fires:
        assert found[0].figures[0].text == "8.0 %"


def test_a_point_that_the_model_does_not_give_back(facts: Facts) -> None:
    """3.4 kW net or gross may be 3.4 or 3.5 kW of the model; 1.5 kW of power against 1.7 kW is too far."""

    def model(power: float) -> Any:
        values = {"cooling_capacity": 3600.0, "net_cooling_capacity": 3450.0, "power_input": power}
        expected = {key: Explained(key, value, 1.0, "as_stated") for key, value in values.items()}
        return SimpleNamespace(
            predict=lambda _: SimpleNamespace(expected=expected), condition_axes=dict.fromkeys(AT), fitted={}
        )

    here = facts({"rated_points": [POINT]})
    assert not list(rated.not_reproduced(replace(here, model=model(1520.0))))
    (remark,) = rated.not_reproduced(replace(here, model=model(1700.0)))
    assert remark.severity == "warning"
    assert figure(remark, "Power input, stated").value == pytest.approx(1500)
    assert figure(remark, "Power input, by the model").value == 1700.0


def test_an_outlet_that_the_model_does_not_give_back(facts: Facts) -> None:
    """Water stated to leave at 65 °C and calculated to leave at 15 °C is not the same machine."""
    point = {**POINT, "heat_sink_outlet_temperature": "65 °C"}
    outlet = Explained("heat_sink_outlet_temperature", 288.15, 0.1, "as_stated")
    model: Any = SimpleNamespace(
        predict=lambda _: SimpleNamespace(expected={outlet.quantity: outlet}), condition_axes=dict.fromkeys(AT)
    )
    (remark,) = rated.not_reproduced(replace(facts({"rated_points": [point]}), model=model))
    assert figure(remark, "Outdoor air outlet temperature, by the model").text == "15.0 °C"


def test_a_compressor_table_is_held_to_carnot_and_to_efficiencies(facts: Facts) -> None:
    """-10/40 °C allows 263.15 / 50 = 5.26: 5.5 is impossible, 4.5 means over 100 % efficiency, 2.5 is sound."""
    point = {"evaporating_temperature": "-10 °C", "condensing_temperature": "40 °C", "compressor_power": "1 kW"}

    def judge(capacity: str) -> tuple[list[Remark], list[Remark]]:
        points = [{**point, "cooling_capacity": capacity}]
        table = {"points": points, "suction_superheat": "0 K", "liquid_subcooling": "0 K"}
        here = facts({"compressor": {"table": table}})
        return list(second_law.beats_carnot(here)), list(efficiency.implied_isentropic(here))

    assert judge("2.5 kW") == ([], [])
    (impossible,), _ = judge("5.5 kW")
    assert impossible.path == "systems.one.compressor.table.points.0"
    assert figure(impossible, "Carnot COP").value == pytest.approx(263.15 / 50, rel=1e-3)
    carnot, (too_good,) = judge("4.5 kW")
    assert not carnot
    assert too_good.severity == "error"


@pytest.mark.parametrize(
    ("key", "value", "severity"),
    [("volumetric_efficiency", "75 %", None), ("volumetric_efficiency", "20 %", "warning"),
     ("isentropic_efficiency", "60 %", None), ("isentropic_efficiency", "85 %", "warning"),
     ("isentropic_efficiency", "15 %", "warning")],
)  # fmt: skip
def test_a_stated_efficiency(facts: Facts, key: str, value: str, severity: str | None) -> None:
    """At the edges hardly believable, in between believed; above 100 % the reader refuses already."""
    found = list(efficiency.stated_efficiency(facts({"compressor": {key: value}})))
    assert [remark.severity for remark in found] == ([severity] if severity else [])
    for remark in found:
        assert remark.path == f"systems.one.compressor.{key}"
        assert remark.figures[0].value == pytest.approx(float(value.split()[0]) / 100)


CYCLE = {**AT, "evaporating_temperature": "-10 °C", "condensing_temperature": "40 °C", "includes": ["compressor"]}


def propane(facts: SystemFacts) -> tuple[float, float]:
    """Ideal power (W) and suction volume flow (m3/s) of 3.4 kW at -10/40 °C by CoolProp's own flashes, not by ours."""
    from CoolProp.CoolProp import PropsSI

    assumed = facts.plant.loaded.assumptions("one")
    superheat = 6.0 + assumed["suction_line_superheat"].value
    low, high = (PropsSI("P", "T", t, "Q", 1, "R290") for t in (263.15, 313.15))
    suction = {"T": 263.15 + superheat, "P": low}
    h, s, rho = (PropsSI(what, "T", suction["T"], "P", low, "R290") for what in ("H", "S", "D"))
    liquid = PropsSI("H", "T", 313.15 - assumed["liquid_subcooling"].value, "Q", 0, "R290")
    flow = 3400.0 / (h - liquid)
    return flow * (PropsSI("H", "S", s, "P", high, "R290") - h), flow / rho


def test_the_isentropic_efficiency_that_a_point_implies(facts: Facts) -> None:
    """R-290 at -10/40 °C: 3.4 kW need some 0.84 kW ideally, so 1.5 kW is sound, 1 kW too good, 0.8 kW impossible."""

    def judge(power: str) -> list[Remark]:
        point = {**CYCLE, "cooling_capacity": "3.4 kW", "power_input": power}
        return list(efficiency.implied_isentropic(facts({"rated_points": [point]})))

    assert not judge("1.5 kW")
    (doubtful,), (wrong,), (poor,) = judge("1.0 kW"), judge("0.8 kW"), judge("3.2 kW")
    assert (doubtful.severity, wrong.severity, poor.severity) == ("warning", "error", "warning")
    ideal = propane(facts())[0]
    assert figure(wrong, "overall isentropic efficiency").value == pytest.approx(ideal / 800, rel=2e-3)
    assert figure(poor, "overall isentropic efficiency").value == pytest.approx(ideal / 3200, rel=2e-3)


def test_an_unknown_condensing_temperature_is_given_its_whole_range(facts: Facts) -> None:
    """A condensing unit's table says nothing of condensing: 8 to 17 K above the air are all allowed for."""
    row = {"evaporating_temperature": "-10 °C", "heat_sink_inlet_temperature": "32 °C", "cooling_capacity": "3.4 kW"}

    def judge(power: str) -> list[Remark]:
        rows = [{**row, "power_input": power}]
        return list(efficiency.implied_isentropic(facts({"condensing_unit": {"rated_points": rows}})))

    assert not judge("1.5 kW")
    (remark,) = judge("0.7 kW")
    ends = [f.value or 0 for f in remark.figures if f.label.startswith("overall")]
    assert len(ends) == 2
    assert 1.0 < ends[0] < ends[1]


@pytest.mark.parametrize(("displacement", "severity"), [("8 m3/h", None), ("4 m3/h", "error"), ("20 m3/h", "warning")])
def test_the_volumetric_efficiency_that_a_point_implies(facts: Facts, displacement: str, severity: str | None) -> None:
    """3.4 kW of R-290 at -10/40 °C are about 6.1 m3/h: 76 % of 8 m3/h, impossible for 4, poor for 20."""
    point = {**CYCLE, "cooling_capacity": "3.4 kW", "power_input": "1.5 kW"}
    system = {"rated_points": [point], "compressor": {"displacement": displacement}}
    swept = propane(facts())[1]
    found = list(efficiency.implied_volumetric(facts(system)))
    assert [remark.severity for remark in found] == ([severity] if severity else [])
    for remark in found:
        share = remark.figures[0].value
        assert share == pytest.approx(swept * 3600 / float(displacement.split()[0]), rel=2e-3)


def test_a_variable_speed_has_no_known_volume_flow(facts: Facts) -> None:
    """Where the speed of a point is not known, the rule says nothing."""
    point = {**CYCLE, "cooling_capacity": "3.4 kW", "power_input": "1.5 kW"}
    compressor = {"displacement": "4 m3/h", "drive": "variable speed"}
    assert not list(efficiency.implied_volumetric(facts({"rated_points": [point], "compressor": compressor})))


def test_a_part_stage_tells_no_efficiency(facts: Facts) -> None:
    """Half the capacity at half stage is no poor volumetric efficiency, and no guarantee of the whole set."""
    half = {**CYCLE, "cooling_capacity": "1.7 kW", "power_input": "0.8 kW", "compressor_stage": "50 %"}
    compressor = {"displacement": "16 m3/h", "stages": ["50 %", "100 %"]}
    here = facts({"rated_points": [half], "compressor": compressor})
    assert not list(efficiency.implied_volumetric(here))
    whole = facts({"rated_points": [{**half, "compressor_stage": "100 %"}], "compressor": compressor})
    assert len(list(efficiency.implied_volumetric(whole))) == 1
    at_half = {**POINT, "cooling_capacity": "1.8 kW", "compressor_stage": "50 %"}
    promised = {"guarantee": [PROMISE], "compressor": compressor, "rated_points": [at_half, POINT]}
    assert not list(guarantees.not_the_table(facts(promised)))


PROMISE: dict[str, Any] = {"quantity": "cooling_capacity", "at": AT, "value": "3.4 kW", "tolerance": {"below": "5 %"}}


@pytest.mark.parametrize(("value", "severity"), [("3.4 kW", None), ("3.5 kW", "warning"), ("3.3 kW", "note")])
def test_a_guarantee_against_the_table(facts: Facts, value: str, severity: str | None) -> None:
    """The supplier's table says 3.4 kW: more has nothing behind it, less is fair."""
    found = list(guarantees.not_the_table(facts({"guarantee": [{**PROMISE, "value": value}]})))
    assert [remark.severity for remark in found] == ([severity] if severity else [])
    for remark in found:
        assert figure(remark, "guaranteed").text == value.replace(" kW", "0 kW")
        assert figure(remark, "supplier's table at the same condition").value == pytest.approx(3400)


def test_a_guaranteed_power_is_better_when_lower(facts: Facts) -> None:
    """1.4 kW where the table says 1.5 kW is the better promise, and a COP is compared by its two figures."""
    power = {"quantity": "power_input", "at": AT, "value": "1.4 kW"}
    cop = {"quantity": "cooling_cop", "at": AT, "value": "2.5"}
    found = list(guarantees.not_the_table(facts({"guarantee": [power, cop]})))
    assert [remark.severity for remark in found] == ["warning", "warning"]
    assert figure(found[1], "supplier's table at the same condition").value == pytest.approx(3.4 / 1.5)


def test_a_guarantee_elsewhere_is_not_the_table(facts: Facts) -> None:
    """At another condition the table states nothing."""
    at = {**AT, "heat_sink_inlet_temperature": "27 °C"}
    assert not list(guarantees.not_the_table(facts({"guarantee": [{**PROMISE, "at": at, "value": "9 kW"}]})))


def test_a_guarantee_without_the_table_it_is_carried_along(facts: Facts) -> None:
    """One rated point is no table; two are."""
    promise = {**PROMISE, "carried_by": "supplier's table"}
    (remark,) = guarantees.cannot_be_carried(facts({"guarantee": [promise]}))
    assert remark.severity == "error"
    assert remark.figures[0].value == 1
    other = {**POINT, "heat_sink_inlet_temperature": "40 °C", "cooling_capacity": "3 kW"}
    assert not list(guarantees.cannot_be_carried(facts({"guarantee": [promise], "rated_points": [POINT, other]})))
    assert not list(guarantees.cannot_be_carried(facts({"guarantee": [PROMISE]})))


def test_a_guarantee_on_no_row(facts: Facts) -> None:
    """A condition that the table lacks is a note with the model's figure; a row of the table is none."""
    at = {**AT, "heat_sink_inlet_temperature": "27 °C"}
    here = with_model(facts({"guarantee": [{**PROMISE, "at": at}]}), 3600.0, 40.0)
    (remark,) = guarantees.on_no_row(here)
    assert remark.severity == "note"
    assert figure(remark, "expected by the model at that condition").value == 3600.0
    assert not list(guarantees.on_no_row(facts({"guarantee": [PROMISE]})))


def with_model(facts: SystemFacts, value: float, uncertainty: float, *, fails: bool = False) -> SystemFacts:
    """The same facts with a model that expects one cooling capacity and one power everywhere."""

    def predict(conditions: dict[str, float]) -> SimpleNamespace:
        if fails:
            raise NotCalculatedError("the condition has no operating point")
        assert set(conditions) == set(AT)
        expected = {key: Explained(key, value, uncertainty, "as_stated") for key in ("cooling_capacity", "power_input")}
        return SimpleNamespace(expected=expected)

    model = SimpleNamespace(predict=predict, condition_axes=dict.fromkeys(AT))
    return replace(facts, model=model)  # type: ignore[arg-type]  # the part of a model that the rule uses


@pytest.mark.parametrize(
    ("value", "severity"), [("3.4 kW", None), ("3.55 kW", "note"), ("3.65 kW", "note"), ("3.9 kW", "warning")]
)
def test_a_guarantee_beyond_expectation(facts: Facts, value: str, severity: str | None) -> None:
    """Expected 3400 W with u = 50 W: 3.55 kW uses its tolerance, and 5 % below 3.9 kW is still 305 W too much."""
    here = with_model(facts({"guarantee": [{**PROMISE, "value": value}]}), 3400.0, 50.0)
    found = list(guarantees.beyond_expectation(here))
    assert [remark.severity for remark in found] == ([severity] if severity else [])
    for remark in found:
        assert figure(remark, "end of the tolerance").value == pytest.approx(float(value.split()[0]) * 950)
        assert (
            figure(remark, "expected by the model at that condition").text == "3.40 kW (standard uncertainty 0.05 kW)"
        )


def test_a_guaranteed_power_beyond_expectation(facts: Facts) -> None:
    """A power may be missed upwards only: 1.3 kW, 5 % above, where 1.5 kW is expected."""
    promise = {"quantity": "power_input", "at": AT, "value": "1.3 kW", "tolerance": {"above": "5 %"}}
    (remark,) = guarantees.beyond_expectation(with_model(facts({"guarantee": [promise]}), 1500.0, 20.0))
    assert remark.severity == "warning"
    assert figure(remark, "end of the tolerance").value == pytest.approx(1365)


def test_a_guarantee_that_cannot_be_calculated_says_why(facts: Facts) -> None:
    """The reason of the model is passed on."""
    (remark,) = guarantees.beyond_expectation(with_model(facts({"guarantee": [PROMISE]}), 0, 0, fails=True))
    assert "the condition has no operating point" in remark.title
