"""A judgement as text: what was read, what was expected, what it means, in the order a person asks."""

from __future__ import annotations

from collections.abc import Iterable
from typing import TYPE_CHECKING

from commission.quantities import Display
from commission.records import guarantee_sentence

if TYPE_CHECKING:
    from commission.acceptance import Judgement
    from commission.acceptance.closure import Closure
    from commission.description import LoadedPlant
    from commission.records import Record


def as_text(judgement: Judgement, loaded: LoadedPlant) -> str:
    """The judgement for a terminal. Uncertainties are expanded, 95 %."""
    from commission.acceptance.steadiness import CYCLES
    from commission.manual.page_display import page_display

    display = page_display(loaded, judgement.system)
    name = loaded.system(judgement.system).name or judgement.system
    lines = [f"{name} ({judgement.system}), {judgement.mode}"]
    for key, measured in judgement.conditions.items():
        lines.append(f"  at {display.words(key)} {display.of(key, measured.value)}")
    lines += ["", *_table(judgement, display)]
    lines += _listed("cannot be", (i.text for i in judgement.impossible))
    lines += _listed("steadiness", (s.text for s in judgement.steadiness if s.steady is not True or s.key == CYCLES))
    lines += _listed("two routes", (_closure(c, display) for c in judgement.closures))
    lines += _listed("route refused", (f"{display.label(r.key)} by {r.route}: {r.reason}" for r in judgement.refusals))
    lines += _listed(
        "no expectation", (f"{_label(key, display)}: {reason}" for key, reason in judgement.not_judged.items())
    )
    lines += _listed("mind", judgement.warnings)
    lines += ["", f"verdict: {_verdict(judgement, display)}"]
    return "\n".join(lines)


def _closure(c: Closure, display: Display) -> str:
    """Two routes held against each other."""
    kind = display.kind("cooling_capacity" if c.quantity == "first law" else c.quantity)
    what = "first law" if c.quantity == "first law" else display.words(c.quantity)
    spread = f"{display.spread(c.budget.expanded(), kind)} {display.spread_unit(kind)}"
    size = f"{display.spread(c.difference, kind)} ± {spread}"
    word = "they do not agree, one of them is wrong" if c.significant else "they agree"
    return f"{what}, {c.first} and {c.second}, differ by {size}: {word}"


def not_compared(record: Record, loaded: LoadedPlant) -> list[str]:
    """Sentences on values that answer checklist items but stand under no reading, so that nothing judges them."""
    from commission.checklists import stages

    items = (item for stage in stages(loaded, record.system) for item in stage.items)
    quantity = {item.id: item.quantity for item in items if item.reading}
    written = {*record.readings, *record.conditions}
    return [
        f"the answer to {answer.item} is not compared; write it under readings as {quantity[answer.item]}, once"
        for answer in record.answers.values()
        if answer.value is not None and quantity.get(answer.item) not in {None, *written}
    ]


def _label(key: str, display: Display) -> str:
    return display.label(key) if key in display.quantities else key


def _table(judgement: Judgement, display: Display) -> list[str]:
    rows = [("", "read", "expected", "deviation", "± (95 %)", "")]
    for d in judgement.deviations:
        kind = display.kind(d.key)
        own = display.fitting(kind, d.expected.value)
        rows.append(
            (
                display.label(d.key),
                own.of(d.key, d.reading.value),
                own.of(d.key, d.expected.value),
                own.spread(d.deviation, kind),
                f"{own.spread(d.budget.expanded(), kind)} {own.spread_unit(kind)}".strip(),
                "significant" if d.significant else "",
            )
        )
    if len(rows) == 1:
        return ["  no reading has an expected value"]
    widths = [max(len(row[i]) for row in rows) for i in range(6)]
    return ["  " + "  ".join(map(_cell, range(6), row, widths)).rstrip() for row in rows]


def _cell(column: int, text: str, width: int) -> str:
    """Words to the left, numbers to the right."""
    return text.ljust(width) if column in (0, 5) else text.rjust(width)


def _listed(head: str, texts: Iterable[str]) -> list[str]:
    return [f"  {head}: {text}" for text in texts]


def _verdict(judgement: Judgement, display: Display) -> str:
    if judgement.mode == "trim":
        return "none, this was a trim: deviations only"
    if not judgement.guarantees:
        return "none, since the contract guarantees nothing for this system"
    return "\n         ".join(guarantee_sentence(g, display) for g in judgement.guarantees)
