"""What the page of a live day sheet carries: numbers in SI with their units of display, ready for its script."""

from __future__ import annotations

import json
import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from markupsafe import Markup

from commission.description.model import NEAR_A_STAGE, Medium
from commission.errors import NotCalculatedError
from commission.manual.gather import PlantData, SystemData
from commission.manual.live_bands import TWO_SIDED, Bands, make_bands
from commission.manual.live_plan import APPROACHES, DERIVED, LINE_LOSSES, LivePlan
from commission.manual.live_series import Asked, LiveTable, along_the_way, grid_axes, make_table
from commission.manual.showing import unit_of
from commission.quantities import FLOWS, Display, Kind, Reference
from commission.quantities.units import find_unit

if TYPE_CHECKING:
    from commission.prediction import SystemModel
    from commission.properties import Refrigerant

SATURATION_ROWS = 96
"""Rows of the saturation lines, even in the logarithm of pressure: read between them within 0.02 K."""
NEAR_CRITICAL = 0.98
"""Share of the critical pressure up to which a saturation temperature is told, as `acceptance` does."""
STEP = 0.01
"""Step in which expected values are written, as a share of the deviation that a reading could just show."""
NOTHING = 1
"""What a series leaves nowhere more of than so many steps is not carried."""
_LIQUID_STEP = 5.0
_REGIME_SIGNS = "0123456789abcdefghijklmnopqrstuvwxyz"


@dataclass(frozen=True, slots=True)
class Calculated:
    """The table and the bands of one system."""

    table: LiveTable
    bands: Bands


def calculate(plant: PlantData, model: SystemModel, plan: LivePlan) -> Calculated:
    """Expected values and bands over the conditions of the plan.

    Raises:
        NotCalculatedError: nothing can be expected anywhere in the range; the message says why.
    """
    axes = grid_axes(plan.axes)
    rated = {k: r for k, (_, r, _) in plan.extras.items()}
    ask = Asked(model, plan.tabulated)
    way = along_the_way(list(axes.values()))
    answers = ask([(*p, *rated.values()) for p in way])
    found = {p: answers[(*p, *rated.values())] for p in way}
    if not any(found.values()):
        raise NotCalculatedError("nowhere in the range of the conditions is there a balance")
    bands = make_bands(plant.loaded, model, axes, found, rated, plan.readings, plan.instruments, _counted(plan))
    known = {k for one in found.values() if one is not None for k in one.values}
    also = [k for pressure, needed in LINE_LOSSES.items() if pressure in plan.readings for k in (pressure, *needed)]
    keys = [k for k in dict.fromkeys((*bands.judged, *also)) if k in known]
    return Calculated(make_table(ask, axes, plan.extras, found, keys, bands.shown), bands)


def _counted(plan: LivePlan) -> tuple[str, ...]:
    """What is judged: everything read and worked out but what the conditions alone determine."""
    settled = {
        f"heat_{side}_temperature_change"
        for side in ("source", "sink")
        if {f"heat_{side}_inlet_temperature", f"heat_{side}_outlet_temperature"} <= set(plan.conditions)
    }
    return tuple(k for k in dict.fromkeys((*plan.readings, *DERIVED)) if k not in settled)


def live_data(
    plant: PlantData, data: SystemData, plan: LivePlan, expected: Mapping[str, Any] | None
) -> dict[str, Any]:  # fmt: skip
    """All that the script needs, as plain data; `expected` is that of `expected_data`."""
    from commission.records.read import READING_KEYS

    instruments, shown = plant.loaded.plant.instruments, data.display
    judged = None if expected is None else {k for t in expected["tables"] for bands in t["bands"] for k in bands}
    air = {k for k, side in APPROACHES.items() if getattr(data.system, side).medium == "air"}
    derived = [k for k in DERIVED if k not in plan.readings and (k not in air if judged is None else k in judged)]
    keys = [*plan.conditions, *plan.readings, *DERIVED, "barometric_pressure"]
    sheets = [f"sheets/{n}.yaml" for n, s in plant.sheets.items() if not isinstance(s, str) and s.system == data.id]
    return {
        "plant": plant.name,
        "system": data.id,
        "digest": plant.loaded.digest[:12],
        "barometer": plant.loaded.barometric_pressure,
        "twoSided": TWO_SIDED,
        "quantities": {k: _quantity(k, shown) for k in dict.fromkeys(keys)},
        "kinds": _kinds(shown, keys),
        "conditions": list(plan.conditions),
        "readings": list(plan.readings),
        "underConditions": [k for k in plan.readings if k not in READING_KEYS],
        "derived": derived,
        "instruments": {k: v for k, v in plan.instruments.items() if v},
        "choices": _choices(plant, {shown.kind(k) for k in keys}),
        "until": {n: i.calibrated_until.isoformat() for n, i in instruments.items() if i.calibrated_until},
        "sheets": sheets,
        "steady": _steady(data),
        "air": _bulbs(plan),
        "liquid": {side: _liquid(data, side) for side in ("source", "sink")},
        "saturation": saturation_rows(data.model.refrigerant) if data.model is not None else None,
        "expected": expected,
    }


