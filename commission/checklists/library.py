"""Read the shipped library and a plant's own checklists into one checked list of stages."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cache
from importlib.resources import files
from pathlib import Path

from commission.checklists.entries import ItemEntry, StageEntry
from commission.checklists.language import Expression, ExpressionError, read_expression
from commission.checklists.names import names
from commission.checklists.templates import CONDITION_WANTED, Template, problem_at, read_template
from commission.description import Positions, read_yaml, validate
from commission.errors import InputError, Problem, nearest
from commission.quantities import NOMENCLATURE, Kind, find_unit

FOLDER = "checklists"
IDENTITY = re.compile(r"[a-z][a-z0-9]*(?:[.-][a-z0-9]+)*")
TEXT_FIELDS = ("do", "how", "if_not", "hazard", "caution", "source", "who")


class ChecklistError(InputError):
    """A checklist file cannot be used; holds every problem found, with file, line and column."""


@dataclass(frozen=True, slots=True)
class CheckedItem:
    """An item whose expressions and texts were read; `origin` is the file and line it comes from."""

    entry: ItemEntry
    when: Expression | None
    move_when: Expression | None
    texts: Mapping[str, Template]
    must_read: Mapping[str, Expression | str]
    origin: str
    left_out: str | None = None


@dataclass(frozen=True, slots=True)
class CheckedStage:
    """A stage with its checked items in order."""

    id: str
    title: str
    purpose: Template
    items: tuple[CheckedItem, ...]


@cache
def library() -> tuple[CheckedStage, ...]:
    """The shipped library in its safe order.

    Raises:
        ChecklistError: a fault of the package, with file and line.
    """
    folder = files("commission.checklists") / "library"
    sources = sorted((p for p in folder.iterdir() if p.name.endswith(".yaml")), key=lambda p: p.name)
    return merge((), [(p.name, p.read_text(encoding="utf-8")) for p in sources])


def plant_library(folder: Path) -> tuple[CheckedStage, ...]:
    """The shipped library with the additions and overrides of `folder`/checklists/*.yaml.

    Raises:
        ChecklistError: every problem of these files, with file, line and column.
    """
    own = folder / FOLDER
    if not own.is_dir():
        return library()
    paths = sorted(p for p in own.iterdir() if p.suffix in (".yaml", ".yml") and p.is_file())
    return merge(library(), [(f"{FOLDER}/{p.name}", p) for p in paths])


def merge(base: Sequence[CheckedStage], sources: Iterable[tuple[str, Path | str]]) -> tuple[CheckedStage, ...]:
    """`base` with the stages and items of further files: new ones added, an item with a known id replaced.

    Raises:
        ChecklistError: with every problem of all files.
    """
    stages = list(base)
    problems: list[Problem] = []
    pending: list[tuple[StageEntry, Positions]] = []
    for name, source in sources:
        try:
            read = read_yaml(source, name)
            entry = validate(StageEntry, read.data, read.positions, also=read.problems, error=ChecklistError)
        except InputError as error:
            problems += error.problems
            continue
        pending.append((entry, read.positions))
    for entry, positions in pending:
        problems += _add(stages, entry, positions)
    problems += _moves(stages) + _named(stages)
    if problems:
        raise ChecklistError(*problems)
    return tuple(stages)


def _add(stages: list[CheckedStage], entry: StageEntry, positions: Positions) -> list[Problem]:
    problems: list[Problem] = []
    at = next((i for i, s in enumerate(stages) if s.id == entry.stage), None)
    if at is None:
        at = len(stages)
        known = [s.id for s in stages]
        if entry.after is not None and entry.after not in known:
            problems.append(_unknown(positions, ("after",), entry.after, known, "stage"))
        elif entry.after is not None:
            at = known.index(entry.after) + 1
        for wanted in ("title", "purpose"):
            if getattr(entry, wanted) is None:
                problems.append(
                    positions.problem(("stage",), f"a new stage wants a {wanted}", nearest=nearest(entry.stage, known))
                )
        stages.insert(at, CheckedStage(entry.stage, entry.title or "", Template(()), ()))
    stage = stages[at]
    title, purpose = entry.title or stage.title, stage.purpose
    if entry.purpose is not None:
        purpose, found = read_template(entry.purpose, positions, ("purpose",))
        problems += found
    items = list(stage.items)
    for i, item in enumerate(entry.items):
        checked, found = check_item(item, positions, ("items", i))
        problems += found
        problems += _place(stages, items, checked, positions, ("items", i), at)
    for i, left in enumerate(entry.leave_out):
        index = next((k for k, x in enumerate(items) if x.entry.id == left.id), None)
        if index is None:
            known = [x.entry.id for x in items]
            problems.append(
                _unknown(positions, ("leave_out", i, "id"), left.id, known, f"item of the stage {stage.id}")
            )
        else:
            items[index] = replace(items[index], left_out=left.reason)
    stages[at] = CheckedStage(stage.id, title, purpose, tuple(items))
    return problems


def _place(
    stages: Sequence[CheckedStage],
    items: list[CheckedItem],
    item: CheckedItem,
    positions: Positions,
    path: tuple[str | int, ...],
    at: int,
) -> list[Problem]:
    """Put an item where it belongs: over the one with its id, after the named one, or at the end."""
    identity = item.entry.id
    elsewhere = next(
        (s.id for i, s in enumerate(stages) if i != at and any(x.entry.id == identity for x in s.items)), None
    )
    if elsewhere is not None:
        message = f"an item with this id stands in the stage {elsewhere}"
        return [positions.problem((*path, "id"), message, allowed="an id that is used once")]
    same = next((k for k, x in enumerate(items) if x.entry.id == identity), None)
    if same is not None:
        if items[same].origin.partition(":")[0] == item.origin.partition(":")[0]:
            return [
                positions.problem(
                    (*path, "id"), "this id is used twice in this file", allowed="an id that is used once"
                )
            ]
        items[same] = item
        return []
    if item.entry.after is None:
        items.append(item)
        return []
    index = next((k for k, x in enumerate(items) if x.entry.id == item.entry.after), None)
    if index is None:
        known = [x.entry.id for x in items]
        return [_unknown(positions, (*path, "after"), item.entry.after, known, "item of this stage")]
    items.insert(index + 1, item)
    return []


def _moves(stages: Sequence[CheckedStage]) -> list[Problem]:
    """Every stage and item that a move names exists."""
    known = {s.id: [x.entry.id for x in s.items] for s in stages}
    problems = []
    for item in (item for stage in stages for item in stage.items):
        move = item.entry.move
        if move is None:
            continue
        here = known.get(move.to, [])
        wrong: list[tuple[str, str, Iterable[str]]] = []
        if move.to not in known:
            wrong.append(("no stage has this id", move.to, known))
        elif move.after is not None and move.before is not None:
            wrong.append(("a moved item stands behind another or before it, not both", move.before, ()))
        else:
            message = f"no item of the stage {move.to} has this id"
            wrong += [(message, named, here) for named in (move.after, move.before) if named and named not in here]
        file, _, line = item.origin.partition(":")
        row = int(line) if line.isdigit() else None
        problems += [
            Problem(message, file, row, path=item.entry.id, value=value, nearest=nearest(value, among))
            for message, value, among in wrong
        ]
    return problems


def _named(stages: Sequence[CheckedStage]) -> list[Problem]:
    """Every item whose answer decides another exists, and is answered with a value."""
    values = [x.entry.id for s in stages for x in s.items if x.entry.answer == "value"]
    problems = []
    for item in (item for stage in stages for item in stage.items):
        must = item.entry.must_read
        for name in (must.rest_at, must.as_answered) if must is not None else ():
            if name is not None and name not in values:
                file, _, line = item.origin.partition(":")
                message = "no item that is answered with a value has this id"
                row = int(line) if line.isdigit() else None
                near = nearest(name, values)
                problems.append(Problem(message, file, row, path=item.entry.id, value=name, nearest=near))
    return problems


def _unknown(positions: Positions, path: tuple[str | int, ...], word: str, known: Sequence[str], what: str) -> Problem:
    return positions.problem(
        path, f"no {what} has this id", allowed=", ".join(known) or None, nearest=nearest(word, known)
    )


def check_item(
    entry: ItemEntry, positions: Positions, path: tuple[str | int, ...]
) -> tuple[CheckedItem, list[Problem]]:
    """Read every expression and text of an item; all problems, each at its place."""
    problems: list[Problem] = []

    def expression(text: str | None, *where: str, truth: bool = False) -> Expression | None:
        if text is None:
            return None
        try:
            found = read_expression(text, names())
        except ExpressionError as error:
            problems.append(problem_at(error, positions, (*path, *where)))
            return None
        if truth and found.type != "yes/no":
            problems.append(positions.problem((*path, *where), CONDITION_WANTED))
        return found

    if not IDENTITY.fullmatch(entry.id):
        allowed = "small letters, digits, points and hyphens, such as evacuation.rise-test"
        problems.append(positions.problem((*path, "id"), "an id is made of plain words", allowed=allowed))
    when = expression(entry.when, "when", truth=True)
    move = expression(entry.move.when, "move", "when", truth=True) if entry.move else None
    texts: dict[str, Template] = {}
    for key in TEXT_FIELDS:
        text = getattr(entry, key)
        if text is not None:
            texts[key], found = read_template(text, positions, (*path, key))
            problems += found
    bounds: dict[str, Expression | str] = {}
    if entry.must_read is not None:
        bounds, found = _bounds(entry, positions, path, texts)
        problems += found
    problems += _answer(entry, positions, path)
    mark = positions.mark(path).value
    return CheckedItem(entry, when, move, texts, bounds, f"{mark.file}:{mark.line}"), problems


def _bounds(
    entry: ItemEntry, positions: Positions, path: tuple[str | int, ...], texts: dict[str, Template]
) -> tuple[dict[str, Expression | str], list[Problem]]:
    """The expressions of `must_read`; a quoted quantity such as `10 K` stands for itself and keeps its text."""
    assert entry.must_read is not None
    problems: list[Problem] = []
    found: dict[str, Expression | str] = {}
    kinds: set[Kind] = set()
    wanted = NOMENCLATURE[entry.quantity].kind if entry.quantity and entry.quantity in NOMENCLATURE else None
    if wanted is None and entry.unit is not None:
        wanted = kind_of_unit(entry.unit)
    for key in ("value", "at_least", "at_most"):
        text = getattr(entry.must_read, key)
        if text is None:
            continue
        where = (*path, "must_read", key)
        if text[:1].isdigit() or text[:1] in "-−+.":
            found[key] = text
            continue
        try:
            expression = read_expression(text, names())
        except ExpressionError as error:
            problems.append(problem_at(error, positions, where))
            continue
        if not isinstance(expression.type, Kind):
            problems.append(
                positions.problem(
                    where, "a quantity is wanted here", allowed="an expression or a quantity with its unit"
                )
            )
            continue
        kinds.add(expression.type)
        found[key] = expression
    if entry.must_read.within is not None:
        found["within"] = entry.must_read.within
    if entry.must_read.says is not None:
        texts["says"], more = read_template(entry.must_read.says, positions, (*path, "must_read", "says"))
        problems += more
    if wanted is not None:
        kinds.add(wanted)
    if len(kinds) > 1:
        shown = ", ".join(sorted(k.value for k in kinds))
        problems.append(positions.problem((*path, "must_read"), f"these are quantities of different kinds: {shown}"))
    return found, problems


def kind_of_unit(unit: str) -> Kind | None:
    """The kind that a unit of an answer belongs to; `count` is a plain number of things."""
    if unit == "count":
        return Kind.NUMBER
    return next((kind for kind in Kind if find_unit(unit, kind)), None)


def _answer(entry: ItemEntry, positions: Positions, path: tuple[str | int, ...]) -> list[Problem]:
    problems = []
    if entry.quantity is not None and entry.quantity not in NOMENCLATURE:
        problems.append(
            positions.problem(
                (*path, "quantity"),
                "no quantity of the nomenclature has this key",
                nearest=nearest(entry.quantity, NOMENCLATURE),
            )
        )
    if entry.unit is not None and kind_of_unit(entry.unit) is None:
        problems.append(positions.problem((*path, "unit"), "this unit is not known"))
    if entry.answer == "value" and entry.quantity is None and entry.unit is None:
        problems.append(positions.problem(path, "an answer that is a value wants a quantity or a unit"))
    return problems
