"""How all figures look, and how a finished figure becomes its dark twin."""

from __future__ import annotations

import io
import re
from collections.abc import Iterator
from contextlib import contextmanager
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

STYLE_VERSION = 4
"""Part of the key of every kept figure: raise it when the look changes."""

INK, SOFT, LINE = "#17211f", "#495653", "#c9d2ce"
FIRST, SECOND, THIRD = "#86400f", "#14604f", "#3c4f8c"
COLOURS = (FIRST, SECOND, THIRD)

_NIGHT = {
    INK: "#e8eeeb",
    SOFT: "#aab8b3",
    LINE: "#33403d",
    FIRST: "#eeb084",
    SECOND: "#86d1bd",
    THIRD: "#b3c0f0",
}
_FONTS = (
    "'Avenir Next', 'Segoe UI', 'Helvetica Neue', Roboto, 'Noto Sans', 'Liberation Sans', 'DejaVu Sans', sans-serif"
)


@contextmanager
def our_style() -> Iterator[None]:
    """Settings for one figure; nothing of the process changes."""
    import matplotlib

    with matplotlib.rc_context(
        {
            "svg.fonttype": "none",
            "svg.hashsalt": "commission",
            "font.family": ["DejaVu Sans"],
            "font.size": 11.5,
            "axes.edgecolor": SOFT,
            "axes.labelcolor": INK,
            "axes.linewidth": 0.8,
            "axes.spines.top": False,
            "axes.spines.right": False,
            "text.color": INK,
            "xtick.color": SOFT,
            "ytick.color": SOFT,
            "xtick.labelcolor": INK,
            "ytick.labelcolor": INK,
            "grid.color": LINE,
            "grid.linewidth": 0.8,
            "lines.linewidth": 2.2,
            "axes.unicode_minus": True,
        }
    ):
        yield


def new_figure(width: float, height: float) -> tuple[Figure, Axes]:
    """A figure of `width` by `height` inches by the object interface (no global state of pyplot)."""
    from matplotlib.figure import Figure

    figure = Figure(figsize=(width, height))
    figure.patch.set_alpha(0.0)
    axes = figure.add_subplot()
    axes.patch.set_alpha(0.0)
    return figure, axes


def to_svg(figure: Figure, title: str) -> bytes:
    """The figure as SVG without date, creator and random identifiers, its fonts those of the reader's device."""
    out = io.BytesIO()
    figure.savefig(out, format="svg", metadata={"Date": None, "Creator": None, "Title": title})
    text = out.getvalue().decode("utf-8")
    text = text.replace("'DejaVu Sans'", _FONTS)
    return re.sub(r"[ \t]+\n", "\n", text).encode("utf-8")


def by_night(svg: bytes) -> bytes:
    """The dark twin: the same figure with each colour replaced."""
    text = svg.decode("utf-8")
    for day, night in _NIGHT.items():
        text = text.replace(day, night)
    return text.encode("utf-8")
