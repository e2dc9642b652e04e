"""Charge limits of EN 378-1:2016 annex C (ISO 5149-1 annex A alike) and of the practical limit.

The limit is the lower of the toxicity limit and the flammability limit. Cells of tables C.1 and C.2 are from memory
where the facts say so; the caller shows the mark.
"""

from __future__ import annotations

from commission.quantities import Input, Kind
from commission.safety.facts import Fact, fact
from commission.safety.formulas import comfort_charge, dispersal_charge, flammable_cap
from commission.safety.limits import ChargeLimit, Situation, fact_as_input, known_input, limit, not_applicable
from commission.safety.substance import Known

DOCUMENT = "EN 378-1 (ISO 5149-1 alike)"
ALL_APART = (
    "no limit by room size: all parts outdoors or in a machinery room, which has ventilation and detectors instead"
)
NO_VOLUME = "floor area or height of this space is not stated"


def en378_limits(case: Situation) -> tuple[ChargeLimit, ...]:
    """Toxicity, flammability and practical limit of one space."""
    return (_toxicity(case), _flammability(case), _practical(case))


def _volume_input(case: Situation) -> Input:
    return Input("room volume", case.volume or 0.0, Kind.VOLUME, "floor area times height")


def _toxicity(case: Situation) -> ChargeLimit:
    edition = "2016, table C.1"
    rule = f"toxicity, access {case.access}, location {case.location}"
    if case.location in ("III", "IV"):
        return not_applicable(DOCUMENT, edition, rule, "M", ALL_APART)
    if case.substance.toxicity == "B" and case.access != "a":
        return _class_b(case, edition, rule)
    if case.substance.toxicity == "A" and case.access != "a" and not case.below_ground:
        reason = "no toxicity limit for class A above ground without public access (not so upstairs without exits)"
        return not_applicable(DOCUMENT, edition, rule, "M", reason)
    known = _toxicity_limit(case)
    if known is None:
        return not_applicable(DOCUMENT, edition, rule, "M", "the register has neither ATEL/ODL nor practical limit")
    if case.volume is None:
        return not_applicable(DOCUMENT, edition, rule, "M", NO_VOLUME)
    kilograms = dispersal_charge(known.value, case.volume)
    inputs = (*case.inputs, _volume_input(case), known_input("higher of ATEL/ODL and practical limit", known))
    marks = [fact("lfl_share").mark, known.mark, "M"]
    if case.sealed:
        sealed = fact("sealed_dispersal_volume")
        kilograms = max(kilograms, known.value * sealed.value, fact("sealed_free_charge").value)
        inputs = (*inputs, fact_as_input(sealed))
        rule += ", sealed"
    return limit(DOCUMENT, edition, rule, tuple(marks), kilograms, "charge_by_concentration", inputs)


def _class_b(case: Situation, edition: str, rule: str) -> ChargeLimit:
    cap = fact("ammonia_c_outdoor_compressor" if case.location == "II" else "ammonia_c_dense")
    return limit(DOCUMENT, edition, f"{rule}, class B", (cap.mark,), cap.value, "charge_cap", (fact_as_input(cap),))


def _toxicity_limit(case: Situation) -> Known | None:
    known = [k for k in (case.substance.atel_odl, case.substance.practical_limit) if k is not None]
    return max(known, key=lambda k: k.value, default=None)


def _flammability(case: Situation) -> ChargeLimit:
    edition = "2016, table C.2"
    substance = case.substance
    rule = f"flammability, class {substance.flammability}, access {case.access}, location {case.location}"
    if not substance.flammable:
        return not_applicable(DOCUMENT, edition, rule, "V1", "the refrigerant does not burn (class 1)")
    if substance.lfl is None:
        return not_applicable(DOCUMENT, edition, rule, "M", "the register has no lower flammability limit")
    if case.location in ("III", "IV"):
        return _all_apart(case, edition, rule)
    by_room = _comfort(case, edition, rule) if case.comfort else _by_share(case, edition, rule)
    if by_room.value is None or not case.sealed:
        return by_room
    free = max(
        fact("sealed_free_charge").value, flammable_cap(substance.lfl.value, fact("m1_volume").value, _factor(case))
    )
    if free <= by_room.value.value:
        return by_room
    inputs = (known_input("LFL", substance.lfl), fact_as_input(fact("m1_volume")))
    return limit(
        DOCUMENT, edition, f"{rule}, sealed: m1", (by_room.mark, substance.lfl.mark), free, "charge_cap", inputs
    )


