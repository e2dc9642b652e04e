"""Readings that cannot be: called out before any verdict, since a verdict on them would be about the instruments."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.acceptance.budget import Measured, propagate
from commission.acceptance.derived import property_part
from commission.acceptance.routes import closure, shell_share
from commission.errors import NotCalculatedError
from commission.quantities import NOMENCLATURE, Input

if TYPE_CHECKING:
    from commission.properties import Refrigerant

_CONFIDENCE = 0.99
"""One in a hundred of healthy readings would be called impossible at the edge: the call must be rare to be believed."""


@dataclass(frozen=True, slots=True)
class Impossible:
    """One contradiction: which rule, between which readings, by how much beyond their uncertainty.

    `excess` is how far the difference goes the wrong way and `expanded` its expanded uncertainty (99 %), both in SI.
    """

    rule: str
    text: str
    keys: tuple[str, ...]
    excess: float
    expanded: float
    figures: tuple[Input, ...]


@dataclass(frozen=True, slots=True)
class _Order:
    """`high` must lie above `low`; else `text`."""

    rule: str
    high: str
    low: str
    text: str


_ORDERS = (
    _Order("pressures", "discharge_pressure", "suction_pressure",
           "a running compressor discharges at a higher pressure than it draws from: gauges swapped, or is it off?"),
    _Order("source cools", "heat_source_inlet_temperature", "heat_source_outlet_temperature",
           "the heat source leaves warmer than it came, although heat is taken from it: are inlet and outlet swapped?"),
    _Order("wet bulb off the coil", "heat_source_outlet_temperature", "heat_source_outlet_wet_bulb",
           "the wet bulb of the air off the coil reads above its dry bulb, which no air can: probes swapped?"),
    _Order("coil takes heat", "heat_source_wet_bulb", "heat_source_outlet_wet_bulb",
           "the air holds more heat off the coil than on it (wet bulbs), although heat is taken from it: swapped?"),
    _Order("sink warms", "heat_sink_outlet_temperature", "heat_sink_inlet_temperature",
           "the heat sink leaves colder than it came, although heat is given to it: are inlet and outlet swapped?"),
    _Order("source above evaporating", "heat_source_inlet_temperature", "evaporating_temperature",
           "heat does not flow from a colder source to a warmer refrigerant (second law): suction gauge or probe"),
    _Order("condensing above sink", "condensing_temperature", "heat_sink_inlet_temperature",
           "heat does not flow from a colder refrigerant to a warmer sink (second law): discharge gauge or probe"),
    _Order("discharge above sink outlet", "discharge_temperature", "heat_sink_outlet_temperature",
           "the heat sink leaves hotter than the hottest refrigerant (second law)"),
    _Order("discharge above suction", "discharge_temperature", "suction_temperature",
           "the discharge gas is colder than the suction gas: are the probes swapped?"),
    _Order("liquid above evaporating", "liquid_temperature", "evaporating_temperature",
           "the liquid before the expansion device is colder than the evaporating temperature"),
)  # fmt: skip
_POSITIVE = (
    ("superheat", "compressor_superheat", "vapour at the suction port cannot be colder than its dew point; wet suction "
     "reads zero, never less: gauge, probe, or another refrigerant than stated"),
    ("superheat at the evaporator", "superheat", "vapour cannot be colder than its dew point; wet vapour reads zero, "
     "never less: gauge, probe, or another refrigerant than stated"),
    ("subcooling", "subcooling", "liquid cannot be warmer than its bubble point; flash gas reads zero, never less: "
     "gauge, probe, a pressure loss before the valve, or another refrigerant than stated"),
    ("flow", "refrigerant_flow", "the refrigerant flow is negative"),
    ("power", "power_input", "the power input is negative"),
    ("compressor power", "compressor_power", "the compressor power is negative"),
)  # fmt: skip


def impossible(
    refrigerant: Refrigerant, readings: Mapping[str, Measured], shell: Measured | None = None
) -> tuple[Impossible, ...]:
    """All contradictions among measured and derived readings (99 %). `readings` by nomenclature key.

    Capacities measured by two independent routes are held together by the first law under the keys
    `cooling_capacity` and `heating_capacity` with `compressor_power`.
    """
    found = [
        *_orders(readings),
        *_signs(readings),
        *_glide(refrigerant, readings),
        *_compression(refrigerant, readings),
        *_carnot(readings),
        *_balance(readings, shell or shell_share()),
    ]
    return tuple(found)


def _call(
    rule: str, text: str, margin: Measured, readings: Mapping[str, Measured], keys: tuple[str, ...]
) -> Iterator[Impossible]:
    """A call where `margin`, which must not be negative, is so beyond its uncertainty."""
    expanded = margin.budget.expanded(_CONFIDENCE)
    if margin.value < -expanded:
        figures = tuple(Input(k, readings[k].value, NOMENCLATURE[k].kind, "reading") for k in keys)
        yield Impossible(rule, text, keys, -margin.value, expanded, figures)


def _difference(high: Measured, low: Measured) -> Measured:
    return propagate("difference", lambda high, low: high - low, {"high": high, "low": low})


def _orders(readings: Mapping[str, Measured]) -> Iterator[Impossible]:
    for order in _ORDERS:
        if order.high in readings and order.low in readings:
            margin = _difference(readings[order.high], readings[order.low])
            yield from _call(order.rule, order.text, margin, readings, (order.high, order.low))


def _signs(readings: Mapping[str, Measured]) -> Iterator[Impossible]:
    for rule, key, text in _POSITIVE:
        if key in readings:
            yield from _call(rule, text, readings[key], readings, (key,))


def _glide(refrigerant: Refrigerant, readings: Mapping[str, Measured]) -> Iterator[Impossible]:
    """The source cannot leave colder than the coldest refrigerant: the inlet of the evaporator, on the bubble side."""
    keys = ("heat_source_outlet_temperature", "suction_pressure")
    if not set(keys) <= set(readings):
        return
    inputs = {"outlet": readings[keys[0]], "pressure": readings[keys[1]], "off": property_part(refrigerant)}

    def margin(outlet: float, pressure: float, off: float) -> float:
        return outlet - refrigerant.bubble_temperature(pressure / (1.0 + off))

    text = "the heat source leaves colder than the coldest refrigerant in the evaporator (second law)"
    yield from _call("source outlet above evaporating", text, propagate("difference", margin, inputs), readings, keys)


def _compression(refrigerant: Refrigerant, readings: Mapping[str, Measured]) -> Iterator[Impossible]:
    """Discharge gas colder than a loss-free compression leaves it: only cooling from outside could do that."""
    keys = ("discharge_temperature", "suction_temperature", "suction_pressure", "discharge_pressure")
    superheat = readings.get("compressor_superheat")
    if not set(keys) <= set(readings) or superheat is None or superheat.value <= superheat.budget.expanded(_CONFIDENCE):
        return
    inputs = dict(zip(("td", "ts", "ps", "pd"), (readings[k] for k in keys), strict=True))

    def margin(td: float, ts: float, ps: float, pd: float) -> float:
        return td - float(refrigerant.isentropic_end(refrigerant.vapour(ts, ps), pd).T)

    try:
        difference = propagate("difference", margin, inputs)
    except NotCalculatedError:
        return  # outside the range of the property source: nothing can be said, and nothing is
    text = (
        "the discharge gas is colder than a compression without any loss would leave it (second law): discharge probe, "
        "liquid in the suction gas, or a cooled compressor"
    )
    yield from _call("entropy of compression", text, difference, readings, keys)


def _carnot(readings: Mapping[str, Measured]) -> Iterator[Impossible]:
    """A COP above Carnot between the media as they come in: the warmest source and the coldest sink there is."""
    for cop, add in (("cooling_cop", 0.0), ("heating_cop", 1.0)):
        keys = (cop, "heat_source_inlet_temperature", "heat_sink_inlet_temperature")
        if not set(keys) <= set(readings):
            continue
        inputs = dict(zip(("cop", "cold", "hot"), (readings[k] for k in keys), strict=True))

        def margin(cop: float, cold: float, hot: float, add: float = add) -> float:
            # As inverse COPs, which stay finite where source and sink are alike.
            return 1.0 / cop - (hot - cold) / (cold + add * (hot - cold))

        text = "the COP lies above Carnot between the media that come in (second law): capacity or power is wrong"
        yield from _call("Carnot", text, propagate("difference", margin, inputs), readings, keys)


def _balance(readings: Mapping[str, Measured], shell: Measured) -> Iterator[Impossible]:
    keys = ("cooling_capacity", "heating_capacity", "compressor_power")
    if not set(keys) <= set(readings):
        return
    rest = closure(readings[keys[0]], readings[keys[1]], readings[keys[2]], shell)
    margin = Measured("difference", -abs(rest.value), rest.budget)
    text = "heat to the sink is not heat from the source plus power (first law): one of the two routes is wrong"
    yield from _call("first law", text, margin, readings, keys)
