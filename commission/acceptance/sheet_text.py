"""The text form of a test sheet: written with sorted keys and units, read back with its digest verified."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from pathlib import Path
from typing import Any, TypeVar, cast, get_args

from commission.acceptance.decision import Rule
from commission.acceptance.grid import Axis
from commission.acceptance.guarantee import CarriedBy, Terms
from commission.acceptance.sheet import Purpose, SheetError, Target, TestSheet, digest_of
from commission.errors import Problem
from commission.quantities import NOMENCLATURE, Kind, json_value

FORM = "commission test sheet 1"
_LARGEST = 4_000_000
_DIGITS = 9
_ICE = 273.15
T = TypeVar("T")


def _out(value: float, kind: Kind) -> float:
    """A number as it is printed: 9 digits, °C for temperatures, SI otherwise; no negative zero."""
    shown, _ = json_value(value, kind)
    return float(f"{shown:.{_DIGITS}g}") + 0.0


def _in(value: Any, kind: Kind) -> float:
    number = float(value)
    return number + _ICE if kind is Kind.TEMPERATURE else number


def _size(value: float) -> float:
    return float(f"{value:.{_DIGITS}g}") + 0.0


def _unit(key: str) -> str:
    return json_value(0.0, NOMENCLATURE[key].kind)[1]


def body_of(sheet: TestSheet) -> str:
    """Everything behind the digest line."""
    import yaml

    data = {
        "form": FORM,
        "system": sheet.system,
        "title": sheet.title,
        "prepared_for": sheet.prepared_for,
        "description_digest": sheet.description_digest,
        "versions": dict(sheet.versions),
        "barometric_pressure": {"value": _size(sheet.barometric_pressure), "unit": "Pa"},
        "axes": [
            {"key": a.key, "unit": _unit(a.key), "values": [_out(v, NOMENCLATURE[a.key].kind) for v in a.values]}
            for a in sheet.axes
        ],
        "conditions": {
            k: {"value": _out(v, NOMENCLATURE[k].kind), "unit": _unit(k)} for k, v in sheet.conditions.items()
        },
        "targets": [_target_out(t) for t in sheet.targets],
        "instruments": {k: dict(v) for k, v in sheet.instruments.items()},
        "assumptions": {k: _size(v) for k, v in sheet.assumptions.items()},
        "steadiness": sheet.steadiness,
        "route_inputs": {k: [_size(v), _size(u)] for k, (v, u) in sheet.route_inputs.items()},
    }
    text: str = yaml.safe_dump(data, sort_keys=True, allow_unicode=True, width=110, default_flow_style=None)
    return text


def _target_out(target: Target) -> dict[str, Any]:
    kind = NOMENCLATURE[target.key].kind
    data: dict[str, Any] = {
        "key": target.key,
        "purpose": target.purpose,
        "method": target.method,
        "unit": _unit(target.key),
        "values": [_out(v, kind) for v in target.values],
        "standard_uncertainties": [_size(u) for u in target.uncertainties],
        "between_points": _size(target.between),
        "instruments": list(target.instruments),
        "slopes": {k: _size(v) for k, v in target.slopes.items()},
    }
    if target.reading_uncertainty is not None:
        data["reading_standard_uncertainty"] = _size(target.reading_uncertainty)
    if target.when_read:
        data["variances_gained_when_read"] = {k: [_size(g) for g in gains] for k, gains in target.when_read.items()}
    if target.terms is not None:
        data["guarantee"] = _terms_out(target.terms)
    return data


def _terms_out(terms: Terms) -> dict[str, Any]:
    data: dict[str, Any] = {
        "value": _out(terms.value, NOMENCLATURE[terms.quantity].kind),
        "at": {k: {"value": _out(v, NOMENCLATURE[k].kind), "unit": _unit(k)} for k, v in terms.at.items()},
        "decision": terms.rule,
        "carried_by": terms.carried_by,
    }
    optional = {"tolerance_below": terms.below, "tolerance_above": terms.above, "route": terms.route,
                "source": terms.source, "includes": list(terms.includes) if terms.includes else None,
                "largest_uncertainty": terms.largest}  # fmt: skip
    data.update({k: _size(v) if isinstance(v, float) else v for k, v in optional.items() if v is not None})
    return data


def read_sheet(source: Path | str) -> TestSheet:
    """A sheet from a file (a `Path`) or from its text, its digest verified.

    Raises:
        SheetError: unreadable, too large, changed after it was frozen, or not of this form.
    """
    name = str(source) if isinstance(source, Path) else "test sheet"
    text = _text_of(source, name)
    first, _, body = text.replace("\r\n", "\n").partition("\n")
    if not first.startswith("digest: "):
        raise SheetError(Problem("the first line of a test sheet is its digest", file=name, line=1, value=first))
    stated, found = first.removeprefix("digest: ").strip(), digest_of(body)
    if stated != found:
        message = "this sheet was changed after it was frozen: its digest does not fit its text"
        raise SheetError(Problem(message, file=name, line=1, value=stated, allowed=found))
    return _sheet(body, name)


def _text_of(source: Path | str, name: str) -> str:
    if not isinstance(source, Path):
        return source
    try:
        raw = source.read_bytes()
    except OSError as error:
        raise SheetError(Problem(f"the test sheet cannot be read: {error.strerror}", file=name)) from None
    if len(raw) > _LARGEST:
        raise SheetError(Problem("the file is too large for a test sheet", file=name, allowed=f"{_LARGEST} bytes"))
    try:
        return raw.decode()
    except UnicodeDecodeError:
        raise SheetError(Problem("the test sheet is not UTF-8 text", file=name)) from None


def _sheet(body: str, name: str) -> TestSheet:
    import yaml

    try:
        data = yaml.load(body, Loader=getattr(yaml, "CSafeLoader", yaml.SafeLoader))
        if not isinstance(data, dict) or data.get("form") != FORM:
            raise SheetError(Problem("not a test sheet of this form", file=name, path="form", allowed=FORM))
        return _build(data)
    except yaml.YAMLError as error:
        raise SheetError(Problem(f"the test sheet is not YAML: {error}".split("\n")[0], file=name)) from None
    except (KeyError, TypeError, ValueError, AttributeError) as error:
        raise SheetError(
            Problem(f"the test sheet lacks something or holds a wrong value: {error}", file=name)
        ) from None


def _build(data: Mapping[str, Any]) -> TestSheet:
    axes = tuple(Axis(a["key"], tuple(_in(v, NOMENCLATURE[a["key"]].kind) for v in a["values"])) for a in data["axes"])
    count = 1
    for axis in axes:
        count *= len(axis.values)
    return TestSheet(
        system=str(data["system"]),
        title=str(data["title"]),
        prepared_for=str(data["prepared_for"]),
        description_digest=str(data["description_digest"]),
        versions={str(k): str(v) for k, v in data["versions"].items()},
        barometric_pressure=float(data["barometric_pressure"]["value"]),
        axes=axes,
        conditions=_conditions(data["conditions"]),
        targets=tuple(_target(t, count) for t in data["targets"]),
        instruments={str(k): {str(a): str(b) for a, b in v.items()} for k, v in data["instruments"].items()},
        assumptions={str(k): float(v) for k, v in data["assumptions"].items()},
        steadiness=str(data["steadiness"]),
        route_inputs={str(k): (float(v), float(u)) for k, (v, u) in data["route_inputs"].items()},
    )


def _conditions(data: Mapping[str, Any]) -> dict[str, float]:
    return {k: _in(v["value"], NOMENCLATURE[k].kind) for k, v in data.items()}


def _target(data: Mapping[str, Any], count: int) -> Target:
    key = data["key"]
    kind = NOMENCLATURE[key].kind
    values = tuple(_in(v, kind) for v in data["values"])
    uncertainties = tuple(float(u) for u in data["standard_uncertainties"])
    gained = data.get("variances_gained_when_read", {})
    when_read = {str(k): tuple(float(g) for g in gains) for k, gains in gained.items()}
    if any(len(column) != count for column in (values, uncertainties, *when_read.values())):
        raise ValueError(f"{key} has not one value for each point of the grid")
    return Target(
        key,
        _one_of(Purpose, data["purpose"]),
        str(data["method"]),
        values,
        uncertainties,
        float(data["between_points"]),
        tuple(str(i) for i in data["instruments"]),
        _maybe(float, data.get("reading_standard_uncertainty")),
        _terms(key, data["guarantee"]) if "guarantee" in data else None,
        {str(k): float(v) for k, v in data["slopes"].items()},
        when_read,
    )


def _terms(quantity: str, data: Mapping[str, Any]) -> Terms:
    return Terms(
        quantity,
        _in(data["value"], NOMENCLATURE[quantity].kind),
        _conditions(data["at"]),
        _maybe(float, data.get("tolerance_below")),
        _maybe(float, data.get("tolerance_above")),
        _one_of(Rule, data["decision"]),
        _one_of(CarriedBy, data["carried_by"]),
        _maybe(str, data.get("route")),
        _maybe(str, data.get("source")),
        _maybe(lambda words: tuple(str(w) for w in words), data.get("includes")),
        _maybe(float, data.get("largest_uncertainty")),
    )


def _maybe(convert: Callable[[Any], T], value: Any) -> T | None:
    return None if value is None else convert(value)


def _one_of(words: Any, value: Any) -> Any:
    allowed: Sequence[str] = get_args(words)
    if value not in allowed:
        raise ValueError(f"{value!r} is none of {', '.join(allowed)}")
    return cast(Any, value)
