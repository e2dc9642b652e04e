"""The table of unit spellings: kind, factor and offset to SI, and whether a pressure is gauge or absolute.

`SI value = factor * number + offset`. The factors are exact by definition (BIPM SI brochure 2019; NIST SP 811, 2008,
appendix B: international inch, pound, international-table Btu, conventional millimetre of mercury and of water);
tests compare each with an independent units library.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum

from commission.quantities.kinds import Kind


class Reference(StrEnum):
    """What a pressure is counted from."""

    GAUGE = "gauge"
    ABSOLUTE = "absolute"


@dataclass(frozen=True, slots=True)
class Unit:
    """One unit: its canonical spelling, kind, factor and offset to SI, pressure reference and other spellings."""

    name: str
    kind: Kind
    factor: float
    offset: float = 0.0
    reference: Reference | None = None
    spellings: tuple[str, ...] = ()


INCH = 0.0254
FOOT = 0.3048
POUND = 0.45359237
G_N = 9.80665
PSI = POUND * G_N / INCH**2
BTU = 1055.05585262
US_GALLON = 231 * INCH**3
MM_HG = 133.322387415
MM_WATER = 9.80665
FAHRENHEIT = 5 / 9
HORSEPOWER = 550 * FOOT * POUND * G_N

K = Kind
_PRESSURES: tuple[tuple[str, float, tuple[str, ...]], ...] = (
    ("bar", 1e5, ()),
    ("mbar", 1e2, ()),
    ("hPa", 1e2, ()),
    ("kPa", 1e3, ()),
    ("MPa", 1e6, ()),
    ("Pa", 1.0, ()),
    ("kgf/cm2", G_N * 1e4, ("kg/cm2", "kp/cm2")),
    ("psi", PSI, ()),
)


def _pressure_units() -> list[Unit]:
    units = []
    for name, factor, same in _PRESSURES:
        for letter, reference, words in (
            ("g", Reference.GAUGE, ("gauge", "ga")),
            ("a", Reference.ABSOLUTE, ("abs", "absolute")),
        ):
            canonical = f"{name}{letter}" if name == "psi" else f"{name} {letter}"
            others = []
            for spelled in (name, *same):
                others += [f"{spelled}{letter}", f"{spelled}({letter})", f"{spelled} {letter}"]
                others += [form for word in words for form in (f"{spelled} {word}", f"{spelled}({word})")]
            if name in ("bar", "psi"):
                others.append(f"{name}{letter}".upper())
            units.append(
                Unit(canonical, K.PRESSURE, factor, 0.0, reference, tuple(o for o in others if o != canonical))
            )
    return units


def _watts(kind: Kind) -> list[Unit]:
    """Units in which both electric power and heat are written; Btu, calories and tons are of heat alone."""
    return [
        Unit("W", kind, 1.0, 0.0, None, ("watt", "watts")),
        Unit("kW", kind, 1e3, 0.0, None, ("KW",)),
        Unit("MW", kind, 1e6),
        Unit("hp", kind, HORSEPOWER, 0.0, None, ("HP", "bhp")),
    ]


def _flows(kind: Kind) -> list[Unit]:
    """Units of volume flow, of air and of liquids: which unit a flow is written in is the writer's choice."""
    return [
        Unit("m3/h", kind, 1 / 3600, 0.0, None, ("m³/h", "m^3/h", "cmh", "m3/hr", "m³/hr")),
        Unit("m3/s", kind, 1.0, 0.0, None, ("m³/s", "m^3/s")),
        Unit("m3/min", kind, 1 / 60, 0.0, None, ("m³/min", "m^3/min")),
        Unit("L/s", kind, 1e-3, 0.0, None, ("l/s", "lps")),
        Unit("L/min", kind, 1e-3 / 60, 0.0, None, ("l/min", "lpm")),
        Unit("L/h", kind, 1e-3 / 3600, 0.0, None, ("l/h", "lph")),
        Unit("cfm", kind, FOOT**3 / 60, 0.0, None, ("CFM", "ft3/min", "ft³/min")),
        Unit("gpm", kind, US_GALLON / 60, 0.0, None, ("GPM", "US gpm", "gal/min")),
    ]


