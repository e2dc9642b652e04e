"""The shape of upkeep data: duties as a person writes them, shipped or in a plant's upkeep.yaml."""

from __future__ import annotations

from typing import Annotated, Any, Literal

from pydantic import BeforeValidator, Field, WithJsonSchema
from pydantic_core import PydanticCustomError

from commission.description.fields import Date, YesNo
from commission.description.model import Part
from commission.upkeep.intervals import ALLOWED, Interval, read_interval

Mark = Literal["V2", "V1", "C", "M", "M-low", "practice", "stated"]
CountedFrom = Literal["handover", "start", "installed", "calibrated"]
LAW = "law"


def _interval(value: Any) -> Interval:
    try:
        return read_interval(str(value))
    except ValueError as error:
        message = {"message": "an interval is wanted here", "allowed": str(error)}
        raise PydanticCustomError("meaning", "{message}", message) from None


def _interval_or_law(value: Any) -> Interval | str:
    return LAW if value == LAW else _interval(value)


_SCHEMA = WithJsonSchema({"type": "string", "description": ALLOWED})
Every = Annotated[Interval, BeforeValidator(_interval), _SCHEMA]
EveryOrLaw = Annotated[Interval | Literal["law"], BeforeValidator(_interval_or_law), _SCHEMA]


class DoneBy(Part):
    """What in a filed record counts as done, besides an answer to the duty's own item."""

    answers: tuple[str, ...] = Field((), description="ids of checklist items that are answered, and not with no")
    stages: tuple[str, ...] = Field((), description="ids of stages: any filed record of one")
    readings: YesNo = Field(False, description="yes: any filed record with readings")


class Otherwise(Part):
    """The interval where the law sets none."""

    every: Every
    source: str
    mark: Mark = "stated"


class Again(Part):
    """How soon after an answer `no` it comes due again."""

    within: Every
    source: str
    mark: Mark = "stated"


class DutyEntry(Part):
    """One duty of the shipped list."""

    id: str = Field(pattern=r"^[a-z][a-z0-9]*(-[a-z0-9]+)*$", description="small letters, digits and hyphens")
    item: str | None = Field(None, description="checklist item that is the act; it applies where the item does")
    stage: str | None = Field(None, description="stage of the checklist that is the act")
    what: str | None = Field(None, description="the act in words, where no item says it")
    of: Literal["systems", "instruments"] = Field("systems", description="what it is done to, each one")
    systems: tuple[str, ...] = Field((), description="ids of the systems it applies to; none: all")
    every: EveryOrLaw | None = Field(None, description="interval, counted from the day it was last done")
    once: Every | None = Field(None, description="one single time, so long after the day it is counted from")
    unknown: str | None = Field(None, description="why there is no interval")
    from_: CountedFrom = Field("start", alias="from", description="the day it is first counted from")
    done_by: DoneBy = Field(default_factory=DoneBy)
    otherwise: Otherwise | None = Field(None)
    again: Again | None = Field(None)
    source: str = Field(min_length=1, description="where the interval comes from")
    mark: Mark = Field("stated", description="how sure the interval is")
    who: str | None = Field(None, description="who does it")


class OwnDuty(Part):
    """A duty in a plant's upkeep.yaml: one of its own, or another interval for one of the shipped list."""

    id: str = Field(pattern=r"^[a-z][a-z0-9]*(-[a-z0-9]+)*$", description="of the shipped list, or a new one")
    what: str | None = Field(None, description="the act in words; wanted for a new duty without item")
    item: str | None = Field(None, description="checklist item that is the act, such as one of the plant's own")
    systems: tuple[str, ...] = Field((), description="ids of the systems this is said of; none: all")
    every: Every | None = Field(None, description="interval, such as 6 months")
    once: Every | None = Field(None, description="one single time, so long after the day it is counted from")
    from_: Literal["handover", "start", "installed"] | None = Field(
        None, alias="from", description="first counted from"
    )
    done_by: DoneBy | None = Field(None, description="what in a filed record counts as done")
    source: str = Field(min_length=1, description="who says so: contract, supplier, authority, house rule")
    who: str | None = Field(None, description="who does it")


class DoneEntry(Part):
    """Something that was done and is in no filed record: before there were records, or by another firm."""

    duty: str = Field(description="id of the duty")
    system: str = Field(description="id of the system")
    on: Date = Field(description="day on which it was done")
    by: str = Field(min_length=1, description="who did it")
    evidence: str = Field(min_length=1, description="file or document that shows it")


class LeaveOut(Part):
    """A duty that this plant leaves out, with the reason."""

    duty: str = Field(description="id of the duty")
    systems: tuple[str, ...] = Field((), description="ids of the systems; none: all")
    reason: str = Field(min_length=1, description="why, so that another person can judge it")


class UpkeepFile(Part):
    """A plant's upkeep.yaml."""

    duties: tuple[OwnDuty, ...] = Field(())
    done: tuple[DoneEntry, ...] = Field(())
    leave_out: tuple[LeaveOut, ...] = Field(())
