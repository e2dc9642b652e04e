"""Reading a record: SI values, defaults, and every slip with its place."""

from __future__ import annotations

import datetime as dt
from pathlib import Path

import pytest

from commission.description import LoadedPlant, load_plant
from commission.records import RecordError, read_record

from .conftest import TRIM, Write


def problems(path: Path, loaded: LoadedPlant) -> list[tuple[int | None, str, str | None]]:
    """Line, message and nearest word of every problem found."""
    with pytest.raises(RecordError) as caught:
        read_record(path, loaded)
    return [(p.line, p.message, p.nearest) for p in caught.value.problems]


def line_of(text: str, path: Path) -> int:
    """The line of a file in which a text stands."""
    return path.read_text(encoding="utf-8").split(text)[0].count("\n") + 1


def test_gauge_readings_become_absolute_at_the_site(write: Write, loaded: LoadedPlant) -> None:
    """A gauge reading counts from the air pressure that the altitude gives (ISO 2533: 976.6 hPa at 310 m)."""
    record = read_record(write(), loaded)
    assert record.readings["suction_pressure"].value == pytest.approx(2.90e5 + 97658, abs=30)
    assert not record.barometer_measured


def test_a_measured_barometer_takes_the_place_of_the_altitude(write: Write, loaded: LoadedPlant) -> None:
    """With a barometer in the record, gauge readings count from what it showed."""
    record = read_record(write(("conditions:\n", "conditions:\n  barometric_pressure: 955 mbar a\n")), loaded)
    assert record.readings["suction_pressure"].value == pytest.approx(2.90e5 + 95500)
    assert record.barometer_measured


def test_instrument_comes_from_the_description_where_none_is_named(write: Write, loaded: LoadedPlant) -> None:
    """`measured_with` names the instrument of a reading that names none; the written text is kept."""
    reading = read_record(write(), loaded).readings["discharge_pressure"]
    assert (reading.instrument, reading.as_written) == ("high gauge", "11.80 bar g")


def test_the_mean_of_samples_is_the_value(write: Write, loaded: LoadedPlant) -> None:
    """Samples are kept, and their mean counts."""
    samples = "{samples: [2.3 °C, 2.4 °C, 2.6 °C], instrument: air probe}"
    path = write(("{value: 2.4 °C, instrument: air probe, where: air on the cooler}", samples))
    reading = read_record(path, loaded).conditions["heat_source_inlet_temperature"]
    assert reading.value == pytest.approx(275.15 + 1.3 / 3)
    assert len(reading.samples) == 3


def test_three_phases_give_mean_and_unbalance(write: Write, loaded: LoadedPlant) -> None:
    """Unbalance is the largest deviation from the mean over the mean: 0.2/3.0 for 2.9, 2.9 and 3.2 A."""
    path = write(("readings:\n", "readings:\n  current: {phases: [2.9 A, 2.9 A, 3.2 A]}\n"))
    readings = read_record(path, loaded).readings
    assert readings["current"].value == pytest.approx(3.0)
    assert readings["current_unbalance"].value == pytest.approx(0.2 / 3.0)


def test_times_keep_their_zone(write: Write, loaded: LoadedPlant) -> None:
    """A visit is one moment in the world; times since start and defrost are seconds."""
    record = read_record(write(), loaded)
    assert record.started == dt.datetime(2026, 4, 21, 9, 20, tzinfo=dt.UTC)
    assert (record.file.since_start, record.file.since_defrost) == (2400.0, 5700.0)


def test_all_slips_are_reported_in_one_run(write: Write, loaded: LoadedPlant) -> None:
    """Unknown quantity, instrument and stage suggest the nearest; bare and impossible values say what to write."""
    path = write(
        ("stage: visit", "stage: vist"),
        ("instrument: low gauge", "instrument: low gage"),
        ("discharge_pressure: 11.80 bar g", "discharge_presure: 11.80 bar g\n  liquid_temperature: 31"),
        ("value: 24.0 °C", "value: 24.0 K"),
    )
    found = problems(path, loaded)
    assert [(line, near) for line, _, near in found] == [
        (line_of("stage: vist", path), "visit"),
        (line_of("24.0 K", path), None),
        (line_of("low gage", path), "low gauge"),
        (line_of("discharge_presure", path), "discharge_pressure"),
        (line_of("liquid_temperature: 31", path), None),
    ]


