"""The looks that all pictures share: one ink, one second colour, greys that differ in print."""

from __future__ import annotations

from textwrap import shorten
from typing import TYPE_CHECKING, Any

from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure

from fibremr.summary import axial_words, axis_words

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
    "text.parse_math": False,  # a dollar sign in a title is a dollar sign
    "svg.fonttype": "path",
    "figure.dpi": 100,
}


def new_figure(result: TraceResult, width: float, height: float, what: str) -> Figure:
    """An empty picture of a size [in], headed by the case's title and what it shows."""
    figure = Figure(figsize=(width, height))
    FigureCanvasAgg(figure)
    r, case = result.record, result.case
    across = int(72 * width / 5.9)  # letters of the title's size that fit
    figure.text(0.012, 0.985, shorten(case.title, across, placeholder=" ..."), fontsize=10, va="top")
    axial = axial_words(case)
    under = f"{what}: {r.section.name}, {axis_words(case)}{', ' + axial if axial else ''}"
    if r.class_.section is not None:
        under += f"; class {r.class_.section}"
    under = shorten(under, int(72 * width / 4.7), placeholder=" ...")
    figure.text(0.012, 0.985 - 0.20 / height, under, fontsize=8, va="top", color=GREY)
    return figure
