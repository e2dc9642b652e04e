"""Single stage: one compressor, one evaporator, one condenser, receiver, valve with held superheat.

Unknowns: evaporating and condensing temperature (dew). Residuals: heat taken up by the refrigerant against heat given
by the source exchanger, heat given up against heat taken by the sink exchanger (component balance: Stoecker & Jones,
Refrigeration and Air Conditioning, 2nd ed. 1982, ch. 14). Where head pressure is held the condensing temperature is
known and the manipulated share of the condenser is the unknown instead.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

from commission.errors import NotCalculatedError
from commission.machine.circuit import Circuit, Parts, SuctionLine, between, positive, within_reach
from commission.machine.compressor import Compression
from commission.machine.head_pressure import HeadPressure, fan_share, flow_share, heat_per_kelvin, share_for
from commission.machine.operating_point import Balance, Media, OperatingPoint, StatePoint
from commission.machine.solver import Residuals, Solution, solve
from commission.properties import State

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
COLDEST = 230.0
"""Temperature in K that no liquid has as it enters a condenser; a trial far from the balance could come to less."""


@dataclass(frozen=True, slots=True)
class SingleStage(Parts):
    """One compressor, evaporator and condenser.

    With `subcooling_share` the liquid is cooled by no more than that share of the difference between its bubble
    point and the medium as it enters: it never leaves colder than the medium, and a small load cools it less. Where
    nothing but this difference limits it (no receiver) `subcooling` is infinite. With `head_pressure` the
    condensing temperature may be held. `greatest_evaporating` is the dew point (K) above which the valve closes
    (maximum operating pressure): the evaporator then starves and its superheat rises. `restriction` is the
    effective area (m2) of an orifice or capillary; the superheat then follows from it. `greatest_feed` is the
    effective area (m2) of the valve when it is fully open, together with the line and drier before it; None where
    it never limits. `flash` is the share of vapour (0-1) in what reaches the valve, 0 in a healthy circuit, as from
    a condenser that lacks refrigerant once the receiver is empty; subcooling is then 0.
    """

    subcooling_share: float | None = None
    head_pressure: HeadPressure | None = None
    greatest_evaporating: float | None = None
    restriction: float | None = None
    greatest_feed: float | None = None
    flash: float = 0.0

    def balance(self, media: Media, start: Balance | None = None) -> Balance:
        """The balance at this condition; `start` is a neighbouring one that saves work.

        Raises:
            NotCalculatedError: no balance within the range of the property data; the message says why.
        """
        return _balance(CondenserCircuit(self, media), start)

    def operate(self, media: Media, start: Balance | None = None) -> OperatingPoint:
        """The balance at this condition with all states.

        Raises:
            NotCalculatedError: as `balance`.
        """
        circuit = CondenserCircuit(self, media)
        return circuit.point(_balance(circuit, start))

    def cycle(self, evaporating: float, condensing: float, media: Media) -> tuple[Compression, float, float]:
        """Compression, heat taken up and heat given up by the refrigerant (W) at given dew points (K): no balance."""
        return CondenserCircuit(self, media).cycle(evaporating, condensing)

    def compressor_alone(
        self, evaporating: float, condensing: float, superheat: float, subcooling: float, media: Media
    ) -> tuple[Compression, float]:
        """The compressor between two dew points (K), as it is catalogued, and its cooling capacity in W.

        The capacity counts all the superheat to the suction port (EN 12900); there are no line losses.
        """
        alone = replace(self._as_catalogued(superheat, subcooling), discharge_line_loss=0.0)
        compression, source, _ = CondenserCircuit(alone, media).cycle(evaporating, condensing)
        return compression, source

    def restriction_for(self, media: Media) -> float:
        """Effective area (m2) of the fixed restriction that gives the held superheat at this condition.

        Flow = area sqrt(2 rho (p_high - p_low)), the liquid before the restriction (Bernoulli; the usual form for short
        tubes and orifices, flashing being part of the area).

        Raises:
            NotCalculatedError: as `balance`.
        """
        circuit = CondenserCircuit(replace(self, restriction=None, greatest_feed=None), media)
        balance = _balance(circuit, None)
        return balance.compression.flow / circuit.flow_per_area(
            balance.evaporating_temperature, circuit.second(balance)
        )

    def condensing_unit(
        self, evaporating: float, superheat: float, subcooling: float, media: Media, start: Balance | None = None
    ) -> Balance:
        """The condensing side alone at a given dew point and superheat (K) at its suction, as it is catalogued.

        `heat_from_source` then counts all the superheat to the suction port, as EN 13215 and EN 12900 do.

        Raises:
            NotCalculatedError: no balance within the range of the property data.
        """
        return CondenserCircuit(self._as_catalogued(superheat, subcooling), media).condensing_side(evaporating, start)

    def _as_catalogued(self, superheat: float, subcooling: float) -> SingleStage:
        """The machine with the superheat and subcooling (K) of a catalogue, and without a suction line."""
        return replace(
            self, superheat=superheat, subcooling=subcooling, subcooling_share=None, suction_line=SuctionLine(),
            exchanger=0.0,
        )  # fmt: skip


def _balance(circuit: CondenserCircuit, start: Balance | None) -> Balance:
    """The balance with the suction pressure limited where the free one would be above the limit of the valve."""
    if circuit.machine.restriction is not None:
        return circuit.restricted(start)
    if circuit.machine.greatest_feed is not None:
        return _within_feed(circuit, circuit.machine.greatest_feed, start)
    limit = circuit.machine.greatest_evaporating
    if limit is not None and start is not None and start.regime.startswith(LIMITED):
        start = None
    balance = _high_side_control(circuit, start)
    if limit is None or balance.evaporating_temperature <= limit:
        return balance
    return circuit.starved(limit)


def _within_feed(circuit: CondenserCircuit, area: float, start: Balance | None) -> Balance:
    """The balance with a valve that passes no more than its full opening: beyond it the evaporator is short of liquid
    and its superheat rises as with a fixed restriction of that area."""
    machine, media = circuit.machine, circuit.media
    short = start is not None and start.regime == SHORT
    wide = CondenserCircuit(replace(machine, greatest_feed=None), media)
    balance = _balance(wide, None if short else start)
    if balance.compression.flow <= area * wide.flow_per_area(balance.evaporating_temperature, wide.second(balance)):
        return balance
    narrow = CondenserCircuit(replace(machine, greatest_feed=None, restriction=area), media)
    return replace(narrow.restricted(start if short else None), regime=SHORT)


def _high_side_control(circuit: CondenserCircuit, start: Balance | None) -> Balance:
    """Free where the condensing temperature stays above the setting of the head pressure, held below."""
    control = circuit.machine.head_pressure
    if control is None:
        return circuit.free(1.0, FREE, start)
    likely = start.regime.endswith(HELD) if start is not None else circuit.guess() < control.hold
    if likely:
        held = circuit.held(control, start if start is not None and start.regime.endswith(HELD) else None)
        if held is not None:
            return held
    free = circuit.free(1.0, FREE, start if start is not None and start.regime.endswith(FREE) else None)
    if circuit.second(free) >= control.hold:
        return free
    held = circuit.held(control, None)
    if held is None:
        raise NotCalculatedError(
            "no balance with the head pressure held, though the free condensing temperature is below the setting"
        )
    return held


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
        solution = _solved(gaps, (*low, self.guess()), start, jacobian=USUAL if len(low) == 1 else None)
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

    def guess(self) -> float:
        """Condensing temperature (K) to start from."""
        source, sink = self.media.source.temperature, self.media.sink.temperature
        return min(max(sink + 10.0, source + 7.0), 0.94 * self.machine.refrigerant.T_critical)

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
