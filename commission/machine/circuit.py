"""What all arrangements with one compressor and one evaporator share: parameters, low side, states. SI units."""

from __future__ import annotations

import math
from abc import ABC, abstractmethod
from collections.abc import Sequence
from dataclasses import dataclass
from typing import NamedTuple

from commission.machine.compressor import Compression, Compressor
from commission.machine.exchanger import Exchanger
from commission.machine.operating_point import Balance, Media, OperatingPoint, StatePoint
from commission.machine.polynomial import PolynomialCompressor
from commission.properties import Refrigerant, SaturationState, State

SUPERHEAT_SHARE = 0.85
"""Greatest superheat that a valve holds steadily, over the difference between entering medium and evaporation (common
practice, no source; catalogues rate at 0.65 by EN 328, from memory)."""
ROUNDING = 0.2
"""Share of its setting around which a valve goes over from what it is set to, to what the medium allows."""
SMALL = 0.5
"""Difference in K between medium and refrigerant below which it is small."""


def within_reach(setting: float, difference: float, share: float) -> float:
    """Superheat or subcooling in K that is held at a `setting` (K) as far as the surface can give it.

    `difference` (K) is that between refrigerant and entering medium. The setting where it leaves room for it; `share`
    of the difference where it does not (the least stable superheat falls with the load, Huelle 1972, from memory);
    between the two it goes over smoothly.
    """
    allowed = share * difference
    if allowed >= (1 + ROUNDING) * setting:
        return setting
    if allowed <= (1 - ROUNDING) * setting:
        return allowed
    return allowed - (allowed - (1 - ROUNDING) * setting) ** 2 / (4 * ROUNDING * setting)


def positive(x: float) -> float:
    """A positive difference in K from an unknown in K that may have any value.

    The difference is the unknown itself where it is large, and goes with its inverse where it is small.
    """
    return 0.5 * (x + math.hypot(x, 2.0 * SMALL)) if x > 0 else 2.0 * SMALL * SMALL / (math.hypot(x, 2.0 * SMALL) - x)


PINCH = 0.01
"""Difference at the narrow end over that at the wide end, below which their mean falls on in a straight line."""


def between(narrow: float, wide: float) -> float:
    """Geometric mean of the differences (K) at both ends; below the pinch its tangent, so that a trial beyond it, where
    no heat flows, can be told from a solution."""
    if narrow >= PINCH * wide:
        return math.sqrt(narrow * wide)
    return 0.5 * (narrow / math.sqrt(PINCH) + math.sqrt(PINCH) * wide)


@dataclass(frozen=True, slots=True)
class SuctionLine:
    """Between evaporator outlet and compressor: pressure loss in kelvin of dew temperature, and heat from around.

    The gas is warmed by `heating_share` of the difference between the surroundings and the evaporator outlet; `warming`
    is a further rise in K that does not depend on them. The heat is taken after the evaporator, so it is no use to the
    source, and it raises the suction temperature that is read.
    """

    pressure_loss: float = 0.0
    heating_share: float = 0.0
    warming: float = 0.0


@dataclass(frozen=True, slots=True)
class Parts:
    """The parameters of a machine; temperature differences in K. A fault is another value of one of them.

    `exchanger` is the effectiveness (0-1) of an exchanger between suction gas and liquid, 0 where there is none.
    `superheat` is what the valve is set to; it holds no more than `superheat_share` of the difference between the
    entering medium and evaporation, see `within_reach`.
    `suction_regulator` is the pressure (Pa) that a crankcase pressure regulator lets through at most;
    `gas_pressure` the pressure (Pa) that gas which does not condense adds on the high side, 0 in a healthy circuit.
    """

    refrigerant: Refrigerant
    compressor: Compressor | PolynomialCompressor
    evaporator: Exchanger
    condenser: Exchanger
    superheat: float
    subcooling: float
    suction_line: SuctionLine = SuctionLine()
    discharge_line_loss: float = 0.0
    suction_regulator: float | None = None
    gas_pressure: float = 0.0
    superheat_share: float = SUPERHEAT_SHARE
    exchanger: float = 0.0


class Cycle(NamedTuple):
    """The cycle at given temperatures (K), for which see `Circuit.around`: dew point of the evaporator, states at its
    outlet, at the suction port and before the valve, and heat that the exchanger between gas and liquid passes on, in
    J/kg."""

    evaporating: float
    second: float
    superheat: float
    compression: Compression
    dew: SaturationState
    outlet: State
    suction: State
    liquid: State
    exchanged: float

    @property
    def heat_from_source(self) -> float:
        """Heat in W that the refrigerant takes up in the evaporator."""
        return self.compression.flow * (self.outlet.h - self.liquid.h + self.exchanged)

    @property
    def heat_to_sink(self) -> float:
        """Heat in W that the refrigerant gives up in the condenser or gas cooler."""
        return self.compression.flow * (self.compression.discharge_enthalpy - self.liquid.h)

    @property
    def gas_heat(self) -> float:
        """Heat in W that superheats the gas inside the evaporator."""
        return self.compression.flow * (self.outlet.h - self.dew.h)


