"""Where an expected operating point lies beyond what is stated of the machine: its envelope, its limit devices.

What the controls would do there (limit, trip, unload) is not calculated: the values hold for the machine as if it ran
on, and a sentence with the figures says so.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping, Sequence
from itertools import pairwise

from commission.prediction.facts import Facts

Corners = Sequence[tuple[float, float]]
ON_THE_EDGE = 0.05
"""Distance in K from the edge of an envelope within which a point still counts as inside: what a page can show."""

ABOVE_THE_CONTROLLER = 5e4
"""Pa above the highest pressure of a controller from which it is told: the model rounds off the corner there."""


def beyond_limits(facts: Facts, values: Mapping[str, float], conditions: Mapping[str, float]) -> tuple[str, ...]:
    """A sentence for each stated limit that the expected `values` (SI, keys of the nomenclature) lie beyond."""
    values = {**values, "evaporating_temperature": suction_dew_point(values)}
    limits = (_envelope, _polynomials, _devices, _controller)
    said = (text for limit in limits for text in limit(facts, values))
    return (*said, *_flow_switches(facts, {**values, **conditions}), *_heating_limit(facts, conditions))


def suction_dew_point(values: Mapping[str, float]) -> float:
    """Dew point (K) at the suction port, which envelopes and polynomials count by: below that of the evaporator by the
    loss of the line, and by what a crankcase pressure regulator holds back."""
    return values["suction_temperature"] - values["compressor_superheat"]


def inside(corners: Corners, x: float, y: float) -> bool:
    """Whether a point lies in a polygon or on its edge (even-odd rule; a ray to the right)."""
    edges = list(pairwise((*corners, corners[0])))
    crossings = sum((y1 > y) != (y2 > y) and x < x1 + (y - y1) * (x2 - x1) / (y2 - y1) for (x1, y1), (x2, y2) in edges)
    return crossings % 2 == 1 or any(_distance(one, other, x, y) < ON_THE_EDGE for one, other in edges)


def _distance(one: tuple[float, float], other: tuple[float, float], x: float, y: float) -> float:
    (x1, y1), (x2, y2) = one, other
    square = (x2 - x1) ** 2 + (y2 - y1) ** 2
    along = ((x - x1) * (x2 - x1) + (y - y1) * (y2 - y1)) / square if square else 0.0
    along = min(max(along, 0.0), 1.0)
    return math.hypot(x - x1 - along * (x2 - x1), y - y1 - along * (y2 - y1))


def _crossings(corners: Corners, level: float, axis: int) -> list[float]:
    """Where the line on which coordinate `axis` is `level` meets the edges: the other coordinate."""
    found = []
    for one, other in pairwise((*corners, corners[0])):
        low, high = one[axis], other[axis]
        if low != high and min(low, high) <= level <= max(low, high):
            found.append(one[1 - axis] + (level - low) / (high - low) * (other[1 - axis] - one[1 - axis]))
    return found


def _envelope(facts: Facts, values: Mapping[str, float]) -> Iterator[str]:
    corners = [(c.evaporating_temperature, c.condensing_temperature) for c in facts.system.compressor.envelope]
    point = values.get("evaporating_temperature"), values.get("condensing_temperature")
    if len(corners) < 3 or point[0] is None or point[1] is None or inside(corners, point[0], point[1]):
        return

    def shown(temperature: float) -> str:
        return facts.shown.of("evaporating_temperature", temperature)

    where = f"{shown(point[0])} evaporating (at its suction) and {shown(point[1])} condensing"
    ends = ""
    for axis, word, other in ((1, "evaporating", "condensing"), (0, "condensing", "evaporating")):
        if found := _crossings(corners, point[axis] or 0.0, axis):
            ends = f"at this {other} temperature it reaches from {shown(min(found))} to {shown(max(found))} {word}"
            break
    else:
        lows, highs = [tuple(map(end, zip(*corners, strict=True))) for end in (min, max)]
        ends = (
            f"it reaches from {shown(lows[0])} to {shown(highs[0])} evaporating and from {shown(lows[1])} to "
            f"{shown(highs[1])} condensing"
        )
    yield (
        f"the compressor would run at {where}, outside its application envelope: {ends}. The values hold only if no "
        "control limits it there"
    )


def _polynomials(facts: Facts, values: Mapping[str, float]) -> Iterator[str]:
    stated = facts.system.compressor.polynomial
    if stated is None:
        return
    for word in ("evaporating", "condensing"):
        value = values.get(f"{word}_temperature")
        low, high = getattr(stated, f"lowest_{word}"), getattr(stated, f"highest_{word}")
        below, above = low is not None and value is not None and value < low - ON_THE_EDGE, False
        above = high is not None and value is not None and value > high + ON_THE_EDGE
        if value is not None and (below or above):
            key = f"{word}_temperature"
            yield (
                f"{facts.shown.of(key, value)} {word} lies beyond {facts.shown.of(key, low if below else high)}, where "
                "the published range of the compressor's polynomials ends"
            )


def _devices(facts: Facts, values: Mapping[str, float]) -> Iterator[str]:
    """Limit devices that would stop the machine before it reads what is expected."""
    controls, shown = facts.system.controls, facts.shown
    high, low = controls.high_pressure_limit, controls.low_pressure_cut_out
    settings = (
        ("discharge_temperature", controls.discharge_temperature_limit, 1, "the discharge thermostat"),
        ("discharge_pressure", None if high is None else facts.loaded.absolute(high), 1, "the high-pressure limiter"),
        ("suction_pressure", None if low is None else facts.loaded.absolute(low), -1, "the low-pressure control"),
    )
    for key, setting, sign, device in settings:
        if setting is not None and key in values and sign * (values[key] - setting) > 0:
            yield (
                f"{device}, set to {shown.of(key, setting)}, stops the machine before it reaches the expected "
                f"{shown.of(key, values[key])}"
            )


def _flow_switches(facts: Facts, values: Mapping[str, float]) -> Iterator[str]:
    """Flows of the condition, or expected ones, at which a flow switch stops the machine."""
    for side, medium in (("heat_source", facts.system.heat_source), ("heat_sink", facts.system.heat_sink)):
        key, least = f"{side}_flow", medium.least_flow
        if least is not None and key in values and values[key] < least * (1.0 - 1e-9):
            yield (
                f"the flow switch, set to {facts.shown.of(key, least)}, stops the machine at a "
                f"{facts.shown.words(key)} of {facts.shown.of(key, values[key])}: the values hold only as if it ran on"
            )


def _controller(facts: Facts, values: Mapping[str, float]) -> Iterator[str]:
    """The high pressure of a gas cooler that its controller would not let rise so far."""
    control, shown = facts.system.controls.gas_cooler_pressure, facts.shown
    outlet = values.get("gas_cooler_outlet_temperature")
    if control is None or control.highest is None or outlet is None:
        return
    highest = facts.loaded.absolute(control.highest)
    if values["discharge_pressure"] > highest + ABOVE_THE_CONTROLLER:
        yield (
            f"{shown.of('discharge_pressure', values['discharge_pressure'])} lies above the highest pressure of the "
            f"controller, {shown.of('discharge_pressure', highest)}: a gas-cooler outlet of "
            f"{shown.of('gas_cooler_outlet_temperature', outlet)} needs it. The controller does not let it rise so "
            "far, and the machine makes less heat than the values say"
        )


def _heating_limit(facts: Facts, conditions: Mapping[str, float]) -> Iterator[str]:
    curve = facts.system.controls.weather_curve
    outdoor = conditions.get("heat_source_inlet_temperature")
    if curve is None or curve.heating_limit is None or outdoor is None or facts.source_liquid is not None:
        return
    if outdoor > curve.heating_limit:
        yield (
            f"above {facts.shown.of('heat_source_inlet_temperature', curve.heating_limit)} outdoors the controls do "
            "not ask for heat: the machine runs there only when it is made to"
        )
