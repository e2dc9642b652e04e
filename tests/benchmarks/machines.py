"""The machine that all benchmarks of the physics operate: 5 kW between two air streams, with losses and lines."""

from __future__ import annotations

from commission.machine import Compressor, EfficiencyShape, Exchanger, Media, SingleStage, SuctionLine, air_stream
from commission.properties import Refrigerant

REFRIGERANTS = ("R-290", "R-410A", "R-717", "R-134a", "R-454B", "R-448A")
SHAPE = EfficiencyShape(0.04, 1.1, 0.006, 0.15, 0.08)
KELVIN = 273.15


def machine(
    fluid: Refrigerant, air_share: float | None = None, heating_share: float = 0.0, superheat: float = 6.0
) -> SingleStage:
    """A machine that takes about 5 kW at -5 °C and 40 °C; `air_share` makes its coil a wet one. A superheat of 4 K the
    coil can give at all conditions of the maps, one of 6 K not."""
    effect = fluid.dew(268.15).h - fluid.bubble(313.15).h
    displacement = 5000.0 / (fluid.dew(268.15).rho * effect * 0.8)
    return SingleStage(
        fluid,
        Compressor(displacement, 0.95, 0.85, SHAPE, 0.05),
        Exchanger(900.0, 0.6, 0.5, air_share),
        Exchanger(900.0, 0.8, 0.5),
        superheat=superheat,
        subcooling=3.0,
        suction_line=SuctionLine(1.0, heating_share, 3.0),
        discharge_line_loss=0.4,
    )


def media(source: float, sink: float, around: float | None = 20.0) -> Media:
    """Air at `source` and `sink` (°C); the pipes lie at `around` (°C), or in the air of the sink where it is None."""
    return Media(
        air_stream(KELVIN + source, 0.6, 0.8, 101325.0),
        air_stream(KELVIN + sink, 0.8, 0.4, 101325.0),
        KELVIN + (sink if around is None else around),
    )