UNITS: tuple[Unit, ...] = (
    Unit("°C", K.TEMPERATURE, 1.0, 273.15, None, ("C", "degC", "deg. C", "℃", "Celsius", "celsius", "degrees Celsius")),
    Unit(
        "°F",
        K.TEMPERATURE,
        FAHRENHEIT,
        459.67 * FAHRENHEIT,
        None,
        ("F", "degF", "deg. F", "℉", "Fahrenheit", "fahrenheit", "degrees Fahrenheit"),
    ),
    Unit(
        "K",
        K.TEMPERATURE_DIFFERENCE,
        1.0,
        0.0,
        None,
        ("Δ°C", "delta °C", "°C difference", "kelvin", "ΔK", "delta K", "K difference", "°K"),
    ),
    Unit(
        "°F difference",
        K.TEMPERATURE_DIFFERENCE,
        FAHRENHEIT,
        0.0,
        None,
        ("Δ°F", "ΔF", "delta °F", "delta F", "°R", "degF difference", "F difference", "°F diff"),
    ),
    *_pressure_units(),
    Unit("micron", K.PRESSURE, MM_HG * 1e-3, 0.0, Reference.ABSOLUTE, ("microns", "µm Hg", "micron Hg")),
    Unit("Torr", K.PRESSURE, 101325 / 760, 0.0, Reference.ABSOLUTE, ("torr",)),
    Unit("inHg a", K.PRESSURE, MM_HG * 25.4, 0.0, Reference.ABSOLUTE, ("in Hg abs", "in. Hg a", "in. Hg abs")),
    Unit(
        "inHg vacuum",
        K.PRESSURE,
        -MM_HG * 25.4,
        0.0,
        Reference.GAUGE,
        ("in Hg vac", "inHg vac", "in. Hg vacuum", "in. Hg vac"),
    ),
    Unit("mmHg a", K.PRESSURE, MM_HG, 0.0, Reference.ABSOLUTE, ("mm Hg abs",)),
    Unit("Pa", K.PRESSURE_DIFFERENCE, 1.0),
    Unit("hPa", K.PRESSURE_DIFFERENCE, 1e2),
    Unit("mbar", K.PRESSURE_DIFFERENCE, 1e2),
    Unit("kPa", K.PRESSURE_DIFFERENCE, 1e3),
    Unit("bar", K.PRESSURE_DIFFERENCE, 1e5),
    Unit("psi", K.PRESSURE_DIFFERENCE, PSI),
    Unit("MPa", K.PRESSURE_DIFFERENCE, 1e6),
    Unit("kgf/cm2", K.PRESSURE_DIFFERENCE, G_N * 1e4, 0.0, None, ("kg/cm2", "kp/cm2")),
    Unit("micron", K.PRESSURE_DIFFERENCE, MM_HG * 1e-3, 0.0, None, ("microns", "µm Hg", "micron Hg")),
    Unit("Torr", K.PRESSURE_DIFFERENCE, 101325 / 760, 0.0, None, ("torr",)),
    Unit("mmHg", K.PRESSURE_DIFFERENCE, MM_HG, 0.0, None, ("mm Hg",)),
    Unit("inHg", K.PRESSURE_DIFFERENCE, MM_HG * 25.4, 0.0, None, ("in Hg", "in. Hg")),
    Unit("mm w.g.", K.PRESSURE_DIFFERENCE, MM_WATER, 0.0, None, ("mmH2O", "mm wg", "mm w.c.", "mm H2O")),
    Unit("m w.g.", K.PRESSURE_DIFFERENCE, MM_WATER * 1e3, 0.0, None, ("m wg", "mH2O", "m H2O")),
    Unit(
        "in w.g.",
        K.PRESSURE_DIFFERENCE,
        MM_WATER * 25.4,
        0.0,
        None,
        ("inH2O", "in wg", "in. w.g.", "in w.c.", "in. w.c.", "in wc", "in. wg", "in. wc", "inwg", "inwc"),
    ),
    Unit("ft w.g.", K.PRESSURE_DIFFERENCE, MM_WATER * 304.8, 0.0, None, ("ft wg", "ftH2O", "ft H2O", "ft w.c.")),
    *_watts(K.POWER),
    *_watts(K.HEAT_FLOW),
    Unit("Btu/h", K.HEAT_FLOW, BTU / 3600, 0.0, None, ("BTU/h", "Btuh", "BTUH", "Btu/hr", "BTU/hr")),
    Unit("MBH", K.HEAT_FLOW, BTU / 3.6, 0.0, None, ("kBtu/h", "kBtu/hr", "kBtuh")),
    Unit(
        "refrigeration tons",
        K.HEAT_FLOW,
        12000 * BTU / 3600,
        0.0,
        None,
        ("refrigeration ton", "tons of refrigeration", "ton of refrigeration", "TR", "tons refrigeration"),
    ),
    Unit("MMBtu/h", K.HEAT_FLOW, BTU / 3.6e-3, 0.0, None, ("MMBtu/hr", "MMBTU/h", "MMBtuh")),
    Unit("kcal/h", K.HEAT_FLOW, 4186.8 / 3600),
    Unit("J", K.ENERGY, 1.0),
    Unit("kJ", K.ENERGY, 1e3),
    Unit("MJ", K.ENERGY, 1e6),
    Unit("Wh", K.ENERGY, 3.6e3),
    Unit("kWh", K.ENERGY, 3.6e6),
    Unit("MWh", K.ENERGY, 3.6e9),
    Unit("Btu", K.ENERGY, BTU, 0.0, None, ("BTU",)),
    Unit("kg", K.MASS, 1.0),
    Unit("g", K.MASS, 1e-3, 0.0, None, ("gram", "grams")),
    Unit("lb", K.MASS, POUND, 0.0, None, ("lbs", "lbm", "pounds")),
    Unit("oz", K.MASS, POUND / 16, 0.0, None, ("ounces",)),
    Unit("L", K.VOLUME, 1e-3, 0.0, None, ("l", "litre", "litres", "liter", "liters", "dm3", "dm³")),
    Unit("m3", K.VOLUME, 1.0, 0.0, None, ("m³", "m^3")),
    Unit("mL", K.VOLUME, 1e-6, 0.0, None, ("ml", "cm3", "cm³", "cc")),
    Unit("US gal", K.VOLUME, US_GALLON, 0.0, None, ("gal", "gallons", "US gallons")),
    Unit("ft3", K.VOLUME, FOOT**3, 0.0, None, ("ft³", "ft^3", "cu ft", "cuft")),
    Unit("m", K.LENGTH, 1.0),
    Unit("cm", K.LENGTH, 1e-2),
    Unit("mm", K.LENGTH, 1e-3),
    Unit("km", K.LENGTH, 1e3),
    Unit("ft", K.LENGTH, FOOT, 0.0, None, ("feet", "foot")),
    Unit("in", K.LENGTH, INCH, 0.0, None, ("inch", "inches", "in.", '"')),
    Unit("m2", K.AREA, 1.0, 0.0, None, ("m²", "m^2", "sq m")),
    Unit("ft2", K.AREA, FOOT**2, 0.0, None, ("ft²", "ft^2", "sq ft", "sqft")),
    *_flows(K.VOLUME_FLOW),
    *_flows(K.LIQUID_FLOW),
    Unit("kg/s", K.MASS_FLOW, 1.0),
    Unit("g/s", K.MASS_FLOW, 1e-3),
    Unit("kg/h", K.MASS_FLOW, 1 / 3600, 0.0, None, ("kg/hr",)),
    Unit("lb/h", K.MASS_FLOW, POUND / 3600, 0.0, None, ("lb/hr", "lbs/h")),
    Unit("kg/min", K.MASS_FLOW, 1 / 60),
    Unit("lb/min", K.MASS_FLOW, POUND / 60),
    Unit("W/K", K.CONDUCTANCE, 1.0),
    Unit("kW/K", K.CONDUCTANCE, 1e3),
    Unit("Btu/h °F", K.CONDUCTANCE, BTU / 3600 / FAHRENHEIT, 0.0, None, ("Btu/(h °F)", "Btu/h/°F", "Btu/(h·°F)")),
    Unit("A", K.CURRENT, 1.0, 0.0, None, ("amp", "amps")),
    Unit("mA", K.CURRENT, 1e-3),
    Unit("V", K.VOLTAGE, 1.0, 0.0, None, ("volt", "volts")),
    Unit("kV", K.VOLTAGE, 1e3),
    Unit("rpm", K.SPEED, 1 / 60, 0.0, None, ("1/min", "min-1", "r/min", "RPM", "rev/min")),
    Unit("Hz", K.SPEED, 1.0, 0.0, None, ("1/s", "rps", "rev/s")),
    Unit("m/s", K.VELOCITY, 1.0),
    Unit("fpm", K.VELOCITY, FOOT / 60, 0.0, None, ("ft/min",)),
    Unit("s", K.DURATION, 1.0, 0.0, None, ("sec", "second", "seconds")),
    Unit("min", K.DURATION, 60.0, 0.0, None, ("mins", "minute", "minutes")),
    Unit("h", K.DURATION, 3600.0, 0.0, None, ("hr", "hrs", "hour", "hours")),
    Unit("d", K.DURATION, 86400.0, 0.0, None, ("day", "days")),
    Unit("weeks", K.DURATION, 604800.0, 0.0, None, ("week",)),
    Unit("%", K.RATIO, 1e-2, 0.0, None, ("percent", "% RH", "% rh", "per cent")),
    Unit("kg/m3", K.DENSITY, 1.0, 0.0, None, ("kg/m³",)),
    Unit("g/m3", K.DENSITY, 1e-3, 0.0, None, ("g/m³",)),
    Unit("lb/ft3", K.DENSITY, POUND / FOOT**3, 0.0, None, ("lb/ft³",)),
    Unit("kJ/kg", K.SPECIFIC_ENTHALPY, 1e3),
    Unit("Btu/lb", K.SPECIFIC_ENTHALPY, BTU / POUND),
    Unit("dB(A)", K.SOUND_LEVEL, 1.0, 0.0, None, ("dBA", "dB A")),
)


