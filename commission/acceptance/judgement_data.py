"""A judgement as plain data: what a filed record keeps and `--json` prints. °C, Pa absolute, SI otherwise."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from commission.acceptance.budget import Measured
from commission.acceptance.decision import Decision
from commission.acceptance.expectation import Deviation
from commission.acceptance.impossible import Impossible
from commission.acceptance.judgement import GuaranteeVerdict, Judgement
from commission.acceptance.steadiness import Steadiness
from commission.quantities import NOMENCLATURE, SI_UNIT, Kind, json_value


def _value(key: str, value: float) -> dict[str, Any]:
    number, unit = json_value(value, NOMENCLATURE[key].kind)
    return {"value": number, "unit": unit}


def _measured(measured: Measured) -> dict[str, Any]:
    return {**_value(measured.key, measured.value), "uncertainty": measured.budget.standard}


def data_of(judgement: Judgement) -> dict[str, Any]:
    """All of a judgement; `uncertainty` is standard, `expanded_uncertainty` for 95 %."""
    return {
        "system": judgement.system,
        "mode": judgement.mode,
        "outcome": judgement.outcome,
        "conditions": _all(judgement.conditions),
        "readings": {k: _measured(m) for k, m in judgement.measured.items() if k not in judgement.conditions},
        "derived": {k: {**_measured(d.measured), "method": d.explained.method} for k, d in judgement.derived.items()},
        "expected": {
            k: {**_value(k, e.value), "uncertainty": e.budget.standard} for k, e in judgement.expectations.items()
        },
        "deviations": [_deviation(d) for d in judgement.deviations],
        "routes": [
            {"route": r.route, "quantity": r.measured.key, **_measured(r.measured)} for r in judgement.routes
        ],
        "refused": [{"route": r.route, "quantity": r.key, "because": r.reason} for r in judgement.refusals],
        "closures": [
            {
                "of": c.quantity,
                "routes": [c.first, c.second],
                "difference": c.difference,
                "unit": "W",
                "uncertainty": c.budget.standard,
                "significant": c.significant,
            }
            for c in judgement.closures
        ],
        "guarantees": [guarantee_data(g) for g in judgement.guarantees],
        "steadiness": [_steady(s) for s in judgement.steadiness],
        "cannot_be": [_impossible(i) for i in judgement.impossible],
        "not_judged": dict(judgement.not_judged),
        "warnings": list(judgement.warnings),
        "sheet": judgement.sheet_digest,
    }  # fmt: skip


def _all(conditions: Mapping[str, Measured]) -> dict[str, Any]:
    return {k: _measured(m) for k, m in conditions.items()}


def _deviation(d: Deviation) -> dict[str, Any]:
    kind = NOMENCLATURE[d.key].kind
    return {
        "quantity": d.key,
        "deviation": d.deviation,
        "unit": SI_UNIT[kind],
        "uncertainty": d.budget.standard,
        "expanded_uncertainty": d.budget.expanded(),
        "significant": d.significant,
    }


def guarantee_data(g: GuaranteeVerdict) -> dict[str, Any]:
    """One verdict as plain data."""
    key = g.terms.quantity
    data: dict[str, Any] = {
        "quantity": key,
        "outcome": g.outcome,
        "stated": _value(key, g.terms.value),
        "tolerance_below": g.terms.below,
        "tolerance_above": g.terms.above,
        "rule": g.terms.rule,
        "carried_by": g.terms.carried_by,
        "route": g.route,
        "judged_by_frozen_sheet": g.frozen,
        "guaranteed_on_the_day": _value(key, g.guaranteed.value) if g.guaranteed else None,
        "measured": _measured(g.measured) if g.measured else None,
        "withheld": g.withheld,
        "what_would_decide": g.what_would_decide,
    }
    if g.decision is not None:
        data["decision"] = _decision(key, g.decision)
        if g.budget is not None:
            data["expanded_uncertainty"] = g.budget.expanded()
    return data


def _decision(key: str, d: Decision) -> dict[str, Any]:
    limits = {
        "limit_low": d.limit_low,
        "limit_high": d.limit_high,
        "acceptance_low": d.acceptance_low,
        "acceptance_high": d.acceptance_high,
    }
    return {
        "outcome": d.outcome,
        "probability_of_conformity": d.probability_of_conformity,
        "confidence": d.confidence,
        "capable": d.capable,
        "largest_expanded_uncertainty": d.largest_expanded_uncertainty,
        **{k: None if v is None else json_value(v, NOMENCLATURE[key].kind)[0] for k, v in limits.items()},
    }


def _steady(s: Steadiness) -> dict[str, Any]:
    kind: Kind = s.kind
    unit = "K" if kind is Kind.TEMPERATURE else SI_UNIT[kind]
    return {"of": s.key, "largest": s.largest, "limit": s.limit, "unit": unit, "steady": s.steady, "text": s.text}


def _impossible(i: Impossible) -> dict[str, Any]:
    return {"rule": i.rule, "text": i.text, "readings": list(i.keys), "excess": i.excess, "expanded": i.expanded}
