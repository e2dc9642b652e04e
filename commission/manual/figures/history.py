"""One quantity over the visits: reading minus expected, with its uncertainty."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass
from typing import ClassVar

from commission.manual.figures.style import FIRST, INK, SECOND, new_figure, our_style, to_svg


@dataclass(frozen=True, slots=True)
class HistoryChart:
    """Deviations over the visits in display units; `half` is the expanded uncertainty, `significant` marks points."""

    inches: ClassVar[tuple[float, float]] = (6.2, 3.1)

    title: str
    y_label: str
    days: tuple[dt.date, ...]
    deviations: tuple[float, ...]
    half: tuple[float, ...]
    significant: tuple[bool, ...]


def draw_history(chart: HistoryChart) -> bytes:
    """The chart as SVG bytes: filled points deviate significantly, hollow ones do not."""
    from matplotlib.ticker import FixedLocator, FuncFormatter, NullLocator

    with our_style():
        figure, axes = new_figure(*chart.inches)
        figure.subplots_adjust(left=0.115, right=0.965, top=0.88, bottom=0.15)
        x = [d.toordinal() for d in chart.days]
        axes.axhline(0.0, color=INK, linewidth=1.0)
        axes.errorbar(x, chart.deviations, yerr=chart.half, fmt="none", ecolor=SECOND, elinewidth=1.6, capsize=5)
        for day, value, hit in zip(x, chart.deviations, chart.significant, strict=True):
            axes.plot([day], [value], marker="o", markersize=8, markeredgewidth=2, linestyle="none",
                      color=FIRST if hit else SECOND, fillstyle="full" if hit else "none")  # fmt: skip
        span = max(max(x) - min(x), 30)
        axes.set_xlim(min(x) - 0.09 * span, max(x) + 0.09 * span)
        axes.margins(y=0.15)
        axes.grid(axis="y")
        axes.set_axisbelow(True)
        axes.xaxis.set_major_locator(FixedLocator(_ticks(x, span)))
        axes.xaxis.set_minor_locator(NullLocator())
        axes.xaxis.set_major_formatter(FuncFormatter(lambda v, _: dt.date.fromordinal(int(v)).isoformat()))
        axes.set_title(chart.y_label, loc="left", fontsize=11.5, pad=8)
        return to_svg(figure, chart.title)


def _ticks(days: list[int], span: int) -> list[float]:
    """The first visit, and each later one far enough from the last label to be readable."""
    ticks = [float(days[0])]
    for day in days[1:]:
        if day - ticks[-1] >= 0.24 * span:
            ticks.append(float(day))
    return ticks
