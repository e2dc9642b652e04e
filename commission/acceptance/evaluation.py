"""One visit worked through: readings, derived readings, routes, expectations, deviations. No verdict."""

from __future__ import annotations

import datetime as dt
from collections.abc import Callable, Collection, Iterable, Iterator, Mapping
from dataclasses import dataclass, field
from functools import partial
from typing import TYPE_CHECKING

from commission.acceptance.air_route import air_side
from commission.acceptance.budget import Measured
from commission.acceptance.closure import Closure, closures
from commission.acceptance.conditions import STAGE, day_condition, missing_temperature
from commission.acceptance.derived import Derived, derive, less, ratio, unbalance
from commission.acceptance.expectation import Deviation, Expectation, deviation, expect
from commission.acceptance.impossible import Impossible, impossible
from commission.acceptance.inferring import SPEED, infer_speed, infer_stage
from commission.acceptance.instruments import Reading, measure
from commission.acceptance.route_inputs import RouteInputs, from_sheet, live
from commission.acceptance.routes import (
    Refusal,
    Route,
    RouteResult,
    Side,
    compressor_heat_balance,
    compressor_power,
    heat_meter,
    liquid_side,
)
from commission.acceptance.supply import supply
from commission.errors import NotCalculatedError
from commission.quantities import NOMENCLATURE, Quantity

if TYPE_CHECKING:
    from commission.acceptance.sheet import TestSheet
    from commission.description import LoadedPlant
    from commission.description.model import Medium
    from commission.prediction import Prediction, SystemModel

BEST_FIRST = ("liquid side", "compressor heat balance", "air side")
"""Routes to a capacity in the order in which they are taken where the contract names none: most certain first."""


@dataclass(frozen=True)
class Evaluation:
    """Everything that follows from the readings of one visit before any verdict. Mappings by nomenclature key.

    `conditions` are those at which the model was asked; `measured` the readings with their budgets; `derived` what was
    calculated from them, capacities and COPs by the best route included; `routes` all routes that could be used,
    `refusals` those that could not, `closures` holds routes against each other; `not_judged` gives the reason for each
    reading that has no deviation.
    """

    conditions: Mapping[str, Measured]
    measured: Mapping[str, Measured]
    derived: Mapping[str, Derived]
    routes: tuple[RouteResult, ...]
    refusals: tuple[Refusal, ...]
    expectations: Mapping[str, Expectation]
    deviations: tuple[Deviation, ...]
    impossible: tuple[Impossible, ...]
    not_judged: Mapping[str, str]
    warnings: tuple[str, ...]
    closures: tuple[Closure, ...]
    evaporator_fan: Measured | None
    prediction: Prediction | None = field(default=None, compare=False)

    @property
    def all_read(self) -> Mapping[str, Measured]:
        """All readings and the conditions: a contract may state another end or bulb than the model asks for."""
        return {**self.measured, **self.conditions}

    def capacity(self, key: str, route: str | None = None) -> RouteResult:
        """A capacity by the route that the contract names, or by the best that could be used.

        Raises:
            NotCalculatedError: no such route could be used; the message holds the reasons.
        """
        for wanted in (route,) if route else BEST_FIRST:
            for found in self.routes:
                if found.route == wanted and found.measured.key == key:
                    return found
        reasons = [r for r in self.refusals if r.key == key and route in (None, r.route)]
        said = "; ".join(f"{r.route}: {r.reason}" for r in reasons) or f"{route} does not give it"
        raise NotCalculatedError(said)

    def quantity(self, key: str, route: str | None = None) -> tuple[Measured, str]:
        """A guaranteed quantity as measured, and the route it was measured by.

        Raises:
            NotCalculatedError: it was not read, or no route could be used.
        """
        if key == "power_input":
            if key not in self.measured:
                raise NotCalculatedError("it needs a reading of power input")
            if key in self.not_judged and {SPEED, STAGE} & set(self.conditions):
                raise NotCalculatedError(self.not_judged[key])
            return self.measured[key], "electric meter"
        if key in ("cooling_cop", "heating_cop"):
            capacity = self.capacity(key.replace("cop", "capacity"), None if route == "electric meter" else route)
            if "power_input" not in self.measured:
                raise NotCalculatedError("it needs a reading of power input")
            return ratio(key, capacity.measured, self.measured["power_input"]).measured, capacity.route
        found = self.capacity("cooling_capacity" if key == "net_cooling_capacity" else key, route)
        if key != "net_cooling_capacity":
            return found.measured, found.route
        if self.evaporator_fan is None:
            raise NotCalculatedError("the power of the evaporator fan, which is to be deducted, is not known")
        return less(key, found.measured, self.evaporator_fan), found.route


