"""What is installed, as lists of facts: the description in words and units, each with its place in the file."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from commission.description import Conditions, LoadedPlant, System
from commission.quantities import NOMENCLATURE, Display, Kind, Pressure


@dataclass(frozen=True, slots=True)
class Fact:
    """One line: what, its value in words, and where it is written."""

    label: str
    text: str
    place: str


@dataclass(frozen=True, slots=True)
class FactGroup:
    """A heading with its facts."""

    title: str
    facts: tuple[Fact, ...]


DUTY_WORDS = {
    "cold_storage": "cold storage",
    "comfort_cooling": "comfort cooling",
    "liquid_cooling": "cooling of a liquid",
    "space_heating": "space heating",
    "water_heating": "water heating",
}


class _Writer:
    """Collects the facts of one system; a value that is not stated adds nothing."""

    def __init__(self, loaded: LoadedPlant, display: Display, identity: str) -> None:
        self.loaded, self.display, self.base = loaded, display, ("systems", identity)
        self.facts: list[Fact] = []

    def add(self, label: str, path: str, value: object, kind: Kind | None = None) -> None:
        if value is None or value == ():
            return
        if isinstance(value, Pressure):
            text = self.display.text(self.loaded.absolute(value), Kind.PRESSURE)
        elif isinstance(value, bool):
            text = "yes" if value else "no"
        elif kind is not None and isinstance(value, int | float):
            text = self.display.text(float(value), kind)
        elif isinstance(value, tuple):
            text = ", ".join(str(v) for v in value)
        else:
            text = str(value)
        self.facts.append(Fact(label, text, str(self.loaded.where((*self.base, *path.split("."))))))

    def take(self, title: str) -> Iterator[FactGroup]:
        if self.facts:
            yield FactGroup(title, tuple(self.facts))
        self.facts = []


def conditions_text(conditions: Conditions, display: Display) -> str:
    """The stated conditions in one line."""
    parts = []
    for key in Conditions.model_fields:
        value = getattr(conditions, key)
        if value is not None:
            parts.append(f"{NOMENCLATURE[key].label.lower()} {display.of(key, value)}")
    return ", ".join(parts)


def _space(loaded: LoadedPlant, identity: str | None) -> str | None:
    if identity is None:
        return None
    space = loaded.plant.spaces.get(identity)
    return (space.name if space else None) or identity


def _duty(w: _Writer, s: System) -> Iterator[FactGroup]:
    w.add("Duty", "duty", DUTY_WORDS.get(s.duty, s.duty))
    w.add("Refrigerant", "refrigerant", s.refrigerant)
    w.add("Charge", "charge", s.charge, Kind.MASS)
    w.add("Factory sealed", "sealed", s.sealed or None)
    w.add("Evaporator stands in", "spaces.evaporator", _space(w.loaded, s.spaces.evaporator))
    w.add("Condensing unit stands in", "spaces.condensing_unit", _space(w.loaded, s.spaces.condensing_unit))
    pipes = tuple(p for p in (_space(w.loaded, i) for i in s.spaces.pipework) if p)
    w.add("Pipework passes through", "spaces.pipework", pipes)
    yield from w.take("Duty and refrigerant")


def _nameplate(w: _Writer, s: System) -> Iterator[FactGroup]:
    n = s.nameplate
    w.add("Type", "nameplate.maker_type", n.maker_type)
    w.add("Serial number", "nameplate.serial", n.serial)
    w.add("Year", "nameplate.year", n.year)
    w.add("Allowable pressure PS, low side", "nameplate.allowable_pressure_low", n.allowable_pressure_low)
    w.add("Allowable pressure PS, high side", "nameplate.allowable_pressure_high", n.allowable_pressure_high)
    w.add("Voltage", "nameplate.voltage", n.voltage, Kind.VOLTAGE)
    w.add("Phases", "nameplate.phases", n.phases)
    w.add("Largest current", "nameplate.rated_current", n.rated_current, Kind.CURRENT)
    yield from w.take("Nameplate")


def _media(w: _Writer, s: System) -> Iterator[FactGroup]:
    for name, medium, words in (("heat_source", s.heat_source, "Heat source"), ("heat_sink", s.heat_sink, "Heat sink")):
        w.add(words, f"{name}.medium", medium.medium)
        w.add(f"{words}: glycol mass fraction", f"{name}.mass_fraction", medium.mass_fraction, Kind.RATIO)
        w.add(f"{words}: taken from", f"{name}.space", _space(w.loaded, medium.space))
        w.add(f"{words}: flow", f"{name}.flow", medium.flow, Kind.VOLUME_FLOW)
        w.add(f"{words}: relative humidity", f"{name}.relative_humidity", medium.relative_humidity, Kind.RATIO)
    yield from w.take("Heat source and heat sink")


def _compressor(w: _Writer, s: System) -> Iterator[FactGroup]:
    c = s.compressor
    w.add("Type", "compressor.type", c.type)
    w.add("Drive", "compressor.drive", c.drive)
    w.add("Displacement", "compressor.displacement", c.displacement, Kind.VOLUME_FLOW)
    if w.facts and c.displacement is not None:
        last = w.facts[-1]
        w.facts[-1] = Fact(last.label, w.display.text(c.displacement, Kind.VOLUME_FLOW, 2), last.place)
    w.add("Nominal speed", "compressor.nominal_speed", c.nominal_speed, Kind.SPEED)
    w.add("Lowest speed", "compressor.minimum_speed", c.minimum_speed, Kind.SPEED)
    w.add("Highest speed", "compressor.maximum_speed", c.maximum_speed, Kind.SPEED)
    w.add("Volumetric efficiency", "compressor.volumetric_efficiency", c.volumetric_efficiency, Kind.RATIO)
    w.add("Isentropic efficiency", "compressor.isentropic_efficiency", c.isentropic_efficiency, Kind.RATIO)
    w.add("Power factor", "compressor.power_factor", c.power_factor, Kind.NUMBER)
    yield from w.take("Compressor")


def _exchangers(w: _Writer, s: System) -> Iterator[FactGroup]:
    for name, part, words in (("evaporator", s.evaporator, "Evaporator"), ("condenser", s.condenser, "Condenser")):
        w.add("Conductance", f"{name}.conductance", part.conductance, Kind.CONDUCTANCE)
        if part.rating is not None:
            r, path = part.rating, f"{name}.rating"
            w.add("Catalogue capacity", f"{path}.capacity", r.capacity, Kind.POWER)
            w.add("Catalogue temperature difference", f"{path}.temperature_difference", r.temperature_difference,
                  Kind.TEMPERATURE_DIFFERENCE)  # fmt: skip
            w.add("Catalogue air on", f"{path}.air_on", r.air_on, Kind.TEMPERATURE)
            w.add("Catalogue read from", f"{path}.source", r.source)
        w.add("Fan power", f"{name}.fan_power", part.fan_power, Kind.POWER)
        if name == "evaporator" and s.evaporator.defrost is not None:
            d = s.evaporator.defrost
            w.add("Defrost", "evaporator.defrost.method", d.method)
            w.add("Defrost heater", "evaporator.defrost.power", d.power, Kind.POWER)
            w.add("Defrost every", "evaporator.defrost.interval", d.interval, Kind.DURATION)
            w.add("Defrost at most", "evaporator.defrost.longest", d.longest, Kind.DURATION)
            w.add("Defrost ends at", "evaporator.defrost.end_temperature", d.end_temperature, Kind.TEMPERATURE)
        yield from w.take(words)


def _circuit(w: _Writer, s: System) -> Iterator[FactGroup]:
    if s.receiver is not None:
        w.add("Receiver volume", "receiver.volume", s.receiver.volume, Kind.VOLUME)
        w.add("Relief valve set at", "receiver.relief_valve", s.receiver.relief_valve)
    if s.expansion is not None:
        w.add("Expansion device", "expansion.device", s.expansion.device)
        w.add("Superheat held", "expansion.superheat", s.expansion.superheat, Kind.TEMPERATURE_DIFFERENCE)
    yield from w.take("Liquid line and expansion")


def _settings(w: _Writer, s: System) -> Iterator[FactGroup]:
    c = s.controls
    w.add("Room thermostat", "controls.room_temperature", c.room_temperature, Kind.TEMPERATURE)
    w.add("Room differential", "controls.room_differential", c.room_differential, Kind.TEMPERATURE_DIFFERENCE)
    if c.head_pressure is not None:
        w.add("Head pressure held by", "controls.head_pressure.by", c.head_pressure.by)
        w.add("Condensing held at", "controls.head_pressure.hold", c.head_pressure.hold, Kind.TEMPERATURE)
    w.add("High-pressure limit opens at", "controls.high_pressure_limit", c.high_pressure_limit)
    w.add("Low-pressure cut-out", "controls.low_pressure_cut_out", c.low_pressure_cut_out)
    w.add("Low-pressure cut-in", "controls.low_pressure_cut_in", c.low_pressure_cut_in)
    w.add("Discharge temperature limit", "controls.discharge_temperature_limit", c.discharge_temperature_limit,
          Kind.TEMPERATURE)  # fmt: skip
    w.add("Stops by pump-down", "controls.pump_down", c.pump_down or None)
    w.add("Starts in an hour, at most", "controls.starts_per_hour", c.starts_per_hour)
    yield from w.take("Settings")


def system_facts(loaded: LoadedPlant, identity: str, display: Display) -> tuple[FactGroup, ...]:
    """Everything the description says of one system, in groups."""
    system = loaded.system(identity)
    writer = _Writer(loaded, display, identity)
    parts = (_duty, _nameplate, _media, _compressor, _exchangers, _circuit, _settings)
    return tuple(group for part in parts for group in part(writer, system))


@dataclass(frozen=True, slots=True)
class Stated:
    """One thing that the supplier or the contract states: at which condition, what, where it is written."""

    at: str
    values: tuple[tuple[str, str], ...]
    includes: str
    place: str


def rated_points(loaded: LoadedPlant, identity: str, display: Display) -> tuple[Stated, ...]:
    """What the supplier states, of the whole system and of the condensing unit."""
    s = loaded.system(identity)
    quantities = ("cooling_capacity", "heating_capacity", "power_input", "evaporating_temperature",
                  "condensing_temperature")  # fmt: skip
    found = []
    for n, point in enumerate(s.rated_points):
        values = tuple((NOMENCLATURE[q].label, display.of(q, v)) for q in quantities if (v := getattr(point, q)) is not None)
        place = str(loaded.where(("systems", identity, "rated_points", n)))
        found.append(Stated(conditions_text(point, display), values, ", ".join(point.includes or ()), place))
    unit = s.condensing_unit
    for n, row in enumerate(unit.rated_points if unit else ()):
        at = ", ".join(
            f"{NOMENCLATURE[q].label.lower()} {display.of(q, getattr(row, q))}"
            for q in ("evaporating_temperature", "heat_sink_inlet_temperature")
        )
        values = tuple((NOMENCLATURE[q].label, display.of(q, getattr(row, q))) for q in quantities[:1] + quantities[2:3])
        place = str(loaded.where(("systems", identity, "condensing_unit", "rated_points", n)))
        found.append(Stated(f"condensing unit alone: {at}", values, ", ".join((unit and unit.includes) or ()), place))
    return tuple(found)


def guarantees(loaded: LoadedPlant, identity: str, display: Display) -> tuple[Stated, ...]:
    """What the contract promises."""
    found = []
    for n, g in enumerate(loaded.system(identity).guarantee):
        tolerance = ", ".join(
            f"{display.text(v, Kind.RATIO, 1)} {word}"
            for v, word in ((g.tolerance.below, "below"), (g.tolerance.above, "above"))
            if v is not None
        )
        kind = NOMENCLATURE[g.quantity].kind
        values = [
            (NOMENCLATURE[g.quantity].label, display.text(g.value_si, kind)),
            ("Tolerance", tolerance or "none stated"),
            ("Decision", f"{g.decision} acceptance"),
            ("Carried to the day by", g.carried_by),
        ]
        if g.route:
            values.append(("Measured by", g.route))
        place = str(loaded.where(("systems", identity, "guarantee", n)))
        found.append(Stated(conditions_text(g.at, display), tuple(values), "", place))
    return tuple(found)
