"""A judgement made into the plain data of a `filed:` block, so that nothing later can change it."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping, Sequence
from importlib.metadata import version
from typing import TYPE_CHECKING, Any

from commission.description import LoadedPlant
from commission.quantities import NOMENCLATURE, SI_UNIT, Display, limits_in_words
from commission.records.filed import FrozenDeviation
from commission.records.judge import NamedSheet
from commission.records.record import Record, SiteReading
from commission.records.text import plain

if TYPE_CHECKING:
    from commission.acceptance.budget import Budget
    from commission.acceptance.expectation import Deviation
    from commission.acceptance.judgement import GuaranteeVerdict, Judgement

MODEL = "model: "
"""Beginning of the causes that belong to the model: the same in every visit, so that they cancel in a change."""


def versions() -> dict[str, str]:
    """Versions of the package and of the property library, read from what is installed."""
    return {"commission": version("commission"), "CoolProp": version("CoolProp")}


def freeze(
    loaded: LoadedPlant,
    record: Record,
    judgement: Judgement | None,
    reason: str | None,
    sheet: NamedSheet | None,
    by_model: Judgement | None,
    assumptions: Mapping[str, float],
) -> dict[str, Any]:
    """Everything of the block that follows from the judgement.

    `reason` says why there is no judgement; `by_model` is the same visit against the model where a sheet was used.
    """
    display = loaded.display(record.system, record.barometric_pressure)
    return {
        "verdict": (judgement.outcome if judgement else None) or "none",
        "sentence": sentence(record, judgement, reason, display),
        "judged_by": _judged_by(record, judgement, sheet),
        "steadiness": [{"text": s.text, "steady": s.steady} for s in judgement.steadiness] if judgement else [],
        "impossible": [i.text for i in judgement.impossible] if judgement else [],
        "barometric_pressure": record.barometric_pressure,
        "barometer_measured": record.barometer_measured,
        "conditions": _readings(record.conditions, judgement),
        "readings": _readings(record.readings, judgement),
        "deviations": _deviations(judgement.deviations) if judgement else {},
        "model_deviations": _deviations(by_model.deviations) if by_model else {},
        "routes": _routes(judgement) if judgement else [],
        "closures": _closures(judgement) if judgement else [],
        "not_judged": dict(judgement.not_judged)
        if judgement
        else {"readings": reason}
        if reason and record.readings
        else {},
        "guarantees": [_guarantee(g) for g in judgement.guarantees] if judgement else [],
        "warnings": list(dict.fromkeys((*record.warnings, *(judgement.warnings if judgement else ())))),
        "unanswered": list(record.unanswered),
        "instruments": _instruments(loaded, record),
        "assumptions": dict(assumptions),
    }


def sentence(record: Record, judgement: Judgement | None, reason: str | None, display: Display) -> str:
    """The verdict in words, with the figures it rests on."""
    if judgement is None:
        return f"no verdict: {reason}"
    if record.mode == "trim" and not judgement.deviations:
        return f"trim, no verdict, and nothing to compare: {_why_nothing(judgement)}"
    if record.mode == "trim":
        count = sum(d.significant for d in judgement.deviations)
        return f"trim, no verdict: {count} of {len(judgement.deviations)} readings deviate significantly"
    if not judgement.guarantees:
        return "no verdict: the contract guarantees nothing for this system"
    return "; ".join(guarantee_sentence(g, display) for g in judgement.guarantees)


def _why_nothing(judgement: Judgement) -> str:
    """The reason that most readings share for having no expectation."""
    reasons = list(judgement.not_judged.values())
    return max(reasons, key=reasons.count, default="nothing was read of which anything is expected")


def guarantee_sentence(verdict: GuaranteeVerdict, display: Display) -> str:
    """One guarantee's verdict in words."""
    key = verdict.terms.quantity
    kind = display.kind(key)
    said = f"{display.label(key)}: {verdict.outcome}"
    if verdict.measured is not None:
        display = display.fitting(kind, verdict.measured.value)
        said += f", {display.text(verdict.measured.value, kind)}"
        if verdict.budget is not None:
            said += f" ± {display.spread(verdict.budget.expanded(), kind)} {display.spread_unit(kind)}".rstrip()
        said += " measured"
    if verdict.decision is not None:
        low, high = verdict.decision.limit_low, verdict.decision.limit_high
        wanted = limits_in_words(low, high, lambda value: display.text(value, kind))
        said += f", {wanted} promised for this condition"
    if verdict.outcome == "undecided" and verdict.what_would_decide:
        said += f"; it would be decided by this: {verdict.what_would_decide}"
    return said


def _judged_by(record: Record, judgement: Judgement | None, sheet: NamedSheet | None) -> dict[str, Any]:
    if sheet is not None:
        return {"by": "frozen test sheet", "sheet": sheet.name, "sha256": sheet.sha256}
    if record.mode == "test" and judgement is not None and judgement.guarantees:
        return {"by": "targets frozen at filing"}
    return {"by": "nothing: no verdict was asked for"}


