"""Numbers as a person reads them: an `Explained` value becomes a row with unit, band and workings."""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from commission.description import Assumption
from commission.quantities import Display, Explained, Input, Kind, methods, pretty
from commission.quantities.bounds import NOT_ABOVE, NOT_BELOW

COVERAGE = 2.0
"""Bands are the expected value plus and minus this many standard uncertainties (about 95 %; JCGM 100, 6.3.3)."""

_ASSUMPTION = re.compile(r"assumption (\S+)")


@dataclass(frozen=True, slots=True)
class ShownInput:
    """One number that went into a calculation; `assumption` is its key where it comes from the assumption list."""

    name: str
    value: str
    origin: str
    assumption: str | None


@dataclass(frozen=True, slots=True)
class How:
    """The workings of a number: method, formula, source, inputs, assumptions, and where its uncertainty comes from."""

    method: str
    name: str
    formula: str
    source: str
    mark: str
    inputs: tuple[ShownInput, ...]
    assumptions: tuple[tuple[str, str], ...]
    parts: tuple[tuple[str, str], ...]
    standard: str | None


@dataclass(frozen=True, slots=True)
class Row:
    """One quantity with its number, unit and band; `because` says why there is no number."""

    key: str
    label: str
    definition: str
    value: str | None
    unit: str
    band: str
    how: How | None
    because: str | None = None


def label_of(key: str, display: Display) -> str:
    """The label of a nomenclature key or of a safety figure, or the words themselves."""
    if key in display.quantities:
        return display.label(key)
    title = _safety_titles().get(key)
    if title is not None:
        return title[0][:1].upper() + title[0][1:]
    return key.replace("_", " ")


def kind_of(explained: Explained, display: Display) -> Kind:
    """The kind of an explained value: of the nomenclature, of a safety figure, else a plain number."""
    if explained.quantity in display.quantities:
        return display.kind(explained.quantity)
    title = _safety_titles().get(explained.quantity)
    return title[1] if title is not None else Kind.NUMBER


def _safety_titles() -> Mapping[str, tuple[str, Kind]]:
    from commission.safety import QUANTITY_TITLES

    return QUANTITY_TITLES


def sourced(source: str, sureness: str) -> str:
    """A source and how sure it is; `common practice` is not said twice."""
    return sureness if sureness.startswith(source) else f"{source} ({sureness})"


def unit_of(display: Display, kind: Kind) -> str:
    """The unit as printed."""
    return pretty(display.unit_and_digits(kind)[0])


_BELOW_ZERO = {
    "superheat": "liquid leaves the evaporator",
    "compressor_superheat": "liquid in the suction line",
    "subcooling": "flash gas in the liquid line",
}
"""What it means where one of these reads less than zero: a machine that does so is not the one that is expected."""


def cut_off(explained: Explained, display: Display) -> str:
    """What lies beyond the end of a band that is shown only as far as it can be; empty where nothing is cut off."""
    band, kind = explained.band(COVERAGE), kind_of(explained, display)
    if band is None:
        return ""
    half = COVERAGE * (explained.uncertainty or 0.0)
    if band[0] > explained.value - half:
        meant = _BELOW_ZERO.get(explained.quantity)
        if meant is not None:
            return f"less than 0 is {meant}"
        ends = f"not below {display.text(band[0], kind)}"
        return f"{ends}: what cools it enters at that" if explained.quantity in NOT_BELOW else ""
    if band[1] < explained.value + half and explained.quantity in NOT_ABOVE:
        return f"not above {display.text(band[1], kind)}: what warms it enters at that"
    return ""


def band_text(display: Display, kind: Kind, band: tuple[float, float] | None) -> str:
    """The band around an expected value, numbers alone: `2.21 to 2.41`, or how small it is."""
    if band is None:
        return "not stated"
    low, high = (display.number(end, kind) for end in band)
    if low == high:
        digits = display.unit_and_digits(kind)[1]
        return f"within {10.0**-digits:.{digits}f}"
    return f"{low} to {high}"


_MOST_DIGITS = 4
"""Behind the point, to show something of a small change."""


def spread_text(display: Display, kind: Kind, value: float) -> str:
    """A signed change of a quantity of `kind`, such as `+0.4 K`."""
    digits = display.unit_and_digits(kind)[1]
    text = display.spread(value, kind, digits)
    while digits < _MOST_DIGITS and value != 0 and float(text.replace("−", "-")) == 0:
        digits += 1
        text = display.spread(value, kind, digits)
    sign = "" if text.startswith("−") else "+"
    return f"{sign}{text} {display.spread_unit(kind)}".rstrip()


def size_text(display: Display, kind: Kind, value: float) -> str:
    """The size of an uncertainty with its unit, with as many digits as it takes to show something."""
    digits = display.unit_and_digits(kind)[1]
    while digits < _MOST_DIGITS and value > 0 and float(display.spread(value, kind, digits)) == 0:
        digits += 1
    return f"{display.spread(value, kind, digits)} {display.spread_unit(kind)}".strip()


VACUUM = 5000.0
"""Pa absolute below which a pressure is a vacuum: nobody reads it on a gauge."""
_SMALL_NUMBER = 0.1


def value_text(value: float, kind: Kind, display: Display) -> str:
    """A value as its reader would say it: a vacuum absolute, a small plain number with its figures."""
    if kind is Kind.PRESSURE and value < VACUUM:
        return f"{value:.0f} Pa absolute"
    return display.text(value, kind, 4 if kind is Kind.NUMBER and 0.0 < abs(value) < _SMALL_NUMBER else None)


