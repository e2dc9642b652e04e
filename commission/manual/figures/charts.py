"""Lines with bands over outdoor temperature."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise
from typing import ClassVar

from commission.manual.figures.style import COLOURS, INK, new_figure, our_style, to_svg


@dataclass(frozen=True, slots=True)
class Line:
    """One line: its name, values in display units and ends of the band at each x; None where nothing is calculated."""

    name: str
    values: tuple[float | None, ...]
    ends: tuple[tuple[float, float] | None, ...]


@dataclass(frozen=True, slots=True)
class Chart:
    """A chart: title, axis labels, the shared x values, up to three lines, and the x of the rated point."""

    inches: ClassVar[tuple[float, float]] = (6.2, 3.7)

    title: str
    x_label: str
    y_label: str
    x: tuple[float, ...]
    lines: tuple[Line, ...]
    rated_x: float | None = None


def _number(value: float | None) -> float:
    return float("nan") if value is None else value


def _label_heights(ends: list[float], low: float, high: float) -> list[float]:
    """Heights of the names at the ends of the lines, moved apart where they would touch."""
    gap = 0.085 * (high - low)
    order = sorted(range(len(ends)), key=lambda i: ends[i])
    placed = list(ends)
    for a, b in pairwise(order):
        placed[b] = max(placed[b], placed[a] + gap)
    over = max((placed[i] for i in order), default=high) - high
    return [p - over for p in placed] if over > 0 else placed


def draw_chart(chart: Chart) -> bytes:
    """The chart as SVG bytes. Names stand at the ends of the lines, so that no colour has to be matched."""
    with our_style():
        figure, axes = new_figure(*chart.inches)
        figure.subplots_adjust(left=0.115, right=0.70, top=0.85, bottom=0.165)
        ends = []
        for colour, style, line in zip(COLOURS, ("-", "-", "--"), chart.lines, strict=False):
            y = [_number(v) for v in line.values]
            bands = [(v, v) if e is None else e for v, e in zip(y, line.ends, strict=True)]
            axes.fill_between(
                chart.x,
                [low for low, _ in bands],
                [high for _, high in bands],
                color=colour,
                alpha=0.2,
                linewidth=0,
            )
            axes.plot(chart.x, y, color=colour, linestyle=style, solid_capstyle="round")
            ends.append(next((v for v in reversed(line.values) if v is not None), 0.0))
        axes.margins(x=0.0, y=0.12)
        axes.grid(axis="y")
        axes.set_axisbelow(True)
        if chart.rated_x is not None and chart.x[0] <= chart.rated_x <= chart.x[-1]:
            axes.axvline(chart.rated_x, color=INK, linewidth=0.9, linestyle=(0, (2, 3)))
            axes.annotate("rated", (chart.rated_x, 1.0), (0, 3), xycoords=("data", "axes fraction"),
                          textcoords="offset points", ha="center", va="bottom", fontsize=10.5)  # fmt: skip
        heights = _label_heights(ends, *axes.get_ylim())
        for colour, line, height in zip(COLOURS, chart.lines, heights, strict=False):
            axes.annotate(line.name, (1.0, height), (7, 0), xycoords=("axes fraction", "data"),
                          textcoords="offset points", va="center", color=colour, fontsize=11)  # fmt: skip
        axes.set_xlabel(chart.x_label)
        axes.set_title(chart.y_label, loc="left", fontsize=11.5, pad=20)
        return to_svg(figure, chart.title)
