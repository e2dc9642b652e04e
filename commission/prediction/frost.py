"""What frost and defrosts take from the heat of a coil in outdoor air, averaged over whole cycles. SI units.

A coil loses most a little above freezing in damp air; in deep cold the air holds no water, and above some 7 °C a coil
stays clean. The run over air temperature is that of the United States test procedure for heat pumps (10 CFR 430,
subpart B, appendix M1; AHRI 210/240; from memory): frost between 17 and 45 °F, and at 35 °F, where it is not tested,
90 % of the heat and 98.5 % of the power of the line between the two frost-free tests. Over humidity the loss follows
the water that the air can give up at the coil.
"""

from __future__ import annotations

from commission.description import RatedPoint
from commission.machine import Media
from commission.prediction.facts import Facts
from commission.properties import moist_air

COLD, WORST, WARM = 264.82, 274.82, 280.37
"""Outdoor air (K) from which frost forms, at which it takes most, and from which there is none: 17, 35, 45 °F."""
COIL = 8.0
"""Coil surface below the air in K (common practice, no source)."""
DAMP = 0.85
"""Relative humidity at which the loss is that of the air temperature alone: test conditions have 82 to 86 %."""
POWER_SHARE = 0.15
"""Fall of the power over the fall of the heat, as shares of each: 1.5 % beside 10 % in the same test procedure."""


def severity(outdoor: float, relative_humidity: float, pressure: float) -> float:
    """Loss by frost at outdoor air (K, 0-1, Pa) over the loss at 35 °F in damp air; 0 where none forms."""
    if not COLD < outdoor < WARM:
        return 0.0
    run = (outdoor - COLD) / (WORST - COLD) if outdoor < WORST else (WARM - outdoor) / (WARM - WORST)
    held = moist_air(outdoor - COIL, pressure, relative_humidity=1.0).W
    damp = moist_air(outdoor, pressure, relative_humidity=DAMP).W - held
    return run * max(moist_air(outdoor, pressure, relative_humidity=relative_humidity).W - held, 0.0) / damp


def no_frost_counted(outdoor: float) -> str | None:
    """Why nothing can be said of frost at this outdoor air (K), though the coil is below freezing; None where it can.

    The test procedure takes a straight line through its points at 17 and 47 °F outside of that range: what little frost
    there is stands in them unseen.
    """
    if COLD < outdoor < WARM:
        return None
    return (
        f"the method counts frost from {COLD - 273.15:.1f} to {WARM - 273.15:.1f} °C outdoors only, while this coil is "
        "below freezing and collects some: the average lies a little below the steady value"
    ).replace("-", "−", 1)


def counts_defrosts(facts: Facts, point: RatedPoint) -> bool:
    """Whether a rated point is an average over frost and defrosts that the model has to lower its steady heat by."""
    return point.frost_included is True and facts.heats_from_air


def with_defrosts(share: float, media: Media) -> tuple[float, float]:
    """Heat and power over whole cycles of frost and defrost, as shares of those of a clean coil.

    `share` is the share of heat that is lost at 35 °F in damp air.
    """
    air = media.source.air
    if air is None:
        return 1.0, 1.0
    lost = share * severity(air.T, min(air.relative_humidity, 1.0), air.p)
    return 1.0 - lost, 1.0 - POWER_SHARE * lost