def evaluate(
    loaded: LoadedPlant,
    model: SystemModel,
    conditions: Iterable[Reading],
    readings: Iterable[Reading],
    *,
    on: dt.date | None = None,
    sheet: TestSheet | None = None,
    upsets: Collection[str] = (),
) -> Evaluation:
    """Work through the readings of one visit.

    Pressures are absolute, gauge readings already turned with the barometric pressure that was read, or else that of
    the site. With a `sheet`, expectations are the frozen ones. `upsets` names what makes the compressor heat balance
    wrong (the keys of `routes.UPSETS`).
    """
    not_judged: dict[str, str] = {}
    asked, read, words = list(conditions), list(readings), model.facts.shown.words
    names = model.facts.shown.quantities
    measured = _measure_all(loaded, [*asked, *read], on, not_judged, names)
    day = day_condition(model, measured)
    used = dict(day.used)
    not_judged.update(day.unused)
    warnings = list(dict.fromkeys(w for m in measured.values() for w in m.budget.warnings))
    warnings += day.warnings
    prediction, why, spent = _predict(model, used, measured)
    for key, condition in spent.items():
        not_judged[key] = f"spent on the {words(condition)}, which was not read and is inferred from it"
        warnings.append(f"{words(condition)} was not read: inferred from {words(key)}")
    if prediction is not None:
        warnings += prediction.warnings
        warnings += [f"{words(k)} was not read: taken as designed" for k in prediction.filled]
    inputs = live(loaded, model, prediction) if sheet is None else from_sheet(sheet, used)
    derived = {k: Derived(used[k], e) for k, e in day.derived.items()}
    derived.update(_safely(lambda: derive(model.refrigerant, measured, model, prediction), not_judged))
    derived.update(_unbalances(loaded, [*asked, *read], measured))
    have = {**measured, **{k: d.measured for k, d in derived.items()}}
    power = compressor_power(have, inputs.fans)
    routes, refusals = _routes(loaded, model, have, inputs, power, upsets)
    derived.update(_capacities(routes, have))
    have.update({k: d.measured for k, d in derived.items()})
    expectations = _expectations(model, used, sheet, prediction, why, not_judged)
    settled = _settled(used, have)
    not_judged.update(settled)
    deviations = tuple(
        deviation(have[k], expectations[k])
        for k in NOMENCLATURE
        if k in have and k in expectations and k not in {*used, *spent, *settled}
    )
    for key in have:
        if key not in expectations and key not in {*used, *day.spent, *not_judged, "barometric_pressure"}:
            said = supply(key, have[key].value, loaded.system(model.system_id))
            missing = prediction.not_calculated.get(key) if prediction else None
            not_judged[key] = said or why or missing or "nothing is expected of it"
    return Evaluation(
        used, measured, derived, tuple(routes), tuple(refusals), expectations, deviations,
        impossible(model.refrigerant, _independent(have, routes, power), inputs.shell), not_judged,
        tuple(dict.fromkeys(warnings)), closures(routes, power, inputs.shell), inputs.evaporator_fan, prediction,
    )  # fmt: skip


def _settled(used: Mapping[str, Measured], have: Mapping[str, Measured]) -> dict[str, str]:
    """Changes of a medium between two temperatures that are both conditions: what is expected is what was read."""
    found = {}
    for side in ("source", "sink"):
        key, ends = f"heat_{side}_temperature_change", {f"heat_{side}_{e}_temperature" for e in ("inlet", "outlet")}
        if key in have and ends <= set(used):
            found[key] = "both of its temperatures are conditions: it could not be anything else"
    return found


def _measure_all(
    loaded: LoadedPlant,
    readings: list[Reading],
    on: dt.date | None,
    not_judged: dict[str, str],
    names: Mapping[str, Quantity],
) -> dict[str, Measured]:
    """Every reading with its budget; a barometer that was read narrows all gauges."""
    instruments, site = loaded.plant.instruments, loaded.barometric_pressure
    air = next((r for r in readings if r.key == "barometric_pressure"), None)
    standard = None
    if air is not None:
        try:
            standard = measure(air, instruments, 0.0, on, names=names).budget.standard
        except NotCalculatedError:
            standard = None
    found: dict[str, Measured] = {}
    for reading in readings:
        try:
            found[reading.key] = measure(reading, instruments, air.value if air else site, on, standard, names=names)
        except NotCalculatedError as error:
            not_judged[reading.key] = str(error)
    return found


