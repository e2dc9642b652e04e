"""The pages of the plant as a whole."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass

from commission.manual.archive import OpenLine
from commission.manual.book import Sheet, slug
from commission.manual.documents import DocumentLink
from commission.manual.facts import DUTY_WORDS, Fact
from commission.manual.gather import PlantData, SystemData
from commission.manual.states import Next, Standing, Step, has_faults, most_urgent, next_step, steps, where_they_stand
from commission.manual.upkeep_pages import PAGE, NextDuty
from commission.quantities import NOMENCLATURE, Display, Kind, methods


@dataclass(frozen=True, slots=True)
class DatedLine:
    """Something that is due by a day, `until` as text, with its place in the manual."""

    until: str
    what: str
    system: str
    page: str
    anchor: str


def by_date(
    open_items: Iterable[OpenLine], coming: Mapping[str, Iterable[NextDuty]], count: int = 3
) -> tuple[DatedLine, ...]:
    """Open items with a day, and the duties of each system by its name: the nearest or longest overdue first."""
    lines = [
        DatedLine(i.due, i.what, i.system, "open-items", f"item-{i.number}") for i in open_items if i.due is not None
    ]
    lines += [DatedLine(d.until, d.what, name, PAGE, d.anchor) for name, found in coming.items() for d in found]
    return tuple(sorted(lines, key=lambda line: line.until)[:count])


@dataclass(frozen=True, slots=True)
class GlanceSystem:
    """One system on the front page."""

    name: str
    line: str
    steps: tuple[Step, ...]
    next: Next
    doors: tuple[tuple[str, str], ...]
    because: str | None
    coming: NextDuty | None


def at_a_glance(
    plant: PlantData,
    standings: dict[str, Standing],
    open_items: tuple[OpenLine, ...],
    counts: dict[str, int],
    duties: Mapping[str, tuple[NextDuty, ...]],
) -> Sheet:
    """The front page: what plant this is, where each system stands, what is open, what to do next.

    `duties` are the next ones of each system by its id.
    """
    coming = {identity: found[0] for identity, found in duties.items() if found}
    shown, urgent = [], []
    for data in plant.systems:
        pages = {
            "what": data.page("what-it-is"),
            "findings": "findings",
            "checklist": data.page("checklist"),
            "day_sheet": data.page("day-sheet"),
            "test": data.page("test-sheet"),
            "open": "open-items",
            "records": data.page("records"),
        }
        standing = standings[data.id]
        step = next_step(standing, pages)
        urgent.append((data.name, step, standing))
        doors = tuple(
            (data.page(p), t)
            for p, t in (
                ("how-it-should-run", "How it should run"),
                ("checklist", "Checklist"),
                ("day-sheet", "Day sheet"),
                ("records", "Records"),
            )
        )
        shown.append(
            GlanceSystem(
                data.name,
                _system_line(data, data.display),
                steps(standing),
                step,
                doors,
                data.because,
                coming.get(data.id),
            )
        )
    site = plant.loaded.plant.plant
    context = {
        "systems": shown,
        "urgent": most_urgent(urgent),
        "faults": has_faults(tuple(standings.values())),
        "dated": by_date(open_items, {d.name: duties.get(d.id, ()) for d in plant.systems}),
        "address": site.address,
        "summary": _summary(plant),
        "place": _place(plant),
        "open_items": open_items,
        "counts": counts,
        "first_day": min((d.until for d in coming.values()), default=None),
        "where": where_they_stand(tuple(standings.values())),
    }
    return Sheet("index", plant.name, "plant", "glance.html", context, short="Plant at a glance")


def _system_line(data: SystemData, display: Display) -> str:
    s = data.system
    parts = [DUTY_WORDS.get(s.duty, s.duty), s.refrigerant]
    if s.charge is not None:
        parts[-1] += f", {display.text(s.charge, Kind.MASS)}"
    capacity = _promised(data, display) or _rated(data, display)
    if capacity is not None:
        parts.append(capacity)
    return " · ".join(parts)


_CAPACITIES = {
    "net_cooling_capacity": "net cooling", "cooling_capacity": "cooling", "heating_capacity": "heating",
}  # fmt: skip


def _small(label: str) -> str:
    return label[:1].lower() + label[1:]


def _promised(data: SystemData, display: Display) -> str | None:
    """The capacity that the contract promises, with its condition, as nameplate and certificate have it."""
    found = next((g for g in data.system.guarantee if g.quantity in _CAPACITIES), None)
    if found is None:
        return None
    at = [
        f"{_small(display.short(key))} {display.of(key, value)}"
        for key in ("heat_source_inlet_temperature", "heat_sink_inlet_temperature", "heat_sink_outlet_temperature")
        if (value := getattr(found.at, key)) is not None
    ]
    text = f"{display.text(found.value_si, Kind.HEAT_FLOW)} {_CAPACITIES[found.quantity]} promised"
    return f"{text} ({', '.join(at)})" if at else text


def _rated(data: SystemData, display: Display) -> str | None:
    """The capacity that is calculated at the rated condition, where nothing is promised."""
    key = "heating_capacity" if data.system.duty in ("space_heating", "water_heating") else "cooling_capacity"
    rated = data.rated.expected.get(key) if data.rated else None
    return None if rated is None else f"{display.text(rated.value, Kind.HEAT_FLOW, 1)} {_CAPACITIES[key]}"


def _summary(plant: PlantData) -> str:
    n = len(plant.systems)
    return f"{n} refrigerating system{'s' if n != 1 else ''}"


def _place(plant: PlantData) -> str:
    """Height and air pressure, which every gauge at this site depends on."""
    altitude = plant.display.text(plant.loaded.plant.plant.altitude, Kind.LENGTH, 0)
    return f"{altitude} above sea level, air pressure {plant.loaded.barometric_pressure / 100:.0f} hPa"


@dataclass(frozen=True, slots=True)
class ShownInstrument:
    """One instrument."""

    anchor: str
    name: str
    facts: tuple[Fact, ...]
    until: str | None


def instruments(plant: PlantData) -> Sheet:
    """Instruments with serial, accuracy and calibration."""
    shown = []
    for name, i in plant.loaded.plant.instruments.items():
        place = str(plant.loaded.where(("instruments", name)))
        accuracy = []
        if i.accuracy is not None:
            if i.accuracy.of_span is not None:
                accuracy.append(f"{plant.display.text(i.accuracy.of_span, Kind.RATIO, 2)} of span")
            if i.accuracy.of_reading is not None:
                accuracy.append(f"{plant.display.text(i.accuracy.of_reading, Kind.RATIO, 2)} of reading")
            if i.accuracy.absolute is not None:
                accuracy.append(i.accuracy.absolute)
        pairs = [
            ("Measures", i.measures),
            ("Scale", " to ".join(t for t in (i.from_, i.to) if t)),
            ("Accuracy", " plus ".join(accuracy)),
            ("Class", i.class_ or ""),
            ("Smallest step", i.resolution or ""),
            ("Clamped on the pipe", "yes: reads the pipe, not the flow" if i.clamped_on else ""),
            ("Matched pair", "yes: compared in one bath" if i.matched_pair else ""),
            ("Serial number", i.serial or "not stated: a report with this instrument is void"),
            ("Calibrated on", i.calibrated_on.isoformat() if i.calibrated_on else ""),
            ("Calibrated until", i.calibrated_until.isoformat() if i.calibrated_until
             else "not stated: a report with this instrument is void"),
            ("Used for", ", ".join(_used_for(plant, name))),
        ]  # fmt: skip
        facts = tuple(Fact(label, text, place) for label, text in pairs if text)
        until = i.calibrated_until.isoformat() if i.calibrated_until else None
        shown.append(ShownInstrument(slug(name), name, facts, until))
    return Sheet("instruments", "Instruments", "plant", "instruments.html", {"instruments": shown})


def _used_for(plant: PlantData, name: str) -> list[str]:
    found = []
    for data in plant.systems:
        for key, instrument in data.system.measured_with.items():
            if instrument == name:
                label = data.display.words(key) if key in NOMENCLATURE else key
                found.append(f"{label} ({data.name})" if len(plant.systems) > 1 else label)
    return found


def method_page() -> Sheet:
    """All methods with formula and source, and the nomenclature."""
    groups: dict[str, list[object]] = {}
    for kind in Kind:
        quantities = [q for q in NOMENCLATURE.values() if q.kind is kind]
        if quantities:
            groups[kind.value] = list(quantities)
    return Sheet(
        "methods",
        "Methods and quantities",
        "reference",
        "methods.html",
        {"methods": list(methods().values()), "groups": groups},
    )


def documents_page(plant: PlantData, links: dict[str, tuple[DocumentLink, ...]], files: tuple[str, ...]) -> Sheet:
    """All documents: those the description names, and the other files in the folder."""
    named = {d.path for documents in links.values() for d in documents if d.path}
    others = tuple(f for f in files if f not in named)
    groups = [("The plant", links.get("", ()))] + [(d.name, links.get(d.id, ())) for d in plant.systems]
    return Sheet(
        "documents",
        "Documents",
        "plant",
        "documents.html",
        {"groups": [(title, items) for title, items in groups if items], "others": others},
    )


def reference_page() -> Sheet:
    """Every key of the description, generated from where each field is declared."""
    from commission.description import key_reference

    groups: dict[str, list[object]] = {}
    for row in key_reference():
        groups.setdefault(row.path.split(".")[0].split("[")[0], []).append(row)
    return Sheet(
        "description-keys",
        "Keys of the description",
        "reference",
        "reference.html",
        {"groups": groups},
        short="Keys of the description",
    )


def carry_page(singles: list[tuple[str, tuple[tuple[str, str], ...]]]) -> Sheet:
    """How to carry the manual, honest about tablets; `singles` are the single files of each system."""
    context = {"singles": singles}
    return Sheet("how-to-carry-this-manual", "How to carry this manual", "reference", "carry.html", context)


def search_page() -> Sheet:
    """Search without a server."""
    return Sheet("search", "Search", "reference", "search.html", listed=False)
