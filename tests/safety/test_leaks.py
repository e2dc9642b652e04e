"""Leak-check duties at every boundary, and the label."""

from __future__ import annotations

import pytest

from commission.properties import refrigerant
from commission.safety import Substance, label_text, leak_duty, substance_of
from commission.safety.formulas import tonnes as tonnes_text

EU, US = "EU 2024/573", "US 40 CFR 82 and 84"


def substance(name: str) -> Substance:
    """The safety view of a refrigerant."""
    return substance_of(refrigerant(name))


@pytest.mark.parametrize(
    ("tonnes", "months", "with_detection"),
    [(4.999, None, None), (5, 12, 24), (49.999, 12, 24), (50, 6, 12), (499.999, 6, 12), (500, 3, 6), (5000, 3, 6)],
)
def test_intervals_by_carbon_dioxide_equivalent(tonnes: float, months: int | None, with_detection: int | None) -> None:
    """EU 2024/573 article 5(6): a limit belongs to the stricter row; below 5 t there is no duty. R-134a, GWP 1430."""
    duty = leak_duty(EU, substance("R-134a"), tonnes * 1000 / 1430, False, "cold_storage")
    assert (duty.months, duty.months_with_detection) == (months, with_detection)
    assert duty.applies is (months is not None)


@pytest.mark.parametrize(("kilograms", "months"), [(0.999, None), (1, 12), (9.999, 12), (10, 6), (99.999, 6), (100, 3)])
def test_intervals_of_unsaturated_gases_by_mass(kilograms: float, months: int | None) -> None:
    """EU 2024/573 article 5: annex II section 1 gases by mass, 1, 10 and 100 kg."""
    assert leak_duty(EU, substance("R-1234ze(E)"), kilograms, False, "liquid_cooling").months == months


@pytest.mark.parametrize(("tonnes", "applies"), [(9.999, False), (10.001, True)])
def test_sealed_equipment_is_exempt_below_ten_tonnes(tonnes: float, applies: bool) -> None:
    """EU 2024/573 article 5: hermetically sealed and labelled, below 10 t CO₂ equivalent."""
    assert leak_duty(EU, substance("R-410A"), tonnes * 1000 / 2087.5, True, "comfort_cooling").applies is applies


def test_a_blend_is_counted_both_ways_and_the_stricter_decides() -> None:
    """EU 2024/573 article 5(1): 2.4 kg of R-454C (GWP 146, 78.5 % of R-1234yf) is 0.35 t, below 5 t, but holds 1.88 kg
    of an annex II gas, above 1 kg: twelve months; composition by ISO 817 (AHRI 700 alike)."""
    duty = leak_duty(EU, substance("R-454C"), 2.4, False, "cold_storage")
    equivalent, mass = duty.measures
    assert equivalent.value == pytest.approx(2.4 * 146, rel=0.02)
    assert mass.value == pytest.approx(2.4 * 0.785, rel=1e-3)
    assert duty.months == 12
    assert "below 5 t" in duty.reason
    assert "at or above 1 kg" in duty.reason


@pytest.mark.parametrize(
    ("name", "kilograms", "months"),
    [
        ("R-454B", 12.0, 12),  # 5.6 t and 3.7 kg
        ("R-454B", 3.2, None),  # 1.5 t and 0.998 kg (31.1 % R-1234yf)
        ("R-454B", 3.3, 12),  # 1.5 t, but 1.03 kg
        ("R-454C", 12.8, 6),  # 1.9 t, but 10.05 kg
        ("R-448A", 36.1, 6),  # 50 t and 9.7 kg (20 % R-1234yf, 7 % R-1234ze(E))
        ("R-410A", 12.0, 12),  # 25 t, no annex II gas
    ],
)
def test_the_boundaries_of_blends(name: str, kilograms: float, months: int | None) -> None:
    """Either count alone brings the duty, and the shorter interval stands."""
    assert leak_duty(EU, substance(name), kilograms, False, "cold_storage").months == months


