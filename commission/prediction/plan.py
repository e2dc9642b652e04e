"""The plain dataclasses of one system: levels, rated condition, fans, and the machine they belong to."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, replace

from commission.machine import Media, SingleStage, Stage, Transcritical, stage_of, staged

Machine = SingleStage | Transcritical
STAGE = "compressor_stage"
WHOLE = Stage()


@dataclass(frozen=True, slots=True)
class Levels:
    """What is fitted: swept flow times volumetric level (m3/s), isentropic level, conductances (W/K)."""

    swept_flow: float
    isentropic: float
    condenser: float
    evaporator: float

    def logs(self) -> tuple[float, ...]:
        """Natural logarithms, the unknowns of the fit."""
        return tuple(math.log(v) for v in (self.swept_flow, self.isentropic, self.condenser, self.evaporator))

    @classmethod
    def from_logs(cls, logs: tuple[float, ...]) -> Levels:
        """Inverse of `logs`."""
        return cls(*(math.exp(v) for v in logs))


@dataclass(frozen=True, slots=True)
class Fans:
    """Electric power in W of fans and pumps, and which of them the stated boundary counts (0-1 each).

    Where stages are stated, the power follows the flow of that side by its exponent: a lower flow is a lower stage. It
    stays where the exponent is 0: a lower flow is then taken for a dirty filter or a throttled valve.
    """

    source: float
    sink: float
    source_counted: float
    sink_counted: float
    source_exponent: float = 0.0
    sink_exponent: float = 0.0

    def counted(self, sink_share: float) -> float:
        """Power inside the boundary at a share of the sink's fan power."""
        return self.source_counted * self.source + self.sink_counted * self.sink * sink_share

    def at(self, source_flow: float, sink_flow: float) -> Fans:
        """The powers at shares of the rated flows."""
        return replace(
            self,
            source=self.source * source_flow**self.source_exponent,
            sink=self.sink * sink_flow**self.sink_exponent,
        )


@dataclass(frozen=True, slots=True)
class Rated:
    """The condition that levels belong to: media temperatures (K), expected heat (W), flows (m3/s), humidity,
    speed (1/s), and what the source enters above the dew point (K), None where that is not known beforehand."""

    source_temperature: float
    sink_temperature: float
    source_heat: float
    sink_heat: float
    source_flow: float
    sink_flow: float
    source_humidity: float
    speed: float | None = None
    source_difference: float | None = None


@dataclass(frozen=True, slots=True)
class Plan:
    """All of one system that a prediction needs, for one set of assumption values and levels.

    `machines` equal compressors work on it; `unloading_loss` is the power of an unloaded one over that at full load.
    """

    machine: Machine
    fans: Fans
    rated: Rated
    source_humidity: float
    surroundings: float | None
    power_factor: float
    frost_share: float = 0.0
    """Share of the heat that frost and defrosts take at 2 °C in damp air."""
    machines: int = 1
    unloading_loss: float = 0.0
    stage: Stage = WHOLE
    """The stage at which `machine` is, all of it as it is fitted."""

    def at(self, conditions: Mapping[str, float]) -> Plan:
        """The plan of the whole machine at the stage of a condition (keys of the nomenclature, SI)."""
        share = conditions.get(STAGE, 1.0)
        if share == 1.0:
            return self
        stage = stage_of(share, self.machines, self.unloading_loss)
        return replace(self, machine=staged(self.machine, stage), stage=stage)

    @property
    def own_conditions(self) -> dict[str, float]:
        """Humidity and flows where a condition does not give them: stated or assumed, and so uncertain."""
        return {
            "heat_source_relative_humidity": self.source_humidity,
            "heat_source_flow": self.rated.source_flow,
            "heat_sink_flow": self.rated.sink_flow,
        }

    def fans_at(self, media: Media) -> Fans:
        """Fans and pumps at the flows of a condition; a flow that follows from an outlet temperature is no stage."""
        sink = 1.0 if media.sink.outlet_wanted is not None else media.sink.volume_flow / self.rated.sink_flow
        return self.fans.at(media.source.volume_flow / self.rated.source_flow, sink)
