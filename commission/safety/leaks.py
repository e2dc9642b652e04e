"""Leak-check duties, CO₂ equivalent and label text by the refrigerant law that the plant is under."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from commission.quantities import Explained, Input, Kind
from commission.safety.facts import load, read_value, weaker
from commission.safety.formulas import co2_equivalent, tonnes
from commission.safety.register import fluid_of, substance_of

if TYPE_CHECKING:
    from commission.description import LoadedPlant
    from commission.safety.substance import Substance

EU = "EU 2024/573"
US = "US 40 CFR 82 and 84"


@dataclass(frozen=True, slots=True)
class LeakDuty:
    """Whether the law asks for leak checks. `applies` is None where the law or the facts do not say.

    `months` is the interval, `months_with_detection` the one with a leakage detection system; `reason` says in words
    what was found; `measures` is what the limits were compared with: CO₂ equivalent (annex I), mass of the gases of
    annex II, or the charge.
    """

    law: str
    applies: bool | None
    months: int | None
    months_with_detection: int | None
    reason: str
    document: str
    edition: str
    mark: str
    measures: tuple[Explained, ...] = ()


def leak_duty_of(loaded: LoadedPlant, system_id: str) -> LeakDuty:
    """The leak-check duty of a system of a plant.

    Raises:
        InputError: no such system or refrigerant.
        NotCalculatedError: the register states no safety class of the refrigerant.
    """
    system, site = loaded.system(system_id), loaded.plant.plant
    substance = substance_of(fluid_of(loaded, system_id))
    law = site.rules.refrigerant_law
    return leak_duty(law, substance, system.charge, system.sealed, system.duty, dwelling=site.dwelling)


def leak_duty(
    law: str, substance: Substance, charge: float | None, sealed: bool, duty: str, *, dwelling: bool = False
) -> LeakDuty:
    """The leak-check duty of one system under `law` (as written in plant.rules.refrigerant_law); charge in kg.

    `dwelling` says that the plant serves dwellings alone.
    """
    table: Mapping[str, Any] = load("leak_checks.yaml")
    if law == EU:
        return _eu(table[EU], substance, charge, sealed, dwelling)
    if law == US:
        return _us(table[US], substance, charge, duty)
    reason = "no refrigerant law is stated: write plant.rules.refrigerant_law"
    return LeakDuty(law, None, None, None, reason, "none stated", "", "stated")


def _eu(law: Mapping[str, Any], substance: Substance, charge: float | None, sealed: bool, dwelling: bool) -> LeakDuty:
    """Both counts of article 5(1), each where the refrigerant holds such a gas; the stricter decides."""
    document, edition = str(law["document"]), str(law["edition"])
    parts = set(substance.components)
    if parts & set(law["ozone"]):
        reason = (
            "an ozone-depleting substance: Regulation (EU) 2024/590 applies instead; ask for its leak-check interval"
        )
        return LeakDuty(EU, None, None, None, reason, "Regulation (EU) 2024/590", "", "M")
    groups = [name for name in ("annex_i", "annex_ii") if parts & set(law[name]["components"])]
    if not groups:
        reason = f"{substance.name} holds no gas of annex I or II: this law asks for no leak check of it"
        return LeakDuty(EU, False, None, None, reason, document, edition, "V1")
    if charge is None:
        return LeakDuty(EU, None, None, None, "the charge is not stated", document, edition, "V1")
    home = law["sealed_in_dwelling_exempt_below"]
    if dwelling and sealed and charge < read_value(str(home["value"]), Kind.MASS):
        reason = f"hermetically sealed, in a dwelling, less than {home['value']} of these gases"
        return LeakDuty(EU, False, None, None, reason, document, edition, str(home["mark"]), _charge_alone(charge))
    counts = [_count(law[name], name, substance, charge, sealed) for name in groups]
    if any(count is None for count in counts):
        return LeakDuty(EU, None, None, None, "the register has no GWP for this law", document, edition, "V1")
    return _stricter([count for count in counts if count is not None], document, edition)


@dataclass(frozen=True, slots=True)
class _Count:
    """One count of article 5: the amount in words with its limit, the row that it falls into, or why into none."""

    measure: Explained
    says: str
    months: int | None
    months_with_detection: int | None
    mark: str


def _stricter(counts: list[_Count], document: str, edition: str) -> LeakDuty:
    said = "; ".join(count.says for count in counts)
    measures = tuple(count.measure for count in counts)
    bound = [count for count in counts if count.months is not None]
    if not bound:
        reason = f"{said}: no check is asked for"
        mark = weaker(*(count.mark for count in counts))
        return LeakDuty(EU, False, None, None, reason, document, edition, mark, measures)
    first = min(bound, key=lambda count: count.months or 0)
    months, relaxed = first.months, first.months_with_detection
    reason = f"{said}: a check at least every {months} months, or {relaxed} with a leakage detection system"
    return LeakDuty(EU, True, months, relaxed, reason, document, edition, first.mark, measures)


def annex_ii_mass(substance: Substance, charge: float) -> Explained | None:
    """Mass in kg of the gases of annex II, section 1, in a charge; None where the refrigerant holds none."""
    named = load("leak_checks.yaml")[EU]["annex_ii"]["components"]
    share = sum(part for gas, part in substance.fractions.items() if gas in named)
    if not share:
        return None
    source = f"composition of {substance.name} (ISO 817)"
    inputs = (*_charge(charge), Input("mass share of annex II gases", share, Kind.RATIO, source))
    return Explained("annex_ii_mass", charge * share, None, "annex_ii_mass", inputs)


def _charge(charge: float) -> tuple[Input, ...]:
    return (Input("charge", charge, Kind.MASS, "description"),)


def _charge_alone(charge: float) -> tuple[Explained, ...]:
    return (Explained("charge", charge, None, "safety_rule_figure", _charge(charge)),)


def _count(group: Mapping[str, Any], name: str, substance: Substance, charge: float, sealed: bool) -> _Count | None:
    """CO₂ equivalent of the whole mixture for annex I, mass of its own gases for annex II; None without a GWP."""
    if name == "annex_ii":
        measure = annex_ii_mass(substance, charge)
        assert measure is not None
        said = f"{measure.value:.3g} kg of annex II gases"
    else:
        gwp = substance.gwp
        if gwp is None:
            return None
        factor = Input("GWP by EU 2024/573", gwp.value, Kind.NUMBER, f"register: {gwp.source} ({gwp.mark})")
        inputs = (*_charge(charge), factor)
        measure = Explained("co2_equivalent", co2_equivalent(charge, gwp.value), None, "co2_equivalent", inputs)
        said = f"CO₂ equivalent {tonnes(measure.value)} t"
    start, exempt = group["from"], group["sealed_exempt_below"]
    if measure.value < read_value(str(start["value"]), Kind.MASS):
        return _Count(measure, f"{said}, below {_amount(start, name)}", None, None, str(start["mark"]))
    if sealed and measure.value < read_value(str(exempt["value"]), Kind.MASS):
        words = f"{said}, sealed and labelled so, below {_amount(exempt, name)}"
        return _Count(measure, words, None, None, str(exempt["mark"]))
    row = next(r for r in reversed(group["rows"]) if measure.value >= read_value(str(r["from"]), Kind.MASS))
    words = f"{said}, at or above {_amount({'value': row['from']}, name)}"
    return _Count(measure, words, int(row["months"]), int(row["with_detection"]), str(row["mark"]))


def _amount(limit: Mapping[str, Any], name: str) -> str:
    kilograms = read_value(str(limit["value"]), Kind.MASS)
    return f"{kilograms:g} kg" if name == "annex_ii" else f"{kilograms / 1000:g} t"


def _us(law: Mapping[str, Any], substance: Substance, charge: float | None, duty: str) -> LeakDuty:
    """US law asks for repair above a leak rate from a size of charge; intervals follow after a leak is found."""
    ozone = bool(set(substance.components) & set(load("leak_checks.yaml")[EU]["ozone"]))
    rule = law["ozone" if ozone else "hfc"]
    document, edition, mark = str(rule["document"]), str(rule["edition"]), str(rule["full_charge_from"]["mark"])
    if charge is None:
        return LeakDuty(US, None, None, None, "the charge is not stated", document, edition, mark)
    edge = read_value(str(rule["full_charge_from"]["value"]), Kind.MASS)
    measures = _charge_alone(charge)
    if not ozone:
        if not substance.fluorinated:
            reason = f"{substance.name} holds no HFC or substitute that this law counts"
            return LeakDuty(US, False, None, None, reason, document, edition, mark, measures)
        if substance.gwp is None:
            return LeakDuty(US, None, None, None, "the register has no GWP", document, edition, mark, measures)
        if substance.gwp.value <= read_value(str(rule["gwp_above"]["value"]), Kind.NUMBER):
            return LeakDuty(US, False, None, None, "GWP not above 53", document, edition, mark, measures)
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
            measures,
        )
    rate = law["leak_rates"][duty]
    reason = (
        f"leak rate at every addition; repair within 30 days above {rate['value']} of the full charge a year "
        f"({rate['says']}); "
        "no fixed interval before a leak is found"
    )
    return LeakDuty(US, True, None, None, reason, document, edition, mark, measures)


def label_text(law: str, substance: Substance, charge: float | None, sealed: bool) -> tuple[str, ...]:
    """Lines of the label that goes beside the service ports (EU 2024/573 article 12; EN 378-2 marking)."""
    mass = "____ kg (write the weighed charge)" if charge is None else f"{charge:.2f} kg"
    lines = [f"Refrigerant {substance.name}, charge {mass}"]
    if law == EU and substance.listed:
        lines.insert(0, "Contains fluorinated greenhouse gases")
        if substance.gwp is not None:
            equivalent = "____" if charge is None else tonnes(co2_equivalent(charge, substance.gwp.value))
            lines.append(f"GWP {substance.gwp.value:.0f}, CO₂ equivalent {equivalent} t")
    if sealed:
        lines.append("Hermetically sealed")
    if substance.flammable:
        lines.append("Flammable refrigerant: flame symbol at least 30 mm high beside this text")
    if substance.toxicity == "B":
        lines.append("Toxic refrigerant")
    return tuple(lines)
