"""Transcritical carbon dioxide: one compressor, one evaporator, a gas cooler, an expansion that sets the high pressure.

Unknowns: evaporating temperature (dew) and gas-cooler outlet temperature, never a condensing temperature. Residuals:
the source exchanger as in the single stage, and the conductance of the gas cooler.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

from commission.errors import NotCalculatedError
from commission.machine.circuit import Circuit, Parts, SuctionLine
from commission.machine.compressor import Compression
from commission.machine.gas_cooler import GasCoolerPressure, high_pressure, needed_conductance, outlet_state
from commission.machine.operating_point import Balance, Media, OperatingPoint, StatePoint
from commission.machine.solver import Solution, solve
from commission.properties import State

TRANSCRITICAL = "transcritical"
SUBCRITICAL = "condensing below the critical point"
FOLLOWS = GasCoolerPressure("follows the gas-cooler outlet")


@dataclass(frozen=True, slots=True)
class Transcritical(Parts):
    """A machine whose `condenser` is a gas cooler; `subcooling` is not used, its outlet temperature is solved."""

    pressure: GasCoolerPressure = FOLLOWS

    def balance(self, media: Media, start: Balance | None = None) -> Balance:
        """The balance at this condition; `start` is a neighbouring one that saves work.

        Raises:
            NotCalculatedError: no balance within the range of the property data; the message says why.
        """
        return GasCoolerCircuit(self, media).solve(start)

    def operate(self, media: Media, start: Balance | None = None) -> OperatingPoint:
        """The balance with all states.

        Raises:
            NotCalculatedError: as `balance`.
        """
        circuit = GasCoolerCircuit(self, media)
        return circuit.point(circuit.solve(start))

    def cycle(self, evaporating: float, outlet: float, media: Media) -> tuple[Compression, float, float]:
        """Compression, heat taken up and heat given up by the refrigerant (W): no balance."""
        return GasCoolerCircuit(self, media).cycle(evaporating, outlet)

    def compressor_alone(
        self, evaporating: float, condensing: float, superheat: float, subcooling: float, media: Media
    ) -> tuple[Compression, float]:
        """A compressor of a transcritical machine is not rated between two dew points.

        Raises:
            NotCalculatedError: always.
        """
        raise NotCalculatedError("a transcritical compressor has no table over condensing temperatures")

    def condensing_unit(
        self, evaporating: float, superheat: float, subcooling: float, media: Media, start: Balance | None = None
    ) -> Balance:
        """The gas-cooler side alone at a given dew point (K) and superheat (K) at its suction, as a unit is catalogued.

        Raises:
            NotCalculatedError: no balance within the range of the property data.
        """
        unit = replace(self, superheat=superheat, subcooling=subcooling, suction_line=SuctionLine(), exchanger=0.0)
        return GasCoolerCircuit(unit, media).gas_cooler_side(evaporating, start)

    def cycle_conductance(self, evaporating: float, outlet: float, media: Media) -> float:
        """Conductance in W/K of the gas cooler that would bring this outlet (K) at a given dew point (K)."""
        return GasCoolerCircuit(self, media).conductance(evaporating, outlet)


class GasCoolerCircuit(Circuit):
    """Refrigerant side of one transcritical machine; the second unknown is the gas-cooler outlet temperature."""

    machine: Transcritical

    def __init__(self, machine: Transcritical, media: Media) -> None:
        super().__init__(machine, media)
        self._high: dict[tuple[float, float], tuple[float, State]] = {}

    def pressure(self, evaporating: float, outlet: float) -> float:
        """High pressure in Pa."""
        m = self.machine
        return high_pressure(m.pressure, m.refrigerant, outlet, evaporating, self.media.sink)

    def high_side(self, evaporating: float, second: float) -> tuple[float, State]:
        """Pressure at the discharge port and state at the gas-cooler outlet."""
        key = evaporating, second
        if key not in self._high:
            p = self.pressure(evaporating, second)
            self._high[key] = p, outlet_state(self.machine.refrigerant, second, p)
        return self._high[key]

    def conductance(self, evaporating: float, outlet: float, superheat: float | None = None) -> float:
        """Conductance in W/K that the gas cooler would need."""
        compression, _, heat = self.cycle(evaporating, outlet, superheat)
        end = self.high_side(evaporating, outlet)[1]
        sink = self.media.sink.settled(heat)
        return needed_conductance(self.machine.refrigerant, compression.flow, compression.discharge_enthalpy, end, sink)

    def gap(self, evaporating: float, outlet: float, superheat: float | None = None) -> float:
        """Conductance that is needed over the one there is, as a logarithm."""
        flow = self.media.sink.settled(self.cycle(evaporating, outlet, superheat)[2]).volume_flow
        return math.log(self.conductance(evaporating, outlet, superheat) / self.machine.condenser.conductance_at(flow))

    def solve(self, start: Balance | None) -> Balance:
        """Both unknowns, from a neighbouring balance or from the media."""

        def gaps(x: Sequence[float]) -> Sequence[float]:
            evaporating, superheat = self.controlled(x)
            found = self.around(evaporating, x[-1], superheat)
            return *self.low_gaps(x, found), self.gap(evaporating, x[-1], superheat)

        if start is not None:
            try:
                return self._outcome(solve(gaps, start.unknowns, jacobian=start.jacobian))
            except NotCalculatedError:
                pass  # the neighbour was too far off; start from the media instead
        guess = *self.low_guess(), self.guess()
        return self._outcome(solve(gaps, guess, largest_step=5.0, evaluations=200))

    def gas_cooler_side(self, evaporating: float, start: Balance | None) -> Balance:
        """Only the gas cooler balances; the evaporating temperature is given."""

        def gaps(x: Sequence[float]) -> Sequence[float]:
            return (self.gap(evaporating, x[0]),)

        guess = start.unknowns[-1:] if start is not None else (self.guess(),)
        solution = solve(gaps, guess, largest_step=5.0, evaluations=200)
        return self._outcome(solution, evaporating)

    def subcooling(self, balance: Balance) -> float | None:
        """None: the gas-cooler outlet is solved for, it is not subcooled by a given difference."""
        return None

    def guess(self) -> float:
        """Gas-cooler outlet (K) to start from."""
        sink = self.media.sink
        cold = sink.temperature - (30.0 if sink.by_outlet else 0.0)
        return max(cold, 278.15) + 4.0

    def _outcome(self, solution: Solution, given: float | None = None) -> Balance:
        evaporating, superheat = self.controlled(solution.x) if given is None else (given, self.machine.superheat)
        outlet = solution.x[-1]
        found = self.around(evaporating, outlet, superheat)
        source, sink = found.heat_from_source, found.heat_to_sink
        p, inlet = self.pressure(evaporating, outlet), self.media.source.inlet(-source)
        through = self.media.sink.settled(sink)
        critical = self.machine.refrigerant.p_critical
        condensing = self.machine.refrigerant.dew_temperature(p) if p < 0.95 * critical else None
        return Balance(
            regime=TRANSCRITICAL if p > critical else SUBCRITICAL,
            evaporating_temperature=evaporating,
            condensing_temperature=condensing,
            compression=found.compression,
            heat_from_source=source,
            heat_to_sink=sink,
            source_drive=self.source_drive(found, inlet),
            sink_drive=outlet,
            source_inlet_temperature=inlet,
            sink_inlet_temperature=through.inlet(sink),
            sink_outlet_temperature=through.outlet(sink),
            superheat=superheat,
            dry_share=self.dry_share(found, inlet) if given is None else 0.0,
            share=1.0,
            sink_fan_share=1.0,
            sink_flow_share=1.0,
            evaluations=solution.evaluations,
            unknowns=solution.x,
            jacobian=solution.jacobian,
        )

    def high_states(self, balance: Balance) -> tuple[StatePoint, ...]:
        """States between compressor and valve, for tables and the diagram."""
        pressure, liquid = self.high_side(balance.evaporating_temperature, self.second(balance))
        points = []
        inlet = balance.compression.discharge_enthalpy
        for n, label in ((1, "4"), (2, "5")):
            state = self.machine.refrigerant.throttled(pressure, inlet + n / 3 * (liquid.h - inlet))
            points.append(StatePoint(label, f"gas cooler, {n} of 3", state.p, state.h, state.T, state.s))
        return tuple(points)
