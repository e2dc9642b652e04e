"""What all arrangements with one compressor and one evaporator share: parameters, low side, states. SI units."""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass

from commission.machine.compressor import Compression, Compressor
from commission.machine.exchanger import Exchanger
from commission.machine.operating_point import Balance, Media, OperatingPoint, StatePoint
from commission.machine.polynomial import PolynomialCompressor
from commission.properties import Refrigerant, State


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


class Circuit(ABC):
    """Refrigerant side of one machine at one condition; keeps what it has calculated.

    The second unknown is the condensing temperature of a condenser, or the outlet temperature of a gas cooler.
    """

    def __init__(self, machine: Parts, media: Media) -> None:
        self.machine = machine
        self.media = media
        self._low: dict[float, tuple[State, State]] = {}
        self._drives: dict[tuple[float, float], float] = {}
        self._end: State | None = None
        self._cycles: dict[tuple[float, float], tuple[Compression, float, float]] = {}

    def low_side(self, evaporating: float) -> tuple[State, State]:
        """States at the evaporator outlet and at the suction port."""
        if evaporating not in self._low:
            m, fluid = self.machine, self.machine.refrigerant
            outlet = fluid.vapour(evaporating + m.superheat, fluid.dew_pressure(evaporating))
            line = m.suction_line
            suction = outlet
            if line.pressure_loss or line.heating_share or line.warming:
                warmer = line.heating_share * (self.media.surroundings - outlet.T) + line.warming
                suction = fluid.vapour(outlet.T + warmer, fluid.dew_pressure(evaporating - line.pressure_loss))
            if m.suction_regulator is not None and suction.p > m.suction_regulator:
                suction = fluid.vapour_from_enthalpy(m.suction_regulator, suction.h)
            self._low[evaporating] = (outlet, suction)
        return self._low[evaporating]

    @abstractmethod
    def high_side(self, evaporating: float, second: float) -> tuple[float, State]:
        """Pressure at the discharge port and state before the valve."""

    @abstractmethod
    def high_states(self, balance: Balance) -> tuple[StatePoint, ...]:
        """States between compressor and valve, for tables and the diagram."""

    def cycle(self, evaporating: float, second: float) -> tuple[Compression, float, float]:
        """Compression, heat taken from the source and heat given to the sink, both by the refrigerant, in W."""
        if (evaporating, second) not in self._cycles:
            outlet, suction = self.low_side(evaporating)
            discharge, liquid = self.high_side(evaporating, second)
            compressor, share = self.machine.compressor, self.media.speed_share
            compression = compressor.compress(self.machine.refrigerant, suction, discharge, share, self._end)
            self._end = compression.isentropic_end
            source = compression.flow * (outlet.h - liquid.h)
            sink = compression.flow * (compression.discharge_enthalpy - liquid.h)
            self._cycles[evaporating, second] = compression, source, sink
        return self._cycles[evaporating, second]

    def source_drive(self, evaporating: float, second: float) -> float:
        """Temperature that drives the evaporator: for blends the mean along it."""
        fluid = self.machine.refrigerant
        if not fluid.is_blend:
            return evaporating
        if (evaporating, second) not in self._drives:
            liquid, pressure = self.high_side(evaporating, second)[1], fluid.dew_pressure(evaporating)
            self._drives[evaporating, second] = fluid.mean_evaporating_temperature(pressure, liquid.h)
        return self._drives[evaporating, second]

    def source_gap(self, evaporating: float, second: float, taken: float) -> float:
        """Heat that the source gives less heat that the refrigerant takes, in tens of kelvin of the exchanger."""
        source, exchanger = self.media.source, self.machine.evaporator
        given = exchanger.heat_from(source, self.source_drive(evaporating, second))
        return (given - taken) / (exchanger.heat_per_kelvin(source) * 10.0)

    def second(self, balance: Balance) -> float:
        """The second unknown of a balance."""
        return balance.unknowns[-1]

    def point(self, balance: Balance) -> OperatingPoint:
        """All states of a balance."""
        m, fluid = self.machine, self.machine.refrigerant
        outlet, suction = self.low_side(balance.evaporating_temperature)
        pressure, liquid = self.high_side(balance.evaporating_temperature, self.second(balance))
        compression = balance.compression
        discharge = fluid.vapour_from_enthalpy(
            pressure, compression.discharge_enthalpy, near=compression.isentropic_end
        )
        throttled = fluid.throttled(outlet.p, liquid.h)
        states = (
            StatePoint("1", "evaporator outlet", outlet.p, outlet.h, outlet.T, outlet.s),
            StatePoint("2", "compressor suction", suction.p, suction.h, suction.T, suction.s),
            StatePoint("3", "compressor discharge", discharge.p, discharge.h, discharge.T, discharge.s),
            *self.high_states(balance),
            StatePoint("6", "before the valve", liquid.p, liquid.h, liquid.T, liquid.s),
            StatePoint("7", "after the valve", throttled.p, throttled.h, throttled.T, throttled.s),
        )
        return OperatingPoint(
            balance=balance,
            suction_pressure=suction.p,
            discharge_pressure=pressure,
            suction_temperature=suction.T,
            discharge_temperature=discharge.T,
            liquid_temperature=liquid.T,
            superheat=m.superheat,
            compressor_superheat=suction.T - fluid.dew_temperature(suction.p),
            subcooling=m.subcooling if balance.condensing_temperature is not None else None,
            valve_outlet_temperature=throttled.T,
            line_gain=balance.compression.flow * (suction.h - outlet.h),
            states=states,
            warnings=tuple(dict.fromkeys(w for s in (suction, discharge, throttled) for w in s.warnings)),
        )
