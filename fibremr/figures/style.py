"""The looks that all pictures share: one ink, one second colour, greys that differ in print."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure

from fibremr.summary import number

if TYPE_CHECKING:
    from fibremr.tracing import TraceResult

INK, RUST, GREY, PALE = "#1c2326", "#9a4a1f", "#6f7a7d", "#dfe3e0"

STYLE: dict[str, Any] = {
    "font.size": 8.5,
    "font.family": "DejaVu Sans",
    "axes.edgecolor": GREY,
    "axes.labelcolor": INK,
    "axes.linewidth": 0.7,
    "axes.spines.top": False,
    "axes.spines.right": False,
    "xtick.color": GREY,
    "ytick.color": GREY,
    "xtick.labelcolor": INK,
    "ytick.labelcolor": INK,
    "text.color": INK,
    "hatch.linewidth": 0.5,
    "legend.frameon": False,
    "svg.hashsalt": "fibremr",
    "svg.fonttype": "path",
    "figure.dpi": 100,
}


def new_figure(result: TraceResult, width: float, height: float, what: str) -> Figure:
    """An empty picture of a size [in], headed by the case's title and what it shows."""
    figure = Figure(figsize=(width, height))
    FigureCanvasAgg(figure)
    r, case = result.record, result.case
    sense = "sagging" if case.bending.sense > 0 else "hogging"
    axial = ""
    if case.bending.axial:
        kind = "compression" if case.bending.axial < 0 else "tension"
        axial = f", {number(case.system.show(abs(case.bending.axial), 'force'))} {case.system.force} {kind}"
    figure.text(0.012, 0.985, case.title, fontsize=10, va="top")
    under = f"{what}: {r.section.name}, {case.bending.about} axis, {sense}{axial}"
    figure.text(0.012, 0.985 - 0.20 / height, under, fontsize=8, va="top", color=GREY)
    return figure
