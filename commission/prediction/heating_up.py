"""Time and energy to heat a store, from the predicted capacity; with and without its back-up element. SI units.

A machine that heats in one pass draws the coldest water from the bottom of a stratified store and gives it back at its
outlet temperature on top: plug flow, each layer passes the machine once. A machine with a pump of fixed flow turns the
store over and is taken to heat it fully mixed. Mixing at the boundary of hot and cold water, defrosts and the first
minutes of running are not counted: a real heat-up takes longer, not shorter.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

from commission.description.model import Store
from commission.errors import NotCalculatedError
from commission.prediction.element_below import Cold, heated_from_below
from commission.prediction.expected import in_celsius
from commission.prediction.model import Prediction, SystemModel
from commission.properties import liquid
from commission.quantities import NOMENCLATURE, Explained, Input, Kind

ABOVE = {"store top": 0.2, "store middle": 0.5, "store bottom": 1.0, "flow pipe": 1.0}
"""Share of the store that an element heats, by where it sits (common practice: the top fifth, the upper half, all)."""
NODES = ((-math.sqrt(0.6), 5 / 18), (0.0, 8 / 18), (math.sqrt(0.6), 5 / 18))
"""Gauss-Legendre nodes on -1 to 1 and weights on a length of 1, for the mixed store."""
DRAWN = (0.0, 0.3, 0.55, 0.75)
"""Shares of the way from start to goal at which a machine is asked that draws water warmed by an element below it; from
the last on what it does is carried on in a straight line."""
VOLUME = "store_volume_departure"
Parts = dict[str, float]


@dataclass(frozen=True, slots=True)
class HeatUp:
    """Time (s) and electric energy (J) of one heat-up by the machine alone, and with the element where that may run.

    `way` is 'plug flow' or 'mixed'. `element_reason` says why there are no figures with the element. `warnings` are
    those of the predictions along the way.
    """

    way: str
    time: Explained
    energy: Explained
    time_with_element: Explained | None
    energy_with_element: Explained | None
    element_reason: str | None
    warnings: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class _Step:
    """Part of the heat-up: heat to be stored (J), and the machine while it does."""

    heat: float
    loss: float
    at: Prediction

    def power(self, key: str, cause: str | None = None) -> float:
        """Heating capacity or power input in W, moved by one standard uncertainty of `cause`."""
        moved = self.at.parts[key].get(cause, 0.0) if cause is not None else 0.0
        return self.at.expected[key].value + moved


def heat_up(
    model: SystemModel,
    start: float | Sequence[float],
    end: float | None = None,
    conditions: Mapping[str, float] | None = None,
    *,
    circulating: bool = False,
) -> HeatUp:
    """Expected heat-up of the system's store from `start` to `end` (K; None: its set point).

    `start` is one temperature, or those of equal layers from top to bottom. `conditions` are those of the machine apart
    from the water temperatures, which follow from the store. With `circulating` the loop's heat loss is carried too.

    Raises:
        NotCalculatedError: no store, no volume, no set point; nothing to heat; or the machine has no balance on the
            way, or gives no more than is lost.
    """
    store = model.facts.system.store
    if store is None:
        raise NotCalculatedError("this system has no store")
    goal = end if end is not None else store.set_point
    if goal is None:
        raise NotCalculatedError("the store has no set point: state store.set_point, or the end temperature")
    layers = [float(start)] if isinstance(start, (int, float)) else [float(t) for t in start]
    if not layers or min(layers) >= goal:
        raise NotCalculatedError("the store is as warm as it is to be: nothing is heated")
    once = {"heat_sink_inlet_temperature", "heat_sink_outlet_temperature"} <= set(model.condition_axes)
    if once and not store.stratified:
        raise NotCalculatedError(
            "a machine that heats water in one pass needs a stratified store, and this one is stated to be mixed"
        )
    steps = _plug_flow(model, store, layers, goal, conditions or {}, circulating) if once else None
    if steps is None:
        steps = _mixed(model, store, sum(layers) / len(layers), goal, conditions or {}, circulating)
    return _result(model, store, steps, layers, goal, once)


def _water_heat(store: Store, low: float, high: float) -> float:
    """Heat in J that warms the whole store between two temperatures (K), at the density of the colder."""
    water = liquid("water", 0.0)
    return store.volume * water.density(low) * water.specific_heat(0.5 * (low + high)) * (high - low)


def _loss(model: SystemModel, store: Store, temperature: float, circulating: bool) -> float:
    """Heat in W that a store at a mean temperature (K) loses; its standing loss is stated at the set point."""
    lost = 0.0
    if store.standing_loss is not None and store.set_point is not None:
        around = model.facts.assumptions["surroundings_temperature"].value
        lost += store.standing_loss * (temperature - around) / (store.set_point - around)
    if circulating:
        loop = store.circulation
        if loop is None or loop.heat_loss is None:
            raise NotCalculatedError("the heat loss of the circulation loop is not stated: store.circulation.heat_loss")
        lost += loop.heat_loss
    return lost


def _plug_flow(
    model: SystemModel,
    store: Store,
    layers: Sequence[float],
    goal: float,
    conditions: Mapping[str, float],
    circulating: bool,
) -> list[_Step]:
    """Layers pass the machine from the bottom up, each once; the store is then hot above and as it was below."""
    steps = []
    hot, mean = 0.0, sum(layers) / len(layers)
    for temperature in reversed(layers):
        if temperature >= goal:
            continue
        asked = {**conditions, "heat_sink_inlet_temperature": temperature, "heat_sink_outlet_temperature": goal}
        gained = (goal - temperature) / len(layers)
        loss = _loss(model, store, mean + hot + 0.5 * gained, circulating)
        steps.append(_Step(_water_heat(store, temperature, goal) / len(layers), loss, model.predict(asked)))
        hot += gained
    return steps


def _mixed(
    model: SystemModel, store: Store, start: float, goal: float, conditions: Mapping[str, float], circulating: bool
) -> list[_Step]:
    """The store is at one temperature, which is the inlet of the machine; three Gauss points on the way."""
    if start >= goal:
        raise NotCalculatedError("the store is as warm as it is to be: nothing is heated")
    whole, steps = _water_heat(store, start, goal), []
    for node, weight in NODES:
        temperature = 0.5 * (start + goal) + 0.5 * (goal - start) * node
        at = model.predict({**conditions, "heat_sink_inlet_temperature": temperature})
        steps.append(_Step(whole * weight, _loss(model, store, temperature, circulating), at))
    return steps


def _machine_alone(steps: Sequence[_Step], cause: str | None, volume: float) -> tuple[float, float]:
    """Time (s) and electric energy (J), with one cause moved and the store's volume times `volume`."""
    time = energy = 0.0
    for step in steps:
        given = step.power("heating_capacity", cause) - step.loss
        if given <= 0:
            raise NotCalculatedError("the machine gives no more heat than the store and its loop lose")
        lasts = volume * step.heat / given
        time += lasts
        energy += lasts * step.power("power_input", cause)
    return time, energy


