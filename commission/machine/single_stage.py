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
from commission.machine.circuit import Circuit, Parts, SuctionLine
from commission.machine.compressor import Compression
from commission.machine.head_pressure import HeadPressure, fan_share, flow_share, heat_per_kelvin, share_for
from commission.machine.operating_point import Balance, Media, OperatingPoint, StatePoint
from commission.machine.solver import Solution, solve
from commission.properties import State

FREE = "free condensing"
HELD = "head pressure held"
LOWEST = "head pressure below its setting, control at its lowest"
LIMITED = "suction pressure limited"
RESTRICTED = "fixed restriction"
SHORT = "valve at its limit"
REGULATED = "suction pressure regulated"
GAS_SHARE = 0.1
"""Conductance of a surface that only superheats gas, over that of a wetted one (common practice, no source)."""


@dataclass(frozen=True, slots=True)
class SingleStage(Parts):
    """One compressor, evaporator and condenser.

    With `head_pressure` the condensing temperature may be held. `greatest_evaporating` is the dew point (K) above which
    the valve closes (maximum operating pressure): the evaporator then starves and its superheat rises. `restriction` is
    the effective area (m2) of an orifice or capillary; the superheat then follows from it, and `superheat` holds where
    all of the surface is at work. `greatest_feed` is the effective area (m2) of the valve when it is fully open,
    together with the line and drier before it; None where it never limits. `flash` is the share of vapour (0-1) in what
    reaches the valve, 0 in a healthy circuit, as from a condenser that lacks refrigerant once the receiver is empty;
    `subcooling` is of no account then.
    """

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
        return _balance(_Circuit(self, media), start)

    def operate(self, media: Media, start: Balance | None = None) -> OperatingPoint:
        """The balance at this condition with all states.

        Raises:
            NotCalculatedError: as `balance`.
        """
        circuit = _Circuit(self, media)
        balance = _balance(circuit, start)
        return (circuit if balance.superheat == self.superheat else circuit.with_superheat(balance.superheat)).point(
            balance
        )

    def cycle(self, evaporating: float, condensing: float, media: Media) -> tuple[Compression, float, float]:
        """Compression, heat taken up and heat given up by the refrigerant (W) at given dew points (K): no balance."""
        return _Circuit(self, media).cycle(evaporating, condensing)

    def compressor_alone(
        self, evaporating: float, condensing: float, superheat: float, subcooling: float, media: Media
    ) -> tuple[Compression, float]:
        """The compressor between two dew points (K), as it is catalogued, and its cooling capacity in W.

        The capacity counts all the superheat to the suction port (EN 12900); there are no line losses.
        """
        alone = replace(
            self, superheat=superheat, subcooling=subcooling, suction_line=SuctionLine(), discharge_line_loss=0.0
        )
        compression, source, _ = _Circuit(alone, media).cycle(evaporating, condensing)
        return compression, source

    def restriction_for(self, media: Media) -> float:
        """Effective area (m2) of the fixed restriction that gives the held superheat at this condition.

        Flow = area sqrt(2 rho (p_high - p_low)), the liquid before the restriction (Bernoulli; the usual form for short
        tubes and orifices, flashing being part of the area).

        Raises:
            NotCalculatedError: as `balance`.
        """
        circuit = _Circuit(replace(self, restriction=None, greatest_feed=None), media)
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
        unit = replace(self, superheat=superheat, subcooling=subcooling, suction_line=SuctionLine())
        return _Circuit(unit, media).condensing_side(evaporating, start)


def _balance(circuit: _Circuit, start: Balance | None) -> Balance:
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