def _choices(plant: PlantData, kinds: set[Kind]) -> dict[str, list[str]]:
    """The instruments of the plant for each kind of quantity."""
    instruments = plant.loaded.plant.instruments
    return {k.value: [n for n, i in instruments.items() if _shows(i.resolved.kind, k)] for k in sorted(kinds)}


def _shows(measured: Kind, kind: Kind) -> bool:
    """Whether an instrument of one kind can show quantities of another: a flow meter those of a liquid too."""
    return measured is kind or (measured in FLOWS and kind in FLOWS)


def as_script(data: Mapping[str, Any]) -> Markup:
    """The data as JSON that can stand inside a page: no sign in it can end the element that holds it."""
    text = json.dumps(data, ensure_ascii=False, separators=(",", ":"), allow_nan=False)
    for sign in "<>&\u2028\u2029":
        text = text.replace(sign, f"\\u{ord(sign):04x}")
    return Markup(text)


def _quantity(key: str, display: Display) -> dict[str, str]:
    quantity = display.quantities[key]
    shown = {"shown": key} if quantity.asked_in else {}
    return {"label": quantity.label, "kind": quantity.kind.value, **shown}


def _kinds(display: Display, keys: Sequence[str]) -> dict[str, dict[str, Any]]:
    """How each kind is typed and shown, and each quantity that is asked for in a unit of its own."""
    found = {k.value: kind_data(display, k) for k in {display.kind(key) for key in keys}}
    own = {key: kind_data(display.asking(key), display.kind(key)) for key in keys if display.quantities[key].asked_in}
    return {**found, **own}


def kind_data(display: Display, kind: Kind) -> dict[str, Any]:
    """How a kind is typed and shown: SI = shown x factor + offset, a gauge counts from the barometer."""
    name, digits = display.unit_and_digits(kind)
    unit = find_unit(name, kind) if name else None
    return {
        "unit": name,
        "shown": unit_of(display, kind),
        "spread": display.spread_unit(kind) if name else "",
        "factor": unit.factor if unit else 1.0,
        "offset": unit.offset if unit else 0.0,
        "gauge": bool(unit and unit.reference is Reference.GAUGE),
        "digits": digits,
        "figures": kind in FLOWS,
    }


def saturation_rows(refrigerant: Refrigerant) -> dict[str, Any]:
    """Dew and bubble temperatures (K) over the logarithm of pressure, from the coldest that is known."""
    low = max(refrigerant.T_low, 193.15)
    first = math.log(max(refrigerant.dew(low).p, refrigerant.bubble(low).p))
    last = math.log(NEAR_CRITICAL * refrigerant.p_critical)
    step = (last - first) / (SATURATION_ROWS - 1)
    pressures = [math.exp(first + n * step) for n in range(SATURATION_ROWS)]
    rows: dict[str, list[float]] = {"dew": [], "bubble": []}
    for pressure in pressures:
        try:
            dew, bubble = refrigerant.dew_temperature(pressure), refrigerant.bubble_temperature(pressure)
        except NotCalculatedError:
            break
        rows["dew"].append(round(dew, 4))
        rows["bubble"].append(round(bubble, 4))
    return {"first": first, "step": step, **rows}


def _bulbs(plan: LivePlan) -> dict[str, Any] | None:
    """What turns dry and wet bulb into the humidity that is a condition; None where no wet bulb is read."""
    from commission.acceptance.conditions import DRY, HUMIDITY, WET
    from commission.properties.psychrometrics import ICE, MASS_RATIO, TRIPLE_POINT, WATER

    if HUMIDITY not in plan.conditions or WET not in plan.readings:
        return None
    return {
        "dry": DRY, "wet": WET, "humidity": HUMIDITY, "ice": ICE, "water": WATER, "triple": TRIPLE_POINT,
        "massRatio": MASS_RATIO,
    }  # fmt: skip


