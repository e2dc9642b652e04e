"""From the statement of an instrument to the budget of a reading: parts, warnings, what is refused or assumed."""

from __future__ import annotations

import datetime as dt
import math
from typing import Any

import pytest

from commission.acceptance import Measured, Reading, assumed_budget, instrument_budget, measure, propagate
from commission.acceptance.instruments import BAROMETER, instrument_class, library, statement
from commission.description.model import Instrument
from commission.errors import NotCalculatedError

AIR = 101_325.0


def instrument(**keys: Any) -> Instrument:
    """An instrument as a description would give it."""
    return Instrument.model_validate({"calibrated_until": "2027-01-01", **keys})


def parts(budget: Any) -> dict[str, float]:
    """Size of each component by name."""
    return {c.name: abs(c.value) for c in budget.components}


def test_parts_of_a_gauge() -> None:
    """Share of the span, resolution and air pressure stand side by side, each as its own component."""
    gauge = instrument(
        measures="pressure", **{"from": "-1 bar g"}, to="10 bar g", accuracy={"of_span": "0.5 %"}, resolution="0.05 bar"
    )
    found = parts(instrument_budget(gauge, "suction_pressure", 4e5, AIR, name="gauge"))
    assert found["error of gauge"] == pytest.approx(0.005 * 11e5 / math.sqrt(3.0))
    assert found["resolution of gauge"] == pytest.approx(5000.0 / math.sqrt(12.0))
    assert found["air pressure at the site"] == library()["extras"]["barometer"]["standard"]


def test_a_barometer_narrows_the_gauge() -> None:
    """A barometer that was read takes the place of the weather."""
    gauge = instrument(measures="pressure", **{"from": "0 bar g"}, to="10 bar g", accuracy={"of_span": "0.5 %"})
    found = instrument_budget(gauge, "suction_pressure", 4e5, AIR, barometric_standard=50.0)
    assert parts(found)["air pressure at the site"] == 50.0
    assert [c.cause for c in found.components][-1] == BAROMETER


def test_absolute_gauge_needs_no_barometer() -> None:
    """An absolute transmitter does not count from the air pressure."""
    gauge = instrument(measures="pressure", **{"from": "0 bar a"}, to="16 bar a", accuracy={"of_span": "0.5 %"})
    assert len(instrument_budget(gauge, "suction_pressure", 4e5, AIR).components) == 1


def test_share_of_reading_counts_from_the_zero_of_the_instrument() -> None:
    """Of the gauge reading for a gauge, of degrees Celsius for a probe, not of the absolute value."""
    gauge = instrument(measures="pressure", **{"from": "0 bar g"}, to="10 bar g", accuracy={"of_reading": "1 %"})
    probe = instrument(measures="temperature", accuracy={"of_reading": "1 %"})
    on_gauge = instrument_budget(gauge, "suction_pressure", AIR + 3e5, AIR, name="g")
    on_probe = instrument_budget(probe, "liquid_temperature", 293.15, AIR, name="p")
    assert parts(on_gauge)["error of g"] == pytest.approx(3000.0 / math.sqrt(3.0))
    assert parts(on_probe)["error of p"] == pytest.approx(0.2 / math.sqrt(3.0))


def test_accuracy_parts_are_added_as_worst_case() -> None:
    """Share of reading and fixed part are one error limit, their sum."""
    meter = instrument(measures="electric power", accuracy={"of_reading": "1 %", "absolute": "5 W"})
    found = parts(instrument_budget(meter, "power_input", 1500.0, AIR, name="m"))
    assert found["error of m"] == pytest.approx(20.0 / math.sqrt(3.0))


def test_clamped_on_probe_has_its_extra() -> None:
    """A clamped-on probe misses by up to 1 K more than its class says (common practice, no source)."""
    probe = instrument(measures="temperature", **{"class": "IEC 60751 A"}, clamped_on="yes")
    found = instrument_budget(probe, "liquid_temperature", 313.15, AIR, name="p")
    assert parts(found)["p clamped on the pipe"] == pytest.approx(1.0 / math.sqrt(3.0))
    assert all(c.remedy for c in found.components)


