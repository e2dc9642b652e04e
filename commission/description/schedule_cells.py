"""Cells of an equipment schedule as a description would have them: numbers and units as a spreadsheet writes them."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass

from commission.errors import Problem
from commission.quantities import Kind, QuantityError, parse_number
from commission.quantities.units import UNITS, kinds_of

_COMMA = re.compile(r"[-+−]?[0-9]+,(?:[0-9]{1,2}|[0-9]{4,})(?![0-9.,])")
_STOP = re.compile(r"[-+−]?[0-9]+\.(?:[0-9]{1,2}|[0-9]{4,})(?![0-9.,])")
_GROUPED = re.compile(r"([-+−]?[1-9][0-9]{0,2})((?:[.,][0-9]{3})+)((?:[.,][0-9]{1,2})?)(?![0-9.,])")
_POUNDS_AND_OUNCES = re.compile(r"([0-9]+)\s*(?:lbs?|#)\.?,?\s*([0-9]+(?:\.[0-9]+)?)\s*oz\.?", re.IGNORECASE)
_DRY_AND_WET = re.compile(
    r"([0-9.]+) *(?:°?[FC])? *(?:DB)? */ *([0-9.]+) *(°?[FC])? *(?:WB)?((?: +°?[FC])?)", re.IGNORECASE
)


@dataclass(frozen=True, slots=True)
class Numbers:
    """How a file marks decimals, as far as its cells show it: 3,4 shows a comma, 3.4 a full stop."""

    comma: bool = False
    stop: bool = False
    semicolons: bool = False

    def plain(self, text: str) -> str:
        """`text` without grouping of digits where the rest of the file says what is meant.

        Raises:
            QuantityError: a mark before three digits that can be either, in a file that may come from either side.
        """
        match = _GROUPED.match(text)
        if match is None:
            return text
        whole, groups, decimals = match.groups()
        mark, rest = groups[0], text[match.end() :]
        sure = self.comma if mark == "." else self.stop
        against = self.stop if mark == "." else self.comma
        if (decimals and decimals[0] == mark) or any(one != mark for one in groups[::4]):
            return text
        if (sure and not against) or len(groups) > 4 or decimals:
            return f"{whole}{groups.replace(mark, '')}{decimals.replace(',', '.')}{rest}"
        if mark == "." and (sure or (self.semicolons and not against)):
            message = "a full stop before three digits can mean thousands or decimals; write 1800 or 1.8 plainly"
            raise QuantityError(Problem(message, value=text))
        return text


def numbers_of(cells: Iterable[str], *, semicolons: bool) -> Numbers:
    """What the cells of a file show of its decimal mark."""
    texts = list(cells)
    return Numbers(any(map(_COMMA.match, texts)), any(map(_STOP.match, texts)), semicolons)


def unit_as_known(unit: str) -> str:
    """`unit` in the spelling of the table where only its capitals differ: LB is lb, CFM is cfm, PSIG is psig.

    It stays as it is where it is known, or where its capitals leave a choice.
    """
    wanted = "".join(unit.casefold().strip(".").split())
    if not unit or kinds_of(unit):
        return next((u.name for u in UNITS if unit in u.spellings and u.name.casefold() == wanted), unit)
    found = {
        (u.kind, u.name): spelling
        for u in UNITS
        for spelling in reversed((u.name, *u.spellings))
        if "".join(spelling.casefold().split()) == wanted
    }
    kinds = [kind for kind, _ in found]
    return next(iter(found.values())) if found and len(set(kinds)) == len(kinds) else unit


def quantity_text(text: str, unit: str, numbers: Numbers, *, capacity: bool) -> str:
    """A cell as a description would have it: a bare number takes the unit of its column, tons of capacity are named.

    Raises:
        QuantityError: the number is grouped so that it can mean two things.
    """
    both = _POUNDS_AND_OUNCES.fullmatch(text)
    if both:
        return f"{float(both[1]) + float(both[2]) / 16:.6g} lb"
    text = numbers.plain(text)
    try:
        rest = parse_number(text)[1]
    except QuantityError:
        return f"{text} {unit}".strip() if text[-1:].isdigit() else text
    number = text[: len(text) - len(rest)].strip().replace(",", ".")
    unit = rest or unit
    if capacity and unit.casefold().strip(".") in ("ton", "tons"):
        unit = "refrigeration tons"  # no other ton is a capacity
    return f"{number} {unit_as_known(unit)}".strip()


def dry_and_wet(text: str, unit: str) -> tuple[str, str] | None:
    """Dry bulb and wet bulb where both stand in one cell, as in 80/67; None where they do not."""
    match = _DRY_AND_WET.fullmatch(text.strip())
    unit = (match and (match[3] or match[4].strip())) or unit
    if match is None or float(match[2]) > float(match[1]) or Kind.TEMPERATURE not in kinds_of(unit):
        return None
    return f"{match[1]} {unit}", f"{match[2]} {unit}"
