"""One visit as it was filed: its page, and the certificate of an accepted test, printed from what was frozen."""

from __future__ import annotations

from collections.abc import Iterable
from typing import TYPE_CHECKING, Any

from commission.errors import CommissionError
from commission.manual.archive import Archive, title_of, when
from commission.manual.book import Sheet, slug
from commission.manual.gather import PlantData, SystemData
from commission.manual.heating_up import HeatingUps, heating_ups
from commission.manual.page_display import page_display
from commission.manual.records_pages import VERDICT_CLASS, signed
from commission.manual.showing import unit_of
from commission.quantities import NOMENCLATURE, Display, Kind, limits_in_words

if TYPE_CHECKING:
    from collections.abc import Mapping

    from commission.records import FiledRecord
    from commission.records.filed import FiledBlock, FrozenClosure, FrozenDeviation, FrozenGuarantee, FrozenReading
    from commission.records.model import Answer, Measured


def _reading(
    plant: PlantData, display: Display, key: str, r: FrozenReading, by_hand: Mapping[str, Measured]
) -> dict[str, str]:
    """A reading as it was written; where only its origin was (`mean of 5 samples`), the number stands before it.

    Phases are shown one by one, and what the person remarked beside the value is kept with its place.
    """
    number = any(c.isdigit() for c in r.written[:2])
    instrument = plant.loaded.plant.instruments.get(r.instrument or "")
    step = instrument.resolved.resolution if instrument is not None else None
    shown = display.measured(key, r.value, step) if key in NOMENCLATURE else ""
    written = r.written if number or not shown else f"{shown}, {r.written}"
    said = by_hand.get(key)
    if said is not None and said.phases:
        written = f"{', '.join(said.phases)}; mean {shown}"
    return {
        "label": display.label(key),
        "written": written,
        "where": "; ".join(text for text in (r.where, said and said.remark) if text),
        "instrument": r.instrument or "not stated",
    }


def _deviation(display: Display, key: str, d: FrozenDeviation, written: str) -> dict[str, Any]:
    kind = display.kind(key)
    display = display.fitting(kind, d.expected)
    return {
        "label": display.label(key),
        "unit": unit_of(display, kind),
        "read": display.number(d.reading, kind),
        "written": written,
        "expected": display.number(d.expected, kind),
        "deviation": signed(display, kind, d.deviation),
        "expanded": display.spread(d.expanded, kind),
        "spread_unit": display.spread_unit(kind),
        "significant": d.significant,
    }


def _limits(display: Display, kind: Kind, low: float | None, high: float | None) -> str:
    return limits_in_words(low, high, lambda value: display.text(value, kind))


def _guarantee(display: Display, g: FrozenGuarantee) -> dict[str, Any]:
    from commission.acceptance.decision import sure_text

    kind = display.kind(g.quantity)
    display = display.fitting(kind, g.guaranteed)
    shares = [
        f"{display.text(v, Kind.RATIO, 1)} {word}"
        for v, word in ((g.below, "below"), (g.above, "above"))
        if v is not None
    ]
    at = ", ".join(f"{display.words(k)} {display.of(k, v)}" for k, v in g.at.items())
    pairs = [
        ("Promised", f"{display.text(g.guaranteed, kind)} at {at}" if at else display.text(g.guaranteed, kind)),
        ("Tolerance", ", ".join(shares) or "none stated"),
        ("Carried to the day by", g.carried_by),
        ("Promised for the condition of the day", display.text(g.carried, kind) if g.carried is not None else ""),
        ("Limit on the day", _limits(display, kind, g.limit_low, g.limit_high)),
        ("Measured", display.text(g.measured, kind) if g.measured is not None else ""),
        ("Measured by", g.route or ""),
        ("Expanded uncertainty (95 %)", f"{display.spread(g.expanded, kind)} {display.spread_unit(kind)}"
         if g.expanded is not None else ""),
        ("Decision rule", f"{g.rule} acceptance"),
        ("Accepted where", _limits(display, kind, g.acceptance_low, g.acceptance_high)),
        ("Probability of conformity", "" if g.probability is None else sure_text(g.probability)),
        ("Target frozen before the test", "yes" if g.frozen_before else "no"),
        ("Clause", g.source or ""),
        ("No verdict because", g.withheld or ""),
        ("What would decide", g.what_would_decide or ""),
    ]  # fmt: skip
    return {
        "label": display.label(g.quantity),
        "outcome": g.outcome,
        "look": VERDICT_CLASS[g.outcome],
        "facts": [{"label": a, "text": t} for a, t in pairs if t],
    }


