"""What only some plants must prove: flow switches, defrost heaters, which device acts first, gauges that reach."""

from __future__ import annotations

from functools import cache
from pathlib import Path

import pytest

from commission.checklists import Item, stages
from commission.description import LoadedPlant, load_plant
from tests.checklists.conftest import YARD

M3_PER_HOUR = 1 / 3600


@cache
def _loaded(folder: Path) -> LoadedPlant:
    return load_plant(folder)


def listed(folder: Path, system: str) -> dict[str, Item]:
    """Items of a system of the example by id."""
    return {item.id: item for stage in stages(_loaded(folder), system) for item in stage.items}


def says(item: Item) -> str:
    """What the item must read, in words."""
    assert item.must_read is not None
    return item.must_read.text


@pytest.mark.parametrize(("system", "flow"), [("floor-heating", 0.95), ("shower-water", 0.06)])
def test_a_stated_flow_switch_is_proved_at_rest_and_live(example_folder: Path, system: str, flow: float) -> None:
    """Both proofs must read the flow that the description states for the switch."""
    found = listed(example_folder, system)
    for name in ("flows.sink-switch", "live-trips.sink-flow"):
        target = found[name].must_read
        assert target is not None
        assert target.value == pytest.approx(flow * M3_PER_HOUR)


def test_a_reversed_plate_exchanger_warns_of_bursting(example_folder: Path) -> None:
    """A defrost takes heat from the water: water that stands freezes, and the gas leaves with the water."""
    for name in ("flows.sink-switch", "live-trips.sink-flow"):
        assert "bursts" in (listed(example_folder, "floor-heating")[name].hazard or "")
        assert "bursts" not in (listed(example_folder, "shower-water")[name].hazard or "")
    assert "live-trips.sink-flow" not in listed(example_folder, "cold-room")


def test_electric_defrost_heaters_are_proved(example_folder: Path) -> None:
    """Their over-temperature cut-out and their current; a coil without heaters asks for neither."""
    wanted = {"safety.defrost-cut-out", "electrical.defrost-heater"}
    assert wanted <= set(listed(example_folder, "freezer-room"))
    assert not wanted & set(listed(example_folder, "cold-room"))
    assert "2.70 kW" in says(listed(example_folder, "freezer-room")["electrical.defrost-heater"])


def test_the_live_trip_names_what_may_act_first(example_folder: Path) -> None:
    """The discharge limiter or the flow switch may stop the machine before the high-pressure device does."""
    item = "live-trips.high-pressure"
    assert "discharge limiter at 115" in (listed(example_folder, "dining-hall")[item].how or "")
    assert "flow switch at 60 L/h" in (listed(example_folder, "shower-water")[item].how or "")
    assert "act first" not in (listed(example_folder, "cold-room")[item].how or "")


def test_the_strength_test_names_a_gauge_that_reaches(example_folder: Path) -> None:
    """1.25 x 30.8 bar g is 38.5: HG-05 to 60 bar. 1.25 x 154 is 192.5: no gauge here (common practice)."""
    assert "HG-05" in (listed(example_folder, "cold-room")["strength.high-side"].how or "")
    assert "bring one that reads to 193 bar g" in (
        listed(example_folder, "shower-water")["strength.high-side"].how or ""
    )


def test_the_first_list_names_what_the_work_needs(example_folder: Path) -> None:
    """Gauges of the pressure test, vacuum gauge and scale where a circuit is made on site, else none."""
    item = "readiness.instruments"
    wanted = {
        "cold-room": ("LG-12", "HG-05", "VG-02", "SC-01"),
        "freezer-room": ("HG-03", "HG-05", "VG-02", "SC-01"),
        "dining-hall": ("HG-05", "VG-02", "SC-01"),
        "shower-water": ("HG-22", "VG-02", "SC-01", "a gauge that reads to 193 bar g or more"),
    }
    for system, words in wanted.items():
        for word in words:
            assert word in (listed(example_folder, system)[item].how or ""), (system, word)
    sealed = listed(example_folder, "floor-heating")[item].how or ""
    assert not [word for word in ("VG-02", "SC-01", "HG-05", "to be brought") if word in sealed]


