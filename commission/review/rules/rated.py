"""Rated points that contradict each other."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from itertools import combinations

from commission.description.model import RatedPoint
from commission.errors import CommissionError
from commission.quantities import NOMENCLATURE, Explained, Kind
from commission.review.facts import SystemFacts, conditions_of, reason_of
from commission.review.finding import Figure, Remark

RESULTS = ("cooling_capacity", "heating_capacity", "power_input")
GIVEN_BACK = (*RESULTS, "heat_source_outlet_temperature", "heat_sink_outlet_temperature")
OUTPUTS = ("cooling_capacity", "heating_capacity")
COLD_KEYS = ("heat_source_inlet_temperature", "heat_source_outlet_temperature", "evaporating_temperature")
WARM_KEYS = ("heat_sink_inlet_temperature", "heat_sink_outlet_temperature", "condensing_temperature")


@dataclass(frozen=True, slots=True)
class Row:
    """One row of a supplier's table: its condition, its results, and where it stands. All in SI."""

    path: str
    name: str
    conditions: Mapping[str, float]
    results: Mapping[str, float]


def tables(facts: SystemFacts) -> Iterator[tuple[Row, ...]]:
    """Each table that the supplier gives for this system."""
    yield tuple(
        Row(
            facts.path("rated_points", index),
            f"rated point {index + 1}",
            conditions_of(point),
            {key: value for key in RESULTS if (value := getattr(point, key)) is not None},
        )
        for index, point in facts.rated_points()
    )
    unit = facts.system.condensing_unit
    yield tuple(
        Row(
            facts.path("condensing_unit", "rated_points", index),
            f"row {index + 1} of the condensing unit's table",
            {
                "evaporating_temperature": row.evaporating_temperature,
                "heat_sink_inlet_temperature": row.heat_sink_inlet_temperature,
            },
            {"cooling_capacity": row.cooling_capacity, "power_input": row.power_input},
        )
        for index, row in enumerate(unit.rated_points if unit else ())
    )


def same_condition_other_value(facts: SystemFacts) -> Iterator[Remark]:
    """Two rows at one condition with different results.

    Source: one machine has one capacity and one power at one condition.
    """
    for table in tables(facts):
        for one, other in combinations(table, 2):
            if not _same(facts, one.conditions, other.conditions):
                continue
            differing = [key for key in RESULTS if _differs(facts, one.results.get(key), other.results.get(key))]
            if differing:
                yield Remark(
                    "error",
                    other.path,
                    f"{one.name.capitalize()} and {other.name} of {facts.title} differ at one condition.",
                    tuple(
                        facts.plant.quantity(key, row.results[key], f"{facts.plant.display.label(key)}, {row.name}")
                        for key in differing
                        for row in (one, other)
                    ),
                    "Keep the row of the supplier's document, or write what makes them differ (speed, flow).",
                )


def _same(facts: SystemFacts, one: Mapping[str, float], other: Mapping[str, float]) -> bool:
    near = facts.plant.limit("same_condition")
    if one.keys() != other.keys() or not one:
        return False
    for key, value in one.items():
        temperature = NOMENCLATURE[key].kind is Kind.TEMPERATURE
        allowed = near if temperature else facts.plant.limit("same_value") * abs(value)
        if abs(value - other[key]) > allowed:
            return False
    return True


def _differs(facts: SystemFacts, one: float | None, other: float | None) -> bool:
    if one is None or other is None:
        return False
    return abs(one - other) > facts.plant.limit("same_value") * max(abs(one), abs(other))


def easier_lift_lower_cop(facts: SystemFacts) -> Iterator[Remark]:
    """A row with a warmer source and a colder sink than another, yet a lower COP.

    Source: second law and the shape of every displacement machine at one speed: less lift, more heat for the same
    power. Head-pressure hold or other fan stages can break the order, hence a warning. Rows are compared only where
    speed and flows are written alike.
    """
    for table in tables(facts):
        for one, other in combinations(table, 2):
            for easy, hard in ((one, other), (other, one)):
                if not _easier(facts, easy.conditions, hard.conditions):
                    continue
                for key in OUTPUTS:
                    figures = _cop_figures(facts, key, easy, hard)
                    if figures:
                        yield Remark(
                            "warning",
                            hard.path,
                            f"{hard.name.capitalize()} of {facts.title} has the harder temperatures but the better COP "
                            f"than {easy.name}.",
                            figures,
                            "Check both rows: columns exchanged, a power in another unit, or another speed.",
                        )


def _easier(facts: SystemFacts, easy: Mapping[str, float], hard: Mapping[str, float]) -> bool:
    """Whether `easy` has nowhere a colder source or a warmer sink, and somewhere clearly the opposite."""
    if easy.keys() != hard.keys():
        return False
    near = facts.plant.limit("same_condition")
    gains = [easy[key] - hard[key] for key in COLD_KEYS if key in easy]
    gains += [hard[key] - easy[key] for key in WARM_KEYS if key in easy]
    others = {key: value for key, value in easy.items() if key not in COLD_KEYS + WARM_KEYS}
    alike = all(abs(value - hard[key]) <= facts.plant.limit("same_value") * abs(value) for key, value in others.items())
    return alike and bool(gains) and min(gains) >= -near and max(gains) > near


