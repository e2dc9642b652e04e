"""The same machine as an engineer would write it with `PropsSI` and `scipy.optimize.fsolve`, to compare with."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from commission.machine import Compressor, Media, SingleStage
from commission.machine.circuit import between, within_reach
from commission.machine.exchanger import effectiveness
from commission.properties import Refrigerant

PSEUDO_PURE = {"R-410A": "R410A"}


def name_for(fluid: Refrigerant) -> str:
    """What `PropsSI` calls a refrigerant: its own name where it has one, else its components in mole fractions."""
    if fluid.name in PSEUDO_PURE:
        return PSEUDO_PURE[fluid.name]
    parts = zip(fluid._data.fluids, fluid._data.mole_fractions, strict=True)
    return fluid._data.fluids[0] if not fluid.is_blend else "&".join(f"{n}[{x:.15g}]" for n, x in parts)


@dataclass(frozen=True)
class Answer:
    """What is compared: temperatures that drive the coils and at the discharge in K, heat and power in W."""

    source_drive: float
    sink_drive: float
    heat: float
    power: float
    discharge_temperature: float


@dataclass(frozen=True)
class Cycle:
    """Heat in W that superheats gas inside the evaporator, heat taken, heat given and power, enthalpy (J/kg) and
    pressure (Pa) at the discharge port, temperatures (K) that drive both coils."""

    gas: float
    taken: float
    given: float
    power: float
    enthalpy: float
    pressure: float
    cold: float
    warm: float


class Plain:
    """Equations of `SingleStage`, written down straight, for dry air coils and a compressor of displacement."""

    def __init__(self, machine: SingleStage, media: Media, name: str) -> None:
        self.m, self.media, self.name = machine, media, name
        self.glides = "&" in name

    def get(self, what: str, a: str, x: float, b: str, y: float) -> float:
        """One call of the property library."""
        from CoolProp.CoolProp import PropsSI

        return float(PropsSI(what, a, x, b, y, self.name))

    def superheat(self, evaporating: float) -> float:
        """Superheat in K that the valve holds."""
        return within_reach(self.m.superheat, self.media.source.temperature - evaporating, self.m.superheat_share)

    def cycle(self, evaporating: float, condensing: float) -> Cycle:
        """The refrigerant's side between two dew points in K."""
        m, get, compressor = self.m, self.get, self.m.compressor
        assert isinstance(compressor, Compressor)
        low = get("P", "T", evaporating, "Q", 1)
        superheat = self.superheat(evaporating)
        outlet, dew = get("H", "T", evaporating + superheat, "P", low), get("H", "T", evaporating, "Q", 1)
        p1 = get("P", "T", evaporating - m.suction_line.pressure_loss, "Q", 1)
        T1 = evaporating + superheat + m.suction_line.warming
        h1, s1, rho1 = (get(what, "T", T1, "P", p1) for what in "HSD")
        high = get("P", "T", condensing, "Q", 1)
        bubble = get("T", "P", high, "Q", 0)
        h_liquid = get("H", "T", bubble - m.subcooling, "P", high)
        p2 = get("P", "T", condensing + m.discharge_line_loss, "Q", 1)
        h2, rho2 = get("H", "P", p2, "S", s1), get("D", "P", p2, "S", s1)
        ratio, work = p2 / p1, h2 - h1
        flow = compressor.volumetric_level * compressor.shape.volumetric(ratio) * compressor.displacement * rho1
        exponent = math.log(ratio) / math.log(rho2 / rho1)
        efficiency = compressor.isentropic_level * compressor.shape.isentropic(ratio, work * rho1 / p1, exponent)
        power = flow * work / efficiency
        h_out = h1 + power * (1 - compressor.shell_loss) / flow
        cold, warm = evaporating, condensing
        if self.glides:  # mean over the heat taken up, by Simpson's rule, and the differences at both ends
            inlet = get("T", "P", low, "H", h_liquid)
            middle = get("T", "P", low, "H", 0.5 * (h_liquid + dew))
            air, mean = self.media.source.temperature, (inlet + 4 * middle + evaporating) / 6
            cold = air - between(air - evaporating, 2 * (air - mean) - (air - evaporating))
            outside = self.media.sink.temperature
            warm = outside + between(bubble - outside, condensing - outside)
        gas, taken, given = flow * (outlet - dew), flow * (outlet - h_liquid), flow * (h_out - h_liquid)
        return Cycle(gas, taken, given, power, h_out, p2, cold, warm)

    def gaps(self, x: Sequence[float]) -> tuple[float, float]:
        """Heat of the coils less heat of the refrigerant, in W over 10 K of the coil.

        Gas takes its superheat from a dry part of the evaporator's surface, which the air meets first.
        """
        c, source, sink, coil = self.cycle(x[0], x[1]), self.media.source, self.media.sink, self.m.evaporator
        difference, conductance = source.temperature - x[0], coil.conductance_at(source.volume_flow)
        dry = c.gas / (coil.gas_share * conductance * math.sqrt(difference * (difference - self.superheat(x[0]))))
        reach = effectiveness((1 - dry) * conductance / source.capacity_rate)
        evaporated = reach * (source.capacity_rate * (source.temperature - c.cold) - c.gas)
        low, high = coil.heat_per_kelvin(source), self.m.condenser.heat_per_kelvin(sink)
        return (
            (evaporated - (c.taken - c.gas)) / (10 * low),
            (high * (c.warm - sink.temperature) - c.given) / (10 * high),
        )

    def answer(self) -> Answer:
        """The operating point from the same start as ours."""
        from scipy.optimize import fsolve

        start = (self.media.source.temperature - 8.0, self.media.sink.temperature + 10.0)
        evaporating, condensing = map(float, fsolve(self.gaps, start, xtol=1e-8))
        c = self.cycle(evaporating, condensing)
        return Answer(c.cold, c.warm, c.taken, c.power, self.get("T", "P", c.pressure, "H", c.enthalpy))