def _liquid(data: SystemData, side: str) -> dict[str, Any] | None:
    """Density and specific heat of a liquid over temperature; None for air or where the mass fraction is not stated."""
    from commission.properties import liquid

    medium: Medium = data.system.heat_source if side == "source" else data.system.heat_sink
    if medium.medium == "air" or (medium.medium != "water" and medium.mass_fraction is None):
        return None
    fluid = liquid(medium.medium, medium.mass_fraction or 0.0)
    low = math.ceil(fluid.freezing_temperature) + 1.0
    count = int((min(fluid.highest_temperature, 373.15) - low) // _LIQUID_STEP)
    at = [low + n * _LIQUID_STEP for n in range(count + 1)]
    return {
        "first": low,
        "step": _LIQUID_STEP,
        "density": [round(fluid.density(t), 3) for t in at],
        "heat": [round(fluid.specific_heat(t), 2) for t in at],
    }


def _steady(data: SystemData) -> dict[str, float]:
    """Least times in s since the start and, where the plant defrosts, since the last defrost: the limits of records."""
    from commission.acceptance import steadiness

    checks = steadiness((), None, None, defrosts=data.system.evaporator.defrost is not None)
    return {s.key: s.limit for s in checks if s.key in ("since_start", "since_defrost")}


def expected_data(plant: PlantData, model: SystemModel, plan: LivePlan) -> dict[str, Any]:
    """The tables of the plan as plain data: one, or one for each capacity stage.

    Raises:
        NotCalculatedError: nothing can be expected anywhere in the range; the message says why.
    """
    for key, steps in plan.steps.items():
        tables = [table_data(calculate(plant, model.rated_at(key, step), plan)) for step in steps]
        return {"steps": {"key": key, "at": [_short(s) for s in steps], "near": NEAR_A_STAGE}, "tables": tables}
    return {"steps": None, "tables": [table_data(calculate(plant, model, plan))]}


def table_data(found: Calculated) -> dict[str, Any]:
    """Table and bands as plain data."""
    table, bands, extras = found.table, found.bands, found.table.extras.items()
    return {
        "axes": [{"key": k, "points": [_short(x) for x in a]} for k, a in table.axes.items()],
        "extras": [{"key": k, "low": low, "rated": rated, "high": high} for k, (low, rated, high) in extras],
        "names": table.names,
        "regimes": "".join("-" if n < 0 else _REGIME_SIGNS[n] for n in table.regimes),
        "series": [_series(found, name) for name in table.names],
        "bands": [
            {
                k: [[round(f, 4) for f in factors], round(error, 3)]
                for k, (factors, error) in bands.logs.get(n, {}).items()
            }
            for n in table.names
        ],
        "unknown": {
            key: [{k: float(f"{v:.4g}") for k, v in by_regime.get(n, {}).items()} for n in table.names]
            for key, by_regime in bands.unknown.items()
        },
    }


def _series(found: Calculated, name: str) -> dict[str, Any] | None:
    series = found.table.series.get(name)
    if series is None:
        return None
    steps = {k: _step(found, name, k) for k in series.rows}
    return {
        "centres": [_short(x) for x in series.centres],
        "halves": [_short(x) for x in series.halves],
        "terms": series.terms,
        "rows": {k: _row(row, k in series.logs, steps[k]) for k, row in series.rows.items()},
        "logs": sorted(series.logs),
        "left": {k: _left(found.table, name, k, step) for k, step in steps.items()},
        "steps": {k: float(f"{step:.4g}") for k, step in steps.items()},
        "errors": {k: round(e, 3) for k, e in series.errors.items() if e > 0.0005},
    }


def _step(found: Calculated, name: str, key: str) -> float:
    """The step in which values of a key are written: a small share of its band, or of its size where it has none."""
    middle = [0.5 * (low + high) for low, high in found.bands.ends]
    band = found.bands.shown(name, key, middle)
    series = found.table.series[name]
    return STEP * band if band else 1e-6 * abs(series.at(key, series.centres)) + 1e-12


def _left(table: LiveTable, name: str, key: str, step: float) -> list[int]:
    """What the series leaves at the points of the grid of its regime, in steps; empty where that is next to nothing."""
    own = table.names.index(name)
    steps = [
        round(float(x) / step) for x, n in zip(table.series[name].left[key], table.regimes, strict=True) if n == own
    ]
    return steps if max(map(abs, steps), default=0) > NOTHING else []


def _row(row: Sequence[float], log: bool, step: float) -> list[float]:
    """The factors to a small share of the step; those of a logarithm as a share of the value."""
    fine = 1e-6 if log else 0.3 * step
    digits = -math.floor(math.log10(fine))
    rounded = [round(x, digits) for x in row]
    return [int(x) if x == int(x) else x for x in rounded]


def _short(x: float) -> float:
    """Nine figures: more than any reading holds."""
    return float(f"{x:.9g}")
