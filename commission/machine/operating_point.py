"""What an arrangement calculates: the operating point, and the interface that every arrangement offers. SI units."""

from __future__ import annotations

from dataclasses import dataclass

from commission.machine.compressor import Compression
from commission.machine.streams import Stream


@dataclass(frozen=True, slots=True)
class StatePoint:
    """One state of the refrigerant on its way round, for tables and the log p-h diagram.

    `label` is short, `name` says where; `p` in Pa absolute, `h` in J/kg and `s` in J/(kg K)
    (zero as in the property source), `T` in K.
    """

    label: str
    name: str
    p: float
    h: float
    T: float
    s: float


@dataclass(frozen=True, slots=True)
class Media:
    """The condition a machine works at: what enters its exchangers, and the temperature (K) around its pipes."""

    source: Stream
    sink: Stream
    surroundings: float
    speed_share: float = 1.0


@dataclass(frozen=True, slots=True)
class Balance:
    """The balance of all components at one condition.

    Temperatures in K, pressures in Pa absolute, heat and power in W. `evaporating_temperature` and
    `condensing_temperature` are dew points at the evaporator outlet and the condenser inlet, the latter None above the
    critical point; `source_drive` and `sink_drive` the refrigerant temperatures that drive the exchangers, for blends
    means along them. `superheat` (K) is that at the evaporator outlet, and `dry_share` the share (0-1) of the
    evaporator's surface that gives it; `share` is the manipulated share of the head-pressure control, `sink_fan_share`
    and `sink_flow_share` its shares of fan power and flow. `jacobian` and `unknowns` start a neighbouring solution.
    """

    regime: str
    evaporating_temperature: float
    condensing_temperature: float | None
    compression: Compression
    heat_from_source: float
    heat_to_sink: float
    source_drive: float
    sink_drive: float
    source_inlet_temperature: float
    sink_inlet_temperature: float
    sink_outlet_temperature: float
    superheat: float
    dry_share: float
    share: float
    sink_fan_share: float
    sink_flow_share: float
    evaluations: int
    unknowns: tuple[float, ...]
    jacobian: tuple[tuple[float, ...], ...]


@dataclass(frozen=True, slots=True)
class OperatingPoint:
    """A balance with all states of the refrigerant; `line_gain` in W is what the suction line picks up."""

    balance: Balance
    suction_pressure: float
    discharge_pressure: float
    suction_temperature: float
    discharge_temperature: float
    liquid_temperature: float
    superheat: float
    compressor_superheat: float
    subcooling: float | None
    valve_outlet_temperature: float
    line_gain: float
    states: tuple[StatePoint, ...]
    warnings: tuple[str, ...]
