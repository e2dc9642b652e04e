"""Numbers are shown in the reader's units, and read back to what they were."""

import re
from typing import get_args

import pytest
from hypothesis import given
from hypothesis import strategies as st

from commission.quantities import (
    NOMENCLATURE,
    SI_UNIT,
    Display,
    Kind,
    MediumName,
    json_value,
    nomenclature,
    parse,
    parse_pressure,
)
from commission.quantities.display import UnitSystem

BAROMETER = 97_656.0
UNIT_SYSTEMS: tuple[UnitSystem, ...] = get_args(UnitSystem)
SHOWN = {"m³": "m3", "m²": "m2", "ft³": "ft3", "ft²": "ft2"}


@pytest.mark.parametrize(
    ("system", "kind", "value", "text"),
    [
        ("metric", Kind.TEMPERATURE, 265.15, "−8.0 °C"),
        ("us_customary", Kind.TEMPERATURE, 263.15, "14.0 °F"),
        ("metric", Kind.PRESSURE, 331_000.0, "2.33 bar g"),
        ("us_customary", Kind.PRESSURE, BAROMETER, "0.0 psig"),
        ("metric", Kind.POWER, 3_450.0, "3.45 kW"),
        ("metric", Kind.HEAT_FLOW, 3_450.0, "3.45 kW"),
        ("us_customary", Kind.HEAT_FLOW, 3_450.0, "11.8 kBtu/h"),
        ("metric", Kind.VOLUME_FLOW, 0.5, "1800 m³/h"),
        ("metric", Kind.RATIO, 0.85, "85 %"),
        ("metric", Kind.NUMBER, 3.456, "3.46"),
        ("metric", Kind.TEMPERATURE_DIFFERENCE, -0.04, "0.0 K"),
        ("us_customary", Kind.TEMPERATURE_DIFFERENCE, 6.0, "10.8 °F difference"),
    ],
)
def test_text(system: UnitSystem, kind: Kind, value: float, text: str) -> None:
    """Number, unit, true minus sign, no negative zero; pressures say gauge."""
    assert Display(system, BAROMETER).text(value, kind) == text


@given(
    value=st.floats(min_value=200.0, max_value=2e6),
    kind=st.sampled_from([k for k in Kind if k is not Kind.SOUND_LEVEL]),
    system=st.sampled_from(UNIT_SYSTEMS),
)
def test_what_is_shown_reads_back(value: float, kind: Kind, system: UnitSystem) -> None:
    """Shown with many digits and read again, a value of any kind is what it was, in both unit systems."""
    display = Display(system, BAROMETER)
    text = display.text(value, kind, digits=13)
    for shown, written in SHOWN.items():
        text = text.replace(shown, written)
    again = parse_pressure(text).absolute(BAROMETER) if kind is Kind.PRESSURE else parse(text, kind)
    assert again == pytest.approx(value, rel=1e-6)


def test_every_kind_can_be_shown_with_its_spread() -> None:
    """No kind lacks a unit in either system; the spread of a temperature is in K or °F difference."""
    for system in UNIT_SYSTEMS:
        display = Display(system, BAROMETER)
        for kind in Kind:
            assert display.text(300.0, kind)
            assert display.spread(1.0, kind)
            assert display.spread_unit(kind) or kind is Kind.NUMBER
    assert Display("metric", BAROMETER).spread_unit(Kind.TEMPERATURE) == "K"
    assert Display("us_customary", BAROMETER).spread(5.0, Kind.TEMPERATURE) == "9.0"
    assert Display("metric", BAROMETER).spread_unit(Kind.PRESSURE) == "bar"


def test_json_speaks_celsius_and_absolute_pascal() -> None:
    """Machine output is °C for temperatures and SI for the rest."""
    assert json_value(265.15, Kind.TEMPERATURE) == (pytest.approx(-8.0), "°C")
    assert json_value(3e5, Kind.PRESSURE) == (3e5, "Pa")
    for kind in Kind:
        assert json_value(1.0, kind)[1] == ("°C" if kind is Kind.TEMPERATURE else SI_UNIT[kind])


def test_every_quantity_of_the_nomenclature_says_what_it_means() -> None:
    """Keys are words with underscores; each has a symbol, a label and a definition of its own."""
    definitions = [q.definition for q in NOMENCLATURE.values() if "unbalance" not in q.key]
    assert len(definitions) == len(set(definitions))
    for key, quantity in NOMENCLATURE.items():
        assert quantity.key == key
        assert key == key.lower()
        assert key.replace("_", "").isalpha()
        assert quantity.symbol
        assert quantity.label[0].isupper()
        assert len(quantity.definition) > 10
        assert Display("metric", BAROMETER).of(key, 300.0)


def test_a_small_volume_flow_keeps_its_figures() -> None:
    """Water at 127 L/h is not shown as 0 m³/h, nor its uncertainty; air by the thousand keeps whole numbers."""
    display = Display("metric", 101325.0)
    assert display.number(127e-3 / 3600, Kind.VOLUME_FLOW) == "0.127"
    assert display.spread(3e-3 / 3600, Kind.VOLUME_FLOW) == "0.003"
    assert display.text(4200 / 3600, Kind.VOLUME_FLOW) == "4200 m³/h"
    assert display.spread(40 / 3600, Kind.VOLUME_FLOW) == "40"


