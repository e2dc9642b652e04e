"""Which instrument of the plant will read a quantity, where the description does not say it."""

from __future__ import annotations

from collections.abc import Iterator, Mapping

from commission.acceptance.instruments import instrument_budget
from commission.description.model import Instrument, System
from commission.errors import NotCalculatedError
from commission.quantities import NOMENCLATURE, Kind, Reference

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
FROM_PRESSURES = (
    "evaporating_temperature",
    "mean_evaporating_temperature",
    "condensing_temperature",
    "superheat",
    "compressor_superheat",
    "subcooling",
    "pressure_ratio",
    "evaporator_temperature_difference",
    "condenser_temperature_difference",
    "evaporator_approach",
    "condenser_approach",
)
"""Readings that are worked out from a gauge."""
NO_PORTS = "the unit is factory sealed and has no ports for gauges"


def cannot_be_read(key: str, system: System) -> str | None:
    """Why nobody can read a quantity of this system, whatever instruments there are; None where it can be read.

    A factory-sealed unit has no ports for gauges, and fitting some would end its seal. Where `measured_with` names an
    instrument for a pressure, the unit has one of its own.
    """
    if not system.sealed or any(p in system.measured_with for p in PRESSURES) or key in system.measured_with:
        return None
    if key in PRESSURES:
        return NO_PORTS
    return f"it follows from a pressure, and {NO_PORTS}" if key in FROM_PRESSURES else None


def choose_instrument(
    key: str, value: float, instruments: Mapping[str, Instrument], measured_with: Mapping[str, str], barometric: float
) -> str | None:
    """Id of the instrument for a quantity expected at `value` (SI): as named in `measured_with`, or else the best fit.

    Best: it measures this kind of quantity, its scale holds the value, a clamped-on probe for pipes and a free one for
    media, and of those the one with the smallest uncertainty there. None where no instrument fits.
    """
    if key in measured_with:
        return measured_with[key]
    if key not in DIRECT:
        return None
    fits = list(_fits(key, value, instruments, barometric))
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
