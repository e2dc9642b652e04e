"""The log p-h diagram of one cycle."""

from __future__ import annotations

from dataclasses import dataclass
from typing import ClassVar

from commission.manual.figures.style import FIRST, INK, LINE, SOFT, new_figure, our_style, to_svg


@dataclass(frozen=True, slots=True)
class PhDiagram:
    """Saturation lines and the cycle: enthalpies and absolute pressures in the named units, states in cycle order."""

    inches: ClassVar[tuple[float, float]] = (6.2, 4.4)

    title: str
    bubble: tuple[tuple[float, float], ...]
    dew: tuple[tuple[float, float], ...]
    states: tuple[tuple[str, float, float], ...]
    enthalpy_unit: str
    pressure_unit: str


_NICE = (0.1, 0.2, 0.5, 1, 2, 5, 10, 20, 50, 100, 200, 500, 1000, 2000)


def draw_ph(diagram: PhDiagram) -> bytes:
    """The diagram as SVG bytes: saturation lines, the closed cycle, and a number at each state."""
    from matplotlib.ticker import FixedLocator, FuncFormatter, NullLocator

    with our_style():
        figure, axes = new_figure(*diagram.inches)
        figure.subplots_adjust(left=0.115, right=0.965, top=0.91, bottom=0.14)
        axes.set_yscale("log")
        dome = (*diagram.bubble, *reversed(diagram.dew))
        axes.plot([h for h, _ in dome], [p for _, p in dome], color=SOFT, linewidth=1.6)
        h = [s[1] for s in diagram.states]
        p = [s[2] for s in diagram.states]
        axes.plot([*h, h[0]], [*p, p[0]], color=FIRST, linewidth=2.4, solid_joinstyle="round")
        axes.plot(h, p, linestyle="none", marker="o", markersize=6, color=FIRST)
        top = max(*(q for _, q in diagram.bubble), *p)
        low, high = min(p) / 1.9, (top * 1.25 if top < 5 * max(p) else max(p) * 2.4)
        axes.set_ylim(low, high)
        _label_states(axes, diagram.states)
        axes.yaxis.set_major_locator(FixedLocator([v for v in _NICE if low <= v <= high]))
        axes.yaxis.set_major_formatter(FuncFormatter(lambda v, _: f"{v:g}"))
        axes.yaxis.set_minor_locator(NullLocator())
        axes.grid(axis="y", color=LINE)
        axes.set_axisbelow(True)
        spread = max(h) - min(h)
        axes.set_xlim(min(h) - 0.22 * spread, max(h) + 0.2 * spread)
        axes.set_xlabel(f"Specific enthalpy in {diagram.enthalpy_unit}")
        axes.set_title(
            f"Pressure in {diagram.pressure_unit}, absolute (logarithmic)", loc="left", fontsize=11.5, pad=8, color=INK
        )
        return to_svg(figure, diagram.title)


def _label_states(axes: object, states: tuple[tuple[str, float, float], ...]) -> None:
    """Puts each number on the outer side of the cycle; states that share a point share a label."""
    from matplotlib.axes import Axes

    assert isinstance(axes, Axes)
    middle_h = 0.5 * (min(s[1] for s in states) + max(s[1] for s in states))
    middle_p = (min(s[2] for s in states) * max(s[2] for s in states)) ** 0.5
    spread = max(s[1] for s in states) - min(s[1] for s in states)
    groups: list[tuple[list[str], float, float]] = []
    for label, h, p in states:
        near = next((g for g in groups if abs(g[1] - h) < 0.02 * spread and abs(g[2] / p - 1) < 0.04), None)
        if near is None:
            groups.append(([label], h, p))
        else:
            near[0].append(label)
    for labels, h, p in groups:
        right, above = h >= middle_h, p >= middle_p
        axes.annotate(", ".join(labels), (h, p), (7 if right else -7, 7 if above else -8), textcoords="offset points",
                      ha="left" if right else "right", va="bottom" if above else "top", fontsize=12.5)  # fmt: skip