@pytest.mark.parametrize(("kilograms", "applies"), [(2.54, False), (2.56, True)])
def test_sealed_blends_are_exempt_below_two_kilograms_of_annex_two(kilograms: float, applies: bool) -> None:
    """EU 2024/573 article 5: hermetically sealed and labelled, below 2 kg of annex II gases: 2.55 kg of R-454C."""
    assert leak_duty(EU, substance("R-454C"), kilograms, True, "water_heating").applies is applies


@pytest.mark.parametrize(
    ("kilograms", "sealed", "dwelling", "applies"),
    [(2.9, True, True, False), (3.0, True, True, True), (2.9, True, False, True), (2.9, False, True, True)],
)
def test_small_sealed_equipment_in_dwellings_is_exempt(
    kilograms: float, sealed: bool, dwelling: bool, applies: bool
) -> None:
    """EU 2024/573 article 5: hermetically sealed, in residential buildings, less than 3 kg; R-1234yf counts by mass."""
    duty = leak_duty(EU, substance("R-1234yf"), kilograms, sealed, "space_heating", dwelling=dwelling)
    assert duty.applies is applies


@pytest.mark.parametrize("name", ["R-290", "R-717", "R-744", "R-600a"])
def test_natural_refrigerants_have_no_duty_under_this_law(name: str) -> None:
    """EU 2024/573 article 5 is for annex I and II gases."""
    assert leak_duty(EU, substance(name), 1000.0, False, "liquid_cooling").applies is False


def test_an_ozone_depleting_gas_is_sent_to_its_own_law() -> None:
    """R-22 falls under Regulation (EU) 2024/590; no interval is invented."""
    duty = leak_duty(EU, substance("R-22"), 10.0, False, "cold_storage")
    assert duty.applies is None
    assert duty.document.endswith("2024/590")


@pytest.mark.parametrize(("pounds", "applies"), [(14.99, False), (15.0, True)])
def test_american_duty_starts_at_fifteen_pounds(pounds: float, applies: bool) -> None:
    """40 CFR 84.106: full charge of 15 lb or more with GWP above 53."""
    duty = leak_duty(US, substance("R-448A"), pounds * 0.45359237 * (1 + 1e-12), False, "cold_storage")
    assert duty.applies is applies
    if applies:
        assert "20 %" in duty.reason


@pytest.mark.parametrize(("pounds", "applies"), [(49.9, False), (50.01, True)])
def test_american_duty_of_an_ozone_depleting_gas(pounds: float, applies: bool) -> None:
    """40 CFR 82.157: class I and II substances from 50 lb; comfort cooling 10 % a year."""
    assert leak_duty(US, substance("R-22"), pounds * 0.45359237, False, "comfort_cooling").applies is applies


def test_without_a_law_nothing_is_guessed() -> None:
    """The plant chooses the law."""
    duty = leak_duty("none stated", substance("R-134a"), 100.0, False, "cold_storage")
    assert duty.applies is None
    assert "refrigerant_law" in duty.reason


def test_the_label_of_a_listed_gas() -> None:
    """EU 2024/573 article 12: statement, designation, mass, GWP, CO₂ equivalent."""
    lines = label_text(EU, substance("R-134a"), 3.5, True)
    text = " ".join(lines)
    assert lines[0] == "Contains fluorinated greenhouse gases"
    assert "R-134a" in text
    assert "3.50 kg" in text
    assert "5.00 t" in text or "5.01 t" in text
    assert "Hermetically sealed" in text


def test_the_label_of_propane() -> None:
    """EN 378-2: flammable symbol of at least 30 mm (RSIF IF-10); no word of greenhouse gases."""
    text = " ".join(label_text(EU, substance("R-290"), 0.45, False))
    assert "30 mm" in text
    assert "greenhouse" not in text


def test_a_charge_that_counts_for_next_to_nothing_is_said_in_words() -> None:
    """0.45 kg of R-290 with a GWP of 0.02 makes 9 grams: no power of ten on a label."""
    assert [tonnes_text(x) for x in (0.009, 1.9, 345.0, 1620.0)] == ["below 0.001", "0.0019", "0.34", "1.62"]