def _cop_figures(facts: SystemFacts, key: str, easy: Row, hard: Row) -> tuple[Figure, ...]:
    if key not in easy.results or key not in hard.results:
        return ()
    if not easy.results.get("power_input") or not hard.results.get("power_input"):
        return ()
    easy_cop = easy.results[key] / easy.results["power_input"]
    hard_cop = hard.results[key] / hard.results["power_input"]
    if hard_cop <= easy_cop * (1 + facts.plant.limit("same_value")):
        return ()
    cop = key.replace("_capacity", "_cop")
    figures = [facts.plant.quantity(cop, hard_cop, f"COP of {hard.name}")]
    figures.append(facts.plant.quantity(cop, easy_cop, f"COP of {easy.name}"))
    for temperature in (*COLD_KEYS, *WARM_KEYS):
        if temperature in easy.conditions:
            label = facts.plant.display.label(temperature)
            figures.append(facts.plant.quantity(temperature, hard.conditions[temperature], f"{label}, {hard.name}"))
            figures.append(facts.plant.quantity(temperature, easy.conditions[temperature], f"{label}, {easy.name}"))
    return tuple(figures)


def speed_outside_the_drive(facts: SystemFacts) -> Iterator[Remark]:
    """A rated point at a compressor speed outside the limits that are written of the drive.

    Source: definition of the limits.
    """
    low, high = facts.system.compressor.minimum_speed, facts.system.compressor.maximum_speed
    for index, point in facts.rated_points():
        speed = point.compressor_speed
        if speed is None or (low or 0.0) * 0.999 <= speed <= (high or speed) * 1.001:
            continue
        figures = [facts.plant.quantity("compressor_speed", speed, "speed of the rated point")]
        figures += [facts.plant.quantity("compressor_speed", low, "lowest speed")] if low is not None else []
        figures += [facts.plant.quantity("compressor_speed", high, "highest speed")] if high is not None else []
        yield Remark(
            "error",
            facts.path("rated_points", index, "compressor_speed"),
            f"Rated point {index + 1} of {facts.title} is at a speed that the compressor does not run at.",
            tuple(figures),
            "Check the speed of the point and the limits of the drive; both are shaft speeds.",
        )


def scatter(facts: SystemFacts) -> Iterator[Remark]:
    """Rated points that scatter about every machine that could be fitted to them.

    Source: residual standard deviation of the fit, n - p degrees of freedom (threshold `rated_scatter`).
    """
    found = facts.model.fitted.get("scatter of rated points about the fit") if facts.model else None
    entry = facts.plant.threshold("rated_scatter")
    if found is None or found.value <= entry.value:
        return
    yield Remark(
        "warning",
        facts.path("rated_points") if facts.system.rated_points else facts.path("condensing_unit", "rated_points"),
        f"No one machine fits all that the supplier states of {facts.title}: the points scatter.",
        (
            facts.plant.figure("scatter of the points about the fit", found.value, Kind.RATIO, 1),
            facts.plant.figure("usual for one table", entry.value, Kind.RATIO, 1),
        ),
        "Look for a row of another model, speed or superheat, and for columns exchanged.",
        entry.source,
        entry.mark,
    )


def not_reproduced(facts: SystemFacts) -> Iterator[Remark]:
    """A rated point whose stated figures the model fitted to it does not give back at its own condition.

    Source: a fit passes through its points up to their scatter (threshold `rated_scatter`; outlets by
    `rated_outlet`). Where it does not, either the point belongs to another machine or the calculation does not
    understand it: its expectations then rest on nothing.
    """
    if facts.model is None:
        return
    for index, point in facts.rated_points():
        at = {key: value for key, value in conditions_of(point).items() if key in facts.model.condition_axes}
        try:
            expected = facts.model.predict(at).expected
        except CommissionError as error:
            yield Remark(
                "warning",
                facts.path("rated_points", index),
                f"Rated point {index + 1} of {facts.title} cannot be calculated back: {reason_of(error)}.",
                (),
                "Check the point; nothing that is expected near it is sure.",
            )
            return  # the others most likely fail alike
        figures = [figure for key in GIVEN_BACK for figure in _missed(facts, key, point, expected)]
        if figures:
            yield Remark(
                "warning",
                facts.path("rated_points", index),
                f"The model of {facts.title} does not give back rated point {index + 1}.",
                tuple(figures),
                "Check the point. If it is right, do not rest a verdict on what is expected near it.",
            )


def _missed(facts: SystemFacts, key: str, point: RatedPoint, expected: Mapping[str, Explained]) -> Iterator[Figure]:
    """Stated and expected value of one quantity where they lie too far apart."""
    stated: float | None = getattr(point, key)
    # a capacity that says neither net nor gross may be either
    alternatives = ("cooling_capacity", "net_cooling_capacity") if key == "cooling_capacity" else (key,)
    values = [expected[name].value for name in alternatives if name in expected]
    if stated is None or not values:
        return
    nearest_value = min(values, key=lambda value: abs(value - stated))
    if NOMENCLATURE[key].kind is Kind.TEMPERATURE:
        allowed = facts.plant.limit("rated_outlet")
    else:
        allowed = facts.plant.limit("rated_scatter") * stated
    if abs(nearest_value - stated) > allowed:
        label = facts.plant.display.label(key)
        yield facts.plant.quantity(key, stated, f"{label}, stated")
        yield facts.plant.quantity(key, nearest_value, f"{label}, by the model")