def show_input(item: Input, display: Display) -> ShownInput:
    """One input with its unit and origin."""
    match = _ASSUMPTION.match(item.origin)
    kind = display.kind(item.name) if item.name in display.quantities else item.kind
    return ShownInput(
        name=item.name.replace("_", " ") if match else label_of(item.name, display),
        value=value_text(item.value, kind, display),
        origin=item.origin,
        assumption=match.group(1) if match else None,
    )


def show_how(
    explained: Explained,
    display: Display,
    assumptions: Mapping[str, Assumption],
    parts: Mapping[str, float] | None = None,
    kind: Kind | None = None,
) -> How:
    """The workings of an explained number; `kind` for a quantity outside the nomenclature.

    Raises:
        KeyError: the method is not in `methods.yaml` (a fault of the package).
    """
    method = methods()[explained.method]
    kind = kind or kind_of(explained, display)
    own = display.fitting(kind, explained.value)
    ordered = sorted((parts or {}).items(), key=lambda item: -abs(item[1]))
    return How(
        method=method.key,
        name=method.name,
        formula=method.formula,
        source=method.source,
        mark=method.mark,
        inputs=tuple(show_input(i, display) for i in explained.inputs),
        assumptions=tuple(
            (key, assumptions[key].title if key in assumptions else key) for key in explained.assumptions
        ),
        parts=tuple(
            (assumptions[cause].title if cause in assumptions else cause, spread_text(own, kind, size))
            for cause, size in ordered
            if size != 0 and abs(size) >= 0.05 * abs(ordered[0][1])
        ),
        standard=None if explained.uncertainty is None else spread_text(own, kind, explained.uncertainty)[1:],
    )


def show(
    key: str,
    explained: Explained,
    display: Display,
    assumptions: Mapping[str, Assumption],
    parts: Mapping[str, float] | None = None,
) -> Row:
    """The row of an explained number."""
    kind = kind_of(explained, display)
    own = display.fitting(kind, explained.value)
    meant = display.quantities[key].definition if key in display.quantities else ""
    return Row(
        key=key,
        label=label_of(key, display),
        definition="; ".join(t for t in (meant, cut_off(explained, display)) if t),
        value=own.number(explained.value, kind),
        unit=unit_of(own, kind),
        band=band_text(own, kind, explained.band(COVERAGE)),
        how=show_how(explained, display, assumptions, parts),
    )


def not_calculated(key: str, reason: str, display: Display) -> Row:
    """The row of a number that could not be calculated, with the reason."""
    definition = display.quantities[key].definition if key in display.quantities else ""
    return Row(key, label_of(key, display), definition, None, "", "", None, because=reason)


GROUPS: tuple[tuple[str, tuple[str, ...]], ...] = (
    (
        "At the gauges and probes",
        (
            "suction_pressure", "discharge_pressure", "suction_temperature", "discharge_temperature",
            "liquid_temperature", "heat_source_inlet_temperature", "heat_source_outlet_temperature",
            "heat_source_outlet_wet_bulb",
            "heat_sink_inlet_temperature", "heat_sink_outlet_temperature", "gas_cooler_outlet_temperature",
            "heat_source_flow", "heat_sink_flow",
        ),
    ),
    (
        "As engineers think",
        (
            "evaporating_temperature", "evaporator_temperature_difference", "superheat", "compressor_superheat",
            "evaporator_approach", "condensing_temperature", "condenser_temperature_difference", "condenser_approach",
            "subcooling", "gas_cooler_approach",
            "pressure_ratio", "heat_source_temperature_change", "heat_sink_temperature_change",
        ),
    ),
    ("Power and current", ("power_input", "compressor_power", "fan_power", "current")),
    (
        "Heat and efficiency",
        (
            "cooling_capacity", "net_cooling_capacity", "sensible_heat_ratio", "heating_capacity",
            "heating_capacity_with_defrosts", "refrigerant_flow", "cooling_cop", "heating_cop",
            "heating_cop_with_defrosts", "carnot_cop", "running_share",
        ),
    ),
)  # fmt: skip
"""The order in which expected values are shown: what is read, what follows from it, what it costs, what it does."""


def grouped(keys: Sequence[str]) -> tuple[tuple[str, tuple[str, ...]], ...]:
    """`keys` in the groups of `GROUPS`; what no group names comes last."""
    groups = [(title, tuple(k for k in members if k in keys)) for title, members in GROUPS]
    known = {k for _, members in GROUPS for k in members}
    groups.append(("Further values", tuple(k for k in keys if k not in known)))
    return tuple((title, members) for title, members in groups if members)


GRID_KEYS = (
    "suction_pressure", "discharge_pressure", "suction_temperature", "discharge_temperature", "liquid_temperature",
    "evaporating_temperature", "evaporator_temperature_difference", "superheat", "compressor_superheat",
    "evaporator_approach", "condensing_temperature", "condenser_temperature_difference", "condenser_approach",
    "subcooling", "heat_source_outlet_temperature", "heat_source_outlet_wet_bulb", "heat_sink_inlet_temperature",
    "heat_sink_outlet_temperature", "heat_sink_flow", "power_input", "current", "cooling_capacity",
    "heating_capacity", "heating_capacity_with_defrosts", "cooling_cop", "heating_cop", "heating_cop_with_defrosts",
)  # fmt: skip
"""The rows of the table over the weather."""
_NOT_ON_A_SHEET = {
    "evaporating_temperature", "superheat", "condensing_temperature", "heat_sink_inlet_temperature", "heat_sink_flow",
}  # fmt: skip
SHEET_KEYS = tuple(k for k in GRID_KEYS[: GRID_KEYS.index("current") + 1] if k not in _NOT_ON_A_SHEET)
"""Expectations that are printed on a sheet, where they can be read; a frozen sheet holds all of them."""