def test_what_nobody_described_is_brought() -> None:
    """A plant without instruments: 1.25 x 1.1 x 19 bar g is 26 bar g, 1.25 x 1.1 x 30 is 41 (common practice)."""
    how = listed(YARD, "freezer")["readiness.instruments"].how or ""
    assert "a gauge that reads to 26 bar g or more, for the strength test;" in how
    assert "a gauge that reads to 41 bar g or more, for the strength test of the high side;" in how
    assert how.endswith("an electronic vacuum gauge; a scale for the charge.")
    assert "to be brought" not in (listed(YARD, "heat-pump")["readiness.instruments"].how or "")


def test_a_freezer_is_proved_cold_as_well(example_folder: Path) -> None:
    """Door, release and port can freeze: proved warm before the pull-down and again at −20 °C; not in a milk room."""
    found = listed(example_folder, "freezer-room")
    assert "−20.0 °C" in found["controls.release-cold"].do
    assert {"safety.release", "installation.relief-port", "controls.port-cold"} <= set(found)
    assert not {"controls.release-cold", "controls.port-cold"} & set(listed(example_folder, "cold-room"))


def test_a_light_charge_leaves_the_public_room_alone(example_folder: Path) -> None:
    """A class 2L charge below the limit of a hall asks for casing and zone; a walk-in room is looked at whole."""
    item = "installation.room-ignition"
    assert "inside the casing" in says(listed(example_folder, "dining-hall")[item])
    assert "none in the room" in says(listed(example_folder, "cold-room")[item])
    assert "none in the room" in says(listed(example_folder, "freezer-room")[item])


def test_carbon_dioxide_asks_for_its_own_training_and_alarms(example_folder: Path) -> None:
    """A1 says nothing of high pressure; 5000 and 15 000 ppm are the limits of EH40 for 8 h and 15 min."""
    found = listed(example_folder, "shower-water")
    assert "alone proves nothing" in (found["readiness.competence"].how or "")
    assert "5 000 ppm and 15 000 ppm" in says(found["charging.detector-people"])
    assert found["charging.detector-people"].if_not == "The cylinder stays shut."
    assert "or its safety class A3" in (listed(example_folder, "cold-room")["readiness.competence"].how or "")


def test_another_season_stays_within_what_the_site_offers(example_folder: Path) -> None:
    """Between the winter design and the heating limit, the summer, or the cool end of the cooling season."""
    ends = {
        "floor-heating": "−9.0 °C or 15.0 °C",
        "dining-hall": "18.0 °C or 32.0 °C",
        "cold-room": "−9.0 °C or 32.0 °C",
    }
    for system, text in ends.items():
        assert (
            f"half of the way from the test's outdoor air to {text}"
            in listed(example_folder, system)["season.sheet"].do
        )


def test_the_heating_limit_is_proved_from_both_sides(example_folder: Path) -> None:
    """The mildest point is tried 1 K below the limit, on the straight line to it; above the limit nothing heats."""
    found = listed(example_folder, "floor-heating")
    assert "14.0 °C outdoors" in found["controls.curve-mild"].do
    target = found["controls.curve-mild"].must_read
    assert target is not None
    assert target.value == pytest.approx(273.15 + 34 - 7 * 12 / 13)
    assert "17.0 °C outdoors" in found["controls.heating-limit"].do


def test_the_balancing_report_follows_the_flows(example_folder: Path) -> None:
    """What is filed about flows is filed when they were measured, not before."""
    for stage in stages(_loaded(example_folder), "floor-heating"):
        if stage.id == "flows":
            assert stage.items[-1].id == "flows.balancing-report"
