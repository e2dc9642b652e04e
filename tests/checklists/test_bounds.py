"""The band that an item must read ends where a machine can read no more."""

from __future__ import annotations

from commission.checklists.rendering import as_far_as_can_be
from commission.quantities import Bounds, Explained, bounds


def test_a_band_of_superheat_starts_at_zero() -> None:
    """3.0 K within its band of 4 K is 0 to 7 K; a stated lower bound that is stricter stays."""
    expected = (Explained("superheat", 3.0, 2.0, "stated", bounds=bounds("superheat", {})),)
    assert as_far_as_can_be({"value": 3.0}, expected) == {"value": 3.0, "at_least": 0.0}
    assert as_far_as_can_be({"value": 3.0, "at_least": 2.0}, expected) == {"value": 3.0, "at_least": 2.0}


def test_a_value_that_is_not_expected_has_no_bounds() -> None:
    """Bounds are those of the expected value that the item shows, and of a value within them."""
    beyond = (Explained("superheat", -1.0, 2.0, "stated", bounds=Bounds(0.0, None)),)
    assert as_far_as_can_be({"value": 3.0}, beyond) == {"value": 3.0}
    assert as_far_as_can_be({"value": -1.0}, beyond) == {"value": -1.0}