def _within_feed(circuit: _Circuit, area: float, start: Balance | None) -> Balance:
    """The balance with a valve that passes no more than its full opening: beyond it the evaporator is short of liquid
    and its superheat rises as with a fixed restriction of that area."""
    machine, media = circuit.machine, circuit.media
    short = start is not None and start.regime == SHORT
    wide = _Circuit(replace(machine, greatest_feed=None), media)
    balance = _balance(wide, None if short else start)
    if balance.compression.flow <= area * wide.flow_per_area(balance.evaporating_temperature, wide.second(balance)):
        return balance
    narrow = _Circuit(replace(machine, greatest_feed=None, restriction=area), media)
    return replace(narrow.restricted(start if short else None), regime=SHORT)


def _high_side_control(circuit: _Circuit, start: Balance | None) -> Balance:
    """Free where the condensing temperature stays above the setting of the head pressure, held below."""
    control = circuit.machine.head_pressure
    if control is None:
        return circuit.free(1.0, FREE, start)
    likely = start.regime.endswith(HELD) if start is not None else circuit.guess()[1] < control.hold
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


class _Circuit(Circuit):
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
        dew, bubble = fluid.dew(condensing), fluid.bubble(self._bubble_temperature(condensing))
        return (
            StatePoint("4", "condenser, dew point", dew.p, dew.h, dew.T, dew.s),
            StatePoint("5", "condenser, bubble point", bubble.p, bubble.h, bubble.T, bubble.s),
        )

    def high_side(self, evaporating: float, condensing: float) -> tuple[float, State]:  # same for all
        """Pressure at the discharge port and state of the liquid before the valve."""
        if condensing not in self._high:
            m, fluid = self.machine, self.machine.refrigerant
            pressure = fluid.dew_pressure(condensing)
            if m.flash:
                bubble, dew = fluid.bubble(self._bubble_temperature(condensing)), fluid.dew(condensing)
                liquid = fluid.throttled(pressure, bubble.h + m.flash * (dew.h - bubble.h))
            else:
                liquid = fluid.liquid(self._bubble_temperature(condensing) - m.subcooling, pressure)
            discharge = fluid.dew_pressure(condensing + m.discharge_line_loss) if m.discharge_line_loss else pressure
            self._high[condensing] = (discharge + m.gas_pressure, liquid)
        return self._high[condensing]

    def sink_drive(self, condensing: float) -> float:
        """Temperature that drives the condenser: for blends the mean of dew and bubble point."""
        fluid = self.machine.refrigerant
        if not fluid.is_blend:
            return condensing
        return 0.5 * (condensing + self._bubble_temperature(condensing))

    def _bubble_temperature(self, condensing: float) -> float:
        """Bubble point in K at the dew pressure of `condensing`."""
        fluid = self.machine.refrigerant
        if not fluid.is_blend:
            return condensing
        if condensing not in self._bubbles:
            self._bubbles[condensing] = fluid.bubble_temperature(fluid.dew_pressure(condensing))
        return self._bubbles[condensing]

    def sink_gap(self, condensing: float, given: float, share: float) -> float:
        """Heat that the sink takes less heat that the refrigerant gives, in tens of kelvin of the exchanger."""
        m, sink = self.machine, self.media.sink.settled(given)
        by = m.head_pressure.by if m.head_pressure else None
        per_kelvin = heat_per_kelvin(by, share, m.condenser, sink)
        taken = per_kelvin * (self.sink_drive(condensing) - sink.temperature)
        return (taken - given) / (per_kelvin * 10.0)

    def free(self, share: float, regime: str, start: Balance | None) -> Balance:
        """Both temperatures follow the exchangers."""

        def gaps(x: Sequence[float]) -> Sequence[float]:
            _, taken, given = self.cycle(x[0], x[1])
            return self.source_gap(x[0], x[1], taken), self.sink_gap(x[1], given, share)

        near = start is not None and len(start.unknowns) == 2
        guess = start.unknowns if near and start is not None else self.guess()
        solution = solve(gaps, guess, jacobian=start.jacobian if near and start is not None else None)
        return self.result(solution.x[0], solution.x[1], share, regime, solution)

    def held(self, control: HeadPressure, start: Balance | None) -> Balance | None:
        """Condensing temperature held; None where the condenser would need more than its full share."""
        condensing = control.hold

        def gaps(x: Sequence[float]) -> Sequence[float]:
            return (self.source_gap(x[0], condensing, self.cycle(x[0], condensing)[1]),)

        near = start is not None and len(start.unknowns) == 1
        guess = start.unknowns if near and start is not None else self.guess()[:1]
        solution = solve(gaps, guess, jacobian=start.jacobian if near and start is not None else None)
        given = self.cycle(solution.x[0], condensing)[2]
        difference = self.sink_drive(condensing) - self.media.sink.temperature
        if difference <= 0:
            return None
        share = share_for(
            control.by,
            given / difference,
            self.machine.condenser,
            self.media.sink.settled(given),
            control.least_share,
        )
        if share is None:
            return None
        if share == control.least_share:
            return self.free(share, LOWEST, None)
        return self.result(solution.x[0], condensing, share, HELD, solution)

    def with_superheat(self, superheat: float) -> _Circuit:
        """The same circuit with another superheat (K) at the evaporator outlet."""
        return _Circuit(replace(self.machine, superheat=superheat), self.media)

    def superheat_gap(self, superheat: float, evaporating: float, condensing: float) -> float:
        """Superheat that the dry part of the surface gives less the one tried, in tens of kelvin.

        The share of surface that is wetted is the conductance that the heat needs over the one there is. The rest
        superheats the gas towards the medium with `GAS_SHARE` of the conductance, and nothing at a share of 1, so that
        the superheat is then the one that is held.
        """
        machine, source = self.machine, self.media.source
        whole = machine.evaporator.conductance_at(source.volume_flow)
        one = self.with_superheat(superheat)
        compression, taken, _ = one.cycle(evaporating, condensing)
        drive = one.source_drive(evaporating, condensing)
        dry = max(1 - machine.evaporator.conductance_for(source, taken, drive) / whole, -0.5)
        cp = (one.low_side(evaporating)[0].h - machine.refrigerant.dew(evaporating).h) / superheat
        reach = -math.expm1(-GAS_SHARE * whole * dry / (compression.flow * cp))
        wanted = machine.superheat + (source.temperature - evaporating - machine.superheat) * reach
        return (wanted - superheat) / 10.0

    def flow_per_area(self, evaporating: float, condensing: float) -> float:
        """Flow in kg/s through each m2 of effective area of a fixed restriction."""
        liquid = self.high_side(evaporating, condensing)[1]
        return math.sqrt(2 * liquid.rho * max(liquid.p - self.machine.refrigerant.dew(evaporating).p, 1.0))

    def restricted(self, start: Balance | None) -> Balance:
        """A fixed restriction: its flow is that of the compressor, and the superheat follows.

        Raises:
            NotCalculatedError: liquid would reach the compressor, or no balance.
        """
        area, held = self.machine.restriction, self.machine.superheat
        assert area is not None

        def gaps(x: Sequence[float]) -> Sequence[float]:
            evaporating, condensing, superheat = x
            one = self.with_superheat(superheat)
            compression, _, given = one.cycle(evaporating, condensing)
            through = area * one.flow_per_area(evaporating, condensing)
            return (
                self.superheat_gap(superheat, evaporating, condensing),
                one.sink_gap(condensing, given, 1.0),
                math.log(compression.flow / through),
            )

        near = start is not None and len(start.unknowns) == 3
        jacobian = start.jacobian if near and start is not None else None
        try:
            guess = start.unknowns if near and start is not None else (*self.free(1.0, FREE, None).unknowns, held)
            solution = solve(gaps, guess, largest_step=3.0, jacobian=jacobian)
        except NotCalculatedError as error:
            raise NotCalculatedError(
                f"with the fixed restriction there is no balance with superheated gas: at this condition it would feed "
                f"liquid to the compressor, or starve the evaporator altogether ({error})"
            ) from error
        control = self.machine.head_pressure
        if control is not None and solution.x[1] < control.hold:
            raise NotCalculatedError("a fixed restriction together with a held head pressure is not carried")
        return self.with_superheat(solution.x[2]).result(solution.x[0], solution.x[1], 1.0, RESTRICTED, solution)

    def starved(self, evaporating: float) -> Balance:
        """Evaporating temperature held down by the valve; the superheat follows from the surface that stays dry."""
        machine, control = self.machine, self.machine.head_pressure

        def both(x: Sequence[float]) -> Sequence[float]:
            one = self.with_superheat(x[0])
            return self.superheat_gap(x[0], evaporating, x[1]), one.sink_gap(x[1], one.cycle(evaporating, x[1])[2], 1.0)

        guess = (machine.superheat + 2.0, self.guess()[1])
        solution = solve(both, guess, largest_step=4.0)
        superheat, condensing = solution.x
        if control is None or condensing >= control.hold:
            return self.with_superheat(superheat).result(evaporating, condensing, 1.0, LIMITED, solution)
        solution = solve(
            lambda x: (self.superheat_gap(x[0], evaporating, control.hold),), (superheat,), largest_step=4.0
        )
        one = self.with_superheat(solution.x[0])
        given = one.cycle(evaporating, control.hold)[2]
        per_kelvin = given / (one.sink_drive(control.hold) - self.media.sink.temperature)
        sink = self.media.sink.settled(given)
        share = share_for(control.by, per_kelvin, machine.condenser, sink, control.least_share)
        if share is None or share == control.least_share:
            raise NotCalculatedError("no balance with suction pressure limited and head pressure held together")
        return one.result(evaporating, control.hold, share, f"{LIMITED}, {HELD}", solution)

    def condensing_side(self, evaporating: float, start: Balance | None) -> Balance:
        """Only the condenser balances; the evaporating temperature is given."""

        def gaps(x: Sequence[float]) -> Sequence[float]:
            return (self.sink_gap(x[0], self.cycle(evaporating, x[0])[2], 1.0),)

        near = start is not None and len(start.unknowns) == 1
        guess = start.unknowns if near and start is not None else self.guess()[1:]
        solution = solve(gaps, guess, jacobian=start.jacobian if near and start is not None else None)
        return self.result(evaporating, solution.x[0], 1.0, FREE, solution)

    def guess(self) -> tuple[float, float]:
        """Evaporating and condensing temperature (K) to start from."""
        source, sink = self.media.source.temperature, self.media.sink.temperature
        evaporating = source - 8.0
        highest = 0.94 * self.machine.refrigerant.T_critical
        return evaporating, min(max(sink + 10.0, evaporating + 15.0), highest)

    def result(self, evaporating: float, condensing: float, share: float, regime: str, solution: Solution) -> Balance:
        """The balance at a solution."""
        control = self.machine.head_pressure
        flow = flow_share(control, share)
        compression, source, sink = self.cycle(evaporating, condensing)
        settled = self.media.sink.settled(sink)
        through = replace(settled, capacity_rate=flow * settled.capacity_rate)
        suction, limit = self.low_side(evaporating)[1].p, self.machine.suction_regulator
        if limit is not None and suction >= limit * (1 - 1e-9):
            regime = f"{REGULATED}, {regime}"
        return Balance(
            regime=regime,
            evaporating_temperature=evaporating,
            condensing_temperature=condensing,
            compression=compression,
            heat_from_source=source,
            heat_to_sink=sink,
            source_drive=self.source_drive(evaporating, condensing),
            sink_drive=self.sink_drive(condensing),
            source_inlet_temperature=self.media.source.inlet(-source),
            sink_inlet_temperature=through.inlet(sink),
            sink_outlet_temperature=through.outlet(sink),
            superheat=self.machine.superheat,
            share=share,
            sink_fan_share=fan_share(control, share),
            sink_flow_share=flow,
            evaluations=solution.evaluations,
            unknowns=solution.x,
            jacobian=solution.jacobian,
        )
