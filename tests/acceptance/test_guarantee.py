"""Guarantees carried to the day: by the design model, by the supplier's table, as stated."""

from __future__ import annotations

import pytest

from commission.acceptance import Budget, Component, Measured, Terms, carry, terms_of
from commission.acceptance.guarantee import supplier_grid
from commission.description import LoadedPlant
from commission.errors import NotCalculatedError
from commission.prediction import SystemModel

SINK, SOURCE = "heat_sink_inlet_temperature", "heat_source_inlet_temperature"


def day(sink: float, source: float, u: float = 0.0) -> dict[str, Measured]:
    """A measured condition."""
    return {
        SINK: Measured(SINK, sink, Budget((Component("p", u, cause="sink probe"),) if u else ())),
        SOURCE: Measured(SOURCE, source, Budget((Component("p", u, cause="source probe"),) if u else ())),
    }


def cold_room_terms(cold_room: LoadedPlant) -> Terms:
    """The capacity guarantee of the cold room."""
    return terms_of(cold_room.system("cold-room").guarantee[0])


def test_terms_are_read_in_si(cold_room: LoadedPlant) -> None:
    """Value, condition, tolerance, rule and route come over from the description."""
    terms = cold_room_terms(cold_room)
    assert (terms.value, terms.below, terms.above) == (3300.0, 0.05, None)
    assert terms.at == {SOURCE: 275.15, SINK: 305.15}
    assert (terms.rule, terms.carried_by, terms.route) == ("simple", "design model", "compressor heat balance")


def test_limits() -> None:
    """Capacity is bounded from below, power from above, the other side only where the contract says so."""
    assert Terms("cooling_capacity", 100.0, {}, below=0.05).limits(200.0) == (190.0, None)
    assert Terms("cooling_capacity", 100.0, {}).limits(200.0) == (200.0, None)
    assert Terms("heating_capacity", 100.0, {}, 0.05, 0.1).limits(100.0) == (95.0, pytest.approx(110.0))
    assert Terms("power_input", 100.0, {}, above=0.05).limits(100.0) == (None, 105.0)
    assert Terms("power_input", 100.0, {}).limits(100.0) == (None, 100.0)


def test_only_the_contract_bounds_the_uncertainty_of_a_test() -> None:
    """What the contract states bounds it; where it is silent nothing does, and a coarse test is only named as one."""
    assert Terms("cooling_capacity", 1.0, {}, below=0.08).largest_expanded_uncertainty(100.0) is None
    stated = Terms("cooling_capacity", 1.0, {}, below=0.08, largest=0.1)
    assert stated.largest_expanded_uncertainty(100.0) == pytest.approx(10.0)
    assert stated.coarser_than_tolerance(8.5, 100.0)
    assert not stated.coarser_than_tolerance(7.5, 100.0)
    assert not Terms("cooling_capacity", 1.0, {}).coarser_than_tolerance(50.0, 100.0)


