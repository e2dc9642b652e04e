"""The same machine as an engineer would write it with `PropsSI` and `scipy.optimize.fsolve`, to compare with."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from commission.machine import Compressor, Media, SingleStage
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


class Plain:
    """Equations of `SingleStage`, written down straight, for dry air coils and a compressor of displacement."""

    def __init__(self, machine: SingleStage, media: Media, name: str) -> None:
        self.m, self.media, self.name = machine, media, name
        self.glides = "&" in name

    def get(self, what: str, a: str, x: float, b: str, y: float) -> float:
        """One call of the property library."""
        from CoolProp.CoolProp import PropsSI

        return float(PropsSI(what, a, x, b, y, self.name))

    def cycle(self, evaporating: float, condensing: float) -> tuple[float, float, float, float, float, float, float]:
        """Heat taken, heat given, power, discharge enthalpy and pressure, temperatures that drive both coils."""
        m, get, compressor = self.m, self.get, self.m.compressor
        assert isinstance(compressor, Compressor)
        low = get("P", "T", evaporating, "Q", 1)
        outlet = get("H", "T", evaporating + m.superheat, "P", low)
        p1 = get("P", "T", evaporating - m.suction_line.pressure_loss, "Q", 1)
        T1 = evaporating + m.superheat + m.suction_line.warming
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
        if self.glides:  # mean over the heat taken up, by Simpson's rule
            dew = get("H", "T", evaporating, "Q", 1)
            inlet = get("T", "P", low, "H", h_liquid)
            middle = get("T", "P", low, "H", 0.5 * (h_liquid + dew))
            cold, warm = (inlet + 4 * middle + evaporating) / 6, 0.5 * (bubble + condensing)
        return flow * (outlet - h_liquid), flow * (h_out - h_liquid), power, h_out, p2, cold, warm

    def gaps(self, x: Sequence[float]) -> tuple[float, float]:
        """Heat of the coils less heat of the refrigerant, in W over 10 K of the coil."""
        taken, given, _, _, _, cold, warm = self.cycle(x[0], x[1])
        source, sink = self.media.source, self.media.sink
        low = self.m.evaporator.heat_per_kelvin(source)
        high = self.m.condenser.heat_per_kelvin(sink)
        return (
            (low * (source.temperature - cold) - taken) / (10 * low),
            (high * (warm - sink.temperature) - given) / (10 * high),
        )

    def answer(self) -> Answer:
        """The operating point from the same start as ours."""
        from scipy.optimize import fsolve

        start = (self.media.source.temperature - 8.0, self.media.sink.temperature + 10.0)
        evaporating, condensing = map(float, fsolve(self.gaps, start, xtol=1e-8))
        heat, _, power, h_out, p2, cold, warm = self.cycle(evaporating, condensing)
        discharge = self.get("T", "P", p2, "H", h_out)
        return Answer(cold, warm, heat, power, discharge)
