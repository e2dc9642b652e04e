"""What every part of a description has in common."""

from __future__ import annotations

from typing import Literal

from pydantic import BaseModel, ConfigDict, Field

from commission.description.fields import FileName

Duty = Literal["cold_storage", "comfort_cooling", "liquid_cooling", "space_heating", "water_heating"]
MediumName = Literal["air", "water", "propylene glycol", "ethylene glycol"]
Included = Literal[
    "compressor", "evaporator fan", "condenser fan", "source pump", "sink pump", "controls", "defrost",
    "crankcase heater",
]  # fmt: skip
DecisionRule = Literal["simple", "guarded"]


class Part(BaseModel):
    """A part of the description: unknown keys are errors, and nothing changes after reading."""

    model_config = ConfigDict(frozen=True, extra="forbid")


class Document(Part):
    """A file or reference that belongs to a system or the plant."""

    title: str = Field(description="what it is, as it stands on the cover")
    file: FileName | None = Field(None, description="path of the file, such as documents/unit.pdf")
    reference: str | None = Field(None, description="number, edition or clause")
