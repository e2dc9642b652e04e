"""Errors carry data, print as a person reads them, and stay bounded."""

import time

import pytest

from commission.errors import CommissionError, InputError, NotCalculatedError, Problem, nearest, shorten


def test_a_problem_prints_place_path_value_allowed_and_nearest() -> None:
    """One problem on a few lines, the place first, as editors and people expect it."""
    problem = Problem("not known", "plant.yaml", 3, 5, "systems.a.chrge", "4 kg", "charge, name", "charge")
    assert str(problem).splitlines() == [
        "plant.yaml:3:5: systems.a.chrge: not known",
        "    written: 4 kg",
        "    allowed: charge, name",
        "    did you mean: charge",
    ]
    assert problem.place == "plant.yaml:3:5"
    assert str(Problem("plain")) == "plain"


def test_an_error_holds_all_problems() -> None:
    """Text and problems are both taken; the message shows each."""
    error = InputError("first", Problem("second", "a.yaml", 1))
    assert [p.message for p in error.problems] == ["first", "second"]
    assert str(error) == "first\na.yaml:1: second"
    assert isinstance(error, CommissionError)
    assert error.exit_code == 2
    assert issubclass(NotCalculatedError, CommissionError)


def test_hostile_text_cannot_flood_a_message() -> None:
    """Values, paths and lists of a million characters are shortened."""
    long = "x y\n" * 250_000
    assert len(str(Problem("m", "f", 1, 1, long, long, long))) < 1500
    assert shorten("a\n b") == "a b"
    assert len(shorten(long)) == 120


def test_nearest_is_quick_whatever_is_known() -> None:
    """A hundred slips among thousands of long ids that look alike cost no more than a breath."""
    letters = "abcdefghij" * 6
    known = [letters[n % 60 :] + letters[: n % 60] for n in range(5000)]
    started = time.process_time()
    for n in range(100):
        nearest(letters[::-1][n % 60 :], known)
    assert time.process_time() - started < 2.0


@pytest.mark.parametrize(
    ("word", "known", "found"),
    [
        ("chrge", ["charge", "name"], "charge"),
        ("KW", ["kW", "MW"], "kW"),
        ("kw", ["W", "kW", "MW"], "kW"),
        ("Head Pressure", ["head_pressure", "head"], "head_pressure"),
        ("zzz", ["charge", "name"], None),
        ("", ["charge"], None),
    ],
)
def test_nearest(word: str, known: list[str], found: str | None) -> None:
    """Capitals and separators come first, then likeness; nothing alike is None."""
    assert nearest(word, known) == found
