"""What a system of an equipment schedule is for, and which side of it a heading such as `ambient` then means."""

from __future__ import annotations

import re

_DUTY_WORDS = {
    "cold_storage": ("cold storage", "cold room", "freezer", "freezer room", "walk in cooler", "walk in freezer",
                     "walk in", "cold store", "refrigeration", "cooler"),
    "comfort_cooling": ("comfort cooling", "air conditioning", "air conditioner", "ac", "dx cooling", "split",
                        "split system", "split ac", "rooftop unit", "rtu", "cooling"),
    "liquid_cooling": ("liquid cooling", "chiller", "water chiller", "chilled water"),
    "space_heating": ("space heating", "heat pump", "heating"),
    "water_heating": ("water heating", "hot water", "heat pump water heater", "domestic hot water", "dhw", "hpwh",
                      "water heater"),
}  # fmt: skip
_TOO_GENERAL = {"refrigeration", "cooler", "split", "cooling", "heating", "chilled water", "hot water"}
"""Words that name a duty in a column of duties, but stand for other things too in a description."""

_MEDIA = {
    "cold_storage": ("air", "air"),
    "comfort_cooling": ("air", "air"),
    "liquid_cooling": ("water", "air"),
    "space_heating": ("air", "water"),
    "water_heating": ("air", "water"),
}
"""Usual media, taken where the schedule has no column for them and written into the description to be looked at."""

_HEATING = ("space_heating", "water_heating")
_BY_SIDE = {
    "point.outdoor_air": "{side}_inlet_temperature",
    "point.outdoor_wet_bulb": "{side}_wet_bulb",
    "point.room_air": "{side}_inlet_temperature",
    "point.entering_air": "{side}_inlet_temperature",
    "point.entering_wet_bulb": "{side}_wet_bulb",
    "point.leaving_air": "{side}_outlet_temperature",
    "point.water_in": "{side}_inlet_temperature",
    "point.water_out": "{side}_outlet_temperature",
}


def plain(text: str) -> str:
    """Words without capitals and signs."""
    return " ".join(re.sub(r"[\W_]+", " ", text.casefold()).split())


def duty_named(text: str) -> str:
    """The duty that a cell of the duty column names, or the cell as it stands."""
    word = plain(text)
    return next((duty for duty, words in _DUTY_WORDS.items() if word in words or word == plain(duty)), text)


def duty_described(text: str) -> str | None:
    """The one duty that a description in words names, such as `Walk-in cooler, east`; None for none or several.

    The longest name counts where one holds the other, as `heat pump water heater` holds `heat pump`.
    """
    padded = f" {plain(text)} "
    found = [(w, d) for d, ws in _DUTY_WORDS.items() for w in ws if w not in _TOO_GENERAL and f" {w} " in padded]
    outer = [(w, d) for w, d in found if not any(w != other and f" {w} " in f" {other} " for other, _ in found)]
    duties = {duty for _, duty in outer}
    return duties.pop() if len(duties) == 1 else None


def usual_media(duty: str) -> tuple[str, str]:
    """Source and sink medium of a duty; air for an unknown duty, which is a problem of its own."""
    return _MEDIA.get(duty, ("air", "air"))


def meant_key(key: str, duty: str, media: tuple[str, str]) -> str | None:
    """The key path that a column means for a system of this duty and media; None where it has no such side."""
    if key == "point.capacity":
        return "point.heating_capacity" if duty in _HEATING else "point.cooling_capacity"
    if key == "air_flow":
        side = _air(("heat_source", "heat_sink"), media)
        return side and f"{side}.flow"
    if key == "water_flow":
        side = _liquid(media)
        return side and f"{side}.flow"
    if key not in _BY_SIDE:
        return key
    side = _side(key.removeprefix("point."), duty, media)
    return side and "point." + _BY_SIDE[key].format(side=side)


def _side(what: str, duty: str, media: tuple[str, str]) -> str | None:
    """The side that this air or water belongs to: a heat pump takes from outdoors what a cooler gives to it."""
    if what.startswith("water"):
        return _liquid(media)
    heating = duty in _HEATING
    if what.startswith("outdoor"):
        return _air(("heat_source",) if heating else ("heat_sink",), media)
    if what.startswith("room"):  # the air that a water heater stands in; the air that a heating system warms
        return _air(("heat_source",) if duty != "space_heating" else ("heat_sink",), media)
    return _air(("heat_sink", "heat_source") if duty == "space_heating" else ("heat_source",), media)


def _air(sides: tuple[str, ...], media: tuple[str, str]) -> str | None:
    """The first of these sides whose medium is air."""
    by_side = dict(zip(("heat_source", "heat_sink"), media, strict=True))
    return next((side for side in sides if by_side[side] == "air"), None)


def _liquid(media: tuple[str, str]) -> str | None:
    """The side with water, where only one has it; else the only side with a liquid."""
    sides = ("heat_source", "heat_sink")
    for wet in (
        [s for s, m in zip(sides, media, strict=True) if m == "water"],
        [s for s, m in zip(sides, media, strict=True) if m != "air"],
    ):
        if len(wet) == 1:
            return wet[0]
    return None
