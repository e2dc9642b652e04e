"""The shape of what was read: pydantic checks it, and each of its errors becomes a problem with its place."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from itertools import islice
from typing import Any, TypeVar

from pydantic import BaseModel, ValidationError
from pydantic_core import ErrorDetails

from commission.description.positions import DescriptionError, KeyPath, Positions
from commission.description.shapes import annotation_at, choices_of, field_at, known_keys
from commission.errors import InputError, Problem, nearest, shorten

MAX_PROBLEMS = 100
"""Most problems that one run reports in full; a file with more is wrong as a whole."""

ModelT = TypeVar("ModelT", bound=BaseModel)

_FILL_IN = "a text; or take the line out"
_WANTED = {
    "string_type": "text is wanted here, not a list or mapping",
    "dict_type": "keys with values are wanted here",
    "model_type": "keys with values are wanted here",
    "model_attributes_type": "keys with values are wanted here",
    "tuple_type": "a list is wanted here",
    "list_type": "a list is wanted here",
    "invalid_key": "a key must be text",
}


def validate(
    model_cls: type[ModelT],
    data: Any,
    positions: Positions,
    *,
    at: KeyPath = (),
    also: Sequence[Problem] = (),
    error: type[InputError] = DescriptionError,
) -> ModelT:
    """`data` as a `model_cls`; `at` is the key path of `data` in `positions`.

    `also` are problems found before (duplicate keys): they are reported together with those of the shape.

    Raises:
        error: with every problem found, `DescriptionError` unless said otherwise.
    """
    model, problems = check(model_cls, data, positions, at=at)
    problems = [*also, *problems]
    if problems:
        raise error(*bounded(problems))
    assert model is not None
    return model


def check(
    model_cls: type[ModelT], data: Any, positions: Positions, *, at: KeyPath = ()
) -> tuple[ModelT | None, list[Problem]]:
    """The model, or the problems that keep `data` from being one."""
    try:
        return model_cls.model_validate(data), []
    except ValidationError as failure:
        details = _without_echoes(failure.errors(include_url=False))
        problems = [_problem(model_cls, e, positions, at) for e in islice(details, MAX_PROBLEMS)]
        if len(details) > MAX_PROBLEMS:
            problems.append(positions.problem(at, f"and {len(details) - MAX_PROBLEMS} more problems"))
        return None, problems


def _without_echoes(details: list[ErrorDetails]) -> list[ErrorDetails]:
    """A list whose entries are all at fault is also called too short; that alone would mislead."""
    faulty = {e["loc"][:length] for e in details for length in range(len(e["loc"]))}
    return [e for e in details if not (e["type"] == "too_short" and e["loc"] in faulty)]


def bounded(problems: Sequence[Problem]) -> list[Problem]:
    """Each problem once, in the order of the file, and not more than a person can read."""
    unique = {(p.file, p.line, p.column, p.message): p for p in reversed(problems)}
    ordered = sorted(unique.values(), key=lambda p: (p.file or "", p.line or 0, p.column or 0))
    if len(ordered) > MAX_PROBLEMS:
        last = ordered[MAX_PROBLEMS]
        more = Problem(
            f"and {len(ordered) - MAX_PROBLEMS} more problems from here on", last.file, last.line, last.column
        )
        ordered = [*ordered[:MAX_PROBLEMS], more]
    return ordered


def _problem(model_cls: type[BaseModel], error: ErrorDetails, positions: Positions, at: KeyPath) -> Problem:
    """One pydantic error as a problem at its place."""
    inside: KeyPath = tuple(part for part in error["loc"] if part != "[key]")
    path = (*at, *inside)
    context: Mapping[str, Any] = error.get("ctx") or {}
    of_key = error["loc"][-1:] == ("[key]",)
    match error["type"]:
        case "extra_forbidden":
            known = known_keys(annotation_at(model_cls, inside[:-1]))
            word = str(inside[-1])
            return positions.problem(
                path,
                f"the key {shorten(word, 60)!r} is not known here",
                allowed=_listed(known),
                nearest=nearest(word, known),
                at_key=True,
            )
        case "missing":
            return _missing(model_cls, inside, positions, path)
        case "literal_error" | "enum":
            choices = choices_of(annotation_at(model_cls, inside))
            written = positions.text(path)
            near = nearest(written, choices) if written else None
            return positions.problem(path, "this word is not known here", allowed=_listed(choices), nearest=near)
        case "quantity" | "yes_no" | "date" | "meaning":
            return positions.problem(
                path,
                str(context["message"]),
                allowed=context.get("allowed"),
                nearest=context.get("nearest"),
                at_key=of_key,
                value=str(inside[-1]) if of_key else None,
            )
        case "too_short" | "too_long":
            return positions.problem(path, _wrong_length(context))
        case kind:
            message = _WANTED.get(kind) or shorten(error["msg"])
            if positions.text(path) == "":
                message = f"nothing is written here; {message}"
                if kind == "string_too_short":
                    return positions.problem(path, "nothing is written here", allowed=_FILL_IN)
            allowed = _listed(known_keys(annotation_at(model_cls, inside))) if "keys" in message else None
            return positions.problem(path, message, allowed=allowed or None)


def _wrong_length(context: Mapping[str, Any]) -> str:
    least, most, actual = (context.get(key) for key in ("min_length", "max_length", "actual_length"))
    if most is not None:
        return f"at most {most} entries are wanted here; there are {actual}"
    if least is not None and least > 1:
        return f"at least {least} entries are wanted here; there are {actual}"
    return "at least one entry is wanted here"


def _missing(model_cls: type[BaseModel], inside: KeyPath, positions: Positions, path: KeyPath) -> Problem:
    field = field_at(model_cls, inside)
    meaning = f" ({field.description})" if field and field.description else ""
    choices = choices_of(field.annotation) if field else ()
    parent = path[:-1]
    where = "in this file"
    if parent:
        where = f"in entry {parent[-1] + 1} of {parent[-2]}" if isinstance(parent[-1], int) else f"in {parent[-1]}"
    problem = positions.problem(
        parent, f"the key {path[-1]!r}{meaning} is missing {where}", allowed=_listed(choices) or None, at_key=True
    )
    return Problem(
        problem.message, problem.file, problem.line, problem.column, ".".join(map(str, path)), None, problem.allowed
    )


def _listed(words: Sequence[str]) -> str:
    return ", ".join(words)