def test_at_its_own_condition_nothing_is_added(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """At the condition of the guarantee the carried value is the stated one and the model adds no doubt."""
    found = carry(cold_room_terms(cold_room), day(305.15, 275.15), cold_room_model)
    assert found.value == pytest.approx(3300.0)
    assert found.budget.standard == pytest.approx(0.0, abs=1e-3)


def test_model_carries_in_the_ratio(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """On another day the value is in the ratio of the design model, and the doubt grows with the distance."""
    terms = cold_room_terms(cold_room)
    near, far = (carry(terms, day(t, 275.15), cold_room_model) for t in (302.15, 285.15))
    model = {t: cold_room_model.predict({SINK: t}).expected["cooling_capacity"].value for t in (285.15, 305.15)}
    assert far.value == pytest.approx(3300.0 * model[285.15] / model[305.15])
    assert far.value > near.value > 3300.0
    assert far.budget.standard > near.budget.standard > 0.0
    assert all(c.remedy for c in far.budget.components)


def test_model_ratio_agrees_with_refit(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """Each part of the carrying is the change of the ratio when the assumption moves by one standard uncertainty."""
    terms = cold_room_terms(cold_room)
    found = carry(terms, day(285.15, 275.15), cold_room_model)
    here, there = (cold_room_model.assumption_effects({SINK: t}) for t in (285.15, 305.15))
    value = {t: cold_room_model.predict({SINK: t}).expected["cooling_capacity"].value for t in (285.15, 305.15)}
    cause = "suction_line_superheat"
    moved = (value[285.15] + here[cause]["cooling_capacity"]) / (value[305.15] + there[cause]["cooling_capacity"])
    change = 3300.0 * (moved - value[285.15] / value[305.15])
    part = next(c.value for c in found.budget.components if c.cause == f"model: {cause}")
    assert part == pytest.approx(change, rel=0.05, abs=0.2)


def test_measured_condition_adds_through_the_slope(cold_room: LoadedPlant, cold_room_model: SystemModel) -> None:
    """The doubt of the measured condition comes in with the slope of the carried value."""
    terms = cold_room_terms(cold_room)
    found = carry(terms, day(295.15, 275.15, u=0.5), cold_room_model)
    up, down = (carry(terms, day(295.15 + d, 275.15), cold_room_model).value for d in (0.1, -0.1))
    part = next(c.value for c in found.budget.components if c.cause == "sink probe")
    assert part == pytest.approx(0.5 * (up - down) / 0.2, rel=0.02)


def test_unknown_condition_of_a_guarantee(cold_room_model: SystemModel) -> None:
    """A guarantee at a condition that the model does not know cannot be carried by the model."""
    terms = Terms("cooling_capacity", 3300.0, {"compressor_speed": 50.0})
    with pytest.raises(NotCalculatedError, match="does not depend on compressor speed"):
        carry(terms, day(305.15, 275.15), cold_room_model)


def test_table_is_read_between_its_points(chiller: LoadedPlant, chiller_model: SystemModel) -> None:
    """Supplier's table: at 13 °C and 32.5 °C the mean of four points, 38.225 kW, in the ratio to the 38 kW point."""
    system = chiller.system("chiller")
    terms = terms_of(system.guarantee[0])
    found = carry(terms, day(305.65, 286.15), chiller_model, system.rated_points)
    assert found.value == pytest.approx(38e3 * (38.0 + 36.0 + 40.5 + 38.4) / 4 / 38.0)
    assert found.budget.standard == 0.0
    assert found.explained.method == "guarantee_by_table"
    with_doubt = carry(terms, day(305.65, 286.15, u=0.1), chiller_model, system.rated_points)
    assert with_doubt.budget.standard > 0.0


def test_table_is_never_left(chiller: LoadedPlant, chiller_model: SystemModel) -> None:
    """Outside its range the table gives nothing; a table that is no full grid is refused."""
    system = chiller.system("chiller")
    terms = terms_of(system.guarantee[0])
    with pytest.raises(NotCalculatedError, match="outside the range"):
        carry(terms, day(310.15, 286.15), chiller_model, system.rated_points)
    with pytest.raises(NotCalculatedError, match="no full table"):
        supplier_grid("cooling_capacity", system.rated_points[:3])
    with pytest.raises(NotCalculatedError, match="at least two rated points"):
        supplier_grid("cooling_capacity", system.rated_points[:1])
    with pytest.raises(NotCalculatedError, match="at least two rated points that state heat to the heat sink"):
        supplier_grid("heating_capacity", system.rated_points)


def test_table_of_a_cop(chiller: LoadedPlant) -> None:
    """A COP in the table is capacity over power of each point."""
    _, values = supplier_grid("cooling_cop", chiller.system("chiller").rated_points)
    assert values == pytest.approx((38 / 8.6, 40.5 / 8.7, 36 / 9.6, 38.4 / 9.7))


def test_as_stated_only_near_the_stated_condition(chiller: LoadedPlant, chiller_model: SystemModel) -> None:
    """Within half a kelvin the stated value holds, its rest difference in the budget; further off there is no value."""
    terms = terms_of(chiller.system("chiller").guarantee[1])
    near = carry(terms, day(303.45, 285.15, u=0.1), chiller_model)
    assert near.value == 4.3
    assert any("not quite as stated" in c.name for c in near.budget.components)
    with pytest.raises(NotCalculatedError, match="condenser water inlet temperature of the day is another one"):
        carry(terms, day(306.15, 285.15, u=0.1), chiller_model)
    with pytest.raises(NotCalculatedError, match="needs a reading of chilled water inlet temperature"):
        carry(terms, {SINK: Measured(SINK, 303.15)}, chiller_model)
