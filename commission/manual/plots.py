"""Which figures a system gets, and their words; drawing is left to `figures`."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.errors import NotCalculatedError
from commission.manual.figures import STYLE_VERSION, Chart, Line, PhDiagram, by_night, draw_chart, draw_ph
from commission.manual.gather import SystemData
from commission.manual.grid import Grid
from commission.manual.showing import COVERAGE, label_of, unit_of
from commission.manual.store import Store, kept
from commission.quantities import Display, Kind

if TYPE_CHECKING:
    from commission.prediction import StatePoint
    from commission.properties import Refrigerant


@dataclass(frozen=True, slots=True)
class Figure:
    """A figure of the site: file stem, text alternative, caption, and what it shows."""

    stem: str
    alt: str
    caption: str
    content: Chart | PhDiagram


_CHARTS: tuple[tuple[str, str, Kind, tuple[tuple[str, str], ...]], ...] = (
    ("pressures", "Pressures", Kind.PRESSURE, (("discharge_pressure", "discharge"), ("suction_pressure", "suction"))),
    ("temperatures", "Temperatures", Kind.TEMPERATURE,
     (("discharge_temperature", "discharge"), ("condensing_temperature", "condensing"),
      ("evaporating_temperature", "evaporating"))),
    ("power", "Heat and power", Kind.POWER,
     (("cooling_capacity", "cooling"), ("heating_capacity", "heat to sink"), ("power_input", "power input"))),
)  # fmt: skip


def charts(data: SystemData, grid: Grid, display: Display) -> tuple[Figure, ...]:
    """The charts of expected readings over outdoor temperature."""
    found = []
    for name, title, kind, members in _CHARTS:
        lines = tuple(
            line for key, words in members if (line := _line(grid, key, words, kind, display)) is not None
        )
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
        names = " and ".join(label_of(k).lower() for k, w in members if any(w == line.name for line in lines))
        alt = f"Chart: {names} in {unit} over {grid.title.lower()} temperature. The table below holds the numbers."
        found.append(Figure(f"figures/{data.slug}-{name}", alt, "", chart))
    return tuple(found)


def _gauge_word(unit: str) -> str:
    return {"bar g": "bar gauge", "psig": "psi gauge"}.get(unit, unit)


def _line(grid: Grid, key: str, words: str, kind: Kind, display: Display) -> Line | None:
    values: list[float | None] = []
    half: list[float | None] = []
    for point in grid.line:
        explained = point.prediction.expected.get(key) if point.prediction else None
        if explained is None:
            values.append(None)
            half.append(None)
            continue
        value, u = display.convert(explained.value, kind), explained.uncertainty
        values.append(value)
        half.append(None if u is None else abs(display.convert(explained.value + COVERAGE * u, kind) - value))
    return Line(words, tuple(values), tuple(half)) if any(v is not None for v in values) else None


def ph_figure(data: SystemData) -> Figure | None:
    """The log p-h diagram of the rated condition, or None where the prediction has no states."""
    if data.rated is None or data.model is None or len(data.rated.states) < 3:
        return None
    states = data.rated.states
    bubble, dew = _saturation(data.model.refrigerant, states)
    content = PhDiagram(
        title=f"{data.name}: cycle at the rated condition",
        bubble=bubble,
        dew=dew,
        states=tuple((s.label, round(s.h / 1e3, 3), round(s.p / 1e5, 5)) for s in states),
    )
    alt = (
        f"Diagram of pressure over specific enthalpy: the cycle of {data.name} with {len(states)} states between "
        "saturated liquid and vapour. The table below holds the numbers."
    )
    return Figure(f"figures/{data.slug}-cycle", alt, "", content)


def _saturation(
    refrigerant: Refrigerant, states: tuple[StatePoint, ...]
) -> tuple[tuple[tuple[float, float], ...], tuple[tuple[float, float], ...]]:
    """Bubble and dew line over the pressures of the diagram, in kJ/kg and bar."""
    low = refrigerant.dew_temperature(min(s.p for s in states) / 2)
    high = refrigerant.T_high
    temperatures = [low + (high - low) * n / 60 for n in range(61)]
    lines: list[tuple[tuple[float, float], ...]] = []
    for side in (refrigerant.bubble, refrigerant.dew):
        points = []
        for t in temperatures:
            try:
                s = side(t)
            except NotCalculatedError:
                continue
            points.append((round(s.h / 1e3, 2), round(s.p / 1e5, 4)))
        lines.append(tuple(points))
    return lines[0], lines[1]


def draw(figure: Figure, store: Store | None) -> dict[str, bytes]:
    """The two files of a figure, by day and by night."""
    import matplotlib

    content = figure.content
    svg = kept(
        store,
        (STYLE_VERSION, matplotlib.__version__, content),
        lambda: draw_chart(content) if isinstance(content, Chart) else draw_ph(content),
    )
    return {f"{figure.stem}.svg": svg, f"{figure.stem}-night.svg": by_night(svg)}

