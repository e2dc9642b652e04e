"""How sure an item is: no surer than the least sure figure that its texts and its target show."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Mapping
from types import MappingProxyType
from typing import TYPE_CHECKING

from commission.checklists.language import Expression
from commission.checklists.rendering import stands
from commission.safety import charge_limits, hazards
from commission.safety.facts import weaker

if TYPE_CHECKING:
    from commission.checklists.library import CheckedItem
    from commission.checklists.templates import Template
    from commission.checklists.words import Facts

FROM_MEMORY = ("M", "M-low")
"""Marks that a reader must see wherever the figure goes; a computed or read figure takes nothing from its item."""


def mark_with_figures(own: str, item: CheckedItem, facts: Facts) -> str:
    """The mark of an item's source, or that of a figure from memory in it where that is weaker."""
    shown = (mark for name in used_names(item, facts) for mark in figure_marks(name, facts))
    return weaker(own, *(mark for mark in shown if mark in FROM_MEMORY))


def used_names(item: CheckedItem, facts: Facts) -> tuple[str, ...]:
    """Every name that the item's texts and target show for one system; parts that are left out show none."""
    found = [name for template in item.texts.values() for name in _of_template(template, facts)]
    found += [name for bound in item.must_read.values() if isinstance(bound, Expression) for name in bound.names]
    return tuple(dict.fromkeys(found))


def figure_marks(name: str, facts: Facts) -> Iterable[str]:
    """The marks of the figures behind a name; none where it is no figure of a document."""
    head, _, rest = name.partition(".")
    if head == "figure":
        figure = facts.figures.get(rest)
        return () if figure is None else (figure.mark,)
    reader = _READERS.get(name)
    return () if reader is None else reader(facts)


def _of_template(template: Template, facts: Facts) -> Iterator[str]:
    for part in template.parts:
        if isinstance(part, Expression):
            yield from part.names
        elif not isinstance(part, str) and stands(part, facts):
            yield from _of_template(part, facts)


def _known(key: str) -> Callable[[Facts], Iterable[str]]:
    def marks(facts: Facts) -> Iterable[str]:
        known = getattr(facts.substance, key)
        return () if known is None else (known.mark,)

    return marks


def _label(facts: Facts) -> Iterable[str]:
    return _known("gwp")(facts) if facts.substance.listed else ()


def _charge_limits(facts: Facts) -> Iterable[str]:
    spaces = charge_limits(facts.loaded, facts.system_id, facts.substance)
    return tuple(space.lowest.mark for space in spaces if space.lowest is not None)


def _levels(facts: Facts) -> Iterable[str]:
    return tuple(level.mark for level in hazards(facts.substance).people)


_READERS: Mapping[str, Callable[[Facts], Iterable[str]]] = MappingProxyType(
    {
        "fluid.lfl": _known("lfl"),
        "fluid.practical_limit": _known("practical_limit"),
        "fluid.gwp": _known("gwp"),
        "words.label": _label,
        "words.charge_limits": _charge_limits,
        "words.levels": _levels,
    }
)
