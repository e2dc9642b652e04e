"""The expression language: what it reads, what it refuses, and that nothing in it can run code."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from commission.checklists.evaluate import evaluate
from commission.checklists.language import ExpressionError, NameType, Value, read_expression
from commission.quantities import Kind

NAMES = {
    "room.temperature": NameType(Kind.TEMPERATURE, "a temperature"),
    "room.margin": NameType(Kind.TEMPERATURE_DIFFERENCE, "a difference"),
    "limit": NameType(Kind.PRESSURE, "a pressure"),
    "high": NameType(Kind.PRESSURE, "a higher pressure"),
    "charge": NameType(Kind.MASS, "a mass"),
    "share": NameType(Kind.RATIO, "a ratio"),
    "duty": NameType("text", "a word", ("cold_storage", "comfort_cooling")),
    "flammable": NameType("yes/no", "a truth"),
    "unknown": NameType("yes/no", "not known"),
    "missing": NameType(Kind.MASS, "not stated"),
    "receiver": NameType("part", "a part"),
}
VALUES = {
    "room.temperature": Value(Kind.TEMPERATURE, 275.15),
    "room.margin": Value(Kind.TEMPERATURE_DIFFERENCE, 2.0),
    "limit": Value(Kind.PRESSURE, 2.2e6),
    "high": Value(Kind.PRESSURE, 2.8e6),
    "charge": Value(Kind.MASS, 0.45),
    "share": Value(Kind.RATIO, 0.2),
    "duty": Value("text", "cold_storage"),
    "flammable": Value("yes/no", True),
    "unknown": Value("yes/no", None, "nobody looked"),
    "missing": Value(Kind.MASS, None, "not stated"),
    "receiver": Value("part", None, "not stated"),
}


def work(text: str) -> Value:
    """The value of an expression, at 100 kPa barometric pressure."""
    return evaluate(read_expression(text, NAMES), VALUES.__getitem__, 1e5)


@pytest.mark.parametrize(
    ("text", "content"),
    [
        ("charge >= '0.45 kg'", True),
        ("charge >= '1 lb'", False),
        ("'450 g' == charge", True),
        ("room.temperature + room.margin == '4 °C'", True),
        ("room.temperature - '2 K' == '0 °C'", True),
        ("high - limit == '6 bar'", True),
        ("limit + '1 bar' > '21 bar g'", True),
        ("limit == '21 bar g'", True),
        ("duty == 'cold_storage' and flammable", True),
        ("duty in ('comfort_cooling', 'cold_storage')", True),
        ("duty not in ('comfort_cooling',)", True),
        ("not flammable or charge < '1 kg'", True),
        ("charge * 2 / '0.9 kg' == 1", True),
        ("share * charge < '0.1 kg'", True),
        ("'0.4 kg' < charge < '0.5 kg'", True),
        ("receiver is none", True),
        ("charge is not none", True),
        ("flammable == yes", True),
        ("-1 < 0", True),
    ],
)
def test_what_it_works_out(text: str, content: bool) -> None:
    """Quantities with their units, words, and truth values."""
    assert work(text).content is content


@pytest.mark.parametrize(
    ("text", "content"),
    [
        ("unknown and flammable", None),
        ("unknown and not flammable", False),
        ("unknown or flammable", True),
        ("unknown or not flammable", None),
        ("not unknown", None),
        ("missing > '1 kg'", None),
        ("missing is none", True),
        ("missing + charge > '1 kg'", None),
    ],
)
def test_not_known_stays_not_known(text: str, content: bool | None) -> None:
    """Kleene's three-valued logic: what is not known is neither yes nor no, unless the other side decides."""
    found = work(text)
    assert found.content is content
    assert (found.missing is not None) is (content is None)


def test_a_division_by_zero_is_not_known() -> None:
    """It gives no number and says why."""
    assert "division by zero" in str(work("charge / (charge - charge) == 1").missing)