def test_names_of_media_stand_in_every_label_and_definition() -> None:
    """The table of one system calls its media by name, keeps keys, and its words keep their abbreviations."""
    named = nomenclature(MediumName("room air"), MediumName("condenser water", liquid=True))
    assert list(named) == list(NOMENCLATURE)
    for quantity in named.values():
        assert not re.search(r"heat (source|sink)|the s(ource|ink)", f"{quantity.label} {quantity.definition}")
    display = Display("us_customary", BAROMETER, named)
    assert display.label("evaporator_temperature_difference") == "Room air inlet minus evaporating"
    assert display.words("heating_capacity") == "heat to the condenser water"
    assert display.words("cooling_cop") == "COP of cooling"
    assert display.words("carnot_cop") == "Carnot COP between mean media"
    assert display.short("heat_source_inlet_temperature") == "Room air"
    assert display.short("heat_sink_outlet_temperature") == "Condenser water outlet"
    assert display.medium("heat_sink") == "Condenser water"


def test_a_liquid_flows_in_gallons_where_air_flows_in_cubic_feet() -> None:
    """24.2 gpm of water is not shown as 3.24 cfm; 1 US gallon is 231 cubic inches, 1 cfm is 7.48 gpm."""
    named = nomenclature(MediumName("chilled water", liquid=True), MediumName("outdoor air"))
    display = Display("us_customary", BAROMETER, named)
    flow = parse("24.2 gpm", Kind.VOLUME_FLOW)
    assert display.of("heat_source_flow", flow) == "24.2 gpm"
    assert display.of("heat_sink_flow", flow) == "3.24 cfm"
    assert Display("metric", BAROMETER, named).of("heat_source_flow", flow) == "5.50 m³/h"
    assert parse("24.2 gpm", Kind.LIQUID_FLOW) == flow


@pytest.mark.parametrize(
    ("kind", "value", "text"),
    [
        (Kind.POWER, 110.0, "110 W"),
        (Kind.HEAT_FLOW, 380.0, "380 W"),
        (Kind.POWER, 500.0, "0.50 kW"),
        (Kind.POWER, 0.0, "0.00 kW"),
        (Kind.PRESSURE_DIFFERENCE, 40.0, "40 Pa"),
        (Kind.PRESSURE_DIFFERENCE, 3.4e3, "0.034 bar"),
        (Kind.PRESSURE_DIFFERENCE, -2.5e5, "−2.50 bar"),
        (Kind.VOLUME_FLOW, 60e-3 / 3600, "60 L/h"),
        (Kind.VOLUME_FLOW, 1.55 / 3600, "1.55 m³/h"),
        (Kind.MASS, 0.053, "53 g"),
        (Kind.MASS, 0.45, "0.45 kg"),
        (Kind.DENSITY, 0.0095, "9.5 g/m³"),
        (Kind.DENSITY, 1.2, "1.200 kg/m³"),
        (Kind.VOLUME, 67.2, "67.2 m³"),
        (Kind.DURATION, 45.0, "45 s"),
        (Kind.DURATION, 180.0, "3 min"),
        (Kind.DURATION, 150.0, "2.5 min"),
        (Kind.DURATION, 86400.0, "24 h"),
        (Kind.DURATION, 427 * 60.0, "7.1 h"),
        (Kind.DURATION, 14 * 86400.0, "14 days"),
        (Kind.LENGTH, 0.028, "28 mm"),
        (Kind.RATIO, 0.006, "0.6 %"),
        (Kind.RATIO, 0.05, "5 %"),
    ],
)
def test_a_value_that_stands_with_its_unit_takes_the_one_that_fits_its_size(
    kind: Kind, value: float, text: str
) -> None:
    """What people on site say of small and long things; nothing at all keeps the usual unit."""
    assert Display("metric", BAROMETER).text(value, kind) == text


def test_what_stands_together_is_shown_in_one_unit() -> None:
    """Both ends of a range, and a value with its spread, take the unit of the larger; a column keeps the usual one."""
    display = Display("metric", BAROMETER)
    assert display.between(60.0, 420.0, Kind.POWER) == "60 to 420 W"
    assert display.between(420.0, 700.0, Kind.POWER) == "0.42 to 0.70 kW"
    assert display.between(-700.0, 60.0, Kind.POWER) == "−0.70 to 0.06 kW"
    own = display.fitting(Kind.POWER, 110.0)
    assert (own.number(130.0, Kind.POWER), own.spread(4.0, Kind.POWER), own.spread_unit(Kind.POWER)) == (
        "130",
        "4",
        "W",
    )
    assert own.text(2300.0, Kind.POWER) == "2300 W"
    assert display.number(110.0, Kind.POWER) == "0.11"
    assert Display("us_customary", BAROMETER).text(40.0, Kind.PRESSURE_DIFFERENCE) == "0.16 in w.g."


def test_a_reading_has_the_digits_of_its_instrument() -> None:
    """34.814 °C by a probe of 0.01 K is shown to 0.01, by one of 0.1 or 0.2 K to 0.1; where nobody knows as usual; a
    gauge counts from the air."""
    shown = Display("metric", 97650.0)
    assert shown.measured("heat_sink_outlet_temperature", 307.964, 0.01) == "34.81 °C"
    assert shown.measured("heat_sink_outlet_temperature", 307.964, 0.1) == "34.8 °C"
    assert shown.measured("heat_sink_outlet_temperature", 307.964, 0.2) == "34.8 °C"
    assert shown.measured("heat_sink_outlet_temperature", 307.964, None) == "34.8 °C"
    assert shown.measured("heating_capacity", 10041.2, 1.0) == "10.041 kW"
    assert shown.measured("suction_pressure", 400000.0, 2000.0) == "3.02 bar g"
