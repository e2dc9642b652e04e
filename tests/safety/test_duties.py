"""Market dates, relief duties, machinery-room ventilation, hot water, and American design pressures."""

from __future__ import annotations

import datetime as dt
from collections.abc import Callable
from pathlib import Path

import pytest

from commission.description import LoadedPlant, load_plant
from commission.properties import refrigerant
from commission.quantities import methods
from commission.safety import (
    QUANTITY_TITLES,
    charge_limits,
    leak_duty,
    limit_order,
    market_dates,
    relief_duties,
    safety_figures,
    substance_of,
    warm_volume_below_element,
)

Plants = Callable[..., LoadedPlant]
EU = "EU 2024/573"
YARD = Path(__file__).parent.parent / "checklists" / "plants" / "yard"


def dates(loaded: LoadedPlant, system_id: str, law: str = EU) -> list[tuple[str, dt.date]]:
    """What is forbidden, and since when."""
    system = loaded.system(system_id)
    found = market_dates(law, system, substance_of(refrigerant(system.refrigerant)))
    return [(date.what, date.since) for date in found]


def test_a_new_cold_room_with_a_high_potential_is_forbidden_from_2030(plant: Plants) -> None:
    """EU 2024/573 annex IV: stationary refrigeration with GWP of 150 or more from 2030-01-01."""
    found = dates(plant(refrigerant="R-448A", charge="5 kg"), "one")
    assert ("R-448A in new equipment (stationary refrigeration, GWP 150 or more)", dt.date(2030, 1, 1)) in found


def test_a_sealed_cabinet_is_forbidden_since_2025(plant: Plants) -> None:
    """EU 2024/573 annex IV: self-contained refrigeration with GWP of 150 or more from 2025-01-01."""
    found = dates(plant(refrigerant="R-134a", sealed="yes"), "one")
    assert [since for what, since in found if "self-contained" in what] == [dt.date(2025, 1, 1)]


def test_virgin_gas_of_very_high_potential_is_forbidden_for_servicing(plant: Plants) -> None:
    """EU 2024/573 article 13: virgin gas of GWP 2500 or more in refrigeration since 2025, reclaimed until 2030."""
    loaded = plant(refrigerant="R-404A", charge="5 kg")
    system = loaded.system("one")
    found = market_dates(EU, system, substance_of(refrigerant("R-404A")))
    service = next(date for date in found if "servicing" in date.what and date.since == dt.date(2025, 1, 1))
    assert service.reclaimed_until == dt.date(2030, 1, 1)


@pytest.mark.parametrize("name", ["R-290", "R-744", "R-717"])
def test_natural_refrigerants_have_no_date(plant: Plants, name: str) -> None:
    """No listed gas, no date."""
    assert dates(plant(refrigerant=name), "one") == []


def test_a_small_split_of_r32_meets_the_later_dates() -> None:
    """R-32 (675) stays below 750, but passes 150: air-to-air splits up to 12 kW from 2029, any listed gas from 2035."""
    found = dict(dates(load_plant(YARD), "split"))
    assert sorted(found.values()) == [dt.date(2029, 1, 1), dt.date(2035, 1, 1)]


def test_american_limits_by_charge(plant: Plants) -> None:
    """40 CFR 84 subpart B (from memory): 300 below 200 lb and 150 from 200 lb in remote refrigeration."""
    small = dates(plant(refrigerant="R-448A", charge="90 kg"), "one", "US 40 CFR 82 and 84")
    large = dates(plant(refrigerant="R-455A", charge="91 kg"), "one", "US 40 CFR 82 and 84")
    assert any("below 200 lb" in what for what, _ in small)
    assert large == []


def test_a_large_receiver_needs_two_relief_valves() -> None:
    """RSIF IF-08 3.3.4.1: vessels of 100 litres or more; the chiller's 120 litres say so."""
    loaded = load_plant(YARD)
    found = relief_duties(loaded, "chiller", safety_figures(loaded, "chiller"))
    assert [duty.stated for duty in found if "two relief valves" in duty.title] == [True]


def test_carbon_dioxide_at_rest_needs_relief() -> None:
    """Above 31 °C there is no saturation to hold the pressure down; valves beside the receiver's count as stated."""
    loaded = load_plant(YARD)
    found = relief_duties(loaded, "water-heater", safety_figures(loaded, "water-heater"))
    assert [duty.stated for duty in found] == [True]


def test_carbon_dioxide_without_any_relief_is_found(tmp_path: Path) -> None:
    """The same water heater without its valves."""
    text = (YARD / "plant.yaml").read_text(encoding="utf-8")
    valves = "    relief_valves: {gas cooler: 130 bar g, low side: 80 bar g}\n"
    assert valves in text
    (tmp_path / "plant.yaml").write_text(text.replace(valves, ""), encoding="utf-8")
    loaded = load_plant(tmp_path)
    found = relief_duties(loaded, "water-heater", safety_figures(loaded, "water-heater"))
    assert [duty.stated for duty in found] == [False]