class Circuit(ABC):
    """Refrigerant side of one machine at one condition; keeps what it has calculated.

    The second unknown is the condensing temperature of a condenser, or the outlet temperature of a gas cooler.
    """

    def __init__(self, machine: Parts, media: Media) -> None:
        self.machine = machine
        self.media = media
        self.evaporator = machine.evaporator.at(media.source.volume_flow)
        self.condenser = machine.condenser.at(media.sink.volume_flow)
        self._low: dict[tuple[float, float], tuple[SaturationState, State, State]] = {}
        self._means: dict[tuple[float, float], float] = {}
        self._last: Cycle | None = None
        self._cycles: dict[tuple[float, float, float], Cycle] = {}

    def low_side(self, evaporating: float, superheat: float) -> tuple[SaturationState, State, State]:
        """Dew point of the evaporator, state at its outlet with `superheat` (K), and at the suction port of a machine
        without an exchanger between gas and liquid."""
        found = self._low.get((evaporating, superheat))
        if found is None:
            dew = self.machine.refrigerant.dew(evaporating)
            near = self._last.outlet if self._last is not None else None
            outlet = self.machine.refrigerant.superheated(dew, superheat, near)
            found = self._low[evaporating, superheat] = dew, outlet, self._suction(evaporating, outlet)
        return found

    def _exchanged(self, outlet: State, liquid: State) -> float:
        """Heat in J/kg that the suction gas takes from the liquid: its share of what would warm it to the liquid, since
        gas has the smaller specific heat (Kays & London, effectiveness)."""
        if not self.machine.exchanger:
            return 0.0
        return self.machine.exchanger * (self.machine.refrigerant.vapour(liquid.T, outlet.p).h - outlet.h)

    def _suction(self, evaporating: float, gas: State) -> State:
        """State at the suction port, from that of the gas before the line and the regulator."""
        m, fluid, line = self.machine, self.machine.refrigerant, self.machine.suction_line
        if line.pressure_loss or line.heating_share or line.warming:
            warmer = line.heating_share * (self.media.surroundings - gas.T) + line.warming
            dew = fluid.dew(evaporating - line.pressure_loss)
            near = self._last.suction if self._last is not None else gas
            gas = fluid.superheated(dew, gas.T + warmer - dew.T, near)
        if m.suction_regulator is not None and gas.p > m.suction_regulator:
            gas = fluid.vapour_from_enthalpy(m.suction_regulator, gas.h)
        return gas

    @abstractmethod
    def high_side(self, evaporating: float, second: float) -> tuple[float, State]:
        """Pressure at the discharge port and state before the valve."""

    @abstractmethod
    def high_states(self, balance: Balance) -> tuple[StatePoint, ...]:
        """States between compressor and valve, for tables and the diagram."""

    def around(self, evaporating: float, second: float, superheat: float | None = None) -> Cycle:
        """The cycle between these temperatures (K).

        `superheat` (K) is that at the evaporator outlet, that of the setting where none is given.
        """
        held = self.machine.superheat if superheat is None else superheat
        found = self._cycles.get((evaporating, second, held))
        if found is None:
            found = self._cycles[evaporating, second, held] = self._cycle(evaporating, second, held)
        return found

    def _cycle(self, evaporating: float, second: float, superheat: float) -> Cycle:
        machine, (discharge, liquid) = self.machine, self.high_side(evaporating, second)
        dew, outlet, suction = self.low_side(evaporating, superheat)
        exchanged = self._exchanged(outlet, liquid)
        if exchanged:
            warm = machine.refrigerant.vapour_from_enthalpy(outlet.p, outlet.h + exchanged, outlet)
            suction = self._suction(evaporating, warm)
        near = self._last.compression.isentropic_end if self._last is not None else None
        compression = machine.compressor.compress(machine.refrigerant, suction, discharge, self.media.speed_share, near)
        self._last = Cycle(evaporating, second, superheat, compression, dew, outlet, suction, liquid, exchanged)
        return self._last

    def cycle(
        self, evaporating: float, second: float, superheat: float | None = None
    ) -> tuple[Compression, float, float]:
        """Compression, heat taken from the source and heat given to the sink, both by the refrigerant, in W."""
        found = self.around(evaporating, second, superheat)
        return found.compression, found.heat_from_source, found.heat_to_sink

    def source_drive(self, found: Cycle, entering: float) -> float:
        """Temperature that drives the evaporator with a medium that enters at `entering` (K).

        For blends it lies below the medium by the geometric mean of the differences at both ends, so that a dew point
        never comes near the medium; they are taken about the mean temperature along the evaporator.
        """
        fluid = self.machine.refrigerant
        if not fluid.is_blend:
            return found.evaporating
        at = found.outlet.p, found.liquid.h - found.exchanged
        if at not in self._means:
            self._means[at] = fluid.mean_evaporating_temperature(*at)
        mean, end = entering - self._means[at], entering - found.evaporating
        return entering - between(end, 2.0 * mean - end)

    def low_guess(self) -> tuple[float, ...]:
        """The unknowns of the low side to start from: one for a difference between medium and refrigerant, and the
        inlet (K) of a medium that is known by its outlet."""
        source, first = self.media.source, max(9.0, 1.2 * self.machine.superheat)
        return (first, source.temperature + 4.0) if source.by_outlet else (first,)

    def entering(self, low: Sequence[float]) -> float:
        """Inlet (K) of the medium."""
        return low[1] if self.media.source.by_outlet else self.media.source.temperature

    def controlled(self, low: Sequence[float]) -> tuple[float, float]:
        """Evaporating temperature and superheat (K) with a valve that holds its setting as far as the medium allows."""
        m, difference = self.machine, positive(low[0])
        return self.entering(low) - difference, within_reach(m.superheat, difference, m.superheat_share)

    def dry_share(self, found: Cycle, entering: float) -> float:
        """Share of the evaporator's surface that only superheats gas, where the medium enters at `entering` (K).

        The mean difference is the geometric one of both ends of the dry zone, the medium entering where the gas leaves.
        Up to a superheat of 0.8 of the inlet difference it is within 13 % of the logarithmic mean, beyond it asks for
        more surface, as circuits that share their load unevenly do; so gas never leaves as warm as the medium comes.
        """
        difference = entering - found.evaporating
        mean = math.sqrt(max(difference * (difference - found.superheat), 1e-12))
        return self.evaporator.dry_share(self.media.source, found.gas_heat, mean)

    def low_gaps(self, low: Sequence[float], found: Cycle) -> tuple[float, ...]:
        """Heat that the wetted surface gives less heat that evaporation takes, in tens of kelvin of the exchanger, and
        what the inlet of a medium known by its outlet misses, in tens of kelvin.

        A valve superheats by leaving surface dry, so that the evaporator has two zones with a moving boundary.
        """
        source, exchanger, entering = self.media.source, self.evaporator, self.entering(low)
        taken, gas = found.heat_from_source, found.gas_heat
        wetted = 1.0 - self.dry_share(found, entering)
        given = exchanger.heat_from(source, self.source_drive(found, entering), wetted, gas)
        gap = (given - (taken - gas)) / (exchanger.heat_per_kelvin(source) * 10.0)
        return (gap, (source.inlet(-taken) - low[1]) / 10.0) if source.by_outlet else (gap,)

    def second(self, balance: Balance) -> float:
        """The second unknown of a balance."""
        return balance.unknowns[-1]

    @abstractmethod
    def subcooling(self, balance: Balance) -> float | None:
        """Subcooling in K of the liquid before the valve; None where nothing condenses."""

    def point(self, balance: Balance) -> OperatingPoint:
        """All states of a balance."""
        fluid = self.machine.refrigerant
        found = self.around(balance.evaporating_temperature, self.second(balance), balance.superheat)
        outlet, suction, compression = found.outlet, found.suction, balance.compression
        pressure, liquid = self.high_side(balance.evaporating_temperature, self.second(balance))
        discharge = fluid.vapour_from_enthalpy(
            pressure, compression.discharge_enthalpy, near=compression.isentropic_end
        )
        before = fluid.throttled(liquid.p, liquid.h - found.exchanged) if found.exchanged else liquid
        throttled = fluid.throttled(outlet.p, before.h)
        states = (
            StatePoint("1", "evaporator outlet", outlet.p, outlet.h, outlet.T, outlet.s),
            StatePoint("2", "compressor suction", suction.p, suction.h, suction.T, suction.s),
            StatePoint("3", "compressor discharge", discharge.p, discharge.h, discharge.T, discharge.s),
            *self.high_states(balance),
            StatePoint("6", "before the valve", before.p, before.h, before.T, before.s),
            StatePoint("7", "after the valve", throttled.p, throttled.h, throttled.T, throttled.s),
        )
        return OperatingPoint(
            balance=balance,
            suction_pressure=suction.p,
            discharge_pressure=pressure,
            suction_temperature=suction.T,
            discharge_temperature=discharge.T,
            liquid_temperature=liquid.T,
            superheat=balance.superheat,
            compressor_superheat=suction.T - fluid.dew_temperature(suction.p),
            subcooling=self.subcooling(balance),
            valve_outlet_temperature=throttled.T,
            line_gain=balance.compression.flow * (suction.h - outlet.h - found.exchanged),
            states=states,
            warnings=tuple(dict.fromkeys(w for s in (suction, discharge, throttled) for w in s.warnings)),
        )
