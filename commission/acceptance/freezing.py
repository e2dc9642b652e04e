"""Make a test sheet: expected and guaranteed values over the range of the day, by the model as it stands now."""

from __future__ import annotations

import datetime as dt
import itertools
from collections.abc import Callable, Mapping, Sequence
from typing import TYPE_CHECKING, Any

from commission.acceptance.budget import Measured
from commission.acceptance.capability import capability
from commission.acceptance.choosing import choose_instrument
from commission.acceptance.conditions import known_to
from commission.acceptance.grid import Axis, interpolate, middles, points
from commission.acceptance.guarantee import Carried, Terms, boundary_differs, carry, terms_of
from commission.acceptance.instruments import Reading, measure
from commission.acceptance.route_inputs import live
from commission.acceptance.sheet import Target, TestSheet
from commission.errors import InputError, NotCalculatedError, Problem, nearest
from commission.quantities import NOMENCLATURE, Kind

if TYPE_CHECKING:
    from commission.description import LoadedPlant
    from commission.description.model import Instrument
    from commission.prediction import Prediction, SystemModel

_MOST_POINTS = 400
_ROUTE_READINGS: Mapping[str, tuple[str, ...]] = {
    "compressor heat balance": ("suction_pressure", "suction_temperature", "discharge_pressure",
                                "discharge_temperature", "liquid_temperature", "power_input"),
    "liquid side": (),
    "air side": (),
    "electric meter": ("power_input",),
}  # fmt: skip