@pytest.mark.parametrize(
    ("old", "new", "part"),
    [
        ("started: 2026-04-21T10:20:00+01:00", "started: 2026-04-21T10:20:00", "zone"),
        ("started: 2026-04-21T10:20:00+01:00", "started: 2026-04-21", "zone"),
        ("started: 2026-04-21T10:20:00+01:00", "started: yesterday", "date with time and zone"),
        ("mode: trim", "mode: test", "witnessed"),
        ("since_start: 40 min", "since_start: 40", "bare number"),
        ("2.90 bar g", "2.90 bar", "gauge or absolute"),
        ("2.90 bar g", "-1.2 bar g", "perfect vacuum"),
        ("2.90 bar g", "nan bar g", "number"),
        ("instrument: low gauge", "instrument: air probe", "measures temperature"),
        ("readings:\n", "readings:\n  heat_sink_flow: 2500 m3/h\n", "under conditions"),
        ("conditions:\n", "conditions:\n  superheat: 6 K\n", "under readings"),
        ("conditions:\n", "conditions:\n  barometric_pressure: 0 bar g\n", "absolute"),
        ("conditions:\n", "conditions:\n  barometric_pressure: 2 bar a\n", "barometer"),
        ("visit.clean: yes", "visit.clean: perhaps", "yes or no"),
        ("visit.clean: yes", "visit.clean: no", "reason"),
        ("visit.clean: yes", "visit.clean: {answer: not applicable}", "reason"),
        ("visit.clean: yes", "visit.setting: 24 bar g", "outside"),
        ("visit.clean: yes", "visit.paper: a.pdf", "file"),
        ("visit.clean: yes", "visit.clen: yes", "no item"),
        ("mode: trim", "mode: trim\ncorrects: 2026-01-01-0000-store-visit", "why"),
        ("mode: trim", "mode: trim\nwhy_corrected: a slip", "which record"),
        ("mode: trim", "mode: trim\nattachments: [../secret.txt]", "beside the record"),
        ("mode: trim", "mode: trim\nattachments: [a.txt, A.txt]", "attached already"),
        ("mode: trim", "mode: trim\nended: 2026-04-21T10:00:00+01:00", "ends before"),
        ("mode: trim", "mode: trim\nitem_updates: [{item: 1, closed: yes}]", "closed by somebody"),
        ("system: store", "system: stor", "no system"),
        ("mode: trim", "mode: trim\nmode: test", "twice"),
        ("mode: trim", "mode: trim\nfiled: {form: 1}", "filed already"),
    ],
)
def test_each_slip_says_what_to_write(write: Write, loaded: LoadedPlant, old: str, new: str, part: str) -> None:
    """Each kind of slip is found, with a line and words that a person can act on."""
    found = problems(write((old, new)), loaded)
    assert any(part in message and line is not None for line, message, _ in found), found


def test_answers_are_typed_and_missing_ones_listed(write: Write, loaded: LoadedPlant) -> None:
    """A pressure setting becomes Pa absolute; items of the stage without an answer are named."""
    path = write(("  visit.clean: yes\n", "  visit.setting: 21.8 bar g\n  visit.suction: 2.9 bar g\n"))
    record = read_record(path, loaded)
    assert record.answers["visit.setting"].value == pytest.approx(21.8e5 + loaded.barometric_pressure)
    assert record.unanswered == ("visit.clean", "visit.paper", "visit.words")


def test_a_failed_answer_with_a_reason_is_kept_as_failed(write: Write, loaded: LoadedPlant) -> None:
    """`no`, and a setting outside its bounds, are answers too; they count as failed."""
    answers = "visit.clean: {answer: no, reason: leaves}\n  visit.setting: {answer: 24 bar g, reason: to be set}"
    record = read_record(write(("visit.clean: yes", answers)), loaded)
    outcomes = {k: a.outcome for k, a in record.answers.items() if k in ("visit.clean", "visit.setting")}
    assert outcomes == {"visit.clean": "failed", "visit.setting": "failed"}


def test_a_reading_answers_its_item(write: Write, loaded: LoadedPlant) -> None:
    """What stands under readings is not asked again among the answers, and is no item without an answer."""
    record = read_record(write(), loaded)
    answer = record.answers["visit.suction"]
    assert (answer.answer, answer.outcome) == ("2.90 bar g", "done")
    assert answer.value == record.readings["suction_pressure"].value
    assert "visit.suction" not in record.unanswered


def test_a_reading_answers_no_item_of_another_moment(write: Write, folder: Path) -> None:
    """Two items that ask for one quantity ask at different moments: each is answered by itself."""
    own = folder / "checklists" / "own.yaml"
    more = (
        "  - {id: visit.later, do: Read it again., answer: value, quantity: suction_pressure, source: common practice}"
    )
    own.write_text(own.read_text(encoding="utf-8") + more + "\n", encoding="utf-8")
    record = read_record(write(), load_plant(folder))
    assert {"visit.suction", "visit.later"} <= set(record.unanswered)


def test_a_reading_answers_no_setting(write: Write, folder: Path) -> None:
    """An item that holds its value to a fixed bound asks for a setting or a trip: no reading answers it."""
    own = folder / "checklists" / "own.yaml"
    old = "quantity: suction_pressure,"
    text = own.read_text(encoding="utf-8")
    assert old in text
    own.write_text(text.replace(old, f"{old} must_read: {{at_least: 3.5 bar g}},"), encoding="utf-8")
    assert "visit.suction" in read_record(write(), load_plant(folder)).unanswered


def test_a_missing_file_and_a_list_are_refused(tmp_path: Path, loaded: LoadedPlant, write: Write) -> None:
    """No file, and a file that holds a list instead of keys, are errors of the same kind."""
    assert "no such file" in problems(tmp_path / "nowhere.yaml", loaded)[0][1]
    assert problems(write(text="- 1\n- 2\n"), loaded)


def test_the_shipped_form_is_the_form_of_the_tests(write: Write, loaded: LoadedPlant) -> None:
    """The record used throughout is accepted as it stands, so that each change above is the only fault."""
    assert read_record(write(), loaded).text == TRIM


def test_upsets_are_the_words_of_acceptance() -> None:
    """What a record may say about upsets of the heat balance is what acceptance knows, word for word."""
    from typing import get_args

    from commission.acceptance.routes import UPSETS
    from commission.records.model import Upset

    assert set(get_args(Upset)) == set(UPSETS)
