"""Compressors: displacement with volumetric and overall isentropic efficiency over pressure ratio. SI units."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import NamedTuple

from commission.errors import NotCalculatedError
from commission.properties import Refrigerant, State


@dataclass(frozen=True, slots=True)
class EfficiencyShape:
    """How the efficiencies of one type of compressor run over the pressure ratio; levels are fitted apart.

    Volumetric: 1 - clearance (r^(1/n) - 1) - leakage (r - 1), the re-expansion of the clearance volume (Gosney,
    Principles of Refrigeration, 1982, ch. 4) and a leakage in proportion to the pressure difference.

    Isentropic: ideal work of the type plus a loss pressure times the swept volume, as in the semi-empirical models of
    Winandy, Saavedra & Lebrun (Applied Thermal Engineering 22, 2002, 107-120 and Int. J. Thermal Sciences 41, 2002,
    181-192). The loss pressure is `loss_suction` p1 + `loss_discharge` p2, so that the efficiency has a peak and
    declines to both sides. With `built_in_volume_ratio` (scroll, screw) the gas is compressed inside to a fixed volume
    and the rest at constant volume, so that too low and too high a pressure ratio cost work. Gas that leaks back is
    compressed again; the gas of the clearance gives its work back.
    """

    clearance: float
    expansion_exponent: float
    leakage: float
    loss_suction: float
    loss_discharge: float
    built_in_volume_ratio: float | None = None

    def volumetric(self, ratio: float) -> float:
        """Volumetric efficiency at `ratio` = p2/p1, before the level."""
        re_expansion = self.clearance * math.expm1(math.log(ratio) / self.expansion_exponent)
        return 1 - re_expansion - self.leakage * (ratio - 1)

    def isentropic(self, ratio: float, work: float, exponent: float) -> float:
        """Overall isentropic efficiency at `ratio`, before the level.

        `work` is the isentropic work over p1 v1 (no unit) and `exponent` the mean isentropic exponent of p and v.

        Raises:
            NotCalculatedError: no compressor of this shape delivers gas at that ratio.
        """
        volumetric = self.volumetric(ratio)
        if not (volumetric > 0 and work > 0 and self.leakage * (ratio - 1) < 1):
            raise NotCalculatedError(f"at a pressure ratio of {ratio:.1f} all the gas leaks back inside the compressor")
        losses = (self.loss_suction + self.loss_discharge * ratio) / (volumetric * work)
        recompressed = 1 / (1 - self.leakage * (ratio - 1))
        return 1 / (self._inside(ratio, exponent) * recompressed + losses)

    def _inside(self, ratio: float, k: float) -> float:
        """Work inside a compressor of fixed built-in volume ratio over isentropic work, at least 1."""
        if self.built_in_volume_ratio is None:
            return 1.0
        if self.built_in_volume_ratio < 1:
            raise NotCalculatedError(
                f"a compressor with a built-in volume ratio of {self.built_in_volume_ratio:.2f} would not compress"
            )
        inner = math.exp(k * math.log(self.built_in_volume_ratio))
        return (_work_number(inner, k) + (ratio - inner) / self.built_in_volume_ratio) / _work_number(ratio, k)


def _work_number(ratio: float, k: float) -> float:
    """Isentropic work over p1 v1 of a gas with constant exponent k: k/(k-1) (r^((k-1)/k) - 1)."""
    share = (k - 1) / k
    if abs(share) < 1e-9:
        return math.log(ratio)
    return math.expm1(share * math.log(ratio)) / share


class Compression(NamedTuple):
    """What a compressor does between two states: flow kg/s, electric power W, heat lost by the shell W, enthalpy out.

    `isentropic_work` in J/kg; the efficiencies are those in force, levels included; the
    volumetric one is None where the displacement is not known. `isentropic_end` is the state at the end of a
    reversible compression, to start a neighbouring one.
    """

    flow: float
    power: float
    shell_loss: float
    discharge_enthalpy: float
    isentropic_work: float
    pressure_ratio: float
    volumetric_efficiency: float | None
    isentropic_efficiency: float
    isentropic_end: State | None = None


@dataclass(frozen=True, slots=True)
class Compressor:
    """A displacement compressor.

    `displacement` in m3/s at the speed in force; `volumetric_level` and `isentropic_level` multiply the shapes;
    `shell_loss` is the share of the electric power that leaves through the shell to the surroundings; `speed_loss` the
    share of the isentropic efficiency that is lost at half speed, in proportion between. `leak` is the share of the gas
    that worn valves let back to the suction side, 0 in a healthy machine: it is compressed again, so that the power
    stays and the flow falls.
    """

    displacement: float
    volumetric_level: float
    isentropic_level: float
    shape: EfficiencyShape
    shell_loss: float = 0.0
    speed_loss: float = 0.0
    leak: float = 0.0

    def compress(
        self,
        refrigerant: Refrigerant,
        suction: State,
        pressure: float,
        speed_share: float = 1.0,
        near: State | None = None,
    ) -> Compression:
        """Compress from `suction` to `pressure` (Pa); `near` is the isentropic end of a neighbouring compression.

        Raises:
            NotCalculatedError: the pressure does not rise, or the clearance gas fills the cylinder.
        """
        ratio = pressure / suction.p
        if not ratio > 1:
            raise NotCalculatedError(f"the compressor would have to work at a pressure ratio of {ratio:.2f}")
        end = refrigerant.isentropic_end(suction, pressure, near)
        work = end.h - suction.h
        if not (work > 0 and end.rho > suction.rho):
            raise NotCalculatedError(f"at a pressure ratio of {ratio:.4f} there is nothing to compress")
        exponent = math.log(ratio) / math.log(end.rho / suction.rho)
        volumetric = self.volumetric_level * self.shape.volumetric(ratio)
        if volumetric <= 0:
            raise NotCalculatedError(f"at a pressure ratio of {ratio:.1f} the compressor delivers no gas")
        flow = volumetric * self.displacement * speed_share * suction.rho
        level = self.isentropic_level * (1 - 2 * self.speed_loss * (1 - speed_share))
        isentropic = level * self.shape.isentropic(ratio, work * suction.rho / suction.p, exponent)
        if not (isentropic > 0 and self.leak < 1):
            raise NotCalculatedError(f"at {100 * speed_share:.0f} % of its speed the compressor delivers no gas")
        power = flow * work / isentropic
        loss = self.shell_loss * power
        flow *= 1 - self.leak
        volumetric *= 1 - self.leak
        isentropic *= 1 - self.leak
        enthalpy = suction.h + (power - loss) / flow
        return Compression(flow, power, loss, enthalpy, work, ratio, volumetric, isentropic, end)

    def staged(self, displacement: float, power: float) -> Compressor:
        """The compressor with shares (0-1) of its displacement and of its power between the same pressures."""
        return replace(
            self,
            displacement=self.displacement * displacement,
            isentropic_level=self.isentropic_level * (displacement / power),
        )
