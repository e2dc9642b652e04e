"""A quantity is read as a person writes it, or refused with what to write instead."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from commission.quantities import (
    UNITS,
    Kind,
    Pressure,
    QuantityError,
    Reference,
    Unit,
    find_unit,
    parse,
    parse_number,
    parse_pressure,
)
from commission.quantities.parse import MAX_LENGTH
from commission.quantities.units import units_of


@pytest.mark.parametrize(
    ("text", "kind", "value"),
    [
        ("-8 °C", Kind.TEMPERATURE, 265.15),
        ("−8 °C", Kind.TEMPERATURE, 265.15),
        ("–8 °C", Kind.TEMPERATURE, 265.15),
        ("- 8 °C", Kind.TEMPERATURE, 265.15),
        ("-8C", Kind.TEMPERATURE, 265.15),
        ("14 deg F", Kind.TEMPERATURE, 263.15),
        ("6 K", Kind.TEMPERATURE_DIFFERENCE, 6.0),
        ("10.8 °F difference", Kind.TEMPERATURE_DIFFERENCE, 6.0),
        ("6.4 kW", Kind.POWER, 6400.0),
        ("6,4 kW", Kind.POWER, 6400.0),
        ("6.4\u00a0kW", Kind.POWER, 6400.0),
        ("6.4\u202fkW", Kind.POWER, 6400.0),
        ("1.5e3 W", Kind.POWER, 1500.0),
        ("1.8 refrigeration tons", Kind.HEAT_FLOW, 1.8 * 3516.8528420667),
        ("1200 m3/h", Kind.VOLUME_FLOW, 1 / 3),
        ("1200 m³/h", Kind.VOLUME_FLOW, 1 / 3),
        ("400 cfm", Kind.VOLUME_FLOW, 400 * 0.3048**3 / 60),
        ("0.5 in w.g.", Kind.PRESSURE_DIFFERENCE, 0.5 * 249.08891),
        ("0,45 kg", Kind.MASS, 0.45),
        (".5 kg", Kind.MASS, 0.5),
        ("65 %", Kind.RATIO, 0.65),
        ("3.2", Kind.NUMBER, 3.2),
        ("3,25", Kind.NUMBER, 3.25),
        ("  12 kg \n", Kind.MASS, 12.0),
        ("1450 rpm", Kind.SPEED, 1450 / 60),
        ("20 min", Kind.DURATION, 1200.0),
        ("52 dB(A)", Kind.SOUND_LEVEL, 52.0),
    ],
)
def test_reads_what_people_write(text: str, kind: Kind, value: float) -> None:
    """Spellings from both sides of the ocean arrive as the same SI value."""
    assert parse(text, kind) == pytest.approx(value, rel=1e-9)


@pytest.mark.parametrize(
    ("text", "pascal", "reference"),
    [
        ("24 bar g", 24e5, Reference.GAUGE),
        ("24 barg", 24e5, Reference.GAUGE),
        ("3.5 bar(g)", 3.5e5, Reference.GAUGE),
        ("3.5 bar (g)", 3.5e5, Reference.GAUGE),
        ("24 bar gauge", 24e5, Reference.GAUGE),
        ("25 bar a", 25e5, Reference.ABSOLUTE),
        ("25 bar abs", 25e5, Reference.ABSOLUTE),
        ("350 psig", 350 * 6894.757293168, Reference.GAUGE),
        ("350 PSIG", 350 * 6894.757293168, Reference.GAUGE),
        ("364.7 psia", 364.7 * 6894.757293168, Reference.ABSOLUTE),
        ("500 micron", 500 * 0.133322387415, Reference.ABSOLUTE),
        ("29 inHg vacuum", -29 * 25.4 * 133.322387415, Reference.GAUGE),
        ("2.5 MPa g", 2.5e6, Reference.GAUGE),
        ("977 hPa a", 97700.0, Reference.ABSOLUTE),
    ],
)
def test_pressures_keep_their_reference(text: str, pascal: float, reference: Reference) -> None:
    """Gauge and absolute pressures are read as written and never mixed."""
    pressure = parse_pressure(text)
    assert pressure.pascal == pytest.approx(pascal, rel=1e-9)
    assert pressure.reference is reference


def test_gauge_becomes_absolute_at_the_barometer_of_the_site() -> None:
    """2 bar gauge where the air has 0.95 bar is 2.95 bar absolute; an absolute pressure stays."""
    assert Pressure(2e5, Reference.GAUGE).absolute(0.95e5) == pytest.approx(2.95e5)
    assert Pressure(2e5, Reference.ABSOLUTE).absolute(0.95e5) == pytest.approx(2e5)


@pytest.mark.parametrize(
    ("text", "kind", "message", "nearest"),
    [
        ("5", Kind.POWER, "bare number", None),
        ("", Kind.POWER, "nothing is written", None),
        ("5 kw", Kind.POWER, "not a unit of power", "kW"),
        ("5 Kg", Kind.MASS, "not a unit of mass", "kg"),
        ("24 bar", Kind.PRESSURE, "say gauge or absolute: 24 bar g or 24 bar a", None),
        ("24 psi", Kind.PRESSURE, "say gauge or absolute: 24 psig or 24 psia", None),
        ("24 Bar g", Kind.PRESSURE, "not a unit of pressure", "bar g"),
        ("29 inHg", Kind.PRESSURE, "inHg vacuum", None),
        ("-0.5 bar a", Kind.PRESSURE, "below a perfect vacuum", None),
        ("-300 °C", Kind.TEMPERATURE, "below absolute zero", None),
        ("8 °C", Kind.TEMPERATURE_DIFFERENCE, "write 8 K", None),
        ("8 °F", Kind.TEMPERATURE_DIFFERENCE, "write 8 °F difference", None),
        ("8 Celsius", Kind.TEMPERATURE_DIFFERENCE, "write 8 K", None),
        ("281 K", Kind.TEMPERATURE, "is a temperature difference here", None),
        ("1 200 m3/h", Kind.VOLUME_FLOW, "without digit grouping", None),
        ("1\u202f200 m3/h", Kind.VOLUME_FLOW, "without digit grouping", None),
        ("1'200 m3/h", Kind.VOLUME_FLOW, "without digit grouping", None),
        ("1,200 m3/h", Kind.VOLUME_FLOW, "a comma before three digits", None),
        ("1.200,5 m3/h", Kind.VOLUME_FLOW, "without digit grouping", None),
        ("1,200.5 m3/h", Kind.VOLUME_FLOW, "a comma before three digits", None),
        ("3-5 kW", Kind.POWER, "not a range", None),
        ("3 – 5 kW", Kind.POWER, "not a range", None),
        ("1/2 in", Kind.LENGTH, "as a decimal", None),
        ("½ in", Kind.LENGTH, "as a decimal", None),
        ("1½ in", Kind.LENGTH, "as a decimal", None),
        ("~3 kW", Kind.POWER, "without ~", None),
        ("nan W", Kind.POWER, "a number is wanted", None),
        ("inf W", Kind.POWER, "a number is wanted", None),
        ("1e999 W", Kind.POWER, "too large", None),
        ("True", Kind.NUMBER, "a number is wanted", None),
        ("3.2 kW", Kind.NUMBER, "a plain number is wanted here, without 'kW'", None),
        ("5 kWh", Kind.POWER, "is a unit of energy; a power is wanted", None),
        ("5 kBtu/h", Kind.POWER, "is a unit of heat flow rate; a power is wanted", None),
        ("5 Â°C", Kind.TEMPERATURE, "garbled", None),
        ("5 tons", Kind.HEAT_FLOW, "refrigeration tons", None),
        ("5 MBtu/h", Kind.HEAT_FLOW, "thousand or million", None),
        ("٣ W", Kind.POWER, "a number is wanted", None),
        ("0x10 W", Kind.POWER, "not a unit of power", None),
        ("1_000 W", Kind.POWER, "not a unit of power", None),
        ("12\x07 kg", Kind.MASS, "a number is wanted", None),
    ],
)
def test_refuses_with_what_to_write(text: str, kind: Kind, message: str, nearest: str | None) -> None:
    """What could mean two things, or nothing, is refused; the problem carries the value and what is allowed."""
    with pytest.raises(QuantityError) as caught:
        parse_pressure(text) if kind is Kind.PRESSURE else parse(text, kind)
    (problem,) = caught.value.problems
    assert message in problem.message
    assert problem.value == text
    assert problem.allowed
    assert problem.nearest == nearest


def test_long_text_is_refused_shortly() -> None:
    """A text of a million characters is refused at once, and its message stays readable."""
    for text in ("1" * 1_000_000, "1 " + "x" * 1_000_000, "-" * 1_000_000):
        with pytest.raises(QuantityError) as caught:
            parse(text, Kind.POWER)
        assert len(str(caught.value)) < 600
        assert "too long" in caught.value.problems[0].message


def test_a_pressure_is_not_read_without_its_reference() -> None:
    """`parse` refuses pressures, since a plain number would lose gauge or absolute."""
    with pytest.raises(ValueError, match="parse_pressure"):
        parse("24 bar g", Kind.PRESSURE)


def test_what_follows_a_number_is_given_back() -> None:
    """The number and the rest, for cells that carry their unit in a heading."""
    assert parse_number("3,5 kW") == (3.5, "kW")
    assert parse_number("3.5") == (3.5, "")


@given(
    unit=st.sampled_from([u for u in UNITS if u.kind is not Kind.PRESSURE]),
    number=st.floats(min_value=0.001, max_value=1e6),
    comma=st.booleans(),
    data=st.data(),
)
def test_every_spelling_reads_back(unit: Unit, number: float, comma: bool, data: st.DataObject) -> None:
    """Any number written with any spelling of any unit gives factor times number plus offset."""
    spelling = data.draw(st.sampled_from([unit.name, *unit.spellings]))
    written = f"{number:.5f}"
    text = f"{written.replace('.', ',') if comma else written} {spelling}"
    assert parse(text, unit.kind) == pytest.approx(unit.factor * float(written) + unit.offset, rel=1e-12)


@given(st.text(max_size=MAX_LENGTH + 5), st.sampled_from([k for k in Kind if k is not Kind.PRESSURE]))
def test_any_text_gives_a_finite_number_or_a_problem(text: str, kind: Kind) -> None:
    """Whatever is written, the answer is a finite SI value or a problem that says what is allowed, nothing else."""
    try:
        value, problems = parse(text, kind), ()
    except QuantityError as error:
        value, problems = 0.0, error.problems
    assert math.isfinite(value)
    assert all(p.message and p.allowed for p in problems)


@given(
    st.from_regex(r"[-−]?[0-9]{1,4}[.,]?[0-9]{0,3} ?(bar|psi|Pa|inHg|micron)? ?\(?(g|a|abs|vac)?\)?", fullmatch=True)
)
def test_a_pressure_is_never_guessed(text: str) -> None:
    """A pressure that was read says in its own spelling what it is counted from."""
    try:
        pressure = parse_pressure(text)
    except QuantityError:
        return
    spelling = parse_number(text)[1]
    unit = find_unit(spelling, Kind.PRESSURE)
    assert unit is not None
    assert unit.reference is pressure.reference
    assert any(mark in spelling for mark in ("g", "a", "vac", "micron"))


def test_no_spelling_stands_for_two_units_of_a_kind() -> None:
    """Each spelling leads back to its own unit."""
    for kind in Kind:
        for unit in units_of(kind):
            for spelling in (unit.name, *unit.spellings):
                assert find_unit(spelling, kind) is unit
