"""One ranking of the assumptions by what they do to the leading values."""

from __future__ import annotations

import pytest

from commission.description import LoadedPlant
from commission.prediction import SystemModel, fit
from commission.prediction.worth import most_worth, shares


def test_shares_are_means_of_shares_in_the_variance() -> None:
    """3 and 4 make 9/25 and 16/25 of one variance, 5 all of another; what no leading value knows does not count."""
    parts = {
        "suction_pressure": {"a": 3.0, "b": -4.0},
        "power_input": {"b": 5.0},
        "starts_per_hour": {"c": 1.0},
        "superheat": {},
    }
    assert shares(parts) == pytest.approx({"a": 0.18, "b": 0.82})
    assert most_worth(parts, ("a", "b", "c")) == "b"
    assert most_worth(parts, ("a", "c")) == "a"
    assert most_worth(parts, ("c",)) is None


def test_the_leader_is_in_use(example: LoadedPlant, cold_room: SystemModel) -> None:
    """The assumption that leads is in use, and all shares together with those of other causes make one."""
    found = cold_room.predict()
    key = most_worth(found.parts, cold_room.assumptions)
    assert key in cold_room.assumptions
    assert sum(shares(found.parts).values()) == pytest.approx(1.0)
    other = fit(example, "freezer-room")
    assert most_worth(other.predict().parts, other.assumptions) in other.assumptions