def _with_element(
    steps: Sequence[_Step], cause: str | None, volume: float, power: float, above: float, delay: float, replaces: bool
) -> tuple[float, float]:
    """The same with an element of `power` (W) after `delay` (s), until the share `above` of the store is hot.

    The hot water of the machine goes to the top, so that both work on the part above the element until it is done.
    """
    heat = volume * sum(s.heat for s in steps)
    if replaces:
        lost = sum(s.loss * s.heat for s in steps) / sum(s.heat for s in steps)
        if above < 1.0 or power <= lost:
            raise NotCalculatedError("the element alone does not heat the whole store")
        time = heat / (power - lost)
        return time, time * power
    alone, energy = _machine_alone(steps, cause, volume)
    machine = heat / alone
    upper = above * heat
    done = upper / machine if upper <= machine * delay else (upper + power * delay) / (machine + power)
    time = done + (heat - upper) / machine
    return time, energy * time / alone + power * max(done - delay, 0.0)


def _result(
    model: SystemModel, store: Store, steps: Sequence[_Step], layers: Sequence[float], goal: float, once: bool
) -> HeatUp:
    way = "plug flow" if once else "mixed"
    method = "heat_up_plug_flow" if once else "heat_up_mixed"
    inputs = _inputs(model, store, steps, layers, goal)
    time, energy = _explained(model, steps, lambda c, v: _machine_alone(steps, c, v), method, inputs)
    warnings = tuple(dict.fromkeys(w for s in steps for w in s.at.warnings))
    try:
        power, above, delay, replaces = _element(model, steps)
        extra = (*inputs, _place(model, "power of the element", power, Kind.HEAT_FLOW, "back_up.power"))
        if once and above == 1.0 and not replaces:
            from_below = _element_below(model, steps, layers, goal, power, delay)
            both = _explained(model, steps, from_below, "heat_up_with_element_below", extra)
        else:
            both = _explained(
                model, steps, lambda c, v: _with_element(steps, c, v, power, above, delay, replaces),
                "heat_up_with_element", extra,
            )  # fmt: skip
    except NotCalculatedError as error:
        return HeatUp(way, time, energy, None, None, str(error), warnings)
    return HeatUp(way, time, energy, *both, None, warnings)


