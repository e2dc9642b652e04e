"""Gauges, probes and meters."""

from __future__ import annotations

from typing import Literal

from pydantic import Field

from commission.description.fields import Date, FileName, Ratio, YesNo
from commission.description.instruments import MEASURED, ResolvedInstrument, read_end
from commission.description.model.base import Part
from commission.quantities import parse


class Accuracy(Part):
    """Largest permissible error of an instrument; parts given together are added (worst case)."""

    of_span: Ratio | None = Field(None, description="share of the measuring span (to minus from)")
    of_reading: Ratio | None = Field(None, description="share of the reading")
    absolute: str | None = Field(
        None, description="fixed part, with a unit of what the instrument measures, such as 0.5 K or 0.1 bar"
    )


class Instrument(Part):
    """A gauge, probe or meter with serial number and calibration; without them a report is void."""

    measures: Literal[
        "temperature", "temperature difference", "pressure", "vacuum", "pressure difference", "electric power", "heat",
        "energy", "current", "voltage", "relative humidity", "volume flow", "mass", "rotational speed", "velocity",
        "duration", "sound level",
    ] = Field(description="what it measures")  # fmt: skip
    from_: str | None = Field(None, alias="from", description="lower end of the scale, with unit")
    to: str | None = Field(None, description="upper end of the scale, with unit")
    accuracy: Accuracy | None = Field(None, description="largest permissible error")
    class_: str | None = Field(None, alias="class", description="such as IEC 60751 A or EN 837-1 class 1.0")
    resolution: str | None = Field(None, description="smallest step that can be read, with unit")
    drift_per_year: str | None = Field(
        None, description="largest change in a year after calibration, with unit, where it is known"
    )
    clamped_on: YesNo = Field(False, description="clamped on a pipe rather than in a pocket")
    matched_pair: YesNo = Field(False, description="two probes compared in one bath")
    serial: str | None = Field(None, description="serial number")
    calibrated_on: Date | None = Field(None, description="day of the last calibration")
    calibrated_until: Date | None = Field(None, description="last day on which the calibration counts")
    certificate: FileName | None = Field(None, description="certificate as a file, such as documents/lg-07.pdf")

    @property
    def resolved(self) -> ResolvedInstrument:
        """The instrument in SI; its texts were checked when the description was read."""
        kind, difference = MEASURED[self.measures]
        low = read_end(self.from_, kind) if self.from_ is not None else None
        high = read_end(self.to, kind) if self.to is not None else None
        accuracy = self.accuracy or Accuracy()

        def small(text: str | None) -> float | None:
            return None if text is None else parse(text, difference)

        return ResolvedInstrument(
            measures=self.measures,
            kind=kind,
            difference_kind=difference,
            range_low=low[0] if low else None,
            range_high=high[0] if high else None,
            reference=(low or high or (0.0, None))[1],
            accuracy_of_span=accuracy.of_span,
            accuracy_of_reading=accuracy.of_reading,
            accuracy_absolute=small(accuracy.absolute),
            resolution=small(self.resolution),
            drift_per_year=small(self.drift_per_year),
        )
