"""Each factor of the table of units against pint, an independent units library (its registry follows NIST SP 811).

What pint calls a unit is said here, since pint reads `24 bar g` as bar-gram and `400 cfm` as centi-femtometre.
"""

import pint
import pytest

from commission.quantities import SI_UNIT, UNITS, Kind, Reference, Unit

PINT_NAME = {
    "°C": "degC", "°F": "degF", "K": "delta_degC", "°F difference": "delta_degF",
    "micron": "1e-3 * mmHg", "Torr": "torr", "inHg a": "25.4 * mmHg", "inHg vacuum": "-25.4 * mmHg", "mmHg a": "mmHg",
    "mmHg": "mmHg", "inHg": "25.4 * mmHg", "kgf/cm2": "kgf / cm**2",
    "mm w.g.": "kgf / m**2", "m w.g.": "1000 * kgf / m**2", "in w.g.": "25.4 * kgf / m**2",
    "ft w.g.": "304.8 * kgf / m**2",
    "Btu/h": "Btu_it / hour", "MBH": "1000 * Btu_it / hour", "MMBtu/h": "1e6 * Btu_it / hour",
    "refrigeration tons": "12000 * Btu_it / hour", "kcal/h": "cal_it * 1000 / hour",
    "hp": "horsepower", "Btu": "Btu_it",
    "lb": "pound", "oz": "ounce", "US gal": "US_liquid_gallon", "in": "inch", "ft": "foot",
    "m2": "m**2", "ft2": "foot**2", "m3": "m**3", "ft3": "foot**3",
    "m3/h": "m**3 / hour", "m3/s": "m**3 / s", "m3/min": "m**3 / minute", "L/s": "liter / s", "L/min": "liter / minute",
    "L/h": "liter / hour", "cfm": "foot**3 / minute", "gpm": "US_liquid_gallon / minute",
    "kg/h": "kg / hour", "kg/min": "kg / minute", "lb/h": "pound / hour", "lb/min": "pound / minute",
    "W/K": "W / delta_degC", "kW/K": "kW / delta_degC", "Btu/h °F": "Btu_it / hour / delta_degF",
    "A": "ampere", "mA": "milliampere", "V": "volt", "kV": "kilovolt",
    "rpm": "1 / minute", "Hz": "1 / s", "m/s": "m / s", "fpm": "foot / minute",
    "min": "minute", "h": "hour", "d": "day", "weeks": "week", "%": "0.01",
    "kg/m3": "kg / m**3", "g/m3": "g / m**3", "lb/ft3": "pound / foot**3",
    "kJ/kg": "kJ / kg", "Btu/lb": "Btu_it / pound",
}  # fmt: skip
"""Where pint's word differs from ours."""

PINT_SI = {
    "m3": "m**3",
    "m2": "m**2",
    "m3/s": "m**3 / s",
    "kg/m3": "kg / m**3",
    "1": "dimensionless",
    "W/K": "W / delta_degC",
}


@pytest.fixture(scope="module")
def registry() -> pint.UnitRegistry:
    """One registry, since reading its definitions takes half a second."""
    return pint.UnitRegistry(autoconvert_offset_to_baseunit=True)


def pint_name(unit: Unit) -> str:
    """What pint calls a unit of the table."""
    if unit.name in PINT_NAME:
        return PINT_NAME[unit.name]
    if unit.kind is Kind.PRESSURE:
        bare = unit.name.removesuffix("a").removesuffix("g").strip()
        return PINT_NAME.get(bare, bare)
    return unit.name


def si_name(kind: Kind) -> str:
    """What pint calls the SI unit of a kind."""
    if kind is Kind.TEMPERATURE_DIFFERENCE:
        return "delta_degC"
    return PINT_SI.get(SI_UNIT[kind], SI_UNIT[kind])


@pytest.mark.parametrize(
    "unit", [u for u in UNITS if u.kind is not Kind.SOUND_LEVEL], ids=lambda u: f"{u.kind}-{u.name}"
)
def test_factor_and_offset_agree_with_pint(unit: Unit, registry: pint.UnitRegistry) -> None:
    """Two points of the straight line from number to SI agree with pint to nine digits."""
    name = pint_name(unit)
    for number in (0.0, 7.0):
        plain = unit.name in ("°C", "°F", "K", "°F difference")
        quantity = registry.Quantity(number, name) if plain else number * registry.parse_expression(name)
        if not hasattr(quantity, "to"):
            quantity = registry.Quantity(quantity, "dimensionless")
        assert unit.factor * number + unit.offset == pytest.approx(quantity.to(si_name(unit.kind)).magnitude, rel=1e-9)


def test_the_table_has_the_spellings_people_write() -> None:
    """There are at least fifty units and well over a hundred spellings, and no unit of unknown kind."""
    assert len(UNITS) >= 50
    assert sum(1 + len(u.spellings) for u in UNITS) >= 150
    assert {u.kind for u in UNITS} == set(Kind) - {Kind.NUMBER}


def test_only_pressures_have_a_reference() -> None:
    """Gauge or absolute is said of pressures, of each of them, and of nothing else."""
    for unit in UNITS:
        assert (unit.reference is not None) is (unit.kind is Kind.PRESSURE)
        if unit.reference is Reference.GAUGE and unit.name != "inHg vacuum":
            assert unit.name.endswith("g")
