"""Rules on instruments: calibration, scale, and whether they can judge a superheat."""

from __future__ import annotations

import datetime as dt
import math
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from types import SimpleNamespace

import pytest

from commission.acceptance.instruments import instrument_budget
from commission.properties import refrigerant
from commission.review.facts import PlantFacts, SystemFacts
from commission.review.finding import Figure, Remark
from commission.review.rules import calibration, instruments

Facts = Callable[..., SystemFacts]
CELSIUS = 273.15
DESIGN = {
    "suction_pressure": (3.8e5, 1e4),
    "discharge_pressure": (15e5, 1e4),
    "suction_temperature": (5 + CELSIUS, 1.0),
    "superheat": (6.0, 0.5),
}


def figure(remark: Remark, label: str) -> Figure:
    """The one figure of a remark with this label."""
    return next(f for f in remark.figures if f.label == label)


def on(facts: SystemFacts, day: str) -> PlantFacts:
    """The plant with a day of the visit."""
    return replace(facts.plant, visit=dt.date.fromisoformat(day))


def test_a_calibration_that_runs_out_before_the_visit(facts: Facts) -> None:
    """Calibrated until the end of March, visited in April."""
    here = facts(instruments={"probe": {"calibrated_until": "2027-03-31"}})
    (remark,) = calibration.expired(on(here, "2027-04-01"))
    assert remark.severity == "warning"
    assert remark.path == "instruments.probe.calibrated_until"
    assert [f.text for f in remark.figures] == ["2027-03-31", "2027-04-01"]
    assert not list(calibration.expired(on(here, "2027-03-31")))
    assert not list(calibration.expired(here.plant))


def test_a_calibration_dated_after_the_visit(facts: Facts) -> None:
    """A certificate of June cannot have been there in April."""
    here = facts(instruments={"probe": {"calibrated_on": "2027-06-01"}})
    (remark,) = calibration.expired(on(here, "2027-04-01"))
    assert remark.path == "instruments.probe.calibrated_on"
    assert not list(calibration.expired(on(here, "2027-06-01")))


def test_a_record_read_with_an_instrument_out_of_calibration(facts: Facts, monkeypatch: pytest.MonkeyPatch) -> None:
    """What counts is the calibration that was frozen into the record of that day."""

    def record(until: str) -> SimpleNamespace:
        filed = SimpleNamespace(instruments={"probe": {"calibrated_until": until}, "other": {}})
        started = dt.datetime(2027, 4, 1, 9, 30, tzinfo=dt.UTC)
        file = SimpleNamespace(corrects=None)
        return SimpleNamespace(id="a", path=Path("2027-04-01.yaml"), started=started, filed=filed, file=file)

    plant = facts().plant
    monkeypatch.setattr("commission.records.history", lambda _: (record("2027-03-31"),))
    (remark,) = calibration.expired_on_the_day(plant)
    assert remark.path == "records/2027-04-01.yaml"
    assert [f.text for f in remark.figures] == ["2027-03-31", "2027-04-01"]
    monkeypatch.setattr("commission.records.history", lambda _: (record("2027-04-01"),))
    assert not list(calibration.expired_on_the_day(plant))


def test_an_instrument_without_serial_number(facts: Facts) -> None:
    """Both what is missing are named; the base plant misses nothing."""
    here = facts(instruments={"probe": {"serial": None, "calibrated_until": None}})
    (remark,) = calibration.untraceable(here.plant)
    assert [f.text for f in remark.figures] == ["serial number", "end of the calibration"]
    assert not list(calibration.untraceable(facts().plant))


def test_a_reading_off_every_scale(facts: Facts) -> None:
    """15 bar absolute is on the 40 bar gauge, not on the 12 bar one; a sealed unit has no port for either."""
    assert not list(instruments.off_the_scale(facts(expected={"design": DESIGN})))
    (remark,) = instruments.off_the_scale(facts(expected={"design": DESIGN}, instruments={"high gauge": None}))
    assert remark.severity == "warning"
    assert remark.path == "instruments"
    assert figure(remark, "scale of low gauge").text == "−1.00 bar g to 12.00 bar g"
    sealed = {"sealed": "yes"}
    assert not list(
        instruments.off_the_scale(facts(sealed, expected={"design": DESIGN}, instruments={"high gauge": None}))
    )


def test_the_named_gauge_is_judged_alone(facts: Facts) -> None:
    """The low gauge named for the discharge would be overloaded, although another gauge on the list is not."""
    system = {"measured_with": {"discharge_pressure": "low gauge"}}
    (remark,) = instruments.off_the_scale(facts(system, expected={"design": DESIGN}))
    assert remark.severity == "error"
    assert remark.path == "systems.one.measured_with.discharge_pressure"
    assert remark.figures[0].value == 15e5


def test_a_limiter_that_no_gauge_reaches(facts: Facts) -> None:
    """A trip at 24 bar g is not shown by a gauge of 20 bar."""
    (remark,) = instruments.limiter_off_the_scale(facts(instruments={"high gauge": {"to": "20 bar g"}}))
    assert figure(remark, "high-pressure limiter").text == "24.00 bar g"
    assert not list(instruments.limiter_off_the_scale(facts()))


def test_gauge_and_probe_too_coarse_for_a_superheat(facts: Facts) -> None:
    """A gauge of class 2.5 on 12 bar is 0.3 bar off, 2.6 K for propane near -4 °C: no superheat of 6 K can be judged.

    The figures are recomputed here from the two budgets and the slope of the saturation line.
    """
    assert not list(instruments.too_coarse_for_superheat(facts(expected={"design": DESIGN})))
    coarse = {"low gauge": {"accuracy": {"of_span": "4 %"}}, "high gauge": None}
    here = facts(expected={"design": DESIGN}, instruments=coarse)
    (remark,) = instruments.too_coarse_for_superheat(here)
    assert remark.path == "instruments.low gauge"
    listed, fluid = here.plant.loaded.plant.instruments, refrigerant("R-290")
    barometric = here.plant.loaded.barometric_pressure
    pressure = instrument_budget(listed["low gauge"], "suction_pressure", 3.8e5, barometric).expanded()
    probe = instrument_budget(listed["probe"], "suction_temperature", 5 + CELSIUS, barometric).expanded()
    slope = (fluid.dew_temperature(3.81e5) - fluid.dew_temperature(3.79e5)) / 2e3
    total = figure(remark, "expanded uncertainty of the superheat").value
    assert total == pytest.approx(math.hypot(probe, pressure * slope), rel=1e-4)
    assert total is not None
    assert total > 3.0
