"""The records of the example plant: two years of visits, as they were filed and never changed since."""

from __future__ import annotations

import hashlib
import itertools
from collections.abc import Mapping
from pathlib import Path

import pytest

from commission.description import LoadedPlant
from commission.records import FiledRecord, drifts, history, in_force, open_items
from commission.records.logger import quietest, read_log, read_mapping

VERDICTS = {
    "2025-05-08-1040-freezer-room-performance": "conforming",
    "2025-07-10-1420-dining-hall-performance": "conforming",
    "2025-10-28-0850-shower-water-performance": "conforming",
    "2026-01-13-1005-floor-heating-performance": "undecided",
    "2026-01-20-0935-floor-heating-performance": "conforming",
    "2026-05-14-1320-cold-room-performance": "conforming",
    "2026-07-14-1430-cold-room-performance": "not conforming",
    "2026-07-21-1410-cold-room-performance": "conforming",
}
"""Every test and its verdict; all other visits are trims, which have none."""

Filed = Mapping[str, FiledRecord]


@pytest.fixture(scope="module")
def filed(plant: LoadedPlant) -> Filed:
    """All filed records by name, in the order of their visits."""
    return {record.id: record for record in history(plant)}


def test_every_seal_holds_and_every_file_is_listed(filed: Filed, example_folder: Path) -> None:
    """The list of digests names every file under records, and each has the digest that hashlib finds."""
    folder = example_folder / "records"
    listed = dict(
        reversed(line.split("  ", 1))
        for line in (folder / "SHA256SUMS").read_text(encoding="utf-8").splitlines()
    )  # fmt: skip
    there = {p.relative_to(folder).as_posix() for p in folder.rglob("*") if p.is_file()} - {"SHA256SUMS", ".lock"}
    assert set(listed) == there
    for name, digest in listed.items():
        assert hashlib.sha256((folder / name).read_bytes()).hexdigest() == digest, name
    assert all(record.seal_holds for record in filed.values())


def test_verdicts_are_those_of_the_story(filed: Filed) -> None:
    """One test is lost to a matted condenser and won after cleaning, one is undecided until it is repeated with better
    probes, and that one waited for winter."""
    assert {name: r.verdict for name, r in filed.items() if r.file.mode == "test"} == VERDICTS
    assert {r.verdict for r in filed.values() if r.file.mode == "trim"} == {"none"}
    assert all(filed[name].filed.judged_by.by == "frozen test sheet" for name in VERDICTS)


def test_every_guarantee_was_tested(filed: Filed, plant: LoadedPlant) -> None:
    """Each quantity that a system guarantees was decided in a witnessed test by a sheet that was frozen before."""
    for system, described in plant.plant.systems.items():
        promised = {g.quantity for g in described.guarantee}
        tests = [r for r in filed.values() if r.system == system and r.file.mode == "test"]
        decided = {g.quantity for r in tests for g in r.filed.guarantees if g.outcome == "conforming"}
        assert promised
        assert decided == promised, system
        assert all("witness" in r.file.people for r in tests)


def test_coarse_instruments_leave_a_guarantee_undecided(filed: Filed) -> None:
    """Two single probes of class B doubt a change of 5.6 K too much for the guarded rule, and the better instrument is
    what would decide; the matched pair a week later does. Everything else was the same."""
    coarse = filed["2026-01-13-1005-floor-heating-performance"].filed
    fine = filed["2026-01-20-0935-floor-heating-performance"].filed
    for guarantee, again in zip(coarse.guarantees, fine.guarantees, strict=True):
        assert guarantee.measured is not None
        assert guarantee.limit_low is not None
        assert guarantee.acceptance_low is not None
        assert guarantee.expanded is not None
        assert again.expanded is not None
        assert guarantee.limit_low < guarantee.measured < guarantee.acceptance_low
        assert "spare probes" in (guarantee.what_would_decide or "")
        assert "two probes compared in one bath" in (guarantee.what_would_decide or "")
        assert again.outcome == "conforming"
        assert again.expanded < 0.4 * guarantee.expanded
    assert {"spare probes"} == set(coarse.instruments) - set(fine.instruments)


def test_the_fouled_condenser_shows_in_all_its_readings(filed: Filed) -> None:
    """Little air condenses hotter, at more power and less capacity than expected; the cleaned one is as expected."""
    fouled = filed["2026-07-14-1430-cold-room-performance"].filed.model_deviations
    clean = filed["2026-07-21-1410-cold-room-performance"].filed.model_deviations
    for key, sign in {
        "condensing_temperature": 1,
        "discharge_pressure": 1,
        "power_input": 1,
        "cooling_cop": -1,
    }.items():
        assert fouled[key].significant, key
        assert fouled[key].deviation * sign > 0.0, key
        assert not clean[key].significant, key


