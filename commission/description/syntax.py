"""What is wrong with a text that is not YAML, in the words of somebody who writes a list of things."""

from __future__ import annotations

from typing import Any

import yaml

from commission.errors import Problem, shorten

_GENERAL = "check indentation, a colon followed by a space, closed brackets and quotes"
_QUOTE = 'put the text in quotes, such as name: "Cold room: dairy"'
_INDENT = "spaces in front of the line, as many as the lines have that it belongs with"


def syntax_problem(error: yaml.MarkedYAMLError, file: str, text: str, max_depth: int) -> Problem:
    """The fault that the parser found, at the place where a person can mend it."""
    said, mark = error.problem or "", error.problem_mark or error.context_mark
    if mark is None:
        return Problem(f"this is not YAML: {shorten(said)}", file, 1, 1, allowed=_GENERAL)
    opened = error.context_mark or mark
    if "nesting" in f"{error.context} {said}":
        return _at(mark, f"nested more than {max_depth} levels deep", _GENERAL, file)
    if "tab character" in said or _character(text, mark) == "\t":
        return _at(mark, "a tabulator stands here", "spaces; a tabulator cannot indent a line", file)
    if "start any token" in said:
        character = shorten(_character(text, mark), 4)
        return _at(mark, f"a text cannot start with {character}", f'quotes around it, such as "{character}..."', file)
    if "mapping values" in said:
        return _at(mark, *_second_colon(text, mark), file)
    if "end of stream" in said and "quoted" in (error.context or ""):
        return _at(opened, "the quotation mark that opens here is never closed", "a closing quotation mark", file)
    if "',' or" in said:
        closing = said.rstrip("'")[-1]
        message = f"the bracket that opens in line {opened.line + 1} is not closed before this place"
        return _at(mark, message, f"a comma between two entries, and {closing} at the end", file)
    if "expected key" in said or "'-' indicator" in said:
        if not _before(text, mark).strip():
            return _at(mark, "this line does not line up with those above it", _INDENT, file)
        return _at(mark, "something follows here that does not belong to the value", _QUOTE, file)
    words = ", ".join(part for part in (error.context, said) if part)
    return _at(mark, shorten(words), _GENERAL, file)


def _second_colon(text: str, mark: Any) -> tuple[str, str]:
    """Why a colon is one too many: a second one in its line, or the line above has none or is a value already."""
    if ": " in _before(text, mark).lstrip("- "):
        return "a second colon stands in this line", _QUOTE
    message = "this key stands where none can: the line above has a value already, or no colon with a space after it"
    return message, _INDENT


def _before(text: str, mark: Any) -> str:
    """The part of its line in front of a place."""
    lines = text.splitlines()
    return lines[mark.line][: mark.column] if mark.line < len(lines) else ""


def _character(text: str, mark: Any) -> str:
    lines = text.splitlines()
    line = lines[mark.line] if mark.line < len(lines) else ""
    return line[mark.column : mark.column + 1]


def _at(mark: Any, message: str, allowed: str, file: str) -> Problem:
    return Problem(f"this is not YAML: {message}", file, mark.line + 1, mark.column + 1, allowed=allowed)
