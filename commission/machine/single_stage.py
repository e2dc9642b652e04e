"""Single stage: one compressor, one evaporator, one condenser, receiver, valve with held superheat.

Which of the ways to a balance is taken: free, with the head pressure held, short of liquid, or starved by the limit of
the valve's pressure. The equations are those of `condenser_circuit`.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

from commission.errors import NotCalculatedError
from commission.machine.circuit import Parts, SuctionLine
from commission.machine.compressor import Compression
from commission.machine.condenser_circuit import FREE, HELD, LIMITED, SHORT, CondenserCircuit
from commission.machine.head_pressure import HeadPressure
from commission.machine.operating_point import Balance, Media, OperatingPoint


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
