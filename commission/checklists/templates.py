"""Texts with expressions in braces and parts that can be left out, read and checked once."""

from __future__ import annotations

import re
import string
from dataclasses import dataclass

from commission.checklists.language import Expression, ExpressionError, read_expression
from commission.checklists.names import names
from commission.description import Positions
from commission.errors import Problem

CONDITION = re.compile(r"\{\?([^{}]+)\}")
"""The condition at the head of a part that can be left out."""
CONDITION_WANTED = "a condition is wanted here, something that is yes or no"


@dataclass(frozen=True, slots=True)
class Template:
    """A text with its expressions, in turn.

    An inner template is left out where one of its values is not known, or where its condition `when` is not yes.
    """

    parts: tuple[str | Expression | Template, ...]
    when: Expression | None = None


def problem_at(error: ExpressionError, positions: Positions, path: tuple[str | int, ...]) -> Problem:
    problem = error.problems[0]
    return positions.problem(
        path, problem.message, allowed=problem.allowed, nearest=problem.nearest, value=problem.value
    )


def read_template(text: str, positions: Positions, path: tuple[str | int, ...]) -> tuple[Template, list[Problem]]:
    """A text whose parts in braces are expressions, and whose parts in double square brackets can be left out.

    Such a part stands where all its values are known; one that begins with a condition, as in `[[{?fluid.flammable}No
    flame.]]`, where that is yes as well.
    """
    if text.count("[[") != text.count("]]"):
        return Template((text,)), [positions.problem(path, "double square brackets are not closed")]
    parts: list[str | Expression | Template] = []
    problems: list[Problem] = []
    for index, piece in enumerate(re.split(r"\[\[|\]\]", text)):
        when, rest = None, piece
        asked = CONDITION.match(piece) if index % 2 else None
        if asked is not None:
            rest = piece[asked.end() :]
            try:
                when = read_expression(asked.group(1), names())
            except ExpressionError as error:
                problems.append(problem_at(error, positions, path))
            if when is not None and when.type != "yes/no":
                problems.append(positions.problem(path, CONDITION_WANTED))
        inner, found = _pieces(rest, positions, path)
        problems += found
        parts += [Template(tuple(inner), when)] if index % 2 else inner
    return Template(tuple(parts)), problems


def _pieces(
    text: str, positions: Positions, path: tuple[str | int, ...]
) -> tuple[list[str | Expression | Template], list[Problem]]:
    """Literal text and expressions of a text without optional parts."""
    parts: list[str | Expression | Template] = []
    problems: list[Problem] = []
    try:
        pieces = list(string.Formatter().parse(text))
    except ValueError:
        return [text], [positions.problem(path, "a brace is not closed; write {{ for a brace itself")]
    for literal, inner, form, conversion in pieces:
        if literal:
            parts.append(literal)
        if inner is None:
            continue
        if form or conversion:
            problems.append(
                positions.problem(path, f"{{{inner}}} takes no format", allowed="a name or expression alone")
            )
            continue
        try:
            parts.append(read_expression(inner, names()))
        except ExpressionError as error:
            problems.append(problem_at(error, positions, path))
    return parts, problems
