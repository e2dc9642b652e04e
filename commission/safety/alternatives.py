"""Alternative provisions of EN 378-1 annex C.3: a larger charge against measures such as ventilation or an alarm."""

from __future__ import annotations

from commission.quantities import Input, Kind
from commission.safety.facts import load, read_value
from commission.safety.formulas import dispersal_charge
from commission.safety.limits import ChargeLimit, Situation, limit, not_applicable


def measures_needed(concentration: float, name: str, *, lowest_basement: bool) -> int | None:
    """Measures (ventilation, shut-off valves, alarm) that a concentration in kg/m³ asks for: 0, 1 or 2.

    None where the provisions do not allow it (above QLAV in the lowest basement) or hold no figures of the refrigerant.
    RSIF IF-04 appendix 4: up to QLMV nothing, up to QLAV one, above two; in the lowest basement RCL in place of QLMV.
    """
    figures = load("alternatives.yaml")["limits"].get(name)
    if figures is None:
        return None
    edges = [
        read_value(figures[key], Kind.DENSITY) for key in (("rcl", "qlmv") if lowest_basement else ("qlmv", "qlav"))
    ]
    if lowest_basement and concentration > read_value(figures["qlav"], Kind.DENSITY):
        return None
    return sum(concentration > edge for edge in edges)


def alternative_limits(case: Situation) -> tuple[ChargeLimit, ...]:
    """The charge without a measure and with one, for class A1 and A2L in location class II; else nothing or why."""
    table = load("alternatives.yaml")
    document, edition = str(table["document"]), str(table["edition"])
    figures = table["limits"].get(case.substance.name)
    if case.location != "II" or case.substance.safety_class not in ("A1", "A2L"):
        return ()
    if figures is None or case.volume is None:
        reason = "no figures of this refrigerant" if figures is None else "floor area or height is not stated"
        return (not_applicable(document, edition, "alternative provisions", "M", reason),)
    first, second = ("rcl", "qlmv") if case.below_ground else ("qlmv", "qlav")
    rows = ((first, "no measure"), (second, "one measure: ventilation, shut-off valves or alarm"))
    return tuple(_row(case, document, edition, key, words, figures) for key, words in rows)


def _row(case: Situation, document: str, edition: str, key: str, words: str, figures: dict[str, str]) -> ChargeLimit:
    density = read_value(figures[key], Kind.DENSITY)
    volume = case.volume or 0.0
    inputs = (
        *case.inputs,
        Input("room volume", volume, Kind.VOLUME, "floor area times height"),
        Input(key.upper(), density, Kind.DENSITY, f"{document}, {edition} ({figures['mark']})"),
    )
    kilograms = min(dispersal_charge(density, volume), read_value("150 kg", Kind.MASS))
    rule = (
        f"alternative provisions, {key.upper()}: {words}; joints protected, indoor unit at most 25 % of the outdoor one"
    )
    return limit(document, edition, rule, (figures["mark"],), kilograms, "charge_by_concentration", inputs)
