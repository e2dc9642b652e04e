"""Compressors by ten-coefficient polynomials, as suppliers publish them. SI units outside the coefficients."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

from commission.errors import NotCalculatedError
from commission.machine.compressor import Compression
from commission.properties import Refrigerant, State

SUCTION_SHARE = 0.75
"""Share of a change of suction density that reaches the cylinder (Dabiri & Rice, ASHRAE Transactions 87 (2), 1981)."""


def ten_coefficients(c: Sequence[float], evaporating: float, condensing: float) -> float:
    """X = C1 + C2 S + C3 D + C4 S2 + C5 S D + C6 D2 + C7 S3 + C8 D S2 + C9 S D2 + C10 D3 (EN 12900, AHRI 540).

    `evaporating` S and `condensing` D are dew points in the unit that the coefficients are for.

    Raises:
        ValueError: not ten coefficients.
    """
    if len(c) != 10:
        raise ValueError(f"ten coefficients are wanted, not {len(c)}")
    S, D = evaporating, condensing
    powers = (1, S, D, S * S, S * D, D * D, S**3, D * S * S, S * D * D, D**3)
    return sum(k * x for k, x in zip(c, powers, strict=True))


def in_fahrenheit(c: Sequence[float]) -> tuple[float, ...]:
    """The coefficients that give the same value with S and D in °F instead of °C: all ten terms re-expanded."""
    a, b = 5 / 9, -160 / 9
    c1, c2, c3, c4, c5, c6, c7, c8, c9, c10 = c
    return (
        c1 + (c2 + c3) * b + (c4 + c5 + c6) * b**2 + (c7 + c8 + c9 + c10) * b**3,
        a * (c2 + (2 * c4 + c5) * b + (3 * c7 + 2 * c8 + c9) * b**2),
        a * (c3 + (c5 + 2 * c6) * b + (c8 + 2 * c9 + 3 * c10) * b**2),
        a**2 * (c4 + (3 * c7 + c8) * b),
        a**2 * (c5 + 2 * (c8 + c9) * b),
        a**2 * (c6 + (c9 + 3 * c10) * b),
        a**3 * c7,
        a**3 * c8,
        a**3 * c9,
        a**3 * c10,
    )


@dataclass(frozen=True, slots=True)
class PolynomialCompressor:
    """A compressor known by polynomials of flow (or capacity) and power.

    `flow` gives kg/s and `power` W over dew points in °C (°F with `fahrenheit`); where only a capacity in W is
    published it stands in `capacity` and is divided by the enthalpy difference of the rating. The rating's suction
    state is `superheat` (K) above dew, or at `suction_temperature` (K); its liquid is subcooled by `subcooling` (K).
    Away from it the flow follows the suction density by the share of Dabiri & Rice; the power stays. `flow_level` and
    `isentropic_level` are fitted factors, 1 for a machine as published. `displacement` in m3/s serves the volumetric
    efficiency alone.
    """

    flow: tuple[float, ...] | None
    capacity: tuple[float, ...] | None
    power: tuple[float, ...]
    superheat: float | None = 10.0
    suction_temperature: float | None = None
    subcooling: float = 0.0
    fahrenheit: bool = False
    flow_level: float = 1.0
    isentropic_level: float = 1.0
    shell_loss: float = 0.0
    displacement: float | None = None
    speed_loss: float = 0.0

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
            NotCalculatedError: the pressure does not rise, or the polynomials give no flow or power there.
        """
        ratio = pressure / suction.p
        if not ratio > 1:
            raise NotCalculatedError(f"the compressor would have to work at a pressure ratio of {ratio:.2f}")
        evaporating, condensing = refrigerant.dew_temperature(suction.p), refrigerant.dew_temperature(pressure)
        rated = self._rated_state(refrigerant, suction.p, evaporating)
        S, D = self._unit(evaporating), self._unit(condensing)
        flow = self._rated_flow(refrigerant, rated, condensing, S, D)
        power = ten_coefficients(self.power, S, D)
        if flow <= 0 or power <= 0:
            raise NotCalculatedError(
                f"the compressor's polynomials give no flow or no power at {evaporating - 273.15:.1f} °C evaporating "
                f"and {condensing - 273.15:.1f} °C condensing: outside the range they were made for"
            )
        flow *= (1 + SUCTION_SHARE * (suction.rho / rated.rho - 1)) * self.flow_level * speed_share
        power *= self.flow_level * speed_share / self.isentropic_level / (1 - 2 * self.speed_loss * (1 - speed_share))
        end = refrigerant.isentropic_end(suction, pressure, near)
        work = end.h - suction.h
        loss = self.shell_loss * power
        return Compression(
            flow=flow,
            power=power,
            shell_loss=loss,
            discharge_enthalpy=suction.h + (power - loss) / flow,
            isentropic_work=work,
            pressure_ratio=ratio,
            volumetric_efficiency=flow / (self.displacement * speed_share * suction.rho) if self.displacement else None,
            isentropic_efficiency=flow * work / power,
            isentropic_end=end,
        )

    def staged(self, displacement: float, power: float) -> PolynomialCompressor:
        """The compressor with shares (0-1) of its displacement and of its power between the same pressures."""
        return replace(
            self,
            flow_level=self.flow_level * displacement,
            isentropic_level=self.isentropic_level * (displacement / power),
            displacement=self.displacement * displacement if self.displacement else None,
        )

    def _unit(self, temperature: float) -> float:
        celsius = temperature - 273.15
        return celsius * 1.8 + 32.0 if self.fahrenheit else celsius

    def _rated_state(self, refrigerant: Refrigerant, pressure: float, evaporating: float) -> State:
        if self.suction_temperature is not None:
            return refrigerant.vapour(max(self.suction_temperature, evaporating), pressure)
        return refrigerant.vapour(evaporating + (self.superheat or 0.0), pressure)

    def _rated_flow(self, refrigerant: Refrigerant, rated: State, condensing: float, S: float, D: float) -> float:
        if self.flow is not None:
            return ten_coefficients(self.flow, S, D)
        assert self.capacity is not None
        pressure = refrigerant.dew(condensing).p
        liquid = refrigerant.liquid(refrigerant.bubble_temperature(pressure) - self.subcooling, pressure)
        return ten_coefficients(self.capacity, S, D) / (rated.h - liquid.h)
