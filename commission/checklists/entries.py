"""The shape of checklist data: stages and items as a person writes them, shipped or in a plant folder."""

from __future__ import annotations

from typing import Literal

from pydantic import BaseModel, ConfigDict, Field

Answer = Literal["value", "yes/no", "file", "text"]
Mark = Literal["V1", "V2", "C", "M", "M-low", "practice", "stated"]


class Entry(BaseModel):
    """Unknown keys are errors, and nothing changes after reading."""

    model_config = ConfigDict(frozen=True, extra="forbid")


class MustRead(Entry):
    """What a reading must be: a value with a margin, or bounds; each an expression or a quoted quantity."""

    value: str | None = Field(None, description="what it should be, an expression")
    within: str | None = Field(
        None,
        description="margin on both sides: a quantity, a share in %, 'band' for the expected band, or 'band as read' "
        "for that with the tolerance of rated figures and the error of the instrument",
    )
    at_least: str | None = Field(None, description="lower bound, an expression or quantity")
    at_most: str | None = Field(None, description="upper bound, an expression or quantity")
    rest_at: str | None = Field(
        None, description="id of the item that reads the temperature of the plant at rest: saturation at its answer"
    )
    as_answered: str | None = Field(
        None, description="id of the item whose answer it must equal, within the error of the instrument"
    )
    says: str | None = Field(None, description="words beside the figures, or alone")


class Move(Entry):
    """Do this item in another stage, always or where a condition holds: order follows hazard, ids stay as filed."""

    to: str = Field(description="id of the stage")
    when: str | None = Field(None, description="condition, an expression; without it, always")
    after: str | None = Field(
        None,
        description="id of the item it then follows, or of the last before it that applies; without it, at the end",
    )
    before: str | None = Field(
        None, description="in place of `after`: id of the item it then precedes, or of the next after it that applies"
    )


class ItemEntry(Entry):
    """One act or one observation."""

    id: str = Field(description="stage.word, unique in the whole library")
    do: str = Field(description="one act or one observation, plain imperative")
    source: str = Field(description="a document, or 'common practice'")
    mark: Mark | None = Field(None, description="how sure the source is; 'practice' for common practice, else M")
    when: str | None = Field(None, description="condition under which the item applies, an expression")
    answer: Answer = Field("yes/no", description="what is written down")
    quantity: str | None = Field(None, description="key of the nomenclature that the answer belongs to")
    unit: str | None = Field(None, description="unit of the answer where it is no quantity of the nomenclature")
    must_read: MustRead | None = Field(None)
    how: str | None = Field(None, description="how it is done or measured")
    if_not: str | None = Field(None, description="what to do when it is not so")
    hazard: str | None = Field(None, description="what can hurt someone")
    caution: str | None = Field(None, description="what can harm the plant or the result")
    who: str | None = Field(None, description="who does it, where not the refrigeration fitter")
    after: str | None = Field(None, description="id of the item it follows; without it, at the end of the stage")
    move: Move | None = Field(None)


class LeftOut(Entry):
    """An item of the library that this plant leaves out, with the reason."""

    id: str
    reason: str


class StageEntry(Entry):
    """One stage with its items, or additions to a stage."""

    stage: str = Field(description="id of the stage")
    title: str | None = Field(None)
    purpose: str | None = Field(None)
    after: str | None = Field(None, description="id of the stage a new stage follows")
    items: tuple[ItemEntry, ...] = Field(())
    leave_out: tuple[LeftOut, ...] = Field(())
