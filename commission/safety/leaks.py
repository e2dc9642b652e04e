"""Leak-check duties, CO₂ equivalent and label text by the refrigerant law that the plant is under."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from commission.quantities import Explained, Input, Kind
from commission.safety.facts import load, read_value
from commission.safety.formulas import co2_equivalent

if TYPE_CHECKING:
    from commission.safety.substance import Substance

EU = "EU 2024/573"
US = "US 40 CFR 82 and 84"


@dataclass(frozen=True, slots=True)
class LeakDuty:
    """Whether the law asks for leak checks. `applies` is None where the law or the facts do not say.

    `months` is the interval, `months_with_detection` the one with a leakage detection system; `reason` says in words
    what was found; `measure` is what the limits were compared with (CO₂ equivalent or mass).
    """

    law: str
    applies: bool | None
    months: int | None
    months_with_detection: int | None
    reason: str
    document: str
    edition: str
    mark: str
    measure: Explained | None = None


def leak_duty(law: str, substance: Substance, charge: float | None, sealed: bool, duty: str) -> LeakDuty:
    """The leak-check duty of one system under `law` (as written in plant.rules.refrigerant_law); charge in kg."""
    table: Mapping[str, Any] = load("leak_checks.yaml")
    if law == EU:
        return _eu(table[EU], substance, charge, sealed)
    if law == US:
        return _us(table[US], substance, charge, duty)
    reason = "no refrigerant law is stated: write plant.rules.refrigerant_law"
    return LeakDuty(law, None, None, None, reason, "none stated", "", "stated")


def _eu(law: Mapping[str, Any], substance: Substance, charge: float | None, sealed: bool) -> LeakDuty:
    document, edition = str(law["document"]), str(law["edition"])
    parts = set(substance.components)
    if parts & set(law["ozone"]):
        reason = (
            "an ozone-depleting substance: Regulation (EU) 2024/590 applies instead; ask for its leak-check interval"
        )
        return LeakDuty(EU, None, None, None, reason, "Regulation (EU) 2024/590", "", "M")
    group = "annex_i" if parts & set(law["annex_i"]["components"]) else "annex_ii"
    if not parts & set(law[group]["components"]):
        reason = f"{substance.name} holds no gas of annex I or II: this law asks for no leak check of it"
        return LeakDuty(EU, False, None, None, reason, document, edition, "V1")
    if charge is None:
        return LeakDuty(EU, None, None, None, "the charge is not stated", document, edition, "V1")
    measure = _measure(group, substance, charge)
    if measure is None:
        return LeakDuty(EU, None, None, None, "the register has no GWP for this law", document, edition, "V1")
    return _eu_row(law[group], measure, sealed, document, edition)


def _measure(group: str, substance: Substance, charge: float) -> Explained | None:
    """What the limits count: CO₂ equivalent for annex I (a mixture with any such gas), mass for annex II."""
    inputs = (Input("charge", charge, Kind.MASS, "description"),)
    if group == "annex_ii":
        return Explained("charge", charge, None, "safety_rule_figure", inputs)
    if substance.gwp is None:
        return None
    gwp = substance.gwp
    both = (*inputs, Input("GWP by EU 2024/573", gwp.value, Kind.NUMBER, f"register: {gwp.source} ({gwp.mark})"))
    return Explained("co2_equivalent", co2_equivalent(charge, gwp.value), None, "co2_equivalent", both)


def _eu_row(group: Mapping[str, Any], measure: Explained, sealed: bool, document: str, edition: str) -> LeakDuty:
    start = read_value(str(group["from"]["value"]), Kind.MASS)
    exempt = group["sealed_exempt_below"]
    if measure.value < start:
        reason = "below the amount from which checks are a duty"
        return LeakDuty(EU, False, None, None, reason, document, edition, str(group["from"]["mark"]), measure)
    if sealed and measure.value < read_value(str(exempt["value"]), Kind.MASS):
        reason = "hermetically sealed, below the exemption for sealed equipment that is labelled so"
        return LeakDuty(EU, False, None, None, reason, document, edition, str(exempt["mark"]), measure)
    row = next(r for r in reversed(group["rows"]) if measure.value >= read_value(str(r["from"]), Kind.MASS))
    months, with_detection = int(row["months"]), int(row["with_detection"])
    reason = f"a check at least every {months} months; every {with_detection} with a leakage detection system"
    return LeakDuty(EU, True, months, with_detection, reason, document, edition, str(row["mark"]), measure)


def _us(law: Mapping[str, Any], substance: Substance, charge: float | None, duty: str) -> LeakDuty:
    """US law asks for repair above a leak rate from a size of charge; intervals follow after a leak is found."""
    ozone = bool(set(substance.components) & set(load("leak_checks.yaml")[EU]["ozone"]))
    rule = law["ozone" if ozone else "hfc"]
    document, edition, mark = str(rule["document"]), str(rule["edition"]), str(rule["full_charge_from"]["mark"])
    if charge is None:
        return LeakDuty(US, None, None, None, "the charge is not stated", document, edition, mark)
    edge = read_value(str(rule["full_charge_from"]["value"]), Kind.MASS)
    measure = Explained(
        "charge", charge, None, "safety_rule_figure", (Input("charge", charge, Kind.MASS, "description"),)
    )
    if not ozone:
        if not substance.fluorinated:
            reason = f"{substance.name} holds no HFC or substitute that this law counts"
            return LeakDuty(US, False, None, None, reason, document, edition, mark, measure)
        if substance.gwp is None:
            return LeakDuty(US, None, None, None, "the register has no GWP", document, edition, mark, measure)
        if substance.gwp.value <= read_value(str(rule["gwp_above"]["value"]), Kind.NUMBER):
            return LeakDuty(US, False, None, None, "GWP not above 53", document, edition, mark, measure)
    if charge < edge:
        return LeakDuty(
            US,
            False,
            None,
            None,
            f"full charge below {rule['full_charge_from']['value']}",
            document,
            edition,
            mark,
            measure,
        )
    rate = law["leak_rates"][duty]
    reason = (
        f"leak rate at every addition; repair within 30 days above {rate['value']} of the full charge a year "
        f"({rate['says']}); "
        "no fixed interval before a leak is found"
    )
    return LeakDuty(US, True, None, None, reason, document, edition, mark, measure)


def label_text(law: str, substance: Substance, charge: float | None, sealed: bool) -> tuple[str, ...]:
    """Lines of the label that goes beside the service ports (EU 2024/573 article 12; EN 378-2 marking)."""
    mass = "____ kg (write the weighed charge)" if charge is None else f"{charge:.2f} kg"
    lines = [f"Refrigerant {substance.name}, charge {mass}"]
    if law == EU and substance.listed:
        lines.insert(0, "Contains fluorinated greenhouse gases")
        if substance.gwp is not None:
            tonnes = "____" if charge is None else f"{co2_equivalent(charge, substance.gwp.value) / 1000:.2f}"
            lines.append(f"GWP {substance.gwp.value:.0f}, CO₂ equivalent {tonnes} t")
    if sealed:
        lines.append("Hermetically sealed")
    if substance.flammable:
        lines.append("Flammable refrigerant: flame symbol at least 30 mm high beside this text")
    if substance.toxicity == "B":
        lines.append("Toxic refrigerant")
    return tuple(lines)