_ONE_SIGN = str.maketrans({"º": "°", "˚": "°", "μ": "µ", "∆": "Δ", "·": "", "⋅": ""})


def _squeeze(spelling: str) -> str:
    """A spelling without spaces and middle dots and with one sign for each meaning: `bar  g` and `bar g` are one."""
    return "".join(spelling.split()).translate(_ONE_SIGN)


def units_of(kind: Kind) -> tuple[Unit, ...]:
    """All units of one kind, in the order of the table."""
    return tuple(u for u in UNITS if u.kind is kind)


def _by_spelling() -> dict[tuple[Kind, str], Unit]:
    table: dict[tuple[Kind, str], Unit] = {}
    for unit in UNITS:
        for spelling in (unit.name, *unit.spellings):
            key = (unit.kind, _squeeze(spelling))
            if table.get(key, unit) is not unit:
                raise ValueError(f"{spelling!r} stands for two units of {unit.kind}")
            table[key] = unit
    return table


_TABLE = _by_spelling()


def find_unit(spelling: str, kind: Kind) -> Unit | None:
    """The unit of `kind` written so, or None. Case counts, since mW is not MW."""
    return _TABLE.get((kind, _squeeze(spelling)))


def kinds_of(spelling: str) -> tuple[Kind, ...]:
    """The kinds in which this spelling is a unit, to say what was written where another kind was wanted."""
    wanted = _squeeze(spelling)
    return tuple(kind for (kind, text) in _TABLE if text == wanted)


def known_spellings(kind: Kind) -> tuple[str, ...]:
    """Every spelling of the units of one kind."""
    return tuple(s for u in units_of(kind) for s in (u.name, *u.spellings))
