"""Too little or too much refrigerant: where a circuit keeps its liquid, and what goes first. SI units.

Liquid stands in the receiver or, where there is none, in the last part of the condenser and in the liquid line. A loss
empties the receiver without any sign. Without one it shortens the subcooled zone, whose number of transfer units goes
with its length. When that is gone the liquid line holds vapour too, as a homogeneous mixture. What is too much fills a
receiver's reserve first and then the condenser, whose surface is lost to condensation. All other parts are taken to
hold what they held, so that the answer is one of direction and size, not of grams.
"""

from __future__ import annotations

import math
from dataclasses import replace

from commission.errors import NotCalculatedError
from commission.machine import SingleStage

RESERVE = 0.3
"""Share of the charge that a receiver keeps in reserve at the rated condition, and room it has for more (common
practice, no source: 0.15 to 0.5)."""
ZONE = 0.2
"""Share of the charge in the subcooled zone of a condenser without a receiver (common practice, no source: 0.1 to 0.3;
a fifth too little leaves no subcooling)."""
SURFACE = 0.15
"""Share of the condenser's surface that this zone covers (common practice, no source: 0.1 to 0.25)."""
LINE = 0.1
"""Share of the charge in the liquid line (common practice, no source: 0.03 to 0.2)."""
MOST_VAPOUR = 0.5
"""Share of vapour before the valve above which a circuit no longer runs as one (common practice, no source)."""
WARM = 313.15
"""Temperature in K at which liquid and vapour of the line are weighed."""


def with_charge(machine: SingleStage, change: float, valve: float) -> SingleStage:
    """The machine with its charge changed by the share `change`, negative for a loss; `valve` is the area (m2) of its
    valve fully open.

    Raises:
        NotCalculatedError: so much is gone that mostly vapour reaches the valve.
    """
    receiver = machine.subcooling != math.inf
    if receiver and -RESERVE <= change <= RESERVE:
        return machine
    if receiver:
        change += RESERVE if change < 0 else -RESERVE
    zone = 0.0 if receiver else ZONE
    if change < -zone:
        feed = machine.greatest_feed if machine.restriction is not None else valve
        vapour = _vapour(machine, -change - zone)
        return replace(_flooded(machine, 0.0 if receiver else -1.0), flash=vapour, greatest_feed=feed)
    longer = change / ZONE
    if receiver:
        return _flooded(machine, longer)
    share = machine.subcooling_share
    assert share is not None
    return replace(_flooded(machine, longer), subcooling_share=-math.expm1((1 + longer) * math.log1p(-share)))


def _flooded(machine: SingleStage, longer: float) -> SingleStage:
    """The machine with liquid in more of its condenser, by that share of its rated length: less surface is left."""
    left = (1 - SURFACE * (1 + longer)) / (1 - SURFACE)
    return replace(machine, condenser=replace(machine.condenser, conductance=left * machine.condenser.conductance))


def _vapour(machine: SingleStage, lacking: float) -> float:
    """Share of vapour by mass before the valve, where the line lacks that share of the charge."""
    if lacking >= LINE:
        raise NotCalculatedError("so much refrigerant is lacking that vapour alone would reach the valve")
    fluid = machine.refrigerant
    T = min(WARM, 0.9 * fluid.T_critical)
    thinner = LINE / (LINE - lacking)
    vapour = (thinner - 1) / (fluid.bubble(T).rho / fluid.dew(T).rho - 1)
    if vapour > MOST_VAPOUR:
        raise NotCalculatedError("so much refrigerant is lacking that mostly vapour would reach the valve")
    return float(vapour)
