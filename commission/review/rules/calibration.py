"""Instruments whose reading would prove nothing: calibration run out, or no serial number and no calibration."""

from __future__ import annotations

from collections.abc import Iterator

from commission.review.facts import PlantFacts
from commission.review.finding import Figure, Remark


def expired(plant: PlantFacts) -> Iterator[Remark]:
    """A calibration that ends before the visit, or starts after it.

    Source: JCGM 100 needs a known error of the instrument on the day; contracts and EN 378-4 ask for calibrated
    instruments. Judged only where a day of the visit is given.
    """
    if plant.visit is None:
        return
    for key, instrument in plant.loaded.plant.instruments.items():
        day = Figure("day of the visit", plant.visit.isoformat())
        until, on = instrument.calibrated_until, instrument.calibrated_on
        if until is not None and until < plant.visit:
            yield Remark(
                "warning",
                f"instruments.{key}.calibrated_until",
                f"The calibration of {key} runs out before the visit.",
                (Figure("calibrated until", until.isoformat()), day),
                "Have it calibrated before the visit, or bring another: what it reads proves nothing.",
            )
        if on is not None and on > plant.visit:
            yield Remark(
                "warning",
                f"instruments.{key}.calibrated_on",
                f"The calibration of {key} is dated after the visit.",
                (Figure("calibrated on", on.isoformat()), day),
                "Check the date on the certificate.",
            )


def untraceable(plant: PlantFacts) -> Iterator[Remark]:
    """An instrument without serial number or without an end of its calibration.

    Source: common practice: a report that cannot name the instrument and its calibration is void.
    """
    for key, instrument in plant.loaded.plant.instruments.items():
        missing = [
            words
            for words, value in (
                ("serial number", instrument.serial),
                ("end of the calibration", instrument.calibrated_until),
            )
            if value is None
        ]
        if missing:
            yield Remark(
                "warning",
                f"instruments.{key}",
                f"What {key} reads cannot stand in a report.",
                tuple(Figure("not written", words) for words in missing),
                "Write serial number and calibration from the certificate.",
            )


def expired_on_the_day(plant: PlantFacts) -> Iterator[Remark]:
    """A filed record that was read with an instrument whose calibration had run out on that day.

    Source: as `expired`; the calibration is the one frozen into the record, so a later renewal changes nothing.
    """
    from commission.records import history, in_force

    for record in in_force(history(plant.loaded)):
        day = record.started.date().isoformat()
        for key, instrument in record.filed.instruments.items():
            until = instrument.get("calibrated_until")
            if until is None or until >= day:
                continue
            yield Remark(
                "warning",
                f"records/{record.path.name}",
                f"The record of {day} was read with {key}, whose calibration had run out.",
                (Figure("calibrated until", until), Figure("day of the record", day)),
                "Have the instrument checked and, if it was off, read again and file a correcting record.",
            )
