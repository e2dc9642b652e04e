"""Read the shipped duties and a plant's own upkeep.yaml; every problem with its place."""

from __future__ import annotations

from collections.abc import Collection, Iterator, Mapping
from dataclasses import dataclass, field
from functools import cache
from importlib.resources import files
from typing import Any

from commission.description import KeyPath, LoadedPlant, Positions, read_yaml, validate
from commission.description.model import Part
from commission.errors import InputError, Problem, nearest
from commission.upkeep.entries import DoneEntry, DutyEntry, LeaveOut, OwnDuty, UpkeepFile

OWN_FILE = "upkeep.yaml"


class UpkeepError(InputError):
    """A plant's upkeep.yaml cannot be used; holds every problem found, with file, line and column."""


class _Shipped(Part):
    duties: tuple[DutyEntry, ...]


@dataclass(frozen=True)
class Upkeep:
    """The duties as they hold for this plant. `duties` are (entry, origin) by system id, then those of instruments."""

    of_system: Mapping[str, tuple[tuple[DutyEntry, str], ...]]
    of_instruments: tuple[tuple[DutyEntry, str], ...]
    done: tuple[DoneEntry, ...] = ()
    left_out: Mapping[tuple[str, str], str] = field(default_factory=dict)


@cache
def shipped() -> tuple[tuple[DutyEntry, str], ...]:
    """The shipped duties, each with file and line.

    Raises:
        UpkeepError: a fault of the package.
    """
    text = (files("commission.upkeep") / "duties.yaml").read_text(encoding="utf-8")
    read = read_yaml(text, "duties.yaml")
    found = validate(_Shipped, read.data, read.positions, also=read.problems, error=UpkeepError).duties
    lines = (read.positions.mark(("duties", i)).value.line for i in range(len(found)))
    return tuple((entry, f"duties.yaml:{line}") for entry, line in zip(found, lines, strict=True))


def upkeep_of(loaded: LoadedPlant) -> Upkeep:
    """The shipped duties with the plant's own said over them.

    Raises:
        UpkeepError: with every problem of the plant's upkeep.yaml.
    """
    own, positions = _own(loaded)
    if positions is not None:
        problems = [*_known(loaded, own, positions), *_duties(own, positions)]
        if problems:
            raise UpkeepError(*problems)
    of_system = {identity: tuple(_of_system(identity, own, positions)) for identity in loaded.plant.systems}
    left = {
        (system, left_out.duty): left_out.reason
        for left_out in own.leave_out
        for system in (left_out.systems or tuple(loaded.plant.systems))
    }
    instruments = tuple((e, origin) for e, origin in shipped() if e.of == "instruments")
    return Upkeep(of_system, instruments, own.done, left)


def _own(loaded: LoadedPlant) -> tuple[UpkeepFile, Positions | None]:
    path = loaded.folder / OWN_FILE
    if not path.is_file():
        return UpkeepFile(), None
    try:
        read = read_yaml(path, OWN_FILE)
    except InputError as error:
        raise UpkeepError(*error.problems) from None
    data: Any = {} if read.data is None else read.data
    return validate(UpkeepFile, data, read.positions, also=read.problems, error=UpkeepError), read.positions


def _of_system(identity: str, own: UpkeepFile, positions: Positions | None) -> Iterator[tuple[DutyEntry, str]]:
    """The duties of one system: those shipped, changed by what the plant says of them, then the plant's own."""
    said = {duty.id: (i, duty) for i, duty in enumerate(own.duties) if not duty.systems or identity in duty.systems}
    known = set()
    for entry, origin in shipped():
        if entry.of != "systems":
            continue
        known.add(entry.id)
        if entry.id in said:
            index, duty = said[entry.id]
            yield _changed(entry, duty), _origin(positions, index)
        else:
            yield entry, origin
    for key, (index, duty) in said.items():
        if key not in known:
            yield _new(duty), _origin(positions, index)


def _changed(entry: DutyEntry, own: OwnDuty) -> DutyEntry:
    changes: dict[str, Any] = {
        key: getattr(own, key) for key in ("what", "item", "from_", "done_by", "who") if getattr(own, key) is not None
    }
    if own.every is not None or own.once is not None:
        changes |= {"every": own.every, "once": own.once, "unknown": None, "otherwise": None}
    return entry.model_copy(update={**changes, "source": own.source, "mark": "stated"})


def _new(own: OwnDuty) -> DutyEntry:
    values = {key: getattr(own, key) for key in ("id", "what", "item", "every", "once", "source", "who")}
    plain = DutyEntry(id=own.id, source=own.source, **{"from": own.from_ or "start"})
    return plain.model_copy(update={**values, "done_by": own.done_by or plain.done_by})


def _origin(positions: Positions | None, index: int) -> str:
    assert positions is not None
    return f"{OWN_FILE}:{positions.mark(('duties', index)).value.line}"


def _known(loaded: LoadedPlant, own: UpkeepFile, positions: Positions) -> Iterator[Problem]:
    """Every system and duty that is named exists."""
    systems = tuple(loaded.plant.systems)
    duties = tuple(e.id for e, _ in shipped() if e.of == "systems") + tuple(d.id for d in own.duties)
    named: list[tuple[KeyPath, str]] = []
    for key, entries in (("duties", own.duties), ("leave_out", own.leave_out)):
        for i, entry in enumerate(entries):
            assert isinstance(entry, OwnDuty | LeaveOut)
            named += [((key, i, "systems", k), system) for k, system in enumerate(entry.systems)]
    named += [(("done", i, "system"), done.system) for i, done in enumerate(own.done)]
    for path, word in named:
        if word not in systems:
            yield _unknown(positions, path, word, systems, "system")
    acts = [(("done", i, "duty"), d.duty) for i, d in enumerate(own.done)]
    acts += [(("leave_out", i, "duty"), d.duty) for i, d in enumerate(own.leave_out)]
    for at, word in acts:
        if word not in duties:
            yield _unknown(positions, at, word, duties, "duty")


def _duties(own: UpkeepFile, positions: Positions) -> Iterator[Problem]:
    """A new duty is whole, none is said twice of a system, and an instrument's day comes from its certificate."""
    of_systems = {e.id for e, _ in shipped() if e.of == "systems"}
    of_instruments = {e.id for e, _ in shipped() if e.of == "instruments"}
    seen: dict[str, set[str]] = {}
    for i, duty in enumerate(own.duties):
        path = ("duties", i)
        if duty.every is not None and duty.once is not None:
            yield positions.problem((*path, "once"), "a duty has either an interval or one single day")
        if duty.id in of_instruments:
            message = "this comes from the description: write calibrated_until at each instrument"
            yield positions.problem((*path, "id"), message)
        elif duty.id not in of_systems and (duty.what is None and duty.item is None):
            message = "no duty has this id; a new one wants what or item"
            yield positions.problem((*path, "id"), message, nearest=nearest(duty.id, of_systems))
        elif duty.id not in of_systems and duty.every is None and duty.once is None:
            yield positions.problem(path, "a new duty wants an interval", allowed="every or once")
        before = seen.setdefault(duty.id, set())
        of = set(duty.systems) or {"*"}
        if before and (before & of or "*" in before | of):
            yield positions.problem((*path, "id"), "this duty is written twice for the same system")
        before |= of


def _unknown(positions: Positions, path: KeyPath, word: str, known: Collection[str], what: str) -> Problem:
    allowed, near = ", ".join(known) or None, nearest(word, known)
    return positions.problem(path, f"no {what} has this id", allowed=allowed, nearest=near)
