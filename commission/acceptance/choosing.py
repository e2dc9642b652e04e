"""Which instrument of the plant will read a quantity, where the description does not say it."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import TYPE_CHECKING

from commission.acceptance.instruments import instrument_budget
from commission.description.model import Instrument, System
from commission.errors import NotCalculatedError
from commission.quantities import NOMENCLATURE, Kind, Reference

if TYPE_CHECKING:
    from commission.description import LoadedPlant

PIPE_TEMPERATURES = ("suction_temperature", "discharge_temperature", "liquid_temperature")
DIRECT = (
    *PIPE_TEMPERATURES,
    *(
        f"heat_{side}_{what}"
        for side in ("source", "sink")
        for what in ("inlet_temperature", "outlet_temperature", "wet_bulb", "relative_humidity", "flow")
    ),
    "heat_source_outlet_wet_bulb",
    "suction_pressure",
    "discharge_pressure",
    "power_input",
    "current",
    "voltage",
    "compressor_speed",
    "barometric_pressure",
)
"""Quantities that one instrument shows by itself; all others are made of these, or need `measured_with` to say how."""


PRESSURES = ("suction_pressure", "discharge_pressure")
IN_THE_CASING = (*PIPE_TEMPERATURES, "gas_cooler_outlet_temperature")
"""Pipes that a factory-sealed unit keeps behind its casing."""
FOLLOWS_FROM = {
    "evaporating_temperature": ("suction_pressure",),
    "mean_evaporating_temperature": ("suction_pressure",),
    "condensing_temperature": ("discharge_pressure",),
    "superheat": ("suction_pressure", "suction_temperature"),
    "compressor_superheat": ("suction_pressure", "suction_temperature"),
    "subcooling": ("discharge_pressure", "liquid_temperature"),
    "pressure_ratio": PRESSURES,
    "evaporator_temperature_difference": ("suction_pressure",),
    "condenser_temperature_difference": ("discharge_pressure",),
    "evaporator_approach": ("suction_pressure",),
    "condenser_approach": ("discharge_pressure",),
    "gas_cooler_approach": ("gas_cooler_outlet_temperature",),
}
"""What is worked out, and from which gauges and pipe probes."""
NO_PORTS = "the unit is factory sealed and has no ports for gauges"
SHUT = "the unit is factory sealed, and its pipes lie in a casing that stays shut"
NO_HOOD = (
    "this air passes no duct or grille that an instrument could take; if it does, `measured_with` names the instrument"
)


def cannot_be_read(key: str, system: System) -> str | None:
    """Why nobody can read a quantity of this system, whatever instruments there are; None where it can be read.

    A factory-sealed unit has no ports for gauges, and fitting some would end its seal; its pipes lie in a casing that
    stays shut. The air of an open coil (outdoors, or in the room itself) goes through no hood; that of a fan which
    works against ducts does. Where `measured_with` names an instrument, it can be read.
    """
    if key in system.measured_with:
        return None
    if key in ("heat_source_flow", "heat_sink_flow"):
        side = system.heat_source if key == "heat_source_flow" else system.heat_sink
        return NO_HOOD if side.medium == "air" and side.external_pressure is None else None
    if not system.sealed:
        return None
    if key in (*PRESSURES, *IN_THE_CASING):
        return NO_PORTS if key in PRESSURES else SHUT
    reasons = (cannot_be_read(k, system) for k in FOLLOWS_FROM.get(key, ()))
    reason = next((r for r in reasons if r), None)
    if reason is None:
        return None
    return f"it follows from a {'pressure' if reason == NO_PORTS else 'pipe temperature'}, and {reason}"


def choose_instrument(key: str, value: float, loaded: LoadedPlant, system: System) -> str | None:
    """Id of the instrument for a quantity expected at `value` (SI): as named in `measured_with`, or else the best fit.

    Best: it measures this kind of quantity, its scale holds the value, a clamped-on probe for pipes and a free one for
    media, and of those the one with the smallest uncertainty there. None where no instrument fits, or nobody can read
    this quantity.
    """
    if key in system.measured_with:
        return system.measured_with[key]
    if key not in DIRECT or cannot_be_read(key, system) is not None:
        return None
    fits = list(_fits(key, value, loaded.plant.instruments, loaded.barometric_pressure))
    return min(fits)[2] if fits else None


def _fits(
    key: str, value: float, instruments: Mapping[str, Instrument], barometric: float
) -> Iterator[tuple[bool, float, str]]:
    pipe = key in PIPE_TEMPERATURES
    for name, instrument in instruments.items():
        resolved = instrument.resolved
        if resolved.kind is not NOMENCLATURE[key].kind or instrument.measures == "vacuum":
            continue
        counted = value - barometric if resolved.reference is Reference.GAUGE else value
        low, high = resolved.range_low, resolved.range_high
        if low is not None and high is not None and not low <= counted <= high:
            continue
        try:
            standard = instrument_budget(instrument, key, value, barometric, name=name).standard
        except NotCalculatedError:
            continue
        wrong_place = resolved.kind is Kind.TEMPERATURE and instrument.clamped_on != pipe
        yield wrong_place, standard, name