def grid_of(low: float, high: float, step: float) -> tuple[float, ...]:
    """Values from low to high in steps of at most `step`, both ends included."""
    count = max(1, -int(-(high - low) // step))
    return tuple(low + (high - low) * n / count for n in range(count + 1))


def make_sheet(
    loaded: LoadedPlant,
    model: SystemModel,
    ranges: Mapping[str, Sequence[float]],
    *,
    held: Mapping[str, float] | None = None,
    prepared_for: dt.date | None = None,
    title: str = "",
    keys: Sequence[str] | None = None,
    steadiness: str = "site",
) -> TestSheet:
    """Freeze expectations and guarantees over a range of conditions.

    `ranges` gives for each condition of the range its grid values in SI, ascending; all other conditions are held at
    their value in `held` (SI), or else as designed. These are as stated: how far the plant may lie from that is in the
    uncertainties, and what changes in them where one is read on the day is frozen too. `keys` chooses the expectations
    (all that the model gives, where None). The largest error of reading between the points is found at the middle of
    every cell and frozen with each target.

    Raises:
        InputError: a condition that this system does not have, no value, or too many points.
        NotCalculatedError: the model or a guarantee has no value somewhere in the range.
    """
    axes = _axes(model, ranges)
    there = model.predict(held).conditions if held else model.rated_condition
    held = {k: v for k, v in there.items() if k not in ranges}
    where, between = points(axes), middles(axes)
    predicted = _predicted(model, held, where)
    middle = _predicted(model, held, between)
    wanted = [k for k in (keys or predicted[0].expected) if all(k in p.expected for p in (*predicted, *middle))]
    centre = between[len(between) // 2]
    read = {k: _predicted(model, held, where, k) for k in model.may_differ if k in held}
    targets = _expected_targets(loaded, model, axes, predicted, read, middle, between, wanted, {**held, **centre})
    targets += _guarantee_targets(loaded, model, held, axes, where, between, centre)
    used = dict.fromkeys(name for t in targets for name in t.instruments)
    return TestSheet(
        model.system_id,
        title,
        prepared_for.isoformat() if prepared_for else "not stated",
        loaded.digest,
        versions(),
        loaded.barometric_pressure,
        axes,
        held,
        tuple(targets),
        {name: in_words(loaded.plant.instruments[name]) for name in used},
        {k: a.value for k, a in sorted(model.assumptions.items())},
        steadiness,
        live(loaded, model, middle[len(middle) // 2]).frozen(),
    )


def _predicted(
    model: SystemModel, held: Mapping[str, float], where: Sequence[Mapping[str, float]], read: str = ""
) -> list[Prediction]:
    """Predictions at the points; what is held is as stated, but for the condition `read`."""
    unread = [k for k in held if k != read]
    return [model.predict({**held, **at}, as_stated=unread) for at in where]


def _gained(unread: Sequence[float], read: Mapping[str, Sequence[float]]) -> dict[str, tuple[float, ...]]:
    """What the variance of each point gains where a held condition is read; from standard uncertainties."""
    gained = {k: tuple(one**2 - u**2 for one, u in zip(ones, unread, strict=True)) for k, ones in read.items()}
    return {k: changes for k, changes in gained.items() if any(changes)}


def versions() -> dict[str, str]:
    """Versions of tool and property library, from their metadata."""
    from importlib.metadata import version

    return {"commission": version("commission"), "CoolProp": version("CoolProp")}


def in_words(instrument: Instrument) -> dict[str, str]:
    """An instrument in the words of the description, without what was left out."""
    dumped: dict[str, Any] = instrument.model_dump(mode="json", by_alias=True, exclude_none=True)
    words: dict[str, str] = {}
    for key, value in dumped.items():
        if isinstance(value, dict):
            words.update({f"{key} {k}": f"{v * 100:g} %" if isinstance(v, float) else str(v) for k, v in value.items()})
        elif isinstance(value, bool):
            words[key] = "yes" if value else "no"
        else:
            words[key] = str(value)
    return words


def _axes(model: SystemModel, ranges: Mapping[str, Sequence[float]]) -> tuple[Axis, ...]:
    problems = [
        Problem(
            "this system has no such condition", value=key, allowed=", ".join(model.condition_axes),
            nearest=nearest(key, model.condition_axes),
        )
        for key in ranges
        if key not in model.condition_axes
    ]  # fmt: skip
    for key in ranges:
        if key in model.condition_axes and model.condition_axes[key].steps:
            message = "it has no values between its steps: freeze a sheet for each of them"
            problems.append(Problem(message, path=key, allowed=f"--at {key}=..."))
    for key, values in ranges.items():
        if not values or any(b <= a for a, b in itertools.pairwise(values)):
            problems.append(Problem("the values of a range must be given in rising order", path=key))
    if problems or not ranges:
        raise InputError(*(problems or [Problem("a test sheet needs the range of at least one condition")]))
    axes = tuple(Axis(k, tuple(float(v) for v in ranges[k])) for k in sorted(ranges))
    count = 1
    for axis in axes:
        count *= len(axis.values)
    if count > _MOST_POINTS:
        raise InputError(Problem(f"{count} points are too many for one sheet", allowed=f"at most {_MOST_POINTS}"))
    return axes


def _expected_targets(
    loaded: LoadedPlant,
    model: SystemModel,
    axes: tuple[Axis, ...],
    predicted: Sequence[Prediction],
    read: Mapping[str, Sequence[Prediction]],
    middle: Sequence[Prediction],
    between: Sequence[Mapping[str, float]],
    wanted: Sequence[str],
    centre: Mapping[str, float],
) -> list[Target]:
    sensitivities = model.sensitivities(dict(centre))
    targets = []
    for key in wanted:
        values = tuple(p.expected[key].value for p in predicted)
        uncertainties = _uncertainties(predicted, key)
        gained = _gained(uncertainties, {k: _uncertainties(ones, key) for k, ones in read.items()})
        missed = _missed(axes, values, between, [p.expected[key].value for p in middle])
        instruments, reading = _instrument_for(loaded, model, key, values[len(values) // 2])
        held = {a.key for a in axes}
        slopes = {k: s for k, s in sensitivities.get(key, {}).items() if s and k not in held}
        method = predicted[0].expected[key].method
        targets.append(
            Target(
                key, "expectation", method, values, uncertainties, missed, instruments, reading, None, slopes, gained
            )
        )
    return targets


def _uncertainties(predicted: Sequence[Prediction], key: str) -> tuple[float, ...]:
    return tuple(p.expected[key].uncertainty or 0.0 if key in p.expected else 0.0 for p in predicted)


def _guarantee_targets(
    loaded: LoadedPlant,
    model: SystemModel,
    held: Mapping[str, float],
    axes: tuple[Axis, ...],
    where: Sequence[Mapping[str, float]],
    between: Sequence[Mapping[str, float]],
    centre: Mapping[str, float],
) -> list[Target]:
    from commission.prediction import boundary

    system = loaded.system(model.system_id)
    proof = capability(loaded, model, {**held, **centre}).guarantees
    targets = []
    for guarantee, proved in zip(system.guarantee, proof, strict=True):
        terms = terms_of(guarantee)
        differs = boundary_differs(terms, boundary(model.facts))
        if differs is not None:
            raise NotCalculatedError(differs)
        at = _carrier(terms, model, loaded, held)
        carried = [at(point) for point in where]
        values = tuple(c.value for c in carried)
        uncertainties = tuple(c.budget.standard for c in carried)
        gained = _gained(uncertainties, _carried_with_one_read(at, terms, model, held, where))
        missed = _missed(axes, values, between, [at(point).value for point in between])
        names = _route_instruments(loaded, model, terms, {**held, **centre})
        slopes = _held_slopes(at, terms, held, centre)
        method = carried[0].explained.method
        reading = proved.verdict.measured.budget.standard if proved.verdict.measured else None
        targets.append(
            Target(
                terms.quantity,
                "guarantee",
                method,
                values,
                uncertainties,
                missed,
                names,
                reading,
                terms,
                slopes,
                gained,
            )
        )
    return targets


def _carried_with_one_read(
    at: Callable[..., Carried],
    terms: Terms,
    model: SystemModel,
    held: Mapping[str, float],
    where: Sequence[Mapping[str, float]],
) -> dict[str, list[float]]:
    """By held condition, the standard uncertainties of a carried guarantee where that condition is read."""
    keys = [k for k in model.may_differ if k in held] if terms.carried_by == "design model" else []
    return {k: [at(point, read=k).budget.standard for point in where] for k in keys}


def _carrier(
    terms: Terms, model: SystemModel, loaded: LoadedPlant, held: Mapping[str, float]
) -> Callable[..., Carried]:
    """Carries a guarantee to a point; what is held is as stated, but for the condition `read`."""
    points_of_supplier = loaded.system(model.system_id).rated_points
    known = all(known_to(model, k) for k in terms.at)
    there = model.predict(dict(terms.at)) if known else None

    def at(point: Mapping[str, float], read: str = "") -> Carried:
        conditions = {k: Measured(k, v) for k, v in {**held, **point}.items()}
        unread = [k for k in held if k != read]
        return carry(terms, conditions, model, points_of_supplier, there, unread)

    return at


def _held_slopes(
    at: Callable[[Mapping[str, float]], Carried], terms: Terms, held: Mapping[str, float], centre: Mapping[str, float]
) -> dict[str, float]:
    """Change of a carried guarantee per unit of each held condition; only where the design model carries it."""
    if terms.carried_by != "design model":
        return {}
    slopes = {}
    for key, value in held.items():
        if key.endswith("flow"):
            continue  # a flow that is not the stated one is the plant's own, no excuse for it
        step = 0.1 if NOMENCLATURE[key].kind is Kind.TEMPERATURE else 0.01 * abs(value)
        low, high = (at({**centre, key: value + s}).value for s in (-step, step))
        if high != low:
            slopes[key] = (high - low) / (2.0 * step)
    return slopes


def _missed(
    axes: tuple[Axis, ...], values: tuple[float, ...], between: Sequence[Mapping[str, float]], exact: Sequence[float]
) -> float:
    """The largest error of reading between the points."""
    return max(abs(interpolate(axes, values, at)[0] - true) for at, true in zip(between, exact, strict=True))


def _instrument_for(
    loaded: LoadedPlant, model: SystemModel, key: str, value: float
) -> tuple[tuple[str, ...], float | None]:
    """The instrument that will read an expected value, and the standard uncertainty of the reading."""
    system, instruments = loaded.system(model.system_id), loaded.plant.instruments
    name = choose_instrument(key, value, loaded, system)
    if name is None:
        return (), None
    try:
        measured = measure(Reading(key, value, name), instruments, loaded.barometric_pressure)
    except NotCalculatedError:
        return (), None
    return (name,), measured.budget.standard


def _route_instruments(
    loaded: LoadedPlant, model: SystemModel, terms: Terms, at: Mapping[str, float]
) -> tuple[str, ...]:
    """The instruments that the route of a guarantee reads."""
    system = loaded.system(model.system_id)
    expected = model.predict(dict(at)).expected
    route = terms.route or ("electric meter" if terms.quantity == "power_input" else "compressor heat balance")
    keys = [*_ROUTE_READINGS[route], *(k for k in at if NOMENCLATURE[k].kind is Kind.TEMPERATURE)]
    if route in ("liquid side", "air side"):
        side = "source" if terms.quantity.startswith("cooling") else "sink"
        keys += [f"heat_{side}_{what}" for what in ("outlet_temperature", "outlet_wet_bulb", "flow")]
    if terms.quantity.endswith("cop"):
        keys.append("power_input")
    names = []
    for key in keys:
        value = expected[key].value if key in expected else at.get(key)
        if value is not None:
            names.append(choose_instrument(key, value, loaded, system))
    return tuple(dict.fromkeys(n for n in names if n))