def test_matched_pair_cancels_in_a_difference() -> None:
    """The class error of a matched pair cancels in a difference; of two probes of one class it does not."""

    def spread(matched: str) -> float:
        probe = instrument(measures="temperature", **{"class": "IEC 60751 B"}, matched_pair=matched)
        inputs = {
            k: Measured(f"heat_source_{k}_temperature", v, instrument_budget(
                probe, f"heat_source_{k}_temperature", v, AIR, name="pair"))
            for k, v in (("inlet", 285.15), ("outlet", 280.15))
        }  # fmt: skip
        return propagate("d", lambda inlet, outlet: inlet - outlet, inputs).budget.standard

    assert spread("no") == pytest.approx(math.hypot(0.36, 0.335) / math.sqrt(3.0))
    assert spread("yes") == pytest.approx(math.hypot(0.025, 0.05 * math.sqrt(2.0)) / math.sqrt(3.0), rel=1e-6)


def test_spread_of_samples_counts() -> None:
    """Samples add a type A component with their degrees of freedom."""
    meter = instrument(measures="electric power", accuracy={"of_reading": "1 %"})
    found = instrument_budget(meter, "power_input", 1500.0, AIR, samples=(1480.0, 1500.0, 1520.0))
    spread = found.components[-1]
    assert (spread.samples, spread.dof) == (3, 2)
    assert spread.value == pytest.approx(20.0 / math.sqrt(3.0))


def test_drift_only_where_stated() -> None:
    """Drift counts from calibration to the day, and nothing is assumed where it is not stated."""
    keys = {"measures": "electric power", "accuracy": {"of_reading": "1 %"}, "calibrated_on": "2026-01-01"}
    day = dt.date(2027, 1, 1)
    assert len(instrument_budget(instrument(**keys), "power_input", 1500.0, AIR, on=day).components) == 1
    drifting = instrument(**keys, drift_per_year="6 W")
    assert len(instrument_budget(drifting, "power_input", 1500.0, AIR).components) == 1
    found = instrument_budget(drifting, "power_input", 1500.0, AIR, on=day, name="m")
    assert parts(found)["drift of m"] == pytest.approx(6.0 * 365 / 365.25 / math.sqrt(3.0))


def test_expired_calibration_is_a_warning_carried_along() -> None:
    """The warning names instrument and dates; on the last day it is still valid."""
    meter = instrument(measures="electric power", accuracy={"of_reading": "1 %"})
    last, after = dt.date(2027, 1, 1), dt.date(2027, 1, 2)
    assert instrument_budget(meter, "power_input", 1500.0, AIR, on=last).warnings == ()
    expected = "m: its calibration ended on 2027-01-01, before the reading of 2027-01-02"
    assert instrument_budget(meter, "power_input", 1500.0, AIR, on=after, name="m").warnings == (expected,)


def test_no_calibration_and_off_the_scale_are_warnings() -> None:
    """An instrument without calibration, or read beyond its scale, says so."""
    gauge = Instrument.model_validate(
        {"measures": "pressure", "from": "0 bar g", "to": "10 bar g", "accuracy": {"of_span": "1 %"}}
    )
    assert instrument_budget(gauge, "suction_pressure", AIR + 11e5, AIR, name="g").warnings == (
        "g: no calibration is stated",
        "g: the reading lies outside its scale",
    )
    assert instrument_budget(gauge, "suction_pressure", AIR + 9.9e5, AIR, name="g").warnings == (
        "g: no calibration is stated",
    )


@pytest.mark.parametrize(
    ("keys", "message"),
    [
        ({"measures": "temperature"}, "neither accuracy nor class"),
        ({"measures": "temperature", "class": "IEC 60751 X"}, "not in the library"),
        ({"measures": "pressure", "class": "IEC 60751 A"}, "class of temperature instruments"),
        ({"measures": "pressure", "class": "EN 837-1 class 1.0"}, "both ends of the scale"),
        ({"measures": "volume flow", "class": "EN 1434 class 2"}, "upper end of the scale"),
    ],
)
def test_incomplete_statements_are_refused(keys: dict[str, str], message: str) -> None:
    """What an instrument promises cannot be guessed: the refusal says what is missing."""
    with pytest.raises(NotCalculatedError, match=message):
        statement(instrument(**keys))