STAYS_IN_GAS = "the power that stays in the gas (compressor power less what leaves through its shell)"


def _closure(display: Display, c: FrozenClosure) -> dict[str, Any]:
    """Two routes held against each other, as a sentence and whether they agree."""
    kind = display.kind("cooling_capacity" if c.quantity == "first law" else c.quantity)
    difference = (
        f"{signed(display, kind, c.difference)} ± {display.spread(c.expanded, kind)} {display.spread_unit(kind)}"
    )
    if c.quantity == "first law":
        given, taken = display.label("heating_capacity"), display.words("cooling_capacity")
        text = f"{given} ({c.second}) less {taken} ({c.first}) less {STAYS_IN_GAS}: {difference}"
    else:
        text = f"{display.label(c.quantity)} by {c.first} less that by {c.second}: {difference}"
    return {"text": text, "agree": not c.significant}


def _judged_sheet(plant: PlantData, data: SystemData, record: FiledRecord) -> dict[str, str | None]:
    """Page and digest line of the frozen sheet that a record was judged by; None where it cannot be read as it was."""
    from commission.acceptance import read_sheet
    from commission.records import digest_of_file

    judged = record.filed.judged_by
    path = plant.loaded.folder / "records" / judged.sheet if judged.sheet else None
    if path is None or not path.is_file() or digest_of_file(path) != judged.sha256:
        return {"sheet_page": None, "sheet_digest": None}
    try:
        digest = read_sheet(path).digest
    except CommissionError:
        return {"sheet_page": None, "sheet_digest": None}
    return {"sheet_page": data.page(f"test-sheet-{slug(path.stem)}"), "sheet_digest": digest}


def _standing(record: FiledRecord, archive: Archive) -> list[dict[str, Any]]:
    """The reservations under which the system stood after this visit, and which of them a later record closed."""
    items = {i.number: i for i in archive.items}
    found = []
    for s in record.filed.standing:
        item = items.get(s.number)
        earlier = s.found_in if s.found_in != record.id else None
        since = f"{item.closed_on} by {item.closed_by}" if item and item.closed_on else None
        found.append(
            {
                "number": s.number,
                "what": s.what,
                "earlier": earlier,
                "page": archive.pages.get(s.found_in),
                "since": since,
            }
        )
    return found


def results_among(data: SystemData, keys: Iterable[str]) -> frozenset[str]:
    """Of the quantities that a record holds under its conditions, those that the machine itself makes so.

    A medium is read at both ends in one place; how it leaves is a result, but where the machine is given it.
    """
    given = data.rated.conditions if data.rated is not None else {}
    return frozenset(k for k in keys if "_outlet_" in k and k not in given)


def _shared(plant: PlantData, data: SystemData, record: FiledRecord, archive: Archive) -> dict[str, Any]:
    """What record page and certificate share."""
    display = page_display(plant.loaded, data.id, record.filed.barometric_pressure)
    filed, file = record.filed, record.file
    results = results_among(data, filed.conditions)

    def read(key: str, frozen: FrozenReading) -> dict[str, str]:
        return _reading(plant, display, key, frozen, file.conditions)

    return {
        "record": record,
        "when": when(record),
        "name": title_of(record),
        "look": VERDICT_CLASS[record.verdict],
        "people": [(role, p) for role, p in file.people.items()],
        "conditions": [read(k, r) for k, r in filed.conditions.items() if k not in results],
        "results": [read(k, r) for k, r in filed.conditions.items() if k in results],
        "air": f"{filed.barometric_pressure / 100:.0f} hPa"
        + ("" if filed.barometer_measured else ", not measured: from the altitude"),
        "guarantees": [_guarantee(display, g) for g in filed.guarantees],
        "instruments": [(name, list(words.items())) for name, words in filed.instruments.items()],
        "attachments": [
            (
                a.file,
                f"records/{a.path}" if any(f.site_path == f"records/{a.path}" for f in archive.files) else None,
                a.sha256,
            )
            for a in filed.attachments
        ],
        "items": [i for i in archive.items if i.found_in == record.id],
        "closures": [_closure(display, c) for c in filed.closures],
        **_judged_sheet(plant, data, record),
        "standing": _standing(record, archive),
    }


