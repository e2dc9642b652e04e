"""A guarantee against the supplier's own table and against what the plant can be expected to give."""

from __future__ import annotations

from collections.abc import Iterator, Mapping

from commission.description.model import Guarantee, RatedPoint
from commission.errors import CommissionError
from commission.quantities import NOMENCLATURE, Explained, Kind
from commission.review.facts import SystemFacts, conditions_of, explained_figure, reason_of
from commission.review.finding import Figure, Remark
from commission.review.stated import cop_of

AT_MOST = ("power_input",)


def not_the_table(facts: SystemFacts) -> Iterator[Remark]:
    """A guarantee at a condition of the supplier's table whose value is not the table's.

    Source: the table is what the supplier stands for; a better figure in the contract has nothing behind it. A more
    modest one is fair, and only worth knowing.
    """
    for index, guarantee in enumerate(facts.system.guarantee):
        stated = _table_value(facts, guarantee)
        if stated is None:
            continue
        value = guarantee.value_si
        if abs(value - stated) <= facts.plant.limit("guarantee_is_table") * abs(stated):
            continue
        better = value < stated if guarantee.quantity in AT_MOST else value > stated
        yield Remark(
            "warning" if better else "note",
            facts.path("guarantee", index, "value"),
            f"Guarantee {index + 1} of {facts.title} is {'above' if value > stated else 'below'} the supplier's table.",
            (
                facts.plant.quantity(guarantee.quantity, value, "guaranteed"),
                facts.plant.quantity(guarantee.quantity, stated, "supplier's table at the same condition"),
            ),
            "Ask the supplier which of the two holds, and write it down before the visit."
            if better
            else "Agree with all sides that the contract's figure decides, not the table's.",
        )


def on_no_row(facts: SystemFacts) -> Iterator[Remark]:
    """A guarantee at a condition, or of a quantity, for which the supplier's table of the whole system has no row.

    Source: common practice: what the table does not state rests on the model alone, and all sides must know it.
    """
    for index, guarantee in enumerate(facts.system.guarantee):
        if _table_value(facts, guarantee) is not None:
            continue
        expected = _expected(facts, guarantee)
        label = "expected by the model at that condition"
        figures = [facts.plant.quantity(guarantee.quantity, guarantee.value_si, "guaranteed")]
        if isinstance(expected, Explained):
            figures.append(explained_figure(facts.plant, expected, label))
        yield Remark(
            "note",
            facts.path("guarantee", index),
            f"Guarantee {index + 1} of {facts.title} stands on no row of the supplier's table for the whole system.",
            tuple(figures),
            "Ask the supplier for this row, or agree in writing before the visit that the model stands in for it.",
        )


def cannot_be_carried(facts: SystemFacts) -> Iterator[Remark]:
    """A guarantee that is to be carried along the supplier's table where there is no such table.

    Source: one point has no slope; interpolation needs at least two.
    """
    for index, guarantee in enumerate(facts.system.guarantee):
        if guarantee.carried_by != "supplier's table":
            continue
        known = [point for _, point in facts.rated_points() if _result(point, guarantee.quantity) is not None]
        if len(known) < 2:
            yield Remark(
                "error",
                facts.path("guarantee", index, "carried_by"),
                f"Guarantee {index + 1} of {facts.title} is to be carried along the supplier's table, but no table of "
                f"{facts.plant.display.words(guarantee.quantity)} is written.",
                (Figure("rated points that state it", str(len(known)), float(len(known)), Kind.NUMBER),),
                "Write the supplier's table under rated_points, or agree on another way to carry the value.",
            )


def _table_value(facts: SystemFacts, guarantee: Guarantee) -> float | None:
    """The supplier's figure of the whole system at the condition of the guarantee, None where the table has none."""
    at = conditions_of(guarantee.at)
    for _, point in facts.rated_points():
        stated = _result(point, guarantee.quantity)
        row = conditions_of(point)
        if stated is not None and at and _agrees(facts, at, row):
            return stated
    return None