@pytest.mark.parametrize(
    "text",
    [
        "__import__('os').system('true')",
        "().__class__.__bases__[0].__subclasses__()",
        "duty.__class__",
        "duty.upper()",
        "charge.__init__.__globals__",
        "[x for x in duty]",
        "{x: 1 for x in duty}",
        "lambda: 1",
        "flammable if flammable else flammable",
        "(charge := 3)",
        "duty[0] == 'c'",
        "f'{duty}' == 'x'",
        "duty == b'cold'",
        "charge ** 9 > '1 kg'",
        "charge // 2 > '1 kg'",
        "charge % 2 > '1 kg'",
        "1 << 9 == 2",
        "~1 == 2",
        "await charge",
        "yield charge",
        "*charge",
        "True",
        "... == 1",
        "1j == 1",
        "1e300 == 1",
        "print",
        "exec",
        "import os",
        "a = 1",
        "",
        "(" * 200 + "1" + ")" * 200,
        "not " * 80 + "flammable",
        "charge" + " + charge" * 200,
        "\x00",
        "flammable and\nflammable; 1",
    ],
)
def test_hostile_expressions_are_refused(text: str) -> None:
    """Nothing but names, literals, comparisons, logic and arithmetic is read; nothing is ever run."""
    with pytest.raises(ExpressionError):
        read_expression(text, NAMES)


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("charge > 1", "cannot be compared"),
        ("charge > '1 bar'", "is a unit of"),
        ("limit > '21 bar'", "say gauge or absolute"),
        ("room.temperature * 2 > '1 °C'", "has no meaning"),
        ("limit * 1.1 > high", "has no meaning"),
        ("room.temperature + room.temperature > '1 °C'", "has no meaning"),
        ("charge + limit > high", "has no meaning"),
        ("duty > 'cold_storage'", "words are compared"),
        ("charge and flammable", "yes or no is wanted"),
        ("receiver == 'x'", "cannot be compared"),
        ("charge in ('1 kg',)", "wants a name with words"),
        ("charge is 'x'", "is none"),
        ("'text'", "says nothing"),
    ],
)
def test_units_are_respected_when_a_file_is_read(text: str, words: str) -> None:
    """Wrong kinds, bare numbers and missing gauge or absolute are found before any plant is seen."""
    with pytest.raises(ExpressionError) as caught:
        read_expression(text, NAMES)
    assert words in caught.value.problems[0].message


def test_an_unknown_name_gets_the_nearest() -> None:
    """The message carries the expression as written and the likely name."""
    with pytest.raises(ExpressionError) as caught:
        read_expression("chrge > '1 kg'", NAMES)
    problem = caught.value.problems[0]
    assert problem.nearest == "charge"
    assert problem.value == "chrge > '1 kg'"


def test_an_unknown_word_gets_the_nearest() -> None:
    """A name that takes only certain words is compared only with those."""
    with pytest.raises(ExpressionError) as caught:
        read_expression("duty == 'cold_storge'", NAMES)
    assert caught.value.problems[0].nearest == "cold_storage"


@given(st.text(max_size=120))
def test_any_text_is_read_or_refused(text: str) -> None:
    """No text brings anything but a value type or an ExpressionError."""
    try:
        expression = read_expression(text, NAMES)
    except ExpressionError:
        return
    assert expression.type in (*Kind, "yes/no", "text", "part")


@given(
    st.recursive(
        st.sampled_from(
            ["charge", "'1 kg'", "limit", "'2 bar g'", "duty", "'cold_storage'", "flammable", "unknown", "3", "none"]
        ),
        lambda inner: st.tuples(
            inner, st.sampled_from(["+", "-", "*", "/", "<", "==", "and", "or", "in", "is"]), inner
        ).map(lambda t: f"({t[0]} {t[1]} {t[2]})"),
        max_leaves=8,
    )
)
def test_whatever_passes_the_check_can_be_worked_out(text: str) -> None:
    """An expression that was accepted never fails when it is worked out, and gives the type that was promised."""
    try:
        expression = read_expression(text, NAMES)
    except ExpressionError:
        return
    found = evaluate(expression, VALUES.__getitem__, 1e5)
    assert found.type == expression.type
    assert found.known or found.missing