def _answers(plant: PlantData, data: SystemData, record: FiledRecord) -> list[tuple[str, list[tuple[str, str, str]]]]:
    """What was answered, in the order of the checklist: stage, and of each item the act, the answer and the words
    beside it. An item that the list no longer has stands last, by its id."""
    from commission.checklists import stages

    left = dict(record.file.answers)
    found = []
    for stage in stages(plant.loaded, data.id):
        rows = [_answer(item.do, left.pop(item.id)) for item in stage.items if item.id in left]
        if rows:
            found.append((stage.title, rows))
    if left:
        found.append(("No longer on the checklist", [_answer(key, answer) for key, answer in left.items()]))
    return found


def _answer(act: str, answer: Answer) -> tuple[str, str, str]:
    return act, answer.answer, "; ".join(text for text in (answer.reason, answer.remark, answer.by) if text)


_HEAT_UP = ("heat_up_time", "heat_up_energy")


def _heat_up(found: HeatingUps | None, key: str) -> str | None:
    """What a heat-up should take by the description of today: a record does not hold where it started from."""
    for way in found.ways if found else ():
        row = next((r for r in way.rows if r.key.startswith(key)), None)
        if row is not None and row.value is not None:
            title = way.title[:1].lower() + way.title[1:]
            band = f", {row.band}" if row.band else ""
            return f"not compared, since no start temperatures are recorded; {title}: {row.value} {row.unit}{band}"
    return None


def _not_judged(plant: PlantData, data: SystemData, filed: FiledBlock) -> dict[str, Any]:
    """Readings without an expected value and why; of a heat-up, what the rated day would give."""
    heated = any(k in _HEAT_UP for k in filed.not_judged)
    found = heating_ups(plant, data) if heated else None
    return {
        "not_judged": [
            (data.display.label(k), (_heat_up(found, k) if k in _HEAT_UP else None) or why)
            for k, why in filed.not_judged.items()
        ],
        "heated": found.words if found else None,
        "running_page": data.page("how-it-should-run"),
    }


def record_page(plant: PlantData, data: SystemData, record: FiledRecord, archive: Archive) -> Sheet:
    """One visit as it was filed."""
    display = page_display(plant.loaded, data.id, record.filed.barometric_pressure)
    filed = record.filed
    written = {k: r.written for k, r in filed.readings.items()}
    judged = [_deviation(display, k, d, written.get(k, "")) for k, d in filed.deviations.items()]
    by_hand = record.file.readings
    alone = [_reading(plant, display, k, r, by_hand) for k, r in filed.readings.items() if k not in filed.deviations]
    corrected = archive.corrected.get(record.id)
    context = {
        **_shared(plant, data, record, archive),
        "deviations": judged,
        "alone": alone,
        "answers": _answers(plant, data, record),
        **_not_judged(plant, data, filed),
        "routes": [
            (
                r.route,
                display.label(r.quantity),
                None if r.value is None else display.of(r.quantity, r.value),
                r.refused,
            )
            for r in filed.routes
        ],
        "corrected_page": archive.pages.get(corrected) if corrected else None,
        "corrects_page": archive.pages.get(record.file.corrects) if record.file.corrects else None,
        "certificate": certificate_id(record, archive) if archive.accepted(record) else None,
        "records_page": data.page("records"),
    }
    title = f"{title_of(record)}, {record.started.date().isoformat()}"
    return Sheet(archive.pages[record.id], title, data.group, "record.html", context, data.kicker, listed=False)


def certificate_id(record: FiledRecord, archive: Archive) -> str:
    """The page of the certificate."""
    return f"{archive.pages[record.id]}-certificate"


def certificates(plant: PlantData, data: SystemData, archive: Archive) -> tuple[Sheet, ...]:
    """A certificate for each accepted test, printed from what was frozen when it was filed."""
    return tuple(
        Sheet(
            certificate_id(r, archive),
            "Certificate of provisional acceptance" if r.filed.standing else "Certificate of acceptance",
            data.group,
            "certificate.html",
            {**_shared(plant, data, r, archive), "plant_name": plant.name, "system_name": data.name,
             "address": plant.loaded.plant.plant.address, "record_page": archive.pages[r.id],
             "records_page": data.page("records"), "unanswered": archive.open_answers(data.id)},
            kicker=data.kicker,
            short=f"Certificate {r.started.date().isoformat()}",
            paper=True,
        )
        for r in archive.of(data.id)
        if archive.accepted(r)
    )  # fmt: skip