def _all_apart(case: Situation, edition: str, rule: str) -> ChargeLimit:
    """Class 3 with all parts outdoors or in a machinery room: a mass by access category, none for c."""
    if case.substance.flammability != "3" or case.access == "c":
        return not_applicable(DOCUMENT, edition, rule, "M-low", ALL_APART)
    cap = fact("class3_a_outdoors" if case.access == "a" else "class3_b_outdoors")
    return limit(DOCUMENT, edition, rule, (cap.mark,), cap.value, "charge_cap", (fact_as_input(cap),))


def _factor(case: Situation) -> float:
    return fact("cap_factor_2l").value if case.substance.flammability == "2L" else 1.0


def _by_share(case: Situation, edition: str, rule: str) -> ChargeLimit:
    lfl = case.substance.lfl
    assert lfl is not None
    if case.volume is None:
        return not_applicable(DOCUMENT, edition, rule, "M-low", NO_VOLUME)
    share = fact("lfl_share")
    kilograms = dispersal_charge(share.value * lfl.value, case.volume)
    inputs = (*case.inputs, _volume_input(case), known_input("LFL", lfl), fact_as_input(share))
    return _capped(case, edition, f"{rule}: 20 % of LFL in the room", kilograms, inputs, (share.mark, lfl.mark))


def _comfort(case: Situation, edition: str, rule: str) -> ChargeLimit:
    lfl = case.substance.lfl
    assert lfl is not None
    if case.area is None:
        return not_applicable(DOCUMENT, edition, rule, "V1", "the floor area of this space is not stated")
    height = case.release_height
    free = flammable_cap(lfl.value, fact("m1_volume").value, _factor(case))
    kilograms = max(free, comfort_charge(lfl.value, height.value, case.area))
    inputs = (*case.inputs, known_input("LFL", lfl), fact_as_input(fact("comfort_factor")), fact_as_input(height))
    rule = f"{rule}, human comfort, C.2.1, {_mounted(case)}; m1 is free"
    return _capped(case, edition, rule, kilograms, inputs, ("V1", lfl.mark))


def _mounted(case: Situation) -> str:
    return f"{case.mounting} unit" if case.mounting else "mounting not stated, taken at the floor (the strictest)"


def _capped(
    case: Situation, edition: str, rule: str, kilograms: float, inputs: tuple[Input, ...], marks: tuple[str, ...]
) -> ChargeLimit:
    name, cap = _cap(case)
    if kilograms <= cap:
        return limit(DOCUMENT, edition, rule, marks, kilograms, "charge_by_concentration", inputs)
    return limit(
        DOCUMENT,
        edition,
        f"{rule}, but not over the cap",
        (*marks, name.mark),
        cap,
        "charge_cap",
        (*inputs, fact_as_input(name)),
    )


def _cap(case: Situation) -> tuple[Fact, float]:
    """The cap of table C.2 and its value in kg: a mass for class 3, a multiple of LFL for 2L and 2."""
    lfl = case.substance.lfl
    assert lfl is not None
    if case.substance.flammability != "3":
        return fact("m2_volume"), flammable_cap(lfl.value, fact("m2_volume").value, _factor(case))
    if case.below_ground:
        key = "class3_below_ground"
    elif case.access == "c":
        key = "class3_c_outdoor_compressor" if case.location == "II" else "class3_c_direct"
    else:
        key = "class3_a_occupied" if case.access == "a" else "class3_b_occupied"
    return fact(key), fact(key).value


def _practical(case: Situation) -> ChargeLimit:
    """Practical limit times volume, with the cap of the worked example for class 3 (RSIF IF-04 appendix 5)."""
    document, edition = "RSIF (after EN 378)", "IF-04 appendices 2 and 5"
    rule = "practical limit times room volume"
    known = case.substance.practical_limit
    if known is None:
        return not_applicable(document, edition, rule, "M", "the register has no practical limit")
    if case.location in ("III", "IV"):
        return not_applicable(document, edition, rule, "V1", ALL_APART)
    if case.volume is None:
        return not_applicable(document, edition, rule, "V1", NO_VOLUME)
    if case.substance.toxicity == "B" and case.access != "a":
        return not_applicable(document, edition, rule, "V1", "class B by kilograms where the public has no access")
    if not case.substance.flammable and case.access != "a" and not case.below_ground:
        return not_applicable(
            document, edition, rule, "V1", "no limit for class A1 above ground where the public has no access"
        )
    kilograms = dispersal_charge(known.value, case.volume)
    inputs = (*case.inputs, _volume_input(case), known_input("practical limit", known))
    cap = fact("class3_b_occupied_rsif")
    if case.substance.flammability == "3" and case.access != "c" and kilograms > cap.value:
        return limit(
            document,
            edition,
            f"{rule}, but not over the cap",
            (cap.mark, known.mark),
            cap.value,
            "charge_cap",
            (*inputs, fact_as_input(cap)),
        )
    return limit(document, edition, rule, ("V1", known.mark), kilograms, "charge_by_concentration", inputs)