def _element_below(
    model: SystemModel, steps: Sequence[_Step], layers: Sequence[float], goal: float, power: float, delay: float
) -> Callable[[str | None, float], tuple[float, float]]:
    """Time (s) and energy (J) with an element that warms the water which a machine in one pass draws."""
    cool = [t for t in layers if t < goal]
    start, heat = sum(cool) / len(cool), sum(s.heat for s in steps)
    lost = sum(s.loss * s.heat for s in steps) / heat
    inlets = [start + (goal - start) * share for share in DRAWN]
    given, unread = steps[0].at.conditions, steps[0].at.as_stated
    asked = [{**given, "heat_sink_inlet_temperature": t} for t in inlets]
    at = [_Step(heat, lost, model.predict(conditions, as_stated=unread)) for conditions in asked]

    def calculate(cause: str | None, volume: float) -> tuple[float, float]:
        figures = [(s.power("heating_capacity", cause), s.power("power_input", cause)) for s in at]

        def machine(drawn: float) -> tuple[float, float]:
            n = min(max(sum(t < drawn for t in inlets[1:]), 0), len(inlets) - 2)
            share = (drawn - inlets[n]) / (inlets[n + 1] - inlets[n])
            (a, b), (c, d) = figures[n], figures[n + 1]
            return a + share * (c - a), b + share * (d - b)

        alone = _machine_alone(steps, cause, volume)[0]
        cold = Cold(volume * heat / (goal - start), start, goal)
        return heated_from_below(cold, machine, lost, power, delay, alone)

    return calculate


def _element(model: SystemModel, steps: Sequence[_Step]) -> tuple[float, float, float, bool]:
    """Power (W), share of the store that it heats, delay (s), and whether it replaces the machine.

    Raises:
        NotCalculatedError: there is none, it is locked out at this outdoor temperature, or too little is stated.
    """
    back_up = model.facts.system.back_up
    if back_up is None:
        raise NotCalculatedError("there is no back-up element")
    if back_up.power is None or back_up.where not in ABOVE:
        raise NotCalculatedError("power and place of the element are not stated: back_up.power, back_up.where")
    limits = [t for t in (back_up.starts_below, back_up.locked_out_above) if t is not None]
    if limits:
        outdoors = steps[0].at.conditions.get("heat_source_inlet_temperature")
        if model.facts.source_liquid is not None or outdoors is None:
            raise NotCalculatedError("the outdoor temperature that locks the element out is no condition here")
        if outdoors >= min(limits):
            raise NotCalculatedError(
                f"the element does not start at {in_celsius(outdoors)} outdoors, only below {in_celsius(min(limits))}"
            )
    return back_up.power, ABOVE[back_up.where], back_up.delay or 0.0, back_up.mode == "replaces"


def _explained(
    model: SystemModel,
    steps: Sequence[_Step],
    calculate: Callable[[str | None, float], tuple[float, float]],
    method: str,
    inputs: tuple[Input, ...],
) -> tuple[Explained, Explained]:
    """Time and energy; each cause moves capacity and power of all steps together, the volume moves alone."""
    nominal = calculate(None, 1.0)
    causes = dict.fromkeys(c for s in steps for k in ("heating_capacity", "power_input") for c in s.at.parts[k])
    moved = [(cause, calculate(cause, 1.0)) for cause in causes]
    departure = model.facts.assumptions[VOLUME].standard_uncertainty
    moved.append((VOLUME, calculate(None, 1.0 + departure)))
    table = []
    for n, key in enumerate(("heat_up_time", "heat_up_energy")):
        changes: Parts = {cause: values[n] - nominal[n] for cause, values in moved}
        u = math.sqrt(sum(c * c for c in changes.values()))
        named = sorted((c for c in changes if abs(changes[c]) > 0.03 * u), key=lambda c: -abs(changes[c]))
        known = tuple(c for c in named if c in model.facts.assumptions)
        table.append(Explained(key, nominal[n], u, method, inputs, known))
    return table[0], table[1]


def _place(model: SystemModel, name: str, value: float, kind: Kind, path: str) -> Input:
    return model.facts.input(name, value, kind, path)


def _inputs(
    model: SystemModel, store: Store, steps: Sequence[_Step], layers: Sequence[float], goal: float
) -> tuple[Input, ...]:
    heat = sum(s.heat for s in steps)
    found = [
        _place(model, "volume of the store", store.volume, Kind.VOLUME, "store.volume"),
        Input("mean temperature at the start", sum(layers) / len(layers), Kind.TEMPERATURE, "condition"),
        Input("temperature at the end", goal, Kind.TEMPERATURE, "condition"),
        Input("heat to be stored", heat, Kind.ENERGY, "calculated"),
    ]
    for key in ("heating_capacity", "power_input"):
        mean = sum(s.power(key) * s.heat for s in steps) / heat
        found.append(Input(key, mean, NOMENCLATURE[key].kind, "calculated"))
    if any(s.loss for s in steps):
        mean = sum(s.loss * s.heat for s in steps) / heat
        found.append(Input("mean heat loss of store and loop", mean, Kind.HEAT_FLOW, "calculated"))
    return tuple(found)
