"""Settings that the calculation holds at another value than the stated one, and what is said of them."""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import replace

import pytest

from commission.description import LoadedPlant
from commission.prediction import fit, value_used
from commission.prediction.settings import held_off
from commission.quantities import Display
from tests.prediction.conftest import BRINE

SITE = Display("metric", 101325.0)


def test_a_superheat_moved_by_the_rated_points_is_told_with_both_figures(example: LoadedPlant) -> None:
    """More rated points than unknowns move the superheat of the valve; the sentence carries stated and held."""
    prediction = fit(example, "floor-heating").predict()
    (one,) = (h for h in prediction.held_off if h.quantity == "superheat")
    assert one.fitted
    assert one.stated == example.system("floor-heating").expansion.superheat  # type: ignore[union-attr]  # it has one
    words = one.words(SITE)
    assert words is not None
    stated, held = map(float, re.findall(r"(\d+\.\d) K", words))
    assert stated == pytest.approx(5.0)
    assert held == pytest.approx(prediction.expected["superheat"].value, abs=0.06)
    assert "rated points" in words


def test_a_setting_that_reads_the_same_needs_no_word(example: LoadedPlant) -> None:
    """What differs by less than the shown digits is not told."""
    (one,) = (h for h in fit(example, "floor-heating").predict().held_off if h.quantity == "superheat")
    assert replace(one, held=one.stated + 0.01).words(SITE) is None


def test_one_rated_point_moves_nothing_and_a_description_may(written: Callable[[str], LoadedPlant]) -> None:
    """An exact fit leaves every assumption as listed; what the description itself sets off is not the fit's doing."""
    plain = BRINE.format(fluid="R-410A", power=2.3) + "expansion: {device: electronic valve, superheat: 6 K}\n"
    assert fit(written(plain), "it").predict().held_off == ()
    off = "assumptions: {superheat_departure: {value: -1 K, low: -2 K, high: 0 K, source: seen at the first visit}}\n"
    model = fit(written(plain + off), "it")
    (one,) = held_off(model.facts, model.fit)
    assert (one.fitted, one.held) == (False, pytest.approx(5.0))
    assert "the description says" in str(one.words(SITE))


def test_the_value_used_is_the_one_the_fitted_machine_calculates_with(example: LoadedPlant) -> None:
    """It is the input that every expected value names, not the listed one."""
    model = fit(example, "floor-heating")
    used = value_used(model, model.assumptions["liquid_subcooling"])
    named = {i.origin: i.value for e in model.predict().expected.values() for i in e.inputs}
    assert used != model.assumptions["liquid_subcooling"].value
    assert used == named["assumption liquid_subcooling"]
