"""Model uncertainty: nothing at a promised point, growing away from it."""

from __future__ import annotations

from collections.abc import Callable
from itertools import pairwise

import pytest

from commission.prediction import SystemModel

PROMISED = {"heating_capacity": 10_000.0, "power_input": 10_000 / 4.4, "heating_cop": 4.4}


def test_promised_values_are_reproduced_with_no_uncertainty(brine_heat_pump: Callable[..., SystemModel]) -> None:
    """At its one rated point the model gives what the supplier promises, with next to no model uncertainty."""
    expected = brine_heat_pump("R-410A").predict().expected
    for key, value in PROMISED.items():
        assert expected[key].value == pytest.approx(value, rel=1e-4)
        assert expected[key].uncertainty == pytest.approx(0, abs=1e-4 * value)


@pytest.mark.parametrize(
    ("key", "values"),
    [
        ("heat_sink_outlet_temperature", [34, 40, 46, 52, 58]),
        ("heat_source_inlet_temperature", [0, 4, 8, 12]),
    ],
)
def test_uncertainty_grows_away_from_the_promised_point(
    brine_heat_pump: Callable[..., SystemModel], key: str, values: list[float]
) -> None:
    """The further from the rated condition, the larger the relative uncertainty of COP and capacity."""
    model = brine_heat_pump("R-410A")
    found = [model.predict({key: v + 273.15}).expected for v in values]
    for name in ("heating_cop", "heating_capacity"):
        relative = [(e[name].uncertainty or 0.0) / e[name].value for e in found]
        assert all(later > earlier for earlier, later in pairwise(relative))
        assert relative[-1] > 0.005


def test_unpromised_quantities_keep_the_range_of_their_assumptions(
    brine_heat_pump: Callable[..., SystemModel],
) -> None:
    """What the supplier does not state, such as evaporating temperature, is as uncertain as its assumption."""
    model = brine_heat_pump("R-410A")
    expected = model.predict().expected["evaporating_temperature"]
    own = model.assumptions["source_minus_evaporating"].standard_uncertainty
    assert expected.uncertainty == pytest.approx(own, rel=0.05)
    assert expected.assumptions[0] == "source_minus_evaporating"