def test_nothing_was_read_that_cannot_be(filed: Filed) -> None:
    """No record holds readings against the first or second law, an unsteady plant, or two routes that disagree."""
    for name, record in filed.items():
        assert not record.filed.impossible, name
        assert all(s.steady is not False for s in record.filed.steadiness), name
        assert not [c for c in record.filed.closures if c.significant], name


def test_energy_balances_over_the_refrigerant(filed: Filed) -> None:
    """Heat out is heat in and power, but for the heat lost to the air around (first law; shell loss up to 15 %)."""
    balanced = 0
    for name, record in filed.items():
        routes = {r.quantity: r.value for r in record.filed.routes if r.route == "compressor heat balance"}
        cooling, heating = routes.get("cooling_capacity"), routes.get("heating_capacity")
        if cooling is None or heating is None:
            continue
        power = record.filed.readings["power_input"].value
        assert 0.75 * power < heating - cooling < power, name
        balanced += 1
    assert balanced >= 3


def test_visits_are_in_order_and_after_the_installation(filed: Filed, plant: LoadedPlant) -> None:
    """Nobody visits a plant that is not there, sheets are frozen before their test, and two years are covered."""
    records = list(filed.values())
    assert all(a.started <= b.started for a, b in itertools.pairwise(records))
    assert (records[-1].started - records[0].started).days > 500
    for name, record in filed.items():
        installed = plant.system(record.system).installed_on
        assert installed is None or installed < record.started.date(), name
        sheet = record.filed.judged_by.sheet
        assert sheet is None or Path(sheet).name[:10] < name[:10], name
    assert {r.system for r in records} == set(plant.plant.systems)


def test_calibrations_cover_every_visit(filed: Filed) -> None:
    """Each instrument of a record was calibrated before the visit and its calibration had not run out."""
    for name, record in filed.items():
        day = record.started.date().isoformat()
        assert record.filed.instruments or not record.file.readings, name
        for key, words in record.filed.instruments.items():
            assert words["calibrated_on"] < day <= words["calibrated_until"], (name, key)


def test_open_items_are_raised_and_closed(plant: LoadedPlant, filed: Filed) -> None:
    """Every item names records that exist; those closed were closed later by somebody; some still wait."""
    items = open_items(plant)
    assert [i.number for i in items] == list(range(1, len(items) + 1))
    closed = [i for i in items if i.state == "closed"]
    assert len(closed) >= 4
    assert {i.system for i in items if i.state == "open"} == {"cold-room", "freezer-room"}
    for one in closed:
        assert one.closed_by, one
        assert one.closed_in is not None
        assert filed[one.closed_in].started > filed[one.found_in].started, one
    deferred = next(i for i in items if "deferred to winter" in i.what)
    assert deferred.closed_in == "2026-01-20-0935-floor-heating-performance"
    assert deferred.due is not None
    assert deferred.closed_on is not None
    assert deferred.closed_on <= deferred.due


def test_a_correction_takes_the_place_of_the_slip(filed: Filed) -> None:
    """The corrected record stays where it is and says no more; the new one names it and the reason."""
    (correction,) = [r for r in filed.values() if r.file.corrects]
    assert correction.file.corrects in filed
    assert correction.file.why_corrected
    assert correction.file.corrects not in {r.id for r in in_force(filed.values())}


def test_slow_fouling_of_the_freezer_is_found(plant: LoadedPlant) -> None:
    """Three visits with less and less condenser air end in a drift that the visit before showed already."""
    found = {d.quantity: d for d in drifts(plant, "freezer-room")}
    assert found["condensing_temperature"].repeated
    assert found["condensing_temperature"].change > 0.0
    assert not {"evaporating_temperature", "suction_pressure"} & set(found)
    assert not drifts(plant, "dining-hall")


def test_the_logger_file_gives_the_readings_of_its_record(filed: Filed, plant: LoadedPlant) -> None:
    """The steadiest stretch of the attached log, read by the attached mapping, is what the record says."""
    (record,) = [r for r in filed.values() if r.system == "dining-hall" and r.file.stage == "trim"]
    paths = {Path(a.path).suffix: plant.folder / "records" / a.path for a in record.filed.attachments}
    log = read_log(paths[".csv"], read_mapping(paths[".yaml"], plant), plant.barometric_pressure)
    window = quietest(log)
    assert window is not None
    assert log.moment(window.start) == record.started
    for key in ("suction_pressure", "discharge_temperature", "power_input"):
        assert window.means[key] == pytest.approx(record.filed.readings[key].value, rel=1e-5)