def test_unknown_class_names_the_nearest() -> None:
    """The refusal of a class lists the known ones of its kind and the nearest."""
    with pytest.raises(NotCalculatedError) as caught:
        instrument_class("IEC 6751 A", "temperature")
    problem = caught.value.problems[0]
    assert problem.nearest == "IEC 60751 A"
    assert problem.allowed is not None
    assert "IEC 60751 B" in problem.allowed
    assert "EN 837-1" not in problem.allowed


@pytest.mark.parametrize("spelling", ["IEC 60751 A", "iec 60751 a", "IEC60751A", "IEC 60751 class A"])
def test_class_spellings(spelling: str) -> None:
    """Spaces, letter case and the word class do not count."""
    assert instrument_class(spelling, "temperature")["absolute"] == 0.15


def test_wrong_kind_of_instrument_is_refused() -> None:
    """A probe cannot read a pressure."""
    probe = instrument(measures="temperature", **{"class": "IEC 60751 A"})
    with pytest.raises(NotCalculatedError, match="pipe probe measures temperature; suction pressure is a pressure"):
        instrument_budget(probe, "suction_pressure", 4e5, AIR, name="pipe probe")


def test_heat_meters_and_electric_meters_are_not_mixed() -> None:
    """Both show watts, but a heat meter shows no power input and an electric meter no capacity."""
    heat = instrument(measures="heat", accuracy={"of_reading": "4 %"})
    electric = instrument(measures="electric power", accuracy={"of_reading": "1 %"})
    assert instrument_budget(heat, "cooling_capacity", 38e3, AIR).standard == pytest.approx(0.04 * 38e3 / 3**0.5)
    with pytest.raises(NotCalculatedError, match="measures heat; power input is a power"):
        instrument_budget(heat, "power_input", 9e3, AIR)
    with pytest.raises(NotCalculatedError, match="measures electric power; cooling capacity is a heat flow rate"):
        instrument_budget(electric, "cooling_capacity", 38e3, AIR)


def test_instrument_not_stated_is_assumed_and_said() -> None:
    """Without an instrument a usual one is assumed, with a warning and a larger uncertainty than a stated one."""
    found = measure(Reading("suction_temperature", 278.15), {}, AIR)
    assert "the instrument is not stated; its uncertainty is assumed" in found.budget.warnings[0]
    assert found.budget.standard > 0.5
    incomplete = measure(Reading("suction_temperature", 278.15, "p"), {"p": instrument(measures="temperature")}, AIR)
    assert "not stated well enough (p: neither accuracy nor class" in incomplete.budget.warnings[0]
    with pytest.raises(NotCalculatedError, match="nothing usual is known"):
        assumed_budget("cooling_cop", 3.0, AIR)
    with pytest.raises(NotCalculatedError, match="nothing usual is known for a ratio"):
        assumed_budget("current_unbalance", 0.02, AIR)


def test_what_was_counted_needs_no_instrument() -> None:
    """Starts, running share and defrost time come off a log or a clock: no error of an instrument is made up."""
    for key, value in (("running_share", 0.62), ("starts_per_hour", 3.0), ("defrost_time", 900.0)):
        found = measure(Reading(key, value), {}, AIR)
        assert (found.budget.components, found.budget.warnings) == ((), ())


def test_every_entry_of_the_library_has_source_and_mark() -> None:
    """Each class, assumption and extra says where it is from and how sure it is."""
    marks = {"published", "standard", "definition", "common practice, no source", "from memory"}
    data = library()
    for group in ("classes", "not_stated", "extras"):
        for key, entry in data[group].items():
            assert entry["source"], key
            assert entry["mark"] in marks, key
