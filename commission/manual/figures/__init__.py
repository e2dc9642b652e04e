"""Figures as SVG with real text: reproducible to the byte, drawn once and coloured for day and night."""

from commission.manual.figures.charts import Chart, Line, draw_chart
from commission.manual.figures.history import HistoryChart, draw_history
from commission.manual.figures.ph import PhDiagram, draw_ph
from commission.manual.figures.style import STYLE_VERSION, by_night

__all__ = [
    "STYLE_VERSION",
    "Chart",
    "HistoryChart",
    "Line",
    "PhDiagram",
    "by_night",
    "draw_chart",
    "draw_history",
    "draw_ph",
]
