"""What the file of one visit says: who, when, at what condition, what was read with what, what was answered."""

from __future__ import annotations

import datetime as dt
from typing import Annotated, Any, Literal

from pydantic import BeforeValidator, Field, WithJsonSchema
from pydantic_core import PydanticCustomError

from commission.description.fields import Date, Duration, YesNo
from commission.description.model import Part

Mode = Literal["trim", "test"]
Upset = Literal[
    "liquid injection", "vapour injection", "hot gas bypass", "oil cooling", "defrost in the means",
    "water-cooled compressor",
]  # fmt: skip
"""The words of `commission.acceptance.routes.UPSETS`, which a test holds together."""


def _moment(value: Any) -> dt.datetime:
    allowed = "date, time and zone, for example 2026-05-14T10:20:00+01:00 or 2026-05-14T09:20Z"
    try:
        moment = dt.datetime.fromisoformat(value)
    except (TypeError, ValueError):
        message = {"message": "a date with time and zone is wanted here", "allowed": allowed}
        raise PydanticCustomError("meaning", "{message}", message) from None
    if moment.tzinfo is None or "T" not in value.upper().replace(" ", "T"):
        message = {"message": "say the time and its zone, or nobody knows the order of two visits", "allowed": allowed}
        raise PydanticCustomError("meaning", "{message}", message)
    return moment


Moment = Annotated[dt.datetime, BeforeValidator(_moment), WithJsonSchema({"type": "string", "format": "date-time"})]


def _value_alone(value: Any) -> Any:
    """`suction_pressure: 2.31 bar g` is short for `suction_pressure: {value: 2.31 bar g}`."""
    return {"value": value} if isinstance(value, str) else value


def _answer_alone(value: Any) -> Any:
    """`item: yes` is short for `item: {answer: yes}`."""
    return {"answer": value} if isinstance(value, str) else value


def _what_alone(value: Any) -> Any:
    """A reservation as one text is short for `{what: text}`."""
    return {"what": value} if isinstance(value, str) else value


class Visitor(Part):
    """Somebody who took part in the visit, under the role they had."""

    name: str = Field(min_length=1, description="name as it is signed")
    firm: str | None = Field(None, description="employer")
    certificate: str | None = Field(None, description="certificate number where the law asks for one")


class Measured(Part):
    """One thing read on site, as it stood on the instrument. The key above it says which quantity it is."""

    value: str | None = Field(None, description="what was read, with its unit; needless where samples are given")
    samples: tuple[str, ...] = Field((), description="single readings in their order; their mean is what counts")
    phases: tuple[str, ...] = Field((), description="one reading for each supply phase; their mean is the value")
    instrument: str | None = Field(None, description="instrument as named in plant.yaml; left out: `measured_with`")
    where: str | None = Field(None, description="where on the plant it was read")
    remark: str | None = Field(None)


class Answer(Part):
    """What was answered to one item of the checklist."""

    answer: str = Field(min_length=1, description="yes, no, a value with unit, a file name, or `not applicable`")
    reason: str | None = Field(None, description="wanted with `not applicable`, and with `no`")
    remark: str | None = Field(None)
    by: str | None = Field(None, description="who did it, where it was not the operator")


class CyclesRead(Part):
    """The readings are means over whole cycles, one sample for each, because no single moment speaks for the plant."""

    count: int = Field(ge=1, description="how many whole cycles there are between `started` and `ended`")
    by: Literal["start", "defrost"] = Field(
        description="start: from one start of the compressor to the next, means while it runs; defrost: from one "
        "defrost to the next, powers, flows and media with the defrost, refrigerant without"
    )


class RaisedItem(Part):
    """Something that is left to do, raised by hand."""

    what: str = Field(min_length=1, description="what is wrong or missing, so that another person understands it")
    line: str | None = Field(None, description="reading, guarantee or checklist item that showed it")
    who: str | None = Field(None, description="who must act: a role of plant.yaml or a name")
    due: Date | None = Field(None, description="by when")
    retest: str | None = Field(None, description="how it will be shown that it is done")


class ItemUpdate(Part):
    """What this visit changes on an open item of an earlier record."""

    item: int = Field(ge=1, description="number of the open item")
    closed: YesNo = Field(False, description="yes once the retest has shown that it is done")
    closed_by: str | None = Field(None, description="who closes it; wanted with `closed: yes`")
    who: str | None = Field(None, description="who must act from now on")
    due: Date | None = Field(None, description="by when from now on")
    retest: str | None = Field(None, description="how it was or will be shown that it is done")
    remark: str | None = Field(None)


class RecordFile(Part):
    """One visit to one system, as written. A filed record is never changed; a correction is a new record."""

    title: str | None = Field(None, description="what the visit was for, in a few words")
    system: str = Field(description="system as named in plant.yaml")
    stage: str = Field(description="stage of the checklist")
    mode: Mode = Field(
        "trim", description="trim: deviations only, as often as you like; test: witnessed, one verdict, kept"
    )
    started: Moment = Field(description="date, time and zone at which reading began")
    ended: Moment | None = Field(None, description="date, time and zone at which reading ended")
    since_start: Duration | None = Field(None, description="running time since the compressor last started")
    since_defrost: Duration | None = Field(None, description="time since the last defrost ended")
    cycles: CyclesRead | None = Field(None, description="where the readings are means over whole cycles; wants `ended`")
    upsets: tuple[Upset, ...] = Field((), description="what ran that upsets the heat balance of the compressor")
    people: dict[str, Visitor] = Field(min_length=1, description="roles (operator, witness, ...) and people")
    conditions: dict[str, Annotated[Measured, BeforeValidator(_value_alone)]] = Field(
        default_factory=dict, description="what the plant cannot choose: the media on both sides, the barometer"
    )
    readings: dict[str, Annotated[Measured, BeforeValidator(_value_alone)]] = Field(
        default_factory=dict, description="what gauges, probes and meters showed"
    )
    answers: dict[str, Annotated[Answer, BeforeValidator(_answer_alone)]] = Field(
        default_factory=dict, description="answers to items of the stage's checklist"
    )
    sheet: str | None = Field(None, description="frozen test sheet it is judged by, a path under records/")
    corrects: str | None = Field(None, description="filed record that this one takes the place of")
    why_corrected: str | None = Field(None, description="wanted with `corrects`")
    attachments: tuple[str, ...] = Field((), description="files beside the record that are filed with it")
    open_items: tuple[RaisedItem, ...] = Field((), description="what is left to do")
    item_updates: tuple[ItemUpdate, ...] = Field((), description="changes on earlier open items")
    reservations: tuple[Annotated[RaisedItem, BeforeValidator(_what_alone)], ...] = Field(
        (), description="under which the test is accepted; each is an open item, and stands until a record closes it"
    )
    remarks: str | None = Field(None)