def _agrees(facts: SystemFacts, at: Mapping[str, float], row: Mapping[str, float]) -> bool:
    """Whether a row holds at `at`: every quantity that both state is the same, and temperatures are stated by both."""
    if at.get("compressor_stage", 1.0) != row.get("compressor_stage", 1.0):  # all compressors, where it is not stated
        return False
    shared = at.keys() & row.keys()
    if not {key for key in at if NOMENCLATURE[key].kind is Kind.TEMPERATURE} <= shared:
        return False
    near = facts.plant.limit("same_condition")
    for key in shared:
        allowed = near if NOMENCLATURE[key].kind is Kind.TEMPERATURE else facts.plant.limit("same_value") * abs(at[key])
        if abs(at[key] - row[key]) > allowed:
            return False
    return True


def _result(point: RatedPoint, quantity: str) -> float | None:
    """A result of a rated point, or the COP that follows from its capacity and power."""
    if quantity.endswith("_cop"):
        return cop_of(point, quantity)
    if quantity == "net_cooling_capacity":
        return point.cooling_capacity if point.capacity_is == "net" else None
    if quantity == "cooling_capacity" and point.capacity_is == "net":
        return None
    value: float | None = getattr(point, quantity)
    return value


def beyond_expectation(facts: SystemFacts) -> Iterator[Remark]:
    """A guarantee that the fitted model does not expect to be met at the guarantee's own condition.

    Source: the model is fitted to the supplier's own points. A warning where even the end of the tolerance lies beyond
    the expected value by more than twice its standard uncertainty, a note where the guaranteed value itself does.
    """
    if facts.model is None:
        return
    for index, guarantee in enumerate(facts.system.guarantee):
        expected = _expected(facts, guarantee)
        if isinstance(expected, str):
            yield Remark(
                "warning",
                facts.path("guarantee", index),
                f"Guarantee {index + 1} of {facts.title} stands at a condition that cannot be calculated: {expected}.",
                (),
                "Check the condition of the guarantee.",
            )
        elif expected is not None:
            yield from _against(facts, index, guarantee, expected)


def _expected(facts: SystemFacts, guarantee: Guarantee) -> Explained | str | None:
    """What the model expects at the condition of a guarantee, or why it cannot; None without a model or a value."""
    if facts.model is None:
        return None
    at = {key: value for key, value in conditions_of(guarantee.at).items() if key in facts.model.condition_axes}
    try:
        return facts.model.predict(at).expected.get(guarantee.quantity)
    except CommissionError as error:
        return reason_of(error)


def _against(facts: SystemFacts, index: int, guarantee: Guarantee, expected: Explained) -> Iterator[Remark]:
    at_most = guarantee.quantity in AT_MOST
    value = guarantee.value_si
    tolerance = (guarantee.tolerance.above if at_most else guarantee.tolerance.below) or 0.0
    limit = value * (1 + tolerance) if at_most else value * (1 - tolerance)
    room = 2 * (expected.uncertainty or 0.0)
    sign = -1.0 if at_most else 1.0
    hopeless = sign * (limit - expected.value) > room
    optimistic = sign * (value - expected.value) > room
    if not optimistic and not hopeless:
        return
    yield Remark(
        "warning" if hopeless else "note",
        facts.path("guarantee", index, "value"),
        f"Guarantee {index + 1} of {facts.title} is not expected to be met"
        + (", not even at the end of its tolerance." if hopeless else " without the use of its tolerance."),
        (
            facts.plant.quantity(guarantee.quantity, value, "guaranteed"),
            facts.plant.quantity(guarantee.quantity, limit, "end of the tolerance"),
            explained_figure(facts.plant, expected, "expected by the model at that condition"),
        ),
        "Settle this with the supplier before the visit: the test can only find out what the table says already.",
    )