def test_a_small_propane_plant_has_no_relief_duty(plant: Plants) -> None:
    """2 litres of receiver and a stamp above standstill."""
    loaded = plant()
    assert relief_duties(loaded, "one", safety_figures(loaded, "one")) == ()


def test_ventilation_of_a_machinery_room() -> None:
    """EN 378-3: 0.014 x 65^(2/3) = 0.2263 m³/s; ASHRAE 15: 0.070 x √65 = 0.5644 m³/s."""
    loaded = load_plant(YARD)
    found = safety_figures(loaded, "chiller").found
    assert found["emergency_ventilation"].value == pytest.approx(0.2263, abs=5e-5)
    assert found["emergency_ventilation_ashrae15"].value == pytest.approx(0.5644, abs=5e-5)


def test_ventilation_counts_the_largest_charge_in_the_room() -> None:
    """The cellar holds a water heater of 3.2 kg and a chiller of 90 kg: the larger counts for both (ASHRAE 15)."""
    loaded = load_plant(YARD)
    small = safety_figures(loaded, "water-heater").found["emergency_ventilation_ashrae15"]
    large = safety_figures(loaded, "tower-chiller").found["emergency_ventilation_ashrae15"]
    assert small.value == large.value == pytest.approx(0.070 * 90**0.5)


def test_fifteen_air_changes_are_always_enough() -> None:
    """EN 378-3, 5.13: for 90 kg in a cellar of 48 m³ the formula asks for 0.281 m³/s, 15 changes for 0.2 m³/s."""
    figure = safety_figures(load_plant(YARD), "tower-chiller").found["emergency_ventilation"]
    assert figure.value == pytest.approx(15 * 20 * 2.4 / 3600)
    assert pytest.approx(0.2812, abs=5e-5) == 0.014 * 90 ** (2 / 3)
    assert "air changes" in figure.note


def test_every_quantity_of_the_room_has_a_title_and_a_kind() -> None:
    """Whatever number a page shows, it can say what it is and in which unit."""
    loaded = load_plant(YARD)
    for system_id, system in loaded.plant.systems.items():
        substance = substance_of(refrigerant(system.refrigerant))
        figures = safety_figures(loaded, system_id)
        shown = [figure.explained for figure in figures.found.values()]
        shown += [e for duty in relief_duties(loaded, system_id, figures) for e in duty.figures]
        shown += [e for problem in limit_order(loaded, system_id, figures).problems for e in problem.figures]
        for space in charge_limits(loaded, system_id, substance):
            shown += [limit.value for limit in (*space.limits, *space.alternatives) if limit.value is not None]
            shown += [space.concentration] if space.concentration is not None else []
        duty = leak_duty(EU, substance, system.charge, system.sealed, system.duty)
        shown += duty.measures
        for explained in shown:
            assert explained.quantity in QUANTITY_TITLES
            assert explained.method in methods()


def test_no_ventilation_figure_outdoors(plant: Plants) -> None:
    """A condensing unit in a yard has no machinery room."""
    assert "indoors" in safety_figures(plant(), "one").not_calculated["emergency_ventilation"]


@pytest.mark.parametrize(("set_point", "cubic_metres"), [("55 °C", 0.4), ("62 °C", None)])
def test_what_stays_warm_below_an_element(tmp_path: Path, set_point: str, cubic_metres: float | None) -> None:
    """An element at mid height leaves half of 800 litres warm, unless the heat pump itself reaches 60 °C."""
    text = (YARD / "plant.yaml").read_text(encoding="utf-8").replace("set_point: 62 °C", f"set_point: {set_point}")
    (tmp_path / "plant.yaml").write_text(text, encoding="utf-8")
    found = warm_volume_below_element(load_plant(tmp_path), "water-heater")
    assert (None if found is None else pytest.approx(found.value)) == cubic_metres


def test_american_design_pressures(plant: Plants) -> None:
    """ASHRAE 15, 9.2.1 (from memory): low side at 80 °F; air-cooled 30 °F above summer air, not below 122 °F."""
    loaded = plant()
    path = loaded.folder / "plant.yaml"
    path.write_text(path.read_text(encoding="utf-8").replace("safety: EN 378", "safety: ASHRAE 15"), encoding="utf-8")
    found = safety_figures(load_plant(loaded.folder), "one").found
    fluid = refrigerant("R-290")
    assert found["design_pressure_low_side"].value == pytest.approx(fluid.bubble(273.15 + 26.667).p, rel=1e-4)
    assert found["design_pressure_high_side"].value == pytest.approx(fluid.bubble(323.15).p)
    assert found["design_pressure_high_side"].mark == "M"
