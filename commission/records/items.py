"""Open items: what is left to do, who must act, by when, how it is shown, and who closed it. All from filed records."""

from __future__ import annotations

import csv
import datetime as dt
import io
from collections.abc import Iterable
from dataclasses import dataclass, replace
from typing import Literal

from commission.description import LoadedPlant
from commission.records.filed import FiledRecord, read_folder
from commission.records.read import records_folder

COLUMNS = (
    "number", "state", "system", "what", "line", "raised_by", "found_in", "found_on", "who", "due", "retest",
    "remark", "closed_in", "closed_on", "closed_by",
)  # fmt: skip


@dataclass(frozen=True, slots=True)
class OpenItem:
    """One item through its life. `found_in` and `closed_in` are names of filed records; dates are those of the visits.

    `who` and `due` are None where nobody has agreed yet; `changed_in` lists the records that changed the item.
    """

    number: int
    system: str
    what: str
    raised_by: Literal["hand", "reservation", "guarantee", "answer"]
    found_in: str
    found_on: dt.date
    line: str | None = None
    who: str | None = None
    due: dt.date | None = None
    retest: str | None = None
    remark: str | None = None
    changed_in: tuple[str, ...] = ()
    closed_in: str | None = None
    closed_on: dt.date | None = None
    closed_by: str | None = None

    @property
    def state(self) -> Literal["open", "closed"]:
        """Open until a record closes it."""
        return "closed" if self.closed_in else "open"


def open_items(loaded: LoadedPlant, system: str | None = None, *, closed: bool = True) -> tuple[OpenItem, ...]:
    """All items of the plant or of one system by number; `closed=False` leaves out those that are done."""
    found = items_of(read_folder(records_folder(loaded)).records)
    return tuple(i for i in found if system in (None, i.system) and (closed or i.state == "open"))


def items_of(records: Iterable[FiledRecord]) -> tuple[OpenItem, ...]:
    """The items that these records raise and change, in the order of the visits."""
    items: dict[int, OpenItem] = {}
    ordered = sorted(records, key=lambda r: (r.started, r.id))
    for record in ordered:
        for raised in record.filed.open_items:
            items.setdefault(
                raised.number,
                OpenItem(
                    raised.number, record.system, raised.what, raised.raised_by, record.id, record.started.date(),
                    raised.line, raised.who, raised.due, raised.retest,
                ),
            )  # fmt: skip
    for record in ordered:
        for update in record.file.item_updates:
            item = items.get(update.item)
            if item is None or item.state == "closed":
                continue
            changes = {k: v for k in ("who", "due", "retest", "remark") if (v := getattr(update, k)) is not None}
            if update.closed:
                changes |= {"closed_in": record.id, "closed_on": record.started.date(), "closed_by": update.closed_by}
            items[update.item] = replace(item, **changes, changed_in=(*item.changed_in, record.id))
    return tuple(items[number] for number in sorted(items))


def items_csv(items: Iterable[OpenItem]) -> str:
    """Items as comma-separated values (RFC 4180, UTF-8, lines end with CR LF), one row each, for a spreadsheet.

    A text that a spreadsheet would take for a formula gets an apostrophe in front.
    """
    out = io.StringIO(newline="")
    writer = csv.writer(out, lineterminator="\r\n")
    writer.writerow(COLUMNS)
    for item in items:
        writer.writerow([_cell(getattr(item, column)) for column in COLUMNS])
    return out.getvalue()


def _cell(value: object) -> str:
    if value is None:
        return ""
    if isinstance(value, dt.date):
        return value.isoformat()
    text = str(value)
    return f"'{text}" if text[:1] in ("=", "+", "-", "@", "\t", "\r") else text