def _readings(readings: Mapping[str, SiteReading], judgement: Judgement | None) -> dict[str, Any]:
    found = {}
    for key, reading in readings.items():
        measured = judgement.measured.get(key) if judgement else None
        found[key] = {
            "value": reading.value,
            "unit": SI_UNIT[reading.kind],
            "written": reading.as_written,
            "instrument": reading.instrument,
            "where": reading.where,
            "uncertainty": measured.budget.standard if measured else None,
        }
    return found


def _deviations(deviations: Iterable[Deviation]) -> dict[str, Any]:
    return {
        d.key: {
            "reading": d.reading.value,
            "expected": d.expected.value,
            "deviation": d.deviation,
            "unit": SI_UNIT[NOMENCLATURE[d.key].kind],
            "uncertainty": d.budget.standard,
            "expanded": d.budget.expanded(),
            "significant": d.significant,
            **_split(d.budget),
        }
        for d in deviations
    }


def frozen_deviations(judgement: Judgement) -> dict[str, FrozenDeviation]:
    """The deviations of a judgement in the form in which they are filed."""
    return {
        key: FrozenDeviation.model_construct(**plain(data)) for key, data in _deviations(judgement.deviations).items()
    }


def _split(budget: Budget) -> dict[str, Any]:
    """The budget in two: signed shares of the model by cause, and all the rest as one standard uncertainty.

    A share of the model below a thousandth of the whole goes with the rest: a hundred of them would not show.
    """
    shares: dict[str, float] = {}
    rest: list[float] = []
    least = 1e-3 * budget.standard
    for group in budget.groups:
        total = math.fsum(c.value for c in group)
        cause = group[0].cause
        if cause.startswith(MODEL) and abs(total) >= least:
            shares[cause.removeprefix(MODEL)] = total
        else:
            rest.append(total)
    return {"model_parts": shares, "other_part": math.hypot(*rest)}


def _routes(judgement: Judgement) -> list[dict[str, Any]]:
    found: list[dict[str, Any]] = [
        {
            "route": r.route,
            "quantity": r.measured.key,
            "value": r.measured.value,
            "uncertainty": r.measured.budget.standard,
        }
        for r in judgement.routes
    ]
    return found + [{"route": r.route, "quantity": r.key, "refused": r.reason} for r in judgement.refusals]


def _closures(judgement: Judgement) -> list[dict[str, Any]]:
    return [
        {
            "quantity": c.quantity,
            "first": c.first,
            "second": c.second,
            "difference": c.difference,
            "expanded": c.budget.expanded(),
            "significant": c.significant,
        }
        for c in judgement.closures
    ]


def _guarantee(verdict: GuaranteeVerdict) -> dict[str, Any]:
    terms, decision = verdict.terms, verdict.decision
    return {
        "quantity": terms.quantity,
        "unit": SI_UNIT[NOMENCLATURE[terms.quantity].kind],
        "guaranteed": terms.value,
        "at": dict(terms.at),
        "below": terms.below,
        "above": terms.above,
        "largest": terms.largest,
        "includes": list(terms.includes or ()),
        "rule": terms.rule,
        "carried_by": terms.carried_by,
        "source": terms.source,
        "carried": verdict.guaranteed.value if verdict.guaranteed else None,
        "measured": verdict.measured.value if verdict.measured else None,
        "route": verdict.route,
        "uncertainty": verdict.budget.standard if verdict.budget else None,
        "expanded": verdict.budget.expanded() if verdict.budget else None,
        "limit_low": decision.limit_low if decision else None,
        "limit_high": decision.limit_high if decision else None,
        "acceptance_low": decision.acceptance_low if decision else None,
        "acceptance_high": decision.acceptance_high if decision else None,
        "outcome": verdict.outcome,
        "probability": decision.probability_of_conformity if decision else None,
        "withheld": verdict.withheld,
        "what_would_decide": verdict.what_would_decide,
        "frozen_before": verdict.frozen,
    }


def _instruments(loaded: LoadedPlant, record: Record) -> dict[str, dict[str, str]]:
    """Each instrument that was used, in the words of the description on that day."""
    used = dict.fromkeys(r.instrument for r in (*record.conditions.values(), *record.readings.values()) if r.instrument)
    found: dict[str, dict[str, str]] = {name: {} for name in used}
    for path in loaded.positions:
        text = loaded.positions.text(path)
        if len(path) > 2 and path[0] == "instruments" and path[1] in found and text is not None:
            found[str(path[1])][" ".join(str(p) for p in path[2:])] = text
    return found


def items_of_judgement(record: Record, verdicts: Sequence[GuaranteeVerdict], display: Display) -> list[dict[str, Any]]:
    """Open items that the record raises by itself: guarantees that were not shown to be met, and failed answers."""
    items: list[dict[str, Any]] = [
        {"what": guarantee_sentence(g, display), "raised_by": "guarantee", "line": g.terms.quantity}
        for g in verdicts
        if g.outcome != "conforming"
    ]
    for answer in record.answers.values():
        if answer.outcome == "failed":
            what = f"{answer.item} was answered with {answer.answer}: {answer.reason}"
            items.append({"what": what, "raised_by": "answer", "line": answer.item})
    return items
