"""Charge limits of ASHRAE 15, IEC 60335-2-89 and IEC 60335-2-40, beside those of EN 378."""

from __future__ import annotations

from commission.quantities import Input, Kind
from commission.safety.facts import fact
from commission.safety.formulas import comfort_charge, dispersal_charge, flammable_cap
from commission.safety.limits import ChargeLimit, Situation, fact_as_input, known_input, limit, not_applicable


def ashrae15_limit(case: Situation) -> ChargeLimit:
    """RCL times the effective dispersal volume, here the room alone (from memory)."""
    document, edition = "ASHRAE 15", "7.3 (RCL by ASHRAE 34)"
    rule = "concentration limit RCL times room volume, high-probability system"
    if case.substance.rcl is None:
        return not_applicable(document, edition, rule, "M", "the register has no RCL")
    if case.location in ("III", "IV"):
        return not_applicable(
            document, edition, rule, "M", "a machinery room built to the standard, or outdoors, instead"
        )
    if case.volume is None:
        return not_applicable(document, edition, rule, "M", "floor area or height of this space is not stated")
    if case.substance.flammability == "3":
        rule += "; class 3 needs the approval of the authority besides"
    kilograms = dispersal_charge(case.substance.rcl.value, case.volume)
    inputs = (
        *case.inputs,
        Input("room volume", case.volume, Kind.VOLUME, "floor area times height"),
        known_input("RCL", case.substance.rcl),
    )
    return limit(document, edition, rule, ("M", case.substance.rcl.mark), kilograms, "charge_by_concentration", inputs)


def commercial_limit(case: Situation) -> ChargeLimit:
    """Self-contained commercial refrigeration: 13 m³ times LFL for class 3, 1.2 kg for 2 and 2L."""
    volume, mass = fact("commercial_lfl_volume"), fact("commercial_2l_limit")
    document, edition, rule = volume.document, volume.edition, "self-contained commercial refrigeration"
    if not case.commercial:
        return not_applicable(document, edition, rule, volume.mark, "not a commercial refrigerating appliance")
    if not case.sealed:
        return not_applicable(
            document, edition, rule, volume.mark, "for factory-sealed appliances; this one is piped on site"
        )
    if not case.substance.flammable or case.substance.lfl is None:
        return not_applicable(document, edition, rule, volume.mark, "the refrigerant does not burn (class 1)")
    if case.substance.flammability == "3":
        kilograms = flammable_cap(case.substance.lfl.value, volume.value)
        inputs = (known_input("LFL", case.substance.lfl), fact_as_input(volume))
        return limit(
            document,
            edition,
            f"{rule}: 13 m³ x LFL",
            (volume.mark, case.substance.lfl.mark),
            kilograms,
            "charge_cap",
            inputs,
        )
    return limit(document, edition, rule, (mass.mark,), mass.value, "charge_cap", (fact_as_input(mass),))


def heat_pump_limit(case: Situation) -> ChargeLimit:
    """Air conditioners and heat pumps: m_max by floor area, m1 free, not over m2; unit taken at floor height."""
    document, edition = "IEC 60335-2-40", "editions 5 and 6, annex GG"
    rule = "m = 2.5 LFL^(5/4) h0 √A by mounting height, m1 free, not over m2"
    substance = case.substance
    if not case.comfort:
        return not_applicable(document, edition, rule, "V1", "not an air conditioner or heat pump for rooms")
    if not substance.flammable or substance.lfl is None:
        return not_applicable(document, edition, rule, "V1", "the refrigerant does not burn (class 1)")
    if case.area is None:
        return not_applicable(document, edition, rule, "V1", "the floor area of this space is not stated")
    mild = substance.flammability == "2L"
    m1 = fact("heat_pump_a2l_m1_volume" if mild else "m1_volume")
    m2 = fact("heat_pump_a2l_m2_volume" if mild else "m2_volume")
    height = case.release_height
    lfl = substance.lfl.value
    by_room = comfort_charge(lfl, height.value, case.area)
    kilograms = min(max(by_room, flammable_cap(lfl, m1.value)), flammable_cap(lfl, m2.value))
    inputs = (
        *case.inputs,
        known_input("LFL", substance.lfl),
        fact_as_input(height),
        fact_as_input(m1),
        fact_as_input(m2),
    )
    return limit(
        document, edition, rule, (m1.mark, m2.mark, substance.lfl.mark), kilograms, "charge_by_floor_area", inputs
    )
