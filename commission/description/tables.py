"""Read a CSV file as a spreadsheet saves it, each cell with its place."""

from __future__ import annotations

import csv
import io
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path

from commission.description.positions import DescriptionError, Position
from commission.description.reading import decode, read_bytes
from commission.errors import Problem

MAX_ROWS = 2000
MAX_COLUMNS = 200
_MOST_TITLES = 20
WESTERN = "Windows-1252"
"""The encoding in which spreadsheets of western Europe save a CSV, unless UTF-8 is asked for."""
_ZIP = b"PK\x03\x04"
_SAVE_AS = "in the spreadsheet, save the sheet as CSV (UTF-8)"
_DELIMITERS = (";", "\t", ",")


@dataclass(frozen=True, slots=True)
class Cell:
    """The text of one cell without the spaces around it, and where it stands."""

    text: str
    place: Position


@dataclass(frozen=True, slots=True)
class Table:
    """A heading row, the rows below it that hold anything, and the titles that stand above it."""

    heading: tuple[Cell, ...]
    rows: tuple[tuple[Cell, ...], ...]
    content: bytes
    titles: tuple[tuple[Cell, ...], ...] = ()
    delimiter: str = ","
    encoding: str = "UTF-8"


IsHeading = Callable[[Sequence[str]], bool]


def read_table(path: Path, file: str, is_heading: IsHeading | None = None) -> Table:
    """Read a CSV with a heading row: UTF-8, UTF-16 with its mark or Windows-1252; semicolons, tabulators or commas.

    `is_heading` tells a heading row from the titles that may stand above it, in the first lines; without it, or where
    none is one, the first row that holds anything is the heading.

    Raises:
        DescriptionError: not readable, no heading, rows longer than the heading, or too large.
    """
    content = read_bytes(path, file)
    text, encoding = _text(content, file)
    lines = text.splitlines()
    if not lines or not text.strip():
        raise DescriptionError(Problem("the file is empty", file, 1, 1))
    delimiter, above = _start(lines, is_heading)
    reader = csv.reader(io.StringIO(text, newline=""), delimiter=delimiter, strict=True)
    found: list[tuple[Cell, ...]] = []
    titles: list[tuple[Cell, ...]] = []
    problems: list[Problem] = []
    line = 1
    try:
        for row in reader:
            cells = _cells(row, lines, line, delimiter, file)
            title = line <= above
            line = reader.line_num + 1
            while cells and not cells[-1].text:
                cells = cells[:-1]
            if not cells:
                continue
            if title:
                titles.append(cells)
                continue
            if len(found) > MAX_ROWS or len(cells) > MAX_COLUMNS:
                limit = f"{MAX_ROWS} rows and {MAX_COLUMNS} columns"
                raise DescriptionError(Problem("the table is too large", file, line, 1, allowed=limit))
            if found and len(cells) > len(found[0]):
                extra = cells[len(found[0])]
                message = "there is no heading above this cell"
                problems.append(Problem(message, file, extra.place.line, extra.place.column, value=extra.text))
            found.append(cells)
    except csv.Error as error:
        raise DescriptionError(*problems, Problem(f"this is not CSV: {error}", file, line, 1)) from None
    if problems and is_heading is not None and not is_heading([cell.text for cell in found[0]]):
        allowed = "a heading row with a column headed tag, system, mark or unit; below it one row for each system"
        message = f"no row of headings was found in the first {_MOST_TITLES} lines"
        raise DescriptionError(Problem(message, file, 1, 1, allowed=allowed))
    if problems:
        raise DescriptionError(*problems)
    return Table(found[0], tuple(found[1:]), content, tuple(titles), delimiter, encoding)


def _start(lines: list[str], is_heading: IsHeading | None) -> tuple[str, int]:
    """The separator, and how many lines of titles stand above the heading."""
    for number, line in enumerate(lines[:_MOST_TITLES] if is_heading else ()):
        for delimiter in _DELIMITERS:
            if is_heading is not None and is_heading(_split(line, delimiter)):
                return delimiter, number
    return _delimiter(next(line for line in lines if line.strip())), 0


def _split(line: str, delimiter: str) -> list[str]:
    """The cells of one line, or none where it is no whole row of a CSV."""
    try:
        return next(csv.reader([line], delimiter=delimiter), [])
    except csv.Error:
        return []


def _text(content: bytes, file: str) -> tuple[str, str]:
    """The text of a table and its encoding: UTF-16 with its mark, UTF-8, or what spreadsheets save in the west."""
    if content.startswith((b"\xff\xfe", b"\xfe\xff")):
        try:
            return decode(content.decode("utf-16").encode(), file), "UTF-16"
        except (UnicodeDecodeError, UnicodeEncodeError):
            raise DescriptionError(Problem("this is not text in UTF-16, as its first bytes say", file, 1, 1)) from None
    try:
        content.decode("utf-8")
    except UnicodeDecodeError:
        if content.startswith(_ZIP):
            message = "this is a workbook, not a table as text"
            raise DescriptionError(Problem(message, file, 1, 1, allowed=_SAVE_AS)) from None
        try:
            return decode(content.decode("cp1252").encode(), file), WESTERN
        except UnicodeDecodeError:
            pass  # decode names the first byte that is not UTF-8
    return decode(content, file), "UTF-8"


def _delimiter(heading: str) -> str:
    """The separator that the heading row uses most; text in quotes does not count."""
    outside = "".join(heading.split('"')[::2])
    return max(_DELIMITERS, key=outside.count)


def _cells(row: list[str], lines: list[str], line: int, delimiter: str, file: str) -> tuple[Cell, ...]:
    """The cells of a row; the column is that of the character where the cell starts, where its line shows it."""
    starts = _starts(lines[line - 1], delimiter) if line <= len(lines) else []
    return tuple(
        Cell(text.strip(), Position(file, line, starts[n] if n < len(starts) else 1)) for n, text in enumerate(row)
    )


def _starts(line: str, delimiter: str) -> list[int]:
    starts, quoted = [1], False
    for number, character in enumerate(line, start=1):
        if character == '"':
            quoted = not quoted
        elif character == delimiter and not quoted:
            starts.append(number + 1)
    return starts
