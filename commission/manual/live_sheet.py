"""The live day sheet: a person types what stands on the instruments and sees what should stand there on such a day."""

from __future__ import annotations

import json
from collections.abc import Mapping
from dataclasses import dataclass
from functools import partial
from typing import TYPE_CHECKING, Any

from commission.errors import NotCalculatedError
from commission.manual.book import Sheet
from commission.manual.facts import stated_number
from commission.manual.gather import PlantData, SystemData
from commission.manual.live_data import as_script, expected_data, live_data
from commission.manual.live_plan import HOW, LivePlan, bare_plan, make_plan
from commission.manual.showing import unit_of
from commission.manual.store import Store, kept, package_digest
from commission.quantities import NOMENCLATURE

if TYPE_CHECKING:
    from commission.prediction import SystemModel

SCRIPTS = ("decision.js", "decision_vectors.js", "live_air.js", "live_table.js", "live_export.js", "live_sheet.js")
TITLE = "Live day sheet"


@dataclass(frozen=True, slots=True)
class Row:
    """One line to fill in or to be worked out."""

    key: str
    label: str
    unit: str
    how: str = ""
    instruments: bool = False
    chosen: str = ""
    rated: str = ""
    optional: bool = False


def live_sheet(plant: PlantData, data: SystemData, store: Store | None = None) -> Sheet:
    """The page of one system. Without a calculation it still takes readings and gives the record.

    `store` keeps what was calculated for the next build of the same description by the same package.
    """
    found: Mapping[str, Any] | None = None
    because = data.because
    if data.model is not None and data.rated is not None:
        plan = make_plan(plant.loaded, data.model, data.rated)
        parts = ("live sheet", plant.loaded.digest, data.id, package_digest())
        answer = json.loads(kept(store, parts, partial(_answer, plant, data.model, plan)))
        found, because = answer["expected"], answer["because"]
    else:
        plan = bare_plan(plant.loaded, data.system)
    content = live_data(plant, data, plan, found)
    context: dict[str, Any] = {
        "because": because,
        "system_name": data.name,
        "system_id": data.id,
        "digest": plant.loaded.digest[:12],
        "plant_name": plant.name,
        "conditions": [_row(plant, data, plan, k) for k in plan.conditions],
        "readings": [_row(plant, data, plan, k) for k in plan.readings],
        "derived": [_row(plant, data, plan, k) for k in content["derived"]],
        "held": [(data.display.label(k), data.display.of(k, v)) for k, v in plan.held.items()],
        "when_filed": _when_filed(data, plan, content["derived"]),
        "ranges": [
            (data.display.label(k), data.display.of(k, low), data.display.of(k, high))
            for k, (low, _, high) in {**plan.axes, **plan.extras}.items()
        ],
        "steps": [(data.display.label(k), [data.display.of(k, s) for s in steps]) for k, steps in plan.steps.items()],
        "stages": _stages(plant, data),
        "sheets": content["sheets"],
        "data": as_script(content),
        "paper_sheet": data.page("day-sheet"),
    }
    return Sheet(data.page("live-sheet"), TITLE, data.group, "live_sheet.html", context, data.kicker, scripts=SCRIPTS)


def _answer(plant: PlantData, model: SystemModel, plan: LivePlan) -> bytes:
    """What is expected, or why nothing is, as JSON."""
    answer: dict[str, Any] = {"expected": None, "because": None}
    try:
        answer["expected"] = expected_data(plant, model, plan)
    except NotCalculatedError as error:
        answer["because"] = str(error)
    return json.dumps(answer).encode()


def _row(plant: PlantData, data: SystemData, plan: LivePlan, key: str) -> Row:
    kind = data.display.kind(key)
    fit = any(i.resolved.kind is NOMENCLATURE[key].kind for i in plant.loaded.plant.instruments.values())
    rated = data.rated.conditions.get(key) if data.rated else None
    return Row(
        key,
        data.display.label(key),
        unit_of(data.display.asking(key), kind),
        HOW.get(key, ""),
        fit and key in (*plan.conditions, *plan.readings),
        plan.instruments.get(key) or "",
        "" if rated is None else stated_number(data.display, rated, kind, column=True),
        key in plan.conditions and not key.endswith("_temperature"),
    )


def _when_filed(data: SystemData, plan: LivePlan, derived: list[str]) -> list[str]:
    """What is judged only when the record is filed, since the page cannot work it out."""
    expected = data.rated.expected if data.rated else {}
    capacities = ("cooling_capacity", "heating_capacity", "cooling_cop", "heating_cop")
    return [data.display.words(k) for k in capacities if k in expected and k not in derived and k not in plan.readings]


def _stages(plant: PlantData, data: SystemData) -> list[tuple[str, str, bool]]:
    """Id and title of each stage of the checklist, and whether it is the one that is offered first."""
    from commission.checklists import stages

    known = [(s.id, s.title) for s in stages(plant.loaded, data.id)]
    first = next((i for i, _ in known if i == "performance"), known[0][0] if known else "")
    return [(i, title, i == first) for i, title in known]
