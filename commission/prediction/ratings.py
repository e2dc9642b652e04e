"""Exchangers from catalogue ratings: the conductance that a stated capacity at a stated difference means. SI units."""

from __future__ import annotations

from collections.abc import Mapping

from commission.description.model import CoolerRating
from commission.errors import NotCalculatedError
from commission.machine import Stream, between, coil_conductance, conductance_for, within_reach
from commission.prediction.building import air_share
from commission.prediction.facts import Facts
from commission.prediction.streams import KELVIN, SINK_HUMIDITY, humidity, stream

MEAN_BELOW_DEW = 0.35
"""Dew point less the mean along an evaporator, over the glide: liquid enters it with a quality of about 0.3."""
RATED_SUPERHEAT = 0.65
"""Superheat at which an evaporator is rated, as a share of the inlet difference (EN 328, from memory)."""
RATED_LIQUID = 303.15
"""Liquid temperature in K at which an evaporator is rated (EN 328, from memory)."""


COOLER_AIR, CONDENSER_AIR = 2.0 + KELVIN, 25.0 + KELVIN
"""Air on in K of a catalogue rating that does not state it (common practice, no source)."""


def _air_on(rating: CoolerRating, usual: float) -> float:
    return usual if rating.air_on is None else rating.air_on


def evaporator_conductance(facts: Facts, a: Mapping[str, float], source_flow: float) -> float | None:
    """Conductance in W/K that is stated or follows from a catalogue rating; None where it must be fitted."""
    part = facts.system.evaporator
    if part.conductance is not None or part.rating is None:
        return part.conductance
    rating, air_on = part.rating, _air_on(part.rating, COOLER_AIR)
    medium = stream(air_on, source_flow, facts.source_liquid, humidity(facts, a), facts.pressure)
    capacity = rating.capacity * (1.0 + a["evaporator_rating_departure"])
    dew = rating_difference(facts, a)
    assert dew is not None
    glide = facts.glide(air_on - rating.temperature_difference)
    difference = between(dew, dew + 2 * MEAN_BELOW_DEW * glide)
    dry = _rating("evaporator", capacity, difference, medium)
    share = air_share(facts, a)
    if share is None or rating.surface == "dry":
        return dry
    wet = 1.0 if rating.surface is not None else a["rating_of_a_wet_coil"]
    return dry + wet * (_rating("evaporator", capacity, difference, medium, share) - dry)


def _to_the_mean(facts: Facts, a: Mapping[str, float], at: str | None) -> float:
    """How far a rating counts from the dew point (0) to the mean of the glide (1), as stated, else as assumed."""
    if at is not None or not facts.fluid.is_blend:
        return float(at != "dew")
    return a["rating_to_the_mean"]


def rating_difference(facts: Facts, a: Mapping[str, float]) -> float | None:
    """Air on minus dew point in K at the catalogue rating of the evaporator; None where it has none.

    The mean along the evaporator lies below the dew point by a third of the glide.
    """
    rating = facts.system.evaporator.rating
    if rating is None:
        return None
    air_on = _air_on(rating, COOLER_AIR)
    glide = facts.glide(air_on - rating.temperature_difference)
    return rating.temperature_difference - _to_the_mean(facts, a, rating.at) * MEAN_BELOW_DEW * glide


def condenser_conductance(facts: Facts, a: Mapping[str, float], sink_flow: float) -> float | None:
    """Conductance in W/K that is stated or follows from a catalogue rating; None where it must be fitted."""
    part = facts.system.condenser
    if part.conductance is not None or part.rating is None:
        return part.conductance
    rating, air_on = part.rating, _air_on(part.rating, CONDENSER_AIR)
    medium = stream(air_on, sink_flow, facts.sink_liquid, SINK_HUMIDITY, facts.pressure)
    capacity = rating.capacity * (1.0 + a["condenser_rating_departure"])
    half = 0.5 * facts.glide(air_on + rating.temperature_difference)
    mean = rating.temperature_difference - (1 - _to_the_mean(facts, a, rating.at)) * half
    difference = between(mean - half, mean + half)
    return _rating("condenser", capacity, difference, medium)


def source_conductance(heat: float, difference: float, medium: Stream, share: float | None) -> float:
    """Conductance in W/K of an evaporator that takes `heat` (W) at an inlet difference (K), wet coils included.

    Raises:
        NotCalculatedError: more heat than the medium can give at that difference.
    """
    if share is None or medium.air is None:
        return conductance_for(heat, difference, medium.capacity_rate)
    return coil_conductance(heat, medium.temperature - difference, medium, share)


def _rating(what: str, capacity: float, difference: float, medium: Stream, share: float | None = None) -> float:
    try:
        return source_conductance(capacity, difference, medium, share)
    except NotCalculatedError as error:
        raise NotCalculatedError(f"the rating of the {what} and the flow cannot both be right: {error}") from None


def rated_superheat(a: Mapping[str, float], setting: float, difference: float) -> float:
    """Superheat in K that a valve with this setting (K) holds at the rated inlet difference (K)."""
    return within_reach(setting, difference, a["greatest_superheat_share"])


def wetted_conductance(
    facts: Facts, conductance: float, heat: float, inlet: float, difference: float, share: float, superheat: float
) -> float:
    """Conductance in W/K with all the surface wetted, of an evaporator that has `conductance` with part of it dry.

    It takes `heat` (W) from a medium that enters at `inlet` (K), `difference` (K) above the dew point, and superheats
    by `superheat` (K); a dry surface has `share` of the conductance of a wetted one.
    """
    fluid, evaporating = facts.fluid, inlet - difference
    gas = fluid.vapour(evaporating + superheat, fluid.dew_pressure(evaporating)).h
    liquid = fluid.bubble(min(RATED_LIQUID, 0.95 * fluid.T_critical)).h
    superheats = heat * (gas - fluid.dew(evaporating).h) / (gas - liquid)
    left = difference - superheat
    return float(conductance + superheats / (share * (left * difference) ** 0.5))