def _predict(
    model: SystemModel, used: dict[str, Measured], measured: Mapping[str, Measured]
) -> tuple[Prediction | None, str | None, dict[str, str]]:
    """The prediction at the measured condition, or why there is none, and which reading was spent on which condition.

    A speed or a stage that was inferred is added to `used`.
    """
    lacking = missing_temperature(model, used)
    if lacking is not None:
        return None, f"{model.facts.shown.words(lacking)} was not read: without it nothing can be expected", {}
    spent: dict[str, str] = {}
    try:
        for key, infer in ((STAGE, infer_stage), (SPEED, infer_speed)):
            if key in model.condition_axes and key not in used:
                inferred = infer(model, used, {k: m for k, m in measured.items() if k not in spent})
                used[key] = inferred.condition
                spent[inferred.spent] = key
        return model.predict({k: m.value for k, m in used.items()}), None, spent
    except NotCalculatedError as error:
        return None, str(error), {}


def _expectations(
    model: SystemModel,
    used: Mapping[str, Measured],
    sheet: TestSheet | None,
    prediction: Prediction | None,
    why: str | None,
    not_judged: dict[str, str],
) -> Mapping[str, Expectation]:
    if sheet is not None:
        found, reasons = sheet.expectations(used, model.facts.shown.quantities)
        not_judged.update(reasons)
        return found
    if prediction is None or why:
        return {}
    return expect(model, used)


def _safely(make: Callable[[], Mapping[str, Derived]], not_judged: dict[str, str]) -> Mapping[str, Derived]:
    try:
        return make()
    except NotCalculatedError as error:
        for key in ("compressor_superheat", "subcooling"):
            not_judged[key] = str(error)
        return {}


def _routes(
    loaded: LoadedPlant,
    model: SystemModel,
    have: Mapping[str, Measured],
    inputs: RouteInputs,
    power: Measured | None,
    upsets: Collection[str],
) -> tuple[list[RouteResult], list[Refusal]]:
    """Every route to every capacity: what it gives, or why it is refused."""
    system = loaded.system(model.system_id)
    names = model.facts.shown.quantities
    states = {**have, **({"compressor_power": power} if power else {})}
    results = [heat_meter(have[key]) for key in ("cooling_capacity", "heating_capacity") if key in have]
    refusals: list[Refusal] = []

    def attempt(route: Route, key: str, make: Callable[[], RouteResult]) -> None:
        try:
            results.append(make())
        except NotCalculatedError as error:
            refusals.append(Refusal(route, key, str(error)))

    balance = partial(
        compressor_heat_balance, model.refrigerant, states, shell=inputs.shell, line_gain=inputs.gain,
        compressor=system.compressor.type, upsets=upsets, names=names,
    )  # fmt: skip
    air = loaded.barometric_pressure
    sides: tuple[tuple[str, Side, Medium], ...] = (
        ("cooling_capacity", "source", system.heat_source),
        ("heating_capacity", "sink", system.heat_sink),
    )
    for key, side, medium in sides:
        attempt("compressor heat balance", key, partial(balance, key=key))
        if not any(r.route == "liquid side" and r.measured.key == key for r in results):
            attempt("liquid side", key, partial(liquid_side, medium, side, have, names))
        attempt("air side", key, partial(air_side, medium, side, air, have, names))
    return results, refusals


def _unbalances(
    loaded: LoadedPlant, readings: Iterable[Reading], measured: Mapping[str, Measured]
) -> Iterator[tuple[str, Derived]]:
    """Unbalance of currents and voltages that were read in each phase."""
    for reading in readings:
        key = f"{reading.key}_unbalance"
        if len(reading.phases) > 1 and key in NOMENCLATURE and reading.key in measured and any(reading.phases):
            instrument = loaded.plant.instruments.get(reading.instrument or "")
            step = (instrument.resolved.resolution if instrument else None) or 0.0
            yield key, unbalance(measured[reading.key], reading.phases, step)


def _capacities(routes: Iterable[RouteResult], have: Mapping[str, Measured]) -> Iterator[tuple[str, Derived]]:
    """Capacities by the best route and the COPs that follow."""
    routes = list(routes)
    for key in ("cooling_capacity", "heating_capacity"):
        if key in have:
            continue
        best = next((r for wanted in BEST_FIRST for r in routes if r.route == wanted and r.measured.key == key), None)
        if best is None:
            continue
        yield key, best.derived
        if "power_input" in have:
            cop = key.replace("capacity", "cop")
            yield cop, ratio(cop, best.measured, have["power_input"])


def _independent(
    have: Mapping[str, Measured], routes: Iterable[RouteResult], power: Measured | None
) -> Mapping[str, Measured]:
    """The readings, with both capacities only where two different routes gave them: one route closes by itself."""
    routes = list(routes)
    have = {**have, **({"compressor_power": power} if power is not None else {})}
    by_key = {
        key: [r.route for r in routes if r.measured.key == key] for key in ("cooling_capacity", "heating_capacity")
    }
    best = {k: next((w for w in BEST_FIRST if w in v), None) for k, v in by_key.items()}
    if set(best.values()) == {"compressor heat balance"}:
        return {k: m for k, m in have.items() if k != "heating_capacity"}
    return have
