"""Which figures a system gets, and their words; drawing is left to `figures`."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.errors import NotCalculatedError
from commission.manual.figures import (
    STYLE_VERSION,
    Chart,
    HistoryChart,
    Line,
    PhDiagram,
    by_night,
    draw_chart,
    draw_history,
    draw_ph,
)
from commission.manual.gather import SystemData
from commission.manual.grid import Grid
from commission.manual.showing import COVERAGE, unit_of
from commission.manual.store import Store, kept
from commission.quantities import Display, Kind

if TYPE_CHECKING:
    from commission.machine import StatePoint
    from commission.properties import Refrigerant
    from commission.records import Series


@dataclass(frozen=True, slots=True)
class Figure:
    """A figure of the site: file stem, text alternative, caption, and what it shows."""

    stem: str
    alt: str
    caption: str
    content: Chart | PhDiagram | HistoryChart

    @property
    def size(self) -> tuple[int, int]:
        """Width and height in hundredths of an inch, so that a page keeps the room while the picture loads."""
        return round(100 * self.content.inches[0]), round(100 * self.content.inches[1])


_CHARTS: tuple[tuple[str, str, Kind, tuple[tuple[str, str], ...]], ...] = (
    ("pressures", "Pressures", Kind.PRESSURE, (("discharge_pressure", "discharge"), ("suction_pressure", "suction"))),
    ("temperatures", "Temperatures", Kind.TEMPERATURE,
     (("discharge_temperature", "discharge"), ("condensing_temperature", "condensing"),
      ("evaporating_temperature", "evaporating"))),
    ("heat", "Heat", Kind.HEAT_FLOW, (("cooling_capacity", "cooling"), ("heating_capacity", "heat to sink"))),
    ("power", "Electric power", Kind.POWER, (("power_input", "power input"), ("compressor_power", "compressor"))),
)  # fmt: skip


def charts(data: SystemData, grid: Grid, display: Display) -> tuple[Figure, ...]:
    """The charts of expected readings over outdoor temperature."""
    found = []
    for name, title, kind, members in _CHARTS:
        lines = tuple(line for key, words in members if (line := _line(grid, key, words, kind, display)) is not None)
        if not lines:
            continue
        unit = unit_of(display, kind)
        x_unit = unit_of(display, Kind.TEMPERATURE)
        x = tuple(display.convert(p.temperature, Kind.TEMPERATURE) for p in grid.line)
        rated = data.rated.conditions.get(grid.key) if data.rated else None
        chart = Chart(
            title=f"{data.name}: {title.lower()} over {grid.title.lower()} temperature",
            x_label=f"{grid.title} in {x_unit}",
            y_label=f"{title} in {_gauge_word(unit)}",
            x=x,
            lines=lines,
            rated_x=None if rated is None else display.convert(rated, Kind.TEMPERATURE),
        )
        names = " and ".join(display.words(k) for k, w in members if any(w == line.name for line in lines))
        alt = f"Chart: {names} in {unit} over {grid.title.lower()} temperature. The table below holds the numbers."
        found.append(Figure(f"figures/{data.slug}-{name}", alt, "", chart))
    return tuple(found)


def _gauge_word(unit: str) -> str:
    return {"bar g": "bar gauge", "psig": "psi gauge"}.get(unit, unit)


def _line(grid: Grid, key: str, words: str, kind: Kind, display: Display) -> Line | None:
    values: list[float | None] = []
    ends: list[tuple[float, float] | None] = []
    for point in grid.line:
        explained = point.prediction.expected.get(key) if point.prediction else None
        if explained is None:
            values.append(None)
            ends.append(None)
            continue
        band = explained.band(COVERAGE)
        values.append(display.convert(explained.value, kind))
        ends.append(None if band is None else (display.convert(band[0], kind), display.convert(band[1], kind)))
    return Line(words, tuple(values), tuple(ends)) if any(v is not None for v in values) else None


def ph_figure(data: SystemData, display: Display) -> Figure | None:
    """The log p-h diagram of the rated condition, or None where the prediction has no states."""
    if data.rated is None or data.model is None or len(data.rated.states) < 3:
        return None
    states = data.rated.states
    bubble, dew = _saturation(data.model.refrigerant, states, display)
    content = PhDiagram(
        title=f"{data.name}: cycle at the rated condition",
        bubble=bubble,
        dew=dew,
        states=tuple((s.label, *_place(s.h, s.p, display)) for s in states),
        enthalpy_unit=unit_of(display, Kind.SPECIFIC_ENTHALPY),
        pressure_unit=display.absolute_unit,
    )
    alt = (
        f"Diagram of pressure over specific enthalpy: the cycle of {data.name} with {len(states)} states between "
        "saturated liquid and vapour. The table below holds the numbers."
    )
    return Figure(f"figures/{data.slug}-cycle", alt, "", content)


def _saturation(
    refrigerant: Refrigerant, states: tuple[StatePoint, ...], display: Display
) -> tuple[tuple[tuple[float, float], ...], tuple[tuple[float, float], ...]]:
    """Bubble and dew line over the pressures of the diagram, in the units of the site."""
    low = refrigerant.dew_temperature(min(s.p for s in states) / 2)
    high = refrigerant.T_high
    # Steps shrink towards the top, where the lines bend.
    temperatures = [low + (high - low) * (1 - (1 - n / 60) ** 2) for n in range(61)]
    lines: list[tuple[tuple[float, float], ...]] = []
    for side in (refrigerant.bubble, refrigerant.dew):
        points = []
        for t in temperatures:
            try:
                s = side(t)
            except NotCalculatedError:
                continue
            points.append(_place(s.h, s.p, display))
        lines.append(tuple(points))
    return lines[0], lines[1]


def _place(enthalpy: float, pressure: float, display: Display) -> tuple[float, float]:
    """A point of the diagram in the units of the site, rounded so that the same input draws the same bytes."""
    return round(display.convert(enthalpy, Kind.SPECIFIC_ENTHALPY), 3), round(display.absolute(pressure), 5)


def draw(figure: Figure, store: Store | None) -> dict[str, bytes]:
    """The two files of a figure, by day and by night."""
    import matplotlib

    content = figure.content
    svg = kept(store, (STYLE_VERSION, matplotlib.__version__, content), lambda: _drawn(content))
    return {f"{figure.stem}.svg": svg, f"{figure.stem}-night.svg": by_night(svg)}


def _drawn(content: Chart | PhDiagram | HistoryChart) -> bytes:
    if isinstance(content, Chart):
        return draw_chart(content)
    return draw_ph(content) if isinstance(content, PhDiagram) else draw_history(content)


_FOLLOWED = (
    "suction_pressure", "discharge_pressure", "compressor_superheat", "subcooling", "discharge_temperature",
    "evaporator_temperature_difference", "condenser_temperature_difference", "power_input", "cooling_capacity",
    "heating_capacity",
)  # fmt: skip
"""Quantities whose history is drawn: what a fault moves first."""


def history_figures(data: SystemData, found: Sequence[Series], display: Display) -> tuple[Figure, ...]:
    """One chart for each followed quantity that was read at two visits or more."""
    figures = []
    for one in found:
        if one.quantity not in _FOLLOWED or len(one.points) < 2:
            continue
        kind = display.kind(one.quantity)
        unit = display.spread_unit(kind)
        label = display.label(one.quantity)
        chart = HistoryChart(
            title=f"{data.name}: {label.lower()}, reading minus expected",
            y_label=f"{label}: reading minus expected" + (f", {unit}" if unit else ""),
            days=tuple(p.started.date() for p in one.points),
            deviations=tuple(_spread(display, p.deviation, kind) for p in one.points),
            half=tuple(_spread(display, p.expanded, kind) for p in one.points),
            significant=tuple(p.significant for p in one.points),
        )
        alt = (
            f"Chart: {label.lower()}, reading minus expected at {len(one.points)} visits. The table holds the numbers."
        )
        figures.append(Figure(f"figures/{data.slug}-history-{one.quantity.replace('_', '-')}", alt, "", chart))
    return tuple(figures)


def _spread(display: Display, value: float, kind: Kind) -> float:
    """A difference of this kind in the unit shown."""
    return display.convert(value, kind) - display.convert(0.0, kind)
