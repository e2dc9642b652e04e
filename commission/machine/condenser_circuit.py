"""The circuit of a single stage with a condenser: its equations, and the ways in which they are solved. SI units.

Unknowns: evaporating and condensing temperature (dew). Residuals: heat taken up by the refrigerant against heat given
by the source exchanger, heat given up against heat taken by the sink exchanger (component balance: Stoecker & Jones,
Refrigeration and Air Conditioning, 2nd ed. 1982, ch. 14). Where head pressure is held the condensing temperature is
known and the manipulated share of the condenser is the unknown instead.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import replace
from typing import TYPE_CHECKING

from commission.errors import NotCalculatedError
from commission.machine.circuit import Circuit, between, positive, within_reach
from commission.machine.head_pressure import HeadPressure, fan_share, flow_share, heat_per_kelvin, share_for
from commission.machine.operating_point import Balance, Media, StatePoint
from commission.machine.solver import NoSolutionError, Residuals, Solution, solve
from commission.properties import State

if TYPE_CHECKING:
    from commission.machine.single_stage import SingleStage

FREE = "free condensing"
HELD = "head pressure held"
LOWEST = "head pressure below its setting, control at its lowest"
LIMITED = "suction pressure limited"
RESTRICTED = "fixed restriction"
SHORT = "valve at its limit"
REGULATED = "suction pressure regulated"
USUAL = ((0.13, 0.01), (0.035, 0.105))
"""Slopes of both gaps by both unknowns to start from. Gaps count in tens of kelvin of their exchanger, which makes the
slopes much alike for all machines: a tenth, and what capacity changes by for a kelvin (3 % by evaporation, 1 % by
condensation). They save the differences at the start; where they do not lead on, the solver takes those."""
NEARER = 0.3
"""Share of the usual differences to both media from which a compressor starts that reaches no further."""
COLDEST = 230.0
"""Temperature in K that no liquid has as it enters a condenser; a trial far from the balance could come to less."""


def _solved(
    gaps: Residuals,
    guess: tuple[float, ...],
    start: Balance | None,
    largest_step: float = 8.0,
    jacobian: Sequence[Sequence[float]] | None = None,
) -> Solution:
    """The solution from a neighbouring balance with the same unknowns, else from the guess with its `jacobian`."""
    if start is not None and (not guess or len(start.unknowns) == len(guess)):
        return solve(gaps, start.unknowns, jacobian=start.jacobian, largest_step=largest_step)
    return solve(gaps, guess, largest_step=largest_step, jacobian=jacobian)


class CondenserCircuit(Circuit):
    """Circuit with a condenser; the second unknown is its condensing temperature (dew, K)."""

    machine: SingleStage

    def __init__(self, machine: SingleStage, media: Media) -> None:
        super().__init__(machine, media)
        self._high: dict[float, tuple[float, State]] = {}
        self._bubbles: dict[float, float] = {}

    def second(self, balance: Balance) -> float:
        """The condensing temperature."""
        assert balance.condensing_temperature is not None
        return balance.condensing_temperature

    def high_states(self, balance: Balance) -> tuple[StatePoint, ...]:
        """Dew and bubble point of the condenser."""
        fluid, condensing = self.machine.refrigerant, self.second(balance)
        dew, bubble = fluid.dew(condensing), fluid.bubble(self.bubble_temperature(condensing))
        return (
            StatePoint("4", "condenser, dew point", dew.p, dew.h, dew.T, dew.s),
            StatePoint("5", "condenser, bubble point", bubble.p, bubble.h, bubble.T, bubble.s),
        )

    def high_side(self, evaporating: float, condensing: float) -> tuple[float, State]:  # same for all
        """Pressure at the discharge port and state of the liquid before the valve."""
        if condensing not in self._high:
            m, fluid = self.machine, self.machine.refrigerant
            if m.flash:
                bubble, dew = fluid.bubble(self.bubble_temperature(condensing)), fluid.dew(condensing)
                liquid = fluid.throttled(dew.p, bubble.h + m.flash * (dew.h - bubble.h))
            else:
                liquid = self.liquid(condensing, self.subcooled(condensing))
            discharge = fluid.dew_pressure(condensing + m.discharge_line_loss)
            self._high[condensing] = (discharge + m.gas_pressure, liquid)
        return self._high[condensing]

    def liquid(self, condensing: float, subcooling: float) -> State:
        """Liquid below its bubble point by `subcooling` (K)."""
        fluid = self.machine.refrigerant
        near = self._last.liquid if self._last is not None else None
        return fluid.subcooled(fluid.bubble(self.bubble_temperature(condensing)), subcooling, near)

    def subcooled(self, condensing: float) -> float:
        """Subcooling in K of the liquid that a condenser at this dew point (K) gives."""
        m, sink = self.machine, self.media.sink
        if m.flash or m.subcooling_share is None:
            return 0.0 if m.flash else m.subcooling
        entering = sink.temperature
        if sink.by_outlet:  # the inlet that goes with the heat of the exchanger, which is that of the balance
            rise = self.condenser.heat_per_kelvin(sink) / sink.capacity_rate
            entering = max(entering - rise * (self.sink_drive(condensing) - entering), COLDEST)
        difference = max(self.bubble_temperature(condensing) - entering, 0.0)
        return within_reach(m.subcooling, difference, m.subcooling_share)

    def subcooling(self, balance: Balance) -> float | None:
        """Subcooling in K of the liquid before the valve."""
        return self.subcooled(self.second(balance))

    def sink_drive(self, condensing: float) -> float:
        """Temperature that drives the condenser.

        For blends it lies above the entering medium by the geometric mean of the differences of dew and bubble point,
        so that liquid never comes near it; with a medium known by its outlet it is the mean of both.
        """
        sink, fluid = self.media.sink, self.machine.refrigerant
        if not fluid.is_blend:
            return condensing
        bubble = self.bubble_temperature(condensing)
        if sink.by_outlet:
            return 0.5 * (condensing + bubble)
        return sink.temperature + between(bubble - sink.temperature, condensing - sink.temperature)

    def bubble_temperature(self, condensing: float) -> float:
        """Bubble point in K at the dew pressure of `condensing`."""
        fluid = self.machine.refrigerant
        if not fluid.is_blend:
            return condensing
        if condensing not in self._bubbles:
            self._bubbles[condensing] = fluid.bubble_temperature(fluid.dew_pressure(condensing))
        return self._bubbles[condensing]

    def sink_gap(self, condensing: float, given: float, share: float) -> float:
        """Heat that the sink takes less heat that the refrigerant gives, in tens of kelvin of the exchanger."""
        control, sink = self.machine.head_pressure, self.media.sink.settled(given)
        per_kelvin = heat_per_kelvin(control.by if control else None, share, self.condenser, sink)
        taken = per_kelvin * (self.sink_drive(condensing) - sink.temperature)
        return (taken - given) / (per_kelvin * 10.0)

    def free(self, share: float, regime: str, start: Balance | None) -> Balance:
        """Both temperatures follow the exchangers."""

        def gaps(x: Sequence[float]) -> Sequence[float]:
            (evaporating, superheat), condensing = self.controlled(x), x[-1]
            found = self.around(evaporating, condensing, superheat)
            return *self.low_gaps(x, found), self.sink_gap(condensing, found.heat_to_sink, share)

        low = self.low_guess()
        usual, nearer = (*low, self.guess()), (NEARER * low[0], *low[1:], self.guess(nearer=True))
        jacobian = USUAL if len(low) == 1 else None
        try:
            solution = _solved(gaps, usual, start, jacobian=jacobian)
        except NoSolutionError:
            raise
        except NotCalculatedError:  # at the usual lift this compressor delivers no gas: begin nearer to the media
            solution = _solved(gaps, nearer, start, jacobian=jacobian)
        evaporating, superheat = self.controlled(solution.x)
        return self.result(evaporating, solution.x[-1], superheat, share, regime, solution)

    def held(self, control: HeadPressure, start: Balance | None) -> Balance | None:
        """Condensing temperature held; None where the condenser would need more than its full share."""
        condensing = control.hold

        def gaps(x: Sequence[float]) -> Sequence[float]:
            evaporating, superheat = self.controlled(x)
            return self.low_gaps(x, self.around(evaporating, condensing, superheat))

        solution = _solved(gaps, self.low_guess(), start)
        evaporating, superheat = self.controlled(solution.x)
        given = self.around(evaporating, condensing, superheat).heat_to_sink
        difference = self.sink_drive(condensing) - self.media.sink.temperature
        if difference <= 0:
            return None
        share = share_for(
            control.by,
            given / difference,
            self.condenser,
            self.media.sink.settled(given),
            control.least_share,
        )
        if share is None:
            return None
        if share == control.least_share:
            return self.free(share, LOWEST, None)
        return self.result(evaporating, condensing, superheat, share, HELD, solution)

    def flow_per_area(self, evaporating: float, condensing: float) -> float:
        """Flow in kg/s through each m2 of effective area of a fixed restriction."""
        liquid = self.high_side(evaporating, condensing)[1]
        return math.sqrt(2 * liquid.rho * max(liquid.p - self.machine.refrigerant.dew_pressure(evaporating), 1.0))

    def restricted(self, start: Balance | None) -> Balance:
        """A fixed restriction: its flow is that of the compressor, and the superheat follows.

        Raises:
            NotCalculatedError: liquid would reach the compressor, or no balance.
        """
        area, held = self.machine.restriction, self.machine.superheat
        assert area is not None

        def gaps(x: Sequence[float]) -> Sequence[float]:
            condensing, superheat = x[-2:]
            evaporating = self.dry_out(x, superheat)
            found = self.around(evaporating, condensing, superheat)
            through = area * self.flow_per_area(evaporating, condensing)
            return (
                *self.low_gaps(x, found),
                self.sink_gap(condensing, found.heat_to_sink, 1.0),
                math.log(found.compression.flow / through),
            )

        try:
            near = start is not None and start.regime == RESTRICTED
            guess = () if near else (*self.low_guess(), self.free(1.0, FREE, None).unknowns[-1], held)
            solution = _solved(gaps, guess, start if near else None, largest_step=3.0)
        except NotCalculatedError as error:
            raise NotCalculatedError(
                f"with the fixed restriction there is no balance with superheated gas: at this condition it would feed "
                f"liquid to the compressor, or starve the evaporator altogether ({error})"
            ) from error
        control = self.machine.head_pressure
        condensing, superheat = solution.x[-2:]
        if control is not None and condensing < control.hold:
            raise NotCalculatedError("a fixed restriction together with a held head pressure is not carried")
        evaporating = self.dry_out(solution.x, superheat)
        return self.result(evaporating, condensing, superheat, 1.0, RESTRICTED, solution)

    def dry_out(self, low: Sequence[float], superheat: float) -> float:
        """Evaporating temperature (K) at which the mean difference of the dry zone is the first of the unknowns."""
        return self.entering(low) - 0.5 * (superheat + math.hypot(superheat, 2.0 * positive(low[0])))

    def starved(self, evaporating: float) -> Balance:
        """Evaporating temperature held down by the valve; the superheat follows from the surface that stays dry."""
        control = self.machine.head_pressure

        def superheat(low: Sequence[float]) -> float:
            difference = self.entering(low) - evaporating
            return difference - positive(low[0]) ** 2 / difference

        def both(x: Sequence[float]) -> Sequence[float]:
            found = self.around(evaporating, x[-1], superheat(x))
            return *self.low_gaps(x, found), self.sink_gap(found.second, found.heat_to_sink, 1.0)

        solution = solve(both, (*self.low_guess(), self.guess()), largest_step=4.0)
        condensing = solution.x[-1]
        if control is None or condensing >= control.hold:
            return self.result(evaporating, condensing, superheat(solution.x), 1.0, LIMITED, solution)
        solution = solve(
            lambda x: self.low_gaps(x, self.around(evaporating, control.hold, superheat(x))),
            solution.x[:-1],
            largest_step=4.0,
        )
        found = superheat(solution.x)
        given = self.around(evaporating, control.hold, found).heat_to_sink
        per_kelvin = given / (self.sink_drive(control.hold) - self.media.sink.temperature)
        sink = self.media.sink.settled(given)
        share = share_for(control.by, per_kelvin, self.condenser, sink, control.least_share)
        if share is None or share == control.least_share:
            raise NotCalculatedError("no balance with suction pressure limited and head pressure held together")
        return self.result(evaporating, control.hold, found, share, f"{LIMITED}, {HELD}", solution)

    def condensing_side(self, evaporating: float, start: Balance | None) -> Balance:
        """Only the condenser balances; the evaporating temperature is given."""

        def gaps(x: Sequence[float]) -> Sequence[float]:
            return (self.sink_gap(x[0], self.around(evaporating, x[0]).heat_to_sink, 1.0),)

        solution = _solved(gaps, (self.guess(),), start)
        return self.result(evaporating, solution.x[0], self.machine.superheat, 1.0, FREE, solution)

    def guess(self, nearer: bool = False) -> float:
        """Condensing temperature (K) to start from, the usual one or a `nearer` one to the sink."""
        source, sink = self.media.source.temperature, self.media.sink.temperature
        return min(
            max(sink + (NEARER if nearer else 1.0) * 10.0, source + 7.0), 0.94 * self.machine.refrigerant.T_critical
        )

    def result(
        self, evaporating: float, condensing: float, superheat: float, share: float, regime: str, solution: Solution
    ) -> Balance:
        """The balance at a solution."""
        control = self.machine.head_pressure
        flow = flow_share(control, share)
        found = self.around(evaporating, condensing, superheat)
        source, sink = found.heat_from_source, found.heat_to_sink
        through, inlet = self.media.sink.settled(sink), self.media.source.inlet(-source)
        if flow != 1.0:
            through = replace(through, capacity_rate=flow * through.capacity_rate)
        limit = self.machine.suction_regulator
        if limit is not None and found.suction.p >= limit * (1 - 1e-9):
            regime = f"{REGULATED}, {regime}"
        return Balance(
            regime=regime,
            evaporating_temperature=evaporating,
            condensing_temperature=condensing,
            compression=found.compression,
            heat_from_source=source,
            heat_to_sink=sink,
            source_drive=self.source_drive(found, inlet),
            sink_drive=self.sink_drive(condensing),
            source_inlet_temperature=inlet,
            sink_inlet_temperature=through.inlet(sink),
            sink_outlet_temperature=through.outlet(sink),
            superheat=superheat,
            dry_share=self.dry_share(found, inlet),
            share=share,
            sink_fan_share=fan_share(control, share),
            sink_flow_share=flow,
            evaluations=solution.evaluations,
            unknowns=solution.x,
            jacobian=solution.jacobian,
        )
